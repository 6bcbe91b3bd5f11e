//! Numbers as a person reads them.

use crate::{HeightUnit, SpeedUnit, TemperatureUnit, Units};
use dewbound_sounding::thermo::Temperature;

/// A number with fixed decimals, a real minus sign, and no minus before zero.
pub(crate) fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(digits) if digits.chars().all(|c| c == '0' || c == '.') => digits.to_owned(),
        Some(digits) => format!("\u{2212}{digits}"),
        None => text,
    }
}

pub(crate) fn temperature(value: Temperature, units: Units) -> String {
    match units.temperature {
        TemperatureUnit::Celsius => format!("{} °C", fixed(value.c(), 1)),
        TemperatureUnit::Fahrenheit => format!("{} °F", fixed(value.f(), 1)),
    }
}

/// Metres in a foot, exactly.
pub(crate) const FOOT: f64 = 0.3048;

pub(crate) fn height(metres: f64, units: Units) -> String {
    match units.height {
        HeightUnit::Metric => format!("{} m", fixed(metres, 0)),
        // Ten feet: finer than any sonde's height is good for.
        HeightUnit::Feet => format!("{} ft", fixed((metres / FOOT / 10.0).round() * 10.0, 0)),
    }
}

pub(crate) fn speed(metres_per_second: f64, units: Units) -> String {
    match units.speed {
        SpeedUnit::Knots => format!("{} kt", fixed(metres_per_second * crate::barb::KNOTS, 0)),
        SpeedUnit::MetresPerSecond => format!("{} m/s", fixed(metres_per_second, 1)),
    }
}

/// A pressure in hPa; tenths only where they are worth something.
pub(crate) fn pressure(hpa: f64) -> String {
    format!("{} hPa", fixed(hpa, usize::from(hpa < 100.0)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn minus_signs_are_real_and_never_before_zero() {
        assert_eq!(fixed(-3.24, 1), "\u{2212}3.2");
        assert_eq!(fixed(-0.04, 1), "0.0");
        assert_eq!(fixed(-0.0, 0), "0");
        assert_eq!(fixed(12.05, 0), "12");
    }

    #[test]
    fn units_are_named() {
        let units = Units {
            temperature: TemperatureUnit::Fahrenheit,
            height: HeightUnit::Feet,
            speed: SpeedUnit::MetresPerSecond,
        };
        assert_eq!(temperature(Temperature::from_c(20.0), units), "68.0 °F");
        assert_eq!(height(304.8, units), "1000 ft");
        assert_eq!(speed(10.0, units), "10.0 m/s");
        assert_eq!(speed(10.0, Units::default()), "19 kt");
        assert_eq!(pressure(850.0), "850 hPa");
        assert_eq!(pressure(31.46), "31.5 hPa");
    }
}
