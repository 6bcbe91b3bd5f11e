//! Pointer on the page of the winds: the storm motion and the hodograph's paper.

use crate::app::Desk;
use crate::chart_frame::to_point;
use crate::chart_paint::to_rect;
use crate::motion::{motion_id, motion_of};
use crate::paper;
use crate::view::Gesture;
use crate::winds_frame::plane_id;
use dewbound_session::thermo::Vector;
use dewbound_session::{Command, Item};
use eframe::egui::{Context, Pos2, Vec2};

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
    if desk.dragging() {
        return;
    }
    if let Some((about, factor)) = paper::enlarged(ctx, &response) {
        let view = seen.plane.zoomed(about, factor);
        desk.view.hodographs.insert(seen.item, view);
    }
}
