//! The tray: soundings waiting, worst cost first.

use crate::ItemId;
use crate::sounding::Parcel;
use jiff::Timestamp;

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
        crate::tray::age(self.valid, now)
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
