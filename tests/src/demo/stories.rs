//! The demo soundings: one story each, on one invented day over the invented Ellowen Plain.

use super::atmosphere::{Atmosphere, Humidity};
use super::balloon::{Faults, Sample, launch};
use super::write::{Parts, bulletin, columns, station_file};
use Humidity::{Mixing, Relative};

/// An invented station. Its number lies in block 00, which no member of the WMO uses.
#[derive(Debug, Clone, Copy)]
pub struct Station {
    /// Five digits.
    pub wmo: &'static str,
    /// Name.
    pub name: &'static str,
    /// Degrees north; the plain lies where the charts show open ocean.
    pub latitude: f64,
    /// Degrees east.
    pub longitude: f64,
    /// Height of the ground, m.
    pub elevation: f64,
}

/// Nominal time of an ascent, UTC; launch is 50 minutes before.
#[derive(Debug, Clone, Copy)]
pub struct Time {
    /// Year.
    pub year: i64,
    /// Month.
    pub month: i64,
    /// Day of the month.
    pub day: i64,
    /// Hour.
    pub hour: i64,
}

impl Time {
    /// Clock of the launch: hour and minute.
    pub fn launch_clock(&self) -> (i64, i64) {
        ((self.hour + 23) % 24, 10)
    }

    /// Launch in RFC 3339.
    pub fn launch(&self) -> String {
        let (hour, minute) = self.launch_clock();
        let day = if self.hour == 0 {
            self.day - 1
        } else {
            self.day
        };
        format!(
            "{:04}-{:02}-{day:02}T{hour:02}:{minute:02}:00Z",
            self.year, self.month
        )
    }

    /// Nominal time in RFC 3339.
    pub fn nominal(&self) -> String {
        format!(
            "{:04}-{:02}-{:02}T{:02}:00:00Z",
            self.year, self.month, self.day, self.hour
        )
    }
}

/// Mid-afternoon at 145 W.
const AFTERNOON: Time = Time {
    year: 2024,
    month: 6,
    day: 13,
    hour: 0,
};

/// Before sunrise at 145 W.
const NIGHT: Time = Time {
    hour: 12,
    ..AFTERNOON
};

const fn station(
    wmo: &'static str,
    name: &'static str,
    latitude: f64,
    longitude: f64,
    elevation: f64,
) -> Station {
    Station {
        wmo,
        name,
        latitude,
        longitude,
        elevation,
    }
}

const BRENNICK: Station = station("00101", "Brennick Flats", 41.20, -145.30, 352.0);
const VELLMARSH: Station = station("00112", "Vellmarsh", 40.35, -144.10, 298.0);
const SANDREL: Station = station("00123", "Sandrel", 42.10, -146.80, 410.0);
const ORLO: Station = station("00134", "Orlo Ridge", 39.60, -147.20, 655.0);
const TAMSEL: Station = station("00145", "Tamsel Creek", 39.90, -142.90, 260.0);
const HATHWYN: Station = station("00156", "Hathwyn", 38.40, -149.50, 1120.0);
const CORRIDEN: Station = station("00167", "Corriden Field", 38.70, -144.60, 331.0);
const LOWMERE: Station = station("00178", "Lowmere Gap", 43.00, -144.90, 240.0);
const DUNMERROW: Station = station("00189", "Dunmerrow", 40.80, -148.40, 505.0);

/// Every invented station, in the order of the station table.
pub const STATIONS: [Station; 9] = [
    BRENNICK, VELLMARSH, SANDREL, ORLO, TAMSEL, HATHWYN, CORRIDEN, LOWMERE, DUNMERROW,
];

/// A file of the demo tray.
#[derive(Debug, Clone)]
pub struct DemoFile {
    /// File name.
    pub name: &'static str,
    /// Content.
    pub text: String,
}

/// The stratosphere above a tropopause.
fn stratosphere(atmosphere: Atmosphere) -> Atmosphere {
    atmosphere
        .layer(1500.0, 0.5, Relative(0.12))
        .layer(4000.0, -0.6, Relative(0.03))
        .layer(12_000.0, -1.4, Relative(0.01))
}

