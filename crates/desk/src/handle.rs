//! The two surface handles under the keyboard and for assistive technology.

use crate::app::{Desk, Paint};
use crate::ask::Asks;
use crate::response::response_id;
use crate::strokes::{self, ARROWS, Press};
use crate::units;
use crate::view::Typing;
use dewbound_session::chart::{self, HIT_RADIUS};
use dewbound_session::thermo::Temperature;
use dewbound_session::{Command, Item, SurfaceQuantity};
use eframe::egui::{
    Context, EventFilter, Id, Key, Rect, Role, Sense, Ui, WidgetInfo,
    accesskit::{self, ActionData},
    pos2, vec2,
};

/// Both, in the order the keyboard reaches them.
pub(crate) const QUANTITIES: [SurfaceQuantity; 2] =
    [SurfaceQuantity::Dewpoint, SurfaceQuantity::Temperature];

/// Identity of a handle in the window.
pub(crate) fn handle_id(quantity: SurfaceQuantity) -> Id {
    Id::unique(("handle", quantity))
}

/// The chart's word for it.
pub(crate) fn handle_of(quantity: SurfaceQuantity) -> chart::Handle {
    match quantity {
        SurfaceQuantity::Dewpoint => chart::Handle::Dewpoint,
        SurfaceQuantity::Temperature => chart::Handle::Temperature,
    }
}

/// And back.
pub(crate) fn quantity_of(handle: chart::Handle) -> SurfaceQuantity {
    match handle {
        chart::Handle::Dewpoint => SurfaceQuantity::Dewpoint,
        chart::Handle::Temperature => SurfaceQuantity::Temperature,
    }
}

/// As read out and shown in the status line.
pub(crate) fn name(quantity: SurfaceQuantity) -> &'static str {
    match quantity {
        SurfaceQuantity::Dewpoint => "Surface dew point",
        SurfaceQuantity::Temperature => "Surface temperature",
    }
}

/// The handle that has the keyboard; the response acts on the dew point.
fn focused(ctx: &Context) -> Option<(Id, SurfaceQuantity)> {
    let id = ctx.memory(|memory| memory.focused())?;
    if id == response_id() {
        return Some((id, SurfaceQuantity::Dewpoint));
    }
    QUANTITIES
        .into_iter()
        .find(|&quantity| handle_id(quantity) == id)
        .map(|quantity| (id, quantity))
}

/// What a key does to a handle.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Stroke {
    Step(f64, bool),
    Received,
    Character(char),
    Rubout,
    Set,
    Drop,
}

fn stroke(press: Press, typing: bool) -> Option<Stroke> {
    let size = press.step([0.1, 0.5, 1.0]);
    match press.key {
        Key::ArrowRight | Key::ArrowUp => Some(Stroke::Step(size, press.repeat)),
        Key::ArrowLeft | Key::ArrowDown => Some(Stroke::Step(-size, press.repeat)),
        Key::Home => Some(Stroke::Received),
        Key::Backspace if typing => Some(Stroke::Rubout),
        Key::Enter if typing => Some(Stroke::Set),
        Key::Escape if typing => Some(Stroke::Drop),
        _ => None,
    }
}

/// Characters that can stand in a number.
fn belongs_to_number(c: char) -> bool {
    c.is_ascii_digit() || matches!(c, '.' | ',' | '-' | '\u{2212}')
}

/// Keys and requests of assistive technology for the handle that has the keyboard.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    requests(ctx, desk);
    let Some((id, quantity)) = focused(ctx) else {
        if let Some(typing) = desk.view.typing.take() {
            // Going elsewhere sets what was typed, as in any field.
            set_typed(desk, &typing);
        }
        return;
    };
    if desk
        .view
        .typing
        .as_ref()
        .is_some_and(|typing| typing.quantity != quantity)
        && let Some(typing) = desk.view.typing.take()
    {
        set_typed(desk, &typing);
    }
    let typing = desk.view.typing.is_some();
    let kept = EventFilter {
        escape: typing || desk.dragging(),
        ..ARROWS
    };
    strokes::keep(ctx, id, kept);
    if desk.dragging() {
        return;
    }
    let strokes = strokes::take_strokes(ctx, typing, stroke, |c| {
        belongs_to_number(c).then_some(Stroke::Character(c))
    });
    for stroke in strokes {
        carry_out(desk, quantity, stroke);
    }
}

fn carry_out(desk: &mut Desk, quantity: SurfaceQuantity, stroke: Stroke) {
    match stroke {
        Stroke::Step(by, repeat) => {
            desk.view.typing = None;
            desk.view.hint = false;
            desk.apply(Command::Nudge {
                quantity,
                by_k: units::kelvins(by, desk.view.units.temperature),
                repeat,
            });
        }
        Stroke::Received => {
            desk.view.typing = None;
            desk.apply(Command::ResetSurface(quantity));
        }
        Stroke::Character(c) => desk
            .view
            .typing
            .get_or_insert(Typing {
                quantity,
                text: String::new(),
            })
            .text
            .push(c),
        Stroke::Rubout => {
            if let Some(typing) = &mut desk.view.typing {
                typing.text.pop();
                if typing.text.is_empty() {
                    desk.view.typing = None;
                }
            }
        }
        Stroke::Set => {
            if let Some(typing) = desk.view.typing.take() {
                set_typed(desk, &typing);
            }
        }
        Stroke::Drop => desk.view.typing = None,
    }
}

