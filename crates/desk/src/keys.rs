//! Keys with a fixed meaning, all from the session's one list of actions.

use dewbound_session::{ACTIONS, Action, Shortcut};
use eframe::egui::{Context, Event, Key};

/// The key of a shortcut.
pub(crate) fn key(shortcut: &Shortcut) -> Option<Key> {
    match shortcut.key {
        "Page down" => Some(Key::PageDown),
        "Page up" => Some(Key::PageUp),
        "+" => Some(Key::Plus),
        "-" => Some(Key::Minus),
        name => Key::from_name(name),
    }
}

fn pressed(shortcut: &Shortcut, event: &Event) -> bool {
    let Event::Key {
        key: found,
        pressed: true,
        modifiers,
        ..
    } = event
    else {
        return false;
    };
    let Some(wanted) = key(shortcut) else {
        return false;
    };
    // On many keyboards "+" is the shifted "=".
    let plus = wanted == Key::Plus && matches!(found, Key::Plus | Key::Equals);
    (wanted == *found || plus)
        && modifiers.command == shortcut.control
        && (modifiers.shift == shortcut.shift || plus)
        && modifiers.alt == shortcut.alt
}

/// Whether a text field has the keyboard.
fn in_text_field(ctx: &Context) -> bool {
    ctx.memory(|memory| memory.focused())
        .is_some_and(|id| eframe::egui::TextEdit::load_state(ctx, id).is_some())
}

/// What the keys of this frame ask for. A text field keeps what it understands itself.
pub(crate) fn actions(ctx: &Context) -> Vec<Action> {
    let typing = in_text_field(ctx);
    let mut asked = Vec::new();
    ctx.input_mut(|input| {
        input.events.retain(|event| {
            let found = ACTIONS.iter().find(|declaration| {
                declaration
                    .shortcut
                    .as_ref()
                    .is_some_and(|shortcut| pressed(shortcut, event))
            });
            let Some(found) = found else {
                return true;
            };
            let field_keeps = matches!(
                found.action,
                Action::Undo | Action::Redo | Action::SelectNext | Action::SelectPrevious
            );
            if typing && field_keeps {
                return true;
            }
            asked.push(found.action);
            false
        });
    });
    asked
}

/// Keys without a name of their own in the list: for the box that explains them.
pub(crate) const HANDLE_KEYS: &[(&str, &str)] = &[
    ("← →", "Move the value by 0.1 of the displayed unit"),
    ("Shift + ← →", "by 0.5"),
    ("Ctrl + ← →", "by 1.0"),
    ("0–9 − .", "Type a value; Enter sets it"),
    ("Home", "Back to the received value"),
    ("Esc", "During a drag: as it was before"),
];

/// The same for the chart.
pub(crate) const CHART_KEYS: &[(&str, &str)] = &[
    ("← → ↑ ↓", "Move the paper"),
    ("+ −", "Closer, farther"),
    ("0", "The whole profile again"),
    ("Shift + ↑ ↓", "Read values up and down the profile"),
    (
        "Enter, double click",
        "Lift a parcel from the level read as well",
    ),
    ("Tab", "To the next thing; Shift+Tab back"),
];

/// The same for the page of the winds.
pub(crate) const WINDS_KEYS: &[(&str, &str)] = &[
    (
        "← → ↑ ↓",
        "On the ring: move the storm motion by 0.1 of the displayed unit (Shift 0.5, Ctrl 1.0)",
    ),
    (
        "240/35",
        "On the ring: direction and speed as typed; Enter sets them",
    ),
    ("Home, Esc", "On the ring: back to the estimate"),
    (
        "↑ ↓",
        "On the strips: read the wind 100 m higher or lower (Shift 500 m, Ctrl 1 km)",
    ),
    (
        "← → ↑ ↓, + −, 0",
        "On the hodograph: move the paper, closer and farther, all of it again",
    ),
    (
        "Double click",
        "On the hodograph: the storm motion goes there",
    ),
];

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::Modifiers;

    fn event(key: Key, modifiers: Modifiers) -> Event {
        Event::Key {
            key,
            physical_key: None,
            pressed: true,
            repeat: false,
            modifiers,
        }
    }

    #[test]
    fn every_shortcut_has_a_key_and_none_is_given_twice() {
        let mut seen = std::collections::HashSet::new();
        for declaration in ACTIONS {
            if let Some(shortcut) = &declaration.shortcut {
                assert!(key(shortcut).is_some(), "{}", shortcut.text());
                assert!(seen.insert(shortcut.text()), "{}", shortcut.text());
            }
        }
    }

    #[test]
    fn shift_tells_undo_from_redo() {
        let undo = Action::Undo.declaration().shortcut.unwrap();
        let redo = Action::Redo.declaration().shortcut.unwrap();
        let plain = event(Key::Z, Modifiers::COMMAND);
        let shifted = event(Key::Z, Modifiers::COMMAND | Modifiers::SHIFT);
        assert!(pressed(&undo, &plain) && !pressed(&undo, &shifted));
        assert!(pressed(&redo, &shifted) && !pressed(&redo, &plain));
    }

    #[test]
    fn larger_works_with_and_without_shift() {
        let larger = Action::ZoomIn.declaration().shortcut.unwrap();
        for found in [
            event(Key::Plus, Modifiers::COMMAND),
            event(Key::Equals, Modifiers::COMMAND),
            event(Key::Plus, Modifiers::COMMAND | Modifiers::SHIFT),
        ] {
            assert!(pressed(&larger, &found), "{found:?}");
        }
    }
}
