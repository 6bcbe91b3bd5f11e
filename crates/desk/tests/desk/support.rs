//! A desk on the demonstration tray, without a window.

use dewbound_desk::{Args, Desk};
use dewbound_session::{Config, Item, Session, SurfaceQuantity};
use eframe::egui::{Key, Vec2, vec2};
use egui_kittest::kittest::NodeT as _;
use egui_kittest::{Harness, HarnessBuilder};
use jiff::Timestamp;
use std::path::Path;

pub type Window = Harness<'static, Desk>;

pub const SIZE: Vec2 = vec2(1280.0, 800.0);

/// A moment a little after the demonstration soundings.
pub fn now() -> Timestamp {
    "2024-06-13T02:30:00Z".parse().unwrap()
}

pub fn session(folder: &Path) -> Session {
    let mut session = Session::new(Config::within(folder));
    session.open_demo();
    session.wait();
    assert!(
        !session.items().is_empty(),
        "the demonstration tray is empty"
    );
    session
}

pub fn builder(size: Vec2) -> HarnessBuilder<Desk> {
    Harness::builder().with_size(size).with_max_steps(8)
}

pub fn desk(builder: HarnessBuilder<Desk>, folder: &Path, args: Args) -> Window {
    let session = session(folder);
    let mut window = builder
        .build_eframe(move |creation| Desk::with_session(&creation.egui_ctx, session, &args, now));
    window.run();
    window
}

/// The usual desk, in a folder of its own.
pub fn usual() -> (tempfile::TempDir, Window) {
    let folder = tempfile::tempdir().unwrap();
    let window = desk(builder(SIZE), folder.path(), plain());
    (folder, window)
}

pub fn plain() -> Args {
    Args {
        zoom: Some(1.0),
        ..Args::default()
    }
}

pub fn item(window: &Window) -> &Item {
    window
        .state()
        .session()
        .current()
        .expect("a sounding is open")
}

/// Surface dew point of the working profile, degC.
pub fn dewpoint(window: &Window) -> f64 {
    item(window)
        .working_surface(SurfaceQuantity::Dewpoint)
        .expect("a surface dew point")
        .c()
}

/// Label of what has the keyboard.
pub fn focused(window: &Window) -> Option<String> {
    window
        .root()
        .children_recursive()
        .find(|node| node.accesskit_node().is_focused())
        .and_then(|node| node.accesskit_node().label())
}

/// Presses Tab until something whose label begins like this has the keyboard.
pub fn tab_to(window: &mut Window, label: &str) {
    let mut seen = Vec::new();
    for _ in 0..120 {
        window.key_press(Key::Tab);
        window.run();
        let now = focused(window).unwrap_or_default();
        if now.starts_with(label) {
            return;
        }
        seen.push(now);
    }
    panic!("Tab never reaches {label:?}; it reaches {seen:#?}");
}

/// All text in the window.
pub fn texts(window: &Window) -> Vec<String> {
    window
        .root()
        .children_recursive()
        .flat_map(|node| {
            let node = node.accesskit_node();
            [node.label(), node.value()]
        })
        .flatten()
        .collect()
}

pub fn has_text(window: &Window, part: &str) -> bool {
    texts(window).iter().any(|text| text.contains(part))
}

/// A check that this machine can't make: told on standard error, a failure where everything is required.
pub fn skipped(what: &str, why: &str) {
    assert!(
        std::env::var_os("DEWBOUND_REQUIRE_ALL").is_none_or(|value| value != "1"),
        "{what}: {why}, and DEWBOUND_REQUIRE_ALL=1"
    );
    use std::io::Write as _;
    // Straight to the descriptor: the test runner swallows what eprintln! says.
    let _ = writeln!(std::io::stderr().lock(), "SKIPPED {what}: {why}");
}
