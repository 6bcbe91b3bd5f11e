//! Formulas for one point of air.

use crate::{k, pa};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

/// Relative differences (%) of a formula of saturation from a table.
fn saturation_line(
    what: &str,
    table: &str,
    percent: f64,
    formula: fn(Temperature) -> Pressure,
) -> Residuals {
    let table = Table::read(table);
    let rows = table.rows(["temperature_c", "vapour_pressure_pa"]);
    let differences = rows.map(|[t, e]| 100.0 * (formula(Temperature::from_c(t)).pa() / e - 1.0));
    Residuals::all(what, "%", percent, differences)
}

pub fn saturation(report: &mut Report) {
    report.section(
        "Saturation",
        &[
            "Bolton (1980) states 0.3 % for eq. 10 over -35..35 degC. The printed tables of his paper could not be opened here and",
            "are not used: the references are equations of state, below 0 degC for supercooled water (IAPWS G12-15).",
            "Over ice 1 % for -65..0 degC (Sonntag on the Magnus form of WMO-No. 8; from memory).",
        ],
    );
    for (what, table) in [
        (
            "eq. 10 over water -35..35 degC, IAPWS-95 and G12-15",
            "iapws_water",
        ),
        ("eq. 10 over water 0..35 degC, CoolProp", "coolprop_water"),
    ] {
        report.judge(&saturation_line(
            what,
            table,
            0.3,
            saturation_vapour_pressure,
        ));
    }
    for (what, table) in [
        ("over ice -65..0 degC, IAPWS R14-08", "iapws_ice"),
        ("over ice -65..0 degC, CoolProp", "coolprop_ice"),
    ] {
        report.judge(&saturation_line(
            what,
            table,
            1.0,
            saturation_vapour_pressure_over_ice,
        ));
    }
    let table = Table::read("iapws_water");
    let rows = table.rows(["temperature_c", "vapour_pressure_pa"]);
    // L/(Rv T²) is 0.055/K at 35 degC and more below, so that 0.3 % of e is 0.055 K at most.
    let differences = rows.map(|[t, e]| dewpoint_from_vapour_pressure(pa(e)).c() - t);
    report.judge(&Residuals::all(
        "dew point of a vapour pressure, IAPWS-95 and G12-15",
        "K",
        0.055,
        differences,
    ));
}

fn air([p, t, td]: [f64; 3]) -> Air {
    Air {
        pressure: pa(p),
        temperature: k(t),
        dewpoint: k(td),
    }
}

pub fn condensation(report: &mut Report) {
    report.section(
        "Condensation level",
        &[
            "Bolton (1980) states 0.1 K for eq. 15 (from memory). SciPy finds the level from its definition: constant w and theta,",
            "saturated by eq. 10. earthkit-meteo holds the same formula: equal but for rounding.",
        ],
    );
    for (what, table, bound) in [
        (
            "eq. 15, -35..35 degC, root of its definition (SciPy)",
            "scipy_lcl",
            0.1,
        ),
        ("eq. 15, earthkit-meteo", "earthkit_bolton", 1e-8),
    ] {
        let table = Table::read(table);
        let rows = table.rows([
            "pressure_pa",
            "temperature_k",
            "dewpoint_k",
            "lcl_temperature_k",
        ]);
        let differences = rows.map(|[p, t, td, lcl]| air([p, t, td]).lcl().temperature.k() - lcl);
        report.judge(&Residuals::all(what, "K", bound, differences));
    }
    // The pressure where theta with the exponent 0.2854 (1 - 0.28 w) meets that temperature: 0.1 K of it is
    // 0.1/180/0.27 = 0.2 % of the pressure, or 2 hPa, at the coldest.
    let table = Table::read("scipy_lcl");
    let rows = table.rows([
        "pressure_pa",
        "temperature_k",
        "dewpoint_k",
        "lcl_temperature_k",
    ]);
    let differences = rows.map(|[p, t, td, expected]| {
        let e = 6.112 * (17.67 * (td - 273.15) / (td - 273.15 + 243.5)).exp() * 100.0;
        let w = 287.05 / 461.52 * e / (p - e);
        let pressure = p * (expected / t).powf(1.0 / (0.2854 * (1.0 - 0.28 * w)));
        (air([p, t, td]).lcl().pressure.pa() - pressure) / 100.0
    });
    report.judge(&Residuals::all(
        "pressure of the LCL, root of its definition (SciPy)",
        "hPa",
        2.0,
        differences,
    ));
}

pub fn theta_e(report: &mut Report) {
    report.section(
        "Equivalent potential temperature",
        &[
            "earthkit-meteo's eq. 39 with its own saturation and kappa, which differ by up to 0.2 % and 0.1 %: at 420 K that is",
            "420 K ln(420/300) 0.002 + 300 K ln(1000/700) 0.00029 = 0.32 K.",
        ],
    );
    let table = Table::read("earthkit_bolton");
    let rows = table.rows(["pressure_pa", "temperature_k", "dewpoint_k", "theta_e_k"]);
    let differences = rows.map(|[p, t, td, expected]| air([p, t, td]).theta_e().k() - expected);
    report.judge(&Residuals::all(
        "eq. 39 up to 420 K, earthkit-meteo",
        "K",
        0.32,
        differences,
    ));
}