/// Veering, strengthening wind of a severe-weather day.
fn sheared(atmosphere: Atmosphere) -> Atmosphere {
    atmosphere.wind(&[
        (0.0, 155.0, 5.0),
        (500.0, 170.0, 11.0),
        (1500.0, 200.0, 14.0),
        (3000.0, 230.0, 17.0),
        (6000.0, 250.0, 26.0),
        (11_000.0, 260.0, 41.0),
        (14_000.0, 265.0, 24.0),
        (20_000.0, 90.0, 6.0),
        (30_000.0, 90.0, 14.0),
    ])
}

/// Warm-season air: contact layer, mixed layer of this depth and moisture, a cap, steep lapse rates, a tropopause.
fn plains(
    station: Station,
    pressure: f64,
    surface: (f64, f64),
    mixed: f64,
    moisture: f64,
) -> Atmosphere {
    let atmosphere = Atmosphere::from_ground(station.elevation, pressure, surface.0, surface.1)
        .layer(25.0, 38.0, Mixing(moisture))
        .mixed(mixed, Mixing(moisture - 0.4))
        .layer(150.0, -9.0, Relative(0.55))
        .layer(2000.0, 7.2, Relative(0.38))
        .layer(2600.0, 7.0, Relative(0.45))
        .layer(3400.0, 7.3, Relative(0.40))
        .layer(2600.0, 7.2, Relative(0.35));
    sheared(stratosphere(atmosphere))
}

fn clean_and_unstable() -> Vec<Sample> {
    let atmosphere = plains(BRENNICK, 968.0, (28.6, 19.6), 1000.0, 14.9);
    launch(&atmosphere, 11, 1.0, 28_000.0, Faults::default())
}

fn biased_hygrometer() -> Vec<Sample> {
    let atmosphere = plains(VELLMARSH, 974.0, (30.0, 16.4), 1350.0, 12.0);
    let faults = Faults {
        screen_dewpoint_bias: 3.8,
        ..Faults::default()
    };
    launch(&atmosphere, 22, 2.0, 24_000.0, faults)
}

/// Where the cloud deck of the wet thermometer ends, m above sea level.
const DECK_TOP: f64 = 3050.0;

fn wet_thermometer() -> Vec<Sample> {
    let base = SANDREL.elevation;
    let atmosphere = Atmosphere::from_ground(base, 962.0, 24.8, 18.2)
        .layer(20.0, 30.0, Mixing(13.6))
        .mixed(780.0, Mixing(13.3))
        .layer(250.0, 6.0, Relative(0.995))
        .layer(DECK_TOP - base - 1050.0, 5.2, Relative(1.0))
        .layer(40.0, -20.0, Relative(0.20))
        .layer(1700.0, 7.2, Relative(0.20))
        .layer(2500.0, 7.8, Relative(0.30))
        .layer(3600.0, 7.6, Relative(0.35))
        .layer(1900.0, 7.0, Relative(0.30));
    let faults = Faults {
        wet_thermometer: Some((DECK_TOP, 45.0)),
        ..Faults::default()
    };
    launch(
        &sheared(stratosphere(atmosphere)),
        33,
        1.0,
        24_000.0,
        faults,
    )
}

fn sloping_moisture() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(ORLO.elevation, 936.0, 31.2, 18.6)
        .layer(25.0, 36.0, Mixing(14.2))
        .mixed(1650.0, Mixing(9.6))
        .layer(200.0, -6.0, Relative(0.42))
        .layer(2000.0, 7.4, Relative(0.35))
        .layer(2500.0, 7.2, Relative(0.40))
        .layer(3200.0, 7.3, Relative(0.35))
        .layer(2100.0, 7.2, Relative(0.30));
    launch(
        &sheared(stratosphere(atmosphere)),
        44,
        1.0,
        27_000.0,
        Faults::default(),
    )
}

fn lost_in_an_anvil() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(TAMSEL.elevation, 979.0, 29.8, 21.6)
        .layer(25.0, 34.0, Mixing(16.5))
        .mixed(850.0, Mixing(16.2))
        .layer(150.0, -4.0, Relative(0.62))
        .layer(2200.0, 7.0, Relative(0.55))
        .layer(2600.0, 7.2, Relative(0.50))
        .layer(900.0, 6.6, Relative(0.74))
        .layer(300.0, 5.0, Relative(0.72))
        .layer(4500.0, 7.4, Relative(0.62));
    let faults = Faults {
        icing: Some((7400.0, 8950.0)),
        ..Faults::default()
    };
    launch(
        &sheared(stratosphere(atmosphere)),
        55,
        2.0,
        20_000.0,
        faults,
    )
}

