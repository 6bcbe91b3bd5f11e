//! The main tasks with the keyboard alone.

use crate::support::*;
use dewbound_session::{Standing, SurfaceQuantity};
use eframe::egui::{Event, Key, Modifiers, OutputCommand};
use egui_kittest::kittest::Queryable as _;

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() < 1e-6
}

#[test]
fn arrows_move_the_dew_point_by_a_tenth_a_half_and_a_whole() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Surface dew point");
    let start = dewpoint(&window);
    for (modifiers, key, by) in [
        (Modifiers::NONE, Key::ArrowLeft, -0.1),
        (Modifiers::NONE, Key::ArrowDown, -0.2),
        (Modifiers::NONE, Key::ArrowRight, -0.1),
        (Modifiers::SHIFT, Key::ArrowLeft, -0.6),
        (Modifiers::COMMAND, Key::ArrowLeft, -1.6),
        (Modifiers::COMMAND, Key::ArrowUp, -0.6),
    ] {
        window.key_press_modifiers(modifiers, key);
        window.run();
        let now = dewpoint(&window) - start;
        assert!(
            close(now, by),
            "{modifiers:?} {key:?}: {now} instead of {by}"
        );
    }
    window.key_press(Key::Home);
    window.run();
    assert!(
        close(dewpoint(&window), start),
        "Home is the received value"
    );
}

#[test]
fn a_typed_number_is_set_by_enter_and_dropped_by_escape() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Surface dew point");
    let start = dewpoint(&window);
    for text in ["1", "2", ".", "5"] {
        window.event(Event::Text(text.to_owned()));
    }
    window.run();
    assert!(
        close(dewpoint(&window), start),
        "nothing is set while typing"
    );
    assert!(has_text(&window, "typing 12.5 °C"));
    window.key_press(Key::Escape);
    window.run();
    assert!(close(dewpoint(&window), start));
    assert_eq!(focused(&window).as_deref(), Some("Surface dew point"));
    for text in ["1", "2", ",", "5"] {
        window.event(Event::Text(text.to_owned()));
    }
    window.key_press(Key::Enter);
    window.run();
    assert!(close(dewpoint(&window), 12.5));
}

#[test]
fn undo_and_redo() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Surface dew point");
    let start = dewpoint(&window);
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowLeft);
    window.run();
    assert!(close(dewpoint(&window), start - 1.0));
    window.key_press_modifiers(Modifiers::COMMAND, Key::Z);
    window.run();
    assert!(close(dewpoint(&window), start));
    window.key_press_modifiers(Modifiers::COMMAND | Modifiers::SHIFT, Key::Z);
    window.run();
    assert!(close(dewpoint(&window), start - 1.0));
}

#[test]
fn a_repair_is_seen_applied_and_taken_back() {
    let (_folder, mut window) = usual();
    let (index, title) = item(&window)
        .results()
        .order
        .iter()
        .map(|&index| (index, item(&window).findings()[index].clone()))
        .find(|(_, finding)| !finding.repairs.is_empty())
        .map(|(index, finding)| (index, finding.title))
        .expect("the worst story has a finding with a repair");
    tab_to(&mut window, &format!("Finding {}: {title}", index + 1));
    window.key_press(Key::Enter);
    window.run();
    tab_to(&mut window, "Apply: ");
    assert!(
        has_text(&window, "→ "),
        "the numbers show what the focused repair would do"
    );
    window.key_press(Key::Enter);
    window.run();
    assert_eq!(item(&window).results().cards[index].applied, Some(0));
    assert!(has_text(&window, "repaired"));
    assert!(has_text(&window, "Take back: "));
    window.key_press_modifiers(Modifiers::COMMAND, Key::Z);
    window.run();
    assert_eq!(item(&window).results().cards[index].applied, None);
}

#[test]
fn a_verdict_is_chosen_signed_and_kept() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Verdict");
    window.key_press(Key::Enter);
    window.run();
    tab_to(&mut window, "Accepted");
    window.key_press(Key::Enter);
    window.run();
    assert!(item(&window).document().verdict.is_some());
    tab_to(&mut window, "Reasons");
    window.event(Event::Text("fits its neighbours".to_owned()));
    window.run();
    assert_eq!(item(&window).document().reasons, "fits its neighbours");
    window.key_press_modifiers(Modifiers::COMMAND, Key::Enter);
    window.run();
    assert!(
        has_text(&window, "Who decides?"),
        "initials are asked at the first verdict"
    );
    assert!(!matches!(item(&window).standing(), Standing::Decided(_)));
    window.event(Event::Text("AB".to_owned()));
    window.run();
    window.key_press(Key::Enter);
    window.run();
    window.state_mut().wait();
    window.run();
    let Standing::Decided(decision) = item(&window).standing() else {
        panic!("{:?}", item(&window).standing());
    };
    assert_eq!(decision.initials, "AB");
    assert_eq!(decision.reasons, "fits its neighbours");
    assert!(decision.demo, "a verdict on invented data says so");
}

