//! Where pressure and temperature lie in a frame.

use dewbound_sounding::{
    Profile,
    thermo::{Pressure, Temperature},
};

/// A place in points, x to the right, y downward.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Point {
    /// To the right.
    pub x: f64,
    /// Downward.
    pub y: f64,
}

impl Point {
    /// From its two coordinates.
    pub const fn new(x: f64, y: f64) -> Self {
        Self { x, y }
    }

    /// Distance to another point.
    pub fn distance(self, other: Self) -> f64 {
        let (dx, dy) = (self.x - other.x, self.y - other.y);
        (dx * dx + dy * dy).sqrt()
    }
}

/// An upright rectangle in points. Width and height are never negative.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Rect {
    /// Left edge.
    pub left: f64,
    /// Top edge.
    pub top: f64,
    /// Right edge, `>= left`.
    pub right: f64,
    /// Bottom edge, `>= top`.
    pub bottom: f64,
}

impl Rect {
    /// From corner and size; sizes that are negative or not numbers count as zero.
    pub fn new(left: f64, top: f64, width: f64, height: f64) -> Self {
        let finite = |v: f64| if v.is_finite() { v } else { 0.0 };
        let (left, top) = (finite(left), finite(top));
        Self {
            left,
            top,
            right: left + finite(width).max(0.0),
            bottom: top + finite(height).max(0.0),
        }
    }

    /// Width.
    pub fn width(&self) -> f64 {
        self.right - self.left
    }

    /// Height.
    pub fn height(&self) -> f64 {
        self.bottom - self.top
    }

    /// Middle.
    pub fn centre(&self) -> Point {
        Point::new(
            (self.left + self.right) / 2.0,
            (self.top + self.bottom) / 2.0,
        )
    }

    /// Whether a point lies inside or on the edge.
    pub fn contains(&self, point: Point) -> bool {
        point.x >= self.left
            && point.x <= self.right
            && point.y >= self.top
            && point.y <= self.bottom
    }

    /// Whether two rectangles share any area.
    pub fn overlaps(&self, other: &Self) -> bool {
        self.left < other.right
            && other.left < self.right
            && self.top < other.bottom
            && other.top < self.bottom
    }

    /// Whether another rectangle lies wholly inside.
    pub fn holds(&self, other: &Self) -> bool {
        other.left >= self.left
            && other.right <= self.right
            && other.top >= self.top
            && other.bottom <= self.bottom
    }

    /// Grown by `by` on every side (shrunk when negative, never inside out).
    pub fn grown(&self, by: f64) -> Self {
        let x = by.max(-self.width() / 2.0);
        let y = by.max(-self.height() / 2.0);
        Self {
            left: self.left - x,
            top: self.top - y,
            right: self.right + x,
            bottom: self.bottom + y,
        }
    }
}

/// Which part of the diagram is looked at. Independent of the frame: the same profile fits whatever the frame's shape.
///
/// Horizontally a point lies at `T + lean * ln(bottom / p)`, so isotherms lean to the right going up; the angle is
/// about 45 degrees in a frame somewhat wider than high, and zooming keeps it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct View {
    /// Pressure at the foot of the plot, hPa.
    pub bottom_hpa: f64,
    /// Pressure at the head of the plot, hPa.
    pub top_hpa: f64,
    /// Temperature at the lower left corner, degC.
    pub left_c: f64,
    /// Temperatures from the left to the right edge, K.
    pub span_k: f64,
    /// Shift of an isotherm for each e-fold of pressure, K.
    pub lean_k: f64,
}

impl Default for View {
    fn default() -> Self {
        Self {
            bottom_hpa: 1050.0,
            top_hpa: 100.0,
            left_c: -32.0,
            span_k: 78.0,
            lean_k: 25.0,
        }
    }
}

