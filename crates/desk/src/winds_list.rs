//! The short list of wind numbers beside the hodograph.

use crate::app::Paint;
use crate::ask::Asks;
use crate::menu::{asked, small_action_button};
use crate::number_rows::definition_ui;
use crate::theme::bold;
use dewbound_session::{Action, Item, WindLine, wind_lines};
use eframe::egui::{
    Align, Button, Label, Layout, Rect, RichText, ScrollArea, Sense, Ui, UiBuilder, pos2, vec2,
};

const ROW: f32 = 17.0;
/// A list at least this wide has room for the buttons that choose how high the winds are drawn.
const FOR_TOPS: f32 = 420.0;
/// Width of the names, and of the values.
const NAMES: f32 = 130.0;
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
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                small_action_button(ui, paint, Action::CopyWinds, asks);
                if item.document().storm_motion().is_some() {
                    small_action_button(ui, paint, Action::ResetMotion, asks);
                }
                ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                    ui.add(Label::new(bold("Wind").size(14.0)).truncate());
                    if rect.width() >= FOR_TOPS {
                        tops_ui(ui, paint, asks);
                    }
                });
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

/// How high the winds are drawn; in a narrow list the View menu alone has it.
fn tops_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.spacing_mut().item_spacing.x = 2.0;
    for (action, text, top) in [
        (Action::WindsToThree, "3 km", 3_000.0),
        (Action::WindsToSix, "6 km", 6_000.0),
        (Action::WindsToTwelve, "12 km", 12_000.0),
    ] {
        let chosen = paint.view.winds_top == top;
        let response = ui.add(Button::new(text).small().selected(chosen));
        asked(response, paint, action, asks);
    }
}

fn line_ui(ui: &mut Ui, paint: &Paint, line: &WindLine) {
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
    let names = row.left() + NAMES;
    let values = names + VALUES;
    let part =
        |from: f32, to: f32| Rect::from_min_max(pos2(from, row.top()), pos2(to, row.bottom()));
    let mut text = |rect: Rect, text: RichText| {
        let mut child = ui.new_child(
            UiBuilder::new()
                .max_rect(rect)
                .layout(Layout::left_to_right(Align::Center)),
        );
        child.set_clip_rect(rect.intersect(ui.clip_rect()));
        child.add(Label::new(text).truncate()).on_hover_ui(|ui| {
            ui.label(bold(line.text()));
            definition_ui(ui, line.quantity);
        });
    };
    text(
        part(row.left(), names - 4.0),
        RichText::new(line.quantity.label).size(12.0),
    );
    let quiet = |text: &str| RichText::new(text).size(11.5).color(paint.theme.quiet);
    let Some(value) = &line.value else {
        let why = format!("none: {}", line.note);
        text(part(names, row.right()), quiet(&why));
        return;
    };
    text(part(names, values - 4.0), bold(value.as_str()).size(12.5));
    // Where only a few letters would fit, the note is left to the hover text.
    if row.right() - values > 50.0 {
        text(part(values, row.right()), quiet(&line.note));
    }
}
