//! Keys of the chart.

use crate::app::Desk;
use crate::chart_frame::chart_id;
use crate::chart_paint::to_rect;
use dewbound_session::chart::Geometry;
use eframe::egui::{Context, Event, EventFilter, Key, pos2, vec2};

/// Keys of the chart when it has the keyboard.
pub(crate) fn keys(ctx: &Context, desk: &mut Desk) {
    let id = chart_id();
    if !ctx.memory(|memory| memory.has_focus(id)) {
        desk.view.cursor = None;
        return;
    }
    ctx.memory_mut(|memory| {
        memory.set_focus_lock_filter(
            id,
            EventFilter {
                tab: false,
                horizontal_arrows: true,
                vertical_arrows: true,
                escape: false,
            },
        );
    });
    let Some(seen) = desk.seen.as_ref() else {
        return;
    };
    let mut geometry = seen.geometry;
    let mut window = None;
    let mut fitted = false;
    let mut cursor = desk.view.cursor;
    let mut picked = None;
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
            if modifiers.shift && matches!(key, Key::ArrowUp | Key::ArrowDown) {
                let by = if *key == Key::ArrowUp { -4.0 } else { 4.0 };
                let start = cursor.unwrap_or_else(|| {
                    pos2(
                        geometry.plot().centre().x as f32,
                        geometry.plot().bottom as f32,
                    )
                });
                let plot = to_rect(geometry.plot());
                cursor = Some(plot.clamp(start + vec2(0.0, by)));
                return false;
            }
            if let (Key::Enter, Some(at)) = (key, cursor) {
                picked = Some(geometry.pressure_at(f64::from(at.y)));
                return false;
            }
            let centre = geometry.plot().centre();
            let new = match key {
                Key::ArrowLeft => geometry.panned(30.0, 0.0),
                Key::ArrowRight => geometry.panned(-30.0, 0.0),
                Key::ArrowUp => geometry.panned(0.0, 30.0),
                Key::ArrowDown => geometry.panned(0.0, -30.0),
                Key::Plus | Key::Equals => geometry.zoomed(centre, 1.2),
                Key::Minus => geometry.zoomed(centre, 1.0 / 1.2),
                Key::Num0 => {
                    fitted = true;
                    return false;
                }
                _ => return true,
            };
            fitted = false;
            geometry = Geometry::new(geometry.frame(), new);
            window = Some(new);
            false
        });
    });
    let item = seen.item;
    if fitted {
        desk.view.charts.remove(&item);
    } else if let Some(window) = window {
        desk.view.charts.insert(item, window);
    }
    desk.view.cursor = cursor;
    if picked.is_some() {
        desk.apply(dewbound_session::Command::PickLevel(picked));
    }
}
