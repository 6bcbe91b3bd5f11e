//! What the surface dew point might truly be.

use dewbound_trust::sounding::thermo::{Pressure, Temperature};
use dewbound_trust::sounding::{Daylight, Profile};
use dewbound_trust::{MixedLayer, RefutedSurface, Thresholds};

/// Where a candidate comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Origin {
    /// The surface level of the message.
    Reported,
    /// The mean mixing ratio of the mixed layer without the surface level and the contact layer, brought to surface pressure.
    MixedLayer,
    /// Continued down to the surface from the first levels of the sonde; only where these refute the reported value.
    FirstLevels,
}

/// A candidate, or the reason why there is none.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidate {
    /// Where it comes from.
    pub origin: Origin,
    /// Surface dew point.
    pub dewpoint: Option<Temperature>,
    /// How it was come by; without a dew point, why not; set aside, for what reason. One line.
    pub why: String,
    /// Not believed: it takes no part in the interval.
    pub set_aside: bool,
}

/// The candidates, side by side.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidates {
    /// As reported.
    pub reported: Candidate,
    /// Implied by the mixed layer.
    pub mixed_layer: Candidate,
    /// Continued from the first levels of the sonde, when these refute the reported one.
    pub first_levels: Option<Candidate>,
    /// Surface temperature as received.
    pub surface_temperature: Option<Temperature>,
    /// The surface temperature the sonde leads to, when it refutes the received one.
    pub sonde_temperature: Option<Temperature>,
}

impl Candidates {
    /// All of them, in the order shown.
    pub fn iter(&self) -> impl Iterator<Item = &Candidate> {
        [&self.reported, &self.mixed_layer]
            .into_iter()
            .chain(&self.first_levels)
    }
}

/// The candidates of a received profile. Amendments don't enter.
///
/// The mixed layer is the one the findings judge ([`MixedLayer`]), so that the dew point implied here and the one
/// offered as a repair are the same. Where the surface-mismatch rule calls the reported dew point erroneous, it is set
/// aside and the value continued from the sonde takes part instead ([`RefutedSurface`]).
pub fn candidates(received: &Profile, daylight: Daylight, thresholds: &Thresholds) -> Candidates {
    let at_surface = |column: &[Option<f64>]| {
        let row = received.surface?;
        column.get(row).copied().flatten().map(Temperature::from_k)
    };
    let reported = at_surface(&received.dewpoint);
    let surface_temperature = at_surface(&received.temperature);
    let refuted = RefutedSurface::of(received, daylight, thresholds);
    let mut reported_why = match (reported, received.surface_pressure()) {
        (Some(_), Some(pressure)) => format!("surface level, {:.0} hPa", pressure.hpa()),
        (None, Some(_)) => "the surface level has no dew point".to_string(),
        (_, None) => "no surface level".to_string(),
    };
    if let Some(refuted) = refuted.dewpoint {
        reported_why.push_str(&format!(
            "; set aside: {:.1} K {} than the first levels of the sonde lead to",
            refuted.difference.abs(),
            if refuted.difference > 0.0 {
                "moister"
            } else {
                "drier"
            }
        ));
    }
    let (dewpoint, why) = implied(received, daylight, thresholds);
    Candidates {
        reported: Candidate {
            origin: Origin::Reported,
            dewpoint: reported,
            why: reported_why,
            set_aside: refuted.dewpoint.is_some(),
        },
        mixed_layer: Candidate {
            origin: Origin::MixedLayer,
            dewpoint,
            why,
            set_aside: false,
        },
        first_levels: refuted.dewpoint.map(|refuted| Candidate {
            origin: Origin::FirstLevels,
            dewpoint: Some(refuted.expected),
            why: "continued from the sonde's first levels".to_string(),
            set_aside: false,
        }),
        surface_temperature,
        sonde_temperature: refuted.temperature.map(|refuted| refuted.expected),
    }
}

