//! The parcel: its path, the band over the interval, and the areas that are CAPE and CIN.

use crate::canvas::{Canvas, Lettering};
use crate::curve::Silhouette;
use crate::hatch::{Hatching, Pair, Row, areas, hatch};
use crate::{
    Anchor, Dash, Geometry, Ink, Item, ParcelDrawing, Point, Rect, Stroke, text_width, wording,
};
use dewbound_sounding::thermo::{Air, Environment, Pressure, parcel_path};

/// Distance of computed rows, points.
const STEP: f64 = 2.0;

/// How far beyond its last buoyant level a path is drawn, e-folds of pressure.
const BEYOND: f64 = 0.12;
/// Least length of a drawn path, e-folds of pressure.
const LEAST_ASCENT: f64 = 0.9;

/// CAPE: flat strokes rising to the right.
pub(crate) const CAPE: Hatching = Hatching {
    slope: -2.2,
    spacing: 8.0,
};
/// CIN: flat strokes falling to the right, denser.
pub(crate) const CIN: Hatching = Hatching {
    slope: 2.2,
    spacing: 4.5,
};

/// A parcel's path and areas at the resolution of the screen.
#[derive(Debug, Default)]
pub(crate) struct ParcelPicture {
    /// The working parcel's virtual temperature.
    pub path: Vec<Point>,
    /// The surroundings' virtual temperature, from the start to the top of the highest area.
    pub around: Vec<Point>,
    /// The band over the interval, in the pieces that are in sight.
    pub band: Vec<Vec<Row>>,
    /// Areas of CAPE.
    pub cape: Vec<Vec<Row>>,
    /// Areas of CIN.
    pub cin: Vec<Vec<Row>>,
    /// LCL, LFC and EL in sight: name, pressure, right end of the curves there.
    pub marks: Vec<(&'static str, Pressure, Point)>,
}

/// x of the virtual temperature of the parcel from `start` at each of the rows it reaches.
fn path_at(
    geometry: &Geometry,
    start: Air,
    drawing: &ParcelDrawing<'_>,
    rows: &[Pressure],
) -> Vec<Option<f64>> {
    let states = parcel_path(start, drawing.method, rows);
    let mut states = states.iter().peekable();
    rows.iter()
        .map(|row| {
            let state = states.next_if(|state| state.pressure == *row)?;
            let point = geometry.point(state.pressure, state.virtual_temperature);
            point.x.is_finite().then_some(point.x)
        })
        .collect()
}

impl ParcelPicture {
    pub fn of(geometry: &Geometry, drawing: &ParcelDrawing<'_>, environment: &Environment) -> Self {
        let plot = geometry.plot();
        let ascent = drawing.ascent;
        let special = [
            Some(ascent.start.pressure),
            Some(ascent.lcl.pressure),
            ascent.lfc,
            ascent.el,
            environment
                .pressure()
                .last()
                .map(|&pa| Pressure::from_pa(pa)),
        ];
        let y_start = geometry.y(ascent.start.pressure).min(plot.bottom);
        let y_end = environment
            .pressure()
            .last()
            .map_or(plot.top, |&pa| geometry.y_of_pa(pa).max(plot.top));
        let mut rows: Vec<Pressure> = special
            .into_iter()
            .flatten()
            .filter(|&p| {
                let y = geometry.y(p);
                y >= y_end - 1e-6 && y <= y_start + 1e-6
            })
            .collect();
        let count = ((y_start - y_end) / STEP).clamp(0.0, 20_000.0) as usize;
        rows.extend((0..=count).map(|i| geometry.pressure_at(y_start - i as f64 * STEP)));
        if y_end < y_start {
            rows.push(geometry.pressure_at(y_end));
        }
        rows.sort_by(|a, b| b.pa().total_cmp(&a.pa()));
        rows.dedup();

        let parcel = path_at(geometry, ascent.start, drawing, &rows);
        let mut picture = Self::default();
        let mut pairs = Vec::with_capacity(rows.len());
        for (&row, &parcel) in rows.iter().zip(&parcel) {
            let Some(parcel) = parcel else { continue };
            let y = geometry.y(row);
            picture.path.push(Point::new(parcel, y));
            if let Some((_, tv)) = environment.virtual_at(row) {
                let around = geometry.place(row.pa(), tv).x;
                pairs.push(Pair { y, around, parcel });
            }
        }
        if let Some(interval) = drawing.interval {
            picture.band = band(geometry, drawing, interval, &rows, &parcel);
        }
        picture.end(geometry, drawing, &pairs);
        picture.areas(geometry, drawing, &pairs);
        picture.marks(geometry, drawing, &pairs);
        picture
    }

