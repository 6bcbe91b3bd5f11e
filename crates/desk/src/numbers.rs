//! The table of numbers: one quantity a row, parcels side by side.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::quantity::{Cell, QUANTITIES, Quantity, cell, parcel_heading, parcel_name, range_text};
use crate::theme::bold;
use crate::units;
use dewbound_session::chart::Units;
use dewbound_session::sounding::Parcel;
use dewbound_session::thermo::Pressure;
use dewbound_session::{Action, Command, Extremes, Item, wording};
use eframe::egui::{
    Align, Button, Label, Layout, Rect, Response, RichText, ScrollArea, Sense, Tooltip, Ui,
    UiBuilder, pos2, vec2,
};
use std::fmt::Write as _;

/// Width of the names and units.
const NAMES: f32 = 80.0;
const ROW: f32 = 19.0;
const SMALL_ROW: f32 = 15.0;

/// The whole table.
pub(crate) fn numbers_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    inset(ui, |ui| {
        heading_ui(ui, paint, asks);
        table_ui(ui, paint, asks);
    });
}

/// What stays in sight in a narrow window: CAPE with its range.
pub(crate) fn cape_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let Some(item) = paint.item() else { return };
    inset(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 1.0;
        parcels_ui(ui, paint, item, asks);
        if let Some(cape) = QUANTITIES.first() {
            row_ui(ui, paint, item, cape, asks);
        }
    });
}

/// The table below the tabs of a narrow window.
pub(crate) fn table_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let Some(item) = paint.item() else {
        ui.label("No sounding chosen.");
        return;
    };
    parcels_ui(ui, paint, item, asks);
    ui.separator();
    ScrollArea::vertical()
        .id_salt("numbers")
        .auto_shrink(false)
        .show(ui, |ui| {
            for quantity in QUANTITIES {
                row_ui(ui, paint, item, quantity, asks);
            }
            picked_ui(ui, item, asks);
            humidity_ui(ui, item);
        });
}

fn inset(ui: &mut Ui, content: impl FnOnce(&mut Ui)) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 4.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), content);
}

fn heading_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.horizontal(|ui| {
        ui.label(bold("Numbers").size(14.0));
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            crate::menu::small_action_button(ui, paint, Action::CopyNumbers, asks);
        });
    });
}

/// Splits a row: names, then a column for each parcel.
fn columns(row: Rect) -> (Rect, [Rect; 3]) {
    let names = Rect::from_min_size(row.min, vec2(NAMES.min(row.width()), row.height()));
    let width = ((row.width() - NAMES) / 3.0).max(0.0);
    let column = |index: f32| {
        Rect::from_min_size(
            pos2(names.right() + index * width, row.top()),
            vec2(width - 2.0, row.height()),
        )
    };
    (names, [column(0.0), column(1.0), column(2.0)])
}

fn in_rect<R>(ui: &mut Ui, rect: Rect, content: impl FnOnce(&mut Ui) -> R) -> R {
    let mut child = ui.new_child(
        UiBuilder::new()
            .max_rect(rect)
            .layout(Layout::top_down(Align::Min)),
    );
    child.set_clip_rect(rect.intersect(ui.clip_rect()));
    child.spacing_mut().item_spacing.y = 0.0;
    content(&mut child)
}

