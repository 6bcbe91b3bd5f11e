//! Whole ascents against integrations by other hands.

use crate::pa;
use crate::profiles::{SHAPES, profile, starts};
use dewbound_tests::reference::Table;
use dewbound_tests::residuals::{Report, Residuals};
use dewbound_tests::slow_parcel;
use dewbound_thermo::*;

type Lift = fn(&Environment, Air, Method) -> Option<Ascent>;

/// Levels of one profile of a table.
fn environment(rows: &[[Option<f64>; 4]], profile: f64) -> Environment {
    let rows = rows.iter().filter(|row| row[0] == Some(profile));
    let (mut p, mut t, mut td) = (Vec::new(), Vec::new(), Vec::new());
    for row in rows {
        p.push(row[1].unwrap());
        t.push(row[2].unwrap());
        td.push(row[3]);
    }
    Environment::new(&p, &t, &td).unwrap()
}

/// Absent on one side alone is wrong by any measure.
fn both(residuals: &mut Residuals, ours: Option<f64>, expected: Option<f64>, bound: f64) {
    match (ours, expected) {
        (Some(ours), Some(expected)) => residuals.add(ours - expected, bound),
        (None, None) => {}
        _ => residuals.add(f64::NAN, bound),
    }
}

pub fn by_scipy(report: &mut Report) {
    report.section(
        "Ascents of twelve invented profiles, integrated by SciPy (quad between roots of brentq)",
        &[
            "Exact path: Gauss's rule on steps of at most 0.01 in ln p, whose error is far below 1e-6 of the area; areas under 1e-4 J/kg are rounding.",
            "Fast path: 0.1 % or 0.5 J/kg, 20 Pa (as beneath).",
        ],
    );
    let profiles: Vec<[Option<f64>; 4]> = Table::read("ascent_profiles")
        .cells(["profile", "pressure_pa", "temperature_k", "dewpoint_k"])
        .collect();
    let results: Vec<[Option<f64>; 10]> = Table::read("ascents")
        .cells([
            "profile",
            "parcel",
            "start_pa",
            "start_k",
            "start_dewpoint_k",
            "cape_jkg",
            "cin_jkg",
            "lcl_pa",
            "lfc_pa",
            "el_pa",
        ])
        .collect();

    let mut places = Residuals::new(
        "start of the mixed and most unstable parcel, SciPy",
        "K",
        "1e-6",
    );
    for row in &results {
        let environment = environment(&profiles, row[0].unwrap());
        let start = starts(&environment)[row[1].unwrap() as usize];
        places.add(start.temperature.k() - row[3].unwrap(), 1e-6);
        places.add(start.dewpoint.k() - row[4].unwrap(), 1e-6);
    }
    report.judge(&places);

    for (path, lift, [share, least, shift], area_bound, shift_bound) in [
        (
            "exact path",
            lift_exactly as Lift,
            [1e-6, 1e-4, 0.01],
            "1e-6 or 0.0001 J/kg",
            "0.01",
        ),
        (
            "fast path",
            lift as Lift,
            [1e-3, 0.5, 20.0],
            "0.1 % or 0.5 J/kg",
            "20",
        ),
    ] {
        let line = |what: &str, unit, bound: &str| {
            Residuals::new(format!("{path}: {what}, SciPy"), unit, bound)
        };
        let mut cape = line("CAPE", "J/kg", area_bound);
        let mut cin = line("CIN", "J/kg", area_bound);
        let mut levels = line("LCL, LFC and EL", "Pa", shift_bound);
        for row in &results {
            let [number, _, p, t, td, ..] = row.map(|cell| cell.unwrap_or(f64::NAN));
            let environment = environment(&profiles, number);
            let start = Air {
                pressure: pa(p),
                temperature: Temperature::from_k(t),
                dewpoint: Temperature::from_k(td),
            };
            let ascent = lift(&environment, start, Method::default()).unwrap();
            let bound = |value: f64| (share * value.abs()).max(least);
            let expected = row[5].unwrap();
            cape.add(ascent.cape - expected, bound(expected));
            both(&mut cin, ascent.cin, row[6], bound(row[6].unwrap_or(0.0)));
            for (ours, expected) in [
                (Some(ascent.lcl.pressure), row[7]),
                (ascent.lfc, row[8]),
                (ascent.el, row[9]),
            ] {
                both(&mut levels, ours.map(|level| level.pa()), expected, shift);
            }
        }
        for residuals in [&cape, &cin, &levels] {
            report.judge(residuals);
        }
    }
}

