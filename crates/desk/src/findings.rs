//! Findings: cards, worst first, with what each repair costs; below them the amendments and the reader's notes.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::marks::{grade_mark, grade_word};
use crate::numbers::{self, layer};
use crate::quantity::parcel_heading;
use crate::theme::bold;
use crate::units;
use crate::view::Tab;
use dewbound_session::chart::Units;
use dewbound_session::sounding::{Amendment, BridgeHumidity, Parcel};
use dewbound_session::thermo::{Pressure, Temperature};
use dewbound_session::trust::{Change, Cost, Finding};
use dewbound_session::{Card, Command, Item, RepairId, wording};
use eframe::egui::{
    Align, Button, Frame, Grid, Label, Layout, Margin, Response, RichText, ScrollArea, Stroke, Ui,
    UiBuilder, WidgetInfo, vec2,
};

/// Findings in a panel of their own.
pub(crate) fn findings_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 4.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        ui.horizontal(|ui| {
            ui.label(bold("Findings").size(14.0));
            if let Some(item) = paint.item() {
                ui.label(RichText::new(count(item)).small().weak());
            }
        });
        cards_ui(ui, paint, asks);
    });
}

/// Findings or numbers, one at a time.
pub(crate) fn tabs_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 4.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        ui.horizontal(|ui| {
            let found = paint.item().map_or(0, |item| item.findings().len());
            for (tab, label) in [
                (Tab::Findings, format!("Findings ({found})")),
                (Tab::Numbers, "Numbers".to_owned()),
            ] {
                let response = ui.add(Button::new(label).selected(paint.view.tab == tab));
                asks.describe(&response, || "Enter shows this page".to_owned());
                if response.clicked() {
                    asks.push(Ask::Tab(tab));
                }
            }
        });
        ui.separator();
        match paint.view.tab {
            Tab::Findings => cards_ui(ui, paint, asks),
            Tab::Numbers => numbers::table_ui(ui, paint, asks),
        }
    });
}

fn count(item: &Item) -> String {
    match item.findings().len() {
        0 => "none".to_owned(),
        1 => "1, cost on the working profile".to_owned(),
        several => format!("{several}, worst cost first"),
    }
}

fn cards_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let Some(item) = paint.item() else {
        ui.label("No sounding chosen.");
        return;
    };
    ScrollArea::vertical()
        .id_salt(("findings", item.id()))
        .auto_shrink(false)
        .show(ui, |ui| {
            if item.findings().is_empty() {
                ui.label("No rule objects to this sounding.");
            }
            for &index in &item.results().order {
                if let (Some(finding), Some(card)) =
                    (item.findings().get(index), item.results().cards.get(index))
                {
                    card_ui(ui, paint, item, index, finding, card, asks);
                }
            }
            amendments_ui(ui, paint, item, asks);
            notes_ui(ui, item);
        });
}

fn card_ui(
    ui: &mut Ui,
    paint: &Paint,
    item: &Item,
    index: usize,
    finding: &Finding,
    card: &Card,
    asks: &mut Asks,
) {
    let theme = paint.theme;
    let open = paint.view.open_card(item.id()) == Some(index);
    let repaired = card.applied.is_some();
    let edge = if open {
        Stroke::new(1.5, theme.accent)
    } else {
        Stroke::new(1.0, theme.line)
    };
    Frame::new()
        .fill(theme.card)
        .stroke(edge)
        .corner_radius(3.0)
        .inner_margin(Margin::symmetric(7, 5))
        .show(ui, |ui| {
            ui.set_width(ui.available_width());
            let response = ui
                .horizontal(|ui| {
                    grade_mark(ui, theme, index + 1, finding.grade, repaired);
                    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                        ui.label(bold(headline(finding, card)).size(12.5));
                        ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                            ui.set_width(ui.available_width());
                            ui.add(
                                Button::new(bold(finding.title).size(13.0))
                                    .frame(false)
                                    .truncate(),
                            )
                        })
                        .inner
                    })
                    .inner
                })
                .inner;
            let label = format!("Finding {}: {}", index + 1, finding.title);
            response.widget_info(|| {
                WidgetInfo::selected(eframe::egui::Role::Button, true, open, &label)
            });
            if response.has_focus() {
                ui.painter().rect_stroke(
                    response.rect.expand(1.0),
                    2.0,
                    Stroke::new(2.0, theme.accent),
                    eframe::egui::StrokeKind::Outside,
                );
            }
            asks.describe(&response, || {
                format!(
                    "{label}, {}: Enter {} it",
                    headline(finding, card),
                    if open { "closes" } else { "opens" }
                )
            });
            if response.clicked() {
                // So that Tab goes on from here.
                response.request_focus();
                asks.push(Ask::Card(item.id(), (!open).then_some(index)));
            }
            ui.label(
                RichText::new(format!(
                    "{} · {}",
                    grade_word(finding.grade, repaired),
                    place(finding)
                ))
                .small()
                .weak(),
            );
            ui.label(&finding.summary);
            if open {
                opened_ui(ui, paint, finding, index, card, asks);
            }
        });
}

