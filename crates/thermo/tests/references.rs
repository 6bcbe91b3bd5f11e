//! Formulas and ascents against outside references: tables made by `tests/reference/make_reference.py`, where their
//! provenance stands in each header.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Residuals, Table};
use dewbound_thermo::*;

fn k(kelvin: f64) -> Temperature {
    Temperature::from_k(kelvin)
}

fn pa(pascal: f64) -> Pressure {
    Pressure::from_pa(pascal)
}

/// Bolton (1980) states 0.3 % for eq. 10 over -35..35 degC. Above 0 degC against IAPWS-95; below against the vapour
/// pressure over supercooled water that follows from IAPWS G12-15, not against an extrapolation.
#[test]
fn saturation_over_water_against_iapws() {
    let mut residuals = Residuals::new("eq. 10 against IAPWS, -35..35 degC, relative", "");
    for [t, e] in Table::read("iapws_water").rows(["temperature_c", "vapour_pressure_pa"]) {
        residuals.add(saturation_vapour_pressure(Temperature::from_c(t)).pa() / e - 1.0);
    }
    residuals.judge(0.003);
}

/// The Magnus form over ice of WMO-No. 8 goes back to Sonntag, who gives 1 % over -65..0 degC (from memory).
#[test]
fn saturation_over_ice_against_iapws() {
    let mut residuals = Residuals::new("WMO-No. 8 over ice against IAPWS R14-08, relative", "");
    for [t, e] in Table::read("iapws_ice").rows(["temperature_c", "vapour_pressure_pa"]) {
        residuals.add(saturation_vapour_pressure_over_ice(Temperature::from_c(t)).pa() / e - 1.0);
    }
    residuals.judge(0.01);
}

/// The same two formulas of Bolton by another hand, with slightly other constants (header of the table).
#[test]
fn lcl_and_theta_e_against_earthkit() {
    let mut lcl = Residuals::new("eq. 15 against earthkit-meteo", "K");
    let mut theta_e = Residuals::new("eq. 39 against earthkit-meteo", "K");
    let table = Table::read("earthkit_bolton");
    for [p, t, td, t_lcl, expected] in table.rows([
        "pressure_pa",
        "temperature_k",
        "dewpoint_k",
        "lcl_temperature_k",
        "theta_e_k",
    ]) {
        let air = Air {
            pressure: pa(p),
            temperature: k(t),
            dewpoint: k(td),
        };
        lcl.add(air.lcl().temperature.k() - t_lcl);
        theta_e.add(air.theta_e().k() - expected);
    }
    lcl.judge(1e-8);
    theta_e.judge(0.32);
}

#[test]
fn pseudoadiabat_against_earthkit() {
    let mut residuals = Residuals::new("pseudo-adiabat against earthkit-meteo (Davies-Jones)", "K");
    let table = Table::read("earthkit_pseudoadiabat");
    for [theta_e, p, t] in table.rows(["theta_e_k", "pressure_pa", "temperature_k"]) {
        residuals.add(temperature_on_pseudoadiabat(k(theta_e), pa(p)).k() - t);
    }
    residuals.judge(0.1);
}

/// The exact path: Newton here, Brent's method there.
#[test]
fn pseudoadiabat_against_scipy() {
    let mut residuals = Residuals::new("pseudo-adiabat against SciPy's root", "K");
    let table = Table::read("scipy_pseudoadiabat");
    for [theta_e, p, t] in table.rows(["theta_e_k", "pressure_pa", "temperature_k"]) {
        residuals.add(temperature_on_pseudoadiabat(k(theta_e), pa(p)).k() - t);
    }
    residuals.judge(1e-8);
}

/// What eq. 39 stands for: the pseudo-adiabatic lapse rate, integrated from 1000 hPa. Davies-Jones (2008) puts the
/// overall error of the formula at up to 0.2 K.
#[test]
fn pseudoadiabat_against_its_lapse_rate() {
    let mut residuals = Residuals::new("pseudo-adiabat against the integrated lapse rate", "K");
    let table = Table::read("scipy_lapse_rate");
    for [start, p, t] in table.rows(["start_temperature_k", "pressure_pa", "temperature_k"]) {
        let theta_e = Air {
            pressure: pa(1e5),
            temperature: k(start),
            dewpoint: k(start),
        }
        .theta_e();
        residuals.add(temperature_on_pseudoadiabat(theta_e, pa(p)).k() - t);
    }
    residuals.judge(0.2);
}

