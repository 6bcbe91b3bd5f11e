//! Room for labels on the hodograph: beside what they name, off the curve where that can be had.

use super::HodographGeometry;
use super::hodograph::rings_in_sight;
use crate::canvas::{Canvas, Lettering, clip_segment};
use crate::{Anchor, Ink, Point, Rect, text_width};
use dewbound_sounding::thermo::Vector;
use std::f64::consts::TAU;

/// What labels have to keep off.
#[derive(Debug)]
pub(crate) struct Labels<'a> {
    curve: &'a [Point],
    plot: Rect,
    /// Outline of what is hatched: labels without a place of their own stay outside.
    hatched: &'a [Point],
}

impl<'a> Labels<'a> {
    pub fn new(curve: &'a [Point], plot: Rect, hatched: &'a [Point]) -> Self {
        Self {
            curve,
            plot,
            hatched,
        }
    }

    /// Whether the middle of this space lies on hatching.
    fn is_hatched(&self, extent: &Rect) -> bool {
        let middle = extent.centre();
        let next = self.hatched.iter().skip(1).chain(self.hatched.first());
        let crossings = self.hatched.iter().zip(next).filter(|(a, b)| {
            let above = (a.y < middle.y) != (b.y < middle.y);
            above && a.x + (middle.y - a.y) / (b.y - a.y) * (b.x - a.x) > middle.x
        });
        crossings.count() % 2 == 1
    }

    /// Whether the curve leaves this space free.
    pub fn is_clear(&self, extent: &Rect) -> bool {
        let crosses = |pair: &[Point]| match pair {
            &[a, b] => clip_segment(a, b, extent).is_some(),
            _ => false,
        };
        !self.curve.windows(2).any(crosses)
    }

    /// A text beside a place, `away` points from it: off the curve if possible, else on it when `must`.
    pub fn beside(
        &self,
        canvas: &mut Canvas,
        at: Point,
        away: f64,
        text: &str,
        lettering: Lettering,
        must: bool,
    ) {
        let width = text_width(text, lettering.size);
        let candidates: Vec<(Point, Rect)> = [1.0, 1.7, 2.8]
            .into_iter()
            .flat_map(|far| (0..12).map(move |side| (far, side)))
            .map(|(far, side)| {
                // First to the right, then round in turn.
                let turn = [0, 11, 1, 10, 2, 6, 7, 5, 8, 4, 9, 3];
                let angle = f64::from(turn.get(side).copied().unwrap_or(0)) / 12.0 * TAU;
                let (sin, cos) = angle.sin_cos();
                let centre = Point::new(
                    at.x + (away * far + width / 2.0) * cos,
                    at.y + (away * far + 0.62 * lettering.size) * sin,
                );
                (centre, lettering.extent(centre, text))
            })
            .filter(|(_, extent)| self.plot.holds(extent) && canvas.is_free(extent))
            .collect();
        let clear = candidates
            .iter()
            .find(|(_, extent)| self.is_clear(extent))
            .or_else(|| candidates.first().filter(|_| must));
        if let Some(&(centre, _)) = clear {
            // Hatching and rings run on behind; the paper keeps the letters apart from them.
            canvas.text(centre, text, lettering.backed());
        }
    }
}

/// One label a ring, all along the direction in which most of them have room; those without room there go elsewhere on their ring.
pub(crate) fn label_rings(
    canvas: &mut Canvas,
    labels: &Labels,
    geometry: &HodographGeometry,
    step: f64,
    text: impl Fn(u32) -> String,
) {
    let origin = geometry.point(Vector::default());
    let radius = step * geometry.scale();
    let lettering = Lettering::new(Anchor::Centre, 11.0, Ink::QuietLabel).backed();
    let count = rings_in_sight(geometry, radius);
    // Between the axes, so that no label sits on one.
    let angles: Vec<f64> = (0..36).map(|i| (f64::from(i) + 0.5) / 36.0 * TAU).collect();
    let place = |canvas: &Canvas, ring: u32, angle: f64| {
        let r = radius * f64::from(ring);
        let at = Point::new(origin.x + r * angle.cos(), origin.y + r * angle.sin());
        let extent = lettering.extent(at, &text(ring));
        let free = geometry.plot().holds(&extent)
            && canvas.is_free(&extent)
            && !labels.is_hatched(&extent)
            && labels.is_clear(&extent);
        free.then_some(at)
    };
    let score = |angle: f64| {
        (1..=count)
            .filter(|&ring| place(canvas, ring, angle).is_some())
            .count()
    };
    // Of equals the first.
    let mut best = (0, TAU / 72.0);
    for &angle in &angles {
        let score = score(angle);
        if score > best.0 {
            best = (score, angle);
        }
    }
    for ring in 1..=count {
        let at = std::iter::once(best.1)
            .chain(angles.iter().copied())
            .find_map(|angle| place(canvas, ring, angle));
        if let Some(at) = at {
            canvas.text(at, &text(ring), lettering);
        }
    }
}
