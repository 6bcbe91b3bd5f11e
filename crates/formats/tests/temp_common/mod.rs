//! Invented reports of invented stations, for every test of the TEMP reader.
#![allow(dead_code)] // each test file uses its own part

use dewbound_formats::{Loaded, ReadOptions, temp};
use dewbound_sounding::{Level, LevelKind, Sounding};

/// All parts of one ascent, knots, altitudes in thousands of feet.
pub const VALE: &str = "\
USXX11 ABCD 060000
TTAA 56001 74999 99004 26466 19012 00043 25865 19514 92718 19260
21022 85435 14259 22531 70042 05061 24038 50570 11373 25555 40737
23980 25570 30940 39163 25595 25063 49362 26110 20206 57360 26622
15386 62158 26580 10637 60959 27035 88193 58961 26625 77188 26636
41822 31313 46108 82311 51515 10164 00010=
USXX21 ABCD 060000
TTBB 56008 74999 00004 26466 11968 23065 22902 17258 33871 15660
44789 11880 55655 00150 66612 00356 77540 07706 88431 20371 99300
39163 11188 58561 22100 60959 31313 46108 82311 41414 21701=
PPBB 56008 74999 90012 19012 20018 20524 90346 21026 21530 22533
9205/ 24542 25056 950// 26560=
USXX31 ABCD 060000
TTCC 56003 74999 70860 58564 27521 50073 557// 28015 30401 513//
29510 20667 469// 88999 77999 31313 46108 82311=
TTDD 5600/ 74999 11842 59764 22465 561// 33201 469// 31313 46108
82311=
PPDD 56008 74999 95579 27028 27525 28020 96247 28016 28512 29010=
";

/// A station above 3,000 m: m/s, levels below the ground, no winds above 300 hPa, winds by pressure.
pub const ALM: &str = "\
TTAA 23123 00451 99712 15464 09004 00102 ///// ///// 92779 /////
///// 85491 ///// ///// 70103 10256 10006 50580 08756 12011 40749
19362 12515 30957 34564 13020 25082 439// 20228 551// 15405 669//
10648 725// 88104 731// ///// 77999 31313 47608 81130=
TTBB 2312/ 00451 00712 15464 11689 10058 22533 05900 33420 173//
44/// ///// 55371 24761 66128 70159 21212 00712 09004 11655 10507
22530 11510 33301 13020 31313 47608 81130 41414 43308=
";

/// Reads a text under a name that dates it.
pub fn read(name: &str, text: &str) -> Loaded {
    temp::read(name, text, &ReadOptions::default())
}

/// The only sounding of a text.
#[track_caller]
pub fn only(text: &str) -> Sounding {
    let mut loaded = read("20310630.txt", text);
    assert_eq!(loaded.soundings.len(), 1, "{:?}", loaded.notes);
    loaded.soundings.remove(0)
}

/// Everything the notes of a sounding say.
pub fn said(sounding: &Sounding) -> String {
    sounding
        .notes
        .iter()
        .map(|note| format!("{}: {}\n", note.what, note.why))
        .collect()
}

/// A level decoded by hand, in the units of the message: hPa, m, degrees C, degrees, and knots or m/s.
#[derive(Debug, Clone, Copy)]
pub struct Hand {
    pub kind: LevelKind,
    pub hectopascals: Option<f64>,
    pub metres: Option<f64>,
    pub temperature: Option<f64>,
    pub dewpoint: Option<f64>,
    pub wind: Option<(f64, f64)>,
}

/// Kind, hPa, m, degrees C twice, direction and speed; `NAN` where the message has solidi or nothing.
pub fn hand(kind: LevelKind, values: [f64; 6]) -> Hand {
    let [
        hectopascals,
        metres,
        temperature,
        dewpoint,
        direction,
        speed,
    ] = values.map(|value| (!value.is_nan()).then_some(value));
    Hand {
        kind,
        hectopascals,
        metres,
        temperature,
        dewpoint,
        wind: direction.zip(speed),
    }
}

