//! Units of the declared numbers: in keys, in words, and as a person has chosen them.

use crate::chart::{HeightUnit, SpeedUnit, TemperatureUnit, Units};

/// Unit of a number. Values are SI; what is shown and written is in these.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Unit {
    /// J/kg.
    Energy,
    /// hPa (SI: Pa).
    Pressure,
    /// A temperature, °C or °F (SI: K).
    Temperature,
    /// A temperature or a difference of temperatures that is always given in K.
    Kelvin,
    /// Height, m or ft.
    Height,
    /// A wind, a motion, a difference of winds: direction it comes from and speed, kt or m/s.
    Wind,
    /// m²/s².
    Helicity,
    /// m/s².
    Acceleration,
    /// K/km (SI: K/m).
    LapseRate,
    /// mm of water (SI: kg/m², the same number).
    Water,
    /// Per cent (SI: 1).
    Percent,
    /// Degrees of angle.
    Angle,
    /// Without unit: an index, a count, yes or no.
    None,
}

/// Metres per second in a knot: 1852 m an hour, exactly.
const KNOT: f64 = 1852.0 / 3600.0;
/// Metres in a foot, exactly.
const FOOT: f64 = 0.3048;

impl Unit {
    /// Every unit.
    pub const ALL: [Self; 13] = [
        Self::Energy,
        Self::Pressure,
        Self::Temperature,
        Self::Kelvin,
        Self::Height,
        Self::Wind,
        Self::Helicity,
        Self::Acceleration,
        Self::LapseRate,
        Self::Water,
        Self::Percent,
        Self::Angle,
        Self::None,
    ];

    /// What a key with this unit ends in.
    pub fn suffix(self) -> &'static str {
        match self {
            Self::Energy => "_jkg",
            Self::Pressure => "_hpa",
            Self::Temperature => "_c",
            Self::Kelvin => "_k",
            Self::Height => "_m",
            Self::Wind => "_ms",
            Self::Helicity => "_m2s2",
            Self::Acceleration => "_ms2",
            Self::LapseRate => "_kkm",
            Self::Water => "_mm",
            Self::Percent => "_pct",
            Self::Angle => "_deg",
            Self::None => "",
        }
    }

    /// Its sign, in the units a person has chosen; empty without one.
    pub fn sign(self, units: Units) -> &'static str {
        match self {
            Self::Energy => "J/kg",
            Self::Pressure => "hPa",
            Self::Temperature => match units.temperature {
                TemperatureUnit::Celsius => "°C",
                TemperatureUnit::Fahrenheit => "°F",
            },
            Self::Kelvin => "K",
            Self::Height => match units.height {
                HeightUnit::Metric => "m",
                HeightUnit::Feet => "ft",
            },
            Self::Wind => match units.speed {
                SpeedUnit::Knots => "kt",
                SpeedUnit::MetresPerSecond => "m/s",
            },
            Self::Helicity => "m²/s²",
            Self::Acceleration => "m/s²",
            Self::LapseRate => "K/km",
            Self::Water => "mm",
            Self::Percent => "%",
            Self::Angle => "°",
            Self::None => "",
        }
    }

    /// Units of reports: °C, m, m/s.
    pub fn of_reports() -> Units {
        Units {
            temperature: TemperatureUnit::Celsius,
            height: HeightUnit::Metric,
            speed: SpeedUnit::MetresPerSecond,
        }
    }

    /// An SI value as it is written in reports and keys.
    pub fn reported(self, si: f64) -> f64 {
        match self {
            Self::Pressure => si / 100.0,
            Self::Percent => si * 100.0,
            Self::Temperature => si - 273.15,
            Self::LapseRate => si * 1000.0,
            Self::Energy
            | Self::Kelvin
            | Self::Height
            | Self::Wind
            | Self::Helicity
            | Self::Acceleration
            | Self::Water
            | Self::Angle
            | Self::None => si,
        }
    }

    /// An SI value in the units a person has chosen, and how many decimals that deserves.
    pub fn shown(self, si: f64, decimals: usize, units: Units) -> (f64, usize) {
        match (self, units) {
            (
                Self::Temperature,
                Units {
                    temperature: TemperatureUnit::Fahrenheit,
                    ..
                },
            ) => (si * 1.8 - 459.67, decimals),
            // Ten feet: finer than any sonde's height is good for.
            (
                Self::Height,
                Units {
                    height: HeightUnit::Feet,
                    ..
                },
            ) => ((si / FOOT / 10.0).round() * 10.0, decimals),
            (
                Self::Wind,
                Units {
                    speed: SpeedUnit::Knots,
                    ..
                },
            ) => (si / KNOT, 0),
            _ => (self.reported(si), decimals),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_as_people_choose_them() {
        let theirs = Units {
            temperature: TemperatureUnit::Fahrenheit,
            height: HeightUnit::Feet,
            speed: SpeedUnit::Knots,
        };
        let check = |unit: Unit, si: f64, ours: f64, other: f64| {
            let close = |a: f64, b: f64| (a - b).abs() < 1e-9;
            let shown = |units| unit.shown(si, 1, units).0;
            assert!(close(shown(Unit::of_reports()), ours), "{unit:?}");
            assert!(close(shown(theirs), other), "{unit:?}");
        };
        // By definition of the units: 0 °C = 32 °F, 1 ft = 0.3048 m, 1 kt = 1852 m/h.
        check(Unit::Temperature, 273.15, 0.0, 32.0);
        check(Unit::Temperature, 373.15, 100.0, 212.0);
        check(Unit::Height, 304.8, 304.8, 1000.0);
        check(Unit::Wind, 18.52, 18.52, 36.0);
        check(Unit::Pressure, 85_000.0, 850.0, 850.0);
        check(Unit::LapseRate, 0.0065, 6.5, 6.5);
        check(Unit::Percent, 0.5, 50.0, 50.0);
        check(Unit::Kelvin, 350.0, 350.0, 350.0);
    }
}
