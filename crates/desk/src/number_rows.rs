//! Rows of the table of numbers: name, unit, values, ranges, and what each of them is.

use crate::app::Paint;
use crate::ask::Asks;
use crate::quantity::{Cell, Sight, parcel_name, range_text};
use crate::theme::bold;
use crate::units;
use dewbound_session::chart::Units;
use dewbound_session::quantity::{Group, Quantity};
use dewbound_session::sounding::Parcel;
use dewbound_session::{Extremes, Item, wording};
use eframe::egui::{
    Align, Label, Layout, Rect, Response, RichText, Sense, Tooltip, Ui, UiBuilder, pos2, vec2,
};

/// Width of the names and units beside the parcels' columns.
pub(crate) const NAMES: f32 = 112.0;
/// The same where there is one column.
const PROFILE_NAMES: f32 = 200.0;
const ROW: f32 = 19.0;
const SMALL_ROW: f32 = 15.0;

/// How much a row is to catch the eye.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Weight {
    /// At a glance.
    Chief,
    /// On demand.
    Further,
}

impl Weight {
    fn name(self, name: &str) -> RichText {
        match self {
            Self::Chief => bold(name),
            Self::Further => RichText::new(name).size(11.5),
        }
    }

    fn value(self, text: &str, decisive: bool) -> RichText {
        bold(text).size(match (self, decisive) {
            (_, true) => 15.0,
            (Self::Chief, false) => 13.0,
            (Self::Further, false) => 12.0,
        })
    }
}

/// Splits a row: names, then a column for each parcel.
pub(crate) fn columns(row: Rect) -> (Rect, [Rect; 3]) {
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

pub(crate) fn in_rect<R>(ui: &mut Ui, rect: Rect, content: impl FnOnce(&mut Ui) -> R) -> R {
    let mut child = ui.new_child(
        UiBuilder::new()
            .max_rect(rect)
            .layout(Layout::top_down(Align::Min)),
    );
    child.set_clip_rect(rect.intersect(ui.clip_rect()));
    child.spacing_mut().item_spacing.y = 0.0;
    content(&mut child)
}

/// A number of each parcel.
pub(crate) fn row_ui(
    ui: &mut Ui,
    paint: &Paint,
    item: &Item,
    sight: &Sight,
    quantity: &Quantity,
    weight: Weight,
    asks: &mut Asks,
) {
    let high = if quantity.range.is_some() {
        ROW + 2.0 * SMALL_ROW
    } else {
        ROW
    };
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), high), Sense::hover());
    let (names, cells) = columns(row);
    in_rect(ui, names, |ui| name_ui(ui, paint, quantity, weight, asks));
    for (parcel, rect) in Parcel::ALL.into_iter().zip(cells) {
        in_rect(ui, rect, |ui| {
            cell_ui(ui, paint, sight, quantity, parcel, weight);
            if let Some(range) = quantity.range {
                range_ui(
                    ui,
                    paint,
                    item,
                    sight,
                    quantity,
                    range(item.results().doubt.range(parcel)),
                    parcel,
                );
            }
        });
    }
}

/// A number of the whole profile, and the terms of an index beneath it.
pub(crate) fn profile_row_ui(
    ui: &mut Ui,
    paint: &Paint,
    sight: &Sight,
    quantity: &Quantity,
    weight: Weight,
    asks: &mut Asks,
) {
    let (row, _) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
    let (names, rest) = row.split_left_right_at_x(row.left() + PROFILE_NAMES.min(row.width()));
    in_rect(ui, names, |ui| name_ui(ui, paint, quantity, weight, asks));
    let cell = in_rect(ui, rest, |ui| {
        cell_ui(ui, paint, sight, quantity, Parcel::Surface, weight)
    });
    if let Cell::Value { terms, .. } = cell {
        for term in terms {
            ui.add(Label::new(RichText::new(format!("    {term}")).size(11.5)).truncate());
        }
    }
}

fn name_ui(ui: &mut Ui, paint: &Paint, quantity: &Quantity, weight: Weight, asks: &mut Asks) {
    let unit = quantity.sign(paint.view.units);
    let response = ui
        .horizontal(|ui| {
            ui.spacing_mut().item_spacing.x = 4.0;
            let name = ui.add(
                Label::new(weight.name(quantity.label))
                    .sense(Sense::focusable_noninteractive())
                    .selectable(false),
            );
            ui.label(RichText::new(unit).size(10.5).weak());
            name
        })
        .inner;
    asks.describe(&response, || {
        format!("{}: {}", quantity.label, quantity.definition)
    });
    into_sight(&response);
    explain(&response, |ui| {
        ui.label(bold(quantity.label));
        definition_ui(ui, quantity);
    });
}

