//! FM 35 TEMP text: parts A to D, with PILOT-type wind parts (PPAA to PPDD) merged in.
//!
//! Also read: the forms for ships (UUAA), drops (XXAA) and mobile land stations (IIAA). A file may hold any number of
//! bulletins and stations; the parts of one ascent, wherever they stand, become one sounding.
//!
//! What is decoded follows WMO-No. 306, Manual on Codes, Vol. I.1, FM 35 and FM 32 (sections and code tables from memory;
//! the text was not opened). What the message leaves out is settled so, each time with a note where it could be wrong:
//!
//! - **Month and year** are from the file's name, else from [`ReadOptions::as_of`], else from
//!   [`ReadOptions::modified`]: the nearest matching day of the past. Without any of them the times stay absent.
//! - **Heights** lack their leading figure: see the hypsometric rule in `heights.rs`.
//! - **Winds by altitude** keep their height and have no pressure: the message gives none. Only the surface wind of a
//!   wind part takes the surface pressure of its ascent, being the same level.
//! - **A garbled group** costs its own value and nothing else: the section is read in the way that needs the fewest
//!   faults, and the group is quoted in a note.
//! - **A part received twice** is read once when identical, replaced when its bulletin is marked as a correction, and
//!   otherwise kept as a sounding of its own.
//!
//! [`Source::parts`](dewbound_sounding::Source::parts) digests each part's groups joined by single blanks, without the
//! closing `=`: line ends and line breaks don't change it.
//!
//! Deliberately absent: any judgement of values (a well-formed group is taken as it is), merging of levels at one
//! pressure, and the regional and national sections, which are quoted in one note a sounding.

mod align;
mod ascent;
mod context;
mod date;
mod extremes;
mod framing;
mod groups;
mod header;
mod heights;
mod pilot;
mod report;
mod sections;
mod significant;
mod standard;
mod standard_atmosphere;

use crate::{Loaded, ReadOptions};

/// Whether the text looks like TEMP bulletins: a part's four letters (`TTAA`, `PPBB`, ...) followed, at most one word
/// later, by a group of at least four figures, or by `NIL`.
pub fn recognises(text: &str) -> bool {
    let mut words = text
        .split(|character: char| {
            character.is_whitespace() || character.is_control() || character == '='
        })
        .filter(|word| !word.is_empty());
    while let Some(word) = words.next() {
        if framing::Letters::read(word).is_some()
            && words
                .clone()
                .take(2)
                .any(|next| next == "NIL" || next.bytes().filter(u8::is_ascii_digit).count() >= 4)
        {
            return true;
        }
    }
    false
}

/// Reads every bulletin in a text. `name` is the file's name (dates may be taken from it).
pub fn read(name: &str, text: &str, options: &ReadOptions) -> Loaded {
    let (messages, mut notes) = framing::messages(text);
    let mut reports = Vec::new();
    for message in &messages {
        match report::decode(message) {
            Ok(report) => reports.push(report),
            Err(note) => notes.push(note),
        }
    }
    let reference = date::Reference::of(name, options);
    let (soundings, loose) = ascent::assemble(name, reports, reference.as_ref());
    notes.extend(loose);
    notes.sort_by_key(|note| note.place);
    Loaded { soundings, notes }
}
