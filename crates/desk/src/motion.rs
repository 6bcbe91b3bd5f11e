//! The storm motion: its ring under the keyboard, and in words.

use crate::app::{Desk, Paint};
use crate::strokes::{self, ARROWS, Press};
use dewbound_session::chart::{SpeedUnit, per_metre_per_second, speed_sign, wind_text};
use dewbound_session::thermo::Vector;
use dewbound_session::{Command, Item, wording};
use eframe::egui::{
    Context, EventFilter, Id, Key, Vec2,
    accesskit::{self, ActionData},
};

/// Identity of the ring in the window.
pub(crate) fn motion_id() -> Id {
    Id::unique("storm motion")
}

/// Where the ring is: the motion set, else the one in use.
pub(crate) fn motion_of(item: &Item) -> Vector {
    item.document()
        .storm_motion()
        .or(item.results().further.winds.motion_used)
        .unwrap_or_default()
}

/// "Storm motion 254° 26 kt, estimated · helicity 0–1 km 120, 0–3 km 240 m²/s²".
pub(crate) fn line(paint: &Paint, item: &Item) -> String {
    let unit = paint.view.units.speed;
    let numbers = &item.results().further.winds;
    let said = match (item.document().storm_motion(), numbers.motion_used) {
        (Some(set), _) => format!("{}, set by you", wind_text(set, unit)),
        (None, Some(used)) => format!("{}, estimated", wind_text(used, unit)),
        (None, None) => "not estimated".to_owned(),
    };
    let helicity = |value: Option<f64>| {
        value.map_or_else(|| "none".to_owned(), |value| wording::number(value, 0))
    };
    let typing = paint
        .view
        .motion_typed
        .as_ref()
        .map(|text| {
            format!(
                " · typing {text}: direction/speed in {}, e.g. 240/35; Enter sets it, Esc drops it",
                speed_sign(unit)
            )
        })
        .unwrap_or_default();
    format!(
        "Storm motion {said} · helicity 0–1 km {}, 0–3 km {} m²/s²{typing}",
        helicity(numbers.helicity_0_to_1km),
        helicity(numbers.helicity_0_to_3km)
    )
}

/// Direction and speed as typed: "240/35", "240 35".
fn typed(text: &str, unit: SpeedUnit) -> Option<Vector> {
    let mut parts = text
        .split(['/', ' ', '°'])
        .filter(|part| !part.is_empty())
        .map(crate::units::typed);
    let (direction, speed) = (parts.next()??, parts.next()??);
    let sound = (0.0..=360.0).contains(&direction) && speed >= 0.0 && parts.next().is_none();
    sound.then(|| Vector::from_wind(direction, speed / per_metre_per_second(unit)))
}

/// What a key does to the ring.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Stroke {
    Step(Vec2, bool),
    Estimate,
    Character(char),
    Rubout,
    Set,
    Drop,
}

fn stroke(press: Press, typing: bool) -> Option<Stroke> {
    let size = press.step([0.1, 0.5, 1.0]) as f32;
    let step = |x: f32, y: f32| Some(Stroke::Step(size * Vec2::new(x, y), press.repeat));
    match press.key {
        Key::ArrowRight => step(1.0, 0.0),
        Key::ArrowLeft => step(-1.0, 0.0),
        Key::ArrowUp => step(0.0, 1.0),
        Key::ArrowDown => step(0.0, -1.0),
        Key::Escape if typing => Some(Stroke::Drop),
        Key::Home | Key::Escape => Some(Stroke::Estimate),
        Key::Backspace if typing => Some(Stroke::Rubout),
        Key::Enter if typing => Some(Stroke::Set),
        _ => None,
    }
}

/// Characters that can stand in a direction and a speed.
fn belongs(c: char) -> bool {
    c.is_ascii_digit() || matches!(c, '.' | ',' | '/' | ' ' | '°')
}

/// Keys of the ring, and requests of assistive technology.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    requests(ctx, desk);
    if ctx.memory(|memory| memory.has_focus(motion_id())) {
        ring_keys(ctx, desk);
    } else if let Some(text) = desk.view.motion_typed.take() {
        // Going elsewhere sets what was typed, as in any field.
        set_typed(desk, &text);
    }
}

