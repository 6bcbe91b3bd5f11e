//! Edits, undo, gestures, revisions, costs.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Desk, moist_surface};
use dewbound_session::ledger::Verdict;
use dewbound_session::sounding::thermo::{Pressure, Temperature};
use dewbound_session::sounding::{Amendment, Numbers, Parcel, Reach};
use dewbound_session::{
    Action, Command, Document, IntervalEnd, Item, RepairId, Session, SurfaceQuantity,
};
use std::sync::Arc;

use SurfaceQuantity::{Dewpoint, Temperature as Air};

fn c(celsius: f64) -> Temperature {
    Temperature::from_c(celsius)
}

fn item(session: &Session) -> &Item {
    session.current().unwrap()
}

fn cape(session: &Session) -> f64 {
    item(session)
        .results()
        .numbers
        .surface
        .as_ref()
        .unwrap()
        .cape
}

/// Results belong to the document: computing them from nothing gives the same.
fn check_results_fit(session: &Session) {
    let item = item(session);
    let afresh = dewbound_session::Results::of(item.analysed(), item.document());
    let shown = item.results();
    assert_eq!(shown.working, afresh.working);
    assert_eq!(shown.numbers, afresh.numbers);
    assert_eq!(shown.further, afresh.further);
    assert_eq!(shown.picked, afresh.picked);
    assert_eq!(shown.cards, afresh.cards);
    assert_eq!(shown.doubt, afresh.doubt);
    assert_eq!(shown.which_parcel, afresh.which_parcel);
    assert_eq!(item.revision(), shown.revision);
}

#[test]
fn every_command_leaves_results_of_the_document_and_undo_gives_each_document_back() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    assert!(!item(session).findings().is_empty());
    let repair = RepairId {
        finding: 0,
        repair: 0,
    };
    let commands = [
        Command::SetSurface(Dewpoint, c(18.3)),
        Command::SetSurface(Air, c(33.0)),
        Command::SetReach(Some(Reach::Level)),
        Command::Nudge {
            quantity: Dewpoint,
            by_k: -0.1,
            repeat: false,
        },
        Command::ApplyRepair(repair),
        Command::AddAmendment(Amendment::DisregardAbove {
            pressure_pa: 25_000.0,
        }),
        Command::PickLevel(Some(Pressure::from_hpa(900.0))),
        Command::PinAtWorking(IntervalEnd::High),
        Command::Pin(IntervalEnd::Low, c(14.0)),
        Command::Unpin(IntervalEnd::High),
        Command::SetReach(Some(Reach::Tapered)),
        Command::ToggleAmendment(0),
        Command::RemoveAmendment(0),
        Command::WithdrawRepair(repair),
        Command::ResetSurface(Air),
        Command::ChooseVerdict(Some(Verdict::Contaminated)),
        Command::SetReasons("wet screen".to_owned()),
        Command::ClearAmendments,
    ];
    let mut documents: Vec<Document> = vec![item(session).document().clone()];
    let mut last = item(session).revision();
    for command in commands {
        session.apply(command.clone());
        let document = item(session).document().clone();
        assert_ne!(
            Some(&document),
            documents.last(),
            "{command:?} changed nothing"
        );
        documents.push(document);
        assert!(item(session).revision() > last, "{command:?}");
        last = item(session).revision();
        check_results_fit(session);
    }
    assert_eq!(
        session.messages().len(),
        0,
        "nothing was refused: {:?}",
        session.messages()
    );
    for document in documents.iter().rev().skip(1) {
        session.apply(Command::Undo);
        assert_eq!(item(session).document(), document);
        check_results_fit(session);
    }
    assert!(!item(session).can_undo());
    assert_eq!(*item(session).document(), Document::default());
    for document in documents.iter().skip(1) {
        session.apply(Command::Redo);
        assert_eq!(item(session).document(), document);
    }
    assert!(!item(session).can_redo());
    check_results_fit(session);
}

