//! The numbers against outside references, in a table: cases, 75th and 99th percentile and maximum of the differences,
//! and the bound that must hold. Fails when a bound is exceeded or a line has no cases.
//!
//! `cargo test -p dewbound-tests --test accuracy` prints the table of all checks; a word after `--` runs only checks with
//! it in their name. Checks run one after another, whatever the options of the ordinary test harness say.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod adiabats;
mod ascents;
mod crossings;
mod fast_path;
mod formulas;
mod heights;
mod processes;
mod profiles;
mod real;

use dewbound_tests::residuals::Report;
use dewbound_thermo::{Pressure, Temperature};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::process::ExitCode;

/// A check, by name: it adds its lines to the report.
type Check = (&'static str, fn(&mut Report));

const CHECKS: &[Check] = &[
    ("saturation", formulas::saturation),
    ("condensation", formulas::condensation),
    ("theta_e", formulas::theta_e),
    ("pseudoadiabats", adiabats::pseudoadiabats),
    ("processes", processes::integrated),
    ("theta_e_drift", processes::theta_e_along),
    ("entropy", processes::entropy),
    ("fast_path", fast_path::temperatures),
    ("ascents_by_scipy", ascents::by_scipy),
    ("weisman_klemp", ascents::weisman_klemp),
    ("independent", ascents::independent),
    ("synthetic", fast_path::synthetic_ascents),
    ("real", real::ascents),
    ("heights", heights::standard_atmosphere),
];

fn main() -> ExitCode {
    let words: Vec<String> = std::env::args().skip(1).collect();
    if words.iter().any(|word| word == "--list") {
        for (name, _) in CHECKS {
            println!("{name}: test");
        }
        return ExitCode::SUCCESS;
    }
    let wanted: Vec<&String> = words.iter().filter(|word| !word.starts_with('-')).collect();
    let mut report = Report::default();
    let mut ran = 0;
    for (name, check) in CHECKS {
        if !(wanted.is_empty() || wanted.iter().any(|word| name.contains(word.as_str()))) {
            continue;
        }
        ran += 1;
        // One that breaks off must not hide the others.
        if catch_unwind(AssertUnwindSafe(|| check(&mut report))).is_err() {
            report.fail(format!("{name}: broke off (see above)"));
        }
    }
    println!("\naccuracy: {ran} of {} checks ran", CHECKS.len());
    if ran > 0 {
        println!("{}\n", report.table());
    }
    for failure in report.failures() {
        println!("FAILED {failure}");
    }
    if report.failures().is_empty() {
        println!("accuracy: ok\n");
        ExitCode::SUCCESS
    } else {
        ExitCode::FAILURE
    }
}

fn k(kelvin: f64) -> Temperature {
    Temperature::from_k(kelvin)
}

fn pa(pascal: f64) -> Pressure {
    Pressure::from_pa(pascal)
}