fn place(finding: &Finding) -> String {
    let heights = finding
        .heights
        .map(|(bottom, top)| {
            format!(
                ", {} to {} km",
                wording::number(bottom / 1000.0, 1),
                wording::number(top / 1000.0, 1)
            )
        })
        .unwrap_or_default();
    format!("{}{heights}", layer(finding.bottom, finding.top))
}

/// The largest change of CAPE and whose it is.
fn largest(cost: &Cost) -> Option<(Parcel, f64)> {
    [
        (Parcel::Surface, cost.surface),
        (Parcel::Mixed, cost.mixed),
        (Parcel::MostUnstable, cost.most_unstable),
    ]
    .into_iter()
    .filter_map(|(parcel, change)| Some((parcel, change.cape?)))
    .max_by(|a, b| a.1.abs().total_cmp(&b.1.abs()))
}

fn headline(finding: &Finding, card: &Card) -> String {
    if finding.wind_only {
        return "no cost in CAPE".to_owned();
    }
    if finding.repairs.is_empty() {
        return "no repair".to_owned();
    }
    match card.headline_cost().and_then(largest) {
        Some((_, change)) => wording::energy_change(change),
        None => "cost unknown".to_owned(),
    }
}

fn opened_ui(
    ui: &mut Ui,
    paint: &Paint,
    finding: &Finding,
    index: usize,
    card: &Card,
    asks: &mut Asks,
) {
    ui.add_space(2.0);
    for evidence in &finding.evidence {
        let value = format!(
            "{} {}",
            wording::number(evidence.value, evidence.decimals),
            evidence.unit
        );
        evidence_ui(ui, evidence.label, value.trim_end());
    }
    ui.add_space(2.0);
    let half = (ui.available_width() - 8.0) / 2.0;
    ui.horizontal_top(|ui| {
        for (title, text) in [
            ("If the sonde is wrong", &finding.guilty),
            ("If the air is like that", &finding.innocent),
        ] {
            ui.vertical(|ui| {
                ui.set_width(half);
                ui.label(bold(title).size(12.0));
                ui.add(Label::new(RichText::new(text).size(12.0)).wrap());
            });
        }
    });
    if !finding.caveat.is_empty() {
        ui.label(RichText::new(&finding.caveat).italics().size(12.0));
    }
    ui.add_space(2.0);
    for (repair_index, repair) in finding.repairs.iter().enumerate() {
        let id = RepairId {
            finding: index,
            repair: repair_index,
        };
        let applied = card.applied == Some(repair_index);
        let cost = card.costs.get(repair_index).and_then(Option::as_ref);
        repair_ui(ui, paint, id, &repair.what, applied, cost, asks);
    }
}

/// Name and value of one piece of evidence; a long name goes on below itself.
fn evidence_ui(ui: &mut Ui, label: &str, value: &str) {
    const VALUE: f32 = 76.0;
    ui.horizontal_top(|ui| {
        ui.spacing_mut().item_spacing.x = 6.0;
        let width = (ui.available_width() - VALUE - 6.0).max(40.0);
        ui.vertical(|ui| {
            ui.set_width(width);
            ui.add(Label::new(RichText::new(label).size(12.0).weak()).wrap());
        });
        ui.add(Label::new(RichText::new(value).size(12.0)).extend());
    });
}

fn repair_ui(
    ui: &mut Ui,
    paint: &Paint,
    id: RepairId,
    what: &str,
    applied: bool,
    cost: Option<&Cost>,
    asks: &mut Asks,
) {
    let label = if applied {
        format!("Take back: {what}")
    } else {
        format!("Apply: {what}")
    };
    let response = ui.add(Button::new(&label).selected(applied).wrap());
    if response.hovered() || response.has_focus() {
        asks.preview = Some(id);
    }
    asks.describe(&response, || {
        format!("{label}: the chart shows what it would do; Enter does it")
    });
    if response.clicked() {
        asks.command(if applied {
            Command::WithdrawRepair(id)
        } else {
            Command::ApplyRepair(id)
        });
    }
    cost_ui(ui, paint, id, applied, cost);
}

fn cost_ui(ui: &mut Ui, paint: &Paint, id: RepairId, applied: bool, cost: Option<&Cost>) {
    let Some(cost) = cost else {
        ui.label(RichText::new("cost unknown").small().weak());
        return;
    };
    Grid::new(("cost", id.finding, id.repair))
        .num_columns(4)
        .min_row_height(14.0)
        .spacing(vec2(10.0, 1.0))
        .show(ui, |ui| {
            let small = |text: &str| RichText::new(text.to_owned()).size(11.5);
            ui.label(
                small(if applied {
                    "has changed"
                } else {
                    "would change"
                })
                .weak(),
            );
            for parcel in Parcel::ALL {
                ui.label(small(parcel_heading(parcel)).weak());
            }
            ui.end_row();
            let all = [cost.surface, cost.mixed, cost.most_unstable];
            for (name, pick) in [
                (
                    "CAPE",
                    (|change: &Change| change.cape) as fn(&Change) -> Option<f64>,
                ),
                ("CIN", |change: &Change| change.cin),
            ] {
                ui.label(small(name));
                for change in &all {
                    let text = pick(change).map_or_else(|| "–".to_owned(), wording::energy_change);
                    ui.label(small(&text).color(paint.theme.ink));
                }
                ui.end_row();
            }
        });
}