#[test]
fn a_drag_is_one_undo_step_moves_the_numbers_at_every_point_and_computes_no_range_anew() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let before = item(session).document().clone();
    session.apply(Command::SetSurface(Dewpoint, c(19.9)));
    let response = item(session).results().doubt.response.clone();
    session.apply(Command::BeginGesture);
    let mut last = cape(session);
    for tenth in 1..=30 {
        session.apply(Command::SetSurface(
            Dewpoint,
            c(19.9 - 0.1 * f64::from(tenth)),
        ));
        assert!(cape(session) < last, "drier, so less CAPE");
        last = cape(session);
        assert_eq!(item(session).results().doubt.response, response);
    }
    check_results_fit(session);
    session.apply(Command::EndGesture);
    session.apply(Command::Undo);
    assert_eq!(
        item(session)
            .document()
            .surface(Dewpoint)
            .map(Temperature::k),
        Some(c(19.9).k())
    );
    session.apply(Command::Undo);
    assert_eq!(*item(session).document(), before);
}

#[test]
fn escape_during_a_drag_restores_all_and_keeps_what_could_be_redone() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    session.apply(Command::SetSurface(Dewpoint, c(19.0)));
    session.apply(Command::SetSurface(Dewpoint, c(17.0)));
    session.apply(Command::Undo);
    let (document, numbers) = (
        item(session).document().clone(),
        item(session).results().numbers.clone(),
    );
    for end in [Command::CancelGesture, Command::Undo] {
        session.apply(Command::BeginGesture);
        session.apply(Command::SetSurface(Dewpoint, c(12.0)));
        session.apply(Command::SetSurface(Air, c(31.0)));
        assert!(session.can(Action::Redo).is_err(), "not within a drag");
        session.apply(end);
        assert!(!item(session).in_gesture());
        assert_eq!(*item(session).document(), document);
        assert_eq!(item(session).results().numbers, numbers);
        assert!(item(session).can_redo());
        check_results_fit(session);
    }
}

#[test]
fn a_key_held_down_is_one_step_and_single_strokes_are_one_each() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let nudge = |repeat| Command::Nudge {
        quantity: Dewpoint,
        by_k: 0.1,
        repeat,
    };
    for repeat in [false, true, true, true, false] {
        session.apply(nudge(repeat));
    }
    let at = |session: &Session| item(session).working_surface(Dewpoint).unwrap().c();
    assert!((at(session) - 20.5).abs() < 1e-9);
    session.apply(Command::Undo);
    assert!((at(session) - 20.4).abs() < 1e-9);
    session.apply(Command::Undo);
    assert!((at(session) - 20.0).abs() < 1e-9);
}

#[test]
fn dew_point_never_exceeds_temperature_and_slips_are_refused() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let air = item(session).received_surface(Air).unwrap();
    session.apply(Command::SetSurface(Dewpoint, c(50.0)));
    assert_eq!(item(session).working_surface(Dewpoint).unwrap(), air);
    session.apply(Command::SetSurface(Dewpoint, c(20.0)));
    session.apply(Command::SetSurface(Air, c(5.0)));
    assert!((item(session).working_surface(Air).unwrap().c() - 20.0).abs() < 1e-9);
    let document = item(session).document().clone();
    for wrong in [f64::NAN, f64::INFINITY, -300.0, 99.0] {
        session.apply(Command::SetSurface(Air, c(wrong)));
        session.apply(Command::Pin(IntervalEnd::Low, c(wrong)));
    }
    session.apply(Command::Pin(IntervalEnd::High, c(10.0)));
    session.apply(Command::Pin(IntervalEnd::Low, c(11.0)));
    assert_eq!(item(session).document().pins.low_k, None);
    session.apply(Command::Undo);
    assert_eq!(*item(session).document(), document);
    // The same refusal again is the same message.
    assert_eq!(session.messages().len(), 6);
}

