//! The TEMP reader on invented reports, decoded by hand group by group.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod temp_common;

use dewbound_formats::{ReadOptions, temp};
use dewbound_sounding::{
    Completeness, HumidityReported,
    LevelKind::{self, *},
    Place, Position,
};
use jiff::civil::date;
use temp_common::{ALM, Hand, VALE, bare, compare, hand, only, read, said};

const NO: f64 = f64::NAN;
const KNOT: f64 = 1852.0 / 3600.0;

fn row(kind: LevelKind, values: [f64; 6]) -> Hand {
    hand(kind, values)
}

/// Every group of the invented ascent, decoded by hand.
#[test]
fn all_parts_of_one_ascent() {
    let sounding = only(VALE);
    let expect = [
        // TTAA: 99004 is 1,004 hPa; 26466 is 26.4 less 16; 19012 is 190 degrees 12 kt.
        row(Surface, [1004.0, NO, 26.4, 10.4, 190.0, 12.0]),
        row(Standard, [1000.0, 43.0, 25.8, 10.8, 195.0, 14.0]),
        row(Standard, [925.0, 718.0, 19.2, 9.2, 210.0, 22.0]),
        row(Standard, [850.0, 1435.0, 14.2, 5.2, 225.0, 31.0]),
        row(Standard, [700.0, 3042.0, 5.0, -6.0, 240.0, 38.0]),
        row(Standard, [500.0, 5700.0, -11.3, -34.3, 255.0, 55.0]),
        row(Standard, [400.0, 7370.0, -23.9, -53.9, 255.0, 70.0]),
        row(Standard, [300.0, 9400.0, -39.1, -52.1, 255.0, 95.0]),
        row(Standard, [250.0, 10_630.0, -49.3, -61.3, 260.0, 110.0]),
        row(Standard, [200.0, 12_060.0, -57.3, -67.3, 265.0, 122.0]),
        row(Standard, [150.0, 13_860.0, -62.1, -70.1, 265.0, 80.0]),
        row(Standard, [100.0, 16_370.0, -60.9, -69.9, 270.0, 35.0]),
        row(Tropopause, [193.0, NO, -58.9, -69.9, 265.0, 125.0]),
        row(MaximumWind, [188.0, NO, NO, NO, 265.0, 136.0]),
        // TTBB
        row(Surface, [1004.0, NO, 26.4, 10.4, NO, NO]),
        row(SignificantThermal, [968.0, NO, 23.0, 8.0, NO, NO]),
        row(SignificantThermal, [902.0, NO, 17.2, 9.2, NO, NO]),
        row(SignificantThermal, [871.0, NO, 15.6, 5.6, NO, NO]),
        row(SignificantThermal, [789.0, NO, 11.8, -18.2, NO, NO]),
        row(SignificantThermal, [655.0, NO, -0.1, -5.1, NO, NO]),
        row(SignificantThermal, [612.0, NO, -0.3, -6.3, NO, NO]),
        row(SignificantThermal, [540.0, NO, -7.7, -8.3, NO, NO]),
        row(SignificantThermal, [431.0, NO, -20.3, -41.3, NO, NO]),
        row(SignificantThermal, [300.0, NO, -39.1, -52.1, NO, NO]),
        row(SignificantThermal, [188.0, NO, -58.5, -69.5, NO, NO]),
        row(SignificantThermal, [100.0, NO, -60.9, -69.9, NO, NO]),
        // PPBB: 90012 is the ground, 1,000 and 2,000 ft; the ground takes the pressure of TTAA.
        row(Surface, [1004.0, NO, NO, NO, 190.0, 12.0]),
        row(SignificantWind, [NO, 304.8, NO, NO, 200.0, 18.0]),
        row(SignificantWind, [NO, 609.6, NO, NO, 205.0, 24.0]),
        row(SignificantWind, [NO, 914.4, NO, NO, 210.0, 26.0]),
        row(SignificantWind, [NO, 1219.2, NO, NO, 215.0, 30.0]),
        row(SignificantWind, [NO, 1828.8, NO, NO, 225.0, 33.0]),
        row(SignificantWind, [NO, 6096.0, NO, NO, 245.0, 42.0]),
        row(SignificantWind, [NO, 7620.0, NO, NO, 250.0, 56.0]),
        row(SignificantWind, [NO, 15_240.0, NO, NO, 265.0, 60.0]),
        // TTCC: winds up to 30 hPa (last figure 3), none at 20.
        row(Standard, [70.0, 18_600.0, -58.5, -72.5, 275.0, 21.0]),
        row(Standard, [50.0, 20_730.0, -55.7, NO, 280.0, 15.0]),
        row(Standard, [30.0, 24_010.0, -51.3, NO, 295.0, 10.0]),
        row(Standard, [20.0, 26_670.0, -46.9, NO, NO, NO]),
        // TTDD: tenths of a hectopascal.
        row(SignificantThermal, [84.2, NO, -59.7, -73.7, NO, NO]),
        row(SignificantThermal, [46.5, NO, -56.1, NO, NO, NO]),
        row(SignificantThermal, [20.1, NO, -46.9, NO, NO, NO]),
        // PPDD: 55, 57, 59, 62, 64 and 67 thousand feet.
        row(SignificantWind, [NO, 16_764.0, NO, NO, 270.0, 28.0]),
        row(SignificantWind, [NO, 17_373.6, NO, NO, 275.0, 25.0]),
        row(SignificantWind, [NO, 17_983.2, NO, NO, 280.0, 20.0]),
        row(SignificantWind, [NO, 18_897.6, NO, NO, 280.0, 16.0]),
        row(SignificantWind, [NO, 19_507.2, NO, NO, 285.0, 12.0]),
        row(SignificantWind, [NO, 20_421.6, NO, NO, 290.0, 10.0]),
    ];
    compare(&sounding.levels, &expect, KNOT);
    assert_eq!(sounding.station.wmo.as_deref(), Some("74999"));
    assert_eq!(sounding.completeness, Completeness::AllParts);
    assert_eq!(sounding.humidity_reported, HumidityReported::DewPoint);
    assert_eq!(sounding.temperature_step, 0.2);
    assert_eq!(sounding.heights_derived, Some(true));
    assert_eq!(sounding.source.format, "TEMP");
    assert_eq!(sounding.source.parts.len(), 6);
    let lines: Vec<_> = sounding.levels.iter().map(|level| level.line).collect();
    assert_eq!(lines[0], Some(2));
    assert_eq!(lines[2], Some(2), "925 hPa starts at the end of line 2");
    assert_eq!(lines[14], Some(8));
    assert_eq!(lines[35], Some(14));
    // The date, what was set aside, and the altitude unit of both wind parts: nothing else to say.
    assert_eq!(sounding.notes.len(), 4, "{}", said(&sounding));
    assert!(said(&sounding).contains("51515 10164 00010 (regional)"));
    assert!(said(&sounding).contains("1,000 ft"));
}

