//! CAPE against the surface dew point: how far the answer moves inside the doubt. The working value can be dragged.

use crate::app::Paint;
use crate::ask::Asks;
use crate::chart_frame::candidate_word;
use crate::handle::{self, name};
use crate::quantity::{parcel_heading, parcel_name};
use crate::theme::{Theme, bold};
use crate::units;
use dewbound_session::sounding::Parcel;
use dewbound_session::thermo::Temperature;
use dewbound_session::{CandidateKind, Doubt, Item, SurfaceQuantity, wording};
use eframe::egui::{
    Align, Align2, Color32, CursorIcon, FontId, Id, Label, Layout, Pos2, Rect, RichText, Role,
    Sense, Stroke, StrokeKind, Ui, UiBuilder, Vec2b, WidgetInfo, pos2, vec2,
};
use egui_plot::{
    Axis, AxisHints, GridMark, HLine, Line, LineStyle, MarkerShape, Plot, PlotPoints,
    PlotTransform, PlotUi, Points, Span, VLine,
};

/// Identity of the response in the window.
pub(crate) fn response_id() -> Id {
    Id::unique("response curve")
}

/// Where the plot of the last frame lay.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Seen {
    transform: PlotTransform,
    unit: dewbound_session::chart::TemperatureUnit,
}

impl Seen {
    /// Dew point under a place on the screen.
    pub fn dewpoint_at(&self, position: Pos2) -> Temperature {
        units::from_shown(self.transform.value_from_position(position).x, self.unit)
    }

    /// Where a dew point lies.
    pub fn x_of(&self, dewpoint: Temperature) -> f32 {
        self.transform
            .position_from_point_x(units::shown(dewpoint, self.unit))
    }
}

/// The one sentence above it.
pub(crate) fn sentence_ui(ui: &mut Ui, paint: &Paint, _asks: &Asks) {
    let rect = ui.max_rect().shrink2(vec2(8.0, 1.0));
    ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
        // Horizontal, so that a sentence of one line stands in the middle of the room for two.
        ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
            if let Some(item) = paint.item() {
                let sentence = capitalised(&item.results().which_parcel);
                ui.add(Label::new(bold(sentence.as_str()).size(12.0)).wrap())
                    .on_hover_text(sentence);
            }
        });
    });
}

/// As a sentence begins.
fn capitalised(text: &str) -> String {
    let mut chars = text.chars();
    chars
        .next()
        .map_or_else(String::new, |first| {
            first.to_uppercase().chain(chars).collect::<String>()
        })
        // A unit stays with its number.
        .replace(" J/kg", "\u{a0}J/kg")
        .replace(" hPa", "\u{a0}hPa")
}

/// The curve; gives back where it lies.
pub(crate) fn response_ui(ui: &mut Ui, paint: &Paint, asks: &mut Asks) -> Option<Seen> {
    let item = paint.item()?;
    let doubt = &item.results().doubt;
    let rect = ui.max_rect().shrink2(vec2(6.0, 2.0));
    if doubt.response.len() < 2 {
        ui.scope_builder(UiBuilder::new().max_rect(rect), |ui| {
            let why = if doubt.problem.is_empty() {
                "No response to the surface dew point can be drawn."
            } else {
                &doubt.problem
            };
            ui.label(RichText::new(why).weak());
        });
        return None;
    }
    let unit = paint.view.units.temperature;
    let theme = paint.theme;
    let working = item.working_surface(SurfaceQuantity::Dewpoint);
    let (low, high) = span(doubt, unit);
    // Room above the curves for the legend.
    let inner = f64::from((rect.height() - 24.0).max(60.0));
    let most = most_cape(doubt) * inner / (inner - 24.0);
    let lines = inner / 26.0;
    let mut child = ui.new_child(UiBuilder::new().max_rect(rect));
    let shown = Plot::new(("response", item.id()))
        .width(rect.width())
        .height(rect.height())
        .sense(Sense::hover())
        .allow_drag(false)
        .allow_zoom(false)
        .allow_scroll(false)
        .allow_boxed_zoom(false)
        .allow_double_click_reset(false)
        .allow_axis_zoom_drag(false)
        .show_crosshair(false)
        .show_background(true)
        .auto_bounds(Vec2b::FALSE)
        .default_x_bounds(low, high)
        .default_y_bounds(0.0, most)
        .grid_color(theme.line)
        .y_grid_spacer(move |_| marks(most, lines))
        .label_formatter(|_| None)
        .custom_x_axes(vec![
            AxisHints::new_x()
                .formatter(move |mark, _| {
                    format!(
                        "{} {}",
                        wording::number(mark.value, decimals(mark.step_size)),
                        units::sign(unit)
                    )
                })
                .label_spacing(36.0..=44.0)
                .tick_label_font(FontId::proportional(11.0))
                .tick_label_color(theme.ink),
        ])
        .custom_y_axes(vec![
            AxisHints::new_y()
                .formatter(|mark, _| wording::number(mark.value, 0))
                .min_thickness(44.0)
                .label_spacing(8.0..=10.0)
                .tick_label_font(FontId::proportional(11.0))
                .tick_label_color(theme.ink),
        ])
        .show(&mut child, |plot| {
            plot.set_plot_bounds_x(low..=high);
            plot.set_plot_bounds_y(0.0..=most);
            curves(plot, doubt, theme, unit, working);
        });
    let transform = shown.transform;
    let seen = Seen { transform, unit };
    words(ui, paint, item, &seen);
    node(ui, paint, item, *transform.frame(), asks);
    Some(seen)
}

