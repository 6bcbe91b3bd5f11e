//! The sounding on top of the isopleths.

use crate::canvas::{Canvas, Lettering};
use crate::curve::{Curves, Silhouette};
use crate::hatch::Row;
use crate::parcel::ParcelPicture;
use crate::readout::{INSET, paint_cursor, readout_box};
use crate::{
    Anchor, Dash, Geometry, Ink, Picture, Point, Readout, Rect, Scene, Stroke, Touch, brackets,
    legend, surface, winds,
};
use dewbound_sounding::Profile;

/// Departures of another version of a curve below this (points) are not drawn: the working curve covers them.
const DEPARTURE: f64 = 0.7;

/// The painted sounding and what can be touched in it.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Foreground {
    /// To be painted over the background.
    pub scene: Scene,
    /// What can be touched.
    pub touch: Touch,
    /// What the cursor reads (painted too).
    pub readout: Option<Readout>,
}

/// Curves, parcel, areas, brackets, handles, wind, height scale and cursor. Cheap enough for every frame.
pub fn foreground(geometry: &Geometry, picture: &Picture<'_>) -> Foreground {
    let plot = geometry.plot();
    let mut canvas = Canvas::new(geometry.frame());
    let mut silhouette = Silhouette::new(&plot);

    let working = Curves::of(picture.working, geometry);
    let received = differing(picture.received, picture.working).map(|p| Curves::of(p, geometry));
    let preview = differing(picture.preview, picture.working).map(|p| Curves::of(p, geometry));
    let parcel = parcel_picture(geometry, picture);
    for curves in [Some(&working), received.as_ref(), preview.as_ref()]
        .into_iter()
        .flatten()
    {
        silhouette.add(&curves.temperature);
        silhouette.add(&curves.dewpoint);
    }
    if let Some(parcel) = &parcel {
        silhouette.add(&parcel.path);
        for band in &parcel.band {
            let side = |pick: fn(&Row) -> f64| -> Vec<Point> {
                band.iter()
                    .map(|row| Point::new(pick(row), row.0))
                    .collect()
            };
            silhouette.add(&side(|row| row.1));
            silhouette.add(&side(|row| row.2));
        }
    }

    if let Some(pa) = surface_pressure(picture) {
        surface::paint_ground(&mut canvas, geometry, pa);
    }
    let departures = |canvas: &mut Canvas, other: &Option<Curves>, inks: [Ink; 2], stroke| {
        let other = other.as_ref()?;
        let [td, t] = inks;
        Some([
            paint_departures(
                canvas,
                &plot,
                &other.dewpoint,
                &working.dewpoint,
                td,
                stroke,
            ),
            paint_departures(
                canvas,
                &plot,
                &other.temperature,
                &working.temperature,
                t,
                stroke,
            ),
        ])
    };
    let inks = [Ink::ReceivedDewpoint, Ink::ReceivedTemperature];
    let from_received = departures(
        &mut canvas,
        &received,
        inks,
        Stroke::dashed(1.3, Dash::Short),
    );
    if let Some(parcel) = &parcel {
        parcel.paint(&mut canvas, &plot);
    }
    let stroke = Stroke::solid(2.6);
    canvas.line(&working.dewpoint, &plot, Ink::Dewpoint, stroke);
    canvas.line(&working.temperature, &plot, Ink::Temperature, stroke);
    let inks = [Ink::PreviewDewpoint, Ink::PreviewTemperature];
    let from_preview = departures(
        &mut canvas,
        &preview,
        inks,
        Stroke::dashed(2.0, Dash::DashDot),
    );

    // Labels find their places in order of importance: handles, corner boxes, levels, findings, names of curves.
    let places = picture
        .surface
        .map(|marks| surface::places(geometry, marks))
        .unwrap_or_default();
    surface::reserve(&mut canvas, &places);
    let legend = picture
        .parcel
        .as_ref()
        .and_then(|drawing| legend::paint(&mut canvas, &plot, drawing));
    let readout_place = readout_box(&plot, legend.map_or(plot.top, |l| l.bottom) + INSET);
    canvas.taken.extend(readout_place);
    if let Some(marks) = picture.surface {
        surface::paint_labels(
            &mut canvas,
            geometry,
            marks,
            &places,
            &silhouette,
            picture.units,
        );
    }
    if let Some(parcel) = &parcel {
        parcel.paint_marks(&mut canvas, &plot, &silhouette);
        parcel.name_areas(&mut canvas, &plot);
    }
    let discs = brackets::paint(&mut canvas, geometry, picture.brackets, &silhouette);
    name_curves(&mut canvas, &plot, &working);
    name_departure(
        &mut canvas,
        &plot,
        from_received.unwrap_or_default(),
        "as received",
        Ink::QuietLabel,
    );
    name_departure(
        &mut canvas,
        &plot,
        from_preview.unwrap_or_default(),
        "preview",
        Ink::PreviewDewpoint,
    );

    winds::paint(&mut canvas, geometry, picture.working, picture.southern);
    if let Some(heights) = picture.heights {
        heights.paint(&mut canvas, geometry, picture.units);
    }
    let mut upper = plot.top + 6.0;
    if let Some(stamp) = picture.stamp {
        let lettering = Lettering::new(Anchor::Left, 13.0, Ink::Stamp)
            .backed()
            .strong();
        let at = Point::new(plot.left + 8.0, plot.top + 13.0);
        canvas.text(at, stamp, lettering);
        upper = plot.top + 22.0;
    }
    if let Some(marks) = picture.surface {
        surface::paint_handles(&mut canvas, marks, &places);
    }
    let cursor = picture.cursor.filter(|&at| plot.contains(at));
    let readout = cursor.map(|at| {
        let pressure = geometry.pressure_at(at.y);
        let readout = Readout::of(picture.working, pressure, picture.heights, picture.units);
        let places = (readout_place, upper);
        paint_cursor(
            &mut canvas,
            geometry,
            picture.working,
            pressure,
            &readout,
            places,
        );
        readout
    });
    Foreground {
        scene: canvas.scene,
        touch: Touch {
            handles: places,
            brackets: discs,
        },
        readout,
    }
}