/// Pressures a view may reach, hPa.
const PRESSURE_LIMITS: (f64, f64) = (1.0, 1200.0);
/// Temperatures a view may reach at its foot, degC.
const TEMPERATURE_LIMITS: (f64, f64) = (-250.0, 150.0);
/// Narrowest and widest view in ln p.
const DEPTH_LIMITS: (f64, f64) = (0.02, 5.0);
/// Narrowest and widest view in K.
const SPAN_LIMITS: (f64, f64) = (1.0, 220.0);
/// Lean, K per e-fold of pressure.
const LEAN_LIMITS: (f64, f64) = (0.0, 80.0);

impl View {
    /// The default view, moved sideways (and its foot lowered) as far as the surface of this profile needs.
    pub fn fit(profile: &Profile) -> Self {
        let mut view = Self::default();
        let Some(row) = profile
            .surface
            .or_else(|| profile.temperature.iter().position(Option::is_some))
        else {
            return view;
        };
        if let Some(&pa) = profile.pressure.get(row) {
            // Room below the surface for the handles' marks.
            view.bottom_hpa = view.bottom_hpa.max(pa / 100.0 * 1.125);
        }
        let celsius = |column: &[Option<f64>]| {
            column
                .get(row)
                .copied()
                .flatten()
                .map(|k| Temperature::from_k(k).c())
                .filter(|c| c.is_finite())
        };
        let temperature = celsius(&profile.temperature);
        let dewpoint = celsius(&profile.dewpoint).or(temperature);
        if let (Some(t), Some(td)) = (temperature, dewpoint) {
            // A seventh of the span stays free to the right of T for the parcel, a tenth to the left of Td; T wins.
            let x = view.lean_k
                * (view.bottom_hpa * 100.0 / profile.pressure.get(row).copied().unwrap_or(1e5))
                    .ln();
            let left_most = td + x - 0.1 * view.span_k;
            let right_most = t + x - 0.86 * view.span_k;
            view.left_c = (view.left_c.min(left_most).max(right_most) / 2.0).round() * 2.0;
        }
        view.clamped()
    }

    /// The nearest view within the limits; anything that is not a number takes its default.
    pub fn clamped(self) -> Self {
        let default = Self::default();
        let or = |v: f64, d: f64| if v.is_finite() { v } else { d };
        let clamp = |v: f64, (low, high): (f64, f64)| v.clamp(low, high);
        let mut bottom = clamp(or(self.bottom_hpa, default.bottom_hpa), PRESSURE_LIMITS);
        let mut top = clamp(or(self.top_hpa, default.top_hpa), PRESSURE_LIMITS);
        if bottom < top {
            std::mem::swap(&mut bottom, &mut top);
        }
        let depth = clamp((bottom / top).ln(), DEPTH_LIMITS);
        top = bottom / depth.exp();
        if top < PRESSURE_LIMITS.0 {
            top = PRESSURE_LIMITS.0;
            bottom = top * depth.exp();
        }
        Self {
            bottom_hpa: bottom,
            top_hpa: top,
            left_c: clamp(or(self.left_c, default.left_c), TEMPERATURE_LIMITS),
            span_k: clamp(or(self.span_k, default.span_k), SPAN_LIMITS),
            lean_k: clamp(or(self.lean_k, default.lean_k), LEAN_LIMITS),
        }
    }

    /// ln of the pressure ratio foot to head.
    pub fn depth(&self) -> f64 {
        (self.bottom_hpa / self.top_hpa).ln()
    }
}

/// A view placed in a frame: the plot, and around it the margins for axis labels, height scale and wind.
///
/// Never panics and never yields anything but finite numbers for finite arguments, however small or odd the frame.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Geometry {
    frame: Rect,
    plot: Rect,
    wind: Rect,
    view: View,
}

/// Margin with the pressure labels.
const LEFT_MARGIN: f64 = 44.0;
/// Margin above the plot with the isotherm labels and the titles of the scales.
const TOP_MARGIN: f64 = 22.0;
/// Margin below the plot with the temperature labels.
const BOTTOM_MARGIN: f64 = 34.0;
/// Room for the height scale, between plot and wind.
const HEIGHT_MARGIN: f64 = 46.0;
/// Strip with the wind barbs.
const WIND_STRIP: f64 = 66.0;
/// Smallest plot kept by shrinking margins.
const LEAST_PLOT: f64 = 8.0;

