//! Verdicts, the ledger, drafts, what is remembered.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Desk, config, moist_surface};
use dewbound_session::ledger::{Appender, Disk, RealDisk, Verdict};
use dewbound_session::sounding::thermo::Temperature;
use dewbound_session::sounding::{Daylight, Position};
use dewbound_session::{Action, Command, Config, Session, Standing, SurfaceQuantity, Weight};
use std::fs;
use std::io;
use std::path::Path;
use std::sync::{Arc, Mutex};
use tempfile::TempDir;

fn amend(session: &mut Session) {
    session.apply(Command::SetSurface(
        SurfaceQuantity::Dewpoint,
        Temperature::from_c(16.1),
    ));
}

fn decide(session: &mut Session) {
    amend(session);
    session.apply(Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)));
    session.apply(Command::SetReasons("screen wet after rain".to_owned()));
    session.apply(Command::Decide);
}

fn standing(session: &Session) -> &Standing {
    session.current().unwrap().standing()
}

#[test]
fn a_verdict_is_kept_and_found_again_with_its_amendments() {
    let mut desk = Desk::open();
    assert_eq!(*standing(&desk.session), Standing::Undecided);
    decide(&mut desk.session);
    assert_eq!(
        *standing(&desk.session),
        Standing::Keeping,
        "not kept before the disk has it"
    );
    desk.session.wait();
    let Standing::Decided(decision) = standing(&desk.session).clone() else {
        panic!("{:?}", standing(&desk.session));
    };
    assert_eq!((decision.initials.as_str(), decision.demo), ("AB", false));
    assert!(
        desk.told()
            .iter()
            .any(|line| line.contains("kept: accepted as amended (AB)")),
        "{:?}",
        desk.told()
    );
    let document = desk.session.current().unwrap().document().clone();
    let cape = desk
        .session
        .current()
        .unwrap()
        .results()
        .numbers
        .surface
        .as_ref()
        .unwrap()
        .cape;
    assert_eq!(decision.cape_jkg[0], Some(cape));

    let mut desk = desk.restart();
    desk.add("vale.csv", &moist_surface("99001", 20.0));
    assert_eq!(*standing(&desk.session), Standing::Decided(decision));
    let item = desk.session.current().unwrap();
    assert_eq!(*item.document(), document);
    assert_eq!(item.results().numbers.surface.as_ref().unwrap().cape, cape);
    assert!(!item.can_undo());
    assert!(!desk.row().open);
    assert!(
        item.copy_line().contains("accepted as amended (AB, "),
        "{}",
        item.copy_line()
    );
}

#[test]
fn what_is_changed_after_a_verdict_is_a_draft_until_decided_anew() {
    let mut desk = Desk::open();
    decide(&mut desk.session);
    desk.session.wait();
    assert!(
        desk.session.can(Action::Decide).is_err(),
        "nothing new to decide"
    );
    desk.session
        .apply(Command::ResetSurface(SurfaceQuantity::Dewpoint));
    assert_eq!(*standing(&desk.session), Standing::Draft);
    desk.session.apply(Command::Undo);
    assert!(matches!(standing(&desk.session), Standing::Decided(_)));
    desk.session.apply(Command::Redo);
    desk.session
        .apply(Command::ChooseVerdict(Some(Verdict::Accepted)));
    desk.session.apply(Command::Decide);
    desk.session.wait();
    assert_eq!(desk.session.decisions(false).unwrap().len(), 2);
    let Standing::Decided(decision) = standing(&desk.session) else {
        panic!()
    };
    assert_eq!(decision.verdict, Verdict::Accepted);
}

#[test]
fn other_parts_of_the_same_ascent_are_to_be_reviewed() {
    let mut desk = Desk::open();
    decide(&mut desk.session);
    desk.session.wait();
    // The same station and hour, one value corrected.
    desk.add("vale-corrected.csv", &moist_surface("99001", 16.4));
    assert_eq!(desk.session.items().len(), 2);
    let Standing::DecidedOnEarlierData(decision) = standing(&desk.session) else {
        panic!("{:?}", standing(&desk.session));
    };
    assert_eq!(decision.initials, "AB");
    let row = &desk.session.tray()[0];
    assert!(row.review && row.open);
    assert_eq!(row.verdict, "decided on earlier data: review");
}

#[test]
fn why_a_verdict_cannot_be_given_is_said() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = Session::new(Config::within(folder.path()));
    session.open_bytes(
        "vale.csv".to_owned(),
        moist_surface("99001", 20.0).into_bytes(),
    );
    session.wait();
    let check = |session: &Session, expect: &str| {
        let why = session.can(Action::Decide).unwrap_err();
        assert!(why.contains(expect), "{why:?} should say {expect:?}");
    };
    check(&session, "choose a verdict");
    session.apply(Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)));
    check(&session, "nothing is amended");
    amend(&mut session);
    check(&session, "say why");
    session.apply(Command::ChooseVerdict(Some(Verdict::Accepted)));
    check(&session, "amendments are in force");
    session.apply(Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)));
    session.apply(Command::SetReasons(" \n".to_owned()));
    check(&session, "say why");
    session.apply(Command::SetReasons("wet".to_owned()));
    check(&session, "initials");
    session.apply(Command::Decide);
    assert!(session.decisions(false).unwrap().is_empty());
    assert!(
        session
            .messages()
            .iter()
            .any(|told| told.what.contains("not decided: give your initials"))
    );
    session.apply(Command::SetInitials(" CD ".to_owned()));
    assert_eq!(session.can(Action::Decide), Ok(()));
    session.apply(Command::Decide);
    session.wait();
    assert_eq!(session.decisions(false).unwrap()[0].initials, "CD");
    // They are asked once.
    drop(session);
    let session = Session::new(Config::within(folder.path()));
    assert_eq!(session.initials(), Some("CD"));
}

