//! The tray: soundings waiting, worst cost first.

use crate::sounding::Parcel;
use crate::trust::Grade;
use crate::wording::worst_change;
use crate::{Item, ItemId, Session, Standing};
use jiff::Timestamp;
use std::cmp::Ordering;

/// One line of the tray.
#[derive(Debug, Clone, PartialEq)]
pub struct TrayRow {
    /// The item.
    pub item: ItemId,
    /// Station, for people.
    pub station: String,
    /// Valid time.
    pub valid: Option<Timestamp>,
    /// Month and year of that time were assumed.
    pub time_assumed: bool,
    /// Number of findings (informative ones not counted).
    pub findings: usize,
    /// An erroneous one is among them.
    pub erroneous: bool,
    /// Largest headline cost in CAPE over the findings, with its parcel, J/kg; `None`: no priced finding.
    pub worst_cost: Option<(Parcel, f64)>,
    /// Verdict in words ("undecided", "draft", "accepted (AB)", "decided on earlier data: review").
    pub verdict: String,
    /// Nobody has decided yet, or on other data.
    pub open: bool,
    /// Decided on other message parts.
    pub review: bool,
    /// A draft exists.
    pub draft: bool,
    /// Invented demonstration data.
    pub demo: bool,
}

impl TrayRow {
    /// Age at a moment, in words: "3 h 20 min old"; "time unknown" without a time.
    pub fn age(&self, now: Timestamp) -> String {
        age(self.valid, now)
    }
}

/// Age of data in words.
pub fn age(valid: Option<Timestamp>, now: Timestamp) -> String {
    let Some(valid) = valid else {
        return "time unknown".to_owned();
    };
    let minutes = now
        .as_second()
        .saturating_sub(valid.as_second())
        .div_euclid(60);
    match minutes {
        ..0 => "not yet valid".to_owned(),
        0..60 => format!("{minutes} min old"),
        60..2880 => format!("{} h {} min old", minutes / 60, minutes % 60),
        _ => format!("{} days old", minutes / 1440),
    }
}

impl Session {
    /// Makes the lines of the tray anew; sorts them unless the order is held.
    pub(crate) fn refresh_tray(&mut self) {
        let mut rows: Vec<TrayRow> = self.items.iter().map(row).collect();
        if self.hold {
            // Rows that are new go to the end, in the order opened.
            rows.sort_by_key(|row| {
                self.tray
                    .iter()
                    .position(|old| old.item == row.item)
                    .unwrap_or(usize::MAX)
            });
        } else {
            rows.sort_by(compare);
        }
        self.tray = rows;
    }
}

fn row(item: &Item) -> TrayRow {
    let sounding = item.sounding();
    let graded = item
        .findings()
        .iter()
        .filter(|finding| finding.grade > Grade::Informative);
    let worst_cost = item
        .results()
        .cards
        .iter()
        .filter_map(|card| worst_change(card.headline_cost()?))
        .filter_map(|(parcel, change)| Some((parcel, change.cape?)))
        .max_by(|(_, a), (_, b)| a.abs().total_cmp(&b.abs()));
    TrayRow {
        item: item.id(),
        station: sounding.station.label().to_owned(),
        valid: sounding.times.valid(),
        time_assumed: sounding.times.assumed || sounding.times.day_assumed,
        findings: graded.clone().count(),
        erroneous: item
            .findings()
            .iter()
            .any(|finding| finding.grade == Grade::Erroneous),
        worst_cost,
        verdict: item.standing().words(),
        open: item.standing().is_open(),
        review: matches!(item.standing(), Standing::DecidedOnEarlierData(_)),
        draft: item.is_draft(),
        demo: item.demo(),
    }
}

/// Open before decided; worst cost first; then more findings, then newer.
fn compare(a: &TrayRow, b: &TrayRow) -> Ordering {
    let size = |row: &TrayRow| row.worst_cost.map_or(-1.0, |(_, cape)| cape.abs());
    b.open
        .cmp(&a.open)
        .then(size(b).total_cmp(&size(a)))
        .then(b.findings.cmp(&a.findings))
        .then(b.valid.cmp(&a.valid))
        .then(a.item.cmp(&b.item))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ages_read_as_people_say_them() {
        let valid: Timestamp = "2031-06-14T12:00:00Z".parse().unwrap();
        for (now, expected) in [
            ("2031-06-14T12:45:00Z", "45 min old"),
            ("2031-06-14T15:20:59Z", "3 h 20 min old"),
            ("2031-06-17T12:00:00Z", "3 days old"),
            ("2031-06-14T11:59:00Z", "not yet valid"),
        ] {
            assert_eq!(age(Some(valid), now.parse().unwrap()), expected);
        }
        assert_eq!(age(None, valid), "time unknown");
    }
}
