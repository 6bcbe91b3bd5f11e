//! Time of an ascent against the time of `f64::exp` over as many numbers, in one run and on one thread.
//!
//! `cargo bench -p dewbound-thermo`

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

fn measure(levels: usize) {
    let (p, t, td) = profile(levels);
    let input: Vec<f64> = (0..levels)
        .map(|i| -3.0 + 6.0 * i as f64 / levels as f64)
        .collect();
    let mut output = vec![0.0; levels];
    let exp = median_ns(|| {
        for (y, x) in output.iter_mut().zip(black_box(&input)) {
            *y = x.exp();
        }
        black_box(&mut output);
    });
    let row = |what: &str, ns: f64, parcels: f64| {
        println!(
            "{levels:>7}  {what:<56} {:>9.1} us {:>9.2}",
            ns / 1e3,
            ns / exp / parcels
        );
    };
    row("exp over a buffer (the yardstick)", exp, 1.0);

    let build = || {
        Environment::new(black_box(&p), black_box(&t), black_box(&td)).expect("a usable profile")
    };
    let environment = build();
    let fixed = starts(&environment);
    row(
        "environment, new",
        median_ns(|| drop(black_box(build()))),
        1.0,
    );
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
    row(
        "environment, refilled, all of it different",
        median_ns(|| refill(&top_moved, &|_| ())),
        1.0,
    );
    row(
        "environment, refilled, lowest tenth different",
        median_ns(|| refill(&moved, &|_| ())),
        1.0,
    );
    let mixed = || {
        black_box(mixed_start(&environment, MIXED_DEPTH));
    };
    row("mixed start", median_ns(mixed), 1.0);
    let most_unstable = || {
        black_box(most_unstable_start(
            &environment,
            MOST_UNSTABLE_DEPTH,
            |_| true,
        ));
    };
    row("most unstable start", median_ns(most_unstable), 1.0);

    row(
        "lift, per parcel",
        median_ns(|| lift_all(&environment, &fixed)),
        3.0,
    );
    let whole = || {
        let environment = build();
        lift_all(&environment, &fixed);
    };
    row(
        "new environment + 3 lifts, per parcel",
        median_ns(whole),
        3.0,
    );
    let whole = |environment: &Environment| lift_all(environment, &starts(environment));
    row(
        "refilled (all) + starts + 3 lifts, per parcel",
        median_ns(|| refill(&top_moved, &whole)),
        3.0,
    );
    row(
        "refilled (lowest tenth) + starts + 3 lifts, per parcel",
        median_ns(|| refill(&moved, &whole)),
        3.0,
    );
    let sixty = || {
        for i in 0..60 {
            let dewpoint = Temperature::from_k(fixed[0].dewpoint.k() - 3.0 + 0.1 * f64::from(i));
            black_box(lift(
                &environment,
                Air {
                    dewpoint,
                    ..fixed[0]
                },
                Method::default(),
            ));
        }
    };
    row(
        "60 lifts through one environment, per parcel",
        median_ns(sixty),
        60.0,
    );
    let newton = || {
        let theta_e = fixed[0].theta_e();
        for &p in &p {
            black_box(temperature_on_pseudoadiabat(theta_e, Pressure::from_pa(p)));
        }
    };
    row(
        "plain Newton at every level, temperature only",
        median_ns(newton),
        1.0,
    );
    let exactly = || {
        for start in &fixed {
            black_box(lift_exactly(&environment, *start, Method::default()));
        }
    };
    row("lift_exactly, per parcel", median_ns(exactly), 3.0);

    for (name, start) in ["surface", "mixed", "most unstable"].iter().zip(fixed) {
        let fast = lift(&environment, start, Method::default()).expect("an ascent");
        let exact = lift_exactly(&environment, start, Method::default()).expect("an ascent");
        println!(
            "{levels:>7}  {name}: CAPE {:.3} J/kg, exactly {:.3}; buoyant layers: {}",
            fast.cape,
            exact.cape,
            fast.buoyant.len()
        );
    }
}

fn main() {
    println!(
        "{:>7}  {:<56} {:>12} {:>9}",
        "levels", "what", "time", "exp/level"
    );
    for levels in [100, 6_000] {
        measure(levels);
    }
}
