//! Words for notes.

use crate::{Level, Note, Place, Sampling};

/// Occurrences of one kind of trouble, told one by one in coded data and as one note in fine data.
pub(crate) struct Tally {
    /// What a single note for many says, after the count.
    many: &'static str,
    /// What was done about each.
    done: &'static str,
    why: &'static str,
    seen: Vec<(Place, String)>,
}

impl Tally {
    pub(crate) fn new(many: &'static str, done: &'static str, why: &'static str) -> Self {
        Self {
            many,
            done,
            why,
            seen: Vec::new(),
        }
    }

    pub(crate) fn add(&mut self, place: Place, what: String) {
        self.seen.push((place, what));
    }

    pub(crate) fn is_empty(&self) -> bool {
        self.seen.is_empty()
    }

    pub(crate) fn tell(self, sampling: Sampling, notes: &mut Vec<Note>) {
        let count = self.seen.len();
        let why = self.why.to_string();
        if sampling == Sampling::Coded || count == 1 {
            notes.extend(self.seen.into_iter().map(|(place, what)| Note {
                place,
                what: format!("{what}: {}", self.done),
                why: why.clone(),
            }));
        } else if let Some((place, first)) = self.seen.into_iter().next() {
            notes.push(Note {
                place,
                what: format!("{count} {}: {}; the first: {first}", self.many, self.done),
                why,
            });
        }
    }
}

/// Where a level was received.
pub(crate) fn place(level: &Level) -> Place {
    level.line.map_or(Place::File, Place::Line)
}

/// "1 level", "3 levels".
pub(crate) fn count_of_levels(count: usize) -> String {
    format!("{count} {}", if count == 1 { "level" } else { "levels" })
}

/// A temperature (K) as people read it, with a real minus sign.
pub(crate) fn celsius(k: f64) -> String {
    let text = format!("{:.1} °C", k - dewbound_thermo::ZERO_CELSIUS);
    text.replace('-', "\u{2212}")
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