#[test]
fn taking_and_withdrawing_a_repair_moves_the_numbers_by_exactly_the_cost_shown() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    // Also on a working profile that is not the received one.
    session.apply(Command::SetSurface(Dewpoint, c(19.2)));
    let mut seen = 0;
    for finding in 0..item(session).findings().len() {
        for repair in 0..item(session).findings()[finding].repairs.len() {
            let id = RepairId { finding, repair };
            let without = item(session).results().numbers.clone();
            let Some(cost) = item(session).results().cards[finding].costs[repair] else {
                continue;
            };
            let preview = item(session).preview(id).unwrap();
            session.apply(Command::ApplyRepair(id));
            assert!(item(session).is_applied(id));
            let with = item(session).results().numbers.clone();
            assert_eq!(
                preview.numbers, with,
                "the preview is what applying it gives"
            );
            check_cost(&cost, &with, &without);
            // Taken, the card still says what it has changed.
            let card = item(session).results().cards[finding].clone();
            assert_eq!(card.applied, Some(repair));
            check_cost(&card.costs[repair].unwrap(), &with, &without);
            session.apply(Command::WithdrawRepair(id));
            assert_eq!(item(session).results().numbers, without);
            seen += 1;
        }
    }
    assert!(seen >= 2, "{seen} priced repairs");
}

fn check_cost(cost: &dewbound_session::trust::Cost, with: &Numbers, without: &Numbers) {
    for parcel in Parcel::ALL {
        let of = |numbers: &Numbers| numbers.parcel(parcel).unwrap().cape;
        assert_eq!(cost.parcel(parcel).cape, Some(of(with) - of(without)));
    }
}

#[test]
fn findings_stay_those_of_the_received_profile() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let before = item(session).findings().to_vec();
    session.apply(Command::SetSurface(Dewpoint, c(16.0)));
    assert_eq!(item(session).findings(), before);
    assert_eq!(
        item(session).received_numbers(),
        &Numbers::of(item(session).received())
    );
}

#[test]
fn a_working_number_never_stands_outside_its_own_range() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let interval = item(session).results().doubt.interval.clone().unwrap();
    for step in 0..=40 {
        let at = interval.low.k() + (interval.high.k() - interval.low.k()) * f64::from(step) / 40.0;
        session.apply(Command::SetSurface(Dewpoint, Temperature::from_k(at)));
        let results = item(session).results();
        for parcel in Parcel::ALL {
            let cape = results.numbers.parcel(parcel).unwrap().cape;
            let range = results.doubt.range(parcel).cape.unwrap();
            assert!(
                (range.least..=range.most).contains(&cape),
                "{parcel:?} {cape} {range:?}"
            );
        }
    }
}

#[test]
fn pins_move_the_ends_and_are_named_as_such() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    session.apply(Command::Pin(IntervalEnd::Low, c(12.0)));
    session.apply(Command::Pin(IntervalEnd::High, c(13.0)));
    let interval = item(session).results().doubt.interval.clone().unwrap();
    assert_eq!((interval.low, interval.high), (c(12.0), c(13.0)));
    assert!(!interval.provisional);
    let pinned = item(session).results().doubt.candidates.len();
    assert_eq!(pinned, 4);
}

#[test]
fn order_is_held_while_asked_and_follows_the_costs_after() {
    let mut desk = Desk::open();
    desk.add("other.csv", &moist_surface("99002", 16.2));
    let session = &mut desk.session;
    let rows =
        |session: &Session| -> Vec<_> { session.tray().iter().map(|row| row.item).collect() };
    let before = rows(session);
    session.apply(Command::Select(before[0]));
    session.hold_order(true);
    // Believing the mixed layer, nothing is left to lose by it.
    session.apply(Command::SetSurface(Dewpoint, c(15.9)));
    session.apply(Command::SetReach(Some(Reach::Level)));
    assert_eq!(rows(session), before);
    let held = item(session).results().order.clone();
    session.hold_order(false);
    let mut sorted = item(session).results().order.clone();
    let afresh = dewbound_session::Results::of(item(session).analysed(), item(session).document());
    assert_eq!(sorted, afresh.order);
    let mut held = held;
    held.sort_unstable();
    sorted.sort_unstable();
    assert_eq!(held, sorted, "the same cards, whatever their order");
}