#[test]
fn day_and_hour_are_dated_by_the_name() {
    let loaded = read("vale_20310607_01.txt", VALE);
    let sounding = &loaded.soundings[0];
    assert_eq!(
        sounding.times.nominal.unwrap().to_string(),
        "2031-06-06T00:00:00Z"
    );
    // 82311: 23:11 on the evening before.
    assert_eq!(
        sounding.times.launch.unwrap().to_string(),
        "2031-06-05T23:11:00Z"
    );
    assert!(sounding.times.assumed);
    assert!(said(sounding).contains("file's name (2031-06-07)"));
}

#[test]
fn the_date_given_comes_before_the_file_date_and_after_the_name() {
    let options = ReadOptions {
        as_of: Some(date(2030, 3, 5)),
        modified: Some("2029-01-06T10:00:00Z".parse().unwrap()),
        stations: None,
    };
    let nominal = |name: &str, options: &ReadOptions| {
        let sounding = temp::read(name, VALE, options).soundings.remove(0);
        (
            sounding.times.nominal.map(|time| time.to_string()),
            said(&sounding),
        )
    };
    let (time, notes) = nominal("vale.txt", &options);
    assert_eq!(time.as_deref(), Some("2030-02-06T00:00:00Z"));
    assert!(notes.contains("the date given (2030-03-05)") && notes.contains("27 days before"));
    let (time, _) = nominal("vale_20310607.txt", &options);
    assert_eq!(time.as_deref(), Some("2031-06-06T00:00:00Z"));
    let modified = ReadOptions {
        as_of: None,
        ..options
    };
    let (time, notes) = nominal("vale.txt", &modified);
    assert_eq!(time.as_deref(), Some("2029-01-06T00:00:00Z"));
    assert!(notes.contains("the file's own date (2029-01-06)"));
    let (time, notes) = nominal("vale.txt", &ReadOptions::default());
    assert_eq!(time, None);
    assert!(notes.contains("--as-of"));
}

