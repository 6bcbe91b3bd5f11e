//! What must always be in sight, whatever the size of the window.

use crate::support::*;
use dewbound_session::wording;
use eframe::egui::{Vec2, vec2};
use egui_kittest::kittest::Queryable as _;

fn at(size: Vec2) -> (tempfile::TempDir, Window) {
    let folder = tempfile::tempdir().unwrap();
    let window = desk(builder(size), folder.path(), plain());
    (folder, window)
}

#[test]
fn the_caution_and_cape_with_its_range_never_disappear() {
    for size in [
        vec2(720.0, 530.0),
        vec2(853.0, 533.0),
        vec2(1066.0, 666.0),
        vec2(1280.0, 800.0),
        vec2(1600.0, 1000.0),
        vec2(2560.0, 1440.0),
    ] {
        let (_folder, window) = at(size);
        assert!(
            has_text(&window, "Official warnings and local procedures rule"),
            "{size:?}"
        );
        let item = item(&window);
        let cape = wording::number(item.results().numbers.surface.as_ref().unwrap().cape, 0);
        assert!(texts(&window).contains(&cape), "{size:?}: CAPE {cape}");
        if let Some(range) = item.results().doubt.ranges[0].cape {
            let text = format!("{} to", wording::number(range.least, 0));
            assert!(has_text(&window, &text), "{size:?}: range {text}");
        }
        assert!(has_text(&window, wording::INVENTED), "{size:?}");
        let chart = window.get_by_label_contains("Skew-T chart of").rect();
        assert!(
            chart.width() >= 415.0 && chart.height() >= 375.0,
            "{size:?}: {chart:?}"
        );
    }
}

#[test]
fn a_narrow_window_has_tabs_and_a_drop_down() {
    let (_folder, mut window) = at(vec2(900.0, 700.0));
    assert!(window.query_by_label("Copy numbers").is_none());
    window.get_by_label_contains("Tray: ").click();
    window.run();
    let rows = window.state().session().tray().len();
    assert!(rows > 1);
    window
        .get_all_by_label_contains("invented data")
        .next()
        .expect("the tray's lines are in the drop-down");
    let (_folder, mut window) = at(vec2(900.0, 700.0));
    window.get_by_label("Numbers").click();
    window.run();
    assert!(has_text(&window, "LCL height"));
}

#[test]
fn a_low_window_keeps_the_sentence_and_drops_the_curve() {
    let (_folder, window) = at(vec2(1280.0, 640.0));
    assert!(window.query_by_label_contains("Response: CAPE").is_none());
    let sentence = item(&window).results().which_parcel.clone();
    // As shown it begins with a capital, and units stay with their numbers.
    let shown = texts(&window)
        .iter()
        .any(|text| text.replace('\u{a0}', " ").to_lowercase() == sentence.to_lowercase());
    assert!(shown, "{sentence}");
    let (_folder, window) = at(vec2(1280.0, 660.0));
    assert!(window.query_by_label_contains("Response: CAPE").is_some());
}

#[test]
fn every_story_of_the_tray_can_be_shown() {
    let (_folder, mut window) = at(SIZE);
    let all = window.state().session().items().len();
    for _ in 0..all {
        window.key_press(eframe::egui::Key::PageDown);
        window.run();
        let name = item(&window).sounding().station.label().to_owned();
        assert!(has_text(&window, &format!("Skew-T chart of {name}")));
        for index in 0..item(&window).findings().len() {
            let title = item(&window).findings()[index].title;
            window
                .get_by_label(&format!("Finding {}: {title}", index + 1))
                .click();
            window.run();
            assert!(
                has_text(&window, "If the sonde is wrong"),
                "{name}: {title}"
            );
        }
    }
}

#[test]
fn the_boxes_open_and_close() {
    let (_folder, mut window) = at(SIZE);
    for (menu, entry, inside) in [
        ("Help", "Keys", "Back to the received value"),
        (
            "Help",
            "About and caution",
            "Nothing here issues or replaces a warning",
        ),
    ] {
        window.get_by_label(menu).click();
        window.run();
        let button = window
            .get_all_by_label_contains(entry)
            .next()
            .expect("the entry is in its menu");
        button.click();
        window.run();
        assert!(has_text(&window, inside), "{entry}");
        window.key_press(eframe::egui::Key::Escape);
        window.run();
        assert!(!has_text(&window, inside), "{entry} stays open");
    }
}

#[test]
fn the_parcel_that_matters_is_drawn() {
    let (_folder, mut window) = at(SIZE);
    let all = window.state().session().items().len();
    let mut elevated = 0;
    for _ in 0..all {
        window.key_press(eframe::egui::Key::PageDown);
        window.run();
        let numbers = item(&window).received_numbers();
        let cape = |parcel| numbers.parcel(parcel).map_or(0.0, |ascent| ascent.cape);
        use dewbound_session::sounding::Parcel;
        let drawn = if cape(Parcel::Surface) > 0.0 {
            "surface parcel"
        } else if cape(Parcel::MostUnstable) > cape(Parcel::Mixed) {
            elevated += 1;
            "most unstable parcel"
        } else {
            continue;
        };
        assert!(
            has_text(&window, &format!("CAPE area of the {drawn}")),
            "{drawn}"
        );
    }
    assert!(elevated > 0, "the tray has a story of elevated instability");
}
