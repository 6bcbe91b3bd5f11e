//! Keys of the chart.

use crate::app::Desk;
use crate::chart_frame::chart_id;
use crate::chart_paint::to_rect;
use crate::paper::{self, Look};
use crate::strokes::{self, ARROWS};
use dewbound_session::chart::Geometry;
use eframe::egui::{Context, Key, pos2, vec2};

/// Keys of the chart when it has the keyboard.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    let id = chart_id();
    if !ctx.memory(|memory| memory.has_focus(id)) {
        desk.view.cursor = None;
        return;
    }
    strokes::keep(ctx, id, ARROWS);
    let Some(seen) = desk.seen.as_ref() else {
        return;
    };
    let mut geometry = seen.geometry;
    let mut window = None;
    let mut cursor = desk.view.cursor;
    let mut picked = None;
    strokes::take_keys(ctx, |press| {
        let (key, modifiers) = (press.key, press.modifiers);
        if modifiers.command || modifiers.alt {
            return false;
        }
        if modifiers.shift && matches!(key, Key::ArrowUp | Key::ArrowDown) {
            let by = if key == Key::ArrowUp { -4.0 } else { 4.0 };
            let start = cursor.unwrap_or_else(|| {
                pos2(
                    geometry.plot().centre().x as f32,
                    geometry.plot().bottom as f32,
                )
            });
            let plot = to_rect(geometry.plot());
            cursor = Some(plot.clamp(start + vec2(0.0, by)));
            return true;
        }
        if let (Key::Enter, Some(at)) = (key, cursor) {
            picked = Some(geometry.pressure_at(f64::from(at.y)));
            return true;
        }
        let centre = geometry.plot().centre();
        let Some(look) = paper::look(
            press,
            |dx, dy| geometry.panned(dx, dy),
            |factor| geometry.zoomed(centre, factor),
        ) else {
            return false;
        };
        if let Look::At(view) = look {
            geometry = Geometry::new(geometry.frame(), view);
        }
        window = Some(look);
        true
    });
    if let Some(look) = window {
        look.keep(&mut desk.view.charts, seen.item);
    }
    desk.view.cursor = cursor;
    if picked.is_some() {
        desk.apply(dewbound_session::Command::PickLevel(picked));
    }
}