/// Levels below the ground, m/s, winds only up to 300 hPa, a gap and winds by pressure; all by hand.
#[test]
fn high_station() {
    let sounding = only(ALM);
    let expect = [
        row(Surface, [712.0, NO, 15.4, 1.4, 90.0, 4.0]),
        row(Standard, [1000.0, 102.0, NO, NO, NO, NO]),
        row(Standard, [925.0, 779.0, NO, NO, NO, NO]),
        row(Standard, [850.0, 1491.0, NO, NO, NO, NO]),
        row(Standard, [700.0, 3103.0, 10.2, 4.2, 100.0, 6.0]),
        row(Standard, [500.0, 5800.0, -8.7, -14.7, 120.0, 11.0]),
        row(Standard, [400.0, 7490.0, -19.3, -31.3, 125.0, 15.0]),
        row(Standard, [300.0, 9570.0, -34.5, -48.5, 130.0, 20.0]),
        row(Standard, [250.0, 10_820.0, -43.9, NO, NO, NO]),
        row(Standard, [200.0, 12_280.0, -55.1, NO, NO, NO]),
        row(Standard, [150.0, 14_050.0, -66.9, NO, NO, NO]),
        row(Standard, [100.0, 16_480.0, -72.5, NO, NO, NO]),
        row(Tropopause, [104.0, NO, -73.1, NO, NO, NO]),
        row(Surface, [712.0, NO, 15.4, 1.4, NO, NO]),
        row(SignificantThermal, [689.0, NO, 10.0, 2.0, NO, NO]),
        row(SignificantThermal, [533.0, NO, -5.9, -5.9, NO, NO]),
        row(SignificantThermal, [420.0, NO, -17.3, NO, NO, NO]),
        row(SignificantThermal, [371.0, NO, -24.7, -35.7, NO, NO]),
        row(SignificantThermal, [128.0, NO, -70.1, -79.1, NO, NO]),
        row(Surface, [712.0, NO, NO, NO, 90.0, 4.0]),
        row(SignificantWind, [655.0, NO, NO, NO, 105.0, 7.0]),
        row(SignificantWind, [530.0, NO, NO, NO, 115.0, 10.0]),
        row(SignificantWind, [301.0, NO, NO, NO, 130.0, 20.0]),
    ];
    compare(&sounding.levels, &expect, 1.0);
    let notes = said(&sounding);
    assert!(
        notes.contains("44/// marks a layer of missing temperature"),
        "{notes}"
    );
    assert!(notes.contains("parts C, D not received"), "{notes}");
    assert_eq!(sounding.notes.len(), 4, "{notes}");
    assert_eq!(sounding.completeness, Completeness::LaterPartsNotReceived);
}