fn deep_dry_mixed_layer() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(HATHWYN.elevation, 889.0, 36.4, 7.4)
        .layer(30.0, 45.0, Mixing(7.0))
        .mixed(3450.0, Mixing(6.6))
        .layer(200.0, 1.0, Relative(0.62))
        .layer(2500.0, 7.4, Relative(0.35))
        .layer(3000.0, 7.6, Relative(0.30))
        .layer(1700.0, 7.2, Relative(0.25));
    launch(
        &sheared(stratosphere(atmosphere)),
        66,
        1.0,
        27_000.0,
        Faults::default(),
    )
}

fn capped() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(CORRIDEN.elevation, 970.0, 28.8, 22.4)
        .layer(25.0, 30.0, Mixing(17.4))
        .mixed(700.0, Mixing(17.0))
        .layer(450.0, -13.0, Relative(0.30))
        .layer(2600.0, 8.3, Relative(0.42))
        .layer(2300.0, 7.6, Relative(0.38))
        .layer(3600.0, 7.6, Relative(0.35))
        .layer(2400.0, 7.0, Relative(0.30));
    launch(
        &sheared(stratosphere(atmosphere)),
        77,
        1.0,
        27_000.0,
        Faults::default(),
    )
}

fn elevated_instability() -> Vec<Sample> {
    let atmosphere = Atmosphere::from_ground(LOWMERE.elevation, 984.0, 14.6, 12.2)
        .layer(350.0, -5.5, Relative(0.74))
        .layer(450.0, 2.0, Relative(0.80))
        .layer(300.0, -9.5, Relative(0.86))
        .layer(350.0, 6.2, Relative(0.88))
        .layer(2500.0, 7.4, Relative(0.45))
        .layer(2500.0, 7.2, Relative(0.40))
        .layer(3600.0, 7.3, Relative(0.35))
        .layer(1600.0, 7.0, Relative(0.30));
    launch(
        &sheared(stratosphere(atmosphere)),
        88,
        1.0,
        27_000.0,
        Faults::default(),
    )
}

fn first_part_only() -> Vec<Sample> {
    let atmosphere = plains(DUNMERROW, 952.0, (27.4, 16.8), 1150.0, 12.7);
    launch(&atmosphere, 99, 1.0, 28_000.0, Faults::default())
}

/// Every file of the demo tray, the station table last.
pub fn files() -> Vec<DemoFile> {
    let file = |name, text| DemoFile { name, text };
    vec![
        file(
            "brennick-flats-20240613-00z-temp.txt",
            bulletin(&BRENNICK, &AFTERNOON, &clean_and_unstable(), Parts::All),
        ),
        file(
            "vellmarsh-20240613-00z-columns.csv",
            columns(&VELLMARSH, &AFTERNOON, &biased_hygrometer()),
        ),
        file(
            "sandrel-20240613-00z-columns.csv",
            columns(&SANDREL, &AFTERNOON, &wet_thermometer()),
        ),
        file(
            "orlo-ridge-20240613-00z-station-file.txt",
            station_file(&ORLO, &AFTERNOON, &sloping_moisture()),
        ),
        file(
            "tamsel-creek-20240613-00z-columns.csv",
            columns(&TAMSEL, &AFTERNOON, &lost_in_an_anvil()),
        ),
        file(
            "hathwyn-20240613-00z-temp.txt",
            bulletin(&HATHWYN, &AFTERNOON, &deep_dry_mixed_layer(), Parts::All),
        ),
        file(
            "corriden-field-20240613-00z-temp.txt",
            bulletin(&CORRIDEN, &AFTERNOON, &capped(), Parts::All),
        ),
        file(
            "lowmere-gap-20240613-12z-station-file.txt",
            station_file(&LOWMERE, &NIGHT, &elevated_instability()),
        ),
        file(
            "dunmerrow-20240613-00z-temp-part-a.txt",
            bulletin(&DUNMERROW, &AFTERNOON, &first_part_only(), Parts::OnlyFirst),
        ),
        file("stations.csv", station_table()),
    ]
}

fn station_table() -> String {
    let mut text = "wmo,wigos,icao,name,lat,lon,elevation_m\n".to_owned();
    for station in STATIONS {
        text.push_str(&format!(
            "{},,,{},{},{},{}\n",
            station.wmo, station.name, station.latitude, station.longitude, station.elevation
        ));
    }
    text
}
