//! The credible interval of the surface dew point.

use crate::{Candidates, Origin};
use dewbound_trust::sounding::thermo::Temperature;

/// Allowance for the sensor on each side, K. Provisional: to be replaced by the published uncertainty of the sonde at hand.
pub const SENSOR_ALLOWANCE: f64 = 0.5;

/// Ends set by the user.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Pins {
    /// Lower end.
    pub low: Option<Temperature>,
    /// Upper end.
    pub high: Option<Temperature>,
}

/// Between these the surface dew point is believed to lie.
#[derive(Debug, Clone, PartialEq)]
pub struct Interval {
    /// Lower end.
    pub low: Temperature,
    /// Upper end.
    pub high: Temperature,
    /// Where the lower end comes from.
    pub why_low: String,
    /// Where the upper end comes from.
    pub why_high: String,
    /// An end rests on [`SENSOR_ALLOWANCE`], which is provisional.
    pub provisional: bool,
}

impl Interval {
    /// A dew point lies inside, ends included.
    pub fn contains(&self, dewpoint: Temperature) -> bool {
        // A tenth of a millikelvin: ends shown and typed in other units come back with rounding.
        dewpoint.k() >= self.low.k() - 1e-4 && dewpoint.k() <= self.high.k() + 1e-4
    }
}

/// Why there is no interval.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoInterval {
    /// No candidate, and not both ends pinned.
    #[error("no credible interval: {reported}; {mixed_layer}. Pin both ends to set one")]
    NoCandidate {
        /// Why no dew point is reported.
        reported: String,
        /// Why the mixed layer implies none.
        mixed_layer: String,
    },
    /// Every candidate lies above a surface temperature that the sonde refutes.
    #[error(
        "no credible interval: the sonde contradicts the surface temperature, {received_c:.1} °C ({expected_c:.1} °C expected), and every candidate lies above it. Take the repair or set the surface temperature, or pin both ends"
    )]
    TemperatureRefuted {
        /// As received, °C.
        received_c: f64,
        /// As the sonde leads to, °C.
        expected_c: f64,
    },
    /// The ends are crossed by a pin.
    #[error(
        "the lower end, {low_c:.1} °C ({why_low}), lies above the upper end, {high_c:.1} °C ({why_high}): move a pin"
    )]
    Crossed {
        /// Lower end, °C.
        low_c: f64,
        /// Where it comes from.
        why_low: String,
        /// Upper end, °C.
        high_c: f64,
        /// Where it comes from.
        why_high: String,
    },
    /// A pin that is not a number.
    #[error("a pinned end is not a number: unpin it")]
    NotANumber,
}

/// The interval: from the lower to the higher of the candidates not set aside, each side widened by [`SENSOR_ALLOWANCE`], the upper end no
/// higher than the surface `temperature` in force. A pinned end replaces the one computed.
///
/// # Errors
///
/// [`NoInterval`] says what is missing and what to do.
pub fn interval(
    candidates: &Candidates,
    temperature: Option<Temperature>,
    pins: Pins,
) -> Result<Interval, NoInterval> {
    if [pins.low, pins.high]
        .into_iter()
        .flatten()
        .any(|pin| !pin.k().is_finite())
    {
        return Err(NoInterval::NotANumber);
    }
    let known = || {
        candidates
            .iter()
            .filter(|c| !c.set_aside)
            .filter_map(|c| Some((c.origin, c.dewpoint?)))
    };
    let lowest = known().min_by(|a, b| a.1.k().total_cmp(&b.1.k()));
    let highest = known().max_by(|a, b| a.1.k().total_cmp(&b.1.k()));
    let pinned = pins.low.is_some() && pins.high.is_some();
    if let (Some(expected), Some(received), Some((_, lowest)), false) = (
        candidates.sonde_temperature,
        candidates
            .surface_temperature
            .filter(|_| temperature == candidates.surface_temperature),
        lowest,
        pinned,
    ) && lowest.k() > received.k()
    {
        return Err(NoInterval::TemperatureRefuted {
            received_c: received.c(),
            expected_c: expected.c(),
        });
    }
    let missing = || NoInterval::NoCandidate {
        reported: candidates.reported.why.clone(),
        mixed_layer: candidates.mixed_layer.why.clone(),
    };

    let (high, why_high) = match (pins.high, highest) {
        (Some(pin), _) => (pin.k(), "pinned".to_string()),
        (None, Some((origin, dewpoint))) => (
            dewpoint.k() + SENSOR_ALLOWANCE,
            format!("{} plus {SENSOR_ALLOWANCE:.1} °C", name(origin)),
        ),
        (None, None) => return Err(missing()),
    };
    let (low, why_low) = match (pins.low, lowest) {
        (Some(pin), _) => (pin.k(), "pinned".to_string()),
        (None, Some((origin, dewpoint))) => (
            dewpoint.k() - SENSOR_ALLOWANCE,
            format!("{} minus {SENSOR_ALLOWANCE:.1} °C", name(origin)),
        ),
        (None, None) => return Err(missing()),
    };
    let (mut low, mut why_low, mut high, mut why_high) = (low, why_low, high, why_high);
    if let Some(limit) = temperature.map(Temperature::k) {
        if high > limit {
            high = limit;
            why_high.push_str(", held at the surface temperature");
        }
        // A surface cooled below every candidate leaves saturation as the only possible state.
        if low > limit {
            low = limit;
            why_low.push_str(", held at the surface temperature");
        }
    }
    if low > high {
        return Err(NoInterval::Crossed {
            low_c: Temperature::from_k(low).c(),
            why_low,
            high_c: Temperature::from_k(high).c(),
            why_high,
        });
    }
    Ok(Interval {
        low: Temperature::from_k(low),
        high: Temperature::from_k(high),
        why_low,
        why_high,
        provisional: pins.low.is_none() || pins.high.is_none(),
    })
}

