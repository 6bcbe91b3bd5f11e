//! Amendments: what the forecaster changes, in order, each of which can be switched off.

use crate::{Note, Profile};
use dewbound_thermo::{Pressure, Temperature};
use serde::{Deserialize, Serialize};

/// Which humidity is kept while a layer's temperature is bridged.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum BridgeHumidity {
    /// Relative humidity as received at each level.
    RelativeHumidity,
    /// Mixing ratio as received at each level.
    MixingRatio,
}

/// One change. Pressures in Pa, temperatures in K.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case", tag = "kind")]
pub enum Amendment {
    /// Surface temperature set.
    SurfaceTemperature {
        /// K.
        temperature_k: f64,
    },
    /// Surface dew point set.
    SurfaceDewpoint {
        /// K.
        dewpoint_k: f64,
    },
    /// Temperature bridged (linear in ln p) between the two ends.
    BridgeLayer {
        /// Lower end, Pa, a level that is believed.
        bottom_pa: f64,
        /// Upper end, Pa, a level that is believed.
        top_pa: f64,
        /// What is kept of the humidity between them.
        humidity: BridgeHumidity,
    },
    /// Levels strictly between (inclusive of neither end) or, when both ends are equal, the level itself left out.
    DropLevels {
        /// Lower end, Pa.
        bottom_pa: f64,
        /// Upper end, Pa.
        top_pa: f64,
    },
    /// Mixing ratio made uniform over a layer (capped at saturation).
    MixMoisture {
        /// Lower end, Pa.
        bottom_pa: f64,
        /// Upper end, Pa.
        top_pa: f64,
        /// kg/kg; `None`: the layer's own mean.
        mixing_ratio: Option<f64>,
    },
    /// Everything at pressures below this one disregarded.
    DisregardAbove {
        /// Pa.
        pressure_pa: f64,
    },
}

/// How far up a change of the surface values is carried into the environment.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Reach {
    /// The surface parcel takes the value; the environment changes in the lowest 10 hPa only, tapering linearly.
    Level,
    /// To the top of the mixed layer, w and (where T was raised) theta are the surface's.
    Mixed,
    /// The increment of w and theta falls linearly in p to zero at the top of the mixed layer.
    Tapered,
}

/// An amendment in the list.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Entry {
    /// The change.
    pub amendment: Amendment,
    /// Switched on.
    pub enabled: bool,
    /// The finding's repair it came from (`rule/repair@bottom`), when it did.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from_repair: Option<String>,
}

/// The ordered list and the reach of its surface edits.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
pub struct Amendments {
    /// In the order applied.
    pub entries: Vec<Entry>,
    /// Chosen reach; `None`: the default for this profile (mixed by day with a mixed layer, else level).
    pub reach: Option<Reach>,
}

/// Reach as it was actually applied, and why in a line fit to be printed beside the handle.
#[derive(Debug, Clone, PartialEq)]
pub struct ReachApplied {
    /// What was applied.
    pub reach: Reach,
    /// One line: chosen or default, and why another was not possible.
    pub why: String,
    /// Top of the mixed layer: first level where theta exceeds the surface value by 1 K.
    pub mixed_top: Option<Pressure>,
    /// Levels at which w was capped at saturation.
    pub capped_levels: usize,
}

/// The profile after its amendments.
#[derive(Debug, Clone, PartialEq)]
pub struct Working {
    /// The amended profile.
    pub profile: Profile,
    /// Reach as applied.
    pub reach: ReachApplied,
    /// What could not be done as asked, and why.
    pub notes: Vec<Note>,
}

/// Whether the sun has been heating the ground: decides the default reach and some grades.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Daylight {
    /// Solar elevation above 10 degrees at launch or within the hour before.
    Day,
    /// Not so.
    Night,
    /// No time or no position.
    #[default]
    Unknown,
}

impl Amendments {
    /// The working profile. Never fails: what can't be applied is noted.
    ///
    /// Entries act in their order. The surface temperature and dew point act together, at the place of the earlier of the two, so
    /// that the result doesn't depend on which was set first; of several entries for one quantity the last counts. Surface values equal to
    /// those already there change nothing at all, whatever the reach.
    pub fn apply(&self, received: &Profile, daylight: Daylight) -> Working {
        crate::apply::apply(self, received, daylight)
    }

    /// The surface temperature these amendments set, if any is enabled.
    pub fn surface_temperature(&self) -> Option<Temperature> {
        self.last_enabled(|amendment| match *amendment {
            Amendment::SurfaceTemperature { temperature_k } => {
                Some(Temperature::from_k(temperature_k))
            }
            _ => None,
        })
    }

    /// The surface dew point these amendments set, if any is enabled.
    pub fn surface_dewpoint(&self) -> Option<Temperature> {
        self.last_enabled(|amendment| match *amendment {
            Amendment::SurfaceDewpoint { dewpoint_k } => Some(Temperature::from_k(dewpoint_k)),
            _ => None,
        })
    }

