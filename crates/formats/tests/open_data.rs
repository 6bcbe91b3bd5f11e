//! Real ascents, which are not part of the repository: `DEWBOUND_OPEN_DATA` names the folder that holds them.
//!
//! Expected values were read off the files by eye.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod real_files;
mod support;

use approx::assert_relative_eq;
use dewbound_formats::{Loaded, ReadOptions, read_path};
use dewbound_sounding::{HumidityReported, LevelKind, Note, Profile, Sounding};
use std::path::{Path, PathBuf};

#[test]
fn real_files() {
    real_files::run(
        "the readers on real files",
        &[
            every_table_loads,
            every_station_file_loads,
            fine_tables,
            whole_flights,
            drop_and_heights_above_ground,
            station_files,
            damaged_files,
        ],
    );
}

fn files(folder: &Path) -> Vec<PathBuf> {
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .unwrap_or_else(|error| panic!("{}: {error}", folder.display()))
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_none_or(|extension| extension != "rst"))
        .collect();
    files.sort();
    assert!(!files.is_empty());
    files
}

fn load(path: &Path) -> Loaded {
    read_path(path, &ReadOptions::default()).unwrap()
}

fn one(folder: &Path, name: &str) -> Sounding {
    let mut loaded = load(&folder.join(name));
    assert_eq!(loaded.soundings.len(), 1);
    loaded.soundings.pop().unwrap()
}

fn whats(notes: &[Note]) -> Vec<&str> {
    notes.iter().map(|note| note.what.as_str()).collect()
}

/// What must hold of any sounding.
fn check_sane(sounding: &Sounding) {
    assert!(!sounding.levels.is_empty());
    assert_eq!(sounding.source.parts.len(), 1);
    for level in &sounding.levels {
        support::check_finite(level);
        let within = |value: Option<f64>, least: f64, most: f64| {
            value.is_none_or(|value| (least..=most).contains(&value))
        };
        assert!(within(level.pressure, 500.0, 107_000.0), "{level:?}");
        assert!(within(level.temperature, 180.0, 320.0), "{level:?}");
        assert!(within(level.dewpoint, 150.0, 305.0), "{level:?}");
        assert!(within(level.height, -100.0, 40_000.0), "{level:?}");
    }
}

/// Beginnings of the notes met in these tables; any other is new and wants to be read.
const NOTES: [&str; 9] = [
    "`#` lines not used: ",
    "columns not used: status, flag",
    "latitude and longitude are both ",
    "`IUS` in the site's name",
    "times start at -415.8 s",
    "the station's position is that of the lowest row, 70.26097, 8.9812",
    "the row holds no measurement",
    "heights are above ground and the ground's own height is not known",
    "the `#` lines or the station table put the station at 6.90583, 88.20556",
];

fn every_table_loads(folder: &Path) {
    let files = files(&folder.join("csv"));
    assert_eq!(files.len(), 24);
    for file in files {
        let loaded = load(&file);
        assert_eq!(loaded.notes, []);
        let [sounding] = loaded.soundings.as_slice() else {
            panic!("{}", file.display());
        };
        check_sane(sounding);
        assert!(sounding.times.valid().is_some());
        assert!(sounding.station.canonical_id().is_some());
        assert_eq!(
            sounding.humidity_reported,
            HumidityReported::RelativeHumidity
        );
        for what in whats(&sounding.notes) {
            let known = NOTES.iter().any(|note| what.starts_with(note))
                || what.contains("on the way down")
                || what.contains("before the launch");
            assert!(known, "{}: {what}", file.display());
        }
        let (profile, _) = Profile::received(sounding);
        assert!(profile.environment().is_ok(), "{}", file.display());
    }
}

fn every_station_file_loads(folder: &Path) {
    let counts: Vec<_> = files(&folder.join("igra"))
        .iter()
        .map(|file| {
            let loaded = load(file);
            loaded.soundings.iter().for_each(check_sane);
            (loaded.soundings.len(), loaded.notes.len())
        })
        .collect();
    // Winds of 1948; five records of which the last repeats; two records and a header cut off.
    assert_eq!(counts, [(130, 0), (4, 1), (2, 1)]);
}

fn fine_tables(folder: &Path) {
    let csv = folder.join("csv");
    let green = one(&csv, "GREEN_201505311536.csv");
    assert_eq!(green.station.text.as_deref(), Some("GREEN"));
    assert_eq!(green.station.elevation, Some(680.0));
    assert_eq!(green.times.launch, "2015-05-31T15:36:00Z".parse().ok());
    assert_eq!(green.levels.len(), 1021);
    let [first, .., last] = green.levels.as_slice() else {
        panic!();
    };
    assert_eq!(first.kind, LevelKind::Surface);
    assert_relative_eq!(first.dewpoint.unwrap(), 273.15 + 10.9);
    assert_relative_eq!(last.pressure.unwrap(), 62_810.0);

    let albuquerque = one(&csv, "GTS_BUFR_KABQ_202305221104_01_SONDE.csv");
    let station = &albuquerque.station;
    assert_eq!(station.wmo.as_deref(), Some("72365"));
    assert_eq!(station.icao.as_deref(), Some("KABQ"));
    assert_eq!(station.name.as_deref(), Some("Albuquerque, NM"));
    assert_eq!(station.elevation, Some(1619.0));
    assert_eq!(albuquerque.levels.len(), 6008);
    assert_eq!(albuquerque.levels.last().unwrap().line, Some(6015));

    // The last row stands out of order; it is kept as received.
    let nairobi = one(&csv, "GTS_BUFR_Nairobi_201908092333_01_SONDE.csv");
    let last = nairobi.levels.last().unwrap();
    assert_eq!((last.elapsed, last.temperature), (Some(2520.0), None));
}

