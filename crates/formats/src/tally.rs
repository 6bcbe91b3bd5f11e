//! Notes that repeat: a fault on a thousand lines is one note that says so.

use dewbound_sounding::{Note, Place};
use std::fmt::Write;

/// Further lines named one by one before the rest is only counted.
const NAMED: usize = 4;

/// Collects faults by kind and column.
#[derive(Default)]
pub(crate) struct Tally {
    faults: Vec<Fault>,
}

struct Fault {
    kind: &'static str,
    column: usize,
    line: usize,
    what: String,
    why: &'static str,
    also: Vec<usize>,
    more: usize,
}

impl Tally {
    /// Counts one occurrence. `what` is only called for the first of its `kind` and `column`.
    pub fn add(
        &mut self,
        kind: &'static str,
        column: usize,
        line: usize,
        what: impl FnOnce() -> String,
        why: &'static str,
    ) {
        let known = self
            .faults
            .iter_mut()
            .find(|fault| fault.kind == kind && fault.column == column);
        match known {
            // Several times on one line is once.
            Some(fault) if fault.also.last().unwrap_or(&fault.line) == &line => {}
            Some(fault) if fault.also.len() < NAMED => fault.also.push(line),
            Some(fault) => fault.more += 1,
            None => self.faults.push(Fault {
                kind,
                column,
                line,
                what: what(),
                why,
                also: Vec::new(),
                more: 0,
            }),
        }
    }

    /// The notes, in the order in which each kind was first seen.
    pub fn notes(self) -> impl Iterator<Item = Note> {
        self.faults.into_iter().map(|fault| {
            let mut what = fault.what;
            if !fault.also.is_empty() {
                let lines: Vec<_> = fault.also.iter().map(usize::to_string).collect();
                let plural = if fault.also.len() > 1 {
                    "lines"
                } else {
                    "line"
                };
                // Writing to a String cannot fail.
                let _ = write!(what, " (likewise on {plural} {}", lines.join(", "));
                if fault.more > 0 {
                    let _ = write!(what, " and {} more", fault.more);
                }
                what.push(')');
            }
            Note {
                place: Place::Line(fault.line),
                what,
                why: fault.why.into(),
            }
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_note_a_kind_and_column() {
        let mut tally = Tally::default();
        for line in [3, 3, 4, 4, 5, 6, 7, 8, 9] {
            tally.add("garbage", 2, line, || format!("first on {line}"), "");
        }
        tally.add("garbage", 4, 5, || "other column".into(), "");
        let notes: Vec<_> = tally.notes().collect();
        assert_eq!(notes.len(), 2);
        assert_eq!(notes[0].place, Place::Line(3));
        assert_eq!(
            notes[0].what,
            "first on 3 (likewise on lines 4, 5, 6, 7 and 2 more)"
        );
        assert_eq!(notes[1].what, "other column");
    }
}
