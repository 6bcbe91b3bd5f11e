//! The wind numbers as a short list: the declared ones in the order a forecaster asks for them, and what belongs to each value.

use crate::Item;
use crate::chart::{SpeedUnit, Units, drawn_heights, wind_text};
use crate::quantity::{Quantity, Value, difference_from, of_keys};
use crate::sounding::Parcel;
use crate::thermo::{Vector, WindNumbers};
use std::fmt::Write as _;

/// Keys of the numbers in the list, what a forecaster asks first first. All are of the whole profile.
const LIST: [&str; 14] = [
    "motion_used_ms",
    "helicity_0_to_1km_m2s2",
    "helicity_0_to_3km_m2s2",
    "helicity_effective_m2s2",
    "difference_0_to_1km_ms",
    "difference_0_to_3km_ms",
    "difference_0_to_6km_ms",
    "difference_effective_ms",
    "critical_angle_deg",
    "mean_0_to_6km_ms",
    "motion_right_ms",
    "motion_left_ms",
    "motion_effective_right_ms",
    "motion_effective_left_ms",
];

/// Those measured against the motion in use.
const AGAINST_MOTION: [&str; 4] = [
    "helicity_0_to_1km_m2s2",
    "helicity_0_to_3km_m2s2",
    "helicity_effective_m2s2",
    "critical_angle_deg",
];

/// One wind number.
#[derive(Debug, Clone)]
pub struct WindLine {
    /// Its declaration.
    pub quantity: &'static Quantity,
    /// Value with unit; `None`: absent.
    pub value: Option<String>,
    /// What belongs to the value (its direction, the motion it is measured against), or why there is none. May be empty.
    pub note: String,
}

impl WindLine {
    /// "Wind difference, 0–1 km: 18 kt, from 214°".
    pub fn text(&self) -> String {
        let label = self.quantity.label;
        match &self.value {
            None => format!("{label}: {}", self.note),
            Some(value) if self.note.is_empty() => format!("{label}: {value}"),
            Some(value) => format!("{label}: {value}, {}", self.note),
        }
    }
}

/// Why there is no page of the winds; `None` when there is one.
pub fn no_winds(item: &Item) -> Option<String> {
    let further = &item.results().further;
    match &further.wind_profile {
        Some(profile) if drawn_heights(profile).is_some() => None,
        Some(_) => Some(
            "No wind of this sounding lies between the ground and 12 km, so there is nothing to draw."
                .to_owned(),
        ),
        None => {
            let winds = item.received().wind.iter().flatten().count();
            Some(match winds {
                0 => "This sounding has no winds, so there is no hodograph.".to_owned(),
                1 => "This sounding has only one wind; a hodograph needs two.".to_owned(),
                _ => format!(
                    "This sounding has {winds} winds, but fewer than two with a known height above the ground, so there is no hodograph."
                ),
            })
        }
    }
}

/// The motion helicity is measured against, in words: "right 254° 26 kt", "your own 270° 20 kt".
pub fn motion_in_use(
    numbers: &WindNumbers,
    set: Option<Vector>,
    unit: SpeedUnit,
) -> Option<String> {
    let used = numbers.motion_used?;
    let word = match (set, numbers.motion) {
        (Some(_), _) => "your own",
        (None, Some(motion)) if motion.left == used && motion.right != used => "left",
        _ => "right",
    };
    Some(format!("{word} {}", wind_text(used, unit)))
}

/// All of them, what a forecaster asks first first; empty without a wind profile.
pub fn wind_lines(item: &Item, unit: SpeedUnit) -> Vec<WindLine> {
    let results = item.results();
    if results.further.wind_profile.is_none() {
        return Vec::new();
    }
    let readings = results.readings(None);
    let set = item.document().storm_motion();
    let units = Units {
        speed: unit,
        ..Units::default()
    };
    of_keys(&LIST)
        .map(|quantity| {
            let Some(value) = quantity.value(&readings, Parcel::Surface) else {
                return WindLine {
                    quantity,
                    value: None,
                    note: quantity.why_absent(&readings, Parcel::Surface),
                };
            };
            let note = note(quantity.key, &value, &results.further.winds, set, unit);
            WindLine {
                quantity,
                value: Some(quantity.text_with_unit(&value, units)),
                note,
            }
        })
        .collect()
}

/// What belongs to a value and its declaration doesn't say.
fn note(
    key: &str,
    value: &Value,
    numbers: &WindNumbers,
    set: Option<Vector>,
    unit: SpeedUnit,
) -> String {
    let in_use = || motion_in_use(numbers, set, unit).unwrap_or_default();
    match value {
        Value::Difference(wind) => difference_from(*wind).unwrap_or_default(),
        _ if AGAINST_MOTION.contains(&key) => format!("against {}", in_use()),
        _ if key == "motion_used_ms" => match set {
            Some(_) => "set by you".to_owned(),
            None => {
                let named = in_use();
                let side = named.split(' ').next().unwrap_or_default();
                format!("estimated, to the {side}")
            }
        },
        _ => String::new(),
    }
}

/// The lines as text, for copying.
pub fn winds_as_text(item: &Item, unit: SpeedUnit) -> String {
    let mut text = format!("{}: wind\n", item.sounding().station.label());
    if let Some(why) = no_winds(item) {
        text.push_str(&why);
        text.push('\n');
    }
    for line in wind_lines(item, unit) {
        let value = line.value.as_deref().unwrap_or("none");
        // Writing to a String can't fail.
        let _ = writeln!(text, "{}\t{value}\t{}", line.quantity.label, line.note);
    }
    text.push_str(crate::wording::CAUTION);
    text.push('\n');
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_key_is_declared_of_the_whole_profile() {
        let keys: Vec<&str> = of_keys(&LIST).map(|quantity| quantity.key).collect();
        assert_eq!(keys, LIST);
        assert!(of_keys(&LIST).all(|quantity| !quantity.is_per_parcel()));
        for key in &AGAINST_MOTION {
            assert!(LIST.contains(key), "{key}");
        }
    }
}
