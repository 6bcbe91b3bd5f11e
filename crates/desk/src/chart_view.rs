//! The skew-T chart: painted, with a node for everything on it.

use crate::app::Paint;
use crate::ask::{Ask, Asks};
use crate::chart_frame::{ChartFrame, chart_id, to_point};
use crate::chart_paint::{self, to_pos, to_rect};
use crate::handle;
use crate::marks;
use crate::quantity::parcel_name;
use crate::theme::bold;
use crate::units;
use crate::view::Gesture;
use dewbound_session::chart::{Ink, Readout};
use dewbound_session::sounding::Reach;
use dewbound_session::{Item, wording};
use eframe::egui::{
    Align, Color32, CursorIcon, FontId, Id, Label, Layout, Rect, RichText, Role, Sense, Stroke,
    StrokeKind, Ui, UiBuilder, WidgetInfo, pos2, vec2,
};

/// The one line of help, until the first drag.
pub(crate) const HINT: &str =
    "Drag the ring at the foot of the dew-point line, or use the arrow keys";

/// Paints the chart and lays out its nodes.
pub(crate) fn chart_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let (Some(frame), Some(item)) = (paint.chart, paint.item()) else {
        empty_ui(ui, paint, asks);
        return;
    };
    let theme = paint.theme;
    let painter = ui.painter().with_clip_rect(frame.rect.expand(1.0));
    painter.rect_filled(frame.rect, 2.0, theme.chart_ink(Ink::Paper));
    chart_paint::paint(&painter, &frame.background, theme);
    chart_paint::paint(&painter, &frame.foreground, theme);

    let mut response = ui.interact(frame.rect, chart_id(), Sense::click_and_drag());
    let invented = if item.demo() {
        format!(", {}", wording::INVENTED)
    } else {
        String::new()
    };
    let label = format!(
        "Skew-T chart of {}{invented}",
        item.sounding().station.label()
    );
    response.widget_info(|| WidgetInfo::labeled(Role::GraphicsDocument, true, &label));
    ui.ctx().accesskit_node_builder(chart_id(), |node| {
        node.set_description(description(item, paint, frame));
    });
    if response.has_focus() {
        painter.rect_stroke(
            frame.rect,
            2.0,
            Stroke::new(2.0, theme.accent),
            StrokeKind::Inside,
        );
    }
    asks.describe(&response, || {
        frame.readout.as_ref().map_or_else(
            || format!("{label}: arrows move, + − zoom, 0 shows all, Shift+↑ reads values"),
            Readout::line,
        )
    });
    response = match paint.view.gesture {
        Some(Gesture::Pan) => response.on_hover_cursor(CursorIcon::Grabbing),
        Some(Gesture::Handle { .. }) => response.on_hover_cursor(CursorIcon::ResizeHorizontal),
        _ if over_handle(&response, frame) => {
            response.on_hover_cursor(CursorIcon::ResizeHorizontal)
        }
        _ => response,
    };
    drop(response);
    handle::handles_ui(ui, paint, item, asks);
    brackets_ui(ui, paint, item, frame, asks);
    areas_ui(ui, paint, item, frame);
    reach_ui(ui, item, frame);
    typing_ui(ui, paint, frame);
    hint_ui(ui, paint, frame);
}

fn over_handle(response: &eframe::egui::Response, frame: &ChartFrame) -> bool {
    response
        .hover_pos()
        .is_some_and(|position| frame.touch.handle_at(to_point(position)).is_some())
}

fn description(item: &Item, paint: &Paint, frame: &ChartFrame) -> String {
    let mut parts = vec![item.results().which_parcel.clone()];
    if item.demo() {
        parts.push(wording::INVENTED.to_owned());
    }
    for quantity in handle::QUANTITIES {
        parts.extend(handle::line(paint, item, quantity));
    }
    parts.extend(frame.readout.as_ref().map(Readout::line));
    parts.join(". ")
}

/// Brackets as buttons: the numbered disc opens the card.
fn brackets_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &ChartFrame, asks: &mut Asks) {
    for &(number, place) in &frame.touch.brackets {
        let Some(index) = number.checked_sub(1) else {
            continue;
        };
        let Some(finding) = item.findings().get(index) else {
            continue;
        };
        let rect = to_rect(place);
        let response = ui.interact(rect, Id::unique(("bracket", number)), Sense::click());
        let label = format!("Finding {number} on the chart: {}", finding.title);
        response.widget_info(|| WidgetInfo::labeled(Role::Button, true, &label));
        if response.has_focus() {
            ui.painter().rect_stroke(
                rect.expand(2.0),
                2.0,
                Stroke::new(2.0, paint.theme.accent),
                StrokeKind::Outside,
            );
        }
        asks.describe(&response, || format!("{label}: Enter opens its card"));
        if response
            .on_hover_text(&finding.summary)
            .on_hover_cursor(CursorIcon::PointingHand)
            .clicked()
        {
            let open = paint.view.open_card(item.id()) == Some(index);
            asks.push(Ask::Card(item.id(), (!open).then_some(index)));
            asks.push(Ask::Tab(crate::view::Tab::Findings));
        }
    }
}

