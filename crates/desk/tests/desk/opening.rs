//! Files dropped on the window, what is told about them, and what the first start looks like.

use crate::support::*;
use dewbound_desk::ThemeName;
use eframe::egui::{DroppedFile, Event, Key, Modifiers, PointerButton, vec2};
use egui_kittest::kittest::Queryable as _;
use std::path::{Path, PathBuf};
use std::sync::Arc;

#[derive(Debug)]
struct Dropped(PathBuf);

impl DroppedFile for Dropped {
    fn path(&self) -> &Path {
        &self.0
    }

    fn bytes(&self) -> Result<Vec<u8>, String> {
        std::fs::read(&self.0).map_err(|error| error.to_string())
    }
}

const COLUMNS: &str = "# station: Nowhere Point\n\
pressure_hpa,temperature_c,dewpoint_c\n\
1000,28,20\n850,17,14\n700,6,-2\n500,-12,-25\n300,-41,-55\n200,-56,-70\n";

#[test]
fn a_dropped_file_and_a_dropped_folder_join_the_tray() {
    let (folder, mut window) = usual();
    let before = window.state().session().items().len();
    let file = folder.path().join("one.csv");
    std::fs::write(&file, COLUMNS).unwrap();
    let inner = folder.path().join("more");
    std::fs::create_dir(&inner).unwrap();
    std::fs::write(inner.join("two.csv"), COLUMNS.replace("28,20", "27,19")).unwrap();
    for path in [file, inner] {
        window
            .input_mut()
            .dropped_files
            .push(Arc::new(Dropped(path)));
    }
    window.run();
    window.state_mut().wait();
    window.run();
    assert_eq!(window.state().session().items().len(), before + 2);
    assert!(has_text(&window, "of 11 to decide") || before != 9);
}

#[test]
fn a_file_that_is_no_sounding_is_told_and_the_message_put_away() {
    let (folder, mut window) = usual();
    let file = folder.path().join("shopping.txt");
    std::fs::write(&file, "milk, bread and a new balloon\n").unwrap();
    window
        .input_mut()
        .dropped_files
        .push(Arc::new(Dropped(file)));
    window.run();
    window.state_mut().wait();
    window.run();
    assert!(
        has_text(&window, "shopping.txt"),
        "{:?}",
        window.state().session().messages()
    );
    window.get_by_label("Dismiss").click();
    window.run();
    assert!(!has_text(&window, "shopping.txt"));
}

#[test]
fn the_first_start_says_what_to_do_until_it_is_done() {
    let (_folder, mut window) = usual();
    window.state_mut().show_hint();
    window.run();
    assert!(has_text(
        &window,
        "Drag the ring at the foot of the dew-point line"
    ));
    assert_eq!(
        focused(&window).as_deref(),
        Some("Surface dew point"),
        "the arrow keys work at once"
    );
    let before = dewpoint(&window);
    window.key_press(Key::ArrowLeft);
    window.run();
    assert!(dewpoint(&window) < before);
    assert!(!has_text(&window, "Drag the ring"));
}

#[test]
fn a_press_and_its_movement_in_one_slow_frame_still_hold_the_handle() {
    let (_folder, mut window) = usual();
    let from = window.get_by_label("Surface dew point").rect().center();
    let before = dewpoint(&window);
    window.hover_at(from);
    window.run();
    let to = from - vec2(60.0, 0.0);
    window.input_mut().events.extend([
        Event::PointerButton {
            pos: from,
            button: PointerButton::Primary,
            pressed: true,
            modifiers: Modifiers::NONE,
        },
        Event::PointerMoved(from - vec2(30.0, 0.0)),
        Event::PointerMoved(to),
    ]);
    window.step();
    assert!(dewpoint(&window) < before);
    let ring = window.get_by_label("Surface dew point").rect().center();
    assert!((ring.x - to.x).abs() < 2.5, "{ring:?} is not under {to:?}");
}

#[test]
fn theme_and_size_can_be_changed() {
    let (_folder, mut window) = usual();
    window.get_by_label("View").click();
    window.run();
    window.get_by_label_contains("Dark theme").click();
    window.run();
    assert_eq!(window.state().theme_name(), ThemeName::Dark);
    window.key_press_modifiers(Modifiers::COMMAND, Key::Plus);
    window.run();
    assert!((window.ctx.zoom_factor() - 1.1).abs() < 1e-6);
    window.key_press_modifiers(Modifiers::COMMAND, Key::Num0);
    window.run();
    assert!((window.ctx.zoom_factor() - 1.0).abs() < 1e-6);
}

#[test]
fn a_previewed_repair_changes_nothing_until_it_is_applied() {
    // High enough for the whole card.
    let folder = tempfile::tempdir().unwrap();
    let mut window = desk(builder(vec2(1280.0, 1400.0)), folder.path(), plain());
    window
        .get_all_by_label_contains("on the chart: ")
        .next()
        .expect("the worst story has a finding")
        .click();
    window.run();
    let before = item(&window).results().clone();
    let button = window
        .get_all_by_label_contains("Apply: ")
        .next()
        .expect("the finding has a repair");
    button.hover();
    window.run();
    assert!(has_text(&window, "→ "), "the numbers show what it would do");
    assert_eq!(item(&window).results().revision, before.revision);
}
