//! Time of ascents and numbers against the time of `f64::exp` over as many numbers as the profile has levels, in one run
//! and on one thread: one table, ratios with their goals.
//!
//! `cargo bench -p dewbound-thermo --bench speed`

#![allow(clippy::expect_used)]

use dewbound_thermo::*;
use std::hint::black_box;
use std::time::Instant;

const RUNS: usize = 31;

/// Median time of `RUNS` runs, ns. Short work is repeated inside a run so that the clock's grain doesn't matter.
fn median_ns(mut work: impl FnMut()) -> f64 {
    work();
    let once = Instant::now();
    work();
    let repeats = (200_000.0 / once.elapsed().as_nanos().max(1) as f64)
        .ceil()
        .clamp(1.0, 10_000.0) as usize;
    let mut times: Vec<f64> = (0..RUNS)
        .map(|_| {
            let begin = Instant::now();
            for _ in 0..repeats {
                work();
            }
            begin.elapsed().as_nanos() as f64 / repeats as f64
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times[RUNS / 2]
}

/// An invented warm-season ascent: mixed layer, cap, moist free troposphere, isothermal stratosphere; with sensor
/// noise, so that branches are as hard to foresee as in life.
fn profile(levels: usize) -> (Vec<f64>, Vec<f64>, Vec<Option<f64>>) {
    let mut seed = 0x9e37_79b9_7f4a_7c15_u64;
    let mut noise = move || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1u64 << 53) as f64 - 0.5
    };
    let (bottom, top) = (98_000.0_f64, 1_000.0_f64);
    let (mut p, mut t, mut td) = (Vec::new(), Vec::new(), Vec::new());
    for i in 0..levels {
        // Even in time for a balloon that rises evenly: even in ln p, near enough.
        let z = (bottom / top).ln() * i as f64 / (levels - 1) as f64;
        let km = 7.6 * z;
        let temperature = match km {
            k if k < 1.2 => 304.0 - 9.7 * k,
            k if k < 1.7 => 292.4 + 3.0 * (k - 1.2),
            k if k < 12.5 => 293.9 - 7.1 * (k - 1.7),
            _ => 217.2,
        };
        let depression = match km {
            k if k < 1.2 => 11.0 - 6.5 * k,
            k if k < 1.7 => 3.2 + 26.0 * (k - 1.2),
            k if k < 12.5 => 16.2,
            k => 16.2 + 2.0 * (k - 12.5),
        };
        p.push(bottom * (-z).exp());
        t.push(temperature + 0.1 * noise());
        td.push(Some((temperature - depression + 0.3 * noise()).max(170.0)));
    }
    (p, t, td)
}

/// The profile with the dew point of its lowest tenth moved: what dragging the surface through a mixed layer does.
fn dragged(dewpoint: &[Option<f64>], by: f64) -> Vec<Option<f64>> {
    let lowest = dewpoint.len() / 10;
    dewpoint
        .iter()
        .enumerate()
        .map(|(i, td)| td.map(|td| if i < lowest { td + by } else { td }))
        .collect()
}

/// A wind at every level: veering in the lowest 3 km, then stronger with height.
fn winds(environment: &Environment) -> WindProfile {
    let levels = environment.pressure().iter().filter_map(|&p| {
        let pressure = Pressure::from_pa(p);
        let height = environment.height_above_bottom(pressure)?;
        let direction = 160.0 + 100.0 * (height / 3_000.0).min(1.0);
        Some(WindLevel {
            height,
            pressure: Some(pressure),
            wind: Vector::from_wind(direction, 6.0 + 2.5e-3 * height),
        })
    });
    WindProfile::new(levels).expect("a wind profile")
}

fn starts(environment: &Environment) -> [Air; 3] {
    [
        environment.bottom(),
        mixed_start(environment, MIXED_DEPTH).expect("a mixed parcel"),
        most_unstable_start(environment, MOST_UNSTABLE_DEPTH, |_| true)
            .expect("a most unstable parcel")
            .1,
    ]
}

fn lift_all(environment: &Environment, starts: &[Air]) {
    for start in starts {
        black_box(lift(environment, *start, Method::default()));
    }
}

/// The three parcels, all their further numbers, and those of the layers.
fn parcels_and_layers(environment: &Environment, winds: &WindProfile) -> EffectiveLayer {
    let lifted = starts(environment).map(|start| {
        let lifted = Lifted::of(environment, start, Method::default()).expect("an ascent");
        ParcelNumbers::of(environment, &lifted)
    });
    let layers = LayerNumbers::of(environment, Some(winds));
    black_box(EffectiveLayer {
        inflow: layers.inflow,
        el_height: lifted[2].el_height,
    })
}

/// The yardstick and the table's lines.
struct Table {
    levels: usize,
    exp: f64,
}

impl Table {
    fn row(&self, what: &str, parcels: f64, goal: Option<f64>, work: impl FnMut()) {
        let ns = median_ns(work);
        let ratio = ns / self.exp / parcels;
        let verdict = match goal {
            Some(goal) if ratio <= goal => format!("goal {goal}: met"),
            Some(goal) => format!(
                "goal {goal}: missed by {:.0} %",
                100.0 * (ratio / goal - 1.0)
            ),
            None => String::new(),
        };
        println!(
            "{:>6}  {what:<58} {:>9.1} us {ratio:>8.2}  {verdict}",
            self.levels,
            ns / 1e3,
        );
    }
}