/// The hatched areas for those who can't see them.
fn areas_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &ChartFrame) {
    let parcel = paint.view.parcel(item);
    let Some(ascent) = item.results().numbers.parcel(parcel) else {
        return;
    };
    let name = parcel_name(parcel);
    let plot = to_rect(frame.geometry.plot());
    let areas = [
        (
            "cape",
            format!("CAPE area of the {name}: {}", wording::cape(Some(ascent))),
        ),
        (
            "cin",
            format!(
                "CIN area of the {name}: {}",
                wording::energy(ascent.cin, false)
            ),
        ),
    ];
    for (id, label) in areas {
        let response = ui.interact(
            Rect::from_min_size(plot.center(), vec2(1.0, 1.0)),
            Id::unique(("area", id)),
            Sense::empty(),
        );
        response.widget_info(|| WidgetInfo::labeled(Role::Label, true, &label));
    }
}

/// How far surface edits reach, below the handles: nearer to them it would cover the curves.
fn reach_ui(ui: &mut Ui, item: &Item, frame: &ChartFrame) {
    let plot = to_rect(frame.geometry.plot());
    let applied = &item.results().working.reach;
    let full = format!("edits reach: {}", applied.why);
    let word = match applied.reach {
        Reach::Level => "level",
        Reach::Mixed => "mixed",
        Reach::Tapered => "tapered",
    };
    let short = match applied.mixed_top {
        Some(top) if applied.reach != Reach::Level => {
            format!(
                "edits reach: {word}, to {} hPa",
                wording::number(top.hpa(), 0)
            )
        }
        _ => format!("edits reach: {word}"),
    };
    // Right of the axis title, in its row.
    let room = Rect::from_min_max(
        pos2(plot.center().x + 56.0, frame.rect.bottom() - 17.0),
        frame.rect.right_bottom() - vec2(4.0, 1.0),
    );
    let width = ui
        .painter()
        .layout_no_wrap(
            full.clone(),
            FontId::proportional(11.0),
            Color32::PLACEHOLDER,
        )
        .size()
        .x;
    let shown = if width <= room.width() { &full } else { &short };
    ui.scope_builder(UiBuilder::new().id_salt("reach").max_rect(room), |ui| {
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.add(Label::new(RichText::new(shown).size(11.0).weak()).truncate())
                .on_hover_text(format!(
                    "{full}. The Sounding menu changes how far an edit of the surface reaches."
                ));
        });
    });
}

/// The number being typed, beside its handle.
fn typing_ui(ui: &Ui, paint: &Paint, frame: &ChartFrame) {
    let painter = ui.painter().with_clip_rect(frame.rect);
    let theme = paint.theme;
    let plot = to_rect(frame.geometry.plot());
    if let Some(typing) = &paint.view.typing
        && let Some(place) = frame.touch.handle(handle::handle_of(typing.quantity))
    {
        let at = to_pos(place.centre) - vec2(0.0, 22.0);
        let text = format!(
            "{}_ {} · Enter sets",
            typing.text,
            units::sign(paint.view.units.temperature)
        );
        // Held between left and right, not at the top.
        let within = plot.with_min_y(f32::NEG_INFINITY);
        marks::typed_box(&painter, theme, at, within, text);
    }
}

/// Shows it.
fn hint_ui(ui: &mut Ui, paint: &Paint, frame: &ChartFrame) {
    if !paint.view.hint {
        return;
    }
    let plot = to_rect(frame.geometry.plot());
    // In the margin above the plot, where it hides nothing but the upper temperature labels.
    let narrow = plot.width() < 520.0;
    let (left, right) = if narrow {
        (frame.rect.left(), frame.rect.right())
    } else {
        (plot.left(), plot.right())
    };
    let rect = Rect::from_min_max(pos2(left, frame.rect.top()), pos2(right, plot.top() - 1.0));
    ui.painter().rect_filled(rect, 3.0, paint.theme.accent);
    ui.scope_builder(
        UiBuilder::new()
            .id_salt("hint")
            .max_rect(rect.shrink2(vec2(8.0, 1.0))),
        |ui| {
            ui.horizontal_centered(|ui| {
                let text = if narrow {
                    RichText::new(HINT).size(11.0)
                } else {
                    bold(HINT).size(12.0)
                };
                ui.add(Label::new(text.color(paint.theme.on_accent)).truncate());
            });
        },
    );
}

/// What stands where the chart would be while there is nothing to show.
pub(crate) fn empty_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    ui.vertical_centered(|ui| {
        ui.add_space(ui.available_height() * 0.35);
        if paint.session.reading() > 0 {
            ui.label(format!("Reading {} files…", paint.session.reading()));
        } else {
            ui.label(bold("Nothing in the tray").size(16.0));
            ui.label("Drop files or folders on the window, or open them:");
            crate::menu::action_button(ui, paint, dewbound_session::Action::OpenFiles, asks);
            crate::menu::action_button(ui, paint, dewbound_session::Action::OpenDemo, asks);
        }
    });
}
