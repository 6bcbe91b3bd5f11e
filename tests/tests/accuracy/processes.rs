//! Ascents that integrate a lapse rate: pseudo-adiabatic (direct) and reversible, with and without ice.

use crate::{k, pa};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

const DIRECT: Process = Process::Direct(Condensate::Water);
const DIRECT_ICE: Process = Process::Direct(Condensate::WaterAndIce);
const REVERSIBLE: Process = Process::Reversible(Condensate::Water);
const REVERSIBLE_ICE: Process = Process::Reversible(Condensate::WaterAndIce);

fn saturated(p: f64, t: f64) -> Air {
    Air {
        pressure: pa(p),
        temperature: k(t),
        dewpoint: k(t),
    }
}

fn path(start: Air, process: Process, pressures: &[f64]) -> Vec<ParcelState> {
    let pressures: Vec<_> = pressures.iter().map(|p| pa(*p)).collect();
    parcel_path(start, Method::of(process), &pressures)
}

pub fn integrated(report: &mut Report) {
    report.section(
        "Direct and reversible ascents (over water, or over water and ice)",
        &[
            "SciPy integrates enthalpy balances (DOP853, rtol 1e-10) from saturated air of -30..35 degC at 1050..600 hPa up to 50 hPa;",
            "both sides use the same constants and formula of saturation: 1e-6 K. T with virtual or, with condensate, density temperature.",
            "The AMS Glossary's form takes L = 2.501e6 - 2370 t J/kg (2320 here) and Clausius and Clapeyron's slope (eq. 10's own here):",
            "up to 0.5 % of L over -40..35 degC, so 0.5 % of the latent warming. Below that eq. 10 leaves Clausius and Clapeyron by up to",
            "3 % (-80 degC), when 0.4 g/kg is left at most (300 hPa), worth 1 K: another 0.03 K.",
        ],
    );
    for (process, table, what) in [
        (DIRECT, "scipy_direct_water", "direct, water"),
        (DIRECT_ICE, "scipy_direct_ice", "direct, water and ice"),
        (REVERSIBLE, "scipy_reversible_water", "reversible, water"),
        (
            REVERSIBLE_ICE,
            "scipy_reversible_ice",
            "reversible, water and ice",
        ),
    ] {
        let mut residuals = Residuals::new(format!("{what}: T and Tv, SciPy"), "K", "1e-6");
        for [p0, t0, p, t, tv] in Table::read(table).rows([
            "start_pressure_pa",
            "start_temperature_k",
            "pressure_pa",
            "temperature_k",
            "density_temperature_k",
        ]) {
            let state = path(saturated(p0, t0), process, &[p])[0];
            residuals.add(state.temperature.k() - t, 1e-6);
            residuals.add(state.virtual_temperature.k() - tv, 1e-6);
        }
        report.judge(&residuals);
    }
    let mut published = Residuals::new(
        "direct, water: the AMS Glossary's lapse rate, SciPy",
        "K",
        "0.5 % of heating + 0.03 K",
    );
    for [p0, t0, p, t] in Table::read("scipy_lapse_rate").rows([
        "start_pressure_pa",
        "start_temperature_k",
        "pressure_pa",
        "temperature_k",
    ]) {
        let dry = t0 * (p / p0).powf(0.2854);
        let ours = path(saturated(p0, t0), DIRECT, &[p])[0].temperature.k();
        published.add(ours - t, 0.005 * (t - dry) + 0.03);
    }
    report.judge(&published);
}

