//! Signed areas between a parcel and its environment, with exact zero crossings.

use crate::column::{Column, Levels, MOISTURE_BULGE, STRETCH, Segment, WIDEST};
use crate::numeric::zero_between;
use crate::path::Cubic;

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
    let mut piece = path.piece_at(from);
    while node < inner.end {
        // Whole stretches far from any crossing, judged by their ends.
        if calm && (node - 1) % STRETCH == 0 && node - 1 + STRETCH < inner.end {
            let head = node - 1 + STRETCH;
            let z = column.z[head];
            let here = path.value(z) - column.tv[head];
            if is_calm_stretch(
                column,
                (node - 1) / STRETCH,
                below,
                (z, here),
                scan.positive,
            ) {
                below = (z, here);
                node = head + 1;
                continue;
            }
        }
        let z = column.z[node];
        if z >= piece.head {
            piece = path.piece_at(z);
        }
        let here = piece.value(z) - column.tv[node];
        let calm_here = is_calm(here, scan.positive);
        if !(calm && calm_here) {
            scan.step(node - 1, below, (z, here));
            calm = is_calm(here, scan.positive);
        }
        below = (z, here);
        node += 1;
    }
    let step = (inner.end - 1).min(column.z.len().saturating_sub(2));
    let buoyancy_to = path.value(to) - levels.segment_at(column.z[step]).virtual_temperature(to);
    scan.step(step, below, (to, buoyancy_to));
    scan.close(step, to);
    scan.runs
}

#[inline(always)]
fn is_calm(buoyancy: f64, positive: bool) -> bool {
    if positive {
        buoyancy > CALM
    } else {
        buoyancy < -CALM
    }
}

/// Whether the buoyancy of a stretch has this sign and is far from zero throughout, by what it is at the ends and how far
/// parcel and environment can depart from straight lines between them.
#[inline]
fn is_calm_stretch(
    column: &Column,
    stretch: usize,
    (foot, at_foot): (f64, f64),
    (head, at_head): (f64, f64),
    positive: bool,
) -> bool {
    let Some(&(low, high)) = column.departures.get(stretch) else {
        return false;
    };
    let bulge = PARCEL_BULGE * (head - foot) * (head - foot);
    if positive {
        at_foot.min(at_head) - high - bulge > CALM
    } else {
        at_foot.max(at_head) - low + bulge < -CALM
    }
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
