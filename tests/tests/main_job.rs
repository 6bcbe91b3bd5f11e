//! The main job without a window: a message comes over the wire, its doubts are seen and priced, the dew point is dragged,
//! a repair taken, the verdict kept, and the next shift finds it.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::ledger::Verdict;
use dewbound_session::sounding::{Daylight, Numbers, Parcel};
use dewbound_session::{
    Action, Command, Item, RepairId, Session, Standing, SurfaceQuantity, wording,
};
use dewbound_tests::desk::{Desk, c, cape_and_cin, first_rule};
use dewbound_tests::wire::{Parts, SCREEN_BIAS, moist_screen};
use std::collections::BTreeSet;
use std::fs;
use std::path::Path;

const DEWPOINT: SurfaceQuantity = SurfaceQuantity::Dewpoint;

fn item(session: &Session) -> &Item {
    session.current().unwrap()
}

fn numbers(session: &Session) -> Numbers {
    item(session).results().numbers.clone()
}

fn cape(session: &Session, parcel: Parcel) -> f64 {
    numbers(session).parcel(parcel).unwrap().cape
}

fn decide(session: &mut Session, verdict: Verdict, reasons: &str) {
    session.apply(Command::ChooseVerdict(Some(verdict)));
    session.apply(Command::SetReasons(reasons.to_owned()));
    assert_eq!(session.can(Action::Decide), Ok(()));
    session.apply(Command::Decide);
    session.wait();
}

/// Lines of every ledger file in a folder.
fn ledger_lines(folder: &Path) -> Vec<String> {
    fs::read_dir(folder)
        .unwrap()
        .map(|entry| fs::read_to_string(entry.unwrap().path()).unwrap())
        .flat_map(|text| text.lines().map(str::to_owned).collect::<Vec<_>>())
        .collect()
}

