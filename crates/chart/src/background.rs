//! The isopleths of a view.

use crate::canvas::{Canvas, Lettering, clip_polyline};
use crate::isopleths::{
    Isopleth, dry_adiabats, isobars, isotherms, mixing_ratio_lines, moist_adiabats,
};
use crate::wording::fixed;
use crate::{Anchor, Dash, Geometry, Ink, Point, Rect, Scene, Stroke};
use dewbound_sounding::thermo::Pressure;

/// Font size of axis labels.
pub(crate) const AXIS: f64 = 12.5;
/// Font size of labels on isopleths.
const ON_LINE: f64 = 11.0;

/// Isopleths, plot edge and axis labels. Depends on nothing but the geometry: keep it while that stays.
pub fn background(geometry: &Geometry) -> Scene {
    let plot = geometry.plot();
    let mut canvas = Canvas::new(geometry.frame());
    let (dry, moist, mixing) = (
        dry_adiabats(geometry),
        moist_adiabats(geometry),
        mixing_ratio_lines(geometry),
    );
    let (therms, bars) = (isotherms(geometry), isobars(geometry));

    let families = [
        (&dry, Ink::DryAdiabat, Stroke::solid(0.7)),
        (&moist, Ink::MoistAdiabat, Stroke::dashed(0.8, Dash::Long)),
        (
            &mixing,
            Ink::MixingRatioLine,
            Stroke::dashed(0.9, Dash::Dots),
        ),
        (&therms, Ink::Isotherm, Stroke::solid(0.7)),
        (&bars, Ink::Isobar, Stroke::solid(0.7)),
    ];
    for (family, ink, stroke) in families {
        for line in family {
            if ink == Ink::Isotherm && line.value == 0.0 {
                canvas.line(
                    &line.points,
                    &plot,
                    Ink::FreezingIsotherm,
                    Stroke::dashed(1.6, Dash::DashDot),
                );
            } else {
                canvas.line(&line.points, &plot, ink, stroke);
            }
        }
    }

    mixing_labels(&mut canvas, &mixing, &plot);
    // Moist adiabats are farthest apart low down, dry ones high up: their labels keep to their own rows.
    let moist_row = geometry.y(Pressure::from_hpa(geometry.view().top_hpa.max(270.0)));
    let moist_row = moist_row.clamp(
        plot.top + 0.1 * plot.height(),
        plot.bottom - 0.3 * plot.height(),
    );
    row_labels(
        &mut canvas,
        &moist,
        &plot,
        moist_row,
        Ink::MoistAdiabatLabel,
        |v| format!("\u{3b8}w {} °C", trimmed(v)),
    );
    row_labels(
        &mut canvas,
        &dry,
        &plot,
        plot.top + 0.045 * plot.height() + 6.0,
        Ink::DryAdiabatLabel,
        |v| format!("{} K", trimmed(v)),
    );

    edge(&mut canvas, &plot);
    pressure_axis(&mut canvas, &bars, &plot);
    temperature_axis(&mut canvas, &therms, &plot);
    canvas.scene
}

/// A value with as many decimals as it needs.
fn trimmed(value: f64) -> String {
    let decimals = if (value - value.round()).abs() < 1e-6 {
        0
    } else {
        1
    };
    fixed(value, decimals)
}

fn edge(canvas: &mut Canvas, plot: &Rect) {
    let mut points = crate::canvas::corners(plot);
    points.extend(points.first().copied());
    let frame = canvas.frame;
    canvas.line(&points, &frame, Ink::Edge, Stroke::solid(1.2));
}

fn pressure_axis(canvas: &mut Canvas, bars: &[Isopleth], plot: &Rect) {
    let lettering = Lettering::new(Anchor::Right, AXIS, Ink::Label);
    let frame = canvas.frame;
    let title = Point::new(plot.left - 6.0, plot.top - 13.0);
    canvas.text(
        title,
        "hPa",
        Lettering {
            size: 11.0,
            ..lettering
        },
    );
    for bar in bars {
        if let Some(end) = bar.points.first() {
            let at = Point::new(plot.left - 6.0, end.y);
            canvas.text_at_first(
                [(at, Anchor::Right)],
                &trimmed(bar.value),
                lettering,
                &frame,
            );
        }
    }
}

