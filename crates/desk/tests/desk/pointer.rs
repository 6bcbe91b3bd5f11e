//! Dragging: everything shown belongs to the value under the pointer, in the same painted frame.

use crate::support::*;
use dewbound_session::sounding::Parcel;
use dewbound_session::wording;
use eframe::egui::{Event, Key, PointerButton, Pos2, vec2};
use egui_kittest::kittest::Queryable as _;

fn button(window: &Window, pos: Pos2, pressed: bool) {
    window.event(Event::PointerButton {
        pos,
        button: PointerButton::Primary,
        pressed,
        modifiers: Default::default(),
    });
}

fn handle(window: &Window) -> Pos2 {
    window.get_by_label("Surface dew point").rect().center()
}

/// The numbers, the headline cost and the handle as painted are those of the session's present revision.
fn check_painted(window: &Window) {
    let item = item(window);
    for parcel in Parcel::ALL {
        let Some(ascent) = item.results().numbers.parcel(parcel) else {
            continue;
        };
        let cape = wording::number(ascent.cape, 0);
        assert!(
            texts(window)
                .iter()
                .any(|text| text.trim_start_matches("≥ ") == cape),
            "CAPE {cape} of {parcel:?} is not in the window"
        );
    }
    for card in &item.results().cards {
        let Some(cost) = card.headline_cost() else {
            continue;
        };
        let worst = [cost.surface, cost.mixed, cost.most_unstable]
            .into_iter()
            .filter_map(|change| change.cape)
            .max_by(|a, b| a.abs().total_cmp(&b.abs()));
        if let Some(worst) = worst {
            assert!(
                has_text(window, &wording::energy_change(worst)),
                "cost {worst} is not in the window"
            );
        }
    }
}

#[test]
fn every_frame_of_a_drag_shows_its_own_value() {
    let (_folder, mut window) = usual();
    let start = handle(&window);
    let before = dewpoint(&window);
    let cape_before = item(&window)
        .results()
        .numbers
        .surface
        .as_ref()
        .unwrap()
        .cape;
    window.hover_at(start);
    window.step();
    button(&window, start, true);
    window.step();
    assert!(
        (dewpoint(&window) - before).abs() < 1e-9,
        "taking hold changes nothing"
    );
    let mut last = before;
    for i in 1..=6 {
        let to = start - vec2(8.0 * i as f32, 0.0);
        // One event, one frame: what is painted in it belongs to this place of the pointer.
        window.hover_at(to);
        window.step();
        let now = dewpoint(&window);
        assert!(now < last, "frame {i}: {now} after {last}");
        last = now;
        check_painted(&window);
        assert!(
            (handle(&window).x - to.x).abs() < 2.5,
            "the ring stays under the pointer"
        );
    }
    button(&window, start - vec2(48.0, 0.0), false);
    window.run();
    assert!(
        item(&window)
            .results()
            .numbers
            .surface
            .as_ref()
            .unwrap()
            .cape
            < cape_before
    );
    assert!((dewpoint(&window) - last).abs() < 1e-9);
    window.key_press_modifiers(eframe::egui::Modifiers::COMMAND, Key::Z);
    window.run();
    assert!(
        (dewpoint(&window) - before).abs() < 1e-6,
        "a drag is one step to undo"
    );
}

#[test]
fn the_handle_can_be_taken_well_beside_its_ring() {
    let (_folder, mut window) = usual();
    let rect = window.get_by_label("Surface dew point").rect();
    assert!(rect.width() >= 28.0 && rect.height() >= 28.0, "{rect:?}");
    let before = dewpoint(&window);
    let beside = rect.center() + vec2(-8.0, 11.0);
    window.hover_at(beside);
    window.step();
    button(&window, beside, true);
    window.step();
    window.hover_at(beside - vec2(20.0, 0.0));
    window.step();
    let ring = window.get_by_label("Surface dew point").rect().center();
    assert!(dewpoint(&window) < before);
    assert!(
        (ring.x - (rect.center().x - 20.0)).abs() < 2.5,
        "it moves as far as the pointer"
    );
}

#[test]
fn escape_during_a_drag_restores() {
    let (_folder, mut window) = usual();
    let start = handle(&window);
    let before = dewpoint(&window);
    window.hover_at(start);
    button(&window, start, true);
    window.hover_at(start - vec2(40.0, 0.0));
    window.run();
    assert!(dewpoint(&window) < before);
    window.key_press(Key::Escape);
    window.run();
    assert!((dewpoint(&window) - before).abs() < 1e-9);
    window.hover_at(start - vec2(60.0, 0.0));
    window.run();
    assert!(
        (dewpoint(&window) - before).abs() < 1e-9,
        "given up until the button is up"
    );
    button(&window, start - vec2(60.0, 0.0), false);
    window.run();
    assert!((dewpoint(&window) - before).abs() < 1e-9);
}

#[test]
fn a_drag_elsewhere_moves_the_paper_and_scrolling_zooms() {
    let (_folder, mut window) = usual();
    let before = dewpoint(&window);
    let place = handle(&window);
    let from = window
        .get_by_label_contains("Skew-T chart of")
        .rect()
        .center();
    window.hover_at(from);
    button(&window, from, true);
    window.hover_at(from + vec2(30.0, 0.0));
    window.run();
    button(&window, from + vec2(30.0, 0.0), false);
    window.run();
    assert!((dewpoint(&window) - before).abs() < 1e-9);
    assert!((handle(&window).x - place.x - 30.0).abs() < 2.0);
}

#[test]
fn the_response_is_dragged_too() {
    let (_folder, mut window) = usual();
    let before = dewpoint(&window);
    let plot = window.get_by_label_contains("Response: CAPE").rect();
    let to = plot.left_center() + vec2(plot.width() * 0.2, 0.0);
    window.hover_at(to);
    window.step();
    button(&window, to, true);
    window.step();
    let there = dewpoint(&window);
    assert!(there < before, "{there} is not below {before}");
    check_painted(&window);
    button(&window, to, false);
    window.run();
    assert!((dewpoint(&window) - there).abs() < 1e-9);
}

#[test]
fn a_bracket_opens_its_card() {
    let (_folder, mut window) = usual();
    window
        .get_all_by_label_contains("on the chart: ")
        .next()
        .expect("the worst story has a finding")
        .click();
    window.run();
    assert!(has_text(&window, "If the sonde is wrong"));
}

#[test]
fn nothing_repaints_by_itself() {
    let (_folder, mut window) = usual();
    window.run();
    window.step();
    let delay = window.output().viewport_output[&eframe::egui::ViewportId::ROOT].repaint_delay;
    assert!(delay.as_secs() >= 30, "the next frame comes in {delay:?}");
}
