//! Time of one foreground of a 6,000-level profile, against `f64::exp` over as many values on the same thread.

use dewbound_chart::{
    Geometry, HeightScale, ParcelDrawing, Picture, Rect, View, background, foreground,
};
use dewbound_sounding::{
    Numbers,
    thermo::{Air, Method, Temperature},
};
use std::hint::black_box;
use std::time::{Duration, Instant};

#[path = "../testing/invented.rs"]
mod invented;

const LEVELS: usize = 6000;

/// Least and median time of 31 runs: on a busy machine only the least says what the work costs.
fn time(mut run: impl FnMut()) -> (Duration, Duration) {
    let mut times: Vec<Duration> = (0..31)
        .map(|_| {
            let start = Instant::now();
            run();
            start.elapsed()
        })
        .collect();
    times.sort();
    (times[0], times[times.len() / 2])
}

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let profile = invented::invented(LEVELS);
    let numbers = Numbers::of(&profile);
    let environment = profile.environment()?;
    let start = profile.surface_air().ok_or("a surface")?;
    let shifted = |k: f64| Air {
        dewpoint: Temperature::from_k(start.dewpoint.k() + k),
        ..start
    };
    let heights = HeightScale::of(&profile);
    let mut received = profile.clone();
    received.dewpoint[0] = Some(start.dewpoint.k() + 1.0);
    let values: Vec<f64> = (0..LEVELS).map(|i| i as f64 * 1e-3 - 3.0).collect();
    let (yardstick, median) = time(|| {
        let mapped: Vec<f64> = black_box(&values).iter().map(|v| v.exp()).collect();
        black_box(mapped);
    });
    println!("exp over {LEVELS} values: least {yardstick:?}, median {median:?}");
    for (width, height) in [(420.0, 380.0), (1000.0, 800.0), (1600.0, 1100.0)] {
        let geometry = Geometry::new(Rect::new(0.0, 0.0, width, height), View::fit(&profile));
        let picture = Picture {
            received: Some(&received),
            parcel: numbers.surface.as_ref().map(|ascent| ParcelDrawing {
                ascent,
                method: Method::default(),
                environment: Some(&environment),
                interval: Some([shifted(-2.0), shifted(2.0)]),
                name: "surface parcel",
            }),
            heights: Some(&heights),
            ..Picture::new(&profile)
        };
        let (front, median) = time(|| {
            black_box(foreground(&geometry, black_box(&picture)));
        });
        let (back, _) = time(|| {
            black_box(background(black_box(&geometry)));
        });
        let ratio = front.as_secs_f64() / yardstick.as_secs_f64();
        println!(
            "{width} x {height}: foreground least {front:?} = {ratio:.1} yardsticks, median {median:?}; background {back:?}"
        );
    }
    Ok(())
}
