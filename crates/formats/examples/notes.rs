//! Prints what the readers make of files: one line a sounding, then its notes one by one.
//!
//! `cargo run -p dewbound-formats --example notes FILE...`

use dewbound_formats::{ReadError, ReadOptions, read_path};
use dewbound_sounding::{Level, Note, Sounding};
use std::fmt::Write as _;
use std::io::Write as _;

fn main() {
    let mut out = String::new();
    for file in std::env::args_os().skip(1) {
        // Writing to a String cannot fail.
        let _ = describe(&mut out, file.as_ref());
    }
    // A reader that closes the pipe early has seen enough.
    let _ = std::io::stdout().write_all(out.as_bytes());
}

fn describe(out: &mut String, file: &std::path::Path) -> std::fmt::Result {
    let loaded = match read_path(file, &ReadOptions::default()) {
        Ok(loaded) => loaded,
        Err(error) => return complain(out, &error),
    };
    let count = loaded.soundings.len();
    writeln!(out, "{}: {count} soundings", file.display())?;
    notes(out, &loaded.notes)?;
    for sounding in &loaded.soundings {
        one(out, sounding)?;
    }
    Ok(())
}

fn complain(out: &mut String, error: &ReadError) -> std::fmt::Result {
    writeln!(out, "error: {error}")
}

fn one(out: &mut String, sounding: &Sounding) -> std::fmt::Result {
    let with = |has: fn(&Level) -> bool| sounding.levels.iter().filter(|level| has(level)).count();
    let time = |time: Option<jiff::Timestamp>| time.map_or("-".into(), |time| time.to_string());
    writeln!(
        out,
        "  {} | launch {} nominal {} | {} levels: {} with pressure, {} temperature, {} dew point, {} wind, {} height",
        sounding
            .station
            .canonical_id()
            .unwrap_or("no station".into()),
        time(sounding.times.launch),
        time(sounding.times.nominal),
        sounding.levels.len(),
        with(|level| level.pressure.is_some()),
        with(|level| level.temperature.is_some()),
        with(|level| level.dewpoint.is_some()),
        with(|level| level.wind.is_some()),
        with(|level| level.height.is_some()),
    )?;
    writeln!(out, "    {:?}", sounding.station)?;
    if let Some(first) = sounding.levels.first() {
        writeln!(out, "    {first:?}")?;
    }
    notes(out, &sounding.notes)
}

fn notes(out: &mut String, notes: &[Note]) -> std::fmt::Result {
    for Note { place, what, why } in notes {
        writeln!(out, "    {place:?}: {what} | {why}")?;
    }
    Ok(())
}
