//! Station, launch and nominal time and the age of the data, in large type.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::theme::bold;
use crate::view::DialogBox;
use dewbound_session::{Item, age, wording};
use eframe::egui::{Align, Color32, FontId, Label, Layout, RichText, Ui, UiBuilder, vec2};
use jiff::Timestamp;
use jiff::tz::TimeZone;

/// The title over the chart.
pub(crate) fn title_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 2.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        let Some(item) = paint.item() else {
            ui.label(bold("Dewbound").size(20.0));
            return;
        };
        ui.spacing_mut().item_spacing.y = 0.0;
        if paint.layout.low {
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let full = times(item, paint.now);
                ui.add(Label::new(bold(identity(item)).size(14.0)).truncate());
                ui.add(Label::new(RichText::new(short_times(item, paint.now)).size(11.5)).truncate())
                    .on_hover_text(full);
            });
        } else {
            ui.with_layout(Layout::right_to_left(Align::Min), |ui| {
                if item.sounding().station.position.is_none()
                    && ui
                        .small_button("Where is it?")
                        .on_hover_text(
                            "The position of this station is not known, so day and night can't be told apart. Type it once.",
                        )
                        .clicked()
                {
                    asks.push(Ask::Dialog(Some(DialogBox::Position(
                        String::new(),
                        String::new(),
                    ))));
                }
                ui.vertical(|ui| {
                    ui.spacing_mut().item_spacing.y = 0.0;
                    ui.add(Label::new(bold(station(item)).size(19.0)).truncate());
                    let full = times(item, paint.now);
                    let short = short_times(item, paint.now);
                    let text = fitting(
                        ui,
                        [(full.clone(), 14.0), (short.clone(), 14.0), (short, 12.0)],
                    );
                    ui.add(Label::new(text).truncate()).on_hover_text(full);
                });
            });
        }
    });
}

/// The first of these that fits, else the last.
fn fitting<const N: usize>(ui: &Ui, choices: [(String, f32); N]) -> RichText {
    let room = ui.available_width();
    let fits = |text: &str, size: f32| {
        let galley = ui.painter().layout_no_wrap(
            text.to_owned(),
            FontId::proportional(size),
            Color32::PLACEHOLDER,
        );
        galley.size().x <= room
    };
    let mut chosen = RichText::default();
    for (text, size) in choices {
        let fit = fits(&text, size);
        chosen = RichText::new(text).size(size);
        if fit {
            break;
        }
    }
    chosen
}

/// With the stamp of invented data.
fn station(item: &Item) -> String {
    let mut text = identity(item);
    if item.demo() {
        text.push_str(" · ");
        text.push_str(wording::INVENTED);
    }
    text
}

/// "Hollin Ridge 03999".
pub(crate) fn identity(item: &Item) -> String {
    let station = &item.sounding().station;
    let mut text = station.label().to_owned();
    for id in [&station.wmo, &station.icao].into_iter().flatten() {
        if *id != text {
            text.push(' ');
            text.push_str(id);
        }
    }
    text
}

/// "23:12 for 00 UTC 21 May 2031 · 3 h 20 min old", where one line has to do.
fn short_times(item: &Item, now: Timestamp) -> String {
    let times = &item.sounding().times;
    let format =
        |time: Timestamp, format| time.to_zoned(TimeZone::UTC).strftime(format).to_string();
    let said = match (times.launch, times.nominal) {
        (Some(launch), Some(nominal)) => format!(
            "{} for {}",
            format(launch, "%H:%M"),
            format(nominal, "%H UTC %-d %b %Y")
        ),
        (Some(time), None) | (None, Some(time)) => format(time, "%H:%M UTC %-d %b %Y"),
        (None, None) => String::new(),
    };
    let assumed = if wording::assumed(times).is_some() {
        "~"
    } else {
        ""
    };
    let age = age(times.launch.or(times.nominal), now);
    if said.is_empty() {
        age
    } else {
        format!("{assumed}{said} · {age}")
    }
}

fn hour(time: Timestamp) -> String {
    time.to_zoned(TimeZone::UTC)
        .strftime("%H:%M UTC")
        .to_string()
}

fn day(time: Timestamp) -> String {
    time.to_zoned(TimeZone::UTC)
        .strftime("%a %-d %b %Y")
        .to_string()
}

/// "launched 23:12 UTC for 00:00 UTC Wed 21 May 2031 · 3 h 20 min old".
fn times(item: &Item, now: Timestamp) -> String {
    let times = &item.sounding().times;
    let said = match (times.launch, times.nominal) {
        (Some(launch), Some(nominal)) => {
            format!(
                "launched {} for {} {}",
                hour(launch),
                hour(nominal),
                day(nominal)
            )
        }
        (Some(launch), None) => format!("launched {} {}", hour(launch), day(launch)),
        (None, Some(nominal)) => format!("for {} {}", hour(nominal), day(nominal)),
        (None, None) => String::new(),
    };
    let assumed =
        wording::assumed(times).map_or_else(String::new, |assumed| format!(" ({assumed})"));
    let age = age(times.launch.or(times.nominal), now);
    if said.is_empty() {
        age
    } else {
        format!("{said}{assumed} · {age}")
    }
}