#[test]
fn several_stations_in_one_file() {
    let text = format!("{VALE}\n{ALM}");
    let loaded = read("20310630.txt", &text);
    let stations: Vec<_> = loaded
        .soundings
        .iter()
        .map(|sounding| (sounding.station.wmo.as_deref(), sounding.source.index))
        .collect();
    assert_eq!(stations, [(Some("74999"), 0), (Some("00451"), 1)]);
    assert!(loaded.notes.is_empty());
    // Interleaved: parts find their ascent wherever they stand.
    let (vale, alm) = (only(VALE), only(ALM));
    let parts: Vec<_> = text.split_inclusive('=').collect();
    let mixed: String = parts.iter().rev().copied().collect();
    let loaded = read("20310630.txt", &mixed);
    for (station, parts, levels) in [
        ("74999", &vale.source.parts, vale.levels.len()),
        ("00451", &alm.source.parts, alm.levels.len()),
    ] {
        let found = loaded
            .soundings
            .iter()
            .find(|sounding| sounding.station.wmo.as_deref() == Some(station))
            .unwrap();
        assert_eq!((&found.source.parts, found.levels.len()), (parts, levels));
    }
}

#[test]
fn line_ends_and_control_characters_change_nothing() {
    let plain = only(VALE);
    let framed: String =
        VALE.split("USXX")
            .skip(1)
            .enumerate()
            .fold(String::new(), |text, (index, bulletin)| {
                let bulletin = bulletin.replace('\n', "\r\r\n");
                format!("{text}\u{1}\r\r\n{:03}\r\r\nUSXX{bulletin}\u{3}", index + 7)
            });
    let broken = VALE
        .replace(' ', "\n")
        .replace("USXX11\nABCD\n060000", "USXX11 ABCD 060000");
    let broken = broken
        .replace("USXX21\nABCD\n060000", "")
        .replace("USXX31\nABCD\n060000", "");
    for text in [
        framed,
        broken,
        VALE.replace('\n', "\r"),
        VALE.replace('\n', "\r\n"),
    ] {
        let loaded = read("20310630.txt", &text);
        assert!(loaded.notes.is_empty(), "{:?}", loaded.notes);
        let found = &loaded.soundings[0];
        assert_eq!(bare(&found.levels), bare(&plain.levels));
        assert_eq!(found.source.parts, plain.source.parts);
    }
}

/// The digest is SHA-256 of the groups as one line, joined by single blanks. Expected value from coreutils:
/// `echo 'TTAA 06121 00451 99812 15464 09004' | sha256sum`.
#[test]
fn digest_of_a_part() {
    let sounding = only("TTAA 06121 00451\r\n99812 15464\r\n  09004 =");
    let digest = sounding.source.parts.first().unwrap();
    let hex: String = digest.iter().map(|byte| format!("{byte:02x}")).collect();
    assert_eq!(
        hex,
        "7a87ef528bad27c466598ce6007520eea9a59e86165066a1ed73d7a021957970"
    );
}

#[test]
fn repeated_corrected_and_differing_parts() {
    let part = "TTAA 06121 00451 99812 15464 09004 31313 47608 81130=\n";
    let other = "TTAA 06121 00451 99812 15264 09004 31313 47608 81130=\n";
    let sounding = only(&format!("{part}{part}"));
    assert_eq!(sounding.levels.len(), 1);
    assert!(said(&sounding).contains("repeats the part of line 1"));

    let sounding = only(&format!("{part}USXX01 ABCD 061200 CCA\n{other}"));
    assert_eq!(sounding.levels.len(), 1);
    assert!((sounding.levels[0].temperature.unwrap() - 288.35).abs() < 1e-9);
    assert!(said(&sounding).contains("replaces the part of line 1"));

    let loaded = read("20310630.txt", &format!("{part}{other}"));
    assert_eq!(loaded.soundings.len(), 2);
    assert!(said(&loaded.soundings[1]).contains("kept as a sounding of its own"));
}

