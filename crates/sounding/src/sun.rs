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

/// What is missing when day and night can't be told apart: "no time", "no position", or both.
pub fn missing_for_daylight(sounding: &Sounding) -> &'static str {
    let timed = sounding.times.launch.or(sounding.times.nominal).is_some();
    match (timed, sounding.station.position.is_some()) {
        (false, false) => "no time and no position",
        (false, true) => "no time",
        (true, false) => "no position",
        (true, true) => "no usable position",
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Station, Times};

    fn check(time: &str, latitude: f64, longitude: f64, expect: f64, tolerance: f64) {
        let position = Position {
            latitude,
            longitude,
        };
        let elevation = solar_elevation(time.parse().unwrap(), position);
        assert!(
            (elevation - expect).abs() <= tolerance,
            "{time} {latitude} {longitude}: {elevation}, expected {expect}"
        );
    }

    #[test]
    fn worked_example_of_reda_and_andreas() {
        // Reda & Andreas, Solar Position Algorithm, NREL/TP-560-34302, appendix A.5: topocentric elevation without refraction 39.872046
        // degrees (from memory).
        check(
            "2003-10-17T19:30:30Z",
            39.742476,
            -105.1786,
            39.872046,
            0.02,
        );
    }

    #[test]
    fn agrees_with_an_independent_ephemeris() {
        // astropy 8.0.2: get_sun transformed to AltAz without pressure, at sea level.
        for (time, latitude, longitude, expect) in [
            ("2024-06-20T18:00:00Z", 35.04, -106.62, 71.1752),
            ("2019-05-08T12:00:00Z", 36.6, -97.5, 4.9616),
            ("1987-12-21T00:00:00Z", -12.42, 130.89, 42.7694),
            ("2011-10-14T18:36:00Z", 3.5644, 98.6744, -68.4403),
            ("2025-03-01T05:15:00Z", -54.0, 158.9, 26.3104),
            ("1973-07-01T03:00:00Z", 78.2, 15.6, 16.8288),
            ("2026-09-22T22:00:00Z", 0.0, -180.0, 61.8543),
        ] {
            check(time, latitude, longitude, expect, 0.02);
        }
    }

    fn at(launch: Option<&str>, nominal: Option<&str>, position: Option<Position>) -> Daylight {
        daylight(&Sounding {
            station: Station {
                position,
                ..Station::default()
            },
            times: Times {
                launch: launch.map(|t| t.parse().unwrap()),
                nominal: nominal.map(|t| t.parse().unwrap()),
                ..Times::default()
            },
            ..Sounding::default()
        })
    }

    #[test]
    fn day_by_the_hour_before_launch() {
        let position = Position {
            latitude: 36.6,
            longitude: -97.5,
        };
        let plains = Some(position);
        // On 2019-05-08 the sun stands at 5.0 degrees there at 12:00 (astropy, above) and passes 10 degrees after that.
        assert_eq!(
            at(Some("2019-05-08T12:00:00Z"), None, plains),
            Daylight::Night
        );
        assert_eq!(
            at(Some("2019-05-08T18:00:00Z"), None, plains),
            Daylight::Day
        );
        // Below 10 degrees at launch, above it 59 minutes earlier: evening of the same day.
        let evening: Timestamp = "2019-05-09T00:45:00Z".parse().unwrap();
        assert!(solar_elevation(evening, position) < 10.0);
        assert!(solar_elevation(evening - SignedDuration::from_mins(60), position) > 10.0);
        assert_eq!(
            at(Some("2019-05-09T00:45:00Z"), None, plains),
            Daylight::Day
        );
        assert_eq!(
            at(Some("2019-05-09T02:30:00Z"), None, plains),
            Daylight::Night
        );
    }

    #[test]
    fn unknown_without_time_or_position() {
        let plains = Some(Position {
            latitude: 36.6,
            longitude: -97.5,
        });
        assert_eq!(at(None, None, plains), Daylight::Unknown);
        assert_eq!(
            at(Some("2019-05-08T18:00:00Z"), None, None),
            Daylight::Unknown
        );
        assert_eq!(
            at(None, Some("2019-05-08T18:00:00Z"), plains),
            Daylight::Day
        );
        let nowhere = Some(Position {
            latitude: f64::NAN,
            longitude: 0.0,
        });
        assert_eq!(
            at(Some("2019-05-08T18:00:00Z"), None, nowhere),
            Daylight::Unknown
        );
    }
}