#[test]
fn selecting_ends_the_drag_and_walks_the_tray() {
    let mut desk = Desk::open();
    desk.add("other.csv", &moist_surface("99002", 16.2));
    let session = &mut desk.session;
    let order: Vec<_> = session.tray().iter().map(|row| row.item).collect();
    session.apply(Command::Select(order[0]));
    session.apply(Command::BeginGesture);
    session.apply(Command::SetSurface(Dewpoint, c(19.0)));
    session.apply(Command::SelectNext);
    assert_eq!(item(session).id(), order[1]);
    session.apply(Command::SelectNext);
    assert_eq!(item(session).id(), order[1], "the last one stays");
    session.apply(Command::SelectPrevious);
    assert!(!item(session).in_gesture());
    assert!(item(session).can_undo());
    session.apply(Command::Close(order[0]));
    assert_eq!(item(session).id(), order[1]);
    session.apply(Command::Close(order[1]));
    assert!(session.current().is_none());
    // Nothing open: commands do nothing, actions say why.
    session.apply(Command::SetSurface(Dewpoint, c(19.0)));
    session.apply(Command::Undo);
    assert_eq!(
        session.can(Action::Undo),
        Err("no sounding is open".to_owned())
    );
}

#[test]
fn every_action_of_the_session_has_a_command_when_it_can_be_done() {
    let mut desk = Desk::open();
    desk.add("other.csv", &moist_surface("99002", 16.2));
    let session = &mut desk.session;
    let first = session.tray()[0].item;
    session.apply(Command::Select(first));
    session.apply(Command::SetSurface(Dewpoint, c(19.0)));
    session.apply(Command::SetSurface(Air, c(31.0)));
    session.apply(Command::Pin(IntervalEnd::Low, c(12.0)));
    session.apply(Command::Pin(IntervalEnd::High, c(22.0)));
    session.apply(Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)));
    session.apply(Command::SetReasons("screen wet".to_owned()));
    session.apply(Command::SetReach(None));
    session.apply(Command::PickLevel(Some(Pressure::from_hpa(850.0))));
    session.apply(Command::Undo);
    for declaration in dewbound_session::ACTIONS {
        let action = declaration.action;
        assert_eq!(action.declaration(), declaration);
        assert_eq!(session.can(action), Ok(()), "{action:?}");
        assert_eq!(
            session.command_of(action).is_none(),
            declaration.window,
            "{action:?}"
        );
    }
    let mut keys: Vec<String> = dewbound_session::ACTIONS
        .iter()
        .filter_map(|declaration| Some(declaration.shortcut?.text()))
        .collect();
    let count = keys.len();
    keys.sort();
    keys.dedup();
    assert_eq!(keys.len(), count, "no key does two things");
}

#[test]
fn doubt_is_shared_until_it_changes() {
    let mut desk = Desk::open();
    let session = &mut desk.session;
    let before = item(session).results().doubt.clone();
    session.apply(Command::SetReasons("x".to_owned()));
    assert!(Arc::ptr_eq(&before, &item(session).results().doubt));
    session.apply(Command::SetSurface(Air, c(31.0)));
    assert_ne!(before.response, item(session).results().doubt.response);
}