#[test]
fn nil_reports() {
    let loaded = read(
        "20310630.txt",
        &format!("TTAA 06121 00377 NIL=\n{ALM}TTCC 23123 00451 NIL="),
    );
    assert_eq!(loaded.soundings.len(), 1);
    assert_eq!(loaded.notes.len(), 1);
    assert!(loaded.notes[0].what.contains("NIL") && loaded.notes[0].what.contains("00377"));
    assert_eq!(loaded.notes[0].place, Place::Line(1));
    // A part C that is reported as NIL will not come.
    assert_eq!(loaded.soundings[0].completeness, Completeness::AllParts);
    assert!(!said(&loaded.soundings[0]).contains("not received"));
    let loaded = read("x", "USXX01 ABCD 061200\nNIL=\nTTBB NIL=");
    assert!(loaded.soundings.is_empty());
    assert_eq!(loaded.notes.len(), 2);
}

/// An ascent that ended below 100 hPa has no part C to wait for.
#[test]
fn an_ascent_that_ended_early_is_closed() {
    let sounding =
        only("TTAA 06125 00451 99812 15464 09004 70103 10256 10006 50580 08756 12011 88999 77999=");
    assert_eq!(sounding.completeness, Completeness::AllParts);
    assert!(said(&sounding).contains("part B not received"));
}

/// A drop: position 12.3 N 45.6 W, square 10 to 20 N (37 to 72), fifth square west: 41; units 2 and 5.
#[test]
fn drops_and_their_remarks() {
    let text = "\
XXAA 57187 99123 70456 04125 99011 27018 09025 00097 26417 09025
92774 21611 10035 85504 17218 10530 70148 09456 88999 77999
31313 09608 81744
61616 ABC12 0102A NOBODY OB 07
62626 MBL WND 09530 AEV 20801 TTXX 31313 99012 REL 1230N04560W 174400=
XXBB 57188 99123 70456 04125 00011 27018 11987 25615 22795 14056
21212 00011 09025 11930 10035 22690 11022 31313 09608 81744=
";
    let sounding = only(text);
    assert_eq!(
        sounding.station.position,
        Some(Position {
            latitude: 12.3,
            longitude: -45.6
        })
    );
    assert_eq!(sounding.station.text.as_deref(), Some("drop 12.3N 45.6W"));
    assert!(sounding.released_aloft);
    let expect = [
        row(Surface, [1011.0, NO, 27.0, 25.2, 90.0, 25.0]),
        row(Standard, [1000.0, 97.0, 26.4, 24.7, 90.0, 25.0]),
        row(Standard, [925.0, 774.0, 21.6, 20.5, 100.0, 35.0]),
        row(Standard, [850.0, 1504.0, 17.2, 15.4, 105.0, 30.0]),
        // 7 in the date group: winds up to 700 hPa, so this one is missing.
        row(Standard, [700.0, 3148.0, 9.4, 3.4, NO, NO]),
        row(Surface, [1011.0, NO, 27.0, 25.2, NO, NO]),
        row(SignificantThermal, [987.0, NO, 25.6, 24.1, NO, NO]),
        row(SignificantThermal, [795.0, NO, 14.0, 8.0, NO, NO]),
        row(Surface, [1011.0, NO, NO, NO, 90.0, 25.0]),
        row(SignificantWind, [930.0, NO, NO, NO, 100.0, 35.0]),
        row(SignificantWind, [690.0, NO, NO, NO, 110.0, 22.0]),
    ];
    compare(&sounding.levels, &expect, KNOT);
    assert!(said(&sounding).contains("the 700 hPa level left without wind"));
    assert!(said(&sounding).contains("NOBODY"));
    assert_eq!(sounding.completeness, Completeness::AllParts);
    assert_eq!(
        sounding.times.launch.unwrap().to_string(),
        "2031-06-07T17:44:00Z"
    );

    // A second drop at the same place and hour, launched later, is another sounding.
    let second = text.replace("81744", "81751").replace("27018", "27218");
    let loaded = read("20310630.txt", &format!("{text}{second}"));
    assert_eq!(loaded.soundings.len(), 2);
    assert_eq!(loaded.soundings[1].levels.len(), sounding.levels.len());
}

