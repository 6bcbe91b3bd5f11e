//! Numbers in the units the person has chosen: fixed precision, a real minus sign, always with the unit.

use dewbound_session::chart::{SpeedUnit, TemperatureUnit, Units};
use dewbound_session::thermo::Temperature;
use dewbound_session::wording::number;

/// Value in the displayed unit.
pub(crate) fn shown(temperature: Temperature, unit: TemperatureUnit) -> f64 {
    match unit {
        TemperatureUnit::Celsius => temperature.c(),
        TemperatureUnit::Fahrenheit => temperature.f(),
    }
}

/// From a value in the displayed unit.
pub(crate) fn from_shown(value: f64, unit: TemperatureUnit) -> Temperature {
    match unit {
        TemperatureUnit::Celsius => Temperature::from_c(value),
        TemperatureUnit::Fahrenheit => Temperature::from_f(value),
    }
}

/// A step of the displayed unit in kelvins.
pub(crate) fn kelvins(step: f64, unit: TemperatureUnit) -> f64 {
    match unit {
        TemperatureUnit::Celsius => step,
        TemperatureUnit::Fahrenheit => step / 1.8,
    }
}

/// The unit's sign.
pub(crate) const fn sign(unit: TemperatureUnit) -> &'static str {
    match unit {
        TemperatureUnit::Celsius => "°C",
        TemperatureUnit::Fahrenheit => "°F",
    }
}

/// "18.4 °C".
pub(crate) fn temperature(temperature: Temperature, unit: TemperatureUnit) -> String {
    format!("{} {}", number(shown(temperature, unit), 1), sign(unit))
}

/// The other choices a person can make.
pub(crate) fn with_temperature(units: Units, temperature: TemperatureUnit) -> Units {
    Units {
        temperature,
        ..units
    }
}

/// The same for wind speed.
pub(crate) fn with_speed(units: Units, speed: SpeedUnit) -> Units {
    Units { speed, ..units }
}

/// A number as typed: decimal point or comma, any minus sign.
pub(crate) fn typed(text: &str) -> Option<f64> {
    text.trim()
        .replace(',', ".")
        .replace('\u{2212}', "-")
        .parse::<f64>()
        .ok()
        .filter(|value| value.is_finite())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn both_scales() {
        let freezing = Temperature::from_c(0.0);
        assert_eq!(temperature(freezing, TemperatureUnit::Celsius), "0.0 °C");
        assert_eq!(
            temperature(freezing, TemperatureUnit::Fahrenheit),
            "32.0 °F"
        );
        assert_eq!(
            temperature(Temperature::from_c(-40.0), TemperatureUnit::Fahrenheit),
            "\u{2212}40.0 °F"
        );
        assert!((kelvins(1.8, TemperatureUnit::Fahrenheit) - 1.0).abs() < 1e-12);
    }

    #[test]
    fn typing() {
        assert_eq!(typed("17,5"), Some(17.5));
        assert_eq!(typed(" \u{2212}3 "), Some(-3.0));
        assert_eq!(typed("-"), None);
        assert_eq!(typed("inf"), None);
        assert_eq!(typed(""), None);
    }
}
