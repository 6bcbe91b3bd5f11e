//! The short list of wind numbers beside the hodograph.

use crate::app::Paint;
use crate::ask::Asks;
use crate::fonts;
use crate::menu::{asked, small_action_button};
use crate::number_rows::definition_ui;
use crate::theme::bold;
use dewbound_session::{Action, Item, WindLine, wind_lines};
use eframe::egui::{
    Align, Button, Color32, FontId, Label, Layout, Rect, RichText, ScrollArea, Sense, Ui,
    UiBuilder, pos2, vec2,
};

const ROW: f32 = 17.0;
/// A list at least this wide has room for the buttons that choose how high the winds are drawn.
const FOR_TOPS: f32 = 420.0;
/// Width of the names, and of the values.
const NAMES: f32 = 152.0;
const VALUES: f32 = 92.0;
/// The values in a list too narrow for notes behind that width.
const CLOSE: f32 = 72.0;
/// Size of values.
const VALUE: f32 = 12.5;
/// Size of notes and reasons.
const QUIET: f32 = 11.5;

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
    let why = reason(ui, line, row.right() - names);
    let note = note_from(ui, line, names, row.right());
    let values = note.unwrap_or(row.right());
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
    let quiet = |text: &str| RichText::new(text).size(QUIET).color(paint.theme.quiet);
    let Some(value) = &line.value else {
        text(part(names, row.right()), quiet(&why));
        return;
    };
    text(part(names, values - 4.0), bold(value.as_str()).size(VALUE));
    if let Some(from) = note {
        text(part(from, row.right()), quiet(&line.note));
    }
}

/// Where the note begins: in its column, in a narrow list close behind the value; `None` where it doesn't fit in whole
/// and is left to the hover text.
fn note_from(ui: &Ui, line: &WindLine, names: f32, right: f32) -> Option<f32> {
    let value = line.value.as_deref()?;
    let close = text_width(ui, value, FontId::new(VALUE, fonts::bold())) + 8.0;
    let note = text_width(ui, &line.note, FontId::proportional(QUIET));
    [VALUES, close.max(CLOSE)]
        .into_iter()
        .map(|column| names + column)
        .find(|from| !line.note.is_empty() && from + note <= right)
}

/// A dash and why there is no value; where that doesn't fit, only what stands before the colon: the hover text says all.
fn reason(ui: &Ui, line: &WindLine, width: f32) -> String {
    let dashed = |why: &str| format!("– {why}");
    let all = dashed(&line.note);
    match line.note.split_once(": ") {
        Some((short, _)) if text_width(ui, &all, FontId::proportional(QUIET)) > width => {
            dashed(short)
        }
        _ => all,
    }
}

fn text_width(ui: &Ui, text: &str, font: FontId) -> f32 {
    let laid_out = ui
        .painter()
        .layout_no_wrap(text.to_owned(), font, Color32::PLACEHOLDER);
    laid_out.size().x
}