/// FM 32 by hand: 55385 is three surfaces from 850 hPa; 7 with four figures is a maximum by height.
#[test]
fn wind_parts_alone() {
    let text = "\
PPAA 06121 00612 55385 24012 25015 26021 55340 27030 27535 28040
55220 28545 29030 71120 28548 42020=
PPBB 06121 00612 90012 22005 23008 23510 8245/ 24012 25014 21212
11870 24011 22640 25517=
PPCC 06121 00612 55370 29020 29510 30005 77999=
PPDD 06121 00612 12015 30506 31007 31508=
";
    let sounding = only(text);
    let expect = [
        row(Standard, [850.0, NO, NO, NO, 240.0, 12.0]),
        row(Standard, [700.0, NO, NO, NO, 250.0, 15.0]),
        row(Standard, [500.0, NO, NO, NO, 260.0, 21.0]),
        row(Standard, [400.0, NO, NO, NO, 270.0, 30.0]),
        row(Standard, [300.0, NO, NO, NO, 275.0, 35.0]),
        row(Standard, [250.0, NO, NO, NO, 280.0, 40.0]),
        row(Standard, [200.0, NO, NO, NO, 285.0, 45.0]),
        row(Standard, [150.0, NO, NO, NO, 290.0, 30.0]),
        row(MaximumWind, [NO, 11_200.0, NO, NO, 285.0, 48.0]),
        row(Surface, [NO, NO, NO, NO, 220.0, 5.0]),
        row(SignificantWind, [NO, 300.0, NO, NO, 230.0, 8.0]),
        row(SignificantWind, [NO, 600.0, NO, NO, 235.0, 10.0]),
        // 8: steps of 500 m, 24 and 25 of them.
        row(SignificantWind, [NO, 12_000.0, NO, NO, 240.0, 12.0]),
        row(SignificantWind, [NO, 12_500.0, NO, NO, 250.0, 14.0]),
        row(SignificantWind, [870.0, NO, NO, NO, 240.0, 11.0]),
        row(SignificantWind, [640.0, NO, NO, NO, 255.0, 17.0]),
        row(Standard, [70.0, NO, NO, NO, 290.0, 20.0]),
        row(Standard, [50.0, NO, NO, NO, 295.0, 10.0]),
        row(Standard, [30.0, NO, NO, NO, 300.0, 5.0]),
        // 1: counted from 100, so 120, 121 and 125 steps of 300 m.
        row(SignificantWind, [NO, 36_000.0, NO, NO, 305.0, 6.0]),
        row(SignificantWind, [NO, 36_300.0, NO, NO, 310.0, 7.0]),
        row(SignificantWind, [NO, 37_500.0, NO, NO, 315.0, 8.0]),
    ];
    compare(&sounding.levels, &expect, 1.0);
    assert!(said(&sounding).contains("pressure was not measured"));
}

