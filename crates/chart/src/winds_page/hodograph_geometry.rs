//! Where winds and motions lie on the hodograph.

use super::{WINDS_TOP, between, drawn_motions, heights_up_to};
use crate::{Point, Rect};
use dewbound_sounding::thermo::{Vector, WindNumbers, WindProfile};

/// Which part of the plane of winds is looked at; independent of the frame's shape.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HodographView {
    /// In the middle.
    pub centre: Vector,
    /// From west to east at least, m/s.
    pub width: f64,
    /// From south to north at least, m/s.
    pub height: f64,
}

/// Least width and height, m/s: in weaker winds a closer look shows nothing but noise.
const LEAST_SPAN: f64 = 10.0;
/// Widest, m/s.
const WIDEST: f64 = 500.0;
/// Air round what is fitted.
const AIR: f64 = 1.16;

impl HodographView {
    /// The winds from the ground up to a height (m, at most [`WINDS_TOP`]), no wind, the estimated motions; and the one set, when it lies outside all
    /// that, so that moving it about inside changes nothing.
    pub fn fit(
        profile: &WindProfile,
        numbers: &WindNumbers,
        set: Option<Vector>,
        top: f64,
    ) -> Self {
        let motions = drawn_motions(numbers).map(|m| [m.right, m.left, m.mean]);
        let highest = heights_up_to(profile, top).map_or(WINDS_TOP, |[_, highest]| highest);
        let mut all: Vec<Vector> = between(profile, 0.0, highest)
            .into_iter()
            .map(|(_, wind)| wind)
            .chain(motions.into_iter().flatten())
            .collect();
        let fitted = Self::round(&all);
        match set {
            Some(set) if !fitted.holds(set) => {
                all.push(set);
                Self::round(&all)
            }
            _ => fitted,
        }
    }

    /// Round these and no wind.
    fn round(all: &[Vector]) -> Self {
        let (mut low, mut high) = (Vector::default(), Vector::default());
        for v in all.iter().filter(|v| v.u.is_finite() && v.v.is_finite()) {
            low.u = low.u.min(v.u);
            low.v = low.v.min(v.v);
            high.u = high.u.max(v.u);
            high.v = high.v.max(v.v);
        }
        Self {
            centre: (low + high) * 0.5,
            width: (AIR * (high.u - low.u)).clamp(LEAST_SPAN, WIDEST),
            height: (AIR * (high.v - low.v)).clamp(LEAST_SPAN, WIDEST),
        }
    }

    fn holds(&self, wind: Vector) -> bool {
        let from = wind - self.centre;
        from.u.abs() <= 0.5 * self.width && from.v.abs() <= 0.5 * self.height
    }
}

/// The hodograph's plot in a frame: as many points for a metre per second to the east as to the north.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HodographGeometry {
    frame: Rect,
    plot: Rect,
    view: HodographView,
    /// Points for one m/s.
    scale: f64,
}

/// Room above the plot for its title, points.
const HEAD: f64 = 19.0;
/// Room round it.
const EDGE: f64 = 3.0;

impl HodographGeometry {
    /// In a frame.
    pub fn new(frame: Rect, view: HodographView) -> Self {
        let plot = Rect::new(
            frame.left + EDGE,
            frame.top + HEAD,
            frame.width() - 2.0 * EDGE,
            frame.height() - HEAD - EDGE,
        );
        let scale = (plot.width() / view.width).min(plot.height() / view.height);
        Self {
            frame,
            plot,
            view,
            scale: scale.max(1e-3),
        }
    }

    /// The frame.
    pub fn frame(&self) -> Rect {
        self.frame
    }

    /// Where the curve is drawn.
    pub fn plot(&self) -> Rect {
        self.plot
    }

    /// What is looked at.
    pub fn view(&self) -> HodographView {
        self.view
    }

    /// Points for one m/s.
    pub fn scale(&self) -> f64 {
        self.scale
    }

    /// Where a wind lies. East is to the right, north is up: the arrow from the origin points where the air goes.
    pub fn point(&self, wind: Vector) -> Point {
        let middle = self.plot.centre();
        let from_centre = wind - self.view.centre;
        Point::new(
            middle.x + self.scale * from_centre.u,
            middle.y - self.scale * from_centre.v,
        )
    }

    /// The wind at a place.
    pub fn at(&self, point: Point) -> Vector {
        let middle = self.plot.centre();
        self.view.centre
            + Vector {
                u: (point.x - middle.x) / self.scale,
                v: (middle.y - point.y) / self.scale,
            }
    }

    /// The view after the paper has been dragged by so many points.
    pub fn panned(&self, dx: f64, dy: f64) -> HodographView {
        let by = Vector {
            u: dx / self.scale,
            v: -dy / self.scale,
        };
        HodographView {
            centre: self.view.centre - by,
            ..self.view
        }
    }

    /// The view enlarged `factor` times about a place.
    pub fn zoomed(&self, about: Point, factor: f64) -> HodographView {
        let widest = self.view.width.max(self.view.height);
        let factor = factor.clamp(widest / WIDEST, widest / LEAST_SPAN);
        let fixed = self.at(about);
        HodographView {
            centre: fixed + (self.view.centre - fixed) * (1.0 / factor),
            width: self.view.width / factor,
            height: self.view.height / factor,
        }
    }
}
