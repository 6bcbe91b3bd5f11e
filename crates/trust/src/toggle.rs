//! Taking a repair and withdrawing it again.
//!
//! The repairs of one finding are alternatives: taking one withdraws the others.

use crate::{Finding, Repair};
use dewbound_sounding::{Amendments, Entry};

/// What [`Entry::from_repair`] says of an amendment that came from a repair: `finding key/repair id`.
pub fn repair_source(finding: &Finding, repair: &Repair) -> String {
    format!("{}/{}", finding.key(), repair.id)
}

/// The amendments with a repair taken: its entries stand at the end, so that what was done last counts. Entries it left
/// behind when it was withdrawn are replaced; other repairs of the same finding, being alternatives, are switched off.
pub fn with_repair(amendments: &Amendments, finding: &Finding, repair: &Repair) -> Amendments {
    let source = repair_source(finding, repair);
    let mut taken = without_alternatives(amendments, finding, Some(repair.id));
    taken
        .entries
        .retain(|entry| entry.from_repair.as_deref() != Some(&source));
    append(&mut taken, repair, &source);
    taken
}

/// The amendments with a repair withdrawn: its entries switched off where they stand.
pub fn without_repair(amendments: &Amendments, finding: &Finding, repair: &Repair) -> Amendments {
    let mut withdrawn = amendments.clone();
    set_enabled(&mut withdrawn, &repair_source(finding, repair), false);
    withdrawn
}

/// Index of the repair of a finding that is among the enabled amendments.
pub fn applied_repair(amendments: &Amendments, finding: &Finding) -> Option<usize> {
    let key = finding.key();
    finding.repairs.iter().position(|repair| {
        amendments
            .entries
            .iter()
            .any(|entry| entry.enabled && source_is(entry, &key, repair.id))
    })
}

fn source_is(entry: &Entry, key: &str, id: &str) -> bool {
    entry
        .from_repair
        .as_deref()
        .and_then(|source| source.strip_prefix(key)?.strip_prefix('/'))
        == Some(id)
}

fn set_enabled(amendments: &mut Amendments, source: &str, enabled: bool) {
    for entry in &mut amendments.entries {
        if entry.from_repair.as_deref() == Some(source) {
            entry.enabled = enabled;
        }
    }
}

pub(crate) fn append(amendments: &mut Amendments, repair: &Repair, source: &str) {
    amendments
        .entries
        .extend(repair.amendments.iter().map(|&amendment| Entry {
            amendment,
            enabled: true,
            from_repair: Some(source.to_owned()),
        }));
}

pub(crate) fn without_alternatives(
    amendments: &Amendments,
    finding: &Finding,
    keep: Option<&str>,
) -> Amendments {
    let mut left = amendments.clone();
    for repair in &finding.repairs {
        if Some(repair.id) != keep {
            set_enabled(&mut left, &repair_source(finding, repair), false);
        }
    }
    left
}