#[test]
fn faults_cost_their_own_value_only() {
    let plain = only(VALE);
    let check = |from: &str, to: &str, says: &[&str]| {
        assert_eq!(VALE.matches(from).count(), 1, "{from}");
        let sounding = only(&VALE.replace(from, to));
        let (before, after) = (bare(&plain.levels), bare(&sounding.levels));
        let kept = before.iter().filter(|level| after.contains(level)).count();
        assert!(
            before.len() - kept <= 1,
            "{to}: {} levels lost",
            before.len() - kept
        );
        let notes = said(&sounding);
        for text in says {
            assert!(notes.contains(text), "{to}: {notes}");
        }
        sounding
    };
    // Unreadable groups.
    let found = check(
        "22531",
        "7x8//",
        &["group 7x8// not understood as wind; the 850 hPa level left without wind"],
    );
    assert!(found.levels[3].wind.is_none() && found.levels[3].temperature.is_some());
    check(
        "14259",
        "14x59",
        &["group 14x59 not understood as temperature; the 850 hPa level"],
    );
    check(
        "14259",
        "14253",
        &[
            "the 850 hPa level left without dew point",
            "51 to 55 are not used",
        ],
    );
    let found = check("85435", "85x35", &["group 85x35 not understood as height"]);
    assert!(found.levels[3].height.is_none() && found.levels[3].temperature.is_some());
    check("85435", "8x435", &["groups 8x435 14259 22531 set aside"]);
    check("24038", "99038", &["direction 99 is variable"]);
    check("99004", "99x04", &["surface level left without pressure"]);
    check("99004", "99204", &["204 hPa", "no station lies so high"]);
    check(
        "44789",
        "4x789",
        &[
            "groups 4x789 11880 set aside",
            "numbered 55 where 44 should follow",
        ],
    );
    check("88193", "88x93", &["88x93"]);
    check(
        "26636",
        "2663x",
        &["group 2663x not understood as wind; the maximum wind (77188) left without wind"],
    );
    // Lost groups.
    check(" 25555", "", &["the 500 hPa level left without wind"]);
    check(
        " 11373",
        "",
        &["the 500 hPa level left without temperature"],
    );
    check(" 50570", "", &["groups 11373 25555 set aside"]);
    check(
        " 17258",
        "",
        &["the significant level 22902 left out: no temperature group follows it"],
    );
    check(
        " 33871",
        "",
        &[
            "group 15660 set aside",
            "numbered 44 where 33 should follow",
        ],
    );
    // A group too many.
    check("11373", "11373 48484", &["48484"]);
    check("17258", "17258 17258", &["group 17258 set aside"]);
    // A lost group that could be either is not guessed at: 14.2 degrees less 9, or 140 degrees 259 kt: only the first
    // is possible; but 19.0 degrees less 1.2 or 190 degrees 12 kt are both.
    let found = check(
        "26466 19012 00043",
        "19012 00043",
        &["could be either and is set aside"],
    );
    assert!(found.levels[0].temperature.is_none() && found.levels[0].wind.is_none());
    // Unreadable day and hour, or station number.
    let found = check(
        "TTBB 56008",
        "TTBB 5x008",
        &["taken to belong to this ascent"],
    );
    assert_eq!(found.source.parts.len(), 6);
}

#[test]
fn unreadable_units_leave_winds_out() {
    let sounding = only("TTAA X6121 00451 99812 15464 09004 70103 10256 10006=");
    assert!(sounding.levels.iter().all(|level| level.wind.is_none()));
    assert!(said(&sounding).contains("winds left out"));
    assert_eq!(sounding.times.nominal, None);
}

#[test]
fn parts_that_contradict_each_other() {
    let text = ALM
        .replace("TTBB 2312/", "TTBB 7312/")
        .replace("00712 15464", "00715 15464");
    let text = text.replace("66128 70159 21212 00712", "66128 70159 21212 00715");
    let text = text.replace("31313 47608 81130 41414", "31313 47608 81240 41414");
    let notes = said(&only(&text));
    for expect in [
        "differ in surface pressure (712 and 715 hPa)",
        "differ in launch time (11:30 and 12:40 UTC)",
        "differ in unit of wind",
    ] {
        assert!(notes.contains(expect), "{expect}: {notes}");
    }
}

