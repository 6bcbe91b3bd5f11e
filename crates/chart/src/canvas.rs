//! Builds a scene: clips, keeps what is finite, remembers what space labels have taken.

use crate::{Anchor, Ink, Item, Point, Rect, Scene, Stroke, text_box};

/// The part of a segment inside a rectangle (Liang-Barsky); `None` when it misses it or is not finite.
pub(crate) fn clip_segment(a: Point, b: Point, rect: &Rect) -> Option<[Point; 2]> {
    if rect.contains(a) && rect.contains(b) {
        return Some([a, b]);
    }
    let (dx, dy) = (b.x - a.x, b.y - a.y);
    if !(a.x.is_finite() && a.y.is_finite() && dx.is_finite() && dy.is_finite()) {
        return None;
    }
    let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
    let edges = [
        (-dx, a.x - rect.left),
        (dx, rect.right - a.x),
        (-dy, a.y - rect.top),
        (dy, rect.bottom - a.y),
    ];
    for (towards, room) in edges {
        if towards == 0.0 {
            if room < 0.0 {
                return None;
            }
            continue;
        }
        let share = room / towards;
        if towards < 0.0 {
            enter = enter.max(share);
        } else {
            leave = leave.min(share);
        }
    }
    if enter > leave {
        return None;
    }
    // Rounding must not leave the rectangle.
    let on = |share: f64| {
        Point::new(
            (a.x + share * dx).clamp(rect.left, rect.right),
            (a.y + share * dy).clamp(rect.top, rect.bottom),
        )
    };
    let start = if enter == 0.0 { a } else { on(enter) };
    let end = if leave == 1.0 { b } else { on(leave) };
    Some([start, end])
}

/// The pieces of a connected line inside a rectangle.
pub(crate) fn clip_polyline(points: &[Point], rect: &Rect) -> Vec<Vec<Point>> {
    let mut pieces = Vec::new();
    let mut piece: Vec<Point> = Vec::with_capacity(points.len());
    for pair in points.windows(2) {
        let &[a, b] = pair else { continue };
        let Some([start, end]) = clip_segment(a, b, rect) else {
            flush(&mut piece, &mut pieces);
            continue;
        };
        if piece.last() != Some(&start) {
            flush(&mut piece, &mut pieces);
            piece.push(start);
        }
        if start != end {
            piece.push(end);
        }
        if end != b {
            flush(&mut piece, &mut pieces);
        }
    }
    flush(&mut piece, &mut pieces);
    pieces
}

fn flush(piece: &mut Vec<Point>, pieces: &mut Vec<Vec<Point>>) {
    if piece.len() >= 2 {
        pieces.push(std::mem::take(piece));
    } else {
        piece.clear();
    }
}

/// How a text is set.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Lettering {
    pub anchor: Anchor,
    pub size: f64,
    pub ink: Ink,
    pub angle: f64,
    pub backed: bool,
    pub strong: bool,
}

impl Lettering {
    pub const fn new(anchor: Anchor, size: f64, ink: Ink) -> Self {
        Self {
            anchor,
            size,
            ink,
            angle: 0.0,
            backed: false,
            strong: false,
        }
    }

    pub const fn backed(self) -> Self {
        Self {
            backed: true,
            ..self
        }
    }

    pub const fn strong(self) -> Self {
        Self {
            strong: true,
            ..self
        }
    }

    pub const fn turned(self, angle: f64) -> Self {
        Self { angle, ..self }
    }

    /// Upright box around the text, turned or not.
    pub fn extent(&self, at: Point, text: &str) -> Rect {
        // Heavier letters are wider.
        let size = if self.strong {
            1.07 * self.size
        } else {
            self.size
        };
        let level = text_box(at, self.anchor, text, size);
        if self.angle == 0.0 {
            return level;
        }
        let (sin, cos) = self.angle.sin_cos();
        let corners = [
            (level.left, level.top),
            (level.right, level.top),
            (level.right, level.bottom),
            (level.left, level.bottom),
        ];
        let mut extent = Rect {
            left: f64::INFINITY,
            top: f64::INFINITY,
            right: f64::NEG_INFINITY,
            bottom: f64::NEG_INFINITY,
        };
        for (x, y) in corners {
            let (dx, dy) = (x - at.x, y - at.y);
            let (x, y) = (at.x + cos * dx - sin * dy, at.y + sin * dx + cos * dy);
            extent.left = extent.left.min(x);
            extent.right = extent.right.max(x);
            extent.top = extent.top.min(y);
            extent.bottom = extent.bottom.max(y);
        }
        extent
    }
}

/// A scene in the making.
#[derive(Debug)]
pub(crate) struct Canvas {
    pub scene: Scene,
    pub frame: Rect,
    /// Space that labels and marks have taken.
    pub taken: Vec<Rect>,
}

impl Canvas {
    pub fn new(frame: Rect) -> Self {
        Self {
            scene: Scene::default(),
            frame,
            taken: Vec::new(),
        }
    }

    /// A connected line, clipped.
    pub fn line(&mut self, points: &[Point], within: &Rect, ink: Ink, stroke: Stroke) {
        for points in clip_polyline(points, within) {
            self.scene.items.push(Item::Polyline {
                points,
                ink,
                stroke,
            });
        }
    }

