//! A received level with only the values that can be used.

use crate::Level;
use crate::telling::{Tally, at, celsius, hpa, place};
use dewbound_thermo::{Temperature, saturation_vapour_pressure};

/// Pressures (Pa) a balloon can meet; the highest on record at sea level is below 1,090 hPa.
const PRESSURES: std::ops::RangeInclusive<f64> = 10.0..=110_000.0;
/// Temperatures and dew points (K) that can't be ruled out outright: far outside every record from ground to stratopause.
pub(crate) const TEMPERATURES: std::ops::RangeInclusive<f64> = 140.0..=340.0;
const DEWPOINTS: std::ops::RangeInclusive<f64> = 120.0..=320.0;
/// Heights, m.
pub(crate) const HEIGHTS: std::ops::RangeInclusive<f64> = -1_000.0..=80_000.0;
/// Wind speeds, m/s.
const SPEEDS: std::ops::RangeInclusive<f64> = 0.0..=250.0;
/// Dew point above temperature up to this (K) is rounding or slight supersaturation: saturated.
const SATURATED_WITHIN: f64 = 1.0;

/// A level with only the values that can be used.
pub(crate) fn cleaned(
    index: usize,
    level: &Level,
    unusable: &mut Tally,
    saturated: &mut Tally,
) -> Level {
    let place = place(level);
    let mut checked = |value: Option<f64>,
                       range: &std::ops::RangeInclusive<f64>,
                       name: &str,
                       shown: fn(f64) -> String| {
        let value = value?;
        if range.contains(&value) {
            return Some(value);
        }
        // A line says where it is; without one the order of receipt has to.
        let of = match level.line {
            Some(_) => String::new(),
            None => format!(" of received level {}", index + 1),
        };
        unusable.add(place, format!("{name} {}{of}", shown(value)));
        None
    };
    let pressure = checked(level.pressure, &PRESSURES, "pressure", hpa);
    let height = checked(level.height, &HEIGHTS, "height", |z| format!("{z} m"));
    let temperature = checked(level.temperature, &TEMPERATURES, "temperature", celsius);
    let mut dewpoint = checked(level.dewpoint, &DEWPOINTS, "dew point", celsius);
    let wind = level.wind.filter(|wind| {
        let speed = checked(Some(wind.speed), &SPEEDS, "wind speed", |v| {
            format!("{v} m/s")
        });
        let direction = checked(
            Some(wind.direction),
            &(0.0..=360.0),
            "wind direction",
            |d| format!("{d}°"),
        );
        speed.is_some() && direction.is_some()
    });
    if let (Some(t), Some(td)) = (temperature, dewpoint)
        && td > t
    {
        if td - t <= SATURATED_WITHIN {
            dewpoint = Some(t);
            saturated.add(
                place,
                format!(
                    "dew point {} above temperature {} at {}",
                    celsius(td),
                    celsius(t),
                    at(pressure)
                ),
            );
        } else {
            dewpoint = None;
            unusable.add(
                place,
                format!(
                    "dew point {} far above temperature {} at {}",
                    celsius(td),
                    celsius(t),
                    at(pressure)
                ),
            );
        }
    }
    if let (Some(p), Some(td)) = (pressure, dewpoint)
        && saturation_vapour_pressure(Temperature::from_k(td)).pa() >= 0.5 * p
    {
        dewpoint = None;
        unusable.add(
            place,
            format!(
                "dew point {} at {}, where vapour would outweigh the air",
                celsius(td),
                at(pressure)
            ),
        );
    }
    Level {
        pressure,
        height,
        temperature,
        dewpoint,
        wind,
        ..*level
    }
}
