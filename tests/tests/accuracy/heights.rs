//! Heights from pressure and virtual temperature.

use crate::{k, pa};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_thermo::*;

pub fn standard_atmosphere(report: &mut Report) {
    report.section(
        "Heights",
        &["The gas constant is 287.05 here, 287.053 in the standard: 1e-5 of the height."],
    );
    let table = Table::read("standard_atmosphere_1976");
    let rows: Vec<[f64; 3]> = table
        .rows(["height_m", "temperature_k", "pressure_pa"])
        .collect();
    let column = |i: usize| rows.iter().map(|row| row[i]).collect::<Vec<f64>>();
    let mut dewpoints = vec![None; rows.len()];
    // So cold a dew point that there is no vapour.
    dewpoints[0] = Some(60.0);
    let environment = Environment::new(&column(2), &column(1), &dewpoints).unwrap();

    let bound = |height: f64| (5e-5 * height).max(1.0);
    let words = "1 m or 5e-5 of height";
    let mut summed = Residuals::new("thickness summed, US Standard Atmosphere 1976", "m", words);
    let mut integrated = Residuals::new(
        "thickness of an environment, US Standard Atmosphere 1976",
        "m",
        words,
    );
    let mut height = 0.0;
    for pair in rows.windows(2) {
        let level = |row: &[f64; 3]| VirtualLevel {
            pressure: pa(row[2]),
            virtual_temperature: k(row[1]),
        };
        height += thickness(level(&pair[0]), level(&pair[1]));
        let [expected, _, pressure] = pair[1];
        summed.add(height - expected, bound(expected));
        let whole = environment.thickness(pa(rows[0][2]), pa(pressure)).unwrap();
        integrated.add(whole - expected, bound(expected));
    }
    report.judge(&summed);
    report.judge(&integrated);
}
