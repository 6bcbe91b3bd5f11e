//! The kinds of ascent against each other.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_thermo::*;

const DIRECT: Process = Process::Direct(Condensate::Water);
const DIRECT_ICE: Process = Process::Direct(Condensate::WaterAndIce);
const REVERSIBLE: Process = Process::Reversible(Condensate::Water);
const REVERSIBLE_ICE: Process = Process::Reversible(Condensate::WaterAndIce);

/// A warm, moist profile: rows of pressure hPa, temperature degC, dew point degC.
fn warm_day() -> Environment {
    let levels = [
        (1000.0, 30.0, 22.0),
        (925.0, 23.5, 19.5),
        (850.0, 18.5, 14.0),
        (700.0, 8.0, -1.0),
        (500.0, -9.0, -25.0),
        (400.0, -19.5, -36.0),
        (300.0, -35.0, -52.0),
        (250.0, -45.0, -60.0),
        (200.0, -56.0, -72.0),
        (150.0, -66.0, -80.0),
        (100.0, -72.0, -88.0),
        (70.0, -68.0, -90.0),
    ];
    let column = |f: fn(&(f64, f64, f64)) -> f64| levels.iter().map(f).collect::<Vec<_>>();
    Environment::new(
        &column(|level| level.0 * 100.0),
        &column(|level| level.1 + ZERO_CELSIUS),
        &levels.map(|level| Some(level.2 + ZERO_CELSIUS)),
    )
    .unwrap()
}

/// Which process gives more, and by what: directions that physics fixes, sizes printed.
#[test]
fn processes_differ_in_the_direction_physics_says() {
    let environment = warm_day();
    let cape = |method: Method| {
        let ascent = lift(&environment, environment.bottom(), method).unwrap();
        let exact = lift_exactly(&environment, environment.bottom(), method).unwrap();
        println!(
            "{:<58} CAPE {:>8.2} J/kg, CIN {:>7.2} J/kg, EL {:>6.1} hPa; exact less lift {:+.1e}",
            format!("{:?} {:?}", method.process, method.buoyancy),
            ascent.cape,
            ascent.cin.unwrap(),
            ascent.el.unwrap().hpa(),
            exact.cape - ascent.cape,
        );
        assert!((exact.cape - ascent.cape).abs() < 1e-4 * exact.cape);
        ascent.cape
    };
    let [theta_e, direct, direct_ice, reversible, reversible_ice] = [
        Process::ThetaE,
        DIRECT,
        DIRECT_ICE,
        REVERSIBLE,
        REVERSIBLE_ICE,
    ]
    .map(|process| {
        let method = Method::of(process);
        [method, method.without_virtual_correction()].map(cape)
    });
    // Doswell & Rasmussen (1994): leaving the virtual correction out lessens CAPE here, in a moist parcel.
    for [with, without] in [theta_e, direct, direct_ice] {
        assert!(with > without);
    }
    // Condensate's heat: reversible air is warmer; its weight more than makes up for it.
    assert!(reversible[1] > direct[1] && reversible[0] < direct[0]);
    // Freezing warms.
    assert!(direct_ice[1] > direct[1] && reversible_ice[1] > reversible[1]);
    // 0.2 K (Davies-Jones 2008) over the depth of the buoyant layer, some 1.6 in ln p: 287 * 0.2 * 1.6.
    assert!((theta_e[1] - direct[1]).abs() < 92.0);
}

/// Parts of CAPE add up for every method, temperature alone included.
#[test]
fn parts_of_cape_add_up() {
    let environment = warm_day();
    for process in [
        Process::ThetaE,
        DIRECT,
        DIRECT_ICE,
        REVERSIBLE,
        REVERSIBLE_ICE,
    ] {
        for buoyancy in [Buoyancy::Virtual, Buoyancy::Temperature] {
            let lifted = Lifted::of(
                &environment,
                environment.bottom(),
                Method { process, buoyancy },
            )
            .unwrap();
            let edges = [1000.0, 870.0, 640.0, 533.0, 401.0, 282.0, 90.0].map(Pressure::from_hpa);
            let parts: f64 = edges
                .windows(2)
                .map(|pair| lifted.cape_between(pair[0], pair[1]))
                .sum();
            assert!(
                (parts - lifted.ascent.cape).abs() < 1e-6,
                "{process:?} {buoyancy:?}: {parts} {}",
                lifted.ascent.cape
            );
        }
    }
}

/// Where no level has vapour, temperature alone is the whole of it: the same areas by either measure for a dry parcel.
#[test]
fn dry_air_has_no_virtual_correction() {
    let p: Vec<f64> = (0..=45).map(|i| 1e5 - 2e3 * f64::from(i)).collect();
    let t: Vec<f64> = p.iter().map(|p| 300.0 * (p / 1e5).powf(0.22)).collect();
    let environment = Environment::new(&p, &t, &vec![Some(100.0); p.len()]).unwrap();
    let start = Air {
        pressure: Pressure::from_hpa(1000.0),
        temperature: Temperature::from_k(305.0),
        dewpoint: Temperature::from_k(100.0),
    };
    for process in [Process::ThetaE, DIRECT, REVERSIBLE_ICE] {
        let method = Method::of(process);
        let (a, b) = (
            lift(&environment, start, method).unwrap(),
            lift(&environment, start, method.without_virtual_correction()).unwrap(),
        );
        assert!(
            (a.cape - b.cape).abs() < 1e-6 && a.el == b.el,
            "{a:?} {b:?}"
        );
    }
}
