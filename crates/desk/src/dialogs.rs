//! Boxes over the window. Esc closes each; none of them stops a frame.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::keys::{CHART_KEYS, HANDLE_KEYS, WINDS_KEYS};
use crate::marks::{mark_space, weight_mark};
use crate::menu::dismiss_ui;
use crate::theme::bold;
use crate::units;
use crate::view::DialogBox;
use dewbound_session::sounding::Position;
use dewbound_session::{ACTIONS, Command, wording};
use eframe::egui::{
    Align2, Context, FontId, Grid, Id, Key, Modal, RichText, ScrollArea, Stroke, StrokeKind,
    TextEdit, Ui, vec2,
};

/// The open box, if any.
pub(crate) fn dialog_ui(ctx: &Context, paint: &Paint, asks: &mut Asks) {
    let Some(dialog) = &paint.view.dialog else {
        return;
    };
    let modal = Modal::new(Id::unique("box")).show(ctx, |ui| {
        ui.set_max_width(560.0);
        match dialog {
            DialogBox::Keys => keys_ui(ui, asks),
            DialogBox::About => about_ui(ui, asks),
            DialogBox::Initials(text) => initials_ui(ui, text, asks),
            DialogBox::Paths(text) => paths_ui(ui, text, asks),
            DialogBox::Position(latitude, longitude) => {
                position_ui(ui, latitude, longitude, asks);
            }
            DialogBox::Messages => messages_ui(ui, paint, asks),
        }
    });
    if modal.should_close() {
        asks.push(Ask::Dialog(None));
    }
}

fn close_ui(ui: &mut Ui, asks: &mut Asks) {
    if ui.button("Close").clicked() {
        asks.push(Ask::Dialog(None));
    }
}

fn keys_ui(ui: &mut Ui, asks: &mut Asks) {
    ui.label(bold("Keys").size(16.0));
    ScrollArea::vertical().max_height(380.0).show(ui, |ui| {
        let group = |ui: &mut Ui, title: &str, rows: Vec<(String, String)>| {
            ui.add_space(4.0);
            ui.label(bold(title));
            Grid::new(title)
                .num_columns(2)
                .min_col_width(130.0)
                .min_row_height(16.0)
                .spacing(vec2(12.0, 2.0))
                .show(ui, |ui| {
                    for (keys, what) in rows {
                        ui.label(keys);
                        ui.label(what);
                        ui.end_row();
                    }
                });
        };
        let owned = |rows: &[(&str, &str)]| {
            rows.iter()
                .map(|&(keys, what)| (keys.to_owned(), what.to_owned()))
                .collect()
        };
        group(
            ui,
            "On a surface handle or the response",
            owned(HANDLE_KEYS),
        );
        group(ui, "On the chart", owned(CHART_KEYS));
        group(ui, "On the page of the winds", owned(WINDS_KEYS));
        group(
            ui,
            "Anywhere",
            ACTIONS
                .iter()
                .filter_map(|declaration| {
                    Some((declaration.shortcut?.text(), declaration.tooltip.to_owned()))
                })
                .collect(),
        );
    });
    close_ui(ui, asks);
}

fn about_ui(ui: &mut Ui, asks: &mut Asks) {
    ui.label(bold("Dewbound").size(16.0));
    ui.label(
        "Which parts of a sounding can be believed, and how far the answer moves if they can't.",
    );
    ui.add_space(6.0);
    ui.label(bold(wording::CAUTION));
    ui.label(
        "Nothing here issues or replaces a warning. Every number depends on the sounding, on the conventions stated \
         with it, and on what the forecaster has changed. Ranges cover the stated interval of surface moisture only, \
         not every error a sounding can have.",
    );
    ui.add_space(6.0);
    ui.label(
        RichText::new(format!(
            "Version {} · MIT or Apache 2.0 · typeface B612, SIL Open Font License 1.1",
            env!("CARGO_PKG_VERSION")
        ))
        .small(),
    );
    close_ui(ui, asks);
}

/// A text field that has the keyboard from the start; true when Enter was pressed in it.
fn field_ui(ui: &mut Ui, id: &str, label: &str, text: &mut String, first: bool) -> bool {
    let name = ui.label(label);
    let id = Id::unique(("field", id));
    let response = ui
        .add(TextEdit::singleline(text).id(id).desired_width(220.0))
        .labelled_by(name.id);
    if first && ui.memory(|memory| memory.focused().is_none()) && !response.lost_focus() {
        response.request_focus();
    }
    response.lost_focus() && ui.input(|input| input.key_pressed(Key::Enter))
}