/// Headings: whose path the chart draws can be chosen here.
fn parcels_ui(ui: &mut Ui, paint: &Paint, item: &Item, asks: &mut Asks) {
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), 24.0), Sense::hover());
    let (names, cells) = columns(row);
    in_rect(ui, names, |ui| {
        ui.add_space(5.0);
        ui.label(RichText::new("on chart:").small().weak());
    });
    ui.spacing_mut().button_padding = vec2(3.0, 2.0);
    ui.spacing_mut().interact_size.y = 20.0;
    for (parcel, rect) in Parcel::ALL.into_iter().zip(cells) {
        let chosen = paint.view.parcel(item) == parcel;
        let response = ui.place(
            rect.shrink2(vec2(0.0, 1.0)),
            Button::new(RichText::new(parcel_heading(parcel)).size(11.5))
                .selected(chosen)
                .truncate(),
        );
        asks.describe(&response, || {
            format!("{}: Enter draws its path on the chart", parcel_name(parcel))
        });
        if response
            .on_hover_text(format!(
                "Draw the {} on the chart. {}",
                parcel_name(parcel),
                start_text(item, parcel, paint.view.units)
            ))
            .clicked()
        {
            asks.push(Ask::Parcel(parcel));
        }
    }
}

fn start_text(item: &Item, parcel: Parcel, units: Units) -> String {
    let numbers = &item.results().numbers;
    let Some(ascent) = numbers.parcel(parcel) else {
        return "There is no such parcel in this profile.".to_owned();
    };
    let same = if parcel == Parcel::MostUnstable && numbers.most_unstable_is_surface {
        " It is the surface parcel."
    } else {
        ""
    };
    format!(
        "Starts at {} with {} and dew point {}.{same}",
        wording::pressure(ascent.start.pressure),
        units::temperature(ascent.start.temperature, units.temperature),
        units::temperature(ascent.start.dewpoint, units.temperature),
    )
}

fn row_ui(ui: &mut Ui, paint: &Paint, item: &Item, quantity: &Quantity, asks: &mut Asks) {
    let units = paint.view.units;
    let ranges = quantity.range;
    let high = if ranges.is_some() {
        ROW + 2.0 * SMALL_ROW
    } else {
        ROW
    };
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), high), Sense::hover());
    let (names, cells) = columns(row);
    in_rect(ui, names, |ui| {
        let unit = (quantity.unit)(units);
        let response = ui
            .horizontal(|ui| {
                ui.spacing_mut().item_spacing.x = 4.0;
                let name = ui.add(
                    Label::new(bold(quantity.name))
                        .sense(Sense::focusable_noninteractive())
                        .selectable(false),
                );
                ui.label(RichText::new(unit).small().weak());
                name
            })
            .inner;
        asks.describe(&response, || {
            format!("{}: {}", quantity.name, quantity.definition)
        });
        explain(&response, |ui| definition_ui(ui, quantity));
    });
    for (parcel, rect) in Parcel::ALL.into_iter().zip(cells) {
        in_rect(ui, rect, |ui| {
            cell_ui(ui, paint, item, quantity, parcel);
        });
    }
}

fn cell_ui(ui: &mut Ui, paint: &Paint, item: &Item, quantity: &Quantity, parcel: Parcel) {
    let units = paint.view.units;
    let working = cell(quantity, &item.results().numbers, parcel, units);
    let received = cell(quantity, item.received_numbers(), parcel, units);
    let preview = paint
        .view
        .previewed
        .as_ref()
        .filter(|previewed| previewed.item == item.id())
        .and_then(|previewed| previewed.preview.as_ref())
        .map(|preview| cell(quantity, &preview.numbers, parcel, units))
        .filter(|preview| *preview != working);
    let decisive = quantity.range.is_some();
    let was = (received != working).then(|| received.text().to_owned());
    let mut text = bold(working.text()).size(if decisive { 15.0 } else { 13.0 });
    if preview.is_some() {
        text = text.color(paint.theme.quiet);
    }
    let shown = match &preview {
        Some(preview) => {
            ui.horizontal(|ui| {
                ui.spacing_mut().item_spacing.x = 3.0;
                ui.label(text.size(12.0));
                ui.label(bold(format!("→ {}", preview.text())).color(paint.theme.accent))
            })
            .inner
        }
        None if decisive => ui.add(Label::new(text).truncate()),
        None => {
            ui.horizontal(|ui| {
                ui.spacing_mut().item_spacing.x = 5.0;
                let value = ui.label(text);
                if let Some(was) = &was {
                    remark_ui(ui, paint, &format!("was {was}"));
                } else if quantity.name == "Start p"
                    && parcel == Parcel::MostUnstable
                    && item.results().numbers.most_unstable_is_surface
                {
                    ui.label(RichText::new("= surface").small().weak());
                }
                value
            })
            .inner
        }
    };
    explain_hover(shown, quantity, &working, parcel);
    if decisive {
        let range = quantity
            .range
            .map(|range| range(item.results().doubt.range(parcel)));
        match &range {
            Some((Some(range), or_none)) => {
                let text = range_text(range, *or_none);
                let hover = format!("{text}\n{}", where_text(range, item, units));
                let text = RichText::new(range_text(range, false)).size(11.5);
                ui.add(Label::new(text).truncate()).on_hover_text(hover);
            }
            _ => {
                ui.label(RichText::new("no range").small().weak());
            }
        }
        let or_none = matches!(range, Some((Some(_), true)));
        let remarks: Vec<String> = [
            or_none.then(|| "or none".to_owned()),
            was.map(|was| format!("was {was}")),
        ]
        .into_iter()
        .flatten()
        .collect();
        if !remarks.is_empty() {
            remark_ui(ui, paint, &remarks.join(" · "));
        }
    }
}