fn decimals(step: f64) -> usize {
    usize::from(step < 0.999)
}

/// Lines at round values, at most so many of them between 0 and `most`.
fn marks(most: f64, lines: f64) -> Vec<GridMark> {
    let least = most / lines.max(2.0);
    let power = 10_f64.powf(least.log10().floor());
    let step_size = [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .map(|nice| nice * power)
        .find(|&step| step >= least)
        .unwrap_or(10.0 * power);
    let count = (most / step_size) as u32;
    (0..=count)
        .map(|index| GridMark {
            value: f64::from(index) * step_size,
            step_size,
        })
        .collect()
}

fn span(doubt: &Doubt, unit: dewbound_session::chart::TemperatureUnit) -> (f64, f64) {
    let at = |point: Option<&dewbound_session::ResponsePoint>| {
        point.map(|point| units::shown(point.dewpoint, unit))
    };
    at(doubt.response.first())
        .zip(at(doubt.response.last()))
        .unwrap_or((0.0, 1.0))
}

fn most_cape(doubt: &Doubt) -> f64 {
    let most = doubt
        .response
        .iter()
        .flat_map(|point| point.parcels)
        .filter_map(|parcel| parcel.cape)
        .fold(0.0, f64::max);
    most.max(100.0)
}

fn parcel_colour(theme: &Theme, parcel: Parcel) -> Color32 {
    match parcel {
        Parcel::Surface => theme.surface,
        Parcel::Mixed => theme.mixed,
        Parcel::MostUnstable => theme.most_unstable,
    }
}

fn parcel_style(parcel: Parcel) -> (LineStyle, f32) {
    match parcel {
        Parcel::Surface => (LineStyle::Solid, 2.5),
        Parcel::Mixed => (LineStyle::dashed_dense(), 2.0),
        Parcel::MostUnstable => (LineStyle::dotted_dense(), 2.5),
    }
}

fn curves(
    plot: &mut PlotUi<'_>,
    doubt: &Doubt,
    theme: &Theme,
    unit: dewbound_session::chart::TemperatureUnit,
    working: Option<Temperature>,
) {
    if let Some(interval) = &doubt.interval {
        plot.span(
            Span::new(
                "",
                units::shown(interval.low, unit)..=units::shown(interval.high, unit),
            )
            .axis(Axis::X)
            .fill(theme.interval)
            .border_width(1.0)
            .border_color(theme.line),
        );
    }
    plot.hline(HLine::new("", 0.0).color(theme.line).width(1.0));
    // The surface parcel last, on top.
    for (index, parcel) in Parcel::ALL.into_iter().enumerate().rev() {
        let points: Vec<[f64; 2]> = doubt
            .response
            .iter()
            .filter_map(|point| {
                let cape = point.parcels.get(index)?.cape?;
                Some([units::shown(point.dewpoint, unit), cape])
            })
            .collect();
        let (style, width) = parcel_style(parcel);
        plot.line(
            Line::new(parcel_name(parcel), PlotPoints::from(points))
                .color(parcel_colour(theme, parcel))
                .style(style)
                .width(width),
        );
    }
    for candidate in &doubt.candidates {
        let (Some(dewpoint), [Some(cape), ..]) = (candidate.dewpoint, candidate.cape) else {
            continue;
        };
        let shape = match candidate.kind {
            CandidateKind::Reported => MarkerShape::Circle,
            CandidateKind::MixedLayer => MarkerShape::Diamond,
            CandidateKind::FirstLevels => MarkerShape::Up,
            CandidateKind::PinnedLow | CandidateKind::PinnedHigh => MarkerShape::Square,
        };
        plot.points(
            Points::new(
                "",
                PlotPoints::from(vec![[units::shown(dewpoint, unit), cape]]),
            )
            .shape(shape)
            .radius(5.0)
            .filled(true)
            .color(theme.ink),
        );
    }
    if let Some(working) = working {
        plot.vline(
            VLine::new("", units::shown(working, unit))
                .color(theme.accent)
                .width(2.5),
        );
    }
}

/// Labels on the plot itself: what the lines are, where the working value stands.
fn words(ui: &Ui, paint: &Paint, item: &Item, seen: &Seen) {
    let theme = paint.theme;
    let frame = *seen.transform.frame();
    let painter = ui.painter().with_clip_rect(frame);
    let doubt = &item.results().doubt;
    let legend = legend(&painter, theme, frame);
    let mut taken = vec![legend];
    if let Some(working) = item.working_surface(SurfaceQuantity::Dewpoint) {
        let x = seen.x_of(working);
        let mut text = units::temperature(working, paint.view.units.temperature);
        // Beyond the curve an arrow says on which side the working value is.
        if x < frame.left() {
            text = format!("← {text}");
        } else if x > frame.right() {
            text = format!("{text} →");
        }
        let outside = !frame.x_range().contains(x);
        let x = x.clamp(frame.left() - 4.0, frame.right() + 4.0);
        let top = pos2(x, frame.bottom() - 9.0);
        if !outside {
            painter.circle(top, 7.0, theme.card, Stroke::new(2.5, theme.accent));
        }
        let align = if x > frame.center().x {
            (vec2(-12.0, 0.0), Align2::RIGHT_CENTER)
        } else {
            (vec2(12.0, 0.0), Align2::LEFT_CENTER)
        };
        let galley =
            painter.layout_no_wrap(text, FontId::new(12.0, crate::fonts::bold()), theme.ink);
        let rect = align.1.anchor_size(top + align.0, galley.size());
        painter.rect_filled(rect.expand(1.0), 1.0, theme.card.gamma_multiply(0.8));
        painter.galley(rect.min, galley, theme.ink);
        taken.push(rect);
    }
    for candidate in &doubt.candidates {
        let (Some(dewpoint), [Some(cape), ..]) = (candidate.dewpoint, candidate.cape) else {
            continue;
        };
        let word = candidate_word(candidate.kind);
        let at = pos2(
            seen.x_of(dewpoint),
            seen.transform.position_from_point_y(cape),
        );
        let galley = painter.layout_no_wrap(word.to_owned(), FontId::proportional(11.0), theme.ink);
        let rect = clear_place(at, galley.size(), frame, &taken);
        painter.rect_filled(rect.expand(1.0), 1.0, theme.card.gamma_multiply(0.8));
        painter.galley(rect.min, galley, theme.ink);
        taken.push(rect);
    }
}

/// Where a label beside a point covers no other: the first free corner around it.
fn clear_place(at: Pos2, size: eframe::egui::Vec2, frame: Rect, taken: &[Rect]) -> Rect {
    let places = [
        (vec2(-8.0, -6.0), Align2::RIGHT_BOTTOM),
        (vec2(8.0, 6.0), Align2::LEFT_TOP),
        (vec2(8.0, -6.0), Align2::LEFT_BOTTOM),
        (vec2(-8.0, 6.0), Align2::RIGHT_TOP),
    ];
    let all = places.map(|(offset, align)| align.anchor_size(at + offset, size));
    let clear = |rect: &&Rect| {
        frame.contains_rect(**rect) && taken.iter().all(|other| !other.intersects(**rect))
    };
    let [first, ..] = all;
    all.iter().find(clear).copied().unwrap_or(first)
}

/// What the lines are, in one row; gives back where it stands.
fn legend(painter: &eframe::egui::Painter, theme: &Theme, frame: Rect) -> Rect {
    let y = frame.top() + 11.0;
    let write = |x: f32, text: &str, ink| {
        painter.text(
            pos2(x, y),
            Align2::LEFT_CENTER,
            text,
            FontId::proportional(11.0),
            ink,
        )
    };
    let mut x = write(frame.left() + 6.0, "CAPE, J/kg", theme.quiet).right() + 12.0;
    for parcel in Parcel::ALL {
        let colour = parcel_colour(theme, parcel);
        let (_, width) = parcel_style(parcel);
        let ends = [pos2(x, y), pos2(x + 22.0, y)];
        let stroke = Stroke::new(width, colour);
        let shapes = match parcel {
            Parcel::Surface => vec![eframe::egui::Shape::line_segment(ends, stroke)],
            Parcel::Mixed => eframe::egui::Shape::dashed_line(&ends, stroke, 5.0, 3.0),
            Parcel::MostUnstable => eframe::egui::Shape::dotted_line(&ends, colour, 4.0, 1.4),
        };
        painter.extend(shapes);
        x = write(x + 26.0, parcel_heading(parcel), theme.ink).right() + 12.0;
    }
    Rect::from_min_max(frame.min, pos2(x, y + 9.0))
}

/// The plot as one thing that can be dragged, has the keyboard, and can be read out.
fn node(ui: &Ui, paint: &Paint, item: &Item, frame: Rect, asks: &mut Asks) {
    let response = ui.interact(frame, response_id(), Sense::drag());
    let unit = paint.view.units.temperature;
    let quantity = SurfaceQuantity::Dewpoint;
    let label = "Response: CAPE against surface dew point";
    response.widget_info(|| WidgetInfo::labeled(Role::GraphicsObject, true, label));
    ui.ctx().accesskit_node_builder(response_id(), |node| {
        if let Some(value) = item.working_surface(quantity) {
            node.set_value(units::temperature(value, unit));
        }
        node.set_description(item.results().which_parcel.clone());
    });
    if response.has_focus() {
        ui.painter().rect_stroke(
            frame,
            2.0,
            Stroke::new(2.0, paint.theme.accent),
            StrokeKind::Inside,
        );
    }
    asks.describe(&response, || {
        handle::line(paint, item, quantity).unwrap_or_else(|| name(quantity).to_owned())
    });
    response.on_hover_cursor(CursorIcon::ResizeHorizontal);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn labels_keep_clear_of_each_other_and_of_the_edge() {
        let frame = Rect::from_min_size(pos2(0.0, 0.0), vec2(300.0, 120.0));
        let size = vec2(60.0, 12.0);
        let at = pos2(150.0, 60.0);
        let mut taken = Vec::new();
        for _ in 0..4 {
            let rect = clear_place(at, size, frame, &taken);
            assert!(taken.iter().all(|other: &Rect| !other.intersects(rect)));
            assert!(frame.contains_rect(rect));
            taken.push(rect);
        }
        let corner = clear_place(pos2(2.0, 2.0), size, frame, &[]);
        assert!(frame.contains_rect(corner), "{corner:?}");
    }

    #[test]
    fn lines_stand_at_round_values() {
        let check = |most, lines, expect: &[f64]| {
            let values: Vec<f64> = marks(most, lines).iter().map(|mark| mark.value).collect();
            assert_eq!(values, expect);
        };
        check(5900.0, 3.0, &[0.0, 2000.0, 4000.0]);
        check(5900.0, 7.0, &[0.0, 1000.0, 2000.0, 3000.0, 4000.0, 5000.0]);
        check(120.0, 3.0, &[0.0, 50.0, 100.0]);
    }

    #[test]
    fn a_sentence_begins_with_a_capital() {
        assert_eq!(capitalised("surface inhibited"), "Surface inhibited");
        assert_eq!(capitalised("θ rises"), "Θ rises");
        assert_eq!(capitalised(""), "");
    }
}
