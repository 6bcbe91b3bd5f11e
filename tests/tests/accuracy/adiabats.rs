//! Pseudo-adiabats by exact solution.

use crate::{k, pa};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

/// The domain of the published accuracy of eq. 39, K of theta-w (Davies-Jones 2008).
const PUBLISHED: std::ops::RangeInclusive<f64> = 253.15..=313.15;

pub fn pseudoadiabats(report: &mut Report) {
    report.section(
        "Pseudo-adiabats, exact path",
        &[
            "SciPy finds the root of eq. 39 (250..420 K, 5..1050 hPa) and integrates the pseudo-adiabatic lapse rate itself (DOP853,",
            "rtol 1e-10) from saturated air of -30..35 degC at 1050..600 hPa up to 100 hPa. Davies-Jones (2008) puts the overall error",
            "of eq. 39 at up to 0.2 K for theta-w -20..40 degC, 100..1050 hPa. Beyond that no bound is published: ours is 1 K.",
        ],
    );
    let table = Table::read("scipy_pseudoadiabat");
    let rows = table.rows(["theta_e_k", "pressure_pa", "temperature_k"]);
    let differences =
        rows.map(|[theta_e, p, t]| temperature_on_pseudoadiabat(k(theta_e), pa(p)).k() - t);
    report.judge(&Residuals::all(
        "eq. 39 solved, root by SciPy",
        "K",
        1e-8,
        differences,
    ));

    let table = Table::read("earthkit_pseudoadiabat");
    let rows = table.rows(["theta_e_k", "pressure_pa", "temperature_k"]);
    let differences =
        rows.map(|[theta_e, p, t]| temperature_on_pseudoadiabat(k(theta_e), pa(p)).k() - t);
    report.judge(&Residuals::all(
        "eq. 39 solved, earthkit-meteo (own vapour pressure, 0.2 % off)",
        "K",
        0.1,
        differences,
    ));

    let rows: Vec<[f64; 5]> = Table::read("scipy_lapse_rate")
        .rows([
            "start_pressure_pa",
            "start_temperature_k",
            "theta_w_k",
            "pressure_pa",
            "temperature_k",
        ])
        .collect();
    let start = |row: &[f64; 5]| Air {
        pressure: pa(row[0]),
        temperature: k(row[1]),
        dewpoint: k(row[1]),
    };
    let by_theta_e = |row: &[f64; 5]| {
        temperature_on_pseudoadiabat(start(row).theta_e(), pa(row[3])).k() - row[4]
    };
    let by_path = |row: &[f64; 5]| {
        let states = parcel_path(start(row), Method::default(), &[pa(row[3])]);
        states
            .first()
            .map_or(f64::NAN, |state| state.temperature.k())
            - row[4]
    };
    let published = |row: &&[f64; 5]| PUBLISHED.contains(&row[2]);
    for (what, difference) in [
        ("by theta-e", &by_theta_e as &dyn Fn(&[f64; 5]) -> f64),
        ("by parcel_path", &by_path),
    ] {
        report.judge(&Residuals::all(
            format!("{what}, theta-w -20..40 degC, integrated lapse rate"),
            "K",
            0.2,
            rows.iter().filter(published).map(difference),
        ));
        report.judge(&Residuals::all(
            format!("{what}, outside that, integrated lapse rate"),
            "K",
            1.0,
            rows.iter().filter(|row| !published(row)).map(difference),
        ));
    }
    let beyond: Vec<&[f64; 5]> = rows
        .iter()
        .filter(|row| by_theta_e(row).abs() > 0.2)
        .collect();
    let coldest = beyond
        .iter()
        .map(|row| row[2])
        .fold(f64::INFINITY, f64::min);
    let warmest = rows.iter().map(|row| row[2]).fold(0.0, f64::max);
    let text = if beyond.is_empty() {
        "Nowhere more than 0.2 K.".to_owned()
    } else {
        format!(
            "More than 0.2 K in {} of {} cases, the coldest at theta-w {:.1} degC, the warmest tried at {:.1} degC.",
            beyond.len(),
            rows.len(),
            coldest - ZERO_CELSIUS,
            warmest - ZERO_CELSIUS
        )
    };
    report.remark(&[&text]);

    report.judge(&handbook());
}

/// Saturated-adiabatic lapse rates at 1000 hPa, K/km, -30..30 degC, as printed in handbooks (Smithsonian Meteorological
/// Tables; from memory, so to 0.15 K/km).
fn handbook() -> Residuals {
    let printed = [
        (-30.0, 9.2),
        (-20.0, 8.6),
        (-10.0, 7.7),
        (0.0, 6.5),
        (10.0, 5.3),
        (20.0, 4.3),
        (30.0, 3.6),
    ];
    let differences = printed.map(|(t, printed)| {
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
        (warmer - colder) / depth * 1000.0 - printed
    });
    Residuals::all(
        "saturated lapse rate at 1000 hPa, handbook values (from memory)",
        "K/km",
        0.15,
        differences,
    )
}