/// What stands small beneath a range: that the number is absent somewhere in it, and the value received where the
/// working one differs.
fn remark_ui(ui: &mut Ui, paint: &Paint, remark: &str) {
    let text = RichText::new(remark).size(10.5).color(paint.theme.quiet);
    ui.add(Label::new(text).truncate())
        .on_hover_text("\"was\": as received; \"or none\": absent somewhere in the interval");
}

fn where_text(range: &Extremes, item: &Item, units: Units) -> String {
    let ends = item
        .results()
        .doubt
        .interval
        .as_ref()
        .map(|interval| {
            format!(
                "\nInterval {} to {}: {}",
                units::temperature(interval.low, units.temperature),
                units::temperature(interval.high, units.temperature),
                interval.why
            )
        })
        .unwrap_or_default();
    format!(
        "{} at a surface dew point of {}, {} at {}.{ends}",
        wording::number(range.least, 0),
        units::temperature(range.least_at, units.temperature),
        wording::number(range.most, 0),
        units::temperature(range.most_at, units.temperature),
    )
}

fn explain_hover(response: Response, quantity: &Quantity, value: &Cell, parcel: Parcel) {
    let reason = match value {
        Cell::Absent(why) => Some(why.clone()),
        Cell::Value(text) if text.starts_with('≥') => Some(
            "A lower limit: the parcel is still buoyant where the profile ends, or the profile ends below 200 hPa."
                .to_owned(),
        ),
        Cell::Value(_) => None,
    };
    response.ctx.accesskit_node_builder(response.id, |node| {
        node.set_description(format!("{} of the {}", quantity.name, parcel_name(parcel)));
    });
    response.on_hover_ui(|ui| {
        ui.label(bold(format!("{}, {}", quantity.name, parcel_name(parcel))));
        if let Some(reason) = &reason {
            ui.label(reason);
        }
        definition_ui(ui, quantity);
    });
}

fn definition_ui(ui: &mut Ui, quantity: &Quantity) {
    ui.label(quantity.definition);
    ui.label(RichText::new(format!("Method: {}", quantity.method)).weak());
    ui.label(RichText::new(format!("Source: {}", quantity.source)).weak());
}

/// A tooltip for the pointer and for the keyboard alike.
pub(crate) fn explain(response: &Response, content: impl FnOnce(&mut Ui)) {
    let mut tooltip = Tooltip::for_enabled(response);
    if response.has_focus() {
        tooltip.popup = tooltip.popup.open(true);
    }
    tooltip.show(content);
}