#[test]
fn what_a_drag_samples_coarsely_is_sampled_in_full_when_it_ends() {
    let mut desk = Desk::new();
    // Fine enough for a frame not to afford the whole response.
    let mut text =
        "# time: 2031-06-14T22:00:00Z\npressure_hpa,temperature_c,dewpoint_c\n".to_owned();
    for row in 0..4_000 {
        let hpa = 965.0 - 0.2 * f64::from(row);
        let t = 30.0 - 0.09 * (965.0 - hpa);
        text.push_str(&format!("{hpa:.1},{t:.3},{:.3}\n", t - 8.0));
    }
    desk.add("fine.csv", &text);
    let session = &mut desk.session;
    let current = item(session).id();
    for end in [
        Command::EndGesture,
        Command::CancelGesture,
        Command::Undo,
        Command::Close(current),
    ] {
        session.apply(Command::BeginGesture);
        session.apply(Command::SetSurface(Air, c(31.0)));
        session.apply(Command::SetSurface(Air, c(32.0)));
        let doubt = item(session).results().doubt.clone();
        assert!(doubt.coarse, "{end:?}");
        assert!(doubt.response.len() >= 7, "{}", doubt.response.len());
        assert!(doubt.range(Parcel::Surface).cape.is_some());
        session.apply(end.clone());
        if let Some(item) = session.current() {
            assert!(!item.results().doubt.coarse, "{end:?}");
            check_results_fit(session);
        }
    }
}

#[test]
fn a_reach_through_a_layer_that_is_not_mixed_is_off_with_the_reason() {
    let mut desk = Desk::new();
    desk.add(
        "night.csv",
        "# time: 2031-06-14T10:00:00Z\npressure_hpa,temperature_c,dewpoint_c\n\
         965,15,13\n955,18,12\n850,14,8\n500,-12,-30\n100,-60,-80\n",
    );
    for action in [Action::ReachMixed, Action::ReachTapered] {
        let why = desk.session.can(action).unwrap_err();
        assert!(why.contains("hPa deep"), "{why}");
    }
    assert_eq!(desk.session.can(Action::ReachLevel), Ok(()));
}

#[test]
fn what_a_frame_cannot_price_is_stale_during_the_drag_the_headline_never() {
    let mut desk = Desk::new();
    let mut text =
        "# time: 2031-06-14T22:00:00Z\n# position: 41.0, -146.0, 400\ntime_s,pressure_hpa,temperature_c,dewpoint_c\n"
            .to_owned();
    for row in 0..5_000 {
        let hpa = 965.0 - 0.17 * f64::from(row);
        // Dips of 4 K, 12 hPa deep: theta falls into each.
        let dip = [780.0, 700.0, 620.0, 540.0, 460.0]
            .iter()
            .map(|at: &f64| (1.0 - (hpa - at).abs() / 6.0).max(0.0))
            .sum::<f64>();
        let t = 30.0 - 0.09 * (965.0 - hpa) - 4.0 * dip;
        text.push_str(&format!(
            "{row},{hpa:.2},{t:.3},{:.3}\n",
            30.0 - 0.1 * (965.0 - hpa) - 14.0
        ));
    }
    desk.add("dips.csv", &text);
    let session = &mut desk.session;
    let count: usize = item(session)
        .findings()
        .iter()
        .map(|finding| finding.repairs.len())
        .sum();
    assert!(count >= 8, "{count} repairs");
    let stale = |session: &Session| -> usize {
        let cards = item(session).results().cards.iter();
        cards
            .flat_map(|card| &card.stale)
            .filter(|&&stale| stale)
            .count()
    };
    session.apply(Command::BeginGesture);
    session.apply(Command::SetSurface(Dewpoint, c(17.0)));
    session.apply(Command::SetSurface(Dewpoint, c(18.0)));
    assert!(stale(session) > 0);
    let afresh = dewbound_session::Results::of(item(session).analysed(), item(session).document());
    for (card, fresh) in item(session).results().cards.iter().zip(&afresh.cards) {
        for (index, cost) in card.costs.iter().enumerate() {
            if !card.is_stale(index) {
                assert_eq!(
                    *cost, fresh.costs[index],
                    "what isn't stale is of this revision"
                );
            }
        }
        assert!(
            card.headline
                .is_none_or(|headline| !card.is_stale(headline))
        );
    }
    session.apply(Command::EndGesture);
    assert_eq!(stale(session), 0);
    check_results_fit(session);
}
