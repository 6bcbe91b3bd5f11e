//! A drag without a window: how long each step computes.
//!
//! `cargo bench -p dewbound-session --bench drag` moves a surface value 500 times on a profile of 6,000 levels and prints
//! the median and the 99th percentile of the computing time of a step, in milliseconds of this machine and as a ratio to the
//! yardstick: `f64::exp` mapped over a buffer of the same length (median of 31 runs). The ratio is what may be compared
//! between machines. A file named after `--` is used instead of the invented profile.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::sounding::thermo::{
    KAPPA, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
};
use dewbound_session::{Command, Config, Session, SurfaceQuantity};
use std::fmt::Write;
use std::hint::black_box;
use std::time::{Duration, Instant};

const LEVELS: usize = 6_000;
const STEPS: usize = 500;

fn main() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = Session::new(Config::within(folder.path()));
    // cargo adds `--bench` of its own.
    match std::env::args()
        .skip(1)
        .find(|argument| !argument.starts_with("--"))
    {
        Some(file) => session.open_paths(vec![file.into()]),
        None => session.open_bytes("invented.csv".to_owned(), profile().into_bytes()),
    }
    session.wait();
    let item = session.current().expect("a sounding that can be read");
    let levels = item.received().environment_rows().len();
    let repairs: usize = item
        .findings()
        .iter()
        .map(|finding| finding.repairs.len())
        .sum();
    println!(
        "{} levels, {} findings with {repairs} repairs",
        levels,
        item.findings().len()
    );
    let yardstick = yardstick(levels);
    println!(
        "yardstick: exp over {levels} numbers, {:.3} ms",
        millis(yardstick)
    );
    for (quantity, from, to) in [
        (SurfaceQuantity::Dewpoint, 22.0, 12.0),
        (SurfaceQuantity::Temperature, 36.0, 30.0),
    ] {
        let start = session.current().unwrap().document().clone();
        session.apply(Command::BeginGesture);
        let mut times: Vec<Duration> = (0..STEPS)
            .map(|step| {
                let share = step as f64 / (STEPS - 1) as f64;
                let value = Temperature::from_c(from + (to - from) * share);
                let started = Instant::now();
                session.apply(Command::SetSurface(quantity, value));
                started.elapsed()
            })
            .collect();
        session.apply(Command::EndGesture);
        assert_ne!(*session.current().unwrap().document(), start);
        session.apply(Command::Undo);
        times.sort_unstable();
        let at = |share: f64| times[((times.len() - 1) as f64 * share) as usize];
        for (name, time) in [("median", at(0.5)), ("99th percentile", at(0.99))] {
            println!(
                "{}, {name}: {:.2} ms, {:.1} yardsticks",
                quantity.words(),
                millis(time),
                time.as_secs_f64() / yardstick.as_secs_f64()
            );
        }
    }
}

fn millis(time: Duration) -> f64 {
    time.as_secs_f64() * 1e3
}

fn yardstick(levels: usize) -> Duration {
    let input: Vec<f64> = (0..levels).map(|n| -(n as f64) / levels as f64).collect();
    let mut output = vec![0.0; levels];
    let mut times: Vec<Duration> = (0..31)
        .map(|_| {
            let started = Instant::now();
            for (to, from) in output.iter_mut().zip(black_box(&input)) {
                *to = from.exp();
            }
            black_box(&output);
            started.elapsed()
        })
        .collect();
    times.sort_unstable();
    times[times.len() / 2]
}

/// A moist-reading surface over a mixed layer, then a moist plains afternoon; one row a second, columns.
fn profile() -> String {
    let mut text =
        "# station: Upper Vale\n# time: 2031-06-14T22:00:00Z\n# position: 41.0, -146.0, 400\n\
                    time_s,pressure_hpa,temperature_c,dewpoint_c\n0,965.0,34.0,20.0\n"
            .to_owned();
    // Corners above the mixed layer: pressure, theta, dew point.
    let corners = [
        (830.0, 306.0, 14.7),
        (800.0, 315.0, 2.0),
        (700.0, 316.5, -6.0),
        (500.0, 322.0, -28.0),
        (400.0, 325.5, -38.0),
        (300.0, 330.0, -52.0),
        (200.0, 345.0, -70.0),
        (100.0, 400.0, -88.0),
        (15.0, 720.0, -95.0),
    ];
    for row in 1..LEVELS {
        let share = row as f64 / (LEVELS - 1) as f64;
        let hpa = 965.0 * (15.0_f64 / 965.0).powf(share);
        let (t, td) = if hpa > 830.0 {
            let p = Pressure::from_hpa(hpa);
            let w = 0.0125 - 0.001 * (965.0 - hpa) / 135.0;
            (
                temperature_on_dry_adiabat(Temperature::from_k(306.0), p).c(),
                dewpoint_from_mixing_ratio(p, w).c(),
            )
        } else {
            let pair = corners
                .windows(2)
                .find(|pair| hpa <= pair[0].0 && hpa >= pair[1].0 - 1e-9)
                .unwrap();
            let (low, high) = (pair[0], pair[1]);
            let part = (low.0 / hpa).ln() / (low.0 / high.0).ln();
            let theta = low.1 + (high.1 - low.1) * part;
            (
                theta * (hpa / 1000.0).powf(KAPPA) - 273.15,
                low.2 + (high.2 - low.2) * part,
            )
        };
        writeln!(text, "{row},{hpa:.4},{t:.3},{:.3}", td.min(t)).unwrap();
    }
    text
}