/// The parcel of the level picked on the chart.
fn picked_ui(ui: &mut Ui, item: &Item, asks: &mut Asks) {
    let Some(level) = item.document().picked_level() else {
        return;
    };
    ui.separator();
    ui.horizontal_wrapped(|ui| {
        let text = item.results().picked.as_ref().map_or_else(
            || "no parcel can be formed there".to_owned(),
            |ascent| {
                let cin = ascent.cin.map_or_else(
                    || "no free convection".to_owned(),
                    |cin| format!("CIN {}", wording::energy(Some(cin), false)),
                );
                format!("CAPE {}, {cin}", wording::cape(Some(ascent)))
            },
        );
        ui.label(format!("Parcel from {}: {text}", wording::pressure(level)));
        let response = ui.small_button("Let it go");
        asks.describe(&response, || {
            "Let it go: no parcel is lifted from the picked level any more".to_owned()
        });
        if response.clicked() {
            asks.command(Command::PickLevel(None));
        }
    });
}

fn humidity_ui(ui: &mut Ui, item: &Item) {
    let numbers = &item.results().numbers;
    let mut lines = Vec::new();
    if let Some(known) = &numbers.humidity {
        if known.interpolated > 0 {
            lines.push(format!(
                "Dew point interpolated at {} levels.",
                known.interpolated
            ));
        }
        if let Some(above) = known.dry_above {
            lines.push(format!(
                "{} levels above {} have no dew point and count as dry.",
                known.dry,
                wording::pressure(above)
            ));
        }
    }
    if let Some(held) = numbers.cape_humidity_held {
        let all: Vec<String> = held
            .iter()
            .map(|cape| wording::energy(*cape, false))
            .collect();
        lines.push(format!(
            "CAPE with relative humidity held there: {}.",
            all.join(", ")
        ));
    }
    if let Some(from) = numbers.starts_at {
        lines.push(format!(
            "The surface is unusable; the other parcels start at {}.",
            wording::pressure(from)
        ));
    }
    for line in lines {
        ui.label(RichText::new(line).small());
    }
}

/// The table as text for the clipboard.
pub(crate) fn as_text(item: &Item, units: Units) -> String {
    let mut text = format!("{}\n", item.sounding().station.label());
    if item.demo() {
        text.push_str(wording::INVENTED);
        text.push('\n');
    }
    text.push_str("Quantity\tUnit");
    for parcel in Parcel::ALL {
        let _ = write!(text, "\t{}", parcel_heading(parcel));
        let _ = write!(text, "\treceived\trange");
    }
    text.push('\n');
    for quantity in QUANTITIES {
        let _ = write!(text, "{}\t{}", quantity.name, (quantity.unit)(units));
        for parcel in Parcel::ALL {
            let working = cell(quantity, &item.results().numbers, parcel, units);
            let received = cell(quantity, item.received_numbers(), parcel, units);
            let range = quantity
                .range
                .map(|range| range(item.results().doubt.range(parcel)));
            let range = match range {
                Some((Some(range), or_none)) => range_text(&range, or_none),
                _ => "–".to_owned(),
            };
            let _ = write!(text, "\t{}\t{}\t{range}", working.text(), received.text());
        }
        text.push('\n');
    }
    text.push_str(wording::CAUTION);
    text.push('\n');
    text
}

/// Layer in words: "652 to 601 hPa".
pub(crate) fn layer(bottom: Option<Pressure>, top: Option<Pressure>) -> String {
    match (bottom, top) {
        (Some(bottom), Some(top)) if (bottom.pa() - top.pa()).abs() < 1.0 => {
            wording::pressure(bottom)
        }
        (Some(bottom), Some(top)) => format!(
            "{} to {}",
            wording::number(bottom.hpa(), 0),
            wording::pressure(top)
        ),
        (Some(one), None) | (None, Some(one)) => wording::pressure(one),
        (None, None) => "whole ascent".to_owned(),
    }
}
