//! Samples reduced to standard and significant levels, as a coded message carries them.

use super::balloon::Sample;

/// Standard isobaric surfaces, hPa.
pub const STANDARD: [f64; 16] = [
    1000.0, 925.0, 850.0, 700.0, 500.0, 400.0, 300.0, 250.0, 200.0, 150.0, 100.0, 70.0, 50.0, 30.0,
    20.0, 10.0,
];

/// The sample at a pressure, linear in ln p between its neighbours; `None` outside the ascent.
pub fn at_pressure(samples: &[Sample], pressure: f64) -> Option<Sample> {
    let next = samples.partition_point(|sample| sample.pressure > pressure);
    if next == 0 {
        return samples
            .first()
            .filter(|first| first.pressure == pressure)
            .copied();
    }
    let (low, high) = (samples.get(next - 1)?, samples.get(next)?);
    let share = (low.pressure / pressure).ln() / (low.pressure / high.pressure).ln();
    let mix = |a: f64, b: f64| a + share * (b - a);
    Some(Sample {
        time: mix(low.time, high.time),
        pressure,
        height: mix(low.height, high.height),
        temperature: mix(low.temperature, high.temperature),
        humidity: mix(low.humidity, high.humidity),
        ..*low
    })
}

/// Indices of significant levels: straight lines in ln p between them miss no sample by more than the tolerances.
/// Tolerances are half to a third of what the code asks at least, so that the message keeps the shape of the ascent.
pub fn significant(samples: &[Sample]) -> Vec<usize> {
    let miss = |sample: &Sample, line: &Sample| {
        let temperature = if sample.pressure > 300.0 { 0.4 } else { 1.0 };
        ((sample.temperature - line.temperature) / temperature)
            .abs()
            .max(((sample.humidity - line.humidity) / 0.05).abs())
    };
    split(samples, &miss)
}

/// Indices of levels significant for wind.
pub fn significant_for_wind(samples: &[Sample]) -> Vec<usize> {
    let vector = |sample: &Sample| {
        let from = sample.direction.to_radians();
        (sample.speed * from.sin(), sample.speed * from.cos())
    };
    // `line` has its wind from the lower end only; interpolate the vector by pressure in `split`.
    let miss = |sample: &Sample, line: &Sample| {
        let (a, b) = (vector(sample), vector(line));
        (a.0 - b.0).hypot(a.1 - b.1) / 3.0
    };
    split(samples, &miss)
}

fn split(samples: &[Sample], miss: &dyn Fn(&Sample, &Sample) -> f64) -> Vec<usize> {
    let Some(last) = samples.len().checked_sub(1) else {
        return Vec::new();
    };
    let mut kept = vec![0, last];
    let mut open = vec![(0, last)];
    while let Some((low, high)) = open.pop() {
        let (a, b) = (&samples[low], &samples[high]);
        let worst = (low + 1..high)
            .map(|index| {
                let sample = &samples[index];
                let share = (a.pressure / sample.pressure).ln() / (a.pressure / b.pressure).ln();
                let mix = |x: f64, y: f64| x + share * (y - x);
                let turn = (b.direction - a.direction + 540.0).rem_euclid(360.0) - 180.0;
                let line = Sample {
                    temperature: mix(a.temperature, b.temperature),
                    humidity: mix(a.humidity, b.humidity),
                    direction: a.direction + share * turn,
                    speed: mix(a.speed, b.speed),
                    ..*sample
                };
                (index, miss(sample, &line))
            })
            .max_by(|x, y| x.1.total_cmp(&y.1));
        if let Some((index, size)) = worst
            && size > 1.0
        {
            kept.push(index);
            open.push((low, index));
            open.push((index, high));
        }
    }
    kept.sort_unstable();
    kept
}

/// Index of the tropopause: the lowest level above 500 hPa from which the lapse rate is at most 2 K/km, also on average
/// over the next 2 km (WMO definition).
pub fn tropopause(samples: &[Sample]) -> Option<usize> {
    let above = |index: usize, depth: f64| {
        let height = samples[index].height + depth;
        samples[index..]
            .iter()
            .find(|sample| sample.height >= height)
    };
    (0..samples.len())
        .filter(|&index| samples[index].pressure < 500.0)
        .find(|&index| {
            [500.0, 1000.0, 1500.0, 2000.0].iter().all(|&depth| {
                above(index, depth).is_some_and(|upper| {
                    let low = &samples[index];
                    (low.temperature - upper.temperature) / (upper.height - low.height) <= 0.002
                })
            })
        })
}
