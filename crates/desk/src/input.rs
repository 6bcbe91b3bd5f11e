//! Pointer: read before painting, against the geometry of the frame last painted.

use crate::app::Desk;
use crate::chart_frame::{chart_id, to_point};
use crate::handle::{handle_id, quantity_of};
use crate::paper;
use crate::response::response_id;
use crate::view::Gesture;
use crate::winds_frame::plane_id;
use crate::winds_pointer;
use dewbound_session::{Command, SurfaceQuantity};
use eframe::egui::{Context, Pos2};

/// Takes hold, moves, lets go; scrolls.
pub(crate) fn pointer(ctx: &Context, desk: &mut Desk) {
    let (position, origin, pressed, down, escape) = ctx.input(|input| {
        (
            input.pointer.latest_pos(),
            input.pointer.press_origin().or(input.pointer.latest_pos()),
            input.pointer.primary_pressed(),
            input.pointer.primary_down(),
            input.key_pressed(eframe::egui::Key::Escape),
        )
    });
    if escape && desk.dragging() {
        desk.apply(Command::CancelGesture);
        desk.view.gesture = Some(Gesture::GivenUp);
    }
    // A slow frame may hold both the press and what followed it: what counts is where the button went down.
    if pressed && let Some(origin) = origin {
        take_hold(ctx, desk, origin);
    }
    if let Some(position) = position {
        move_to(ctx, desk, position);
    }
    if !down && let Some(gesture) = desk.view.gesture.take() {
        match gesture {
            Gesture::Handle { .. } | Gesture::Response { .. } | Gesture::Motion { .. } => {
                desk.apply(Command::EndGesture);
            }
            Gesture::Pan | Gesture::PanWinds | Gesture::GivenUp => {}
        }
    }
    scroll(ctx, desk);
    pick(ctx, desk);
    winds_pointer::wheel_and_double_click(ctx, desk);
}

/// A double click lifts a parcel from that level too.
fn pick(ctx: &Context, desk: &mut Desk) {
    let Some(position) = ctx
        .read_response(chart_id())
        .filter(|response| response.double_clicked())
        .and_then(|response| response.interact_pointer_pos())
    else {
        return;
    };
    if let Some(seen) = &desk.seen
        && seen.touch.handle_at(to_point(position)).is_none()
        && seen.geometry.plot().contains(to_point(position))
    {
        let level = seen.geometry.pressure_at(f64::from(position.y));
        desk.apply(Command::PickLevel(Some(level)));
    }
}

/// Whether a widget of the last frame lies under the pointer, on top.
fn hit(ctx: &Context, id: eframe::egui::Id) -> bool {
    ctx.read_response(id)
        .is_some_and(|response| response.is_pointer_button_down_on())
}

fn take_hold(ctx: &Context, desk: &mut Desk, position: Pos2) {
    let Some(item) = desk.session.current() else {
        return;
    };
    if hit(ctx, plane_id()) {
        winds_pointer::take_hold(ctx, desk, position);
    } else if hit(ctx, chart_id())
        && let Some(seen) = &desk.seen
    {
        match seen.touch.handle_at(to_point(position)) {
            Some(handle) => {
                let quantity = quantity_of(handle);
                let under = seen.surface_temperature_at(position);
                let grab_k = item
                    .working_surface(quantity)
                    .zip(under)
                    .map_or(0.0, |(value, under)| value.k() - under.k());
                begin(ctx, desk, Gesture::Handle { quantity, grab_k }, quantity);
            }
            None => {
                desk.view.gesture = Some(Gesture::Pan);
                ctx.memory_mut(|memory| memory.request_focus(chart_id()));
            }
        }
    } else if hit(ctx, response_id())
        && let Some(seen) = &desk.response_seen
    {
        let under = seen.dewpoint_at(position);
        let working = item.working_surface(SurfaceQuantity::Dewpoint);
        // Near the working value it is taken hold of; elsewhere it jumps to the pointer.
        let grab_k = working
            .filter(|&value| (seen.x_of(value) - position.x).abs() <= 14.0)
            .map_or(0.0, |value| value.k() - under.k());
        let quantity = SurfaceQuantity::Dewpoint;
        begin(ctx, desk, Gesture::Response { grab_k }, quantity);
    }
}

fn begin(ctx: &Context, desk: &mut Desk, gesture: Gesture, quantity: SurfaceQuantity) {
    desk.view.gesture = Some(gesture);
    desk.view.typing = None;
    let id = match gesture {
        Gesture::Response { .. } => response_id(),
        _ => handle_id(quantity),
    };
    ctx.memory_mut(|memory| memory.request_focus(id));
    desk.apply(Command::BeginGesture);
}

fn move_to(ctx: &Context, desk: &mut Desk, position: Pos2) {
    match desk.view.gesture {
        Some(Gesture::Handle { quantity, grab_k }) => {
            let under = desk
                .seen
                .as_ref()
                .and_then(|seen| seen.surface_temperature_at(position));
            if let Some(under) = under {
                moved(ctx, desk, quantity, under.k() + grab_k);
            }
        }
        Some(Gesture::Response { grab_k }) => {
            let under = desk
                .response_seen
                .as_ref()
                .map(|seen| seen.dewpoint_at(position));
            if let Some(under) = under {
                let quantity = SurfaceQuantity::Dewpoint;
                // A press on the curve means that value, even without moving.
                desk.set_surface(quantity, under.k() + grab_k);
                desk.view.hint = false;
            }
        }
        Some(Gesture::Pan) => {
            let delta = ctx.input(|input| input.pointer.delta());
            if let Some(seen) = &desk.seen
                && delta != eframe::egui::Vec2::ZERO
            {
                let view = seen.geometry.panned(f64::from(delta.x), f64::from(delta.y));
                desk.view.charts.insert(seen.item, view);
            }
        }
        Some(Gesture::Motion { grab_ms }) => winds_pointer::drag_to(ctx, desk, position, grab_ms),
        Some(Gesture::PanWinds) => winds_pointer::pan(ctx, desk),
        Some(Gesture::GivenUp) | None => {}
    }
}

fn moved(ctx: &Context, desk: &mut Desk, quantity: SurfaceQuantity, k: f64) {
    // A click that only takes hold changes nothing, not even by rounding.
    if ctx.input(|input| input.pointer.delta() != eframe::egui::Vec2::ZERO) {
        desk.set_surface(quantity, k);
        desk.view.hint = false;
    }
}

fn scroll(ctx: &Context, desk: &mut Desk) {
    let Some(response) = ctx.read_response(chart_id()) else {
        return;
    };
    if desk.dragging() {
        return;
    }
    if let Some(seen) = &desk.seen
        && let Some((about, factor)) = paper::enlarged(ctx, &response)
    {
        let view = seen.geometry.zoomed(about, factor);
        desk.view.charts.insert(seen.item, view);
    }
}