fn ring_keys(ctx: &Context, desk: &mut Desk) {
    let Some(item) = desk.session.current() else {
        return;
    };
    let set = item.document().storm_motion().is_some();
    let typing = desk.view.motion_typed.is_some();
    let busy = set || typing || desk.dragging();
    let kept = EventFilter {
        escape: busy,
        ..ARROWS
    };
    strokes::keep(ctx, motion_id(), kept);
    if desk.dragging() {
        return;
    }
    let strokes = strokes::take_strokes(
        ctx,
        typing,
        |press, typing| {
            let ours = busy || press.key != Key::Escape;
            ours.then(|| stroke(press, typing)).flatten()
        },
        |c| belongs(c).then_some(Stroke::Character(c)),
    );
    for stroke in strokes {
        carry_out(desk, stroke);
    }
}

fn carry_out(desk: &mut Desk, stroke: Stroke) {
    match stroke {
        Stroke::Step(by, repeat) => {
            desk.view.motion_typed = None;
            let unit = per_metre_per_second(desk.view.units.speed);
            // Tenths of the unit, not what they are in single precision.
            let metres = |shown: f32| (f64::from(shown) * 10.0).round() / 10.0 / unit;
            let by = Vector {
                u: metres(by.x),
                v: metres(by.y),
            };
            desk.apply(Command::NudgeStormMotion { by, repeat });
        }
        Stroke::Estimate => {
            desk.view.motion_typed = None;
            desk.apply(Command::SetStormMotion(None));
        }
        Stroke::Character(c) => desk.view.motion_typed.get_or_insert_default().push(c),
        Stroke::Rubout => {
            if let Some(text) = &mut desk.view.motion_typed {
                text.pop();
            }
            desk.view.motion_typed.take_if(|text| text.is_empty());
        }
        Stroke::Set => {
            let text = desk.view.motion_typed.clone().unwrap_or_default();
            if set_typed(desk, &text) {
                desk.view.motion_typed = None;
            }
        }
        Stroke::Drop => desk.view.motion_typed = None,
    }
}

/// True when it was a motion.
fn set_typed(desk: &mut Desk, text: &str) -> bool {
    let motion = typed(text, desk.view.units.speed);
    if motion.is_some() {
        desk.apply(Command::SetStormMotion(motion));
    }
    motion.is_some()
}

fn requests(ctx: &Context, desk: &mut Desk) {
    let mut asked = Vec::new();
    ctx.input_mut(|input| {
        input.consume_accesskit_action_requests(motion_id(), |request| {
            let known = request.action == accesskit::Action::SetValue;
            if let (true, Some(ActionData::Value(text))) = (known, &request.data) {
                asked.push(text.to_string());
            }
            known
        });
    });
    for text in asked {
        set_typed(desk, &text);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::Modifiers;

    #[test]
    fn directions_and_speeds_as_typed() {
        let check = |text: &str, expect: Option<(f64, f64)>| {
            let found = typed(text, SpeedUnit::Knots);
            match (found, expect) {
                (None, None) => {}
                (Some(motion), Some((direction, knots))) => {
                    assert!((motion.direction_from() - direction).abs() < 1e-9, "{text}");
                    // 1852 m to the nautical mile.
                    assert!(
                        (motion.speed() * 3600.0 / 1852.0 - knots).abs() < 1e-9,
                        "{text}"
                    );
                }
                _ => panic!("{text}: {found:?}"),
            }
        };
        check("240/35", Some((240.0, 35.0)));
        check("240 35", Some((240.0, 35.0)));
        check("090°/7,5", Some((90.0, 7.5)));
        check("240", None);
        check("240/", None);
        check("400/10", None);
        check("240/35/3", None);
        check("", None);
    }

    #[test]
    fn steps() {
        let check = |key, modifiers, expect| {
            let press = Press {
                key,
                modifiers,
                repeat: false,
            };
            assert_eq!(stroke(press, false), expect, "{key:?}");
        };
        let step = |x, y| Some(Stroke::Step(Vec2::new(x, y), false));
        check(Key::ArrowRight, Modifiers::NONE, step(0.1, 0.0));
        check(Key::ArrowDown, Modifiers::SHIFT, step(0.0, -0.5));
        check(Key::ArrowUp, Modifiers::COMMAND, step(0.0, 1.0));
        check(Key::Home, Modifiers::NONE, Some(Stroke::Estimate));
        check(Key::Escape, Modifiers::NONE, Some(Stroke::Estimate));
        check(Key::Enter, Modifiers::NONE, None);
        check(Key::Tab, Modifiers::NONE, None);
    }
}