/// The working value, what the previewed repair would make of it, and the received one where it differs. Returns the working cell.
fn cell_ui(
    ui: &mut Ui,
    paint: &Paint,
    sight: &Sight,
    quantity: &Quantity,
    parcel: Parcel,
    weight: Weight,
) -> Cell {
    let units = paint.view.units;
    let working = Cell::of(quantity, &sight.working, parcel, units);
    let received = Cell::of(quantity, &sight.received, parcel, units);
    let preview = sight
        .previewed(quantity, parcel, units)
        .filter(|preview| !preview.looks_like(&working));
    let decisive = quantity.range.is_some();
    let stale = sight.stale && quantity.group == Group::OtherAscents;
    let mut text = weight.value(working.text(), decisive);
    if preview.is_some() || stale {
        text = text.color(paint.theme.quiet);
    }
    let shown = ui
        .horizontal(|ui| {
            ui.spacing_mut().item_spacing.x = 3.0;
            if let Some(preview) = &preview {
                ui.label(text.size(12.0));
                let preview = bold(format!("→ {}", preview.text())).color(paint.theme.accent);
                return ui.add(Label::new(preview).truncate());
            }
            if decisive {
                return ui.add(Label::new(text).truncate());
            }
            let value = ui.label(text);
            if !received.looks_like(&working) && !stale {
                remark_ui(ui, paint, &format!("was {}", received.text()));
            } else if quantity.key == "start_hpa"
                && parcel == Parcel::MostUnstable
                && sight.working.numbers.most_unstable_is_surface
            {
                ui.label(RichText::new("= surface").size(10.5).weak());
            } else if !quantity.is_per_parcel()
                && let Cell::Absent(why) = &working
            {
                // There is room to say it at once.
                remark_ui(ui, paint, why);
            }
            value
        })
        .inner;
    explain_hover(shown, quantity, &working, parcel);
    working
}

/// The range beneath a value, and what there is to remark.
fn range_ui(
    ui: &mut Ui,
    paint: &Paint,
    item: &Item,
    sight: &Sight,
    quantity: &Quantity,
    range: (Option<Extremes>, bool),
    parcel: Parcel,
) {
    let units = paint.view.units;
    let (range, or_none) = range;
    match &range {
        Some(range) => {
            let text = range_text(range, or_none);
            let hover = format!("{text}\n{}", where_text(range, item, units));
            let text = RichText::new(range_text(range, false)).size(11.0);
            ui.add(Label::new(text).truncate()).on_hover_text(hover);
        }
        None => {
            ui.label(RichText::new("no range").small().weak());
        }
    }
    let working = Cell::of(quantity, &sight.working, parcel, units);
    let received = Cell::of(quantity, &sight.received, parcel, units);
    let remarks: Vec<String> = [
        (or_none && range.is_some()).then(|| "or none".to_owned()),
        (!received.looks_like(&working)).then(|| format!("was {}", received.text())),
    ]
    .into_iter()
    .flatten()
    .collect();
    if !remarks.is_empty() {
        remark_ui(ui, paint, &remarks.join(" · "));
    }
}

/// What stands small beside or beneath a value: the value received where the working one differs, that the number is
/// absent somewhere in the interval, why there is none.
fn remark_ui(ui: &mut Ui, paint: &Paint, remark: &str) {
    let text = RichText::new(remark).size(10.0).color(paint.theme.quiet);
    let shown = ui.add(Label::new(text).truncate());
    shown.on_hover_ui(|ui| {
        ui.label(remark);
        if remark.contains("was ") || remark.contains("or none") {
            ui.label("\"was\": as received; \"or none\": absent somewhere in the interval");
        }
    });
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
    let of = if quantity.is_per_parcel() {
        parcel_name(parcel)
    } else {
        "whole profile"
    };
    let reason = match value {
        Cell::Absent(why) => Some(why.as_str()),
        Cell::Value { at_least: true, .. } => Some(
            "A lower limit: the parcel is still buoyant where the profile ends, or the profile ends below 200 hPa.",
        ),
        Cell::Value { .. } => None,
    };
    response.ctx.accesskit_node_builder(response.id, |node| {
        node.set_description(format!("{} of the {of}", quantity.label));
    });
    response.on_hover_ui(|ui| {
        ui.label(bold(format!("{}, {of}", quantity.label)));
        if let Some(reason) = reason {
            ui.label(reason);
        }
        definition_ui(ui, quantity);
    });
}

/// Definition, method, source and the rest of a declaration, in a hover text.
pub(crate) fn definition_ui(ui: &mut Ui, quantity: &Quantity) {
    ui.label(quantity.definition);
    for (name, content) in quantity.particulars() {
        ui.label(RichText::new(format!("{}: {content}", capital(name))).weak());
    }
}

fn capital(word: &str) -> String {
    let mut chars = word.chars();
    chars.next().map_or_else(String::new, |first| {
        first.to_uppercase().chain(chars).collect()
    })
}

/// What gets the keyboard is scrolled into sight.
pub(crate) fn into_sight(response: &Response) {
    if response.gained_focus() {
        response.scroll_to_me(None);
    }
}

/// A tooltip for the pointer and for the keyboard alike.
pub(crate) fn explain(response: &Response, content: impl FnOnce(&mut Ui)) {
    let mut tooltip = Tooltip::for_enabled(response);
    if response.has_focus() {
        tooltip.popup = tooltip.popup.open(true);
    }
    tooltip.show(content);
}