    /// The same list with the surface dew point set (its entry replaced and enabled, or appended).
    ///
    /// An entry that came from a repair no longer does when its value changes.
    pub fn with_surface_dewpoint(&self, dewpoint: Temperature) -> Self {
        self.with(Amendment::SurfaceDewpoint {
            dewpoint_k: dewpoint.k(),
        })
    }

    /// The same list with the surface temperature set (its entry replaced and enabled, or appended).
    ///
    /// An entry that came from a repair no longer does when its value changes.
    pub fn with_surface_temperature(&self, temperature: Temperature) -> Self {
        self.with(Amendment::SurfaceTemperature {
            temperature_k: temperature.k(),
        })
    }

    fn last_enabled<T>(&self, value: impl Fn(&Amendment) -> Option<T>) -> Option<T> {
        self.entries
            .iter()
            .rev()
            .filter(|entry| entry.enabled)
            .find_map(|entry| value(&entry.amendment))
    }

    /// The last entry of this kind replaced, or one appended.
    fn with(&self, amendment: Amendment) -> Self {
        let mut list = self.clone();
        let kind = std::mem::discriminant(&amendment);
        let same_kind = |entry: &&mut Entry| std::mem::discriminant(&entry.amendment) == kind;
        match list.entries.iter_mut().rev().find(same_kind) {
            Some(entry) => {
                if entry.amendment != amendment {
                    entry.from_repair = None;
                }
                entry.amendment = amendment;
                entry.enabled = true;
            }
            None => list.entries.push(Entry {
                amendment,
                enabled: true,
                from_repair: None,
            }),
        }
        list
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn all_kinds() -> Amendments {
        let entry = |amendment, enabled, from_repair: Option<&str>| Entry {
            amendment,
            enabled,
            from_repair: from_repair.map(str::to_string),
        };
        Amendments {
            entries: vec![
                entry(
                    Amendment::SurfaceTemperature {
                        temperature_k: 303.15,
                    },
                    true,
                    None,
                ),
                entry(
                    Amendment::SurfaceDewpoint { dewpoint_k: 293.05 },
                    false,
                    None,
                ),
                entry(
                    Amendment::BridgeLayer {
                        bottom_pa: 70_000.0,
                        top_pa: 60_000.0,
                        humidity: BridgeHumidity::MixingRatio,
                    },
                    true,
                    Some("wet-thermometer/bridge@700"),
                ),
                entry(
                    Amendment::DropLevels {
                        bottom_pa: 40_000.0,
                        top_pa: 40_000.0,
                    },
                    true,
                    None,
                ),
                entry(
                    Amendment::MixMoisture {
                        bottom_pa: 96_000.0,
                        top_pa: 85_000.0,
                        mixing_ratio: None,
                    },
                    true,
                    None,
                ),
                entry(
                    Amendment::MixMoisture {
                        bottom_pa: 96_000.0,
                        top_pa: 85_000.0,
                        mixing_ratio: Some(0.0123),
                    },
                    true,
                    None,
                ),
                entry(
                    Amendment::DisregardAbove {
                        pressure_pa: 15_000.0,
                    },
                    true,
                    None,
                ),
            ],
            reach: Some(Reach::Tapered),
        }
    }

    #[test]
    fn survives_json() {
        let list = all_kinds();
        let json = serde_json::to_string(&list).unwrap();
        assert_eq!(serde_json::from_str::<Amendments>(&json).unwrap(), list);
        // What drafts and ledgers of other versions rely on: names, and fields that may be left out.
        assert!(json.contains(
            r#"{"amendment":{"kind":"surface_temperature","temperature_k":303.15},"enabled":true}"#
        ));
        assert!(json.contains(r#""from_repair":"wet-thermometer/bridge@700""#));
        assert!(json.contains(r#""humidity":"mixing_ratio""#));
        assert!(json.ends_with(r#""reach":"tapered"}"#));
        let short: Amendments = serde_json::from_str(r#"{"entries":[],"reach":null}"#).unwrap();
        assert_eq!(short, Amendments::default());
    }

    #[test]
    fn surface_entries_are_replaced_or_appended() {
        let c = Temperature::from_c;
        let list = Amendments::default().with_surface_dewpoint(c(20.0));
        assert_eq!(list.entries.len(), 1);
        let list = list
            .with_surface_temperature(c(30.0))
            .with_surface_dewpoint(c(21.0));
        assert_eq!(list.entries.len(), 2);
        assert_eq!(list.surface_dewpoint(), Some(c(21.0)));
        assert_eq!(list.surface_temperature(), Some(c(30.0)));

        // Replacing switches on, and cuts the tie with a repair unless the value is the repair's own.
        let mut list = list;
        list.entries[0].enabled = false;
        list.entries[0].from_repair = Some("surface-mismatch/believe-sonde@960".to_string());
        assert_eq!(list.surface_dewpoint(), None);
        let same = list.with_surface_dewpoint(c(21.0));
        assert!(same.entries[0].enabled && same.entries[0].from_repair.is_some());
        let other = list.with_surface_dewpoint(c(22.0));
        assert!(other.entries[0].enabled && other.entries[0].from_repair.is_none());
    }
}