#[test]
fn from_a_message_to_a_verdict_the_next_shift_finds() {
    let mut desk = Desk::new().unwrap();
    let message = moist_screen(Parts::All);
    desk.receive("ashgill-20310614-00z.txt", &message).unwrap();

    // It is read: station and position from the office's table, all four parts, no complaint.
    let received = item(&desk.session);
    assert_eq!(received.sounding().station.label(), "Ashgill");
    assert_eq!(received.daylight(), Daylight::Day);
    assert!(!received.demo());
    assert_eq!(*received.standing(), Standing::Undecided);
    assert_eq!(
        received.sounding().times.valid().unwrap().to_string(),
        "2031-06-14T00:00:00Z"
    );

    // The screen is suspected, and what the mixed layer implies is the truth the message was made from.
    assert_eq!(first_rule(received), Some("moisture-slope"));
    let reported = received.received_surface(DEWPOINT).unwrap();
    let interval = received.results().doubt.interval.clone().unwrap();
    assert!(interval.contains(reported) && interval.contains(c(reported.c() - SCREEN_BIAS)));
    let before = numbers(&desk.session);

    // The dew point is dragged down to there: every number is that of the value under the pointer.
    let session = &mut desk.session;
    session.hold_order(true);
    session.apply(Command::BeginGesture);
    let mut last = cape(session, Parcel::Surface);
    for step in 1..=8 {
        let value = c(reported.c() - 0.5 * f64::from(step));
        session.apply(Command::SetSurface(DEWPOINT, value));
        let now = item(session);
        assert_eq!(now.results().revision, now.revision());
        assert_eq!(now.working_surface(DEWPOINT), Some(value));
        let surface = now.results().numbers.surface.clone().unwrap();
        assert!((surface.start.dewpoint.k() - value.k()).abs() < 1e-9);
        assert!(surface.cape < last, "drier air has less CAPE");
        last = surface.cape;
    }
    session.apply(Command::EndGesture);
    session.hold_order(false);
    let dragged = numbers(session);
    // Common practice, no source: a few degrees of surface dew point can exceed 1,000 J/kg.
    assert!(before.surface.as_ref().unwrap().cape - last > 1000.0);
    assert_ne!(before.mixed, dragged.mixed, "by day the edit is mixed up");

    // One step back, one forward; findings are those of the received profile all the while.
    let findings = item(session).findings().to_vec();
    session.apply(Command::Undo);
    assert_eq!(numbers(session), before);
    assert_eq!(item(session).document().amendments.entries.len(), 0);
    session.apply(Command::Redo);
    assert_eq!(numbers(session), dragged);
    session.apply(Command::Undo);
    assert_eq!(item(session).findings(), findings);

    // The repair that believes the sonde takes the surface to the implied dew point.
    let first = item(session).results().order[0];
    let repair = RepairId {
        finding: first,
        repair: 0,
    };
    let cost = item(session).results().cards[first].costs[0].unwrap();
    session.apply(Command::ApplyRepair(repair));
    assert!(item(session).is_applied(repair));
    let repaired = numbers(session);
    assert!(
        (item(session).working_surface(DEWPOINT).unwrap().c() - (reported.c() - SCREEN_BIAS)).abs()
            < 1.0
    );
    for parcel in Parcel::ALL {
        let moved = repaired.parcel(parcel).unwrap().cape - before.parcel(parcel).unwrap().cape;
        assert!((moved - cost.parcel(parcel).cape.unwrap()).abs() < 1e-6);
    }
    session.apply(Command::Undo);
    assert_eq!(numbers(session), before);
    session.apply(Command::Redo);
    assert_eq!(numbers(session), repaired);

    // Decided: said kept only when the ledger on the disk has it.
    decide(session, Verdict::AcceptedAsAmended, "wet screen");
    let Standing::Decided(decision) = item(session).standing().clone() else {
        panic!("{:?}", desk.told());
    };
    assert!(desk.told().iter().any(|line| line.contains("kept")));
    let session = &desk.session;
    let lines = ledger_lines(&session.config().ledger);
    assert_eq!(lines.len(), 1, "{lines:?}");
    let line: serde_json::Value = serde_json::from_str(&lines[0]).unwrap();
    let kept = &line["decision"];
    assert_eq!(kept["sounding"]["station"], "wmo:00301");
    assert_eq!(kept["sounding"]["date"], "2031-06-14");
    assert_eq!(kept["sounding"]["hour"], 0);
    assert_eq!(
        (&kept["initials"], &kept["demo"]),
        (&"KM".into(), &false.into())
    );
    // Part A to D, each under its own digest.
    assert_eq!(kept["parts"].as_array().unwrap().len(), 4);
    let surface = repaired.surface.as_ref().unwrap().cape;
    assert_eq!(kept["cape_jkg"][0].as_f64(), Some(surface));
    let copied = item(session).copy_line();
    for word in [
        "Ashgill",
        "2031-06-14 00:00 UTC",
        "accepted as amended (KM",
        "wet screen",
        "official warnings and local procedures rule",
    ] {
        assert!(copied.contains(word), "{word:?} in {copied:?}");
    }

    // The next shift opens the same message and sees the verdict and the amended numbers.
    let mut next = desk.restart();
    next.receive("again.txt", &message).unwrap();
    assert_eq!(*item(&next.session).standing(), Standing::Decided(decision));
    assert_eq!(
        cape_and_cin(&numbers(&next.session)),
        cape_and_cin(&repaired)
    );
    let row = &next.session.tray()[0];
    assert!(!row.open && !row.draft && !row.review);
}

#[test]
fn a_verdict_on_part_a_alone_is_to_be_reviewed_when_the_other_parts_come() {
    let mut desk = Desk::new().unwrap();
    desk.receive("first.txt", &moist_screen(Parts::OnlyFirst))
        .unwrap();
    decide(&mut desk.session, Verdict::Accepted, "");
    assert!(matches!(
        item(&desk.session).standing(),
        Standing::Decided(_)
    ));

    let mut next = desk.restart();
    next.receive("all.txt", &moist_screen(Parts::All)).unwrap();
    let Standing::DecidedOnEarlierData(decision) = item(&next.session).standing() else {
        panic!("{:?}", item(&next.session).standing());
    };
    assert_eq!(decision.parts.len(), 1);
    let row = &next.session.tray()[0];
    assert!(row.open && row.review);
    assert_eq!(row.verdict, "decided on earlier data: review");

    // Decided anew, both decisions stay, and each set of parts has its own.
    decide(&mut next.session, Verdict::Contaminated, "screen");
    assert_eq!(next.session.decisions(false).unwrap().len(), 2);
    next.receive("first-again.txt", &moist_screen(Parts::OnlyFirst))
        .unwrap();
    let verdicts: Vec<&str> = next
        .session
        .tray()
        .iter()
        .map(|row| row.verdict.as_str())
        .collect();
    assert_eq!(verdicts.len(), 2);
    for expected in ["accepted (KM)", "contaminated (KM)"] {
        assert!(verdicts.contains(&expected), "{verdicts:?}");
    }
}

