//! The status line: what has the keyboard, its value, unit and received value; and the caution, always.

use crate::app::Paint;
use crate::ask::Asks;
use crate::handle;
use crate::motion;
use crate::theme::bold;
use crate::view::Gesture;
use dewbound_session::SurfaceQuantity;
use eframe::egui::{
    Align, Align2, Area, Frame, Id, Label, Layout, Order, RichText, Ui, UiBuilder, vec2,
};

/// Where there is no room for the whole of it.
pub(crate) const CAUTION: &str = "Official warnings and local procedures rule";

/// The line.
pub(crate) fn status_ui(ui: &mut Ui, paint: &Paint, asks: &Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 2.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.label(bold(CAUTION).size(11.5));
            ui.separator();
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let text = said(paint, asks);
                ui.add(Label::new(RichText::new(text).size(11.5)).truncate());
            });
        });
    });
}

fn said(paint: &Paint, asks: &Asks) -> String {
    if matches!(paint.view.gesture, Some(Gesture::Motion { .. }))
        && let Some(item) = paint.item()
    {
        return format!("{} · Esc restores", motion::line(paint, item));
    }
    let dragged = match paint.view.gesture {
        Some(Gesture::Handle { quantity, .. }) => Some(quantity),
        Some(Gesture::Response { .. }) => Some(SurfaceQuantity::Dewpoint),
        _ => None,
    };
    if let Some(quantity) = dragged
        && let Some(item) = paint.item()
        && let Some(line) = handle::line(paint, item, quantity)
    {
        return format!("{line} · Esc restores");
    }
    asks.focused
        .clone()
        .unwrap_or_else(|| "Tab reaches everything; F1 lists the keys".to_owned())
}

/// Computing times, when asked for.
pub(crate) fn timing_ui(ui: &Ui, paint: &Paint) {
    if !paint.view.show_timing {
        return;
    }
    let mut line = paint.view.timing.line();
    if let Some(item) = paint.item() {
        line.push_str(&format!(
            " · session {:.2} ms, {} levels",
            item.results().computing.as_secs_f64() * 1e3,
            item.results().working.profile.len()
        ));
    }
    Area::new(Id::unique("computing time"))
        .order(Order::Foreground)
        .interactable(false)
        .pivot(Align2::RIGHT_TOP)
        .fixed_pos(paint.layout.bar.right_top() + vec2(-4.0, 3.0))
        .show(ui.ctx(), |ui| {
            Frame::new()
                .fill(paint.theme.panel)
                .stroke((1.0, paint.theme.line))
                .inner_margin(4.0)
                .show(ui, |ui| {
                    ui.set_max_width((paint.layout.bar.width() - 260.0).max(200.0));
                    ui.add(Label::new(RichText::new(line).size(10.5)).truncate());
                });
        });
}
