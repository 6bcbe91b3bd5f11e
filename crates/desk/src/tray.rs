//! The tray: soundings waiting, worst cost first.

use crate::app::Paint;
use crate::ask::Asks;
use crate::fonts;
use crate::marks::{Mark, standing_mark};
use crate::quantity::parcel_name;
use crate::theme::bold;
use dewbound_session::{Command, TrayRow, wording};
use eframe::egui::{
    FontFamily, FontId, RichText, Role, ScrollArea, Sense, Stroke, StrokeKind, Ui, UiBuilder,
    WidgetInfo, pos2, vec2,
};
use jiff::tz::TimeZone;

/// The tray in its column.
pub(crate) fn tray_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let rect = ui.max_rect().shrink2(vec2(6.0, 4.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        ui.horizontal(|ui| {
            ui.label(bold("Tray").size(14.0));
            ui.label(RichText::new(waiting(paint)).small().weak());
        });
        rows_ui(ui, paint, asks, false);
    });
}

/// How many are waiting.
pub(crate) fn waiting(paint: &Paint) -> String {
    let rows = paint.session.tray();
    let open = rows.iter().filter(|row| row.open).count();
    let reading = match paint.session.reading() {
        0 => String::new(),
        files => format!(", reading {files} files"),
    };
    format!("{open} of {} to decide{reading}", rows.len())
}

/// From so many lines on only those in sight are laid out.
const MANY: usize = 150;
const GAP: f32 = 3.0;

/// The lines of the tray. In a drop-down, choosing one closes it.
pub(crate) fn rows_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks, drop_down: bool) {
    let rows = paint.session.tray();
    // One height for all, so that any of them can be found without laying out the rest.
    let high = if rows.iter().any(|row| row.demo) {
        80.0
    } else {
        66.0
    };
    ui.spacing_mut().item_spacing.y = GAP;
    let mut area = ScrollArea::vertical()
        .id_salt("tray rows")
        .auto_shrink([false, drop_down]);
    if drop_down {
        area = area.max_height(380.0);
    }
    let current = paint.item().map(dewbound_session::Item::id);
    if rows.len() <= MANY {
        area.show(ui, |ui| {
            for row in rows {
                row_ui(ui, paint, row, high, drop_down, asks);
            }
        });
        return;
    }
    if paint.view.reveal
        && let Some(index) = rows.iter().position(|row| Some(row.item) == current)
    {
        let above = (ui.available_height() - high) / 2.0;
        area = area.vertical_scroll_offset((index as f32 * (high + GAP) - above).max(0.0));
    }
    area.show_rows(ui, high, rows.len(), |ui, seen| {
        for row in rows.iter().skip(seen.start).take(seen.len()) {
            row_ui(ui, paint, row, high, drop_down, asks);
        }
    });
}

/// "00 UTC 21 May", minutes where there are any; a tilde where part of the date is assumed.
pub(crate) fn time_text(row: &TrayRow) -> String {
    match row.valid {
        Some(valid) => {
            let valid = valid.to_zoned(TimeZone::UTC);
            let assumed = if row.time_assumed { "~" } else { "" };
            let clock = if valid.minute() == 0 { "%H" } else { "%H:%M" };
            format!(
                "{assumed}{}",
                valid.strftime(&format!("{clock} UTC %-d %b"))
            )
        }
        None => "time unknown".to_owned(),
    }
}

fn cost_text(row: &TrayRow) -> String {
    match row.worst_cost {
        Some((_, cost)) => wording::energy_change(cost),
        None if row.findings > 0 => "cost unknown".to_owned(),
        None => "no findings".to_owned(),
    }
}

fn findings_text(row: &TrayRow) -> String {
    match row.findings {
        0 => String::new(),
        1 => "1 finding".to_owned(),
        several => format!("{several} findings"),
    }
}

