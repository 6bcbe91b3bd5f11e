//! The strip of wind barbs beside the plot.

use crate::barb::{Barb, KNOTS, REACH, barb};
use crate::canvas::{Canvas, Lettering};
use crate::{Anchor, Geometry, Ink, Item, Point, Rect, Stroke};
use dewbound_sounding::Profile;

/// Least distance of the feet of two barbs, points.
const LEAST: f64 = 16.0;
/// Room kept between the strokes of two barbs, points.
const CLEAR: f64 = 3.0;
/// Distance from a level without room at which the next is tried, points.
const RETRY: f64 = 1.0;
/// Radius of the circle of a calm.
const CALM: f64 = 4.5;

/// Barbs, from the surface up, each the next one that doesn't touch those below it.
pub(crate) fn paint(canvas: &mut Canvas, geometry: &Geometry, profile: &Profile, southern: bool) {
    let frame = geometry.frame();
    let strip = geometry.wind();
    if strip.width() < 2.0 * REACH - 1.0 {
        return;
    }
    let title = Lettering::new(Anchor::Right, 11.0, Ink::Label);
    let drawn = select(geometry, profile, southern);
    if drawn.is_empty() {
        return;
    }
    canvas.text(
        Point::new(strip.right - 4.0, strip.top - 13.0),
        "wind, kt",
        title,
    );
    let middle = strip.centre().x;
    let spine = [
        Point::new(middle, strip.top),
        Point::new(middle, strip.bottom),
    ];
    canvas.line(&spine, &frame, Ink::QuietLabel, Stroke::solid(0.6));
    let mut lines = Vec::new();
    for (foot, barb) in &drawn {
        if barb.calm {
            let outline = (Ink::Wind, Stroke::solid(1.3));
            canvas.circle(*foot, CALM, Some(Ink::Paper), Some(outline));
        } else {
            lines.extend(barb.lines.iter().copied());
        }
    }
    canvas.segments(&lines, &frame, Ink::Wind, Stroke::solid(1.4));
    for flag in drawn.iter().flat_map(|(_, barb)| &barb.flags) {
        canvas.scene.items.push(Item::Polygon {
            points: flag.to_vec(),
            ink: Ink::Wind,
        });
    }
    for (foot, barb) in &drawn {
        if !barb.calm {
            canvas.circle(*foot, 1.6, Some(Ink::Wind), None);
        }
    }
}

/// The barbs to draw with their feet. Only those wholly inside the frame and beside the plot.
fn select(geometry: &Geometry, profile: &Profile, southern: bool) -> Vec<(Point, Barb)> {
    let strip = geometry.wind();
    let frame = geometry.frame();
    let plot = geometry.plot();
    let mut kept: Vec<(Point, Barb)> = Vec::new();
    let mut taken: Vec<Vec<[Point; 2]>> = Vec::new();
    let mut refused = f64::INFINITY;
    for (&pa, wind) in profile.pressure.iter().zip(&profile.wind) {
        let Some(wind) = wind else { continue };
        let foot = Point::new(strip.centre().x, geometry.y_of_pa(pa));
        if !(foot.y >= plot.top && foot.y <= plot.bottom) {
            continue;
        }
        let near = |(at, _): &(Point, Barb)| (at.y - foot.y).abs() < LEAST;
        // A neighbour of a level that had no room has none either.
        if kept.last().is_some_and(near) || (refused - foot.y).abs() < RETRY {
            continue;
        }
        let Some(drawn) = barb(foot, wind.direction, wind.speed * KNOTS, southern) else {
            continue;
        };
        let room = Rect {
            // In a frame too low for anything the plot reaches above it.
            top: (plot.top - 6.0).max(frame.top),
            ..frame
        };
        let mine = strokes(foot, &drawn);
        let inside = mine.iter().flatten().all(|&p| room.contains(p));
        // Only the last few can be within reach.
        if inside && taken.iter().rev().take(6).all(|other| !touch(other, &mine)) {
            kept.push((foot, drawn));
            taken.push(mine);
        } else {
            refused = foot.y;
        }
    }
    kept
}

