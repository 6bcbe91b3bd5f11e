//! Wind barbs after the WMO convention.
//!
//! A shaft points to where the wind comes from; a triangle counts 50 kt, a long feather 10 kt, a short one 5 kt, after
//! rounding to the nearest 5 kt. Feathers lie on the side of lower pressure: seen from the station along the shaft, to the
//! right on the northern hemisphere, to the left on the southern. Calm is a circle. (Manual on the Global
//! Data-processing System, WMO-No. 485, plotting models; from memory.)

use crate::Point;

/// Knots in one m/s: an international nautical mile is 1852 m exactly.
pub(crate) const KNOTS: f64 = 3600.0 / 1852.0;

/// Length of the shaft, points.
const SHAFT: f64 = 27.0;
/// No stroke of a barb is farther from its foot than this.
pub(crate) const REACH: f64 = 33.0;
const LONG: f64 = 10.5;
const GAP: f64 = 4.2;
const FLAG: f64 = 6.0;

/// Count of flags (50 kt), long feathers (10 kt) and short feathers (5 kt).
pub(crate) fn feathers(knots: f64) -> (usize, usize, usize) {
    if !knots.is_finite() || knots < 0.0 {
        return (0, 0, 0);
    }
    let fives = (knots.min(1000.0) / 5.0).round() as usize;
    (fives / 10, fives % 10 / 2, fives % 2)
}

/// The strokes of one barb.
#[derive(Debug, Clone, PartialEq, Default)]
pub(crate) struct Barb {
    pub lines: Vec<[Point; 2]>,
    pub flags: Vec<[Point; 3]>,
    /// Calm: a circle instead.
    pub calm: bool,
}

/// A barb with its foot at `foot`, wind from `direction` (degrees from north). Below 1 kt: calm. From 1 to 2.4 kt: a bare
/// shaft. `None` for what is not a wind.
pub(crate) fn barb(foot: Point, direction: f64, knots: f64, southern: bool) -> Option<Barb> {
    if !knots.is_finite() || knots < 0.0 {
        return None;
    }
    let mut barb = Barb::default();
    if knots < 1.0 {
        barb.calm = true;
        return Some(barb);
    }
    if !direction.is_finite() {
        return None;
    }
    let (flags, longs, shorts) = feathers(knots);
    let (sin, cos) = direction.to_radians().sin_cos();
    let side = if southern { -1.0 } else { 1.0 };
    // Along the shaft toward the wind's origin, and across to the feathers' side.
    let place = |along: f64, across: f64| {
        Point::new(
            foot.x + along * sin + side * across * cos,
            foot.y - along * cos + side * across * sin,
        )
    };
    // Jet-stream winds: feathers move together until the shaft can carry them.
    let needed = flags as f64 * (FLAG + 1.0) + (longs + shorts) as f64 * GAP + 4.0;
    let squeeze = (SHAFT / needed).min(1.0);
    let (flag, gap) = (FLAG * squeeze, GAP * squeeze);
    barb.lines.push([foot, place(SHAFT, 0.0)]);
    let mut along = SHAFT;
    for _ in 0..flags {
        barb.flags.push([
            place(along, 0.0),
            place(along - 0.5 * flag + 2.0, LONG),
            place(along - flag, 0.0),
        ]);
        along -= flag + squeeze;
    }
    if flags > 0 {
        along -= squeeze;
    }
    for _ in 0..longs {
        barb.lines
            .push([place(along, 0.0), place(along + 3.0, LONG)]);
        along -= gap;
    }
    if shorts > 0 {
        // A single short feather stands off the end, so that it can't be taken for a long one.
        if flags == 0 && longs == 0 {
            along -= gap;
        }
        barb.lines
            .push([place(along, 0.0), place(along + 1.5, 0.52 * LONG)]);
    }
    Some(barb)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn feathers_add_up() {
        // WMO convention: 50, 10 and 5 kt, rounded to the nearest 5.
        let cases = [
            (0.0, (0, 0, 0)),
            (2.4, (0, 0, 0)),
            (2.5, (0, 0, 1)),
            (5.0, (0, 0, 1)),
            (7.4, (0, 0, 1)),
            (7.5, (0, 1, 0)),
            (10.0, (0, 1, 0)),
            (23.0, (0, 2, 1)),
            (47.4, (0, 4, 1)),
            (48.0, (1, 0, 0)),
            (65.0, (1, 1, 1)),
            (100.0, (2, 0, 0)),
            (149.0, (3, 0, 0)),
            (185.0, (3, 3, 1)),
        ];
        for (knots, expect) in cases {
            assert_eq!(feathers(knots), expect, "{knots} kt");
            let drawn = barb(Point::default(), 240.0, knots.max(1.0), false).unwrap();
            assert_eq!(drawn.flags.len(), expect.0);
            assert_eq!(drawn.lines.len(), 1 + expect.1 + expect.2);
        }
    }

    #[test]
    fn a_north_wind_points_up_with_feathers_east_of_it_and_west_on_the_southern_hemisphere() {
        for (southern, sign) in [(false, 1.0), (true, -1.0)] {
            let drawn = barb(Point::new(100.0, 100.0), 0.0, 65.0, southern).unwrap();
            let tip = drawn.lines[0][1];
            assert!(tip.y < 100.0 - 20.0 && (tip.x - 100.0).abs() < 1e-9);
            for [_, end] in &drawn.lines[1..] {
                assert!(sign * (end.x - 100.0) > 4.0);
            }
            assert!(sign * (drawn.flags[0][1].x - 100.0) > 4.0);
        }
    }

    #[test]
    fn an_east_wind_points_right() {
        let tip = barb(Point::default(), 90.0, 10.0, false).unwrap().lines[0][1];
        assert!(tip.x > 20.0 && tip.y.abs() < 1e-9);
    }

    #[test]
    fn calm_is_no_shaft_and_light_air_a_bare_one() {
        let drawn = |direction, knots| barb(Point::default(), direction, knots, false);
        assert!(drawn(0.0, 0.0).unwrap().calm);
        assert_eq!(drawn(200.0, 2.0).unwrap().lines.len(), 1);
        assert_eq!(drawn(f64::NAN, 30.0), None);
        assert_eq!(drawn(20.0, f64::NAN), None);
    }

    #[test]
    fn no_stroke_reaches_farther_than_promised() {
        for knots in 1..300 {
            for direction in [0.0, 37.0, 180.0, 271.0] {
                let b = barb(Point::default(), direction, f64::from(knots), false).unwrap();
                let ends = b.lines.iter().flatten().chain(b.flags.iter().flatten());
                assert!(
                    ends.into_iter().all(|p| p.x.hypot(p.y) < REACH),
                    "{knots} kt"
                );
            }
        }
    }
}