fn implied(
    received: &Profile,
    daylight: Daylight,
    thresholds: &Thresholds,
) -> (Option<Temperature>, String) {
    let Some(surface) = received.surface_pressure() else {
        return (None, "no surface level".to_string());
    };
    let Some(layer) = MixedLayer::of(received, thresholds) else {
        let least = Pressure::from_hpa(thresholds.get("mixed-layer.depth_hpa"));
        return (
            None,
            format!(
                "no mixed layer of {:.0} hPa or more reaches the surface",
                least.hpa()
            ),
        );
    };
    let (Some(mean), Some(dewpoint)) = (layer.mean_mixing_ratio, layer.implied_dewpoint()) else {
        return (
            None,
            "the humidity of the mixed layer is not known".to_string(),
        );
    };
    let mut why = format!(
        "mean of the mixed layer, {:.1} g/kg, {:.0} to {:.0} hPa without the contact layer",
        1000.0 * mean,
        surface.hpa(),
        layer.top.hpa()
    );
    match daylight {
        Daylight::Day => {}
        Daylight::Night => why.push_str("; at night, so mixed by wind alone"),
        Daylight::Unknown => why.push_str("; day or night unknown"),
    }
    (Some(dewpoint), why)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{mixed, night, received};
    use dewbound_trust::sounding::thermo::dewpoint_from_mixing_ratio;

    fn of(levels: Vec<dewbound_trust::sounding::Level>) -> Candidates {
        candidates(&received(levels), Daylight::Day, &Thresholds::default())
    }

    #[test]
    fn the_layer_speaks_whatever_the_surface_says() {
        // 12 g/kg throughout: the implied dew point is that of 12 g/kg at 965 hPa, for any surface hygrometer, at any resolution.
        let expect = dewpoint_from_mixing_ratio(Pressure::from_hpa(965.0), 0.012);
        // Not by the same formula alone: 12 g/kg at 965 hPa is e = 18.27 hPa, of which the Magnus form of Bolton's eq. 10 gives 16.08 °C by hand.
        assert!((expect.c() - 16.08).abs() < 0.02, "{}", expect.c());
        for surface in [14.0, 16.0, 21.5] {
            for step in [25.0, 5.0, 1.0] {
                let found = of(mixed(step, surface, |_| 0.012));
                assert_eq!(found.reported.dewpoint, Some(Temperature::from_c(surface)));
                let implied = found.mixed_layer.dewpoint.unwrap();
                assert!(
                    (implied.k() - expect.k()).abs() < 0.02,
                    "{surface} {step}: {}",
                    implied.c()
                );
            }
        }
    }

    #[test]
    fn a_slope_gives_its_middle() {
        // w falls from 14 g/kg at the surface by 2 g/kg over 100 hPa: the mean of a layer is its value at the middle pressure.
        for step in [5.0, 1.0] {
            let profile = received(mixed(step, 18.0, |hpa| {
                0.014 - 0.002 * (965.0 - hpa) / 100.0
            }));
            let layer = MixedLayer::of(&profile, &Thresholds::default()).unwrap();
            let w = layer.mean_mixing_ratio.unwrap();
            let middle = 965.0 - (0.014 - w) / 0.002 * 100.0;
            // Contact layer of 10 hPa below, the top (less its entrainment share) above.
            let depth = 965.0 - layer.top.hpa();
            let (low, high) = (955.0, layer.top.hpa() + 0.15 * depth);
            assert!(
                (middle - 0.5 * (low + high)).abs() < 2.0 * step + 1.0,
                "{middle}, {low}..{high}"
            );
        }
    }

    #[test]
    fn none_has_a_reason() {
        let found = candidates(&received(night()), Daylight::Night, &Thresholds::default());
        assert_eq!(found.mixed_layer.dewpoint, None);
        assert_eq!(
            found.mixed_layer.why,
            "no mixed layer of 30 hPa or more reaches the surface"
        );

        let mut dry = mixed(5.0, 16.0, |_| 0.012);
        for level in &mut dry[..] {
            level.dewpoint = None;
        }
        let found = of(dry);
        assert_eq!(found.reported.why, "the surface level has no dew point");
        assert_eq!(
            found.mixed_layer.why,
            "the humidity of the mixed layer is not known"
        );

        let found = of(Vec::new());
        assert_eq!(
            (found.reported.why.as_str(), found.mixed_layer.why.as_str()),
            ("no surface level", "no surface level")
        );
    }

    #[test]
    fn a_refuted_value_is_set_aside_for_the_sondes_own() {
        // Under 12 g/kg throughout (16.08 °C at 965 hPa, by hand above) the surface says 0 °C.
        for step in [25.0, 1.0] {
            let found = of(mixed(step, 0.0, |_| 0.012));
            assert!(found.reported.set_aside, "{step}");
            assert!(
                found.reported.why.contains("set aside: 16.1 K drier"),
                "{}",
                found.reported.why
            );
            let continued = found.first_levels.as_ref().unwrap();
            assert!((continued.dewpoint.unwrap().c() - 16.08).abs() < 0.05);
            assert_eq!(found.sonde_temperature, None);
            let interval =
                crate::interval(&found, found.surface_temperature, crate::Pins::default()).unwrap();
            assert!(
                (interval.low.c() - 15.58).abs() < 0.1 && (interval.high.c() - 16.58).abs() < 0.1
            );
        }
        let doubtful = of(mixed(1.0, 12.0, |_| 0.012));
        assert!(!doubtful.reported.set_aside && doubtful.first_levels.is_none());
    }

    #[test]
    fn a_refuted_temperature_leaves_no_interval_until_it_is_set() {
        let mut levels = mixed(1.0, 0.0, |_| 0.012);
        levels[0].temperature = Some(275.15);
        let found = of(levels);
        let expected = found.sonde_temperature.unwrap();
        let none = crate::interval(&found, found.surface_temperature, crate::Pins::default());
        let told = none.unwrap_err().to_string();
        assert!(
            told.contains("2.0 °C") && told.contains("set the surface temperature"),
            "{told}"
        );
        let set = crate::interval(&found, Some(expected), crate::Pins::default()).unwrap();
        assert!(set.low.c() > 15.0, "{set:?}");
    }
}
