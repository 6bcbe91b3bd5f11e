//! Walking up the interpolated profile in steps that are straight enough.

use crate::Environment;
use crate::column::Segment;
use crate::numeric::zero_between;

/// Widest step in ln p where a condition on moist air is looked for.
pub(super) const WIDEST: f64 = 0.01;
/// Widest step in dew point, K.
const WIDEST_DEWPOINT: f64 = 1.0;

/// Stretches of segments between two heights in z, from the lowest; none wider than `widest`, and, where that is finite,
/// none over which the dew point changes by more than 1 K. `false` from the visitor ends the walk.
pub(super) fn walk(
    environment: &Environment,
    from: f64,
    to: f64,
    widest: f64,
    mut visit: impl FnMut(&Segment, f64, f64) -> bool,
) {
    let levels = environment.levels();
    let first = levels.z.partition_point(|&z| z <= from).saturating_sub(1);
    for i in first..levels.z.len().saturating_sub(1) {
        let (a, b) = (levels.z[i].max(from), levels.z[i + 1].min(to));
        if b <= a {
            if levels.z[i] >= to {
                return;
            }
            continue;
        }
        let segment = levels.segment(i);
        if !pieces(&segment, a, b, widest, |a, b| visit(&segment, a, b)) {
            return;
        }
    }
}

/// The same of one stretch of a segment; `false` when the visitor ended it.
pub(super) fn pieces(
    segment: &Segment,
    a: f64,
    b: f64,
    widest: f64,
    mut visit: impl FnMut(f64, f64) -> bool,
) -> bool {
    if widest == f64::INFINITY {
        return visit(a, b);
    }
    let change = segment.td.map_or(0.0, |(_, slope)| (slope * (b - a)).abs());
    let count = ((b - a) / widest).max(change / WIDEST_DEWPOINT).ceil();
    let count = count.clamp(1.0, 1_000.0);
    let h = (b - a) / count;
    let last = count as usize - 1;
    (0..=last).all(|piece| {
        let left = a + piece as f64 * h;
        visit(left, if piece == last { b } else { left + h })
    })
}

/// The lowest z between `from` and `to` where `value` falls from above zero to zero or below; `None` when it isn't above
/// zero at `from` or doesn't fall. Two crossings inside one step of the [`walk`] are not seen.
pub(super) fn first_fall(
    environment: &Environment,
    from: f64,
    to: f64,
    widest: f64,
    value: impl Fn(&Segment, f64) -> f64,
) -> Option<f64> {
    // Value at the foot of the next step, and whether the air there is dry: where humidity ends the value may jump.
    let mut below: Option<(f64, bool)> = None;
    let mut found = None;
    walk(environment, from, to, widest, |segment, a, b| {
        let dry = segment.td.is_none();
        let foot = match below {
            Some((foot, was_dry)) if was_dry == dry => foot,
            Some(_) => {
                let foot = value(segment, a);
                if foot <= 0.0 {
                    found = Some(a);
                    return false;
                }
                foot
            }
            None => {
                let foot = value(segment, a);
                if foot.is_nan() || foot <= 0.0 {
                    return false;
                }
                foot
            }
        };
        let head = value(segment, b);
        if head <= 0.0 {
            found = Some(zero_between(a, foot, b, head, |z| value(segment, z)));
            return false;
        }
        below = Some((head, dry));
        true
    });
    found
}
