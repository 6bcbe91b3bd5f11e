//! Columns of a profile as curves at the resolution of the screen.

use crate::{Geometry, Point, Rect};
use dewbound_sounding::Profile;

/// Height of the rows within which only the first, last and extreme points of a curve are kept, points.
const ROW: f64 = 1.0;

/// Thins a curve to screen rows: of the points in a row the first, the leftmost, the rightmost and the last stay, in
/// their order. Extremes are kept exactly.
#[derive(Debug)]
pub(crate) struct Thinned {
    pub points: Vec<Point>,
    row: i64,
    /// First, leftmost, rightmost and last point of the open row, each with its order.
    open: Option<[(u32, Point); 4]>,
    order: u32,
}

impl Thinned {
    pub fn new() -> Self {
        Self {
            points: Vec::new(),
            row: i64::MIN,
            open: None,
            order: 0,
        }
    }

    pub fn push(&mut self, point: Point) {
        let row = (point.y / ROW).floor() as i64;
        self.order += 1;
        let this = (self.order, point);
        match &mut self.open {
            Some([_, left, right, last]) if row == self.row => {
                if point.x < left.1.x {
                    *left = this;
                }
                if point.x > right.1.x {
                    *right = this;
                }
                *last = this;
            }
            _ => {
                self.close();
                self.row = row;
                self.open = Some([this; 4]);
            }
        }
    }

    fn close(&mut self) {
        if let Some(mut kept) = self.open.take() {
            kept.sort_by_key(|&(order, _)| order);
            let mut before = None;
            for (order, point) in kept {
                if before != Some(order) {
                    self.points.push(point);
                }
                before = Some(order);
            }
        }
    }

    pub fn finish(mut self) -> Vec<Point> {
        self.close();
        self.points
    }
}

/// Temperature and dew point of a profile as curves. Straight between known levels, as the numbers are computed (linear in
/// ln p); the dew point ends at its last known level.
#[derive(Debug, Default)]
pub(crate) struct Curves {
    pub temperature: Vec<Point>,
    pub dewpoint: Vec<Point>,
}

impl Curves {
    pub fn of(profile: &Profile, geometry: &Geometry) -> Self {
        let plot = geometry.plot();
        let mut temperature = Column::new(&plot);
        let mut dewpoint = Column::new(&plot);
        for (row, &pa) in profile.pressure.iter().enumerate() {
            let t = profile.temperature.get(row).copied().flatten();
            let td = profile.dewpoint.get(row).copied().flatten();
            if (t.is_none() && td.is_none()) || !(pa.is_finite() && pa > 0.0) {
                continue;
            }
            let zero = geometry.place(pa, 0.0);
            let place = |k: f64| Point::new(zero.x + k * geometry.points_per_kelvin(), zero.y);
            if let Some(t) = t.filter(|t| t.is_finite()) {
                temperature.push(place(t));
            }
            if let Some(td) = td.filter(|td| td.is_finite()) {
                dewpoint.push(place(td));
            }
        }
        Self {
            temperature: temperature.curve.finish(),
            dewpoint: dewpoint.curve.finish(),
        }
    }
}

/// One column: points beyond the plot are left out but for the neighbours of those inside.
struct Column {
    curve: Thinned,
    top: f64,
    bottom: f64,
    /// The last point below the plot, held back until one inside follows.
    below: Option<Point>,
    done: bool,
}

impl Column {
    fn new(plot: &Rect) -> Self {
        Self {
            curve: Thinned::new(),
            top: plot.top,
            bottom: plot.bottom,
            below: None,
            done: false,
        }
    }

    fn push(&mut self, point: Point) {
        if self.done {
            return;
        }
        if point.y > self.bottom {
            self.below = Some(point);
            return;
        }
        if let Some(below) = self.below.take() {
            self.curve.push(below);
        }
        self.curve.push(point);
        self.done = point.y < self.top;
    }
}

/// How far left and right the drawn curves reach, by height.
#[derive(Debug)]
pub(crate) struct Silhouette {
    top: f64,
    left: Vec<f64>,
    right: Vec<f64>,
}

/// Height of a bin of the silhouette, points.
const BIN: f64 = 4.0;

impl Silhouette {
    pub fn new(plot: &Rect) -> Self {
        // A frame of a wall of screens is still only a few thousand bins.
        let bins = ((plot.height() / BIN).ceil().clamp(0.0, 20_000.0) as usize) + 1;
        Self {
            top: plot.top,
            left: vec![f64::INFINITY; bins],
            right: vec![f64::NEG_INFINITY; bins],
        }
    }

    fn bin(&self, y: f64) -> usize {
        (((y - self.top) / BIN).max(0.0) as usize).min(self.left.len() - 1)
    }

