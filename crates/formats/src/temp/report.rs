//! One part of one report, decoded.

use super::{
    context::{Aside, Context},
    extremes,
    framing::{Letters, Message, Part, Platform},
    header::{self, Header},
    pilot::{self, AltitudeUnit},
    sections::{self, Launch},
    significant, standard,
};
use crate::digest;
use dewbound_sounding::{Digest, Level, Note, Place};

/// A decoded part.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Report {
    pub letters: Letters,
    /// Its letters as text.
    pub name: String,
    pub line: usize,
    pub header: Header,
    pub launch: Option<Launch>,
    pub levels: Vec<Level>,
    pub notes: Vec<Note>,
    pub aside: Vec<Aside>,
    /// Unread groups could hold a standard level above those read.
    pub unread_top: bool,
    /// From a bulletin marked as a correction.
    pub correction: bool,
    /// Digest of the part's groups as one line, joined by single blanks, from its letters up to its end sign (left out):
    /// the same part has the same digest however its lines were broken or ended.
    pub digest: Digest,
}

/// Decodes a part. `Err` says why nothing of it can be used.
pub(super) fn decode(message: &Message) -> Result<Report, Note> {
    let words = &message.words;
    let first = words.first().copied();
    let (name, line) = first.map_or(("", 1), |word| (word.text, word.line));
    let Some(letters) = Letters::read(name) else {
        return Err(Note {
            place: Place::Line(line),
            what: format!("{name}: not the letters of a part"),
            why: String::new(),
        });
    };
    let mut notes = Vec::new();
    let header = header::read(words, letters, &mut notes)?;
    let mut context = Context {
        letters: name.into(),
        part: letters.part,
        unit: header.unit,
        levels: Vec::new(),
        notes,
        aside: Vec::new(),
        unit_missed: false,
        unread_top: false,
    };
    let body = words.get(header.length..).unwrap_or(&[]);
    let launch = if header.nil {
        context.stray(body.get(1..).unwrap_or(&[]));
        None
    } else {
        let taken = levels(body, letters, &header, &mut context);
        sections::read(body.get(taken..).unwrap_or(&[]), &mut context)
    };
    if context.unit_missed {
        context.note(
            line,
            "winds left out".into(),
            "their unit (m/s or knots) is told by the day figures, which are unreadable",
        );
    }
    let text: Vec<_> = words.iter().map(|word| word.text).collect();
    Ok(Report {
        letters,
        name: name.into(),
        line,
        header,
        launch,
        levels: context.levels,
        notes: context.notes,
        aside: context.aside,
        unread_top: context.unread_top,
        correction: message.correction,
        digest: digest::of_lines([text.join(" ").as_str()]),
    })
}

fn levels(
    body: &[super::framing::Word],
    letters: Letters,
    header: &Header,
    context: &mut Context,
) -> usize {
    let from = |taken: usize| body.get(taken..).unwrap_or(&[]);
    match (letters.pilot, letters.part) {
        (false, Part::A | Part::C) => {
            let taken = standard::read(body, header.indicator, context);
            taken + extremes::read(from(taken), context)
        }
        (false, Part::B | Part::D) => significant::read(body, context),
        (true, Part::A | Part::C) => pilot::standard(body, context),
        (true, Part::B | Part::D) => {
            let block = header.station.wmo.as_deref();
            pilot::by_altitude(body, AltitudeUnit::of_block(block), context)
        }
    }
}

impl Report {
    /// What tells stations apart; empty when nothing is known.
    pub fn station_key(&self) -> &str {
        let station = &self.header.station;
        station
            .wmo
            .as_deref()
            .or(station.text.as_deref())
            .unwrap_or("")
    }

    /// Whether two parts take the same place in an ascent.
    pub fn same_part(&self, other: &Self) -> bool {
        self.letters.pilot == other.letters.pilot && self.letters.part == other.letters.part
    }

    /// A sonde dropped from an aircraft (FM 37).
    pub fn released_aloft(&self) -> bool {
        self.letters.platform == Platform::Drop
    }

    /// Two drops at one place and hour are told apart by their launch.
    pub fn other_drop(&self, other: &Self) -> bool {
        let launches = self.launch.zip(other.launch);
        self.released_aloft() && launches.is_some_and(|(a, b)| a != b)
    }
}