impl Geometry {
    /// Places a view (clamped first) in a frame.
    pub fn new(frame: Rect, view: View) -> Self {
        let frame = Rect::new(frame.left, frame.top, frame.width(), frame.height());
        // Margins give way before the plot vanishes.
        let across = ((frame.width() - LEAST_PLOT) / (LEFT_MARGIN + HEIGHT_MARGIN + WIND_STRIP))
            .clamp(0.0, 1.0);
        let down = ((frame.height() - LEAST_PLOT) / (TOP_MARGIN + BOTTOM_MARGIN)).clamp(0.0, 1.0);
        let plot = Rect {
            left: frame.left + LEFT_MARGIN * across,
            top: frame.top + TOP_MARGIN * down,
            right: frame.right - (HEIGHT_MARGIN + WIND_STRIP) * across,
            bottom: frame.bottom - BOTTOM_MARGIN * down,
        };
        let wind = Rect {
            left: frame.right - WIND_STRIP * across,
            right: frame.right,
            ..plot
        };
        Self {
            frame,
            plot,
            wind,
            view: view.clamped(),
        }
    }

    /// The whole frame; nothing is ever drawn outside it.
    pub fn frame(&self) -> Rect {
        self.frame
    }

    /// The plot inside its margins.
    pub fn plot(&self) -> Rect {
        self.plot
    }

    /// The strip of the wind barbs.
    pub fn wind(&self) -> Rect {
        self.wind
    }

    /// The view, clamped.
    pub fn view(&self) -> View {
        self.view
    }

    /// Points for each K.
    pub fn points_per_kelvin(&self) -> f64 {
        self.plot.width().max(1e-3) / self.view.span_k
    }

    /// Points for each e-fold of pressure.
    pub fn points_per_efold(&self) -> f64 {
        self.plot.height().max(1e-3) / self.view.depth()
    }

    /// Height on the plot of a pressure.
    pub fn y(&self, pressure: Pressure) -> f64 {
        self.y_of_pa(pressure.pa())
    }

    /// Pressure at a height on the plot (or beyond it).
    pub fn pressure_at(&self, y: f64) -> Pressure {
        let efolds = (self.plot.bottom - y) / self.points_per_efold();
        Pressure::from_hpa(self.view.bottom_hpa * (-efolds.clamp(-50.0, 50.0)).exp())
    }

    /// Place of a pressure and temperature.
    pub fn point(&self, pressure: Pressure, temperature: Temperature) -> Point {
        self.place(pressure.pa(), temperature.k())
    }

    /// Pressure and temperature at a place: the exact inverse of [`Geometry::point`].
    pub fn at(&self, point: Point) -> (Pressure, Temperature) {
        let pressure = self.pressure_at(point.y);
        (pressure, self.temperature_at(point))
    }

    /// Temperature at a place.
    pub fn temperature_at(&self, point: Point) -> Temperature {
        let efolds = (self.plot.bottom - point.y) / self.points_per_efold();
        let skewed = (point.x - self.plot.left) / self.points_per_kelvin();
        Temperature::from_c(self.view.left_c + skewed - self.view.lean_k * efolds)
    }

    pub(crate) fn y_of_pa(&self, pa: f64) -> f64 {
        let efolds = (self.view.bottom_hpa * 100.0 / pa.max(1e-6)).ln();
        self.plot.bottom - efolds * self.points_per_efold()
    }

    pub(crate) fn place(&self, pa: f64, kelvin: f64) -> Point {
        let efolds = (self.view.bottom_hpa * 100.0 / pa.max(1e-6)).ln();
        let skewed = Temperature::from_k(kelvin).c() - self.view.left_c + self.view.lean_k * efolds;
        Point {
            x: self.plot.left + skewed * self.points_per_kelvin(),
            y: self.plot.bottom - efolds * self.points_per_efold(),
        }
    }