    /// Ends path and band some way above the last place where either is warmer than its surroundings: beyond it they say nothing.
    fn end(&mut self, geometry: &Geometry, drawing: &ParcelDrawing<'_>, pairs: &[Pair]) {
        // Rows run upward.
        let warm = |y: f64, x: f64| {
            let here = pairs.get(pairs.partition_point(|p| p.y > y + 1e-6));
            here.is_some_and(|p| (p.y - y).abs() < STEP && x >= p.around)
        };
        let path = pairs
            .iter()
            .rev()
            .find(|p| p.parcel >= p.around)
            .map(|p| p.y);
        let band = self
            .band
            .iter()
            .flatten()
            .filter(|row| warm(row.0, row.2))
            .map(|row| row.0);
        let band = band.reduce(f64::min);
        let highest = [path, band]
            .into_iter()
            .flatten()
            .fold(f64::INFINITY, f64::min);
        let start = geometry.y(drawing.ascent.start.pressure);
        let end = (highest - BEYOND * geometry.points_per_efold())
            .min(start - LEAST_ASCENT * geometry.points_per_efold());
        self.path.retain(|p| p.y >= end);
        for band in &mut self.band {
            band.retain(|row| row.0 >= end);
        }
    }

    /// CAPE is all positive area from the LCL to the EL (the top, when the parcel is still buoyant there); CIN all negative area from the start to
    /// the LFC; without free convection neither.
    fn areas(&mut self, geometry: &Geometry, drawing: &ParcelDrawing<'_>, pairs: &[Pair]) {
        let ascent = drawing.ascent;
        let (Some(lfc), Some(last)) = (ascent.lfc, pairs.last()) else {
            return;
        };
        let lcl = geometry.y(ascent.lcl.pressure);
        let top = ascent.el.map_or(last.y, |el| geometry.y(el));
        self.cape = areas(pairs, true, lcl, top);
        self.cin = areas(
            pairs,
            false,
            geometry.y(ascent.start.pressure),
            geometry.y(lfc),
        );
        self.around = pairs
            .iter()
            .filter(|p| p.y >= top - 1e-6)
            .map(|p| Point::new(p.around, p.y))
            .collect();
    }

    fn marks(&mut self, geometry: &Geometry, drawing: &ParcelDrawing<'_>, pairs: &[Pair]) {
        let ascent = drawing.ascent;
        let levels = [
            ("LCL", Some(ascent.lcl.pressure)),
            ("LFC", ascent.lfc),
            ("EL", ascent.el),
        ];
        for (name, level) in levels {
            let Some(level) = level else { continue };
            let y = geometry.y(level);
            let near = pairs
                .iter()
                .min_by(|a, b| (a.y - y).abs().total_cmp(&(b.y - y).abs()))
                .filter(|p| (p.y - y).abs() < STEP);
            if let Some(pair) = near {
                let at = Point::new(pair.parcel.max(pair.around), y);
                if geometry.plot().contains(at) {
                    self.marks.push((name, level, at));
                }
            }
        }
    }

    /// "CAPE" and "CIN" inside their areas, where those are wide and tall enough.
    pub fn name_areas(&self, canvas: &mut Canvas, plot: &Rect) {
        for (areas, name, ink) in [
            (&self.cape, "CAPE", Ink::CapeHatch),
            (&self.cin, "CIN", Ink::CinHatch),
        ] {
            let lettering = Lettering::new(Anchor::Centre, 12.0, ink).backed().strong();
            let need = text_width(name, 12.0) + 14.0;
            // A name would hide a small area.
            let tall = |area: &&Vec<Row>| match (area.first(), area.last()) {
                (Some(low), Some(high)) => low.0 - high.0 > 70.0,
                _ => false,
            };
            let widest = areas
                .iter()
                .filter(tall)
                .flatten()
                .map(|&(y, left, right)| (y, left.max(plot.left), right.min(plot.right)))
                .max_by(|a, b| (a.2 - a.1).total_cmp(&(b.2 - b.1)))
                .filter(|(_, left, right)| right - left > need);
            if let Some((y, left, right)) = widest {
                let at = Point::new((left + right) / 2.0, y);
                canvas.text_at_first([(at, Anchor::Centre)], name, lettering, &plot.grown(-2.0));
            }
        }
    }

