//! Keys and typed text for the thing that has the keyboard, taken out of a frame's events.

use eframe::egui::{Context, Event, EventFilter, Id, Key, Modifiers};

/// Arrows in both directions stay with the thing in focus; Tab and Esc leave it.
pub(crate) const ARROWS: EventFilter = EventFilter {
    tab: false,
    horizontal_arrows: true,
    vertical_arrows: true,
    escape: false,
};

/// Keys that shall not move the focus away from a thing that has it.
pub(crate) fn keep(ctx: &Context, id: Id, kept: EventFilter) {
    ctx.memory_mut(|memory| memory.set_focus_lock_filter(id, kept));
}

/// A key going down.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Press {
    /// Which.
    pub key: Key,
    /// Held with it.
    pub modifiers: Modifiers,
    /// It has been down for a while.
    pub repeat: bool,
}

impl Press {
    fn of(event: &Event) -> Option<Self> {
        match *event {
            Event::Key {
                key,
                pressed: true,
                repeat,
                modifiers,
                ..
            } => Some(Self {
                key,
                modifiers,
                repeat,
            }),
            _ => None,
        }
    }

    /// How far a step goes: alone, with Shift, with the command key.
    pub fn step(self, [alone, shift, command]: [f64; 3]) -> f64 {
        if self.modifiers.command {
            command
        } else if self.modifiers.shift {
            shift
        } else {
            alone
        }
    }
}

/// Takes the keys for which `taken` says true; the others are left to the rest of the window.
pub(crate) fn take_keys(ctx: &Context, mut taken: impl FnMut(Press) -> bool) {
    ctx.input_mut(|input| {
        input
            .events
            .retain(|event| !Press::of(event).is_some_and(&mut taken));
    });
}

/// Takes the keys that mean something, and text all characters of which do, in their order. `meaning` is told whether
/// text is being typed, as `typing` says or because there was some earlier in the frame.
pub(crate) fn take_strokes<S>(
    ctx: &Context,
    mut typing: bool,
    meaning: impl Fn(Press, bool) -> Option<S>,
    character: impl Fn(char) -> Option<S>,
) -> Vec<S> {
    let mut strokes = Vec::new();
    ctx.input_mut(|input| {
        input.events.retain(|event| {
            if let Some(stroke) = Press::of(event).and_then(|press| meaning(press, typing)) {
                strokes.push(stroke);
                return false;
            }
            let Event::Text(text) = event else {
                return true;
            };
            let Some(characters) = text.chars().map(&character).collect::<Option<Vec<_>>>() else {
                return true;
            };
            typing = true;
            strokes.extend(characters);
            false
        });
    });
    strokes
}

#[cfg(test)]
mod tests {
    use super::*;

    fn key(key: Key, pressed: bool) -> Event {
        Event::Key {
            key,
            physical_key: None,
            pressed,
            repeat: false,
            modifiers: Modifiers::NONE,
        }
    }

    fn given(events: Vec<Event>) -> Context {
        let ctx = Context::default();
        ctx.input_mut(|input| input.events = events);
        ctx
    }

    fn left(ctx: &Context) -> Vec<Event> {
        ctx.input(|input| input.events.clone())
    }

    #[test]
    fn only_what_is_meant_is_taken() {
        let ctx = given(vec![
            key(Key::Home, true),
            key(Key::End, true),
            key(Key::Home, false),
            Event::Copy,
        ]);
        let mut seen = Vec::new();
        take_keys(&ctx, |press| {
            seen.push(press.key);
            press.key == Key::Home
        });
        assert_eq!(seen, [Key::Home, Key::End]);
        assert_eq!(
            left(&ctx),
            [key(Key::End, true), key(Key::Home, false), Event::Copy]
        );
    }

    #[test]
    fn typed_text_changes_what_later_keys_mean() {
        let text = |text: &str| Event::Text(text.to_owned());
        let ctx = given(vec![
            key(Key::Enter, true),
            text("12"),
            text("1x"),
            key(Key::Enter, true),
        ]);
        let strokes = take_strokes(
            &ctx,
            false,
            |press, typing| (typing && press.key == Key::Enter).then_some('\n'),
            |c| c.is_ascii_digit().then_some(c),
        );
        assert_eq!(strokes, ['1', '2', '\n']);
        assert_eq!(left(&ctx), [key(Key::Enter, true), text("1x")]);
    }

    #[test]
    fn the_command_key_goes_before_shift() {
        let step = |modifiers| {
            let press = Press {
                key: Key::ArrowUp,
                modifiers,
                repeat: false,
            };
            press.step([1.0, 2.0, 3.0])
        };
        assert_eq!(step(Modifiers::NONE), 1.0);
        assert_eq!(step(Modifiers::SHIFT), 2.0);
        assert_eq!(step(Modifiers::COMMAND), 3.0);
        assert_eq!(step(Modifiers::COMMAND | Modifiers::SHIFT), 3.0);
    }
}