pub fn weisman_klemp(report: &mut Report) {
    report.section(
        "Ascents of the Weisman & Klemp (1982) profile, qv0 11..16 g/kg",
        &[
            "SciPy integrates the analytic profile itself, so that the bound holds what lies between levels as well: 0.5 % for levels",
            "100, 200 and 500 m apart (what a coarse message has); 50 Pa at 100 m. Both paths.",
        ],
    );
    let rows: Vec<[f64; 4]> = Table::read("weisman_klemp_profile")
        .rows(["qv0_gkg", "pressure_pa", "temperature_k", "dewpoint_k"])
        .collect();
    let mut levels = Residuals::new("LCL, LFC and EL, levels 100 m apart, SciPy", "Pa", "50");
    for (every, what) in [(1, "100 m"), (2, "200 m"), (5, "500 m")] {
        let mut areas = Residuals::new(
            format!("CAPE and CIN, levels {what} apart, SciPy"),
            "J/kg",
            "0.5 %",
        );
        for [qv0, cape, cin, lcl, lfc, el] in Table::read("weisman_klemp").rows([
            "qv0_gkg", "cape_jkg", "cin_jkg", "lcl_pa", "lfc_pa", "el_pa",
        ]) {
            let some: Vec<[Option<f64>; 4]> = rows
                .iter()
                .filter(|row| row[0] == qv0)
                .step_by(every)
                .map(|row| row.map(Some))
                .collect();
            let environment = environment(&some, qv0);
            for lift in [lift as Lift, lift_exactly as Lift] {
                let ascent = lift(&environment, environment.bottom(), Method::default()).unwrap();
                areas.add(ascent.cape - cape, 0.005 * cape);
                // CIN hangs on the top of the capped layer, which coarse levels may miss.
                if every == 1 {
                    both(&mut areas, ascent.cin, Some(cin), 0.005 * cin.abs());
                    for (ours, expected) in [
                        (Some(ascent.lcl.pressure), lcl),
                        (ascent.lfc, lfc),
                        (ascent.el, el),
                    ] {
                        both(
                            &mut levels,
                            ours.map(|level| level.pa()),
                            Some(expected),
                            50.0,
                        );
                    }
                }
            }
        }
        report.judge(&areas);
    }
    report.judge(&levels);
}

/// Steps of the independent integration in ln p: a tenth of a hectopascal at the ground.
const STEP: f64 = 1e-4;

pub fn independent(report: &mut Report) {
    report.section(
        "Exact path: ascents of 36 invented profiles by rectangles and bisection (slow_parcel, nothing of thermo in it)",
        &["Steps of 1e-4 in ln p; starts are its own, too. The bound is that of the fast path."],
    );
    let line = |what: &str| {
        Residuals::new(
            format!("exact path: {what}, rectangles"),
            "J/kg",
            "0.1 % or 0.5 J/kg",
        )
    };
    let (mut cape, mut cin) = (line("CAPE"), line("CIN"));
    for number in 0..3 * SHAPES {
        let columns = profile(number);
        let (environment, levels) = (columns.environment(), columns.in_hpa());
        let bottom = environment.bottom();
        let surface = slow_parcel::Point {
            p: bottom.pressure.hpa(),
            t: bottom.temperature.k(),
            td: bottom.dewpoint.k(),
        };
        let theirs = [
            Some(surface),
            slow_parcel::mixed_start(&levels, STEP),
            slow_parcel::most_unstable_start(&levels),
        ];
        for (start, theirs) in starts(&environment).into_iter().zip(theirs) {
            let ours = lift_exactly(&environment, start, Method::default()).unwrap();
            let slow = slow_parcel::lift(&levels, theirs.unwrap(), STEP).unwrap();
            let bound = |value: f64| (0.001 * value.abs()).max(0.5);
            cape.add(ours.cape - slow.cape, bound(slow.cape));
            // Where there is hardly a buoyant layer, one of the two may not see it at all.
            if slow.cape > 0.5 || ours.cape > 0.5 {
                both(&mut cin, ours.cin, slow.cin, bound(slow.cin.unwrap_or(0.0)));
            }
        }
    }
    report.judge(&cape);
    report.judge(&cin);
}