/// Eq. 39 along the direct ascent: how far theta-e drifts from its value at the start.
pub fn theta_e_along(report: &mut Report) {
    report.section(
        "Eq. 39 theta-e along the direct ascent",
        &["Theta-w -20..40 degC, from 1000..600 hPa. Davies-Jones (2008): the formula is up to 0.2 K off the process."],
    );
    let mut temperature =
        Residuals::new("default against direct ascent, up to 200 hPa", "K", "0.2");
    let mut drift = Residuals::new("drift of theta-e, up to 200 hPa", "K", "0.2");
    let mut high = Residuals::new("drift of theta-e, up to 50 hPa", "K", "0.2");
    let mut largest = (0.0_f64, 0.0, 0.0);
    for start in (-30..=35).map(f64::from) {
        for p0 in [1000e2, 900e2, 750e2, 600e2] {
            let air = saturated(p0, ZERO_CELSIUS + start);
            let theta_e = air.theta_e();
            if !(-20.0..=40.0).contains(&wet_bulb_potential_temperature(theta_e).c()) {
                continue;
            }
            let pressures: Vec<f64> = (1..=95)
                .map(|j| p0 - (p0 - 50e2) * f64::from(j) / 95.0)
                .collect();
            for state in path(air, DIRECT, &pressures) {
                let (p, t) = (state.pressure, state.temperature);
                let off = saturated(p.pa(), t.k()).theta_e().k() - theta_e.k();
                high.add(off, 0.2);
                if p.pa() < 200e2 {
                    continue;
                }
                drift.add(off, 0.2);
                temperature.add(temperature_on_pseudoadiabat(theta_e, p).k() - t.k(), 0.2);
                if off.abs() > largest.0.abs() {
                    largest = (off, start, p.hpa());
                }
            }
        }
    }
    for residuals in [&temperature, &drift, &high] {
        report.judge(residuals);
    }
    let (off, start, p) = largest;
    report.remark(&[&format!(
        "Largest drift up to 200 hPa: {off:.3} K from {start} degC, at {p:.0} hPa."
    )]);
}

/// s = (cpd + r_t cl) ln T - Rd ln p_d + L r_v / T, and what eq. 10 makes of it: ds = r_v (Rv g - L/T²) dT, g = d ln e/dT.
pub fn entropy(report: &mut Report) {
    report.section(
        "Moist entropy along the reversible ascent over water",
        &[
            "Conserved as far as eq. 10 obeys Clausius and Clapeyron, which it does to 0.5 % (-40..35 degC): 0.5 K on up to 100 K of latent",
            "warming; with that taken out, the rest is the check's own quadrature. Constants of Emanuel (1994), from memory.",
        ],
    );
    let latent = |t: f64| 2.501e6 - 2320.0 * (t - ZERO_CELSIUS);
    let vapour = |p: f64, t: f64| saturation_mixing_ratio(pa(p), k(t));
    let mut entropy = Residuals::new(
        "entropy less what eq. 10 makes, as temperature",
        "K",
        "1e-4",
    );
    let mut whole = Residuals::new("entropy, as temperature", "K", "0.5");
    for start in (-30..=35).step_by(5).map(f64::from) {
        for p0 in [1050e2, 850e2, 600e2] {
            let t0 = ZERO_CELSIUS + start;
            let total = vapour(p0, t0);
            let s = |p: f64, t: f64| {
                let r = vapour(p, t);
                let dry = p / (1.0 + r / EPSILON);
                (1005.7 + total * 4190.0) * t.ln() - GAS_CONSTANT_DRY * dry.ln() + latent(t) * r / t
            };
            let source = |state: &ParcelState| {
                let t = state.temperature.k();
                let d = 1e-3;
                let e = |t: f64| saturation_vapour_pressure(k(t)).pa();
                let g = (e(t + d) / e(t - d)).ln() / (2.0 * d);
                vapour(state.pressure.pa(), t) * (GAS_CONSTANT_VAPOUR * g - latent(t) / (t * t))
            };
            let count = 2000;
            let pressures: Vec<f64> = (0..=count)
                .map(|i| p0 * (50e2 / p0).powf(f64::from(i) / f64::from(count)))
                .collect();
            let states = path(saturated(p0, t0), REVERSIBLE, &pressures);
            let first = s(p0, t0);
            let mut made = 0.0;
            for pair in states.windows(2) {
                let [below, above] = pair else { continue };
                let fall = above.temperature.k() - below.temperature.k();
                made += 0.5 * (source(below) + source(above)) * fall;
                let t = above.temperature.k();
                let change = s(above.pressure.pa(), t) - first;
                whole.add(change * t / 1005.7, 0.5);
                entropy.add((change - made) * t / 1005.7, 1e-4);
            }
        }
    }
    report.judge(&entropy);
    report.judge(&whole);
}