/// All strokes of a barb, flags by their edges, calm by a cross of its size.
fn strokes(foot: Point, barb: &Barb) -> Vec<[Point; 2]> {
    if barb.calm {
        let at = |dx: f64, dy: f64| Point::new(foot.x + dx, foot.y + dy);
        return vec![
            [at(-CALM, 0.0), at(CALM, 0.0)],
            [at(0.0, -CALM), at(0.0, CALM)],
        ];
    }
    let edges = barb.flags.iter().flat_map(|&[a, b, c]| [[a, b], [b, c]]);
    barb.lines.iter().copied().chain(edges).collect()
}

fn touch(some: &[[Point; 2]], others: &[[Point; 2]]) -> bool {
    some.iter()
        .any(|a| others.iter().any(|b| distance(a, b) < CLEAR))
}

/// Distance of two segments.
fn distance(a: &[Point; 2], b: &[Point; 2]) -> f64 {
    let cross =
        |o: Point, p: Point, q: Point| (p.x - o.x) * (q.y - o.y) - (p.y - o.y) * (q.x - o.x);
    let apart =
        |l: &[Point; 2], m: &[Point; 2]| cross(l[0], l[1], m[0]) * cross(l[0], l[1], m[1]) < 0.0;
    if apart(a, b) && apart(b, a) {
        return 0.0;
    }
    let to = |p: Point, l: &[Point; 2]| {
        let (dx, dy) = (l[1].x - l[0].x, l[1].y - l[0].y);
        let along = ((p.x - l[0].x) * dx + (p.y - l[0].y) * dy) / (dx * dx + dy * dy).max(1e-12);
        let s = along.clamp(0.0, 1.0);
        p.distance(Point::new(l[0].x + s * dx, l[0].y + s * dy))
    };
    to(a[0], b)
        .min(to(a[1], b))
        .min(to(b[0], a))
        .min(to(b[1], a))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::View;
    use dewbound_sounding::Wind;
    use proptest::prelude::*;

    proptest! {
        #![proptest_config(ProptestConfig { cases: 60, failure_persistence: None, ..ProptestConfig::default() })]

        /// Whatever the winds, no two barbs touch, and all stay inside the frame.
        #[test]
        fn barbs_never_touch(winds in proptest::collection::vec((0.0..360.0f64, 0.0..110.0f64), 300), southern in any::<bool>()) {
            let n = winds.len();
            let profile = Profile {
                pressure: (0..n).map(|i| 100_000.0 * (-2.2 * i as f64 / n as f64).exp()).collect(),
                wind: winds.iter().map(|&(direction, speed)| Some(Wind { direction, speed })).collect(),
                ..Profile::default()
            };
            let geometry = Geometry::new(Rect::new(0.0, 0.0, 900.0, 700.0), View::default());
            let kept = select(&geometry, &profile, southern);
            prop_assert!(kept.len() > 6, "{} barbs", kept.len());
            for (i, (foot, barb)) in kept.iter().enumerate() {
                let mine = strokes(*foot, barb);
                prop_assert!(mine.iter().flatten().all(|&p| geometry.frame().contains(p)));
                for (other, that) in &kept[i + 1..] {
                    prop_assert!(!touch(&mine, &strokes(*other, that)));
                }
            }
        }
    }

    #[test]
    fn distance_of_segments() {
        let s = |a: f64, b: f64, c: f64, d: f64| [Point::new(a, b), Point::new(c, d)];
        assert_eq!(
            distance(&s(0.0, 0.0, 2.0, 2.0), &s(0.0, 2.0, 2.0, 0.0)),
            0.0
        );
        assert_eq!(
            distance(&s(0.0, 0.0, 2.0, 0.0), &s(1.0, 3.0, 1.0, 5.0)),
            3.0
        );
    }
}