fn set_typed(desk: &mut Desk, typing: &Typing) {
    if let Some(value) = units::typed(&typing.text) {
        desk.view.hint = false;
        desk.apply(Command::SetSurface(
            typing.quantity,
            units::from_shown(value, desk.view.units.temperature),
        ));
    }
}

fn requests(ctx: &Context, desk: &mut Desk) {
    for quantity in QUANTITIES {
        let id = handle_id(quantity);
        let mut asked = Vec::new();
        ctx.input_mut(|input| {
            input.consume_accesskit_action_requests(id, |request| {
                let known = matches!(
                    request.action,
                    accesskit::Action::Increment
                        | accesskit::Action::Decrement
                        | accesskit::Action::SetValue
                );
                if known {
                    asked.push(request.clone());
                }
                known
            });
        });
        for request in asked {
            let unit = desk.view.units.temperature;
            let value = match (request.action, request.data) {
                (accesskit::Action::SetValue, Some(ActionData::NumericValue(value))) => Some(value),
                (accesskit::Action::SetValue, Some(ActionData::Value(text))) => units::typed(&text),
                _ => None,
            };
            match (request.action, value) {
                (accesskit::Action::Increment, _) => {
                    carry_out(desk, quantity, Stroke::Step(0.1, false));
                }
                (accesskit::Action::Decrement, _) => {
                    carry_out(desk, quantity, Stroke::Step(-0.1, false));
                }
                (_, Some(value)) => {
                    desk.apply(Command::SetSurface(
                        quantity,
                        units::from_shown(value, unit),
                    ));
                }
                _ => {}
            }
        }
    }
}

/// "Surface dew point 18.4 °C, received 21.0 °C".
pub(crate) fn line(paint: &Paint, item: &Item, quantity: SurfaceQuantity) -> Option<String> {
    let unit = paint.view.units.temperature;
    let working = item.working_surface(quantity)?;
    let received = item
        .received_surface(quantity)
        .map_or_else(|| "nothing".to_owned(), |t| units::temperature(t, unit));
    let typing = paint
        .view
        .typing
        .as_ref()
        .filter(|typing| typing.quantity == quantity)
        .map(|typing| {
            format!(
                " · typing {} {}: Enter sets it, Esc drops it",
                typing.text,
                units::sign(unit)
            )
        })
        .unwrap_or_default();
    Some(format!(
        "{} {}, received {received}{typing}",
        name(quantity),
        units::temperature(working, unit)
    ))
}

/// The nodes of the handles in sight: focus and a slider each. The ring itself is the chart's.
pub(crate) fn handles_ui(ui: &Ui, paint: &Paint, item: &Item, asks: &mut Asks) {
    let Some(frame) = paint.chart else {
        return;
    };
    for quantity in QUANTITIES {
        let Some(value) = item.working_surface(quantity) else {
            continue;
        };
        let id = handle_id(quantity);
        // A handle scrolled out of sight can still be worked from the keyboard.
        let centre = frame
            .touch
            .handle(handle_of(quantity))
            .map_or(frame.rect.center_bottom(), |place| {
                pos2(place.centre.x as f32, place.centre.y as f32)
            });
        let rect = Rect::from_center_size(centre, vec2(1.0, 1.0) * 2.0 * HIT_RADIUS as f32);
        let response = ui.interact(rect, id, Sense::focusable_noninteractive());
        let unit = paint.view.units.temperature;
        response.widget_info(|| {
            WidgetInfo::slider(true, rounded(units::shown(value, unit)), name(quantity))
        });
        ui.ctx().accesskit_node_builder(id, |node| {
            node.set_role(Role::Slider);
            node.set_value(units::temperature(value, unit));
            node.set_min_numeric_value(units::shown(Temperature::from_c(-90.0), unit));
            node.set_max_numeric_value(units::shown(Temperature::from_c(60.0), unit));
            node.set_numeric_value_step(0.1);
            node.add_action(accesskit::Action::Increment);
            node.add_action(accesskit::Action::Decrement);
            node.add_action(accesskit::Action::SetValue);
        });
        asks.describe(&response, || {
            line(paint, item, quantity).unwrap_or_default()
        });
    }
}

fn rounded(value: f64) -> f64 {
    (value * 10.0).round() / 10.0
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::Modifiers;

    #[test]
    fn steps() {
        let press = |key, modifiers| Press {
            key,
            modifiers,
            repeat: false,
        };
        let check = |key, modifiers, expect| {
            assert_eq!(stroke(press(key, modifiers), false), expect, "{key:?}");
        };
        check(
            Key::ArrowRight,
            Modifiers::NONE,
            Some(Stroke::Step(0.1, false)),
        );
        check(
            Key::ArrowUp,
            Modifiers::SHIFT,
            Some(Stroke::Step(0.5, false)),
        );
        check(
            Key::ArrowLeft,
            Modifiers::COMMAND,
            Some(Stroke::Step(-1.0, false)),
        );
        check(Key::Home, Modifiers::NONE, Some(Stroke::Received));
        check(Key::Enter, Modifiers::NONE, None);
        check(Key::Tab, Modifiers::NONE, None);
        assert_eq!(
            stroke(press(Key::Enter, Modifiers::NONE), true),
            Some(Stroke::Set)
        );
    }
}
