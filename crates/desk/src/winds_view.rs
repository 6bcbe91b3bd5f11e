//! The page of the winds: painted, with a node for everything on it.

use crate::app::Paint;
use crate::ask::Asks;
use crate::chart_frame::to_point;
use crate::chart_paint::{self, to_pos, to_rect};
use crate::marks;
use crate::motion::{self, motion_id, motion_of};
use crate::theme::bold;
use crate::view::Gesture;
use crate::winds_frame::{WindsFrame, plane_id, strips_id};
use crate::winds_list;
use dewbound_session::chart::{
    HIT_RADIUS, Ink, MotionMark, Scene, speed_sign, wind_line, wind_text,
};
use dewbound_session::{Item, motion_in_use, no_winds, wording};
use eframe::egui::{
    CursorIcon, Id, Pos2, Rect, Role, Sense, Stroke, StrokeKind, Ui, WidgetInfo, accesskit, vec2,
};

/// Paints the page and lays out its nodes.
pub(crate) fn winds_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) {
    let Some(item) = paint.item() else {
        crate::chart_view::empty_ui(ui, paint, asks);
        return;
    };
    if let Some(why) = no_winds(item) {
        ui.vertical_centered(|ui| {
            ui.add_space(ui.available_height() * 0.4);
            ui.label(bold(why).size(15.0));
        });
        return;
    }
    let Some(frame) = paint.winds else { return };
    scene(ui, paint, frame.places.strips, &frame.strips_scene);
    scene(ui, paint, frame.places.plane, &frame.hodograph.scene);
    strips_ui(ui, paint, item, frame, asks);
    plane_ui(ui, paint, item, frame, asks);
    marks_ui(ui, paint, item, frame);
    ring_ui(ui, paint, item, frame, asks);
    typing_ui(ui, paint, frame);
    winds_list::list_ui(ui, paint, item, frame.places.list, asks);
}

fn scene(ui: &Ui, paint: &Paint, rect: Rect, scene: &Scene) {
    let painter = ui.painter().with_clip_rect(rect.expand(1.0));
    painter.rect_filled(rect, 2.0, paint.theme.chart_ink(Ink::Paper));
    chart_paint::paint(&painter, scene, paint.theme);
}

fn focus_frame(ui: &Ui, paint: &Paint, rect: Rect) {
    let stroke = Stroke::new(2.0, paint.theme.accent);
    ui.painter()
        .rect_stroke(rect, 2.0, stroke, StrokeKind::Inside);
}

fn invented(item: &Item) -> String {
    if item.demo() {
        format!(", {}", wording::INVENTED)
    } else {
        String::new()
    }
}

/// What is read at a height, or at every tick.
fn reading(paint: &Paint, item: &Item, height: f64) -> Option<String> {
    let profile = item.results().further.wind_profile.as_deref()?;
    Some(wind_line(profile, height, paint.view.units.speed))
}

fn strips_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &WindsFrame, asks: &mut Asks) {
    let response = ui.interact(frame.places.strips, strips_id(), Sense::click());
    let station = item.sounding().station.label();
    let label = format!("Wind against height of {station}{}", invented(item));
    response.widget_info(|| WidgetInfo::labeled(Role::GraphicsDocument, true, &label));
    let read = frame
        .cursor
        .and_then(|height| reading(paint, item, height))
        .map(|read| format!("Wind at {read} above ground"));
    ui.ctx().accesskit_node_builder(strips_id(), |node| {
        node.set_description(read.clone().unwrap_or_default());
    });
    if response.has_focus() {
        focus_frame(ui, paint, frame.places.strips);
    }
    asks.describe(&response, || {
        read.unwrap_or_else(|| format!("{label}: ↑ ↓ read the wind at a height"))
    });
}

fn plane_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &WindsFrame, asks: &mut Asks) {
    let response = ui.interact(frame.places.plane, plane_id(), Sense::click_and_drag());
    let station = item.sounding().station.label();
    let label = format!("Hodograph of {station}{}", invented(item));
    response.widget_info(|| WidgetInfo::labeled(Role::GraphicsDocument, true, &label));
    ui.ctx().accesskit_node_builder(plane_id(), |node| {
        let step = wording::number(frame.hodograph.ring_step, 0);
        let unit = speed_sign(paint.view.units.speed);
        node.set_description(format!(
            "Rings every {step} {unit}. {}",
            motion::line(paint, item)
        ));
    });
    if response.has_focus() {
        focus_frame(ui, paint, frame.places.plane);
    }
    asks.describe(&response, || {
        format!("{label}: arrows move, + − zoom, 0 shows all, double click sets the storm motion")
    });
    let on_ring = response
        .hover_pos()
        .is_some_and(|at| frame.hodograph.is_on_handle(to_point(at)));
    match paint.view.gesture {
        Some(Gesture::Motion { .. } | Gesture::PanWinds) => {
            response.on_hover_cursor(CursorIcon::Grabbing);
        }
        _ if on_ring => {
            response.on_hover_cursor(CursorIcon::Grab);
        }
        _ => {}
    }
}

