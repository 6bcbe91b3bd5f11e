//! The kinds of ascent against integrations by another hand, against conservation, and against each other.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Residuals, Table};
use dewbound_thermo::*;

const DIRECT: Process = Process::Direct(Condensate::Water);
const DIRECT_ICE: Process = Process::Direct(Condensate::WaterAndIce);
const REVERSIBLE: Process = Process::Reversible(Condensate::Water);
const REVERSIBLE_ICE: Process = Process::Reversible(Condensate::WaterAndIce);

fn saturated(p: f64, t: f64) -> Air {
    Air {
        pressure: Pressure::from_pa(p),
        temperature: Temperature::from_k(t),
        dewpoint: Temperature::from_k(t),
    }
}

fn path(start: Air, process: Process, pressures: &[f64]) -> Vec<ParcelState> {
    let pressures: Vec<_> = pressures.iter().map(|p| Pressure::from_pa(*p)).collect();
    parcel_path(start, Method::of(process), &pressures)
}

/// Enthalpy balances integrated by SciPy, T_start -30..35 degC, 1050..600 hPa, up to 50 hPa.
#[test]
fn integrated_ascents_against_scipy() {
    for (process, table, what) in [
        (DIRECT, "scipy_direct_water", ["direct, T", "direct, Tv"]),
        (
            DIRECT_ICE,
            "scipy_direct_ice",
            ["direct with ice, T", "direct with ice, Tv"],
        ),
        (
            REVERSIBLE,
            "scipy_reversible_water",
            ["reversible, T", "reversible, density T"],
        ),
        (
            REVERSIBLE_ICE,
            "scipy_reversible_ice",
            ["reversible with ice, T", "reversible with ice, density T"],
        ),
    ] {
        let [mut temperature, mut density] = what.map(|what| Residuals::new(what, "K"));
        for [p0, t0, p, t, tv] in Table::read(table).rows([
            "start_pressure_pa",
            "start_temperature_k",
            "pressure_pa",
            "temperature_k",
            "density_temperature_k",
        ]) {
            let state = path(saturated(p0, t0), process, &[p])[0];
            temperature.add(state.temperature.k() - t);
            density.add(state.virtual_temperature.k() - tv);
        }
        temperature.judge(1e-6);
        density.judge(1e-6);
    }
}

/// The existing table of the pseudo-adiabatic lapse rate in the AMS Glossary's form: L = 2.501e6 - 2370 t J/kg there,
/// 2320 here; Clausius and Clapeyron's slope there, eq. 10's own here. Up to 0.5 % of L (eq. 10 against
/// Clausius-Clapeyron, -40..35 degC) on some 30 K of latent warming: 0.15 K.
#[test]
fn the_direct_ascent_against_the_published_form() {
    let mut residuals = Residuals::new("direct against the AMS Glossary's form", "K");
    for [start, p, t] in Table::read("scipy_lapse_rate").rows([
        "start_temperature_k",
        "pressure_pa",
        "temperature_k",
    ]) {
        residuals.add(path(saturated(1e5, start), DIRECT, &[p])[0].temperature.k() - t);
    }
    residuals.judge(0.15);
}

/// Eq. 39 along the direct ascent: how far theta-e drifts from its value at the start. Davies-Jones (2008): the formula is
/// up to 0.2 K off the process.
#[test]
fn theta_e_along_the_direct_ascent() {
    let mut temperature =
        Residuals::new("eq. 39 against direct, at one pressure up to 200 hPa", "K");
    let mut drift = Residuals::new("drift of eq. 39 theta-e along the direct ascent", "K");
    let mut high = Residuals::new("the same up to 50 hPa", "K");
    let mut largest = (0.0_f64, 0.0, 0.0);
    for start in (-30..=35).map(f64::from) {
        for p0 in [1000e2, 900e2, 750e2, 600e2] {
            let air = saturated(p0, ZERO_CELSIUS + start);
            let theta_w = wet_bulb_potential_temperature(air.theta_e()).c();
            // The range in which the paper works.
            if !(-20.0..=40.0).contains(&theta_w) {
                continue;
            }
            for j in 1..=95 {
                let p = p0 - (p0 - 50e2) * f64::from(j) / 95.0;
                let t = path(air, DIRECT, &[p])[0].temperature;
                let off = saturated(p, t.k()).theta_e().k() - air.theta_e().k();
                high.add(off);
                if p < 200e2 {
                    continue;
                }
                drift.add(off);
                let there = temperature_on_pseudoadiabat(air.theta_e(), Pressure::from_pa(p));
                temperature.add(there.k() - t.k());
                if off.abs() > largest.0.abs() {
                    largest = (off, start, p);
                }
            }
        }
    }
    println!(
        "largest drift {:.3} K from {} degC at {} Pa",
        largest.0, largest.1, largest.2
    );
    high.judge(0.2);
    drift.judge(0.2);
    temperature.judge(0.2);
}

/// The reversible ascent over water conserves moist entropy s = (cpd + r_t cl) ln T - Rd ln p_d + L r_v / T as far as the
/// saturation formula obeys Clausius and Clapeyron: ds = r_v (Rv g - L/T²) dT with g = d ln e/dT. Constants: Emanuel
/// (1994), from memory. Eq. 10 keeps to g within 0.5 % (-40..35 degC).
#[test]
fn the_reversible_ascent_conserves_entropy() {
    let latent = |t: f64| 2.501e6 - 2320.0 * (t - ZERO_CELSIUS);
    let vapour =
        |p: f64, t: f64| saturation_mixing_ratio(Pressure::from_pa(p), Temperature::from_k(t));
    let mut entropy = Residuals::new("moist entropy less what eq. 10 makes, as temperature", "K");
    let mut whole = Residuals::new("moist entropy, as temperature", "K");
    for start in (-30..=35).step_by(5).map(f64::from) {
        for p0 in [1050e2, 850e2, 600e2] {
            let t0 = ZERO_CELSIUS + start;
            let total = vapour(p0, t0);
            let s = |p: f64, t: f64| {
                let r = vapour(p, t);
                let dry = p / (1.0 + r / EPSILON);
                (1005.7 + total * 4190.0) * t.ln() - GAS_CONSTANT_DRY * dry.ln() + latent(t) * r / t
            };
            let count = 2000;
            let pressures: Vec<f64> = (0..=count)
                .map(|i| p0 * (50e2 / p0).powf(f64::from(i) / f64::from(count)))
                .collect();
            let states = path(saturated(p0, t0), REVERSIBLE, &pressures);
            let mut made = 0.0;
            let source = |state: &ParcelState| {
                let t = state.temperature.k();
                let d = 1e-3;
                let e = |t: f64| saturation_vapour_pressure(Temperature::from_k(t)).pa();
                let g = (e(t + d) / e(t - d)).ln() / (2.0 * d);
                vapour(state.pressure.pa(), t) * (GAS_CONSTANT_VAPOUR * g - latent(t) / (t * t))
            };
            let first = s(p0, t0);
            for pair in states.windows(2) {
                let [below, above] = pair else { continue };
                let fall = above.temperature.k() - below.temperature.k();
                made += 0.5 * (source(below) + source(above)) * fall;
                let t = above.temperature.k();
                let change = s(above.pressure.pa(), t) - first;
                whole.add(change * t / 1005.7);
                entropy.add((change - made) * t / 1005.7);
            }
        }
    }
    entropy.judge(1e-4);
    // 0.5 % of a latent warming of up to 100 K or so.
    whole.judge(0.5);
}

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
