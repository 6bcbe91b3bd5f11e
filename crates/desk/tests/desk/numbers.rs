//! The panel of numbers: five at a glance, the rest in groups on demand.

use crate::support::*;
use dewbound_session::quantity::{Group, at_a_glance};
use eframe::egui::{Key, Modifiers, OutputCommand};
use egui_kittest::kittest::Queryable as _;

fn open(window: &mut Window, group: Group) {
    tab_to(window, group.title());
    window.key_press(Key::Enter);
    window.run();
}

#[test]
fn five_numbers_stand_at_a_glance_and_the_rest_is_behind_its_heading() {
    let (_folder, window) = usual();
    for quantity in at_a_glance() {
        window.get_by_label(quantity.label);
    }
    for group in Group::ALL {
        window.get_by_label(group.title());
    }
    assert!(!has_text(&window, "Precipitable water"));
}

#[test]
fn a_group_opens_with_enter_and_closes_with_space() {
    let (_folder, mut window) = usual();
    tab_to(&mut window, "Composite indices");
    assert!(has_text(&window, "Enter opens the group"));
    window.key_press(Key::Enter);
    window.run();
    assert!(has_text(&window, "Supercell composite"));
    assert!(has_text(&window, ", factor "), "its terms are shown");
    assert_eq!(focused(&window).as_deref(), Some("Composite indices"));
    window.key_press(Key::Space);
    window.run();
    assert!(!has_text(&window, "Supercell composite"));
}

#[test]
fn every_group_shows_all_its_numbers_explained_on_focus() {
    let (_folder, mut window) = usual();
    for group in Group::ALL {
        open(&mut window, group);
        for quantity in group.quantities() {
            assert!(has_text(&window, quantity.label), "{}", quantity.key);
        }
        // Each name says more when it has the keyboard: the last one is reached last.
        let quantity = &group.quantities()[group.quantities().len() - 1];
        let source = format!("Source: {}", quantity.source);
        let explained = (0..60).any(|_| {
            window.key_press(Key::Tab);
            window.run();
            has_text(&window, &source) && has_text(&window, quantity.definition)
        });
        assert!(explained, "{}", quantity.key);
        open(&mut window, group);
    }
}

#[test]
fn other_kinds_of_ascent_are_computed_when_their_group_is_open() {
    let (_folder, mut window) = usual();
    assert!(item(&window).other_ascents().working.is_none());
    open(&mut window, Group::OtherAscents);
    let shown = item(&window).other_ascents();
    assert!(
        shown
            .working
            .is_some_and(|other| other.reversible[0].is_some())
    );
    assert!(!shown.stale);
    assert!(!item(&window).is_draft(), "looking changes nothing");
    tab_to(&mut window, "Surface dew point");
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowLeft);
    window.run();
    let shown = item(&window).other_ascents();
    assert!(!shown.stale);
    assert_ne!(shown.working, shown.received, "the parcel is drier");
}

#[test]
fn what_was_received_stands_beside_what_has_changed() {
    let (_folder, mut window) = usual();
    let received = item(&window).results().further.parcels[0]
        .and_then(|parcel| parcel.lcl_height)
        .unwrap();
    let was = format!("was {received:.0}");
    assert!(!has_text(&window, &was));
    tab_to(&mut window, "Surface dew point");
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowLeft);
    window.run();
    assert!(has_text(&window, &was), "{was}");
}

#[test]
fn all_that_is_shown_is_copied() {
    let (_folder, mut window) = usual();
    let copied = |window: &mut Window| {
        window.get_by_label("Copy numbers").click();
        for _ in 0..4 {
            window.step();
            let commands = &window.output().platform_output.commands;
            let text = commands.iter().find_map(|command| match command {
                OutputCommand::CopyText(text) => Some(text.clone()),
                _ => None,
            });
            if let Some(text) = text {
                return text;
            }
        }
        panic!("nothing is on the clipboard");
    };
    let closed = copied(&mut window);
    window.run();
    for quantity in at_a_glance() {
        assert!(closed.contains(quantity.label), "{closed}");
    }
    assert!(!closed.contains("Precipitable water"));
    assert!(closed.contains("official warnings"), "{closed}");
    open(&mut window, Group::Air);
    let text = copied(&mut window);
    for quantity in Group::Air.quantities() {
        assert!(text.contains(quantity.label), "{text}");
    }
}
