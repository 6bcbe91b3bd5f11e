//! What `weigh` and the text tray say: JSON for machines, tables for people.

use crate::{Analysed, Item, Results};

/// One object of `weigh --json`, schema 1. Absent values are `null`; every key carries its unit.
pub fn json(_analysed: &Analysed, _results: &Results) -> serde_json::Value {
    todo!()
}

/// The table of `weigh` for one sounding.
pub fn table(_analysed: &Analysed, _results: &Results) -> String {
    todo!()
}

/// The tray as text, for a machine without a display: station, time, CAPE of the three parcels with range, findings with cost.
pub fn tray<'a>(_items: impl IntoIterator<Item = &'a Item>) -> String {
    todo!()
}