fn temperature_axis(canvas: &mut Canvas, therms: &[Isopleth], plot: &Rect) {
    let frame = canvas.frame;
    let foot = Lettering::new(Anchor::Centre, AXIS, Ink::Label);
    let head = Lettering::new(Anchor::Centre, ON_LINE, Ink::IsothermLabel);
    let title = Point::new(plot.centre().x, plot.bottom + 26.0);
    canvas.text(title, "temperature, °C", Lettering { size: 11.0, ..foot });
    for therm in therms {
        let (Some(&low), Some(&high)) = (therm.points.first(), therm.points.last()) else {
            continue;
        };
        let text = trimmed(therm.value);
        if low.x >= plot.left && low.x <= plot.right {
            let at = Point::new(low.x, plot.bottom + 11.0);
            canvas.text_at_first([(at, Anchor::Centre)], &text, foot, &frame);
        }
        if high.x >= plot.left && high.x <= plot.right {
            let at = Point::new(high.x, plot.top - 9.0);
            canvas.text_at_first([(at, Anchor::Centre)], &text, head, &frame);
        }
    }
}

/// Mixing-ratio lines carry their value at their upper ends, the unit once.
fn mixing_labels(canvas: &mut Canvas, lines: &[Isopleth], plot: &Rect) {
    let lettering = Lettering::new(Anchor::Centre, ON_LINE, Ink::MixingRatioLabel).backed();
    let ends: Vec<(f64, Point)> = lines
        .iter()
        .filter_map(|line| {
            let inside = clip_polyline(&line.points, plot);
            let end = inside.last().and_then(|piece| piece.last()).copied()?;
            // Lines cut off by the right edge have no upper end in sight.
            (end.x < plot.right - 12.0).then_some((line.value, end))
        })
        .collect();
    let last = ends.len().saturating_sub(1);
    for (i, &(value, end)) in ends.iter().enumerate() {
        let text = trimmed(value);
        let y = (end.y - 8.0).max(plot.top + 8.0);
        if i == last {
            let text = format!("{text} g/kg");
            let shift = crate::text_width(&trimmed(value), ON_LINE) / 2.0;
            let places = [
                (Point::new(end.x - shift, y), Anchor::Left),
                (Point::new(end.x + shift, y), Anchor::Right),
            ];
            canvas.text_at_first(places, &text, lettering, plot);
        } else {
            canvas.text_at_first(
                [(Point::new(end.x, y), Anchor::Centre)],
                &text,
                lettering,
                plot,
            );
        }
    }
}

/// Labels along a row of the plot, turned with their lines; the free ones of them.
fn row_labels(
    canvas: &mut Canvas,
    lines: &[Isopleth],
    plot: &Rect,
    row: f64,
    ink: Ink,
    wording: impl Fn(f64) -> String,
) {
    for line in lines {
        // On the row if the line crosses it inside the plot.
        let crossing = line.points.windows(2).find_map(|pair| {
            let &[a, b] = pair else { return None };
            let share = (a.y - row) / (a.y - b.y);
            let x = a.x + share * (b.x - a.x);
            ((0.0..=1.0).contains(&share))
                .then_some((Point::new(x, row), (b.y - a.y).atan2(b.x - a.x)))
        });
        let Some((at, angle)) = crossing else {
            continue;
        };
        // Read from left to right whichever way the line runs.
        let angle = if angle.abs() > std::f64::consts::FRAC_PI_2 {
            angle - std::f64::consts::PI * angle.signum()
        } else {
            angle
        };
        let lettering = Lettering::new(Anchor::Centre, ON_LINE, ink)
            .backed()
            .turned(angle);
        canvas.text_at_first(
            [(at, Anchor::Centre)],
            &wording(line.value),
            lettering,
            &plot.grown(-2.0),
        );
    }
}

/// The background of the last geometry asked for.
#[derive(Debug, Clone, Default)]
pub struct BackgroundCache {
    kept: Option<(Geometry, Scene)>,
}

impl BackgroundCache {
    /// The background of this geometry, made anew only when it changed.
    pub fn get(&mut self, geometry: &Geometry) -> &Scene {
        if self.kept.as_ref().is_none_or(|(of, _)| of != geometry) {
            self.kept = None;
        }
        let (_, scene) = self
            .kept
            .get_or_insert_with(|| (*geometry, background(geometry)));
        scene
    }
}
