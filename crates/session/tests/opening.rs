//! Files, folders, errors, the demo tray, the text tray.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Desk, moist_surface};
use dewbound_session::sounding::Parcel;
use dewbound_session::{Command, Session, SurfaceQuantity, Weight, report, wording};
use std::fs;
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::mpsc::channel;

#[test]
fn a_folder_is_opened_and_what_cannot_be_read_is_told_without_losing_the_rest() {
    let mut desk = Desk::new();
    let folder = desk.folder.path().join("in");
    fs::create_dir(&folder).unwrap();
    fs::write(folder.join("a.csv"), moist_surface("99001", 20.0)).unwrap();
    fs::write(folder.join("b.csv"), "colour,taste\nred,sweet\n").unwrap();
    fs::write(folder.join("c.csv"), moist_surface("99002", 16.5)).unwrap();
    fs::write(folder.join("d.bin"), [0_u8, 159, 146, 150]).unwrap();
    fs::write(folder.join("stations.csv"), "wmo,name,lat,lon\n").unwrap();
    desk.session
        .open_paths(vec![folder.clone(), folder.join("absent.csv")]);
    assert_eq!(desk.session.reading(), 1);
    desk.session.wait();
    assert_eq!(desk.session.reading(), 0);
    assert_eq!(desk.session.items().len(), 2);
    let failed: Vec<&str> = desk
        .session
        .messages()
        .iter()
        .filter(|told| told.weight == Weight::Failed)
        .map(|told| told.about.rsplit(['/', '\\']).next().unwrap())
        .collect();
    assert_eq!(failed, ["b.csv", "d.bin", "absent.csv"]);
    for told in desk.session.messages() {
        assert!(!told.what.is_empty());
        assert!(
            !told.what.contains(&told.about),
            "the file is named once: {told:?}"
        );
    }
    assert!(
        desk.told()
            .iter()
            .any(|line| line.contains("stations.csv: a station table"))
    );
    let worst = desk.session.tray()[0].item;
    assert_eq!(
        desk.session.current().unwrap().id(),
        worst,
        "the worst is shown"
    );
}

#[test]
fn the_same_sounding_is_not_there_twice() {
    let mut desk = Desk::open();
    desk.add("copy-of-vale.csv", &moist_surface("99001", 20.0));
    assert_eq!(desk.session.items().len(), 1);
    desk.add("other.csv", &moist_surface("99002", 20.0));
    assert_eq!(desk.session.items().len(), 2);
    // Opening what is there already shows it.
    let first = desk.session.items()[0].id();
    desk.add("vale.csv", &moist_surface("99001", 20.0));
    assert_eq!(desk.session.current().unwrap().id(), first);
}

#[test]
fn the_view_does_not_jump_under_a_working_hand() {
    let mut desk = Desk::open();
    let first = desk.session.current().unwrap().id();
    desk.session.open_bytes(
        "other.csv".to_owned(),
        moist_surface("99002", 22.0).into_bytes(),
    );
    desk.session
        .apply(Command::ResetSurface(SurfaceQuantity::Dewpoint));
    desk.session.wait();
    assert_eq!(desk.session.items().len(), 2);
    assert_eq!(desk.session.current().unwrap().id(), first);
}

#[test]
fn the_waker_is_called_when_something_has_arrived() {
    let mut desk = Desk::new();
    let calls = Arc::new(AtomicUsize::new(0));
    let (send, receive) = channel();
    let counted = calls.clone();
    let send = std::sync::Mutex::new(send);
    desk.session.set_waker(Arc::new(move || {
        counted.fetch_add(1, Ordering::SeqCst);
        let _ = send.lock().unwrap().send(());
    }));
    desk.session.open_bytes(
        "vale.csv".to_owned(),
        moist_surface("99001", 20.0).into_bytes(),
    );
    while desk.session.items().is_empty() {
        receive.recv().unwrap();
        desk.session.poll();
    }
    assert!(calls.load(Ordering::SeqCst) > 0);
}

#[test]
fn the_demo_tray_opens_on_its_worst_story_at_its_own_date() {
    let mut desk = Desk::new();
    desk.session.open_demo();
    desk.session.wait();
    let session = &desk.session;
    assert!(
        session
            .messages()
            .iter()
            .all(|told| told.weight != Weight::Failed),
        "{:?}",
        desk.told()
    );
    let worst = &session.tray()[0];
    assert_eq!(session.current().unwrap().id(), worst.item);
    assert!(
        worst.worst_cost.is_some_and(|(_, cape)| cape.abs() > 500.0),
        "{worst:?}"
    );
    for item in session.items() {
        let sounding = item.sounding();
        assert_eq!(
            sounding.times.valid().unwrap().to_string().get(..7),
            Some("2024-06")
        );
        assert!(
            sounding.station.position.is_some(),
            "{}",
            sounding.station.label()
        );
        assert!(item.results().numbers.problem.is_none());
    }
}

#[test]
fn a_demo_file_is_known_by_its_content_from_wherever_it_is_opened() {
    let mut desk = Desk::new();
    let bytes = include_bytes!("../../../demo-soundings/vellmarsh-20240613-00z-columns.csv");
    desk.session
        .open_bytes("renamed.txt".to_owned(), bytes.to_vec());
    desk.session.wait();
    assert!(desk.row().demo);
}

#[test]
fn the_text_tray_names_every_sounding_its_cape_with_range_and_the_cost_of_its_findings() {
    let mut desk = Desk::new();
    desk.session.open_demo();
    desk.session.wait();
    let text = report::tray(&desk.session);
    assert!(text.starts_with("INVENTED DATA\n"), "{text}");
    for item in desk.session.items() {
        let label = item.sounding().station.label();
        let line = text.lines().find(|line| line.starts_with(label)).unwrap();
        let cape = item.results().numbers.parcel(Parcel::Mixed).unwrap().cape;
        let cape = wording::number(cape, 0);
        assert!(
            line.contains(&format!("{cape} (")),
            "{line} should have {cape} with a range"
        );
        for finding in item.findings() {
            assert!(text.contains(finding.title), "{}", finding.title);
        }
    }
    assert!(text.contains("J/kg ("), "costs name their parcel: {text}");
    assert!(text.contains("official warnings and local procedures rule"));
    assert!(!text.contains(" -"), "minus signs are real ones");
}

#[test]
fn an_empty_desk_has_an_empty_tray() {
    let desk = Desk::new();
    assert_eq!(report::tray(&desk.session), "no soundings\n");
    let session: &Session = &desk.session;
    assert!(session.current().is_none());
}
