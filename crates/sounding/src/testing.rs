//! Invented soundings for the tests of this crate.

use crate::{
    Amendment, Amendments, BridgeHumidity, Entry, Level, Note, Profile, Reach, Sounding, Wind,
};
use proptest::prelude::*;

/// A level in hPa and °C.
pub fn level(hpa: f64, t: f64, td: f64) -> Level {
    Level {
        pressure: Some(hpa * 100.0),
        temperature: Some(t + 273.15),
        dewpoint: Some(td + 273.15),
        ..Level::default()
    }
}

pub fn wind_level(hpa: f64, direction: f64, speed: f64) -> Level {
    Level {
        pressure: Some(hpa * 100.0),
        wind: Some(Wind { direction, speed }),
        ..Level::default()
    }
}

pub fn sounding(levels: Vec<Level>) -> Sounding {
    Sounding {
        levels,
        ..Sounding::default()
    }
}

pub fn received(levels: Vec<Level>) -> (Profile, Vec<Note>) {
    Profile::received(&sounding(levels))
}

/// A warm-season afternoon in few levels: heated surface, mixed to about 850 hPa, unstable above.
pub fn afternoon() -> Vec<Level> {
    vec![
        level(960.0, 31.0, 20.5),
        level(955.0, 29.6, 18.6),
        level(900.0, 24.4, 17.0),
        level(850.0, 19.7, 15.6),
        level(820.0, 18.4, 8.0),
        level(700.0, 8.6, -2.0),
        level(500.0, -12.3, -25.0),
        level(400.0, -24.1, -40.0),
        level(300.0, -40.5, -55.0),
        level(200.0, -57.7, -72.0),
        level(100.0, -63.0, -88.0),
    ]
}

/// The afternoon every `step` hPa, linear in ln p between its levels as the conventions have it: the same air exactly.
pub fn afternoon_fine(step: f64) -> Vec<Level> {
    let (coarse, _) = received(afternoon());
    let environment = coarse.environment().unwrap();
    let mut pressures: Vec<f64> = coarse.pressure.clone();
    let mut p = 96_000.0 - step * 100.0;
    while p > 10_000.0 {
        if pressures.iter().all(|q| (q - p).abs() > 1.0) {
            pressures.push(p);
        }
        p -= step * 100.0;
    }
    pressures.sort_by(|a, b| b.total_cmp(a));
    pressures
        .into_iter()
        .map(|p| {
            let air = environment
                .at(dewbound_thermo::Pressure::from_pa(p))
                .unwrap();
            level(p / 100.0, air.temperature.c(), air.dewpoint.c())
        })
        .collect()
}

fn field(range: std::ops::Range<f64>) -> impl Strategy<Value = Option<f64>> {
    prop_oneof![
        8 => range.prop_map(Some),
        2 => Just(None),
        1 => prop_oneof![Just(f64::NAN), Just(f64::INFINITY), Just(-1.0), Just(0.0), any::<f64>()].prop_map(Some),
    ]
}

/// Any level at all, mostly plausible, sometimes nonsense.
pub fn any_level() -> impl Strategy<Value = Level> {
    (
        field(1_000.0..105_000.0),
        field(-100.0..35_000.0),
        field(190.0..315.0),
        field(180.0..305.0),
        field(0.0..370.0),
        field(0.0..80.0),
        field(-60.0..7_000.0),
        prop_oneof![
            4 => Just(crate::LevelKind::Other),
            1 => Just(crate::LevelKind::Surface),
        ],
    )
        .prop_map(
            |(pressure, height, temperature, dewpoint, direction, speed, elapsed, kind)| Level {
                pressure,
                height,
                temperature,
                dewpoint,
                wind: direction
                    .zip(speed)
                    .map(|(direction, speed)| Wind { direction, speed }),
                elapsed,
                kind,
                ..Level::default()
            },
        )
}

/// A series of rows close in pressure, so that it is taken for fine data, with the same nonsense here and there.
pub fn any_fine_levels() -> impl Strategy<Value = Vec<Level>> {
    (
        prop::collection::vec((-3.0..6.0_f64, any_level()), 60..200),
        60_000.0..103_000.0_f64,
        any::<bool>(),
    )
        .prop_map(|(rows, bottom, nonsense)| {
            let mut p = bottom / 100.0;
            rows.into_iter()
                .enumerate()
                .map(|(n, (step, odd))| {
                    p -= step;
                    if nonsense && n % 17 == 3 {
                        odd
                    } else {
                        level(p.max(20.0), 20.0 - 0.05 * n as f64, 10.0 - 0.1 * n as f64)
                    }
                })
                .collect()
        })
}

fn any_amendment() -> impl Strategy<Value = Amendment> {
    let p = || prop_oneof![6 => 5_000.0..103_000.0_f64, 1 => Just(f64::NAN), 1 => Just(0.0)];
    let t = || prop_oneof![6 => 230.0..320.0_f64, 1 => Just(f64::NAN), 1 => Just(1e9)];
    let keep = prop_oneof![
        Just(BridgeHumidity::RelativeHumidity),
        Just(BridgeHumidity::MixingRatio)
    ];
    prop_oneof![
        t().prop_map(|temperature_k| Amendment::SurfaceTemperature { temperature_k }),
        t().prop_map(|dewpoint_k| Amendment::SurfaceDewpoint { dewpoint_k }),
        (p(), p(), keep).prop_map(|(bottom_pa, top_pa, humidity)| Amendment::BridgeLayer {
            bottom_pa,
            top_pa,
            humidity
        }),
        (p(), p()).prop_map(|(bottom_pa, top_pa)| Amendment::DropLevels { bottom_pa, top_pa }),
        (p(), p(), prop::option::of(-0.01..0.04_f64)).prop_map(
            |(bottom_pa, top_pa, mixing_ratio)| {
                Amendment::MixMoisture {
                    bottom_pa,
                    top_pa,
                    mixing_ratio,
                }
            }
        ),
        p().prop_map(|pressure_pa| Amendment::DisregardAbove { pressure_pa }),
    ]
}

/// Any list of amendments, mostly plausible, sometimes nonsense.
pub fn any_amendments() -> impl Strategy<Value = Amendments> {
    let entries = prop::collection::vec((any_amendment(), prop::bool::weighted(0.8)), 0..7);
    let reach = prop::option::of(prop_oneof![
        Just(Reach::Level),
        Just(Reach::Mixed),
        Just(Reach::Tapered)
    ]);
    (entries, reach).prop_map(|(entries, reach)| Amendments {
        entries: entries
            .into_iter()
            .map(|(amendment, enabled)| Entry {
                amendment,
                enabled,
                from_repair: None,
            })
            .collect(),
        reach,
    })
}

pub fn strictly_falling(profile: &Profile) -> bool {
    profile.pressure.windows(2).all(|pair| pair[1] < pair[0])
}

/// Fixed count, and no files left behind.
pub fn config() -> ProptestConfig {
    ProptestConfig {
        cases: 256,
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}
