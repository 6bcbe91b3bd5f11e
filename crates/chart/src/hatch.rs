//! Areas between two curves, and their hatching as plain lines, so that every painter draws the same.

use crate::{Point, Rect};

/// One row of an area: height, left and right edge.
pub(crate) type Row = (f64, f64, f64);

/// Two curves on shared heights.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Pair {
    /// Height on the plot.
    pub y: f64,
    /// x of the surroundings.
    pub around: f64,
    /// x of the parcel.
    pub parcel: f64,
}

/// Parts between the heights `from` and `to` (any order) in which the parcel lies right (`warmer`) or left of the surroundings, with
/// exact crossings.
pub(crate) fn areas(pairs: &[Pair], warmer: bool, from: f64, to: f64) -> Vec<Vec<Row>> {
    let (upper, lower) = (from.min(to) - 1e-6, from.max(to) + 1e-6);
    let mut areas = Vec::new();
    let mut area: Vec<Row> = Vec::new();
    let mut close = |area: &mut Vec<Row>| {
        if area.len() >= 2 {
            areas.push(std::mem::take(area));
        } else {
            area.clear();
        }
    };
    let sign = if warmer { 1.0 } else { -1.0 };
    let excess = |p: &Pair| sign * (p.parcel - p.around);
    let row = |p: &Pair| (p.y, p.parcel.min(p.around), p.parcel.max(p.around));
    for two in pairs.windows(2) {
        let [a, b] = two else { continue };
        let within = |p: &Pair| p.y >= upper && p.y <= lower;
        let (da, db) = (excess(a), excess(b));
        if !within(a) || !within(b) || !da.is_finite() || !db.is_finite() {
            close(&mut area);
            continue;
        }
        let crossing = || {
            let s = da / (da - db);
            let x = a.around + s * (b.around - a.around);
            (a.y + s * (b.y - a.y), x, x)
        };
        if da > 0.0 {
            if area.is_empty() {
                area.push(row(a));
            }
            if db > 0.0 {
                area.push(row(b));
            } else {
                area.push(crossing());
                close(&mut area);
            }
        } else if db > 0.0 {
            close(&mut area);
            area.push(crossing());
            area.push(row(b));
        }
    }
    close(&mut area);
    areas
}

/// A family of parallel lines `x = c + slope * y`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Hatching {
    /// dx/dy (y downward): negative rises to the right.
    pub slope: f64,
    /// Distance between lines, points.
    pub spacing: f64,
}

/// The lines of a hatching inside an area, cut to `within`. The family is anchored to the origin, so lines stand still while
/// the area changes.
pub(crate) fn hatch(area: &[Row], hatching: Hatching, within: &Rect) -> Vec<[Point; 2]> {
    let Hatching { slope, spacing } = hatching;
    let step = spacing * (1.0 + slope * slope).sqrt();
    let mut lines: Vec<[Point; 2]> = Vec::new();
    // Lines still running at the last row, as (number of the line, index into `lines`).
    let mut running: Vec<(i64, usize)> = Vec::new();
    for two in area.windows(2) {
        let &[(ya, la, ra), (yb, lb, rb)] = two else {
            continue;
        };
        let low = (la - slope * ya)
            .min(lb - slope * yb)
            .max(within.left - within.width() - slope.abs() * within.bottom.abs());
        let high = (ra - slope * ya).max(rb - slope * yb);
        let (first, last) = ((low / step).ceil(), (high / step).floor());
        let mut next = Vec::new();
        // Only lines that cross this strip are looked at; the strip is inside the plot, so their number is small.
        if first.is_finite() && last - first < 10_000.0 {
            for number in first as i64..=last as i64 {
                let c = number as f64 * step;
                let (xa, xb) = (c + slope * ya, c + slope * yb);
                let Some((s0, s1)) = share_inside([(xa - la, xb - lb), (ra - xa, rb - xb)]) else {
                    continue;
                };
                let at = |s: f64| Point::new(xa + s * (xb - xa), ya + s * (yb - ya));
                let (start, end) = (at(s0), at(s1));
                let joined = running
                    .iter()
                    .find(|&&(n, i)| {
                        n == number && lines.get(i).is_some_and(|l| l[1].distance(start) < 1e-6)
                    })
                    .map(|&(_, i)| i);
                let index = match joined {
                    Some(i) => {
                        lines[i][1] = end;
                        i
                    }
                    None => {
                        lines.push([start, end]);
                        lines.len() - 1
                    }
                };
                if s1 >= 1.0 {
                    next.push((number, index));
                }
            }
        }
        running = next;
    }
    lines
        .into_iter()
        .filter_map(|[a, b]| crate::canvas::clip_segment(a, b, within))
        .filter(|[a, b]| a.distance(*b) > 0.05)
        .collect()
}

