//! Keys of the page of the winds: the ring's, the strips' and the hodograph paper's.

use crate::app::Desk;
use crate::motion;
use crate::paper::{self, Look};
use crate::strokes::{self, ARROWS};
use crate::view::Page;
use crate::winds_frame::{plane_id, strips_id};
use dewbound_session::chart::{HodographGeometry, heights_up_to};
use eframe::egui::{Context, EventFilter, Key};

/// Keys of what has the keyboard, and requests of assistive technology.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    if desk.view.page != Page::Winds {
        desk.view.height = None;
        desk.view.motion_typed = None;
        return;
    }
    motion::keys(ctx, desk);
    let focused = ctx.memory(|memory| memory.focused());
    if focused != Some(strips_id()) {
        desk.view.height = None;
    }
    match focused {
        Some(id) if id == strips_id() => strips_keys(ctx, desk),
        Some(id) if id == plane_id() => plane_keys(ctx, desk),
        _ => {}
    }
}

/// Reads the wind up and down the profile.
fn strips_keys(ctx: &Context, desk: &mut Desk) {
    let upright = EventFilter {
        horizontal_arrows: false,
        ..ARROWS
    };
    strokes::keep(ctx, strips_id(), upright);
    let Some([bottom, top]) = desk.session.current().and_then(|item| {
        let profile = item.results().further.wind_profile.as_deref()?;
        heights_up_to(profile, desk.view.winds_top)
    }) else {
        return;
    };
    let mut height = desk.view.height;
    strokes::take_keys(ctx, |press| {
        let step = press.step([100.0, 500.0, 1000.0]);
        let from = |by: f64| {
            // The first key shows where reading begins.
            height.map_or(bottom, |height| {
                let steps = (height / step * by.signum() + 1e-9).floor() + 1.0;
                steps * step * by.signum()
            })
        };
        let to = match press.key {
            Key::ArrowUp => from(1.0),
            Key::ArrowDown => from(-1.0),
            Key::Home => bottom,
            Key::End => top,
            _ => return false,
        };
        height = Some(to.clamp(bottom, top));
        true
    });
    desk.view.height = height;
}

/// Moves and enlarges the hodograph's paper.
fn plane_keys(ctx: &Context, desk: &mut Desk) {
    strokes::keep(ctx, plane_id(), ARROWS);
    let Some(seen) = desk.winds_seen.as_ref() else {
        return;
    };
    let mut plane = seen.plane;
    let mut window = None;
    strokes::take_keys(ctx, |press| {
        let centre = plane.plot().centre();
        let Some(look) = paper::look(
            press,
            |dx, dy| plane.panned(dx, dy),
            |factor| plane.zoomed(centre, factor),
        ) else {
            return false;
        };
        if let Look::At(view) = look {
            plane = HodographGeometry::new(plane.frame(), view);
        }
        window = Some(look);
        true
    });
    if let Some(look) = window {
        look.keep(&mut desk.view.hodographs, seen.item);
    }
}
