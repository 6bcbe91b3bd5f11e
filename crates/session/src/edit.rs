//! Changes of a document, as functions of documents.

use crate::sounding::Amendment;
use crate::thermo::Temperature;
use crate::{Document, SurfaceQuantity};
use std::collections::BTreeSet;

fn is_of(amendment: &Amendment, quantity: SurfaceQuantity) -> bool {
    match amendment {
        Amendment::SurfaceDewpoint { .. } => quantity == SurfaceQuantity::Dewpoint,
        Amendment::SurfaceTemperature { .. } => quantity == SurfaceQuantity::Temperature,
        _ => false,
    }
}

/// Sets a surface value. Earlier entries for the same quantity, which would be without effect from now on, go.
pub(crate) fn set_surface(document: &mut Document, quantity: SurfaceQuantity, value: Temperature) {
    let mut amendments = match quantity {
        SurfaceQuantity::Dewpoint => document.amendments.with_surface_dewpoint(value),
        SurfaceQuantity::Temperature => document.amendments.with_surface_temperature(value),
    };
    if amendments == document.amendments {
        return;
    }
    // The value is the user's own now, so no repair may claim it.
    let last = amendments
        .entries
        .iter_mut()
        .rfind(|entry| is_of(&entry.amendment, quantity))
        .map(|entry| entry.from_repair.take());
    std::mem::swap(&mut document.amendments, &mut amendments);
    let broken = remove_entries(document, quantity, true);
    disown(document, broken.into_iter().chain(last.flatten()).collect());
}

/// Takes every entry that sets a surface value out.
pub(crate) fn reset_surface(document: &mut Document, quantity: SurfaceQuantity) {
    let broken = remove_entries(document, quantity, false);
    disown(document, broken);
}

/// Removes the entries of a quantity (but the last, if so asked); the repairs they came from.
fn remove_entries(
    document: &mut Document,
    quantity: SurfaceQuantity,
    but_last: bool,
) -> BTreeSet<String> {
    let entries = &mut document.amendments.entries;
    let last = entries
        .iter()
        .rposition(|entry| is_of(&entry.amendment, quantity))
        .filter(|_| but_last);
    let mut repairs = BTreeSet::new();
    let mut index = 0;
    entries.retain(|entry| {
        let keep = Some(index) == last || !is_of(&entry.amendment, quantity);
        index += 1;
        if !keep {
            repairs.extend(entry.from_repair.clone());
        }
        keep
    });
    repairs
}

/// A repair that has lost one of its entries is no longer that repair: what is in force of it becomes the user's own,
/// what is switched off goes.
fn disown(document: &mut Document, repairs: BTreeSet<String>) {
    let of_broken = |source: &Option<String>| {
        source
            .as_ref()
            .is_some_and(|source| repairs.contains(source))
    };
    let entries = &mut document.amendments.entries;
    entries.retain(|entry| entry.enabled || !of_broken(&entry.from_repair));
    for entry in entries {
        if of_broken(&entry.from_repair) {
            entry.from_repair = None;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::sounding::Entry;

    fn entry(amendment: Amendment, enabled: bool, from_repair: Option<&str>) -> Entry {
        Entry {
            amendment,
            enabled,
            from_repair: from_repair.map(str::to_owned),
        }
    }

    const DROP: Amendment = Amendment::DropLevels {
        bottom_pa: 90_000.0,
        top_pa: 85_000.0,
    };

    fn dewpoint(k: f64) -> Amendment {
        Amendment::SurfaceDewpoint { dewpoint_k: k }
    }

    fn document(entries: &[Entry]) -> Document {
        let mut document = Document::default();
        document.amendments.entries = entries.to_vec();
        document
    }

    #[test]
    fn a_set_value_takes_the_place_of_every_earlier_one() {
        let mut changed = document(&[
            entry(dewpoint(290.0), true, None),
            entry(DROP, true, None),
            entry(dewpoint(288.0), true, Some("r")),
        ]);
        set_surface(
            &mut changed,
            SurfaceQuantity::Dewpoint,
            Temperature::from_k(289.0),
        );
        assert_eq!(
            changed,
            document(&[entry(DROP, true, None), entry(dewpoint(289.0), true, None)])
        );
    }

    #[test]
    fn setting_the_value_that_stands_changes_nothing() {
        let before = document(&[entry(dewpoint(288.0), true, Some("r"))]);
        let mut after = before.clone();
        set_surface(
            &mut after,
            SurfaceQuantity::Dewpoint,
            Temperature::from_k(288.0),
        );
        assert_eq!(after, before);
    }

    #[test]
    fn a_repair_that_lost_an_entry_is_no_longer_that_repair() {
        let mut changed = document(&[
            entry(DROP, true, Some("r")),
            entry(dewpoint(288.0), true, Some("r")),
            entry(DROP, false, Some("s")),
            entry(dewpoint(288.0), false, Some("s")),
        ]);
        reset_surface(&mut changed, SurfaceQuantity::Dewpoint);
        assert_eq!(changed, document(&[entry(DROP, true, None)]));
    }
}