fn name(origin: Origin) -> &'static str {
    match origin {
        Origin::Reported => "as reported",
        Origin::MixedLayer => "implied by the mixed layer",
        Origin::FirstLevels => "continued from the sonde's first levels",
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Candidate;

    fn c(celsius: f64) -> Temperature {
        Temperature::from_c(celsius)
    }

    fn two(reported: Option<f64>, implied: Option<f64>) -> Candidates {
        let candidate = |origin, dewpoint: Option<f64>, why: &str| Candidate {
            origin,
            dewpoint: dewpoint.map(c),
            why: why.to_string(),
            set_aside: false,
        };
        Candidates {
            reported: candidate(Origin::Reported, reported, "no surface dew point"),
            mixed_layer: candidate(Origin::MixedLayer, implied, "no mixed layer"),
            first_levels: None,
            surface_temperature: Some(c(30.0)),
            sonde_temperature: None,
        }
    }

    fn check(
        candidates: &Candidates,
        t: f64,
        pins: (Option<f64>, Option<f64>),
        low: f64,
        high: f64,
    ) -> Interval {
        let pins = Pins {
            low: pins.0.map(c),
            high: pins.1.map(c),
        };
        let found = interval(candidates, Some(c(t)), pins).unwrap();
        assert!(
            (found.low.c() - low).abs() < 1e-9 && (found.high.c() - high).abs() < 1e-9,
            "{found:?}"
        );
        found
    }

    #[test]
    fn spans_the_candidates_and_half_a_degree() {
        let found = check(&two(Some(21.0), Some(17.5)), 30.0, (None, None), 17.0, 21.5);
        assert_eq!(found.why_low, "implied by the mixed layer minus 0.5 °C");
        assert_eq!(found.why_high, "as reported plus 0.5 °C");
        assert!(found.provisional);
        check(&two(Some(16.0), Some(17.5)), 30.0, (None, None), 15.5, 18.0);
        check(&two(Some(16.0), None), 30.0, (None, None), 15.5, 16.5);
        check(&two(None, Some(17.5)), 30.0, (None, None), 17.0, 18.0);
    }

    #[test]
    fn capped_at_the_temperature() {
        let found = check(&two(Some(19.8), None), 20.0, (None, None), 19.3, 20.0);
        assert_eq!(
            found.why_high,
            "as reported plus 0.5 °C, held at the surface temperature"
        );
        check(&two(Some(19.8), Some(25.0)), 18.0, (None, None), 18.0, 18.0);
    }

    #[test]
    fn pinned_ends_override_and_say_so() {
        let found = check(
            &two(Some(21.0), Some(17.5)),
            30.0,
            (Some(16.0), None),
            16.0,
            21.5,
        );
        assert_eq!(found.why_low, "pinned");
        assert!(found.provisional);
        let found = check(&two(None, None), 30.0, (Some(16.0), Some(19.0)), 16.0, 19.0);
        assert!(!found.provisional);
    }

    #[test]
    fn no_interval_says_why() {
        let error = interval(&two(None, None), None, Pins::default()).unwrap_err();
        assert_eq!(
            error.to_string(),
            "no credible interval: no surface dew point; no mixed layer. Pin both ends to set one"
        );
        let crossed = Pins {
            low: Some(c(25.0)),
            high: None,
        };
        let error = interval(&two(Some(21.0), None), None, crossed).unwrap_err();
        assert_eq!(
            error.to_string(),
            "the lower end, 25.0 °C (pinned), lies above the upper end, 21.5 °C (as reported plus 0.5 °C): move a pin"
        );
        let nothing = Pins {
            low: Some(c(f64::NAN)),
            high: None,
        };
        assert_eq!(
            interval(&two(Some(21.0), None), None, nothing),
            Err(NoInterval::NotANumber)
        );
    }

    #[test]
    fn ends_are_inside() {
        let found = check(&two(Some(21.0), None), 30.0, (None, None), 20.5, 21.5);
        for (dewpoint, inside) in [
            (20.5, true),
            (21.0, true),
            (21.5, true),
            (20.49, false),
            (21.51, false),
        ] {
            assert_eq!(found.contains(c(dewpoint)), inside);
        }
    }
}
