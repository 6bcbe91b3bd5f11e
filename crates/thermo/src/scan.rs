//! Signed areas between a parcel and its environment, with exact zero crossings.

use crate::column::{Column, Levels, MOISTURE_BULGE, Segment, WIDEST};
use crate::numeric::zero_between;
use crate::path::{Cubic, SPACING};

/// A stretch of one sign of buoyancy.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Run {
    pub bottom: f64,
    pub top: f64,
    pub positive: bool,
    /// Integral of (Tv parcel - Tv environment) dz, K.
    pub area: f64,
}

/// Largest departure of the parcel's virtual temperature from a chord of length h: this times h².
const PARCEL_BULGE: f64 = 25.0;
/// Buoyancy (K) above which no step can hide a crossing: the bulges over the widest step of a column.
const CALM: f64 = MOISTURE_BULGE + PARCEL_BULGE * WIDEST * WIDEST;

struct Scan<'a> {
    path: &'a Cubic,
    column: &'a Column,
    levels: Levels<'a>,
    runs: Vec<Run>,
    bottom: f64,
    positive: bool,
    /// Integrals of parcel and environment at `bottom`.
    at_bottom: (f64, f64),
}

/// Runs of one sign from `from` to `to` (both inside the column and the path).
pub(crate) fn runs(path: &Cubic, column: &Column, levels: Levels, from: f64, to: f64) -> Vec<Run> {
    if to <= from {
        return Vec::new();
    }
    let first = column.step_at(from);
    let buoyancy_from = path.value(from) - levels.segment_at(from).virtual_temperature(from);
    let mut scan = Scan {
        path,
        column,
        levels,
        runs: Vec::new(),
        bottom: from,
        positive: buoyancy_from > 0.0,
        at_bottom: (
            path.integral(from),
            column.integral_in(&levels, first, from),
        ),
    };
    // Nodes strictly between the ends.
    let inner = first + 1..column.z.partition_point(|&z| z < to).max(first + 1);
    let mut below = (from, buoyancy_from);
    let mut calm = false;
    let mut node = inner.start;
    while node < inner.end {
        // One polynomial of the parcel at a time, so that the loop over its nodes is plain arithmetic.
        let (c, foot, head) = path.piece_at(column.z[node]);
        // At least one node a turn, whatever rounding says of the piece it belongs to.
        let end = (node + 1..inner.end.min(node + BLOCK)).find(|&i| column.z[i] >= head);
        let end = end.unwrap_or(inner.end.min(node + BLOCK));
        let buoyancy = |z: f64, tv: f64| {
            let s = (z - foot) * (1.0 / SPACING);
            c[0] + s * (c[1] + s * (c[2] + s * c[3])) - tv
        };
        let (z, tv) = (&column.z[node..end], &column.tv[node..end]);
        // Far from any crossing a block is passed over as a whole.
        if calm && all_calm(z, tv, scan.positive, buoyancy) {
            node = end;
            let last = z.len() - 1;
            below = (z[last], buoyancy(z[last], tv[last]));
            continue;
        }
        for (&z, &tv) in z.iter().zip(tv) {
            let here = buoyancy(z, tv);
            let calm_here = is_calm(here, scan.positive);
            if !(calm && calm_here) {
                scan.step(node - 1, below, (z, here));
                calm = is_calm(here, scan.positive);
            }
            below = (z, here);
            node += 1;
        }
    }
    let step = (inner.end - 1).min(column.z.len().saturating_sub(2));
    let buoyancy_to = path.value(to) - levels.segment_at(column.z[step]).virtual_temperature(to);
    scan.step(step, below, (to, buoyancy_to));
    scan.close(step, to);
    scan.runs
}

/// Nodes looked at together.
const BLOCK: usize = 64;

#[inline(always)]
fn is_calm(buoyancy: f64, positive: bool) -> bool {
    if positive {
        buoyancy > CALM
    } else {
        buoyancy < -CALM
    }
}

