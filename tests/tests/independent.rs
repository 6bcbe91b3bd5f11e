//! CAPE and CIN of real ascents against an independent integration: see `slow_parcel`.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::Analysed;
use dewbound_session::sounding::thermo::Ascent;
use dewbound_tests::desk::soundings_of;
use dewbound_tests::open_data;
use dewbound_tests::slow_parcel::{Lifted, Point, lift, mixed_start, most_unstable_start};

/// Steps in ln p: a tenth of a hectopascal at the ground.
const STEP: f64 = 1e-4;

/// Levels of the received profile from the surface up, in hPa and K; and whether each was received.
fn levels(analysed: &Analysed) -> Vec<(f64, f64, Option<f64>)> {
    let profile = &analysed.profile;
    let surface = profile.surface.unwrap();
    (surface..profile.len())
        .filter_map(|row| {
            Some((
                profile.pressure[row] / 100.0,
                profile.temperature[row]?,
                profile.dewpoint[row],
            ))
        })
        .collect()
}

/// Within 0.5 % or 2 J/kg.
fn check(place: &str, ours: &Ascent, slow: Lifted) -> f64 {
    let near = |a: f64, b: f64| (a - b).abs() <= (0.005 * b.abs()).max(2.0);
    assert!(
        near(ours.cape, slow.cape),
        "{place}: CAPE {} and {slow:?}",
        ours.cape
    );
    // Where there is hardly a buoyant layer, one of the two may not see it at all.
    if slow.cape > 2.0 || ours.cape > 2.0 {
        let (a, b) = (ours.cin.unwrap(), slow.cin.unwrap());
        assert!(near(a, b), "{place}: CIN {a} and {b}");
    }
    (ours.cape - slow.cape).abs()
}

#[test]
fn real_ascents_agree_with_a_slow_integration() {
    let Some(folder) = open_data::folder("CAPE of real ascents, integrated independently") else {
        return;
    };
    let (mut checked, mut worst, mut largest) = (0, 0.0_f64, 0.0_f64);
    // Coded with a strong cap, two-second data, coded on standard levels only with no humidity above 400 hPa.
    for file in [
        "temp/tallahassee_72214_allparts_teaching_example.txt",
        "temp/sao_paulo_83779_day23_00z.txt",
        "temp/usus04_kwbc_301800_72365_72451.txt",
        "temp/A_USJP01RJTD050000_C_RJTD_20191105012317_50.txt",
        "csv/tropics_Padang_2012031518.csv",
        "csv/GTS_BUFR_KSGF_202305222307_01_SONDE.csv",
    ] {
        let soundings = soundings_of(&folder.join(file)).unwrap();
        let analysed = &soundings[0];
        let levels = levels(analysed);
        let surface = levels[0];
        let surface = Point {
            p: surface.0,
            t: surface.1,
            td: surface.2.unwrap().min(surface.1),
        };
        let numbers = &analysed.numbers;
        let starts = [
            ("surface", &numbers.surface, Some(surface)),
            ("mixed", &numbers.mixed, mixed_start(&levels, STEP)),
            (
                "most unstable",
                &numbers.most_unstable,
                most_unstable_start(&levels),
            ),
        ];
        for (parcel, ours, start) in starts {
            let (ours, start) = (ours.as_ref().unwrap(), start.unwrap());
            let place = format!("{file}, {parcel}");
            assert!(
                (ours.start.pressure.hpa() - start.p).abs() < 0.01,
                "{place}"
            );
            assert!(
                (ours.start.temperature.k() - start.t).abs() < 0.01,
                "{place}"
            );
            assert!((ours.start.dewpoint.k() - start.td).abs() < 0.01, "{place}");
            let slow = lift(&levels, start, STEP).unwrap();
            worst = worst.max(check(&place, ours, slow));
            largest = largest.max(slow.cape);
            checked += 1;
        }
    }
    assert_eq!(checked, 18);
    assert!(largest > 2000.0, "some of them are unstable");
    println!("{checked} ascents, CAPE differs by {worst:.3} J/kg at most");
}