fn whole_flights(folder: &Path) {
    let csv = folder.join("csv");
    // The launch stands in line 251; 21:31:12 is the last row at 40.7 hPa.
    let merauke = one(&csv, "tropics_Merauke_2012011620.csv");
    let [first, .., last] = merauke.levels.as_slice() else {
        panic!();
    };
    assert_eq!((first.line, first.elapsed), (Some(251), Some(0.0)));
    assert_relative_eq!(last.pressure.unwrap(), 4_070.0);
    assert_eq!(merauke.times.launch, "2012-01-16T20:17:56Z".parse().ok());
    assert_eq!(merauke.station.text.as_deref(), Some("Merauke"));
    let whats = whats(&merauke.notes);
    assert!(
        whats
            .iter()
            .any(|what| what.starts_with("248 rows (lines 3 to 250)")),
        "{whats:?}"
    );

    // Its `#` line puts the station into the Bay of Bengal.
    let colombo = one(&csv, "tropics_Colombo_2011100304.csv");
    assert_relative_eq!(colombo.station.position.unwrap().longitude, 79.87231);
}

fn drop_and_heights_above_ground(folder: &Path) {
    let csv = folder.join("csv");
    let drop = one(&csv, "caesar_dropsonde_20240228T125201.csv");
    assert_eq!(drop.levels[0].elapsed, Some(415.8));
    assert_eq!(drop.levels[0].kind, LevelKind::Other);
    assert_eq!(drop.station.elevation, None);
    let gault = one(&csv, "wintremix_202202030100.McGill-Gault.csv");
    assert_eq!(gault.times.nominal, "2022-02-03T01:00:00Z".parse().ok());
    assert_eq!(gault.times.launch, None);
    assert!(gault.levels.iter().all(|level| level.height.is_none()));
}

fn station_files(folder: &Path) {
    let igra = folder.join("igra");
    let loaded = load(&igra.join("USM00070026-data.txt"));
    let [first, second] = loaded.soundings.as_slice() else {
        panic!();
    };
    assert_eq!(first.station.wmo.as_deref(), Some("70026"));
    assert_eq!(first.station.elevation, Some(12.0));
    assert_eq!(first.times.launch, "2010-05-31T23:03:00Z".parse().ok());
    assert_eq!(first.times.nominal, "2010-06-01T00:00:00Z".parse().ok());
    assert_eq!(second.times.launch, "2010-06-01T11:00:00Z".parse().ok());
    assert_eq!((first.levels.len(), second.levels.len()), (158, 157));
    assert_eq!(first.temperature_step, 0.1);
    // Line 4: 97290 Pa, 309 m, -2.4 degC, 94.9 %, 0.7 degC depression, one minute after launch.
    let level = first.levels[2];
    assert_relative_eq!(level.pressure.unwrap(), 97_290.0);
    assert_relative_eq!(level.temperature.unwrap(), 270.75, epsilon = 1e-9);
    assert_relative_eq!(level.dewpoint.unwrap(), 270.05, epsilon = 1e-9);
    assert_relative_eq!(level.relative_humidity.unwrap(), 0.949, epsilon = 1e-9);
    assert_eq!(level.elapsed, Some(60.0));
    // Line 60: a height without pressure, two minutes after launch.
    let level = first.levels[58];
    assert_eq!(level.line, Some(60));
    assert_eq!((level.pressure, level.height), (None, Some(547.0)));
    assert_eq!(level.elapsed, Some(120.0));

    let loaded = load(&igra.join("SWM00002527_observation_multi.txt"));
    let first = &loaded.soundings[0];
    assert_eq!(first.times.launch, "2017-12-31T23:30:00Z".parse().ok());
    assert_eq!(first.humidity_reported, HumidityReported::DewPoint);
    assert_eq!(first.temperature_step, 0.2);
    assert_eq!(loaded.soundings[1].times.nominal, None);
    assert!(loaded.soundings[1].times.day_assumed);
    assert!(loaded.notes[0].what.contains("repeats the one at line 168"));
}

fn damaged_files(folder: &Path) {
    for (name, seed) in [
        ("csv/GTS_BUFR_HANZHONG_201910251115_62_SONDE.csv", 7),
        ("igra/SWM00002527_observation_multi.txt", 8),
        ("igra/ASM00094703-data.txt.zip", 9),
    ] {
        let bytes = std::fs::read(folder.join(name)).unwrap();
        support::damage(&bytes, seed, 50);
    }
}
