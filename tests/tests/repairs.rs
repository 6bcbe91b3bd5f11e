//! A repair moves the numbers by exactly the cost its card shows: every repair of every finding of the demo tray, on the
//! sounding as received, with the dew point moved, and with the repairs of other findings in force.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::sounding::Parcel;
use dewbound_session::trust::Cost;
use dewbound_session::{Command, Item, ItemId, RepairId, Results, Session, SurfaceQuantity};
use dewbound_tests::desk::{Desk, cape_and_cin};

type Shown = [(Option<f64>, Option<f64>); 3];

fn item(session: &Session) -> &Item {
    session.current().unwrap()
}

fn shown(session: &Session) -> Shown {
    cape_and_cin(&item(session).results().numbers)
}

/// Differs by no more than the rounding of a subtraction; a change of an absent number is absent.
fn check(place: &str, cost: Option<Cost>, with: Shown, without: Shown) {
    let difference = |a: Option<f64>, b: Option<f64>| Some(a? - b?);
    for (index, parcel) in Parcel::ALL.into_iter().enumerate() {
        let cape = difference(with[index].0, without[index].0);
        let cin = difference(with[index].1, without[index].1);
        let change = cost.map(|cost| cost.parcel(parcel)).unwrap_or_default();
        for (what, moved, told) in [("CAPE", cape, change.cape), ("CIN", cin, change.cin)] {
            let same = match (moved, told) {
                (Some(moved), Some(told)) => (moved - told).abs() < 1e-9,
                (None, None) => true,
                _ => false,
            };
            assert!(
                same,
                "{place}, {parcel:?}: {what} moved by {moved:?}, told {told:?}"
            );
        }
    }
}

fn repairs(item: &Item) -> Vec<RepairId> {
    let findings = item.findings().iter().enumerate();
    findings
        .flat_map(|(finding, found)| {
            (0..found.repairs.len()).map(move |repair| RepairId { finding, repair })
        })
        .collect()
}

fn told(item: &Item, id: RepairId) -> Option<Cost> {
    item.results().cards[id.finding].costs[id.repair]
}

fn place(item: &Item, id: RepairId) -> String {
    let finding = &item.findings()[id.finding];
    format!(
        "{}, {}, {}",
        item.sounding().station.label(),
        finding.key(),
        finding.repairs[id.repair].id
    )
}

/// Takes each repair and withdraws it again; returns how many there were.
fn toggle_each(session: &mut Session) -> usize {
    let all = repairs(item(session));
    for &id in &all {
        let where_ = place(item(session), id);
        let cost = told(item(session), id);
        let without = shown(session);
        let preview = item(session).preview(id).unwrap();
        session.apply(Command::ApplyRepair(id));
        assert!(item(session).is_applied(id), "{where_}");
        let with = shown(session);
        check(&where_, cost, with, without);
        assert_eq!(
            cape_and_cin(&preview.numbers),
            with,
            "{where_}: what was previewed"
        );
        // While it is in force its card shows what it has changed.
        assert_eq!(told(item(session), id), cost, "{where_}");
        session.apply(Command::WithdrawRepair(id));
        assert_eq!(shown(session), without, "{where_}");
        session.apply(Command::Undo);
        session.apply(Command::Undo);
        assert_eq!(shown(session), without, "{where_}");
    }
    all.len()
}

/// Takes the first repair of one finding after the other, leaving the earlier ones in force.
fn toggle_in_turn(session: &mut Session) {
    for finding in 0..item(session).findings().len() {
        if item(session).findings()[finding].repairs.is_empty() {
            continue;
        }
        let id = RepairId { finding, repair: 0 };
        let (where_, cost) = (place(item(session), id), told(item(session), id));
        let without = shown(session);
        session.apply(Command::ApplyRepair(id));
        check(
            &format!("{where_}, after others"),
            cost,
            shown(session),
            without,
        );
    }
}

#[test]
fn every_repair_of_the_demo_tray_costs_what_its_card_shows() {
    let mut desk = Desk::demo().unwrap();
    let session = &mut desk.session;
    let ids: Vec<ItemId> = session.items().iter().map(Item::id).collect();
    let mut count = 0;
    for id in ids {
        session.apply(Command::Select(id));
        count += toggle_each(session);
        session.apply(Command::Nudge {
            quantity: SurfaceQuantity::Dewpoint,
            by_k: -1.5,
            repeat: false,
        });
        count += toggle_each(session);
        toggle_in_turn(session);
        session.apply(Command::ClearAmendments);
        toggle_in_turn(session);
    }
    assert!(count >= 10, "{count} repairs");
}

#[test]
fn while_dragging_the_headline_costs_are_those_of_the_value_under_the_pointer() {
    let mut desk = Desk::demo().unwrap();
    let session = &mut desk.session;
    let ids: Vec<ItemId> = session.items().iter().map(Item::id).collect();
    let mut compared = 0;
    for id in ids {
        session.apply(Command::Select(id));
        session.apply(Command::BeginGesture);
        for _ in 0..4 {
            session.apply(Command::Nudge {
                quantity: SurfaceQuantity::Dewpoint,
                by_k: -0.7,
                repeat: false,
            });
            let now = item(session);
            let afresh = Results::of(now.analysed(), now.document());
            assert_eq!(now.results().numbers, afresh.numbers);
            for (card, anew) in now.results().cards.iter().zip(&afresh.cards) {
                if let Some(headline) = card.headline {
                    assert!(!card.is_stale(headline));
                    assert_eq!(card.costs[headline], anew.costs[headline]);
                    compared += 1;
                }
            }
        }
        session.apply(Command::EndGesture);
        let now = item(session);
        let afresh = Results::of(now.analysed(), now.document());
        assert_eq!(
            now.results().cards,
            afresh.cards,
            "in full when the drag is over"
        );
    }
    assert!(compared >= 12, "{compared}");
}
