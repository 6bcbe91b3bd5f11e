//! The fast path, which every number on the desk comes from, against the exact one.

use crate::crossings::{BUOYANCY, Comparison};
use crate::profiles::{profile, starts};
use crate::{k, pa};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

/// Invented profiles: every shape 25 times.
const PROFILES: usize = 300;

/// Air that any parcel fits into: nothing here depends on it.
fn anywhere() -> Environment {
    Environment::new(&[108_001.0, 4_999.0], &[250.0, 250.0], &[Some(200.0), None]).unwrap()
}

/// Every process but the default.
const OTHERS: [Process; 4] = [
    Process::Direct(Condensate::Water),
    Process::Direct(Condensate::WaterAndIce),
    Process::Reversible(Condensate::Water),
    Process::Reversible(Condensate::WaterAndIce),
];

/// Differences (mK) of the table from the exact path at `count` pressures between the LCL and 50 hPa.
fn add_departures(residuals: &mut Residuals, start: Air, method: Method, count: u32) {
    let environment = anywhere();
    let ascent = Lifted::of(&environment, start, method).unwrap();
    let foot = ascent.ascent.lcl.pressure.pa();
    let points: Vec<Pressure> = (0..count)
        .map(|i| pa(foot * (50e2_f64 / foot).powf((f64::from(i) + 0.5) / f64::from(count))))
        .collect();
    for state in parcel_path(start, method, &points) {
        let fast = ascent.tabulated_temperature(state.pressure);
        let error = fast.map_or(f64::NAN, |tv| tv.k() - state.virtual_temperature.k());
        residuals.add(1e3 * error, 1e3 * BUOYANCY);
    }
}

/// Saturated air of this theta-e.
fn saturated(theta_e: f64, p: f64) -> Air {
    let t = temperature_on_pseudoadiabat(k(theta_e), pa(p));
    Air {
        pressure: pa(p),
        temperature: t,
        dewpoint: t,
    }
}

pub fn temperatures(report: &mut Report) {
    report.section(
        "Fast path: tabulated virtual temperature",
        &["Theta-e 240..420 K, 1080..50 hPa, saturated at six pressures or drier by 2..25 K; our bound is 2 mK."],
    );
    let mut dense = Residuals::new("fast path, exact solution at 400 pressures", "mK", "2");
    for theta_e in (240..=420).step_by(2).map(f64::from) {
        let moist = [108e3, 101_325.0, 95e3, 85e3, 70e3, 50e3].map(|p| saturated(theta_e, p));
        // Drier air, whose LCL lies anywhere between the nodes of another.
        let dry = [2.0, 7.0, 15.0, 25.0].map(|depression| {
            let air = saturated(theta_e, 100e3);
            Air {
                dewpoint: k(air.temperature.k() - depression),
                ..air
            }
        });
        for start in moist.into_iter().chain(dry) {
            // Drying lowers theta-e, at most out of the range that is promised.
            if start.theta_e().k() < 240.0 {
                continue;
            }
            add_departures(&mut dense, start, Method::default(), 400);
        }
    }
    report.judge(&dense);
    let mut others = Residuals::new(
        "fast path, direct and reversible: fine integration",
        "mK",
        "2",
    );
    for process in OTHERS {
        for theta_e in (240..=420).step_by(10).map(f64::from) {
            for p in [108e3, 95e3, 70e3, 50e3] {
                let start = saturated(theta_e, p);
                add_departures(&mut others, start, Method::of(process), 100);
            }
        }
    }
    report.judge(&others);

    let environment = anywhere();
    let mut scipy = Residuals::new("fast path, root by SciPy", "mK", "2");
    let table = Table::read("scipy_pseudoadiabat");
    for [theta_e, p, t] in table.rows(["theta_e_k", "pressure_pa", "temperature_k"]) {
        if p < 50e2 {
            continue;
        }
        let start = saturated(theta_e, 108e3);
        let ascent = Lifted::of(&environment, start, Method::default()).unwrap();
        let c = t - 273.15;
        let e = 611.2 * (17.67 * c / (c + 243.5)).exp();
        let expected = t / (1.0 - (1.0 - 287.05 / 461.52) * e / p);
        let fast = ascent.tabulated_temperature(pa(p));
        let error = fast.map_or(f64::NAN, |tv| tv.k() - expected);
        scipy.add(1e3 * error, 1e3 * BUOYANCY);
    }
    report.judge(&scipy);
}

/// Three parcels by the fast path and by the exact one.
pub fn compare(comparison: &mut Comparison, environment: &Environment, method: Method) {
    for start in starts(environment) {
        let ours = lift(environment, start, method).unwrap();
        let exact = lift_exactly(environment, start, method).unwrap();
        comparison.add(environment, method, &ours, &exact);
    }
}

pub fn synthetic_ascents(report: &mut Report) {
    report.section(
        "Fast path: ascents of 300 invented profiles, three parcels each, against the exact path (lift_exactly)",
        &[
            "Bounds are ours. Crossings: an error of 2 mK moves one by 2 mK over the change of buoyancy with ln p. Steep: at least",
            "10 K per unit of ln p on both sides, so 2e-4 in ln p, 20 Pa at the ground. Flat (near neutral): pressure is ill conditioned,",
            "the exact parcel's buoyancy at the crossing is judged instead.",
        ],
    );
    let mut comparison = Comparison::new("invented:", "exact path");
    let mut cape: Vec<f64> = Vec::new();
    for number in 0..PROFILES {
        let environment = profile(number).environment();
        compare(&mut comparison, &environment, Method::default());
        let ascent = lift(&environment, environment.bottom(), Method::default()).unwrap();
        cape.push(ascent.cape);
    }
    let above = |limit: f64| cape.iter().filter(|cape| **cape > limit).count();
    let text = format!(
        "Of {PROFILES} surface parcels {} have CAPE, {} over 1000 J/kg, {} over 3000 J/kg.",
        above(0.0),
        above(1000.0),
        above(3000.0)
    );
    comparison.judge(report);
    report.remark(&[&text]);

    let mut comparison = Comparison::new("direct, reversible:", "exact path");
    for (number, process) in (0..PROFILES).zip(OTHERS.into_iter().cycle()) {
        compare(
            &mut comparison,
            &profile(number).environment(),
            Method::of(process),
        );
    }
    comparison.judge(report);
}