#[test]
fn a_draft_survives_the_night() {
    let mut desk = Desk::new().unwrap();
    let message = moist_screen(Parts::All);
    desk.receive("ashgill.txt", &message).unwrap();
    let session = &mut desk.session;
    session.apply(Command::Nudge {
        quantity: DEWPOINT,
        by_k: -2.0,
        repeat: false,
    });
    session.apply(Command::SetReasons("ask the observer".to_owned()));
    let (document, drafted) = (item(session).document().clone(), numbers(session));
    assert_eq!(*item(session).standing(), Standing::Draft);

    let mut desk = desk.restart();
    // Nothing is decided by a draft.
    assert!(ledger_lines(&desk.session.config().ledger).is_empty());
    desk.receive("ashgill.txt", &message).unwrap();
    let found = item(&desk.session);
    assert_eq!(*found.standing(), Standing::Draft);
    assert_eq!(*found.document(), document);
    assert_eq!(found.results().numbers, drafted);
    assert!(desk.session.tray()[0].draft && desk.session.tray()[0].open);

    decide(
        &mut desk.session,
        Verdict::AcceptedAsAmended,
        "observer agrees",
    );
    let mut desk = desk.restart();
    desk.receive("ashgill.txt", &message).unwrap();
    assert!(matches!(
        item(&desk.session).standing(),
        Standing::Decided(_)
    ));
    assert!(!desk.session.tray()[0].draft);
}

/// Everything said about what was opened: messages, and the notes of each sounding.
fn said(desk: &Desk) -> BTreeSet<String> {
    let items = desk.session.items().iter();
    let notes = items.flat_map(|item| item.notes().iter().map(wording::note).collect::<Vec<_>>());
    desk.told().into_iter().chain(notes).collect()
}

#[test]
fn a_message_damaged_on_the_way_serves_with_what_is_left_and_the_damage_is_told() {
    let whole = moist_screen(Parts::All);
    let mut desk = Desk::new().unwrap();
    desk.receive("message.txt", &whole).unwrap();
    let undamaged = said(&desk);
    let groups = whole.split_whitespace().count();
    let mut lost = 0;
    // One group after the other garbled: never a panic, never a value or a sounding lost without a word.
    for index in 0..groups {
        let mut seen = 0;
        let damaged: String = whole
            .split_inclusive(char::is_whitespace)
            .map(|word| {
                let group = !word.trim().is_empty();
                seen += usize::from(group);
                if group && seen == index + 1 {
                    word.replace(|c: char| c.is_ascii_alphanumeric(), "#")
                } else {
                    word.to_owned()
                }
            })
            .collect();
        // Nothing to garble in a missing value.
        if damaged == whole {
            continue;
        }
        let mut desk = Desk::new().unwrap();
        desk.receive("message.txt", &damaged).unwrap();
        assert!(
            said(&desk).difference(&undamaged).next().is_some(),
            "group {index} garbled without a word: {damaged}"
        );
        lost += usize::from(desk.session.items().is_empty());
        for item in desk.session.items() {
            for (cape, cin) in cape_and_cin(&item.results().numbers) {
                assert!(cape.is_none_or(|cape| cape.is_finite() && cape >= 0.0));
                assert!(cin.is_none_or(|cin| cin.is_finite() && cin <= 0.0));
            }
        }
    }
    assert_eq!(lost, 0, "the other parts still make a sounding");
}