    /// Fills and lines, in painting order.
    pub fn paint(&self, canvas: &mut Canvas, plot: &Rect) {
        for rows in self.band.iter().filter(|rows| rows.len() >= 2) {
            canvas.scene.items.push(Item::Band {
                rows: rows.clone(),
                ink: Ink::ParcelBand,
            });
        }
        for (areas, hatching, ink) in [
            (&self.cape, CAPE, Ink::CapeHatch),
            (&self.cin, CIN, Ink::CinHatch),
        ] {
            let lines: Vec<_> = areas
                .iter()
                .flat_map(|area| hatch(area, hatching, plot))
                .collect();
            canvas.segments(&lines, plot, ink, Stroke::solid(1.2));
        }
        canvas.line(
            &self.around,
            plot,
            Ink::VirtualTemperature,
            Stroke::dashed(1.4, Dash::Dots),
        );
        canvas.line(
            &self.path,
            plot,
            Ink::Parcel,
            Stroke::dashed(1.9, Dash::Long),
        );
    }

    /// Ticks and labels of LCL, LFC and EL, to the right of everything.
    pub fn paint_marks(&self, canvas: &mut Canvas, plot: &Rect, silhouette: &Silhouette) {
        let lettering = Lettering::new(Anchor::Left, 12.0, Ink::LevelMark).backed();
        for &(name, level, at) in &self.marks {
            let text = format!("{name} {}", wording::pressure(level.hpa()));
            let reach = silhouette
                .between(at.y - 4.0, at.y + 4.0)
                .map_or(at.x, |(_, right)| right.max(at.x));
            let x = (reach + 16.0).min(plot.right);
            let down = [0.0, -8.0, 8.0, -16.0, 16.0, -24.0, 24.0];
            let places = down
                .iter()
                .flat_map(|dy| [(x, *dy), (x + 40.0, *dy)])
                .map(|(x, dy)| (Point::new(x, at.y + dy), Anchor::Left));
            if let Some(place) = canvas.text_at_first(places, &text, lettering, &plot.grown(-2.0)) {
                let tick = [[at, Point::new(place.x - 3.0, place.y)]];
                canvas.segments(&tick, plot, Ink::LevelMark, Stroke::solid(1.4));
            } else {
                let tick = [[Point::new(at.x - 5.0, at.y), Point::new(at.x + 10.0, at.y)]];
                canvas.segments(&tick, plot, Ink::LevelMark, Stroke::solid(1.4));
            }
        }
    }
}

/// Between the smallest and the largest of the paths of both ends and the working parcel, cut to the plot.
fn band(
    geometry: &Geometry,
    drawing: &ParcelDrawing<'_>,
    interval: [Air; 2],
    rows: &[Pressure],
    working: &[Option<f64>],
) -> Vec<Vec<Row>> {
    let plot = geometry.plot();
    let [one, other] = interval.map(|start| path_at(geometry, start, drawing, rows));
    let mut bands = vec![Vec::new()];
    for ((row, working), (one, other)) in rows.iter().zip(working).zip(one.iter().zip(&other)) {
        let known = || [working, one, other].into_iter().flatten().copied();
        let left = known().fold(f64::INFINITY, f64::min).max(plot.left);
        let right = known().fold(f64::NEG_INFINITY, f64::max).min(plot.right);
        let y = geometry.y(*row).clamp(plot.top, plot.bottom);
        match bands.last_mut() {
            Some(band) if left <= right => band.push((y, left, right)),
            Some(band) if !band.is_empty() => bands.push(Vec::new()),
            _ => {}
        }
    }
    bands
}