/// A profile whose curves are not those of the working one.
fn differing<'a>(profile: Option<&'a Profile>, working: &Profile) -> Option<&'a Profile> {
    profile.filter(|p| {
        p.pressure != working.pressure
            || p.temperature != working.temperature
            || p.dewpoint != working.dewpoint
    })
}

fn surface_pressure(picture: &Picture<'_>) -> Option<f64> {
    let from_marks = picture.surface.map(|s| s.pressure.pa());
    from_marks.or_else(|| picture.working.surface_pressure().map(|p| p.pa()))
}

fn parcel_picture(geometry: &Geometry, picture: &Picture<'_>) -> Option<ParcelPicture> {
    let drawing = picture.parcel.as_ref()?;
    match drawing.environment {
        Some(environment) => Some(ParcelPicture::of(geometry, drawing, environment)),
        None => {
            let environment = picture.working.environment().ok()?;
            Some(ParcelPicture::of(geometry, drawing, &environment))
        }
    }
}

/// "T" and "Td" near the upper ends of their curves.
fn name_curves(canvas: &mut Canvas, plot: &Rect, curves: &Curves) {
    let named = [
        (
            &curves.temperature,
            "T",
            Ink::Temperature,
            1.0,
            Anchor::Left,
        ),
        (&curves.dewpoint, "Td", Ink::Dewpoint, -1.0, Anchor::Right),
    ];
    for (points, name, ink, side, anchor) in named {
        let seen: Vec<Point> = points
            .iter()
            .copied()
            .filter(|&p| plot.contains(p))
            .collect();
        let (Some(low), Some(high)) = (seen.first(), seen.last()) else {
            continue;
        };
        // From a fifth of the visible course downward, clear of what the curve does nearby.
        let places = (0..10).filter_map(|i| {
            let y = high.y + (low.y - high.y) * (0.2 + 0.07 * f64::from(i));
            let near = seen.iter().filter(|p| (p.y - y).abs() < 9.0);
            let reach = near
                .map(|p| side * p.x)
                .reduce(f64::max)
                .or_else(|| Some(side * x_at(&seen, y)?))?;
            Some((Point::new(side * (reach + 5.0), y), anchor))
        });
        let lettering = Lettering::new(anchor, 13.0, ink).backed().strong();
        let places: Vec<_> = places.collect();
        canvas.text_at_first(places, name, lettering, &plot.grown(-2.0));
    }
}

