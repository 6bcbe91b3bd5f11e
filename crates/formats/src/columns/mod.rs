//! Columns with units: CSV, TSV, and the semicolon kind with decimal commas.
//!
//! A table is a header that names columns with their units (see [`names`]), rows below it, and `#` lines around it for
//! station, time and position (see [`comments`]). Columns may stand in any order. A file may hold several tables, each
//! with its own header; the `#` lines before a header belong to it.

mod build;
mod comments;
mod course;
mod header;
pub(crate) mod names;
mod rows;
mod units;

use crate::{Loaded, ReadError, ReadOptions, digest, text};
use comments::{bare, is_comment};
use dewbound_sounding::{Note, Place};
use header::TableHeader;

/// A header that would do, for error texts.
const EXAMPLE: &str = "pressure_hpa,temperature_c,dewpoint_c,wind_dir_deg,wind_speed_kt,height_m";

/// Lines in which a header is looked for before the file is taken for something else.
const HEADER_WITHIN: usize = 1000;

/// One table of a file.
struct Section<'a> {
    comments: Vec<(usize, &'a str)>,
    header_line: usize,
    header: TableHeader,
    rows: Vec<(usize, &'a str)>,
    /// Over every line of it.
    digest: digest::Lines,
}

/// Whether the text has a header that names pressure and something measured, with units.
pub(crate) fn recognises(text: &str) -> bool {
    text::lines(text)
        .take(HEADER_WITHIN)
        .any(|(_, line)| header_of(bare_if_comment(line)).is_some())
}

fn bare_if_comment(line: &str) -> &str {
    if is_comment(line) { bare(line) } else { line }
}

fn header_of(line: &str) -> Option<TableHeader> {
    // Rows start with a number nearly always: don't split them all three ways.
    let first = line.trim_start().chars().next()?;
    if first.is_ascii_digit() || matches!(first, '-' | '+' | '.' | ',' | ';' | '#') {
        return None;
    }
    TableHeader::read(line).filter(TableHeader::is_enough)
}

/// The error for a table whose header is missing or not understood. `None` when the text is no table at all, or prose
/// with commas; with `only_meaningful`, also for numbers without a header.
pub(crate) fn complaint(file: &str, text: &str, only_meaningful: bool) -> Option<ReadError> {
    let (line, header) = text::lines(text)
        .take(HEADER_WITHIN)
        .filter(|(_, line)| !is_comment(line) && !line.trim().is_empty())
        .find_map(|(number, line)| Some((number, TableHeader::read(line)?)))?;
    if header.names.len() < 2 || (only_meaningful && !header.means_something()) {
        return None;
    }
    if header.is_numbers() {
        return Some(ReadError::NoHeader {
            file: file.into(),
            line,
            example: EXAMPLE,
        });
    }
    let station_table = header.has(names::Quantity::Latitude)
        && ["wmo", "wigos", "icao"].iter().any(|id| {
            header
                .names
                .iter()
                .any(|name| name.eq_ignore_ascii_case(id))
        });
    if station_table {
        return Some(ReadError::LooksLike {
            file: file.into(),
            what: "a table of stations, not a sounding",
            hint: "its place is the office folder, as stations.csv",
        });
    }
    if !header.means_something() {
        return None;
    }
    Some(ReadError::UnknownHeader {
        file: file.into(),
        line,
        what: header.complaint(),
        found: header.names,
        understood: names::understood(),
    })
}

/// Reads every table of a text.
pub(crate) fn read(text: &str, options: &ReadOptions) -> Loaded {
    let mut loaded = Loaded::default();
    let (mut sections, mut stray) = sections(text, None);
    if sections.is_empty() {
        // The header itself may stand in a comment.
        let commented = text::lines(text)
            .take(HEADER_WITHIN)
            .filter(|(_, line)| is_comment(line) && header_of(bare(line)).is_some())
            .last()
            .map(|(number, _)| number);
        if commented.is_some() {
            (sections, stray) = self::sections(text, commented);
        }
    }
    if let (Some(first), Some(last)) = (stray.first(), stray.last()) {
        let lines = if first == last {
            format!("line {first} was not used")
        } else {
            format!("lines {first} to {last} were not used")
        };
        loaded.notes.push(Note {
            place: Place::Line(*first),
            what: lines,
            why: "they stand above the header and are no `#` lines".into(),
        });
    }
    let cut_short = !text.ends_with('\n');
    let count = sections.len();
    for (index, section) in sections.iter().enumerate() {
        let cut_short = cut_short && index + 1 == count;
        match build::sounding(section, cut_short, options) {
            Ok(sounding) => loaded.soundings.push(sounding),
            Err(notes) => loaded.notes.extend(notes),
        }
    }
    loaded
}

fn sections(text: &str, commented_header: Option<usize>) -> (Vec<Section<'_>>, Vec<usize>) {
    let mut sections: Vec<Section> = Vec::new();
    let mut stray = Vec::new();
    // Comments since the last row: they belong to the next header, or to this table if rows follow.
    let mut waiting: Vec<(usize, &str)> = Vec::new();
    for (number, line) in text::lines(text) {
        let is_header = commented_header == Some(number);
        if is_comment(line) && !is_header {
            waiting.push((number, line));
            continue;
        }
        if line.trim().is_empty() {
            continue;
        }
        if let Some(header) = header_of(if is_header { bare(line) } else { line }) {
            let mut digest = digest::Lines::default();
            waiting.iter().for_each(|(_, line)| digest.add(line));
            digest.add(line);
            sections.push(Section {
                comments: std::mem::take(&mut waiting),
                header_line: number,
                header,
                rows: Vec::new(),
                digest,
            });
        } else if let Some(section) = sections.last_mut() {
            waiting
                .iter()
                .for_each(|(_, line)| section.digest.add(line));
            section.comments.append(&mut waiting);
            section.digest.add(line);
            section.rows.push((number, line));
        } else {
            stray.push(number);
        }
    }
    if let Some(section) = sections.last_mut() {
        waiting
            .iter()
            .for_each(|(_, line)| section.digest.add(line));
        section.comments.append(&mut waiting);
    }
    (sections, stray)
}