fn measure(levels: usize) {
    let (p, t, td) = profile(levels);
    let input: Vec<f64> = (0..levels)
        .map(|i| -3.0 + 6.0 * i as f64 / levels as f64)
        .collect();
    let mut output = vec![0.0; levels];
    let mut exp = || {
        for (y, x) in output.iter_mut().zip(black_box(&input)) {
            *y = x.exp();
        }
        black_box(&mut output);
    };
    let table = Table {
        levels,
        exp: median_ns(&mut exp),
    };
    table.row("exp over a buffer (the yardstick)", 1.0, None, exp);

    let build = || {
        Environment::new(black_box(&p), black_box(&t), black_box(&td)).expect("a usable profile")
    };
    let environment = build();
    let fixed = starts(&environment);
    table.row("environment, new", 1.0, None, || drop(black_box(build())));
    // Two profiles by turns, so that every call has something to do.
    let moved = [dragged(&td, 0.5), dragged(&td, -0.5)];
    let mut top_moved = [td.clone(), td.clone()];
    for (columns, by) in top_moved.iter_mut().zip([0.1, -0.1]) {
        if let Some(Some(last)) = columns.last_mut() {
            *last += by;
        }
    }
    let mut memory = Some(build());
    let mut turn = 0;
    let mut refill = |columns: &[Vec<Option<f64>>; 2], then: &dyn Fn(&Environment)| {
        turn += 1;
        if let Some(old) = memory.take() {
            let environment =
                old.refilled(black_box(&p), black_box(&t), black_box(&columns[turn % 2]));
            let environment = environment.expect("a usable profile");
            then(&environment);
            memory = Some(environment);
        }
    };
    table.row(
        "environment, another profile at the same pressures",
        1.0,
        None,
        || {
            refill(&top_moved, &|_| ());
        },
    );
    table.row(
        "environment, lowest tenth of the profile different",
        1.0,
        None,
        || {
            refill(&moved, &|_| ());
        },
    );
    table.row("mixed start", 1.0, None, || {
        black_box(mixed_start(&environment, MIXED_DEPTH));
    });
    table.row("most unstable start", 1.0, None, || {
        black_box(most_unstable_start(
            &environment,
            MOST_UNSTABLE_DEPTH,
            |_| true,
        ));
    });
    table.row("lift, a parcel", 3.0, None, || {
        lift_all(&environment, &fixed)
    });

    let goal = (levels >= 1_000).then_some(1.5);
    let three = |environment: &Environment| lift_all(environment, &starts(environment));
    table.row(
        "three parcels: new environment, starts, lifts; a parcel",
        3.0,
        goal,
        || three(&build()),
    );
    table.row(
        "the same, another profile at the same pressures",
        3.0,
        goal,
        || {
            refill(&top_moved, &three);
        },
    );
    table.row(
        "the same, lowest tenth of the profile different",
        3.0,
        goal,
        || {
            refill(&moved, &three);
        },
    );

    let wind = winds(&environment);
    let effective = parcels_and_layers(&environment, &wind);
    table.row(
        "3 lifts and the parcels' further numbers",
        1.0,
        None,
        || {
            for start in &fixed {
                let lifted =
                    Lifted::of(&environment, *start, Method::default()).expect("an ascent");
                black_box(ParcelNumbers::of(&environment, &lifted));
            }
        },
    );
    table.row("layer numbers", 1.0, None, || {
        black_box(LayerNumbers::of(&environment, Some(&wind)));
    });
    table.row("wind numbers", 1.0, None, || {
        black_box(WindNumbers::of(&wind, effective, Motion::Right));
    });
    let everything = |environment: &Environment| {
        let effective = parcels_and_layers(environment, &wind);
        black_box(WindNumbers::of(&wind, effective, Motion::Right));
    };
    let goal = if levels >= 1_000 { 25.0 } else { 60.0 };
    table.row(
        "everything: environment, parcels, layers, winds",
        1.0,
        Some(goal),
        || {
            let environment = build();
            everything(&environment);
        },
    );
    let known = WindNumbers::of(&wind, effective, Motion::Right);
    table.row(
        "everything after a change of the surface dew point",
        1.0,
        Some(goal),
        || {
            refill(&moved, &|environment| {
                let effective = parcels_and_layers(environment, &wind);
                black_box(WindNumbers::next(&wind, effective, Motion::Right, &known));
            });
        },
    );

    table.row(
        "60 lifts through one environment, a parcel",
        60.0,
        None,
        || {
            for i in 0..60 {
                let dewpoint =
                    Temperature::from_k(fixed[0].dewpoint.k() - 3.0 + 0.1 * f64::from(i));
                black_box(lift(
                    &environment,
                    Air {
                        dewpoint,
                        ..fixed[0]
                    },
                    Method::default(),
                ));
            }
        },
    );
    for (what, process) in [
        (
            "lift by the integrated lapse rate",
            Process::Direct(Condensate::Water),
        ),
        (
            "lift by the reversible process",
            Process::Reversible(Condensate::Water),
        ),
        (
            "lift by the reversible process, with ice",
            Process::Reversible(Condensate::WaterAndIce),
        ),
    ] {
        table.row(what, 1.0, None, || {
            black_box(lift(&environment, fixed[0], Method::of(process)));
        });
    }
    table.row(
        "plain Newton at every level, temperature only",
        1.0,
        None,
        || {
            let theta_e = fixed[0].theta_e();
            for &p in &p {
                black_box(temperature_on_pseudoadiabat(theta_e, Pressure::from_pa(p)));
            }
        },
    );
    let exact = Instant::now();
    black_box(lift_exactly(&environment, fixed[0], Method::default()));
    let exact = exact.elapsed().as_nanos() as f64;
    println!(
        "{levels:>6}  {:<58} {:>9.1} us {:>8.2}",
        "lift_exactly, a parcel (once)",
        exact / 1e3,
        exact / table.exp
    );
}

fn main() {
    println!(
        "{:>6}  {:<58} {:>12} {:>8}",
        "levels", "what", "time", "exp/level"
    );
    for levels in [100, 6_000] {
        measure(levels);
    }
}
