//! Hatching of an area with a sense of turning.

use crate::{Point, Rect};

/// Hatching lines of the area a closed outline runs round, split by the sense it runs in.
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct Turned {
    /// Where the outline runs clockwise on the screen.
    pub clockwise: Vec<[Point; 2]>,
    /// Where it runs anticlockwise.
    pub anticlockwise: Vec<[Point; 2]>,
}

/// Hatches the inside of a closed outline with the lines `x = c + slope * y`, `spacing` points apart (measured across). An area the
/// outline runs round twice is hatched like one it runs round once.
pub(crate) fn hatch_turned(outline: &[Point], slope: f64, spacing: f64, within: &Rect) -> Turned {
    let step = spacing * (1.0 + slope * slope).sqrt();
    let offset = |p: &Point| p.x - slope * p.y;
    let mut turned = Turned::default();
    let finite = outline.iter().all(|p| p.x.is_finite() && p.y.is_finite());
    if outline.len() < 3 || !finite || step <= 0.0 {
        return turned;
    }
    // Lines that miss what is in sight are not looked at, so their number is small.
    let corners = [
        Point::new(within.left, within.top),
        Point::new(within.right, within.top),
        Point::new(within.left, within.bottom),
        Point::new(within.right, within.bottom),
    ];
    let span = |points: &[Point]| {
        points
            .iter()
            .map(offset)
            .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), c| {
                (low.min(c), high.max(c))
            })
    };
    let (inside, seen) = (span(outline), span(&corners));
    let first = (inside.0.max(seen.0) / step).ceil();
    let last = (inside.1.min(seen.1) / step).floor();
    let mut number = first;
    while number <= last {
        for ([a, b], winding) in parts(outline, slope, number * step) {
            let Some(line) = crate::canvas::clip_segment(a, b, within) else {
                continue;
            };
            if winding > 0 {
                turned.clockwise.push(line);
            } else {
                turned.anticlockwise.push(line);
            }
        }
        number += 1.0;
    }
    turned
}

/// Parts of one line inside the outline, with how often (and which way) the outline runs round each.
fn parts(outline: &[Point], slope: f64, c: f64) -> Vec<([Point; 2], i32)> {
    let offset = |p: Point| p.x - slope * p.y - c;
    // y of each crossing, and which way the outline crosses.
    let mut crossings: Vec<(f64, i32)> = Vec::new();
    let next = outline.iter().skip(1).chain(outline.first());
    for (&a, &b) in outline.iter().zip(next) {
        let (da, db) = (offset(a), offset(b));
        if (da < 0.0) == (db < 0.0) {
            continue;
        }
        let share = da / (da - db);
        let way = if da < 0.0 { 1 } else { -1 };
        crossings.push((a.y + share * (b.y - a.y), way));
    }
    crossings.sort_by(|a, b| a.0.total_cmp(&b.0));
    let mut parts = Vec::new();
    let mut winding = 0;
    let mut from = None;
    for (y, way) in crossings {
        if let Some(start) = from
            && winding != 0
            && y - start > 1e-6
        {
            let at = |y: f64| Point::new(c + slope * y, y);
            parts.push(([at(start), at(y)], winding));
        }
        // Going down the screen, an edge that runs to the right encloses clockwise what lies below it.
        winding += way;
        from = Some(y);
    }
    parts
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    const WIDE: Rect = Rect {
        left: -1e4,
        top: -1e4,
        right: 1e4,
        bottom: 1e4,
    };

    fn length(lines: &[[Point; 2]]) -> f64 {
        lines.iter().map(|[a, b]| a.distance(*b)).sum()
    }

    /// Area by the shoelace formula, positive when clockwise on a screen (y downward).
    fn signed_area(outline: &[Point]) -> f64 {
        let next = outline.iter().skip(1).chain(outline.first());
        outline
            .iter()
            .zip(next)
            .map(|(a, b)| 0.5 * (a.x * b.y - b.x * a.y))
            .sum()
    }

    #[test]
    fn a_square_run_round_clockwise() {
        let square =
            [(0.0, 0.0), (100.0, 0.0), (100.0, 100.0), (0.0, 100.0)].map(|(x, y)| Point::new(x, y));
        assert!(signed_area(&square) > 0.0);
        let turned = hatch_turned(&square, -1.0, 5.0, &WIDE);
        assert!(turned.anticlockwise.is_empty());
        // Lines 5 apart fill an area of 10,000 with about 2,000 of length.
        assert!((length(&turned.clockwise) - 2000.0).abs() < 100.0);
        let mut other = square;
        other.reverse();
        let turned = hatch_turned(&other, -1.0, 5.0, &WIDE);
        assert!(turned.clockwise.is_empty() && !turned.anticlockwise.is_empty());
    }

    #[test]
    fn a_bow_tie_has_both() {
        let bow =
            [(0.0, 0.0), (100.0, 0.0), (0.0, 100.0), (100.0, 100.0)].map(|(x, y)| Point::new(x, y));
        let turned = hatch_turned(&bow, 1.0, 4.0, &WIDE);
        let both = [length(&turned.clockwise), length(&turned.anticlockwise)];
        assert!(
            both.iter().all(|l| (l * 4.0 - 2500.0).abs() < 300.0),
            "{both:?}"
        );
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 200, failure_persistence: None, ..ProptestConfig::default() })]

        /// For a fan round a point the hatched length, by sign, is the signed area over the spacing.
        #[test]
        fn length_is_signed_area(
            radii in proptest::collection::vec(40.0..120.0f64, 12),
            slope in prop_oneof![Just(-1.0), Just(0.6), Just(2.0)],
            backwards in any::<bool>(),
        ) {
            let mut outline: Vec<Point> = radii.iter().enumerate().map(|(i, r)| {
                let angle = i as f64 / 12.0 * std::f64::consts::TAU;
                Point::new(r * angle.cos(), r * angle.sin())
            }).collect();
            if backwards {
                outline.reverse();
            }
            let turned = hatch_turned(&outline, slope, 1.0, &WIDE);
            let got = length(&turned.clockwise) - length(&turned.anticlockwise);
            let expect = signed_area(&outline);
            prop_assert!((got - expect).abs() < 0.03 * expect.abs(), "{got} instead of {expect}");
        }
    }
}
