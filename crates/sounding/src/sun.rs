//! Where the sun stands.

use crate::{Daylight, Position, Sounding};
use jiff::{SignedDuration, Timestamp};

/// The sun must have stood higher than this (degrees) to have mixed the air near the ground. Common practice, no source.
pub const DAYLIGHT_ELEVATION: f64 = 10.0;

/// Geometric elevation of the sun's centre above the horizon, degrees (no refraction).
///
/// Low-accuracy solar coordinates of Meeus, *Astronomical Algorithms* (2nd ed. 1998), ch. 25, and mean sidereal time, ch. 12 (both from memory):
/// within 0.02 degrees between 1950 and 2100. Parallax (0.002 degrees), nutation in right ascension and the difference between UTC, UT1 and
/// terrestrial time (0.001 degrees) are left out. `NaN` only for a position that is not finite.
pub fn solar_elevation(time: Timestamp, position: Position) -> f64 {
    // Julian days and centuries since 2000-01-01 12:00.
    let days = (time.as_millisecond() as f64 / 86_400_000.0) - 10_957.5;
    let t = days / 36_525.0;
    let mean_longitude = 280.466_46 + t * (36_000.769_83 + t * 0.000_303_2);
    let anomaly = (357.529_11 + t * (35_999.050_29 - t * 0.000_153_7)).to_radians();
    let centre = (1.914_602 - t * (0.004_817 + t * 0.000_014)) * anomaly.sin()
        + (0.019_993 - t * 0.000_101) * (2.0 * anomaly).sin()
        + 0.000_289 * (3.0 * anomaly).sin();
    let node = (125.04 - 1_934.136 * t).to_radians();
    let longitude = (mean_longitude + centre - 0.005_69 - 0.004_78 * node.sin()).to_radians();
    let obliquity = (23.439_291 - 0.013_004_2 * t + 0.002_56 * node.cos()).to_radians();
    let declination = (obliquity.sin() * longitude.sin()).asin();
    let right_ascension = (obliquity.cos() * longitude.sin()).atan2(longitude.cos());
    let sidereal = 280.460_618_37 + 360.985_647_366_29 * days + 0.000_387_933 * t * t;
    let hour_angle = (sidereal + position.longitude)
        .rem_euclid(360.0)
        .to_radians()
        - right_ascension;
    let latitude = position.latitude.to_radians();
    (latitude.sin() * declination.sin() + latitude.cos() * declination.cos() * hour_angle.cos())
        .clamp(-1.0, 1.0)
        .asin()
        .to_degrees()
}

/// Whether the sun stood above 10 degrees at launch or within the hour before.
///
/// Launch time, else the nominal time (balloons filed under an hour are let go before it). [`Daylight::Unknown`] without time or position.
pub fn daylight(sounding: &Sounding) -> Daylight {
    let Some(time) = sounding.times.launch.or(sounding.times.nominal) else {
        return Daylight::Unknown;
    };
    let Some(position) = sounding.station.position else {
        return Daylight::Unknown;
    };
    if !(position.latitude.is_finite() && position.longitude.is_finite()) {
        return Daylight::Unknown;
    }
    // Every ten minutes: the sun moves 2.5 degrees at most between two looks and is near its turn where it isn't monotonic.
    let high = (0..=6).any(|step| {
        time.checked_sub(SignedDuration::from_mins(10 * step))
            .is_ok_and(|earlier| solar_elevation(earlier, position) > DAYLIGHT_ELEVATION)
    });
    if high { Daylight::Day } else { Daylight::Night }
}