fn initials_ui(ui: &mut Ui, text: &str, asks: &mut Asks) {
    ui.label(bold("Who decides?").size(16.0));
    ui.label("Initials are kept with every verdict and remembered for the next one.");
    let mut typed = text.to_owned();
    let entered = field_ui(ui, "initials", "Initials", &mut typed, true);
    let usable = !typed.trim().is_empty();
    ui.horizontal(|ui| {
        let go = ui.add_enabled(usable, eframe::egui::Button::new("Sign and decide"));
        if usable && (go.clicked() || entered) {
            asks.push(Ask::SignAndDecide(typed.trim().to_owned()));
        } else if typed != text {
            asks.push(Ask::Dialog(Some(DialogBox::Initials(typed.clone()))));
        }
        if ui.button("Cancel").clicked() {
            asks.push(Ask::Dialog(None));
        }
    });
}

fn paths_ui(ui: &mut Ui, text: &str, asks: &mut Asks) {
    ui.label(bold("Open soundings").size(16.0));
    ui.label("This system shows no file dialog. Type files or folders, one a line, or drop them on the window.");
    let mut typed = text.to_owned();
    let name = ui.label("Files and folders");
    let response = ui
        .add(
            TextEdit::multiline(&mut typed)
                .id(Id::unique(("field", "paths")))
                .desired_rows(4)
                .desired_width(520.0),
        )
        .labelled_by(name.id);
    if ui.memory(|memory| memory.focused().is_none()) {
        response.request_focus();
    }
    ui.horizontal(|ui| {
        let usable = !typed.trim().is_empty();
        if ui
            .add_enabled(usable, eframe::egui::Button::new("Open"))
            .clicked()
        {
            asks.push(Ask::OpenTyped(typed.clone()));
        } else if typed != text {
            asks.push(Ask::Dialog(Some(DialogBox::Paths(typed.clone()))));
        }
        if ui.button("Cancel").clicked() {
            asks.push(Ask::Dialog(None));
        }
    });
}

/// Latitude and longitude as typed, when they are a place on the globe.
pub(crate) fn position(latitude: &str, longitude: &str) -> Option<Position> {
    let latitude = units::typed(latitude).filter(|value| value.abs() <= 90.0)?;
    let longitude = units::typed(longitude).filter(|value| value.abs() <= 180.0)?;
    Some(Position {
        latitude,
        longitude,
    })
}

fn position_ui(ui: &mut Ui, latitude: &str, longitude: &str, asks: &mut Asks) {
    ui.label(bold("Where is the station?").size(16.0));
    ui.label(
        "North and east count positive, degrees and decimals. It is remembered for this station.",
    );
    let (mut north, mut east) = (latitude.to_owned(), longitude.to_owned());
    field_ui(ui, "latitude", "Latitude, −90 to 90", &mut north, true);
    field_ui(ui, "longitude", "Longitude, −180 to 180", &mut east, false);
    let place = position(&north, &east);
    ui.horizontal(|ui| {
        let set = ui.add_enabled(place.is_some(), eframe::egui::Button::new("Remember"));
        match place {
            Some(place) if set.clicked() => {
                asks.command(Command::SetPosition(place));
                asks.push(Ask::Dialog(None));
            }
            _ if north != latitude || east != longitude => {
                asks.push(Ask::Dialog(Some(DialogBox::Position(
                    north.clone(),
                    east.clone(),
                ))));
            }
            _ => {}
        }
        if ui.button("Cancel").clicked() {
            asks.push(Ask::Dialog(None));
        }
    });
}

fn messages_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.label(bold("Messages").size(16.0));
    ScrollArea::vertical().max_height(380.0).show(ui, |ui| {
        for message in paint.session.messages().iter().rev() {
            ui.horizontal_top(|ui| {
                let space = mark_space(ui);
                weight_mark(ui.painter(), paint.theme, space, message.weight);
                dismiss_ui(ui, message.id, &message.line(), asks);
                ui.add(eframe::egui::Label::new(message.line()).wrap());
            });
        }
    });
    ui.horizontal(|ui| {
        if ui.button("Dismiss all").clicked() {
            for message in paint.session.messages() {
                asks.command(Command::Dismiss(message.id));
            }
            asks.push(Ask::Dialog(None));
        }
        close_ui(ui, asks);
    });
}

/// What happens when the files held over the window are let go.
pub(crate) fn drop_ui(ui: &Ui, paint: &Paint) {
    let held = ui.input(|input| input.raw.hovered_files.len());
    if held == 0 {
        return;
    }
    let theme = paint.theme;
    let rect = paint.layout.chart.shrink(20.0);
    let painter = ui.painter();
    painter.rect(
        rect,
        6.0,
        theme.card.gamma_multiply(0.92),
        Stroke::new(3.0, theme.accent),
        StrokeKind::Inside,
    );
    painter.text(
        rect.center(),
        Align2::CENTER_CENTER,
        if held == 1 {
            "Let go to open it".to_owned()
        } else {
            format!("Let go to open these {held}")
        },
        FontId::new(18.0, crate::fonts::bold()),
        theme.ink,
    );
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn places_on_the_globe() {
        assert_eq!(
            position("48,2", "\u{2212}16.4"),
            Some(Position {
                latitude: 48.2,
                longitude: -16.4
            })
        );
        assert_eq!(position("91", "0"), None);
        assert_eq!(position("", "0"), None);
    }
}