/// A node without a widget: for those who can't see what is painted there.
fn node(ui: &Ui, id: impl std::hash::Hash + std::fmt::Debug, centre: Pos2, label: &str) {
    let rect = Rect::from_center_size(centre, vec2(8.0, 8.0));
    let response = ui.interact(rect, Id::unique(("winds", id)), Sense::empty());
    response.widget_info(|| WidgetInfo::labeled(Role::Label, true, label));
}

/// Ticks, motions, rings and the hatched areas.
fn marks_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &WindsFrame) {
    let unit = paint.view.units.speed;
    for &(height, at) in &frame.hodograph.ticks {
        if let Some(text) = reading(paint, item, height) {
            node(
                ui,
                ("tick", height.to_bits()),
                to_pos(at),
                &format!("Wind at {text}"),
            );
        }
    }
    for &(mark, motion, at) in &frame.hodograph.marks {
        let name = match mark {
            MotionMark::Right => "Estimated motion right of the mean wind",
            MotionMark::Left => "Estimated motion left of the mean wind",
            MotionMark::Mean => "Mean wind the motions deviate from",
            MotionMark::Set => "Motion set by you",
        };
        let label = format!("{name}: {}", wind_text(motion, unit));
        node(ui, ("mark", mark), to_pos(at), &label);
    }
    let plot = to_rect(frame.plane.plot());
    let step = wording::number(frame.hodograph.ring_step, 0);
    let rings = format!("Rings of the hodograph: every {step} {}", speed_sign(unit));
    node(ui, "rings", plot.center_bottom(), &rings);
    let numbers = &item.results().further.winds;
    let set = item.document().storm_motion();
    let against = motion_in_use(numbers, set, unit)
        .map_or_else(String::new, |motion| format!(", against {motion}"));
    for (layer, helicity) in [
        ("0–1 km", numbers.helicity_0_to_1km),
        ("0–3 km", numbers.helicity_0_to_3km),
    ] {
        if let Some(helicity) = helicity {
            let value = wording::number(helicity, 0);
            let label = format!("Hatched area {layer}: helicity {value} m²/s²{against}");
            node(ui, ("area", layer), plot.center(), &label);
        }
    }
}

/// The node of the ring: focus and value. The ring itself is the hodograph's.
fn ring_ui(ui: &Ui, paint: &Paint, item: &Item, frame: &WindsFrame, asks: &mut Asks) {
    // A ring out of sight can still be worked from the keyboard.
    let centre = frame
        .hodograph
        .handle
        .map_or(frame.places.plane.center_bottom(), to_pos);
    let rect = Rect::from_center_size(centre, vec2(1.0, 1.0) * 2.0 * HIT_RADIUS as f32);
    let response = ui.interact(rect, motion_id(), Sense::focusable_noninteractive());
    response.widget_info(|| WidgetInfo::labeled(Role::Slider, true, "Storm motion"));
    ui.ctx().accesskit_node_builder(motion_id(), |node| {
        node.set_value(wind_text(motion_of(item), paint.view.units.speed));
        node.add_action(accesskit::Action::SetValue);
    });
    asks.describe(&response, || motion::line(paint, item));
}

/// The motion being typed, beside its ring.
fn typing_ui(ui: &Ui, paint: &Paint, frame: &WindsFrame) {
    let Some(text) = &paint.view.motion_typed else {
        return;
    };
    let theme = paint.theme;
    let plot = to_rect(frame.plane.plot());
    let at = frame.hodograph.handle.map_or(plot.center_bottom(), to_pos);
    let text = format!(
        "{text}_ direction/{} · Enter sets",
        speed_sign(paint.view.units.speed)
    );
    let painter = ui.painter().with_clip_rect(frame.places.plane);
    marks::typed_box(&painter, theme, at - vec2(0.0, 18.0), plot, text);
}
