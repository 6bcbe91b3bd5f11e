//! CAPE by other kinds of ascent: computed when asked for, at rest only, and marked stale when the profile has moved on.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::Desk;
use dewbound_session::sounding::OtherAscents;
use dewbound_session::sounding::thermo::Temperature;
use dewbound_session::{Command, Item, Session, SurfaceQuantity};

fn item(session: &Session) -> &Item {
    session.current().unwrap()
}

fn set(session: &mut Session, celsius: f64) {
    let dewpoint = Temperature::from_c(celsius);
    session.apply(Command::SetSurface(SurfaceQuantity::Dewpoint, dewpoint));
}

/// What is shown is of the document as it is: computing it from nothing gives the same.
fn check_fresh(session: &Session) {
    let item = item(session);
    let shown = item.other_ascents();
    let results = item.results();
    let afresh = OtherAscents::of(&results.working.profile, &results.numbers);
    assert_eq!(shown.working, Some(&afresh));
    assert!(!shown.stale && !shown.is_wanting());
}

#[test]
fn nothing_is_computed_before_it_is_asked_for() {
    let mut desk = Desk::open();
    assert!(item(&desk.session).other_ascents().is_wanting());
    let before = item(&desk.session).revision();
    desk.session.apply(Command::CompareAscents);
    check_fresh(&desk.session);
    let shown = item(&desk.session).other_ascents();
    assert_eq!(shown.working, shown.received);
    assert_eq!(item(&desk.session).revision(), before);
    assert!(!item(&desk.session).is_draft() && !item(&desk.session).can_undo());
}

#[test]
fn a_drag_leaves_them_stale_until_it_ends() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    session.apply(Command::CompareAscents);
    let received = *item(session).other_ascents().received.unwrap();
    session.apply(Command::BeginGesture);
    set(session, 18.0);
    session.apply(Command::CompareAscents);
    let shown = item(session).other_ascents();
    assert!(shown.stale && shown.is_wanting());
    assert_eq!(shown.working, Some(&received));
    session.apply(Command::EndGesture);
    assert!(item(session).other_ascents().stale);
    session.apply(Command::CompareAscents);
    check_fresh(session);
    let shown = item(session).other_ascents();
    assert_eq!(shown.received, Some(&received));
    assert_ne!(shown.working, shown.received);
    // What doesn't touch the profile doesn't touch them.
    session.apply(Command::SetReasons("seen".to_owned()));
    check_fresh(session);
    session.apply(Command::Undo);
    session.apply(Command::Undo);
    assert!(item(session).other_ascents().stale);
    session.apply(Command::CompareAscents);
    check_fresh(session);
}

#[test]
fn a_preview_has_its_further_numbers() {
    let desk = Desk::open();
    let item = item(&desk.session);
    let (finding, repair) = item
        .findings()
        .iter()
        .enumerate()
        .find_map(|(index, finding)| (!finding.repairs.is_empty()).then_some((index, 0)))
        .expect("a finding with a repair");
    let preview = item
        .preview(dewbound_session::RepairId { finding, repair })
        .unwrap();
    let mut document = item.document().clone();
    document.amendments = dewbound_session::trust::with_repair(
        &document.amendments,
        &item.findings()[finding],
        &item.findings()[finding].repairs[repair],
    );
    let afresh = dewbound_session::Results::of(item.analysed(), &document);
    assert_eq!(preview.further, afresh.further);
    assert_ne!(preview.further, item.results().further);
}