/// Compares levels read with levels decoded by hand.
#[track_caller]
pub fn compare(found: &[Level], expect: &[Hand], unit: f64) {
    let same = |found: Option<f64>, expect: Option<f64>| match (found, expect) {
        (Some(found), Some(expect)) => (found - expect).abs() < 1e-6,
        (None, None) => true,
        _ => false,
    };
    for (index, (level, hand)) in found.iter().zip(expect).enumerate() {
        let celsius = |kelvin: Option<f64>| kelvin.map(|kelvin| kelvin - 273.15);
        let fits = level.kind == hand.kind
            && same(level.pressure, hand.hectopascals.map(|p| p * 100.0))
            && same(level.height, hand.metres)
            && same(celsius(level.temperature), hand.temperature)
            && same(celsius(level.dewpoint), hand.dewpoint)
            && same(
                level.wind.map(|wind| wind.direction),
                hand.wind.map(|(d, _)| d),
            )
            && same(
                level.wind.map(|wind| wind.speed / unit),
                hand.wind.map(|(_, s)| s),
            );
        assert!(fits, "level {index}: read {level:?}, by hand {hand:?}");
    }
    assert_eq!(found.len(), expect.len(), "number of levels");
}

/// What must hold of anything read, however broken the text.
#[track_caller]
pub fn assert_sound(loaded: &Loaded, lines: usize) {
    for (index, sounding) in loaded.soundings.iter().enumerate() {
        assert_eq!(sounding.source.index, index);
        assert!(!sounding.source.parts.is_empty());
        assert!(!sounding.levels.is_empty());
        for level in &sounding.levels {
            let within = |value: Option<f64>, low: f64, high: f64| {
                assert!(
                    value.is_none_or(|value| value.is_finite() && value >= low && value <= high),
                    "{level:?}"
                );
            };
            within(level.pressure, 1.0, 110_000.0);
            within(level.height, -1_000.0, 100_000.0);
            within(level.temperature, 173.0, 373.1);
            within(level.dewpoint, 120.0, 373.1);
            within(level.wind.map(|wind| wind.direction), 0.0, 360.0);
            within(level.wind.map(|wind| wind.speed), 0.0, 500.0);
            assert!(level.line.is_some_and(|line| (1..=lines).contains(&line)));
            if let (Some(temperature), Some(dewpoint)) = (level.temperature, level.dewpoint) {
                assert!(dewpoint <= temperature, "{level:?}");
            }
        }
    }
    let notes = loaded
        .soundings
        .iter()
        .flat_map(|sounding| &sounding.notes)
        .chain(&loaded.notes);
    for note in notes {
        assert!(!note.what.is_empty());
    }
}

/// Levels without their lines.
pub fn bare(levels: &[Level]) -> Vec<Level> {
    let bare = |level: &Level| Level {
        line: None,
        ..*level
    };
    levels.iter().map(bare).collect()
}

/// Whether every value of `after` is one of `before`.
pub fn poorer(after: &Level, before: &Level) -> bool {
    let kept = |after: Option<f64>, before: Option<f64>| after.is_none() || after == before;
    after.kind == before.kind
        && kept(after.pressure, before.pressure)
        && kept(after.height, before.height)
        && kept(after.temperature, before.temperature)
        && kept(after.dewpoint, before.dewpoint)
        && (after.wind.is_none() || after.wind == before.wind)
}

/// Groups of reports as (position, text), heading lines and the groups that identify a part left out.
pub fn body(text: &str) -> Vec<(usize, &str)> {
    let mut groups = Vec::new();
    let mut header = 0;
    let mut at = 0;
    for piece in text.split_inclusive([' ', '\r', '\n', '=']) {
        let group = piece.trim_end_matches([' ', '\r', '\n', '=']);
        match group.len() {
            4 if group.starts_with("XX") => header = 4,
            4 => header = 2,
            5 if header == 0 => groups.push((at, group)),
            5 => header -= 1,
            _ => {}
        }
        at += piece.len();
    }
    groups
}