    pub fn add(&mut self, points: &[Point]) {
        let height = self.left.len() as f64 * BIN;
        for pair in points.windows(2) {
            let &[a, b] = pair else { continue };
            let (upper, lower) = if a.y <= b.y { (a, b) } else { (b, a) };
            if lower.y < self.top || upper.y > self.top + height || !(a.x + b.x).is_finite() {
                continue;
            }
            if self.bin(upper.y) == self.bin(lower.y) {
                let bin = self.bin(upper.y);
                self.left[bin] = self.left[bin].min(a.x.min(b.x));
                self.right[bin] = self.right[bin].max(a.x.max(b.x));
                continue;
            }
            for bin in self.bin(upper.y)..=self.bin(lower.y) {
                let start = self.top + bin as f64 * BIN;
                let at = |y: f64| {
                    let share = (y - upper.y) / (lower.y - upper.y).max(1e-9);
                    upper.x + share.clamp(0.0, 1.0) * (lower.x - upper.x)
                };
                for x in [at(start), at(start + BIN)] {
                    self.left[bin] = self.left[bin].min(x);
                    self.right[bin] = self.right[bin].max(x);
                }
            }
        }
    }

    /// Leftmost and rightmost x of any curve between two heights; `None` where there is none.
    pub fn between(&self, y0: f64, y1: f64) -> Option<(f64, f64)> {
        let (upper, lower) = (self.bin(y0.min(y1)), self.bin(y0.max(y1)));
        let left = self.left[upper..=lower]
            .iter()
            .copied()
            .fold(f64::INFINITY, f64::min);
        let right = self.right[upper..=lower]
            .iter()
            .copied()
            .fold(f64::NEG_INFINITY, f64::max);
        (left <= right).then_some((left, right))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::View;
    use dewbound_sounding::thermo::{Pressure, Temperature};
    use proptest::prelude::*;

    fn geometry() -> Geometry {
        Geometry::new(Rect::new(0.0, 0.0, 900.0, 700.0), View::default())
    }

    fn profile(temperatures: &[f64]) -> Profile {
        let n = temperatures.len();
        let pressure: Vec<f64> = (0..n)
            .map(|i| 100_000.0 * (-2.2 * i as f64 / n as f64).exp())
            .collect();
        Profile {
            temperature: temperatures.iter().map(|&t| Some(t)).collect(),
            dewpoint: temperatures.iter().map(|&t| Some(t - 5.0)).collect(),
            height: vec![None; n],
            wind: vec![None; n],
            received: (0..n).map(Some).collect(),
            pressure,
            ..Profile::default()
        }
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 60, failure_persistence: None, ..ProptestConfig::default() })]

        /// In every screen row the thinned curve reaches exactly as far left and right as the full one, whatever the spikes.
        #[test]
        fn thinning_keeps_the_extremes_of_every_row(noise in proptest::collection::vec(-6.0..6.0f64, 6000)) {
            let temperatures: Vec<f64> = noise.iter().enumerate().map(|(i, n)| 300.0 - 0.013 * i as f64 + n).collect();
            let (geometry, profile) = (geometry(), profile(&temperatures));
            let thin = Curves::of(&profile, &geometry).temperature;
            let rows = |points: &[Point]| {
                let mut rows = std::collections::BTreeMap::<i64, (f64, f64)>::new();
                for p in points {
                    let row = rows.entry((p.y / ROW).floor() as i64).or_insert((p.x, p.x));
                    *row = (row.0.min(p.x), row.1.max(p.x));
                }
                rows
            };
            let zero = |pa: f64| geometry.place(pa, 0.0);
            let full: Vec<Point> = profile.pressure.iter().zip(&temperatures)
                .map(|(&pa, &t)| Point::new(zero(pa).x + t * geometry.points_per_kelvin(), zero(pa).y)).collect();
            prop_assert_eq!(rows(&thin), rows(&full));
            prop_assert!(thin.len() <= 4 * rows(&full).len());
        }
    }

    #[test]
    fn coded_levels_are_all_kept() {
        let curve = Curves::of(&profile(&[300.0, 290.0, 270.0, 250.0, 220.0]), &geometry());
        assert_eq!(curve.temperature.len(), 5);
        let p = geometry().point(Pressure::from_pa(100_000.0), Temperature::from_k(300.0));
        assert!(curve.temperature[0].distance(p) < 1e-9);
    }

    #[test]
    fn levels_far_outside_are_left_out_but_their_neighbours_are_not() {
        let view = View {
            bottom_hpa: 600.0,
            top_hpa: 400.0,
            ..View::default()
        };
        let geometry = Geometry::new(Rect::new(0.0, 0.0, 900.0, 700.0), view);
        let curve = Curves::of(&profile(&[250.0; 200]), &geometry).temperature;
        let plot = geometry.plot();
        assert!(curve[0].y > plot.bottom && curve[1].y <= plot.bottom);
        let n = curve.len();
        assert!(curve[n - 1].y < plot.top && curve[n - 2].y >= plot.top);
    }

    #[test]
    fn the_silhouette_spans_long_segments() {
        let plot = Rect::new(0.0, 0.0, 100.0, 100.0);
        let mut silhouette = Silhouette::new(&plot);
        silhouette.add(&[Point::new(0.0, 100.0), Point::new(100.0, 0.0)]);
        let (left, right) = silhouette.between(50.0, 50.0).unwrap();
        assert!(
            (left - 48.0).abs() < 1e-9 && (right - 52.0).abs() < 1e-9,
            "{left} {right}"
        );
    }
}