#[test]
fn nobody_is_asked_to_sign_what_cannot_be_decided() {
    let (_folder, mut window) = usual();
    window.key_press_modifiers(Modifiers::COMMAND, Key::Enter);
    window.run();
    assert!(!has_text(&window, "Who decides?"));
    assert!(
        has_text(&window, "choose a verdict first"),
        "the desk says why not"
    );
}

#[test]
fn the_line_is_copied() {
    let (_folder, mut window) = usual();
    // One event, one frame: what a frame puts on the clipboard is gone with the next.
    window.input_mut().events.push(Event::Key {
        key: Key::C,
        physical_key: None,
        pressed: true,
        repeat: false,
        modifiers: Modifiers::COMMAND | Modifiers::SHIFT,
    });
    window.step();
    let copied =
        window
            .output()
            .platform_output
            .commands
            .iter()
            .find_map(|command| match command {
                OutputCommand::CopyText(text) => Some(text.clone()),
                _ => None,
            });
    let line = copied.expect("something is on the clipboard");
    assert_eq!(line, item(&window).copy_line());
    assert!(line.contains("official warnings"), "{line}");
    assert_eq!(line.lines().count(), 1, "{line}");
}

#[test]
fn page_down_opens_the_next_sounding() {
    let (_folder, mut window) = usual();
    let first = item(&window).id();
    window.key_press(Key::PageDown);
    window.run();
    assert_ne!(item(&window).id(), first);
    window.key_press(Key::PageUp);
    window.run();
    assert_eq!(item(&window).id(), first);
}

#[test]
fn the_chart_is_moved_and_read_without_a_pointer() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Skew-T chart");
    let handle = |window: &Window| window.get_by_label("Surface dew point").rect().center();
    let before = handle(&window);
    window.key_press(Key::ArrowRight);
    window.run();
    assert!(
        handle(&window).x < before.x - 10.0,
        "the paper moves under the window"
    );
    window.key_press(Key::Num0);
    window.run();
    assert!(
        (handle(&window) - before).length() < 1.0,
        "0 shows all again"
    );
    window.key_press_modifiers(Modifiers::SHIFT, Key::ArrowUp);
    window.run();
    assert!(
        has_text(&window, "hPa"),
        "values are read in the status line"
    );
    window.key_press(Key::Enter);
    window.run();
    assert!(item(&window).document().picked_level().is_some());
    assert!(has_text(&window, "Parcel from "));
    assert_eq!(
        focused(&window).unwrap().as_str().split(" of ").next(),
        Some("Skew-T chart")
    );
}

#[test]
fn tab_reaches_every_task_and_comes_round() {
    let (_folder, mut window) = usual();
    let mut seen = Vec::new();
    for _ in 0..150 {
        window.key_press(Key::Tab);
        window.run();
        let Some(now) = focused(&window) else {
            continue;
        };
        if seen.first() == Some(&now) {
            break;
        }
        seen.push(now);
    }
    for wanted in [
        "File",
        "Skew-T chart",
        "Surface dew point",
        "Surface temperature",
        "Response",
        "Finding ",
        "Surface",
        "Mixed",
        "Verdict",
        "Reasons",
        "Copy line",
    ] {
        assert!(
            seen.iter().any(|label| label.starts_with(wanted)),
            "{wanted} is not reached: {seen:#?}"
        );
    }
}

#[test]
fn fahrenheit_steps_are_fahrenheit() {
    let (_folder, mut window) = usual();
    window.get_by_label("View").click();
    window.run();
    window.get_by_label("Temperature in °F").click();
    window.run();
    window.key_press(Key::Escape);
    window.run();
    let start = dewpoint(&window);
    tab_to(&mut window, "Surface dew point");
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowLeft);
    window.run();
    assert!(close(dewpoint(&window), start - 1.0 / 1.8));
    assert!(has_text(&window, "°F, received"));
    assert!(
        item(&window)
            .received_surface(SurfaceQuantity::Dewpoint)
            .is_some_and(|received| close(received.c(), start))
    );
}