#[test]
fn a_draft_survives_a_restart_and_is_gone_once_decided() {
    let mut desk = Desk::open();
    amend(&mut desk.session);
    desk.session
        .apply(Command::ChooseVerdict(Some(Verdict::AcceptedAsAmended)));
    desk.session
        .apply(Command::SetReasons("look again".to_owned()));
    let document = desk.session.current().unwrap().document().clone();
    let drafts = |desk: &Desk| fs::read_dir(&desk.session.config().drafts).unwrap().count();

    let mut desk = desk.restart();
    desk.add("vale.csv", &moist_surface("99001", 20.0));
    let item = desk.session.current().unwrap();
    assert_eq!(*item.document(), document);
    assert_eq!(*item.standing(), Standing::Draft);
    assert!(desk.row().draft);
    assert_eq!(
        item.results().numbers,
        dewbound_session::Results::of(item.analysed(), &document).numbers
    );
    assert!(
        item.copy_line()
            .contains("draft, not decided: accepted as amended"),
        "{}",
        item.copy_line()
    );
    assert_eq!(drafts(&desk), 1);

    desk.session.apply(Command::Decide);
    desk.session.wait();
    assert_eq!(drafts(&desk), 0);
}

#[test]
fn a_drag_writes_its_draft_when_it_ends_and_an_undone_change_leaves_none() {
    let mut desk = Desk::open();
    let count = |desk: &mut Desk| {
        desk.session.wait();
        fs::read_dir(&desk.session.config().drafts).map_or(0, Iterator::count)
    };
    desk.session.apply(Command::BeginGesture);
    amend(&mut desk.session);
    assert_eq!(count(&mut desk), 0);
    desk.session.apply(Command::EndGesture);
    assert_eq!(count(&mut desk), 1);
    desk.session.apply(Command::Undo);
    assert_eq!(count(&mut desk), 0);
}

/// What happened on the disk, in order.
type Log = Arc<Mutex<Vec<&'static str>>>;

/// Writes down what is asked of it, and fails from a given step on.
#[derive(Debug)]
struct Faulty {
    log: Log,
    fails_at: Option<&'static str>,
}

impl Faulty {
    fn step(&self, step: &'static str) -> io::Result<()> {
        self.log.lock().unwrap().push(step);
        if self.fails_at == Some(step) {
            Err(io::Error::other("the disk is full"))
        } else {
            Ok(())
        }
    }
}

impl Appender for Faulty {
    fn append(&mut self, _bytes: &[u8]) -> io::Result<()> {
        self.step("append")
    }

    fn sync(&mut self) -> io::Result<()> {
        self.step("sync")
    }
}

impl Disk for Faulty {
    fn create_new(&mut self, _path: &Path) -> io::Result<Box<dyn Appender>> {
        self.step("create")?;
        Ok(Box::new(Self {
            log: self.log.clone(),
            fails_at: self.fails_at,
        }))
    }
}

fn on_faulty_disk(folder: &TempDir, fails_at: Option<&'static str>) -> (Session, Log) {
    let log = Log::default();
    let disk = Faulty {
        log: log.clone(),
        fails_at,
    };
    let mut session = Session::with_disks(config(folder), Box::new(disk), Box::new(RealDisk));
    session.open_bytes(
        "vale.csv".to_owned(),
        moist_surface("99001", 20.0).into_bytes(),
    );
    session.wait();
    (session, log)
}

#[test]
fn kept_is_said_after_the_sync_and_never_when_it_failed() {
    for fails_at in ["create", "append", "sync"] {
        let folder = tempfile::tempdir().unwrap();
        let (mut session, _) = on_faulty_disk(&folder, Some(fails_at));
        decide(&mut session);
        session.wait();
        assert!(
            session
                .messages()
                .iter()
                .all(|told| told.weight != Weight::Done),
            "{fails_at}"
        );
        let failed: Vec<_> = session
            .messages()
            .iter()
            .filter(|told| told.weight == Weight::Failed)
            .collect();
        assert_eq!(failed.len(), 1, "{fails_at}: {failed:?}");
        assert!(
            failed[0].what.contains("not kept") && failed[0].what.contains("the disk is full"),
            "{failed:?}"
        );
        assert_eq!(*standing(&session), Standing::Draft, "{fails_at}");
        assert_eq!(session.can(Action::Decide), Ok(()), "it can be tried again");
        let drafts = fs::read_dir(&session.config().drafts).unwrap().count();
        assert_eq!(drafts, 1, "and the draft is still on the disk");
    }

    let folder = tempfile::tempdir().unwrap();
    let (mut session, log) = on_faulty_disk(&folder, None);
    decide(&mut session);
    while !session
        .messages()
        .iter()
        .any(|told| told.weight == Weight::Done)
    {
        // Until it is said to be kept it isn't, whatever the disk is doing.
        assert!(!matches!(standing(&session), Standing::Decided(_)));
        session.poll();
        std::thread::yield_now();
    }
    assert_eq!(*log.lock().unwrap(), ["create", "append", "sync"]);
    assert!(matches!(standing(&session), Standing::Decided(_)));
}

