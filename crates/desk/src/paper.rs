//! Moving and enlarging a paper: the chart's and the hodograph's.

use crate::chart_frame::to_point;
use crate::strokes::Press;
use dewbound_session::ItemId;
use dewbound_session::chart::Point;
use eframe::egui::{Context, Key, Response};
use std::collections::HashMap;

/// The part of a paper to look at.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Look<W> {
    /// This one.
    At(W),
    /// The fitting one.
    Fit,
}

impl<W> Look<W> {
    /// Keeps it for a sounding.
    pub fn keep(self, windows: &mut HashMap<ItemId, W>, item: ItemId) {
        match self {
            Self::At(window) => windows.insert(item, window),
            Self::Fit => windows.remove(&item),
        };
    }
}

/// What a key does to a paper, given how it is moved by points of the screen and enlarged by a factor.
pub(crate) fn look<W>(
    press: Press,
    panned: impl FnOnce(f64, f64) -> W,
    zoomed: impl FnOnce(f64) -> W,
) -> Option<Look<W>> {
    if press.modifiers.command || press.modifiers.alt {
        return None;
    }
    Some(Look::At(match press.key {
        Key::ArrowLeft => panned(30.0, 0.0),
        Key::ArrowRight => panned(-30.0, 0.0),
        Key::ArrowUp => panned(0.0, 30.0),
        Key::ArrowDown => panned(0.0, -30.0),
        Key::Plus | Key::Equals => zoomed(1.2),
        Key::Minus => zoomed(1.0 / 1.2),
        Key::Num0 => return Some(Look::Fit),
        _ => return None,
    }))
}

/// What wheel and pinch over a paper ask for: about which point to enlarge it, and by what factor.
pub(crate) fn enlarged(ctx: &Context, paper: &Response) -> Option<(Point, f64)> {
    if !paper.contains_pointer() {
        return None;
    }
    let position = paper.hover_pos()?;
    let (scrolled, pinched) =
        ctx.input(|input| (input.smooth_scroll_delta().y, input.zoom_delta()));
    let factor = f64::from(pinched) * (f64::from(scrolled) / 300.0).exp();
    ((factor - 1.0).abs() > 1e-6).then(|| (to_point(position), factor))
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::Modifiers;

    #[test]
    fn keys_of_a_paper() {
        let check = |key, modifiers, expect| {
            let press = Press {
                key,
                modifiers,
                repeat: false,
            };
            let found = look(press, |x, y| (x, y, 1.0), |factor| (0.0, 0.0, factor));
            assert_eq!(found, expect, "{key:?}");
        };
        let none = Modifiers::NONE;
        // The arrow says where to look, so the paper goes the other way.
        check(Key::ArrowRight, none, Some(Look::At((-30.0, 0.0, 1.0))));
        check(Key::ArrowUp, none, Some(Look::At((0.0, 30.0, 1.0))));
        check(Key::Equals, none, Some(Look::At((0.0, 0.0, 1.2))));
        check(Key::Minus, none, Some(Look::At((0.0, 0.0, 1.0 / 1.2))));
        check(Key::Num0, none, Some(Look::Fit));
        check(Key::Num0, Modifiers::COMMAND, None);
        check(Key::ArrowUp, Modifiers::ALT, None);
        check(Key::Home, none, None);
    }
}
