//! An invented message as it comes over the wire, for tests that must not work on demo data.

use crate::demo::atmosphere::{Atmosphere, Humidity};
use crate::demo::balloon::{Faults, Sample, launch};
pub use crate::demo::stories::{Station, Time};
pub use crate::demo::write::Parts;
use crate::demo::write::bulletin;

/// Where it comes from.
pub const STATION: Station = Station {
    wmo: "00301",
    name: "Ashgill",
    latitude: 40.70,
    longitude: -145.60,
    elevation: 310.0,
};

/// Mid-afternoon there.
pub const TIME: Time = Time {
    year: 2031,
    month: 6,
    day: 14,
    hour: 0,
};

/// By how much its screen reads too moist, K.
pub const SCREEN_BIAS: f64 = 4.0;

/// The table an office would keep of it.
pub fn station_table() -> String {
    format!(
        "wmo,wigos,icao,name,lat,lon,elevation_m\n{},,,{},{},{},{}\n",
        STATION.wmo, STATION.name, STATION.latitude, STATION.longitude, STATION.elevation
    )
}

fn samples() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(STATION.elevation, 972.0, 29.5, 16.2)
        .layer(25.0, 36.0, Humidity::Mixing(11.9))
        .mixed(1300.0, Humidity::Mixing(11.6))
        .layer(150.0, -9.0, Humidity::Relative(0.50))
        .layer(2000.0, 7.2, Humidity::Relative(0.38))
        .layer(2600.0, 7.1, Humidity::Relative(0.42))
        .layer(3400.0, 7.3, Humidity::Relative(0.38))
        .layer(2400.0, 7.1, Humidity::Relative(0.33))
        .layer(1500.0, 0.5, Humidity::Relative(0.12))
        .layer(4000.0, -0.6, Humidity::Relative(0.03))
        .layer(8000.0, -1.4, Humidity::Relative(0.01))
        .wind(&[
            (0.0, 160.0, 6.0),
            (1500.0, 200.0, 13.0),
            (6000.0, 245.0, 24.0),
            (11_000.0, 260.0, 38.0),
            (25_000.0, 90.0, 10.0),
        ]);
    let faults = Faults {
        screen_dewpoint_bias: SCREEN_BIAS,
        ..Faults::default()
    };
    launch(&atmosphere, 4711, 1.0, 24_000.0, faults)
}

/// A TEMP message: a mixed layer under a cap, and a screen at the ground that reads too moist.
pub fn moist_screen(parts: Parts) -> String {
    bulletin(&STATION, &TIME, &samples(), parts)
}
