//! The three formats the demo soundings are written in.

use super::balloon::Sample;
use super::coded::{STANDARD, at_pressure, significant, significant_for_wind, tropopause};
use super::stories::{Station, Time};
use std::fmt::Write;

/// Columns with units, one row a sample.
pub fn columns(station: &Station, time: &Time, samples: &[Sample]) -> String {
    let mut text = String::new();
    for line in [
        "INVENTED DATA: a made-up ascent in a made-up place".to_owned(),
        "demo: true".to_owned(),
        format!("station: {}", station.name),
        format!("wmo: {}", station.wmo),
        format!("time: {}", time.launch()),
        format!("nominal: {}", time.nominal()),
        format!(
            "position: {}, {}, {}",
            station.latitude, station.longitude, station.elevation
        ),
    ] {
        text.push_str("# ");
        text.push_str(&line);
        text.push('\n');
    }
    text.push_str("time_s,pressure_hpa,temperature_c,rh_pct,height_m,wind_dir_deg,wind_speed_ms\n");
    for sample in samples {
        let _ = writeln!(
            text,
            "{:.0},{:.1},{:.1},{:.1},{:.0},{:.0},{:.1}",
            sample.time,
            sample.pressure,
            sample.temperature,
            sample.humidity * 100.0,
            sample.height,
            sample.direction,
            sample.speed
        );
    }
    text
}

/// An archive's station file (IGRA version 2): standard and significant levels merged.
pub fn station_file(station: &Station, time: &Time, samples: &[Sample]) -> String {
    let mut levels: Vec<(Sample, &str)> = significant(samples)
        .into_iter()
        .map(|index| (samples[index], if index == 0 { "21" } else { "20" }))
        .collect();
    for pressure in STANDARD {
        if let Some(sample) = at_pressure(samples, pressure) {
            levels.push((sample, "10"));
        }
    }
    levels.sort_by(|a, b| b.0.pressure.total_cmp(&a.0.pressure));
    levels.dedup_by(|a, b| (a.0.pressure - b.0.pressure).abs() < 0.5);

    let mut text = format!(
        "#XXM000{} {:04} {:02} {:02} {:02} {:02}{:02} {:4} {:8} {:8} {:7} {:8}\n",
        station.wmo,
        time.year,
        time.month,
        time.day,
        time.hour,
        time.launch_clock().0,
        time.launch_clock().1,
        levels.len(),
        "invented",
        "",
        (station.latitude * 1e4).round(),
        (station.longitude * 1e4).round(),
    );
    for (sample, kind) in levels {
        let _ = writeln!(
            text,
            "{kind} {:5} {:6} {:5} {:5} {:5} {:5} {:5} {:5} ",
            (sample.time / 60.0).floor() * 100.0 + (sample.time % 60.0).floor(),
            (sample.pressure * 10.0).round() * 10.0,
            sample.height.round(),
            (sample.temperature * 10.0).round(),
            (sample.humidity * 1000.0).round(),
            ((sample.temperature - sample.dewpoint()) * 10.0).round(),
            sample.direction.round(),
            (sample.speed * 10.0).round(),
        );
    }
    text
}

/// Which parts of a coded message were sent.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Parts {
    /// A to D.
    All,
    /// Only the first.
    OnlyFirst,
}

/// FM 35 TEMP, parts A to D, winds in knots.
pub fn bulletin(station: &Station, time: &Time, samples: &[Sample], parts: Parts) -> String {
    let day = time.day + 50;
    let hour = time.hour;
    let top = samples.last().map_or(1000.0, |sample| sample.pressure);
    let (launch_hour, launch_minute) = time.launch_clock();
    let sonde = format!("31313 47708 8{launch_hour:02}{launch_minute:02}");
    // Standard surface up to which wind is given, in hundreds of hPa (tens in the upper parts).
    let wind_to = |limit: f64, unit: f64| {
        let highest = STANDARD
            .iter()
            .copied()
            .filter(|&p| p >= top && p >= limit)
            .fold(1000.0, f64::min);
        format!("{:.0}", (highest / unit).floor() % 10.0)
    };

    let mut part_a = vec![
        format!("TTAA {day:02}{hour:02}{}", wind_to(100.0, 100.0)),
        station.wmo.to_owned(),
    ];
    if let Some(surface) = samples.first() {
        part_a.push(format!("99{}", three(surface.pressure)));
        part_a.push(thermal(surface));
        part_a.push(wind(surface));
    }
    part_a.extend(standard_levels(samples, &STANDARD[..11]));
    match tropopause(samples)
        .map(|index| &samples[index])
        .filter(|sample| sample.pressure >= 100.0)
    {
        Some(sample) => part_a.extend([
            format!("88{}", three(sample.pressure)),
            thermal(sample),
            wind(sample),
        ]),
        None => part_a.push("88999".to_owned()),
    }
    part_a.push("77999".to_owned());
    part_a.push(sonde.clone());
    let mut messages = vec![part_a];

    if parts == Parts::All {
        let lower = |sample: &Sample| sample.pressure >= 100.0;
        let mut part_b = vec![format!("TTBB {day:02}{hour:02}8"), station.wmo.to_owned()];
        let chosen = significant(samples)
            .into_iter()
            .map(|index| &samples[index]);
        part_b.extend(numbered(
            chosen.clone().filter(|sample| lower(sample)),
            0,
            1.0,
            thermal,
        ));
        part_b.push("21212".to_owned());
        let winds = significant_for_wind(samples)
            .into_iter()
            .map(|index| &samples[index]);
        part_b.extend(numbered(
            winds.clone().filter(|sample| lower(sample)),
            0,
            1.0,
            wind,
        ));
        part_b.push(sonde.clone());
        messages.push(part_b);

        if top < 70.0 {
            let mut part_c = vec![
                format!("TTCC {day:02}{hour:02}{}", wind_to(10.0, 10.0)),
                station.wmo.to_owned(),
            ];
            part_c.extend(standard_levels(samples, &STANDARD[11..]));
            part_c.extend(["88999".to_owned(), "77999".to_owned(), sonde.clone()]);
            messages.push(part_c);
            let mut part_d = vec![format!("TTDD {day:02}{hour:02}/"), station.wmo.to_owned()];
            part_d.extend(numbered(
                chosen.filter(|sample| !lower(sample)),
                1,
                0.1,
                thermal,
            ));
            part_d.push("21212".to_owned());
            part_d.extend(numbered(
                winds.filter(|sample| !lower(sample)),
                1,
                0.1,
                wind,
            ));
            part_d.push(sonde);
            messages.push(part_d);
        }
    }
    let mut text = format!("USXX01 XXXX {:02}{hour:02}00\n", time.day);
    for message in messages {
        text.push_str(&wrapped(&message));
        text.push_str("=\n");
    }
    text
}