    /// The view after dragging the paper by (dx, dy) points: what lay under the pointer stays under it, within the limits.
    pub fn panned(&self, dx: f64, dy: f64) -> View {
        let finite = |v: f64| if v.is_finite() { v } else { 0.0 };
        let depth = self.view.depth();
        let highest = (PRESSURE_LIMITS.1 / self.view.bottom_hpa).ln();
        let lowest = (PRESSURE_LIMITS.0 / self.view.top_hpa).ln();
        // Paper moved down: lower pressures come into sight.
        let efolds =
            (-finite(dy) / self.points_per_efold()).clamp(lowest.min(0.0), highest.max(0.0));
        let bottom_hpa = self.view.bottom_hpa * efolds.exp();
        View {
            bottom_hpa,
            top_hpa: bottom_hpa / depth.exp(),
            left_c: self.view.left_c + self.view.lean_k * efolds
                - finite(dx) / self.points_per_kelvin(),
            ..self.view
        }
        .clamped()
    }

    /// The view after zooming by `factor` (> 1: closer) about a point that stays where it is, within the limits.
    pub fn zoomed(&self, about: Point, factor: f64) -> View {
        let factor = if factor.is_finite() && factor > 0.0 {
            factor
        } else {
            1.0
        };
        let depth = self.view.depth();
        // One factor for both axes, so that angles stay.
        let least = (DEPTH_LIMITS.0 / depth).max(SPAN_LIMITS.0 / self.view.span_k);
        let most = (DEPTH_LIMITS.1 / depth)
            .min(SPAN_LIMITS.1 / self.view.span_k)
            .min((PRESSURE_LIMITS.1 / PRESSURE_LIMITS.0).ln() / depth);
        let scale = (1.0 / factor).clamp(least.min(1.0), most.max(1.0));
        let (pressure, temperature) = self.at(about);
        let below = (self.plot.bottom - about.y) / self.points_per_efold() * scale;
        let beside = (about.x - self.plot.left) / self.points_per_kelvin() * scale;
        let bottom_hpa = pressure.hpa() * below.exp();
        View {
            bottom_hpa,
            top_hpa: bottom_hpa / (depth * scale).exp(),
            left_c: temperature.c() + self.view.lean_k * below - beside,
            span_k: self.view.span_k * scale,
            lean_k: self.view.lean_k,
        }
        .clamped()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn view() -> impl Strategy<Value = View> {
        (
            20.0..1200.0f64,
            0.03..4.5f64,
            -90.0..40.0f64,
            2.0..200.0f64,
            0.0..60.0f64,
        )
            .prop_map(|(bottom_hpa, depth, left_c, span_k, lean_k)| View {
                bottom_hpa,
                top_hpa: bottom_hpa / depth.exp(),
                left_c,
                span_k,
                lean_k,
            })
    }

    fn geometry() -> impl Strategy<Value = Geometry> {
        (view(), -50.0..50.0f64, 200.0..2600.0f64, 150.0..1600.0f64)
            .prop_map(|(view, corner, w, h)| Geometry::new(Rect::new(corner, corner, w, h), view))
    }

    fn inside(geometry: &Geometry, across: f64, down: f64) -> Point {
        let plot = geometry.plot();
        Point::new(
            plot.left + across * plot.width(),
            plot.top + down * plot.height(),
        )
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 500, failure_persistence: None, ..ProptestConfig::default() })]

        #[test]
        fn there_and_back(g in geometry(), across in -0.5..1.5f64, down in -0.5..1.5f64) {
            let start = inside(&g, across, down);
            let (p, t) = g.at(start);
            prop_assert!(start.distance(g.point(p, t)) < 1e-6);
            let (p2, t2) = g.at(g.point(p, t));
            prop_assert!((p2.pa() / p.pa() - 1.0).abs() < 1e-9 && (t2.k() - t.k()).abs() < 1e-7);
        }

        /// What lies under the pointer stays under it while zooming.
        #[test]
        fn zooming_keeps_its_point(g in geometry(), across in 0.0..1.0f64, down in 0.0..1.0f64, factor in 0.5..2.0f64) {
            let about = inside(&g, across, down);
            let (p, t) = g.at(about);
            let after = Geometry::new(g.frame(), g.zoomed(about, factor));
            // Unless a limit of the view stops it.
            let unbound = |v: View| v.bottom_hpa < 1199.0 && v.top_hpa > 1.001 && v.left_c.abs() < 149.0;
            if unbound(g.view()) && unbound(after.view()) {
                prop_assert!(about.distance(after.point(p, t)) < 1e-6);
            }
        }

        /// The paper follows the pointer: every point moves by the same amount.
        #[test]
        fn panning_moves_everything_alike(g in geometry(), dx in -300.0..300.0f64, dy in -300.0..300.0f64) {
            let after = Geometry::new(g.frame(), g.panned(dx, dy));
            let moved = |across, down| {
                let from = inside(&g, across, down);
                let (p, t) = g.at(from);
                let to = after.point(p, t);
                (to.x - from.x, to.y - from.y)
            };
            let (a, b) = (moved(0.1, 0.2), moved(0.8, 0.9));
            prop_assert!((a.0 - b.0).abs() < 1e-6 && (a.1 - b.1).abs() < 1e-6);
            // All the way, unless the vertical limits stop it (then the depth of the view stays).
            let v = after.view();
            if v.bottom_hpa < 1199.0 && v.top_hpa > 1.001 && v.left_c.abs() < 149.0 {
                prop_assert!((a.0 - dx).abs() < 1e-6 && (a.1 - dy).abs() < 1e-6, "{:?}", a);
            }
            prop_assert!((v.depth() - g.view().depth()).abs() < 1e-9);
        }
    }

    #[test]
    fn odd_views_and_frames_stay_finite() {
        let odd = [f64::NAN, f64::INFINITY, -1.0, 0.0, 1e-300, 1e300];
        for a in odd {
            for b in odd {
                let view = View {
                    bottom_hpa: a,
                    top_hpa: b,
                    left_c: a,
                    span_k: b,
                    lean_k: a,
                };
                let g = Geometry::new(Rect::new(a, b, a, b), view);
                let v = g.view();
                assert!(v.bottom_hpa > v.top_hpa && v.top_hpa > 0.0 && v.span_k > 0.0);
                let start = Geometry::new(Rect::new(0.0, 0.0, 500.0, 400.0), view);
                for view in [
                    start.panned(a, b),
                    start.zoomed(Point::new(100.0, 100.0), a),
                ] {
                    assert!(view.depth().is_finite() && view.left_c.is_finite());
                }
            }
        }
    }

    #[test]
    fn the_default_view_holds_a_warm_season_profile() {
        let g = Geometry::new(Rect::new(0.0, 0.0, 1000.0, 800.0), View::default());
        for (hpa, c) in [
            (1000.0, 38.0),
            (1000.0, -20.0),
            (500.0, -5.0),
            (300.0, -60.0),
            (100.0, -80.0),
        ] {
            let at = g.point(Pressure::from_hpa(hpa), Temperature::from_c(c));
            assert!(g.plot().contains(at), "{hpa} hPa {c} degC");
        }
    }

    #[test]
    fn fitting_brings_cold_hot_high_and_low_surfaces_into_sight() {
        for (hpa, t, td) in [
            (1050.0, -45.0, -48.0),
            (1010.0, 49.0, 2.0),
            (620.0, 5.0, -20.0),
            (1085.0, 20.0, 20.0),
        ] {
            let profile = Profile {
                pressure: vec![hpa * 100.0],
                temperature: vec![Some(t + 273.15)],
                dewpoint: vec![Some(td + 273.15)],
                surface: Some(0),
                ..Profile::default()
            };
            let g = Geometry::new(Rect::new(0.0, 0.0, 600.0, 500.0), View::fit(&profile));
            for c in [t, td] {
                let at = g.point(Pressure::from_hpa(hpa), Temperature::from_c(c));
                assert!(
                    g.plot().grown(-8.0).contains(at),
                    "{hpa} hPa, {c} degC: {at:?} in {:?}",
                    g.plot()
                );
            }
        }
        assert_eq!(View::fit(&Profile::default()), View::default());
    }
}