    /// Separate lines, clipped.
    pub fn segments(&mut self, lines: &[[Point; 2]], within: &Rect, ink: Ink, stroke: Stroke) {
        let lines: Vec<_> = lines
            .iter()
            .filter_map(|&[a, b]| clip_segment(a, b, within))
            .collect();
        if !lines.is_empty() {
            self.scene.items.push(Item::Segments { lines, ink, stroke });
        }
    }

    /// A convex polygon; left out when it isn't wholly inside the frame.
    pub fn polygon(&mut self, points: Vec<Point>, ink: Ink) {
        if points.len() >= 3 && points.iter().all(|&p| self.frame.contains(p)) {
            self.scene.items.push(Item::Polygon { points, ink });
        }
    }

    /// A filled box, cut to the frame.
    pub fn fill(&mut self, rect: Rect, ink: Ink) {
        let rect = Rect {
            left: rect.left.max(self.frame.left),
            top: rect.top.max(self.frame.top),
            right: rect.right.min(self.frame.right),
            bottom: rect.bottom.min(self.frame.bottom),
        };
        if rect.left < rect.right && rect.top < rect.bottom {
            self.polygon(corners(&rect), ink);
        }
    }

    /// A circle; left out when it isn't wholly inside the frame.
    pub fn circle(
        &mut self,
        centre: Point,
        radius: f64,
        fill: Option<Ink>,
        outline: Option<(Ink, Stroke)>,
    ) {
        let outside = Rect {
            left: centre.x - radius,
            top: centre.y - radius,
            right: centre.x + radius,
            bottom: centre.y + radius,
        };
        if self.frame.holds(&outside) {
            self.scene.items.push(Item::Circle {
                centre,
                radius,
                fill,
                outline,
            });
        }
    }

    /// A text, left out (and `false`) when it would leave the frame. Takes its space whether or not it was free.
    pub fn text(&mut self, at: Point, text: &str, lettering: Lettering) -> bool {
        let extent = lettering.extent(at, text);
        if text.is_empty() || !self.frame.holds(&extent) {
            return false;
        }
        self.taken.push(extent);
        self.scene.items.push(Item::Text {
            at,
            anchor: lettering.anchor,
            text: text.to_owned(),
            size: lettering.size,
            ink: lettering.ink,
            angle: lettering.angle,
            backed: lettering.backed,
            strong: lettering.strong,
        });
        true
    }

    /// A text at the first of these places that lies inside `within` and is free.
    pub fn text_at_first(
        &mut self,
        places: impl IntoIterator<Item = (Point, Anchor)>,
        text: &str,
        lettering: Lettering,
        within: &Rect,
    ) -> Option<Point> {
        for (at, anchor) in places {
            let lettering = Lettering {
                anchor,
                ..lettering
            };
            let extent = lettering.extent(at, text);
            if within.holds(&extent) && self.is_free(&extent) && self.text(at, text, lettering) {
                return Some(at);
            }
        }
        None
    }

    /// Whether nothing has taken any of this space.
    pub fn is_free(&self, rect: &Rect) -> bool {
        !self.taken.iter().any(|taken| taken.overlaps(rect))
    }
}

/// Corners of a rectangle, going round.
pub(crate) fn corners(rect: &Rect) -> Vec<Point> {
    vec![
        Point::new(rect.left, rect.top),
        Point::new(rect.right, rect.top),
        Point::new(rect.right, rect.bottom),
        Point::new(rect.left, rect.bottom),
    ]
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn rect() -> Rect {
        Rect::new(10.0, 20.0, 100.0, 50.0)
    }

    #[test]
    fn a_line_that_leaves_and_returns_is_two_pieces() {
        let points = [
            Point::new(20.0, 30.0),
            Point::new(200.0, 30.0),
            Point::new(200.0, 60.0),
            Point::new(20.0, 60.0),
        ];
        let pieces = clip_polyline(&points, &rect());
        assert_eq!(
            pieces,
            [
                vec![Point::new(20.0, 30.0), Point::new(110.0, 30.0)],
                vec![Point::new(110.0, 60.0), Point::new(20.0, 60.0)],
            ]
        );
    }

    #[test]
    fn what_is_not_a_number_breaks_the_line_and_nothing_else() {
        let points = [
            Point::new(20.0, 30.0),
            Point::new(30.0, 30.0),
            Point::new(f64::NAN, 40.0),
            Point::new(50.0, 50.0),
            Point::new(60.0, 50.0),
        ];
        assert_eq!(clip_polyline(&points, &rect()).len(), 2);
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..ProptestConfig::default() })]

        /// Clipped segments lie inside, on the original line, and are as long as a fine sampling says.
        #[test]
        fn clipping_keeps_exactly_what_is_inside(
            ax in -200.0..300.0, ay in -200.0..300.0, bx in -200.0..300.0, by in -200.0..300.0,
        ) {
            let (a, b, r) = (Point::new(ax, ay), Point::new(bx, by), rect());
            let n = 2000;
            let inside = (0..n).filter(|i| {
                let s = (f64::from(*i) + 0.5) / f64::from(n);
                r.contains(Point::new(ax + s * (bx - ax), ay + s * (by - ay)))
            }).count() as f64 / f64::from(n);
            let kept = clip_segment(a, b, &r).map_or(0.0, |[p, q]| {
                assert!(r.grown(1e-9).contains(p) && r.grown(1e-9).contains(q));
                p.distance(q) / a.distance(b)
            });
            prop_assert!((kept - inside).abs() < 2.0 / f64::from(n), "kept {kept}, inside {inside}");
        }
    }
}