/// Groups wrapped at 64 characters.
fn wrapped(groups: &[String]) -> String {
    let mut lines = vec![String::new()];
    for group in groups.iter().flat_map(|group| group.split(' ')) {
        let line = lines.len() - 1;
        if lines[line].len() + group.len() > 63 {
            lines.push(group.to_owned());
        } else {
            if !lines[line].is_empty() {
                lines[line].push(' ');
            }
            lines[line].push_str(group);
        }
    }
    lines.join("\n")
}

/// The last three digits of a whole number.
fn three(value: f64) -> String {
    format!("{:03}", (value.round() as i64).rem_euclid(1000))
}

/// `TTTaDD`: temperature with its sign in the tenths digit, dew-point depression by code table 0777.
fn thermal(sample: &Sample) -> String {
    let tenths = (sample.temperature.abs() * 10.0).round() as i64;
    let odd = i64::from(sample.temperature < 0.0);
    let coded = tenths / 2 * 2 + odd;
    let depression = sample.temperature - sample.dewpoint();
    let code = if depression < 5.5 {
        ((depression * 10.0).round() as i64).clamp(0, 50)
    } else {
        50 + (depression.round() as i64).min(49)
    };
    format!("{coded:03}{code:02}")
}

/// `dddff` in knots, direction to 5 degrees.
fn wind(sample: &Sample) -> String {
    let knots = (sample.speed / 0.514_444).round() as i64;
    let direction = ((sample.direction / 5.0).round() as i64 * 5).rem_euclid(360);
    let direction = if direction == 0 && knots > 0 {
        360
    } else {
        direction
    };
    format!("{:02}{:03}", direction / 10, knots + direction % 10 * 100)
}

fn standard_levels(samples: &[Sample], surfaces: &[f64]) -> Vec<String> {
    let surface = samples.first();
    let mut groups = Vec::new();
    for &pressure in surfaces {
        let indicator = match pressure as i64 {
            1000 => "00".to_owned(),
            925 => "92".to_owned(),
            _ if pressure >= 100.0 => format!("{:02.0}", pressure / 10.0),
            _ => format!("{pressure:02.0}"),
        };
        if let Some(sample) = at_pressure(samples, pressure) {
            groups.extend([
                format!("{indicator}{}", coded_height(sample.height, pressure)),
                thermal(&sample),
                wind(&sample),
            ]);
        } else if let Some(ground) = surface.filter(|ground| ground.pressure < pressure) {
            // Below ground: only a height, reduced with 6.5 K/km as in the standard atmosphere.
            let warm = ground.temperature + 273.15 + 0.00325 * ground.height;
            let height = ground.height - 29.27 * warm * (pressure / ground.pressure).ln();
            groups.extend([
                format!("{indicator}{}", coded_height(height, pressure)),
                "/////".to_owned(),
                "/////".to_owned(),
            ]);
        }
    }
    groups
}

fn coded_height(height: f64, pressure: f64) -> String {
    let coded = if pressure > 500.0 {
        height
    } else {
        height / 10.0
    };
    if coded < 0.0 {
        three(500.0 - coded)
    } else {
        three(coded)
    }
}

/// Levels numbered 00, 11, 22, ... 99, 11, ...; pressure in `unit` hPa.
fn numbered<'a>(
    levels: impl Iterator<Item = &'a Sample>,
    first: usize,
    unit: f64,
    group: fn(&Sample) -> String,
) -> Vec<String> {
    levels
        .enumerate()
        .flat_map(|(index, sample)| {
            let number = index + first;
            let digit = if number == 0 { 0 } else { (number - 1) % 9 + 1 };
            [
                format!("{digit}{digit}{}", three(sample.pressure / unit)),
                group(sample),
            ]
        })
        .collect()
}