/// Part of 0..=1 in which every linear function, given by its values at 0 and 1, is not negative.
fn share_inside(functions: [(f64, f64); 2]) -> Option<(f64, f64)> {
    let (mut from, mut to) = (0.0_f64, 1.0_f64);
    for (start, end) in functions {
        if start < 0.0 && end < 0.0 {
            return None;
        }
        if start < 0.0 {
            from = from.max(start / (start - end));
        } else if end < 0.0 {
            to = to.min(start / (start - end));
        }
    }
    (from <= to).then_some((from, to))
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

    fn pairs(around: &[f64], parcel: &[f64]) -> Vec<Pair> {
        around
            .iter()
            .zip(parcel)
            .enumerate()
            .map(|(i, (&around, &parcel))| Pair {
                y: 500.0 - 2.0 * i as f64,
                around,
                parcel,
            })
            .collect()
    }

    #[test]
    fn crossings_split_areas_exactly() {
        let pairs = pairs(&[0.0; 5], &[-1.0, 1.0, 3.0, 1.0, -3.0]);
        let warm = areas(&pairs, true, 500.0, 0.0);
        assert_eq!(
            warm,
            [vec![
                (499.0, 0.0, 0.0),
                (498.0, 0.0, 1.0),
                (496.0, 0.0, 3.0),
                (494.0, 0.0, 1.0),
                (493.5, 0.0, 0.0)
            ]]
        );
        let cold = areas(&pairs, false, 500.0, 0.0);
        assert_eq!(cold.len(), 2);
        assert_eq!(cold[1], [(493.5, 0.0, 0.0), (492.0, -3.0, 0.0)]);
    }

    #[test]
    fn a_parallelogram_gets_the_lines_it_should() {
        // 40 wide, 100 high, lines at 45 degrees 10 apart (14.14 along x): a strip of 140 along c holds 9 or 10 lines.
        let area = [(100.0, 0.0, 40.0), (50.0, 0.0, 40.0), (0.0, 0.0, 40.0)];
        let lines = hatch(
            &area,
            Hatching {
                slope: -1.0,
                spacing: 10.0,
            },
            &WIDE,
        );
        assert!((9..=10).contains(&lines.len()), "{}", lines.len());
        // Joined over the middle row: total length is area / spacing, within a line's worth.
        let total: f64 = lines.iter().map(|[a, b]| a.distance(*b)).sum();
        assert!((total - 400.0).abs() < 60.0, "{total}");
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 120, failure_persistence: None, ..ProptestConfig::default() })]

        /// Every hatching line lies between the two curves along its whole length, for curves that cross often.
        #[test]
        fn hatching_lies_between_the_curves(
            around in proptest::collection::vec(0.0..200.0f64, 40),
            parcel in proptest::collection::vec(0.0..200.0f64, 40),
            slope in prop_oneof![Just(-2.0), Just(2.0), Just(0.7)],
            warmer in any::<bool>(),
        ) {
            let pairs = pairs(&around, &parcel);
            let at = |y: f64| {
                let i = (((500.0 - y) / 2.0).floor().max(0.0) as usize).min(38);
                let s = (pairs[i].y - y) / 2.0;
                let mix = |f: fn(&Pair) -> f64| f(&pairs[i]) + s * (f(&pairs[i + 1]) - f(&pairs[i]));
                (mix(|p| p.around), mix(|p| p.parcel))
            };
            let mut count = 0;
            for area in areas(&pairs, warmer, 500.0, 422.0) {
                for [a, b] in hatch(&area, Hatching { slope, spacing: 5.0 }, &WIDE) {
                    for k in 0..=10 {
                        let s = f64::from(k) / 10.0;
                        let (x, y) = (a.x + s * (b.x - a.x), a.y + s * (b.y - a.y));
                        let (around, parcel) = at(y);
                        let (left, right) = if warmer { (around, parcel) } else { (parcel, around) };
                        prop_assert!(x >= left - 1e-6 && x <= right + 1e-6, "{left} <= {x} <= {right} at {y}");
                    }
                    count += 1;
                }
            }
            prop_assert!(count > 0);
        }
    }
}