fn row_ui(ui: &mut Ui, paint: &Paint, row: &TrayRow, high: f32, drop_down: bool, asks: &mut Asks) {
    let theme = paint.theme;
    let chosen = paint.item().is_some_and(|item| item.id() == row.item);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), high), Sense::click());
    let label = format!(
        "{}, {}, {}, {}, {}, {}{}",
        row.station,
        time_text(row),
        row.age(paint.now),
        findings_text(row),
        cost_text(row),
        row.verdict,
        if row.demo { ", invented data" } else { "" }
    );
    response.widget_info(|| WidgetInfo::selected(Role::Button, true, chosen, &label));
    asks.describe(&response, || format!("{}: Enter opens it", row.station));
    if ui.is_rect_visible(rect) {
        let painter = ui.painter().with_clip_rect(rect.intersect(ui.clip_rect()));
        let fill = if chosen {
            theme.selected
        } else if response.hovered() {
            theme.raised
        } else {
            theme.card
        };
        painter.rect_filled(rect, 3.0, fill);
        let edge = if response.has_focus() {
            Stroke::new(2.0, theme.accent)
        } else {
            Stroke::new(1.0, theme.line)
        };
        painter.rect_stroke(rect, 3.0, edge, StrokeKind::Inside);
        let inside = rect.shrink2(vec2(8.0, 6.0));
        let write = |x: f32, y: f32, text: String, size: f32, strong: bool, ink| {
            let family = if strong {
                fonts::bold()
            } else {
                FontFamily::Proportional
            };
            let mut job = eframe::egui::text::LayoutJob::simple_singleline(
                text,
                FontId::new(size, family),
                ink,
            );
            job.wrap.max_width = inside.right() - x;
            job.wrap.max_rows = 1;
            job.wrap.break_anywhere = true;
            let galley = painter.layout_job(job);
            painter.galley(pos2(x, y), galley, ink);
        };
        let left = inside.left();
        write(
            left,
            inside.top(),
            row.station.clone(),
            13.0,
            true,
            theme.ink,
        );
        write(
            left,
            inside.top() + 18.0,
            format!("{} · {}", time_text(row), row.age(paint.now)),
            11.0,
            false,
            theme.quiet,
        );
        let mark = if row.review {
            Mark::Review
        } else if !row.open {
            Mark::Decided
        } else if row.draft {
            Mark::Draft
        } else {
            Mark::Open
        };
        standing_mark(&painter, theme, pos2(left + 8.0, inside.top() + 43.0), mark);
        write(
            left + 20.0,
            inside.top() + 36.0,
            row.verdict.clone(),
            11.5,
            false,
            theme.ink,
        );
        let cost =
            painter.layout_no_wrap(cost_text(row), FontId::new(12.0, fonts::bold()), theme.ink);
        let at = pos2(inside.right() - cost.size().x, inside.top() + 35.0);
        painter.rect_filled(
            eframe::egui::Rect::from_min_size(at, cost.size()).expand2(vec2(4.0, 0.0)),
            0.0,
            fill,
        );
        painter.galley(at, cost, theme.ink);
        if row.demo {
            write(
                left,
                inside.top() + 55.0,
                wording::INVENTED.to_owned(),
                10.5,
                true,
                theme.danger,
            );
        }
    }
    if chosen && paint.view.reveal {
        response.scroll_to_me(None);
    }
    if response.clicked() {
        asks.command(Command::Select(row.item));
        if drop_down {
            ui.close();
        }
    }
    response.on_hover_ui(|ui| {
        ui.label(bold(&row.station));
        ui.label(format!("{}, {}", time_text(row), row.age(paint.now)));
        if row.time_assumed {
            ui.label("Part of the date is not in the message and was assumed; see the notes.");
        }
        ui.label(findings_text(row));
        if let Some((parcel, cost)) = row.worst_cost {
            ui.label(format!(
                "Worst cost: {} of the {}",
                wording::energy_change(cost),
                parcel_name(parcel)
            ));
        }
        ui.label(format!("Verdict: {}", row.verdict));
    });
}
