//! The short list of wind numbers beside the hodograph.

use crate::app::Paint;
use crate::ask::Asks;
use crate::menu::small_action_button;
use crate::theme::bold;
use dewbound_session::{Action, Item, WindLine, wind_lines};
use eframe::egui::{
    Align, Label, Layout, Rect, RichText, ScrollArea, Sense, Ui, UiBuilder, pos2, vec2,
};

const ROW: f32 = 17.0;
/// Width of the names, and of the values.
const NAMES: f32 = 138.0;
const VALUES: f32 = 92.0;

/// The list in its rectangle.
pub(crate) fn list_ui(ui: &mut Ui, paint: &Paint, item: &Item, rect: Rect, asks: &mut Asks) {
    let builder = UiBuilder::new()
        .id_salt("wind numbers")
        .max_rect(rect.shrink2(vec2(8.0, 3.0)));
    ui.scope_builder(builder, |ui| {
        ui.spacing_mut().item_spacing.y = 0.0;
        ui.horizontal(|ui| {
            ui.set_height(22.0);
            ui.label(bold("Wind").size(14.0));
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                small_action_button(ui, paint, Action::CopyWinds, asks);
                small_action_button(ui, paint, Action::ResetMotion, asks);
            });
        });
        ScrollArea::vertical()
            .id_salt("wind lines")
            .auto_shrink(false)
            .show(ui, |ui| {
                for line in wind_lines(item, paint.view.units.speed) {
                    line_ui(ui, paint, &line);
                }
            });
    });
}

fn line_ui(ui: &mut Ui, paint: &Paint, line: &WindLine) {
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
    let about = format!("{}\n{}", line.text(), line.about);
    // In a narrow list names and values shrink alike.
    let squeeze = (row.width() / 330.0).min(1.0);
    let names = row.left() + NAMES * squeeze;
    let values = names + VALUES * squeeze;
    let part =
        |from: f32, to: f32| Rect::from_min_max(pos2(from, row.top()), pos2(to, row.bottom()));
    let mut text = |rect: Rect, text: RichText| {
        let mut child = ui.new_child(
            UiBuilder::new()
                .max_rect(rect)
                .layout(Layout::left_to_right(Align::Center)),
        );
        child.set_clip_rect(rect.intersect(ui.clip_rect()));
        child
            .add(Label::new(text).truncate())
            .on_hover_text(about.as_str());
    };
    text(
        part(row.left(), names - 4.0),
        RichText::new(line.name).size(12.0),
    );
    let value = match &line.value {
        Some(value) => bold(value.as_str()).size(12.5),
        None => RichText::new("none").size(12.0).color(paint.theme.quiet),
    };
    text(part(names, values - 4.0), value);
    text(
        part(values, row.right()),
        RichText::new(line.note.as_str())
            .size(11.5)
            .color(paint.theme.quiet),
    );
}