/// Saturated-adiabatic lapse rates at 1000 hPa, K/km, -30..30 degC, as printed in handbooks (Smithsonian Meteorological
/// Tables; from memory, so to 0.15 K/km).
#[test]
fn lapse_rate_against_handbook_values() {
    let mut residuals =
        Residuals::new("saturated lapse rate at 1000 hPa against handbooks", "K/km");
    for (t, printed) in [
        (-30.0, 9.2),
        (-20.0, 8.6),
        (-10.0, 7.7),
        (0.0, 6.5),
        (10.0, 5.3),
        (20.0, 4.3),
        (30.0, 3.6),
    ] {
        let here = Temperature::from_c(t);
        let theta_e = Air {
            pressure: pa(1e5),
            temperature: here,
            dewpoint: here,
        }
        .theta_e();
        let state = |p: f64| {
            let t = temperature_on_pseudoadiabat(theta_e, pa(p));
            let air = Air {
                pressure: pa(p),
                temperature: t,
                dewpoint: t,
            };
            VirtualLevel {
                pressure: pa(p),
                virtual_temperature: air.virtual_temperature(),
            }
        };
        let (below, above) = (100_100.0, 99_900.0);
        let depth = thickness(state(below), state(above));
        let warmer = temperature_on_pseudoadiabat(theta_e, pa(below)).k();
        let colder = temperature_on_pseudoadiabat(theta_e, pa(above)).k();
        residuals.add((warmer - colder) / depth * 1000.0 - printed);
    }
    residuals.judge(0.15);
}

/// Weisman & Klemp (1982) profile; SciPy integrates the analytic profile itself.
#[test]
fn ascents_of_the_weisman_klemp_profile() {
    let profile = Table::read("weisman_klemp_profile");
    let results = Table::read("weisman_klemp");
    // Every 100 m, every 200 m, every 500 m: 0.5 % holds for the levels a coarse message would have, too.
    for (every, what) in [(1, "100 m"), (2, "200 m"), (5, "500 m")] {
        let mut areas = Residuals::new("CAPE and CIN of Weisman & Klemp, relative", "");
        let mut levels = Residuals::new("LCL, LFC and EL of Weisman & Klemp", "Pa");
        println!("levels {what} apart:");
        for [qv0, cape, cin, lcl, lfc, el] in results.rows([
            "qv0_gkg", "cape_jkg", "cin_jkg", "lcl_pa", "lfc_pa", "el_pa",
        ]) {
            let columns: Vec<[f64; 4]> = profile
                .rows(["qv0_gkg", "pressure_pa", "temperature_k", "dewpoint_k"])
                .filter(|row| row[0] == qv0)
                .step_by(every)
                .collect();
            let column = |i: usize| columns.iter().map(|row| row[i]).collect::<Vec<f64>>();
            let dewpoints: Vec<Option<f64>> = column(3).into_iter().map(Some).collect();
            let environment = Environment::new(&column(1), &column(2), &dewpoints).unwrap();
            for ascent in [
                lift(&environment, environment.bottom(), Method::default()).unwrap(),
                lift_exactly(&environment, environment.bottom(), Method::default()).unwrap(),
            ] {
                areas.add(ascent.cape / cape - 1.0);
                if every == 1 {
                    areas.add(ascent.cin.unwrap() / cin - 1.0);
                    levels.add(ascent.lcl.pressure.pa() - lcl);
                    levels.add(ascent.lfc.unwrap().pa() - lfc);
                    levels.add(ascent.el.unwrap().pa() - el);
                }
                assert!(!ascent.at_least);
            }
        }
        areas.judge(0.005);
        if every == 1 {
            levels.judge(50.0);
        }
    }
}

#[test]
fn heights_of_the_standard_atmosphere() {
    let table = Table::read("standard_atmosphere_1976");
    let rows: Vec<[f64; 3]> = table
        .rows(["height_m", "temperature_k", "pressure_pa"])
        .collect();
    let mut residuals = Residuals::new("heights summed from thickness, share of the tolerance", "");
    let mut height = 0.0;
    for pair in rows.windows(2) {
        let level = |row: &[f64; 3]| VirtualLevel {
            pressure: pa(row[2]),
            virtual_temperature: k(row[1]),
        };
        height += thickness(level(&pair[0]), level(&pair[1]));
        // 1 m or 5e-5 of the height: R is 287.05 here, 287.053 in the standard.
        residuals.add((height - pair[1][0]) / (5e-5 * pair[1][0]).max(1.0));
    }
    residuals.judge(1.0);

    let column = |i: usize| rows.iter().map(|row| row[i]).collect::<Vec<f64>>();
    let mut dewpoints = vec![None; rows.len()];
    // So cold a dew point that there is no vapour.
    dewpoints[0] = Some(60.0);
    let environment = Environment::new(&column(2), &column(1), &dewpoints).unwrap();
    let total = environment
        .thickness(pa(rows[0][2]), pa(rows[rows.len() - 1][2]))
        .unwrap();
    assert!(
        (total - height).abs() < 1e-6,
        "{total} m through the environment, {height} m level by level"
    );
}