/// Draws the stretches of another version of a curve that depart from the working one. Gives the place of largest departure: how far, where,
/// to which side.
fn paint_departures(
    canvas: &mut Canvas,
    plot: &Rect,
    other: &[Point],
    own: &[Point],
    ink: Ink,
    stroke: Stroke,
) -> Option<(f64, Point, f64)> {
    let mut most: Option<(f64, Point, f64)> = None;
    let mut piece: Vec<Point> = Vec::new();
    for pair in other.windows(2) {
        let &[a, b] = pair else { continue };
        let steps = ((a.y - b.y).abs() / 4.0).ceil().clamp(1.0, 500.0) as usize;
        let mut departs = false;
        for step in 0..=steps {
            let share = step as f64 / steps as f64;
            let p = Point::new(a.x + share * (b.x - a.x), a.y + share * (b.y - a.y));
            // Where the working curve has ended the other one stands alone.
            let apart = x_at(own, p.y).map_or(f64::INFINITY, |x| p.x - x);
            departs |= apart.abs() > DEPARTURE;
            if plot.contains(p)
                && apart.is_finite()
                && most.is_none_or(|(best, ..)| apart.abs() > best)
            {
                most = Some((apart.abs(), p, apart.signum()));
            }
        }
        if departs {
            if piece.is_empty() {
                piece.push(a);
            }
            piece.push(b);
        } else {
            canvas.line(&std::mem::take(&mut piece), plot, ink, stroke);
        }
    }
    canvas.line(&piece, plot, ink, stroke);
    most
}

/// Names another version of the profile where it departs most from the working one.
fn name_departure(
    canvas: &mut Canvas,
    plot: &Rect,
    most: impl IntoIterator<Item = Option<(f64, Point, f64)>>,
    name: &str,
    ink: Ink,
) {
    let most = most
        .into_iter()
        .flatten()
        .max_by(|a, b| a.0.total_cmp(&b.0));
    if let Some((_, at, side)) = most.filter(|(apart, ..)| *apart > 4.0) {
        let lettering = Lettering::new(Anchor::Left, 11.5, ink).backed();
        let outward = if side > 0.0 {
            Anchor::Left
        } else {
            Anchor::Right
        };
        let places = [0.0, -14.0, 14.0, -28.0, 28.0]
            .map(|dy| (Point::new(at.x + side * 8.0, at.y + dy), outward));
        canvas.text_at_first(places, name, lettering, &plot.grown(-2.0));
    }
}

/// x of a curve at a height; the curve runs upward.
fn x_at(points: &[Point], y: f64) -> Option<f64> {
    let above = points.partition_point(|p| p.y > y);
    let b = points.get(above)?;
    if b.y == y {
        return Some(b.x);
    }
    let a = points.get(above.checked_sub(1)?)?;
    let share = (a.y - y) / (a.y - b.y).max(1e-9);
    Some(a.x + share.clamp(0.0, 1.0) * (b.x - a.x))
}

#[cfg(test)]
#[path = "foreground_tests.rs"]
mod tests;
