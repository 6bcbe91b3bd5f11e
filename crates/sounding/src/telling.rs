//! Words for notes.

use crate::{Level, Note, Place, Sampling};

/// Occurrences of one kind of trouble, told one by one in coded data and as one note in fine data.
pub(crate) struct Tally {
    /// What a single note for many says, after the count.
    many: &'static str,
    why: &'static str,
    seen: Vec<(Place, String)>,
}

impl Tally {
    pub(crate) fn new(many: &'static str, why: &'static str) -> Self {
        Self {
            many,
            why,
            seen: Vec::new(),
        }
    }

    pub(crate) fn add(&mut self, place: Place, what: String) {
        self.seen.push((place, what));
    }

    pub(crate) fn tell(self, sampling: Sampling, notes: &mut Vec<Note>) {
        let count = self.seen.len();
        let why = self.why.to_string();
        if sampling == Sampling::Coded || count == 1 {
            notes.extend(self.seen.into_iter().map(|(place, what)| Note {
                place,
                what,
                why: why.clone(),
            }));
        } else if let Some((place, first)) = self.seen.into_iter().next() {
            notes.push(Note {
                place,
                what: format!("{count} {}; the first: {first}", self.many),
                why,
            });
        }
    }
}

/// Where a level was received.
pub(crate) fn place(level: &Level) -> Place {
    level.line.map_or(Place::File, Place::Line)
}

/// A pressure that may be missing, as people read it.
pub(crate) fn at(pressure: Option<f64>) -> String {
    pressure.map_or_else(|| "unknown pressure".to_string(), hpa)
}

/// A pressure as people read it, no more decimals than it has.
pub(crate) fn hpa(pa: f64) -> String {
    let tenths = (pa / 10.0).round() / 10.0;
    if (tenths - tenths.round()).abs() < 1e-9 {
        format!("{tenths:.0} hPa")
    } else {
        format!("{tenths:.1} hPa")
    }
}