/// Whether every node's buoyancy has this sign and is far from zero.
#[inline]
fn all_calm(z: &[f64], tv: &[f64], positive: bool, buoyancy: impl Fn(f64, f64) -> f64) -> bool {
    // Four minima side by side: the compiler may not reorder one.
    let sign = if positive { 1.0 } else { -1.0 };
    let mut least = [f64::INFINITY; 4];
    let (z_fours, z_rest) = z.as_chunks::<4>();
    let (tv_fours, tv_rest) = tv.as_chunks::<4>();
    for (z, tv) in z_fours.iter().zip(tv_fours) {
        for k in 0..4 {
            let value = sign * buoyancy(z[k], tv[k]);
            least[k] = if value < least[k] { value } else { least[k] };
        }
    }
    let rest = z_rest
        .iter()
        .zip(tv_rest)
        .map(|(z, tv)| sign * buoyancy(*z, *tv));
    rest.chain(least).all(|value| value > CALM)
}

impl Scan<'_> {
    /// Looks for changes of sign between two points inside one step of the column.
    #[inline]
    fn step(&mut self, step: usize, a: (f64, f64), b: (f64, f64)) {
        let h = b.0 - a.0;
        if (b.1 > 0.0) != self.positive {
            self.cross(step, a, b);
        } else if a.1.abs().min(b.1.abs()) < MOISTURE_BULGE + PARCEL_BULGE * h * h {
            self.lens(step, a, b);
        }
    }

    fn buoyancy(&self, segment: &Segment, z: f64) -> f64 {
        self.path.value(z) - segment.virtual_temperature(z)
    }

    #[cold]
    fn cross(&mut self, step: usize, a: (f64, f64), b: (f64, f64)) {
        let segment = self.levels.segment_at(self.column.z[step]);
        // Where the environment jumps (end of humidity) the step has no width and the crossing is there.
        let z = if b.0 <= a.0 {
            b.0
        } else {
            zero_between(a.0, a.1, b.0, b.1, |z| self.buoyancy(&segment, z))
        };
        self.close(step, z);
        self.positive = !self.positive;
    }

    /// A lens of the other sign inside a step whose ends have the same sign.
    #[cold]
    fn lens(&mut self, step: usize, a: (f64, f64), b: (f64, f64)) {
        if b.0 <= a.0 {
            return;
        }
        let segment = self.levels.segment_at(self.column.z[step]);
        let sign = if self.positive { 1.0 } else { -1.0 };
        let (mut left, mut right) = (a, b);
        for _ in 0..6 {
            let middle = 0.5 * (left.0 + right.0);
            let value = self.buoyancy(&segment, middle);
            // The parabola through the three points; its vertex must lie inside and come closer to zero.
            let (rise, bend) = (right.1 - left.1, left.1 + right.1 - 2.0 * value);
            let half = 0.5 * (right.0 - left.0);
            if sign * value <= 0.0 {
                self.cross(step, a, (middle, value));
                self.cross(step, (middle, value), b);
                return;
            }
            if sign * bend <= 0.0 || rise.abs() >= 2.0 * bend.abs() {
                return;
            }
            let vertex = middle - half * rise / (2.0 * bend);
            let lowest = value - rise * rise / (8.0 * bend);
            let at_vertex = self.buoyancy(&segment, vertex);
            if sign * at_vertex <= 0.0 {
                self.cross(step, a, (vertex, at_vertex));
                self.cross(step, (vertex, at_vertex), b);
                return;
            }
            if (at_vertex - lowest).abs() < 0.5 * at_vertex.abs() {
                return;
            }
            if vertex < middle {
                right = (middle, value);
            } else {
                left = (middle, value);
            }
        }
    }

    fn close(&mut self, step: usize, z: f64) {
        let at = (
            self.path.integral(z),
            self.column.integral_in(&self.levels, step, z),
        );
        let area = (at.0 - self.at_bottom.0) - (at.1 - self.at_bottom.1);
        self.runs.push(Run {
            bottom: self.bottom,
            top: z,
            positive: self.positive,
            area,
        });
        self.bottom = z;
        self.at_bottom = at;
    }
}