/// The list of amendments: each can be switched off or taken out.
fn amendments_ui(ui: &mut Ui, paint: &Paint, item: &Item, asks: &mut Asks) {
    let entries = &item.document().amendments.entries;
    let notes = &item.results().working.notes;
    if entries.is_empty() && notes.is_empty() {
        return;
    }
    ui.add_space(4.0);
    ui.label(bold("Amendments").size(13.0));
    for (index, entry) in entries.iter().enumerate() {
        let text = amendment_text(&entry.amendment, paint.view.units);
        ui.horizontal(|ui| {
            let mut on = entry.enabled;
            let response: Response = ui.checkbox(&mut on, "");
            response.widget_info(|| {
                WidgetInfo::selected(
                    eframe::egui::Role::CheckBox,
                    true,
                    entry.enabled,
                    format!("In force: {text}"),
                )
            });
            asks.describe(&response, || format!("{text}: Space switches it"));
            if response.changed() {
                asks.command(Command::ToggleAmendment(index));
            }
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                let out = ui.small_button("Remove");
                asks.describe(&out, || format!("Remove: {text}"));
                if out.clicked() {
                    asks.command(Command::RemoveAmendment(index));
                }
                ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                    let shown = if entry.enabled {
                        RichText::new(&text)
                    } else {
                        RichText::new(&text).weak().strikethrough()
                    };
                    ui.add(Label::new(shown).truncate()).on_hover_text(&text);
                });
            });
        });
    }
    for note in notes {
        ui.label(RichText::new(wording::note(note)).small());
    }
}

/// An amendment in words.
pub(crate) fn amendment_text(amendment: &Amendment, units: Units) -> String {
    let degrees = |k: f64| units::temperature(Temperature::from_k(k), units.temperature);
    let between = |bottom: f64, top: f64| {
        layer(
            Some(Pressure::from_pa(bottom)),
            Some(Pressure::from_pa(top)),
        )
    };
    match *amendment {
        Amendment::SurfaceTemperature { temperature_k } => {
            format!("surface temperature {}", degrees(temperature_k))
        }
        Amendment::SurfaceDewpoint { dewpoint_k } => {
            format!("surface dew point {}", degrees(dewpoint_k))
        }
        Amendment::BridgeLayer {
            bottom_pa,
            top_pa,
            humidity,
        } => format!(
            "bridge {}, {} kept",
            between(bottom_pa, top_pa),
            match humidity {
                BridgeHumidity::RelativeHumidity => "relative humidity",
                BridgeHumidity::MixingRatio => "mixing ratio",
            }
        ),
        Amendment::DropLevels { bottom_pa, top_pa } => {
            format!("drop levels, {}", between(bottom_pa, top_pa))
        }
        Amendment::MixMoisture {
            bottom_pa, top_pa, ..
        } => format!("mix moisture, {}", between(bottom_pa, top_pa)),
        Amendment::DisregardAbove { pressure_pa } => format!(
            "disregard above {}",
            wording::pressure(Pressure::from_pa(pressure_pa))
        ),
    }
}

fn notes_ui(ui: &mut Ui, item: &Item) {
    let notes = item.notes();
    if notes.is_empty() {
        return;
    }
    ui.add_space(4.0);
    ui.collapsing(format!("Notes on the message ({})", notes.len()), |ui| {
        for note in notes {
            ui.label(RichText::new(wording::note(note)).small());
        }
    });
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn amendments_in_words() {
        let units = Units::default();
        let check = |amendment, expect: &str| assert_eq!(amendment_text(&amendment, units), expect);
        check(
            Amendment::SurfaceDewpoint { dewpoint_k: 291.55 },
            "surface dew point 18.4 °C",
        );
        check(
            Amendment::BridgeLayer {
                bottom_pa: 65_200.0,
                top_pa: 60_100.0,
                humidity: BridgeHumidity::RelativeHumidity,
            },
            "bridge 652 to 601 hPa, relative humidity kept",
        );
        check(
            Amendment::DropLevels {
                bottom_pa: 50_000.0,
                top_pa: 50_000.0,
            },
            "drop levels, 500 hPa",
        );
    }

    #[test]
    fn the_largest_change_keeps_its_sign() {
        let change = |cape| Change { cape, cin: None };
        let cost = Cost {
            surface: change(Some(100.0)),
            mixed: change(Some(-900.0)),
            most_unstable: change(None),
        };
        assert_eq!(largest(&cost), Some((Parcel::Mixed, -900.0)));
        assert_eq!(largest(&Cost::default()), None);
    }
}
