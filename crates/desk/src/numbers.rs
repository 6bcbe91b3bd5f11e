//! The panel of numbers: five at a glance, parcels side by side, then groups that open on demand.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::number_rows::{Weight, columns, in_rect, into_sight, profile_row_ui, row_ui};
use crate::quantity::{STALE, Sight, in_group, parcel_heading, parcel_name};
use crate::theme::bold;
use crate::units;
use dewbound_session::chart::Units;
use dewbound_session::quantity::{Group, Quantity, at_a_glance};
use dewbound_session::sounding::Parcel;
use dewbound_session::thermo::Pressure;
use dewbound_session::{Action, Command, Item, wording};
use eframe::egui::{
    Align, Button, CollapsingHeader, Id, Layout, RichText, ScrollArea, Sense, Ui, UiBuilder, vec2,
};

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
        let sight = Sight::painted(paint, item);
        if let Some(cape) = at_a_glance().next() {
            row_ui(ui, paint, item, &sight, cape, Weight::Chief, asks);
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
            // Six headings find room below the five numbers on a screen 800 high.
            ui.spacing_mut().item_spacing.y = 1.0;
            ui.spacing_mut().interact_size.y = 18.0;
            // Headings can be hit over their whole width.
            ui.visuals_mut().collapsing_header_frame = true;
            let sight = Sight::painted(paint, item);
            let glance: Vec<&Quantity> = at_a_glance().collect();
            rows_ui(ui, paint, item, &sight, &glance, Weight::Chief, asks);
            for group in Group::ALL {
                group_ui(ui, paint, item, &sight, group, asks);
            }
            picked_ui(ui, item, asks);
            humidity_ui(ui, item);
        });
}

/// Those of each parcel, then those of the whole profile.
fn rows_ui(
    ui: &mut Ui,
    paint: &Paint,
    item: &Item,
    sight: &Sight,
    quantities: &[&Quantity],
    weight: Weight,
    asks: &mut Asks,
) {
    let mut of_parcels = false;
    for quantity in quantities {
        if quantity.is_per_parcel() {
            row_ui(ui, paint, item, sight, quantity, weight, asks);
            of_parcels = true;
        } else {
            if std::mem::take(&mut of_parcels) {
                ui.label(RichText::new("of the whole profile").size(10.0).weak());
            }
            profile_row_ui(ui, paint, sight, quantity, weight, asks);
        }
    }
}

/// A group: closed, its name; open, its rows.
fn group_ui(ui: &mut Ui, paint: &Paint, item: &Item, sight: &Sight, group: Group, asks: &mut Asks) {
    let open = paint.view.open_groups.contains(&group);
    let other = group == Group::OtherAscents;
    let mark = if other && open && sight.stale {
        format!(" ({STALE})")
    } else {
        String::new()
    };
    let header = CollapsingHeader::new(bold(format!("{}{mark}", group.title())).size(12.5))
        .id_salt(("numbers of", group))
        .open(Some(open))
        .show_unindented(ui, |ui| {
            let quantities: Vec<&Quantity> = in_group(group).collect();
            rows_ui(ui, paint, item, sight, &quantities, Weight::Further, asks);
        })
        .header_response;
    into_sight(&header);
    asks.describe(&header, || {
        let what = if open { "closes" } else { "opens" };
        format!("{}: Enter {what} the group", group.title())
    });
    // What has been opened comes into sight, once it is there.
    let opened = Id::unique("group of numbers just opened");
    if header.clicked() {
        asks.push(Ask::Group(group));
        if !open {
            ui.data_mut(|data| data.insert_temp(opened, group));
        }
    } else if open && ui.data(|data| data.get_temp(opened)) == Some(group) {
        ui.data_mut(|data| data.remove::<Group>(opened));
        header.scroll_to_me(Some(Align::Min));
    }
    // Asked for at rest only: they take several times the work of all the rest.
    if other && open && !item.in_gesture() && item.other_ascents().is_wanting() {
        asks.command(Command::CompareAscents);
    }
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
            Button::new(RichText::new(parcel_heading(parcel)).size(11.0))
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
