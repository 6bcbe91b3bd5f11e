//! A table of 6,000 rows and ten columns against the `csv` crate on the same bytes in the same run:
//! `cargo bench -p dewbound-formats`. Prints ratios; seconds depend on the machine.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_formats::{ReadOptions, read};
use std::fmt::Write;
use std::hint::black_box;
use std::time::Instant;

const ROWS: u32 = 6_000;
const RUNS: usize = 31;

fn table() -> String {
    let mut text = String::from(
        "# station: Upper Vale\n# time: 2031-05-17T17:31:05Z\n# position: 47.5, 8.25, 430\n\
         time_s,pressure_hpa,temperature_c,dewpoint_c,rh_pct,wind_dir_deg,wind_speed_ms,height_m,lat,lon\n",
    );
    for second in 0..ROWS {
        let time = f64::from(second);
        let height = 430.0 + 5.0 * time;
        let pressure = 965.0 * (-5.0 * time / 7_500.0).exp();
        let temperature = 27.4 - (0.0065 * 5.0 * time).min(85.0);
        let direction = second % 360;
        writeln!(
            text,
            "{second},{pressure:.1},{temperature:.1},{:.1},{:.1},{direction},{:.1},{height:.0},{:.3},{:.3}",
            temperature - 8.0,
            55.3,
            5.0 + time / 200.0,
            47.5 + time / 50_000.0,
            8.25 + time / 20_000.0,
        )
        .unwrap();
    }
    text
}

fn time(run: impl FnOnce()) -> f64 {
    let start = Instant::now();
    run();
    start.elapsed().as_secs_f64()
}

fn fields_only(text: &str) {
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_reader(text.as_bytes());
    let mut record = csv::ByteRecord::new();
    while reader.read_byte_record(&mut record).unwrap() {
        black_box(&record);
    }
}

fn fields_and_numbers(text: &str) {
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_reader(text.as_bytes());
    let mut record = csv::StringRecord::new();
    while reader.read_record(&mut record).unwrap() {
        for field in &record {
            black_box(field.parse::<f64>().ok());
        }
    }
}

fn sounding(text: &str) {
    let loaded = read("vale.csv", text.as_bytes(), &ReadOptions::default()).unwrap();
    assert_eq!(black_box(loaded).soundings[0].levels.len(), 6_000);
}

fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[values.len() / 2]
}

fn main() {
    let text = table();
    // Turn about, so that whatever else the machine does falls on all alike.
    let rounds: Vec<[f64; 3]> = (0..RUNS)
        .map(|_| {
            [
                time(|| fields_only(&text)),
                time(|| fields_and_numbers(&text)),
                time(|| sounding(&text)),
            ]
        })
        .collect();
    let ratio = |to: usize| median(rounds.iter().map(|times| times[2] / times[to]).collect());
    let milliseconds = |of: usize| 1e3 * median(rounds.iter().map(|times| times[of]).collect());
    println!(
        "{} kB, {ROWS} rows, medians of {RUNS} rounds, ms: csv crate, fields only {:.2}; csv crate, fields and numbers \
         {:.2}; a whole sounding {:.2}",
        text.len() / 1000,
        milliseconds(0),
        milliseconds(1),
        milliseconds(2)
    );
    println!(
        "a whole sounding takes {:.1} times the fields alone, {:.1} times fields and numbers",
        ratio(0),
        ratio(1)
    );
}