/// With a wind too few or too many it can't be told which altitude each belongs to: none is guessed at.
#[test]
fn miscounted_winds() {
    for (from, to) in [(" 24542", ""), ("24542", "24542 24542"), ("9205/ ", "")] {
        let sounding = only(&VALE.replace(from, to));
        let (before, after) = (bare(&only(VALE).levels), bare(&sounding.levels));
        assert!(after.iter().all(|level| before.contains(level)), "{to}");
        assert!(said(&sounding).contains("can't be told which wind"), "{to}");
    }
    let sounding = only("PPAA 06121 00612 55385 24012 26021 55340 27030 27535 28040=");
    let pressures: Vec<_> = sounding.levels.iter().map(|level| level.pressure).collect();
    assert_eq!(pressures, [Some(40_000.0), Some(30_000.0), Some(25_000.0)]);
}

/// Winds whose section number is lost are not read as temperatures; they start anew from below.
#[test]
fn winds_without_their_section_number() {
    let text = "TTDD 2312/ 00451 11842 59764 22465 561// 33201 469// 21212 11900 28526 22700 29030 33510 30015=";
    let plain = only(text);
    assert_eq!(plain.levels.len(), 6);
    for broken in ["21x12 ", ""] {
        let sounding = only(&text.replace("21212 ", broken));
        assert_eq!(bare(&sounding.levels), bare(&plain.levels), "{broken}");
        assert!(said(&sounding).contains("without the section number 21212"));
    }
}

/// A ship: call sign, 35.2 S 18.4 E, m/s; and one that hides its call sign.
#[test]
fn ships() {
    let text = "\
UUAA ABCD7 06121 99352 30184 44258 99015 18240 20508 00127 17640 21010=
UUBB ABCD7 0612/ 99352 30184 44258 00015 18240 11960 14640 22900 10456=
UUAA SHIP 06121 99401 30184 47808 99009 12240 25012=
";
    let loaded = read("20310630.txt", text);
    let names: Vec<_> = loaded
        .soundings
        .iter()
        .map(|sounding| sounding.station.text.as_deref())
        .collect();
    assert_eq!(names, [Some("ABCD7"), Some("SHIP 40.1S 18.4E")]);
    let expect = [
        row(Surface, [1015.0, NO, 18.2, 14.2, 205.0, 8.0]),
        row(Standard, [1000.0, 127.0, 17.6, 13.6, 210.0, 10.0]),
        row(Surface, [1015.0, NO, 18.2, 14.2, NO, NO]),
        row(SignificantThermal, [960.0, NO, 14.6, 10.6, NO, NO]),
        row(SignificantThermal, [900.0, NO, 10.4, 4.4, NO, NO]),
    ];
    compare(&loaded.soundings[0].levels, &expect, 1.0);
}

/// Winds above the level the indicator names are taken, and said.
#[test]
fn winds_beyond_the_indicator() {
    let sounding = only(&VALE.replace("TTCC 56003", "TTCC 56005"));
    assert_eq!(bare(&sounding.levels), bare(&only(VALE).levels));
    assert!(said(&sounding).contains("a wind is given at the 30 hPa level"));
}

#[test]
fn text_that_is_no_report() {
    assert!(temp::recognises(VALE));
    assert!(temp::recognises("TTAA NIL="));
    assert!(temp::recognises("UUAA SHIP 06121 99352"));
    for text in [
        "",
        "AAXX 06121",
        "pressure_hpa,TTAA\n1000,3",
        "TTAA",
        "XXAA is a word",
    ] {
        assert!(!temp::recognises(text), "{text}");
    }
    let loaded = read("x", "AAXX 06121\n00001 41598=\nTTAA\nTTBB 06121\n");
    assert!(loaded.soundings.is_empty());
    assert_eq!(loaded.notes.len(), 3, "{:?}", loaded.notes);
    let loaded = read("20310630.txt", "TTCC 23123 00451 88999 77999=");
    assert!(loaded.soundings.is_empty());
    assert!(
        loaded.notes[0].what.contains("no level"),
        "{:?}",
        loaded.notes
    );
}