#[test]
fn a_verdict_given_just_before_closing_is_kept() {
    let mut desk = Desk::open();
    decide(&mut desk.session);
    let desk = {
        let mut desk = desk.restart();
        desk.session.wait();
        desk
    };
    assert_eq!(desk.session.decisions(false).unwrap().len(), 1);
}

#[test]
fn a_ledger_that_cannot_be_opened_is_told_and_a_verdict_on_it_is_not_kept() {
    let folder = tempfile::tempdir().unwrap();
    let in_the_way = folder.path().join("file");
    fs::write(&in_the_way, "").unwrap();
    let mut session = Session::new(Config {
        ledger: in_the_way.join("ledger"),
        ..config(&folder)
    });
    session.open_bytes(
        "vale.csv".to_owned(),
        moist_surface("99001", 20.0).into_bytes(),
    );
    session.wait();
    assert!(
        session
            .messages()
            .iter()
            .any(|told| told.weight == Weight::Failed && told.what.contains("--ledger"))
    );
    decide(&mut session);
    session.wait();
    assert_eq!(*standing(&session), Standing::Draft);
    assert!(
        session
            .messages()
            .iter()
            .any(|told| told.what.starts_with("not kept"))
    );
}

#[test]
fn another_desks_verdict_is_seen_when_files_are_opened() {
    let mut one = Desk::open();
    let mut two = Session::new(config(&one.folder));
    two.open_bytes(
        "vale.csv".to_owned(),
        moist_surface("99001", 20.0).into_bytes(),
    );
    two.wait();
    decide(&mut two);
    two.wait();
    one.add("other.csv", &moist_surface("99002", 16.0));
    let row = one
        .session
        .tray()
        .iter()
        .find(|row| row.verdict.starts_with("accepted"))
        .unwrap();
    let item = one.session.item(row.item).unwrap();
    assert!(
        item.document().surface(SurfaceQuantity::Dewpoint).is_some(),
        "shown as it was decided"
    );
}

#[test]
fn verdicts_on_demo_soundings_go_to_the_demo_ledger() {
    let mut desk = Desk::new();
    desk.session.open_demo();
    desk.session.wait();
    assert!(
        desk.session.items().len() >= 8,
        "{}",
        desk.session.items().len()
    );
    assert!(
        desk.session
            .items()
            .iter()
            .all(dewbound_session::Item::demo)
    );
    let line = desk.session.current().unwrap().copy_line();
    assert!(line.starts_with("INVENTED DATA "), "{line}");
    assert!(
        line.contains("official warnings and local procedures rule"),
        "{line}"
    );
    desk.session
        .apply(Command::ChooseVerdict(Some(Verdict::Accepted)));
    desk.session.apply(Command::Decide);
    desk.session.wait();
    assert_eq!(desk.session.decisions(false).unwrap().len(), 0);
    assert_eq!(desk.session.decisions(true).unwrap().len(), 1);
    assert!(desk.session.decisions(true).unwrap()[0].demo);
}

#[test]
fn a_position_typed_once_is_remembered_and_settles_day_and_night() {
    let mut desk = Desk::new();
    let text = moist_surface("99001", 20.0).replace("# position: 41.0, -146.0, 400\n", "");
    desk.add("vale.csv", &text);
    assert_eq!(
        desk.session.current().unwrap().daylight(),
        Daylight::Unknown
    );
    amend(&mut desk.session);
    desk.session.apply(Command::SetPosition(Position {
        latitude: 141.0,
        longitude: 0.0,
    }));
    assert!(
        desk.told()
            .iter()
            .any(|line| line.contains("is not a position"))
    );
    let position = Position {
        latitude: 41.0,
        longitude: -146.0,
    };
    desk.session.apply(Command::SetPosition(position));
    let item = desk.session.current().unwrap();
    assert_eq!(item.daylight(), Daylight::Day);
    assert!(
        item.document().surface(SurfaceQuantity::Dewpoint).is_some(),
        "edits stay"
    );
    assert_eq!(
        item.results().working,
        dewbound_session::Results::of(item.analysed(), item.document()).working
    );

    let mut desk = desk.restart();
    desk.add("vale.csv", &text);
    assert_eq!(desk.session.current().unwrap().daylight(), Daylight::Day);
}
