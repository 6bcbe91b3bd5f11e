//! Real TEMP bulletins, which are not part of the repository: `DEWBOUND_OPEN_DATA` names the folder that holds them.
//!
//! Expected values were decoded by hand from the raw groups.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod real_files;
mod temp_common;

use dewbound_formats::Loaded;
use dewbound_sounding::{
    Completeness, Level,
    LevelKind::{self, *},
    Position, Sounding,
};
use std::path::{Path, PathBuf};
use temp_common::{Hand, assert_sound, bare, body, compare, hand, poorer, read, said};

const NO: f64 = f64::NAN;
const KNOT: f64 = 1852.0 / 3600.0;

#[test]
fn real_bulletins() {
    real_files::run(
        "the TEMP reader on real bulletins",
        &[
            every_file_loads,
            plains_ascent,
            tropical_highland_ascent,
            winter_ascent,
            first_of_seven,
            repeated_stratosphere,
            drop,
            part_a_only,
            afternoon_specials,
        ],
    );
}

fn text(path: &Path) -> String {
    std::fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// Reads the file whose name starts so.
fn load(folder: &Path, start: &str) -> Loaded {
    let path = files(folder)
        .into_iter()
        .find(|path| name(path).starts_with(start))
        .unwrap_or_else(|| panic!("{start}: not in {}", folder.display()));
    read(&name(&path), &text(&path))
}

fn files(folder: &Path) -> Vec<PathBuf> {
    let folder = folder.join("temp");
    let mut files: Vec<_> = std::fs::read_dir(&folder)
        .unwrap_or_else(|error| panic!("{}: {error}", folder.display()))
        .map(|entry| entry.unwrap().path())
        .collect();
    files.sort();
    files
}

fn name(path: &Path) -> String {
    path.file_name().unwrap().to_string_lossy().into_owned()
}

fn one(folder: &Path, name: &str) -> Sounding {
    let mut loaded = load(folder, name);
    assert_eq!(loaded.soundings.len(), 1, "{name}");
    loaded.soundings.remove(0)
}

fn row(kind: LevelKind, values: [f64; 6]) -> Hand {
    hand(kind, values)
}

/// Beginnings of the notes met in these files; any other is new and wants to be read.
const NOTES: [&str; 8] = [
    "no time: day ",
    "day ",
    "part",
    "groups set aside: ",
    "PPBB: altitudes of winds counted in steps of 1,000 ft",
    "PPDD: altitudes of winds counted in steps of 1,000 ft",
    "TTCC: a wind is given at the 30 hPa level",
    "TTCC: heights kept as coded: ",
];

fn every_file_loads(folder: &Path) {
    let files = files(folder);
    assert_eq!(files.len(), 10);
    let mut soundings = 0;
    for file in files {
        let name = name(&file);
        let text = text(&file);
        let loaded = read(&name, &text);
        assert_sound(&loaded, text.split('\n').count());
        soundings += loaded.soundings.len();
        for sounding in &loaded.soundings {
            assert!(sounding.station.canonical_id().is_some(), "{name}");
            for note in &sounding.notes {
                let known = NOTES.iter().any(|start| note.what.starts_with(start));
                assert!(known, "{name}: {}", note.what);
            }
        }
        no_group_spreads(&name, &text);
    }
    assert_eq!(soundings, 17);
}

/// Every group in turn made unreadable, lost, or doubled: no value is invented.
fn no_group_spreads(name: &str, text: &str) {
    let levels = |text: &str| {
        let loaded = read(name, text);
        let levels = loaded
            .soundings
            .iter()
            .flat_map(|sounding| bare(&sounding.levels));
        levels.collect::<Vec<_>>()
    };
    let before = levels(text);
    for (at, group) in body(text) {
        for fault in ["7x8//", "", &format!("{group} {group}")] {
            let broken = format!("{}{fault}{}", &text[..at], &text[at + group.len()..]);
            for level in levels(&broken) {
                let known = before.iter().any(|old| poorer(&level, old));
                if !known {
                    println!("{name}: {group} at {at} made {fault:?} gave {level:?}");
                }
            }
        }
    }
}

/// Levels of one part, told by the line of its letters and of the next part's.
fn between(sounding: &Sounding, first: usize, last: usize) -> Vec<Level> {
    let inside = |level: &&Level| {
        level
            .line
            .is_some_and(|line| (first..=last).contains(&line))
    };
    sounding.levels.iter().filter(inside).copied().collect()
}

fn plains_ascent(folder: &Path) {
    let sounding = one(folder, "salem");
    let part_a = [
        row(Surface, [1009.0, NO, 22.8, 4.8, 290.0, 6.0]),
        row(Standard, [1000.0, 137.0, 20.6, 3.6, 285.0, 7.0]),
        row(Standard, [925.0, 801.0, 13.6, 1.6, 255.0, 7.0]),
        row(Standard, [850.0, 1505.0, 6.8, -0.2, 210.0, 3.0]),
        row(Standard, [700.0, 3077.0, 1.4, -19.6, 230.0, 23.0]),
        row(Standard, [500.0, 5730.0, -12.9, -33.9, 245.0, 38.0]),
        row(Standard, [400.0, 7390.0, -25.7, -55.7, 250.0, 40.0]),
        row(Standard, [300.0, 9390.0, -43.5, -57.5, 230.0, 45.0]),
        row(Standard, [250.0, 10_600.0, -52.5, -65.5, 235.0, 58.0]),
        row(Standard, [200.0, 12_000.0, -61.7, -72.7, 225.0, 48.0]),
        row(Standard, [150.0, 13_800.0, -56.5, NO, 240.0, 35.0]),
        row(Standard, [100.0, 16_370.0, -56.7, NO, 225.0, 31.0]),
        row(Tropopause, [185.0, NO, -62.9, -75.9, 230.0, 51.0]),
        row(MaximumWind, [221.0, NO, NO, NO, 235.0, 63.0]),
    ];
    compare(&between(&sounding, 1, 5), &part_a, KNOT);
    let winds = [
        row(Surface, [1009.0, NO, NO, NO, 290.0, 6.0]),
        row(SignificantWind, [NO, 304.8, NO, NO, 275.0, 8.0]),
        row(SignificantWind, [NO, 609.6, NO, NO, 260.0, 8.0]),
    ];
    compare(&between(&sounding, 15, 17)[..3], &winds, KNOT);
    let part_c = [
        row(Standard, [70.0, 18_640.0, -57.1, NO, 200.0, 17.0]),
        row(Standard, [50.0, 20_780.0, -54.5, NO, 340.0, 4.0]),
        row(Standard, [30.0, 24_070.0, -49.7, NO, 20.0, 10.0]),
        row(Standard, [20.0, 26_750.0, -47.1, NO, 55.0, 10.0]),
        row(Standard, [10.0, 31_450.0, -33.9, NO, 70.0, 17.0]),
    ];
    compare(&between(&sounding, 18, 19), &part_c, KNOT);
    let part_b = between(&sounding, 6, 14);
    // 00, five runs from 11 to 99, and 11 to 66: counted off the message.
    assert_eq!(part_b.len(), 52);
    let some = [
        row(SignificantThermal, [739.0, NO, 2.8, -37.2, NO, NO]),
        row(SignificantThermal, [102.0, NO, -56.7, NO, NO, NO]),
    ];
    compare(&[part_b[11], part_b[51]], &some, KNOT);
    assert!(said(&sounding).contains("part D not received"));
}

fn tropical_highland_ascent(folder: &Path) {
    let sounding = one(folder, "sao_paulo");
    let part_a = [
        row(Surface, [937.0, NO, 21.6, 19.0, 170.0, 6.0]),
        row(Standard, [1000.0, 151.0, NO, NO, NO, NO]),
        row(Standard, [925.0, 834.0, 20.8, 18.5, 145.0, 9.0]),
        row(Standard, [850.0, 1560.0, 16.2, 15.9, 75.0, 11.0]),
        row(Standard, [700.0, 3196.0, 8.6, 4.4, 195.0, 6.0]),
        row(Standard, [500.0, 5900.0, -7.1, -14.1, 265.0, 1.0]),
        row(Standard, [400.0, 7610.0, -16.9, -31.9, 270.0, 15.0]),
        row(Standard, [300.0, 9700.0, -33.3, -51.3, 245.0, 18.0]),
        row(Standard, [250.0, 10_950.0, -44.3, -54.3, 280.0, 26.0]),
        row(Standard, [200.0, 12_410.0, -55.5, -63.5, 295.0, 22.0]),
        row(Standard, [150.0, 14_190.0, -66.9, -79.9, 275.0, 38.0]),
        row(Standard, [100.0, 16_570.0, -72.3, -88.3, 310.0, 21.0]),
        row(Tropopause, [110.0, NO, -75.3, -87.3, 300.0, 27.0]),
    ];
    compare(&between(&sounding, 1, 1), &part_a, KNOT);
    let part_c = [
        row(Standard, [70.0, 18_660.0, -74.9, -90.9, 285.0, 9.0]),
        row(Standard, [50.0, 20_660.0, -67.3, -91.3, 85.0, 22.0]),
        row(Standard, [30.0, 23_800.0, -61.1, -92.1, 90.0, 31.0]),
    ];
    compare(&between(&sounding, 3, 3), &part_c, KNOT);
    let part_d = [
        row(SignificantThermal, [70.4, NO, -75.3, -90.3, NO, NO]),
        row(SignificantThermal, [61.2, NO, -69.1, -90.1, NO, NO]),
    ];
    compare(&between(&sounding, 4, 4)[..2], &part_d, KNOT);
    assert_eq!(sounding.source.parts.len(), 4);
    assert_eq!(sounding.completeness, Completeness::AllParts);
}

fn winter_ascent(folder: &Path) {
    let sounding = one(folder, "jokioinen");
    let part_a = [
        row(Surface, [992.0, NO, 1.6, 0.8, 240.0, 5.0]),
        row(Standard, [1000.0, 38.0, NO, NO, NO, NO]),
        row(Standard, [925.0, 660.0, -3.1, -3.8, 245.0, 9.0]),
        row(Standard, [850.0, 1325.0, -6.5, -10.0, 280.0, 3.0]),
        row(Standard, [700.0, 2813.0, -17.5, -24.5, 290.0, 13.0]),
        row(Standard, [500.0, 5240.0, -36.9, -42.9, 245.0, 9.0]),
        row(Standard, [400.0, 6740.0, -48.3, -55.3, 215.0, 10.0]),
        row(Standard, [300.0, 8650.0, -47.7, -77.7, 230.0, 16.0]),
        row(Standard, [250.0, 9850.0, -46.1, -81.1, 235.0, 24.0]),
        row(Standard, [200.0, 11_320.0, -50.1, -84.1, 225.0, 28.0]),
        row(Standard, [150.0, 13_200.0, -50.5, -84.5, 240.0, 31.0]),
        row(Standard, [100.0, 15_820.0, -51.3, -84.3, 225.0, 32.0]),
        row(Tropopause, [411.0, NO, -48.3, -51.8, 235.0, 10.0]),
        row(Tropopause, [210.0, NO, -50.1, -84.1, 220.0, 21.0]),
    ];
    compare(&between(&sounding, 1, 4), &part_a, KNOT);
    let time = |time: Option<jiff::Timestamp>| time.unwrap().to_string();
    assert_eq!(time(sounding.times.nominal), "2006-04-10T12:00:00Z");
    assert_eq!(time(sounding.times.launch), "2006-04-10T11:30:00Z");
}

fn first_of_seven(folder: &Path) {
    let loaded = load(folder, "A_USJP01");
    assert_eq!(loaded.soundings.len(), 7);
    assert!(loaded.notes.is_empty());
    let sounding = &loaded.soundings[0];
    let expect = [
        row(Surface, [1011.0, NO, 7.0, -1.0, 260.0, 6.0]),
        row(Standard, [1000.0, 97.0, 6.0, -3.0, 260.0, 10.0]),
        row(Standard, [925.0, 729.0, -0.1, -5.1, 275.0, 14.0]),
        row(Standard, [850.0, 1397.0, -6.3, -7.0, 275.0, 10.0]),
        row(Standard, [700.0, 2886.0, -12.3, -26.3, 320.0, 25.0]),
        row(Standard, [500.0, 5380.0, -26.5, -43.5, 320.0, 60.0]),
        row(Standard, [400.0, 6960.0, -37.1, -60.1, 315.0, 66.0]),
        row(Standard, [300.0, 8880.0, -52.1, NO, 305.0, 78.0]),
        row(Standard, [250.0, 10_040.0, -58.7, NO, 305.0, 74.0]),
        row(Standard, [200.0, 11_470.0, -52.7, NO, 295.0, 49.0]),
        row(Standard, [150.0, 13_330.0, -51.1, NO, 270.0, 47.0]),
        row(Standard, [100.0, 15_950.0, -53.1, NO, 280.0, 33.0]),
        row(Tropopause, [248.0, NO, -58.7, NO, 305.0, 74.0]),
        row(MaximumWind, [333.0, NO, NO, NO, 300.0, 82.0]),
    ];
    compare(&sounding.levels, &expect, KNOT);
    let time = |time: Option<jiff::Timestamp>| time.unwrap().to_string();
    assert_eq!(time(sounding.times.nominal), "2019-11-05T00:00:00Z");
    assert_eq!(time(sounding.times.launch), "2019-11-04T23:30:00Z");
    // The last one's maximum wind: 26622 is 265 degrees, 122 kt.
    let last = loaded.soundings[6].levels.last().unwrap().wind.unwrap();
    assert!((last.speed / KNOT - 122.0).abs() < 1e-9 && last.direction == 265.0);
}

fn repeated_stratosphere(folder: &Path) {
    let sounding = one(folder, "tallahassee");
    let part_c = [
        row(Standard, [70.0, 18_810.0, -66.7, -73.7, 95.0, 20.0]),
        row(Standard, [50.0, 20_870.0, -60.3, -68.3, 85.0, 36.0]),
        row(Standard, [30.0, 21_870.0, -60.3, -68.3, 85.0, 36.0]),
        row(Standard, [20.0, 26_870.0, -60.3, -68.3, 85.0, 36.0]),
        row(Standard, [10.0, 32_870.0, -60.3, -68.3, 85.0, 36.0]),
    ];
    compare(&between(&sounding, 20, 21), &part_c, KNOT);
    assert_eq!(sounding.source.parts.len(), 6);
    assert!(said(&sounding).contains("heights kept as coded"));
}

fn drop(folder: &Path) {
    let loaded = load(folder, "noaa_dropsonde");
    let sounding = &loaded.soundings[0];
    assert_eq!(
        sounding.station.position,
        Some(Position {
            latitude: 29.4,
            longitude: -86.1
        })
    );
    assert_eq!(sounding.station.wmo, None);
    let part_a = [
        row(Surface, [1001.0, NO, 26.6, 24.9, 130.0, 49.0]),
        row(Standard, [1000.0, 11.0, 26.4, 24.7, 130.0, 49.0]),
        row(Standard, [925.0, 697.0, 22.4, 22.0, 140.0, 58.0]),
        row(Standard, [850.0, 1434.0, 20.2, 17.5, 130.0, 48.0]),
    ];
    compare(&between(sounding, 1, 7), &part_a, KNOT);
    assert_eq!(sounding.levels.len(), 18);
    assert_eq!(sounding.completeness, Completeness::AllParts);
    let launch = sounding.times.launch.unwrap().to_string();
    assert_eq!(launch, "2026-07-21T13:19:00Z");
    assert_eq!(
        loaded.notes.len(),
        0,
        "a lone semicolon at the end is no news"
    );
}

fn part_a_only(folder: &Path) {
    let sounding = one(folder, "marion_island");
    let ends = [
        row(Surface, [1011.0, NO, 10.4, 7.7, 340.0, 19.0]),
        row(Standard, [100.0, 16_250.0, -61.3, -110.3, 315.0, 46.0]),
    ];
    compare(&[sounding.levels[0], sounding.levels[11]], &ends, KNOT);
    assert_eq!(sounding.levels.len(), 12);
    assert_eq!(sounding.completeness, Completeness::LaterPartsNotReceived);
}

fn afternoon_specials(folder: &Path) {
    let loaded = load(folder, "usus04");
    assert_eq!(loaded.soundings.len(), 2);
    let expect = [
        row(Surface, [834.0, NO, 17.2, 11.2, 225.0, 7.0]),
        row(Standard, [1000.0, 31.0, NO, NO, NO, NO]),
        row(Standard, [925.0, 718.0, NO, NO, NO, NO]),
        row(Standard, [850.0, 1452.0, NO, NO, NO, NO]),
        row(Standard, [700.0, 3068.0, 3.6, 0.2, 230.0, 13.0]),
    ];
    compare(&loaded.soundings[0].levels[..5], &expect, KNOT);
}
