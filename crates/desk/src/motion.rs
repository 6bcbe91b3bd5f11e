//! The storm motion and the heights read, under pointer and keyboard.

use crate::app::{Desk, Paint};
use crate::chart_frame::to_point;
use crate::chart_paint::to_rect;
use crate::view::{Gesture, Page};
use crate::winds_frame::{plane_id, strips_id};
use dewbound_session::chart::{
    HodographGeometry, HodographView, SpeedUnit, heights_up_to, per_metre_per_second, speed_sign,
    wind_text,
};
use dewbound_session::thermo::Vector;
use dewbound_session::{Command, Item, wording};
use eframe::egui::{
    Context, Event, EventFilter, Id, Key, Modifiers, Pos2, Vec2,
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

fn stroke(key: Key, modifiers: Modifiers, repeat: bool, typing: bool) -> Option<Stroke> {
    let size = if modifiers.command {
        1.0
    } else if modifiers.shift {
        0.5
    } else {
        0.1
    };
    let step = |x: f32, y: f32| Some(Stroke::Step(size * Vec2::new(x, y), repeat));
    match key {
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

/// Keys of the ring, the strips and the hodograph, and requests of assistive technology.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    if desk.view.page != Page::Winds {
        desk.view.height = None;
        desk.view.motion_typed = None;
        return;
    }
    requests(ctx, desk);
    let focused = ctx.memory(|memory| memory.focused());
    if focused != Some(strips_id()) {
        desk.view.height = None;
    }
    if focused != Some(motion_id())
        && let Some(text) = desk.view.motion_typed.take()
    {
        // Going elsewhere sets what was typed, as in any field.
        set_typed(desk, &text);
    }
    match focused {
        Some(id) if id == motion_id() => ring_keys(ctx, desk),
        Some(id) if id == strips_id() => strips_keys(ctx, desk),
        Some(id) if id == plane_id() => plane_keys(ctx, desk),
        _ => {}
    }
}

fn keep_arrows(ctx: &Context, id: Id, horizontal: bool, escape: bool) {
    ctx.memory_mut(|memory| {
        memory.set_focus_lock_filter(
            id,
            EventFilter {
                tab: false,
                horizontal_arrows: horizontal,
                vertical_arrows: true,
                escape,
            },
        );
    });
}

fn ring_keys(ctx: &Context, desk: &mut Desk) {
    let Some(item) = desk.session.current() else {
        return;
    };
    let set = item.document().storm_motion().is_some();
    let busy = set || desk.view.motion_typed.is_some() || desk.dragging();
    keep_arrows(ctx, motion_id(), true, busy);
    if desk.dragging() {
        return;
    }
    let mut strokes = Vec::new();
    let mut typing = desk.view.motion_typed.is_some();
    ctx.input_mut(|input| {
        input.events.retain(|event| match event {
            Event::Key {
                key,
                pressed: true,
                repeat,
                modifiers,
                ..
            } if busy || *key != Key::Escape => match stroke(*key, *modifiers, *repeat, typing) {
                Some(found) => {
                    strokes.push(found);
                    false
                }
                None => true,
            },
            Event::Text(text) if text.chars().all(belongs) => {
                typing = true;
                strokes.extend(text.chars().map(Stroke::Character));
                false
            }
            _ => true,
        });
    });
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

/// Reads the wind up and down the profile.
fn strips_keys(ctx: &Context, desk: &mut Desk) {
    keep_arrows(ctx, strips_id(), false, false);
    let Some([bottom, top]) = desk.session.current().and_then(|item| {
        let profile = item.results().further.wind_profile.as_deref()?;
        heights_up_to(profile, desk.view.winds_top)
    }) else {
        return;
    };
    let mut height = desk.view.height;
    ctx.input_mut(|input| {
        input.events.retain(|event| {
            let Event::Key {
                key,
                pressed: true,
                modifiers,
                ..
            } = event
            else {
                return true;
            };
            let step = if modifiers.command {
                1000.0
            } else if modifiers.shift {
                500.0
            } else {
                100.0
            };
            let from = |by: f64| {
                // The first key shows where reading begins.
                height.map_or(bottom, |height| {
                    let steps = (height / step * by.signum() + 1e-9).floor() + 1.0;
                    steps * step * by.signum()
                })
            };
            let to = match key {
                Key::ArrowUp => from(1.0),
                Key::ArrowDown => from(-1.0),
                Key::Home => bottom,
                Key::End => top,
                _ => return true,
            };
            height = Some(to.clamp(bottom, top));
            false
        });
    });
    desk.view.height = height;
}

/// Moves and enlarges the hodograph's paper.
fn plane_keys(ctx: &Context, desk: &mut Desk) {
    keep_arrows(ctx, plane_id(), true, false);
    let Some(seen) = desk.winds_seen.as_ref() else {
        return;
    };
    let (item, mut plane) = (seen.item, seen.plane);
    let mut window: Option<Option<HodographView>> = None;
    ctx.input_mut(|input| {
        input.events.retain(|event| {
            let Event::Key {
                key,
                pressed: true,
                modifiers,
                ..
            } = event
            else {
                return true;
            };
            if modifiers.command || modifiers.alt {
                return true;
            }
            let centre = plane.plot().centre();
            let new = match key {
                Key::ArrowLeft => plane.panned(30.0, 0.0),
                Key::ArrowRight => plane.panned(-30.0, 0.0),
                Key::ArrowUp => plane.panned(0.0, 30.0),
                Key::ArrowDown => plane.panned(0.0, -30.0),
                Key::Plus | Key::Equals => plane.zoomed(centre, 1.2),
                Key::Minus => plane.zoomed(centre, 1.0 / 1.2),
                Key::Num0 => {
                    window = Some(None);
                    return false;
                }
                _ => return true,
            };
            plane = HodographGeometry::new(plane.frame(), new);
            window = Some(Some(new));
            false
        });
    });
    match window {
        Some(Some(new)) => {
            desk.view.hodographs.insert(item, new);
        }
        Some(None) => {
            desk.view.hodographs.remove(&item);
        }
        None => {}
    }
}

/// The button went down on the hodograph.
pub(crate) fn take_hold(ctx: &Context, desk: &mut Desk, position: Pos2) {
    let (Some(seen), Some(item)) = (&desk.winds_seen, desk.session.current()) else {
        return;
    };
    let at = to_point(position);
    if seen.hodograph.is_on_handle(at) {
        let grab_ms = motion_of(item) - seen.plane.at(at);
        desk.view.gesture = Some(Gesture::Motion { grab_ms });
        desk.view.motion_typed = None;
        ctx.memory_mut(|memory| memory.request_focus(motion_id()));
        desk.apply(Command::BeginGesture);
    } else {
        desk.view.gesture = Some(Gesture::PanWinds);
        ctx.memory_mut(|memory| memory.request_focus(plane_id()));
    }
}

/// The motion follows the pointer, as far as the plot goes.
pub(crate) fn drag_to(ctx: &Context, desk: &mut Desk, position: Pos2, grab_ms: Vector) {
    // A click that only takes hold changes nothing.
    if ctx.input(|input| input.pointer.delta() == Vec2::ZERO) {
        return;
    }
    let Some(plane) = desk.winds_seen.as_ref().map(|seen| seen.plane) else {
        return;
    };
    // Undone or left in the middle: nothing until the button is up.
    if !desk.session.current().is_some_and(Item::in_gesture) {
        desk.view.gesture = Some(Gesture::GivenUp);
        return;
    }
    let position = to_rect(plane.plot()).clamp(position);
    let motion = plane.at(to_point(position)) + grab_ms;
    desk.apply(Command::SetStormMotion(Some(motion)));
}

/// The hodograph's paper follows the pointer.
pub(crate) fn pan(ctx: &Context, desk: &mut Desk) {
    let delta = ctx.input(|input| input.pointer.delta());
    if let Some(seen) = &desk.winds_seen
        && delta != Vec2::ZERO
    {
        let view = seen.plane.panned(f64::from(delta.x), f64::from(delta.y));
        desk.view.hodographs.insert(seen.item, view);
    }
}

/// The wheel enlarges; a double click beside the ring brings it there.
pub(crate) fn wheel_and_double_click(ctx: &Context, desk: &mut Desk) {
    let Some(response) = ctx.read_response(plane_id()) else {
        return;
    };
    let Some(seen) = desk.winds_seen.as_ref() else {
        return;
    };
    if response.double_clicked()
        && let Some(position) = response.interact_pointer_pos()
        && !seen.hodograph.is_on_handle(to_point(position))
        && seen.plane.plot().contains(to_point(position))
    {
        let motion = seen.plane.at(to_point(position));
        desk.apply(Command::SetStormMotion(Some(motion)));
        ctx.memory_mut(|memory| memory.request_focus(motion_id()));
        return;
    }
    if !response.contains_pointer() || desk.dragging() {
        return;
    }
    let Some(position) = response.hover_pos() else {
        return;
    };
    let (scrolled, pinched) =
        ctx.input(|input| (input.smooth_scroll_delta().y, input.zoom_delta()));
    let factor = f64::from(pinched) * (f64::from(scrolled) / 300.0).exp();
    if (factor - 1.0).abs() > 1e-6 {
        let view = seen.plane.zoomed(to_point(position), factor);
        desk.view.hodographs.insert(seen.item, view);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

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
            assert_eq!(stroke(key, modifiers, false, false), expect, "{key:?}");
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
