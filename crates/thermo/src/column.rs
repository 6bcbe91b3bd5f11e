//! The environment as integration sees it: virtual temperature at nodes and its running integral.
//!
//! The vertical coordinate everywhere in here is z = -ln p (p in Pa), which grows upward, so that an area is
//! `Rd * integral of (Tv parcel - Tv environment) dz`.

use crate::elementary::{at_least, at_most, exp};
use crate::numeric::{gauss4, hermite_integral};
use crate::saturation::{E0, NO_VAPOUR, exponent, exponent_and_slope};
use crate::{EPSILON, KAPPA};

/// Largest spacing of nodes in z.
pub(crate) const WIDEST: f64 = 0.05;
/// Largest departure (K) of virtual temperature from a straight line between nodes that moisture may cause.
pub(crate) const MOISTURE_BULGE: f64 = 0.01;
/// Largest error (K) of the end-corrected trapezium over a step: 1e-4 J/kg at most over all of the moist air.
const STEP_ERROR: f64 = 2e-7;
/// A segment is never cut into more pieces than this.
const MOST_PIECES: f64 = 200.0;
/// Virtual temperature is T / (1 - LIGHTER e/p), the same as T (1 + w/eps) / (1 + w).
const LIGHTER: f64 = 1.0 - EPSILON;

/// Virtual temperature of the interpolated air at nodes, and its running integral.
///
/// **Invariant:** `z` never falls; two nodes share a z only where the humidity ends and the air above counts as dry.
#[derive(Debug, Clone, Default)]
pub(crate) struct Column {
    /// -ln p of the nodes.
    pub z: Vec<f64>,
    /// Virtual temperature at the nodes, K.
    pub tv: Vec<f64>,
    /// Integral of virtual temperature over z from the first node, K.
    pub tv_integral: Vec<f64>,
    /// For every [`STRETCH`] steps (the last, shorter stretch has none) how far the nodes' virtual temperatures lie below and
    /// above the straight line from the stretch's foot to its head, K: lowest (<= 0) and highest (>= 0).
    pub departures: Vec<(f64, f64)>,
}

/// Steps of a column looked at as a whole.
pub(crate) const STRETCH: usize = 16;

/// One segment between two levels: temperature and dew point linear in z.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Segment {
    pub z: f64,
    pub t: f64,
    pub t_slope: f64,
    /// Dew point and its slope; `None` when the air counts as dry.
    pub td: Option<(f64, f64)>,
}

/// Share of vapour in the pressure, kept at no more than half so that there is always dry air.
#[inline(always)]
fn share(ln_e: f64, z: f64) -> f64 {
    // No vapour is a small number rather than one so small that the processor must slow down for it.
    at_most(E0 * exp(at_least(ln_e + z, -300.0)), 0.5)
}

impl Segment {
    #[inline]
    pub fn temperature(&self, z: f64) -> f64 {
        self.t + self.t_slope * (z - self.z)
    }

    #[inline]
    fn point(&self, z: f64) -> Point {
        let t = self.temperature(z);
        match self.td {
            Some((td, slope)) => Point::new(z, t, td + slope * (z - self.z)),
            None => Point::dry(z, t),
        }
    }

    /// e/p.
    #[inline]
    fn vapour_share(&self, z: f64) -> f64 {
        match self.td {
            Some((td, slope)) => share(exponent(td + slope * (z - self.z)), z),
            None => 0.0,
        }
    }

    #[inline]
    pub fn mixing_ratio(&self, z: f64) -> f64 {
        let share = self.vapour_share(z);
        EPSILON * share / (1.0 - share)
    }

    #[inline]
    pub fn virtual_temperature(&self, z: f64) -> f64 {
        self.temperature(z) / (1.0 - LIGHTER * self.vapour_share(z))
    }

    /// d w / dz where the mixing ratio is `w`.
    #[inline]
    fn mixing_ratio_slope(&self, z: f64, w: f64) -> f64 {
        match self.td {
            Some((td, slope)) => {
                w * (1.0 + w / EPSILON)
                    * (exponent_and_slope(td + slope * (z - self.z)).1 * slope + 1.0)
            }
            None => 0.0,
        }
    }

    /// The change of ln e and of ln p over `[a, b]`, in size: how strongly moisture bends.
    #[inline]
    fn moisture_change(&self, a: f64, b: f64) -> f64 {
        match self.td {
            Some((td, slope)) => {
                (exponent(td + slope * (b - self.z)) - exponent(td + slope * (a - self.z))).abs()
                    + (b - a)
            }
            None => 0.0,
        }
    }
}

/// Moist air at one height, with what its slopes need.
#[derive(Debug, Clone, Copy)]
struct Point {
    z: f64,
    /// Exponent of eq. 10.
    exponent: f64,
    /// d ln e / dTd, 1/K.
    per_kelvin: f64,
    /// LIGHTER e/p.
    lightness: f64,
    /// Tv / T.
    stretch: f64,
    tv: f64,
}

impl Point {
    #[inline]
    fn new(z: f64, t: f64, td: f64) -> Self {
        let (exponent, per_kelvin) = exponent_and_slope(td);
        let lightness = LIGHTER * share(exponent, z);
        let stretch = 1.0 / (1.0 - lightness);
        Self {
            z,
            exponent,
            per_kelvin,
            lightness,
            stretch,
            tv: t * stretch,
        }
    }

    fn dry(z: f64, t: f64) -> Self {
        Self {
            z,
            exponent: 0.0,
            per_kelvin: 0.0,
            lightness: 0.0,
            stretch: 1.0,
            tv: t,
        }
    }

    /// d Tv / dz where T and Td have these slopes: d(e/p) = e/p (d ln e - d ln p), and d ln p = -dz.
    #[inline]
    fn slope(&self, t_slope: f64, td_slope: f64) -> f64 {
        self.stretch * (t_slope + self.tv * self.lightness * (self.per_kelvin * td_slope + 1.0))
    }

    /// How strongly moisture bends between two points.
    #[inline]
    fn moisture_change(&self, other: &Self) -> f64 {
        (other.exponent - self.exponent).abs() + (other.z - self.z)
    }

    /// Integral of Tv over z up to `other`, in the same step.
    #[inline]
    fn integral_to(&self, other: &Self, segment: &Segment) -> f64 {
        let h = other.z - self.z;
        let Some((_, td_slope)) = segment.td else {
            return 0.5 * h * (self.tv + other.tv);
        };
        let slope = |point: &Self| point.slope(segment.t_slope, td_slope);
        hermite_integral(h, (self.tv, slope(self)), (other.tv, slope(other)))
    }
}

/// The levels a column is built from (parallel slices).
#[derive(Debug, Clone, Copy)]
pub(crate) struct Levels<'a> {
    pub z: &'a [f64],
    pub t: &'a [f64],
    pub td: &'a [Option<f64>],
}

impl Levels<'_> {
    /// The segment from level `i` to the next; `i` is clamped to a valid segment.
    #[inline]
    pub fn segment(&self, i: usize) -> Segment {
        let i = i.min(self.z.len().saturating_sub(2));
        let per = 1.0 / (self.z[i + 1] - self.z[i]);
        let td = match (self.td[i], self.td[i + 1]) {
            (Some(a), Some(b)) => Some((a, (b - a) * per)),
            _ => None,
        };
        Segment {
            z: self.z[i],
            t: self.t[i],
            t_slope: (self.t[i + 1] - self.t[i]) * per,
            td,
        }
    }

    /// The segment that holds `z` (the upper one when `z` is a level).
    pub fn segment_at(&self, z: f64) -> Segment {
        self.segment(
            self.z
                .partition_point(|&level| level <= z)
                .saturating_sub(1),
        )
    }

    fn point(&self, i: usize) -> Point {
        match self.td[i] {
            Some(td) => Point::new(self.z[i], self.t[i], td),
            None => Point::dry(self.z[i], self.t[i]),
        }
    }
}

/// Segments worked on at a time: small enough for the nearest cache, long enough to fill vector registers.
const BLOCK: usize = 128;

/// Levels of one block and the one above it, as plain columns so that the compiler can vectorise.
struct Block {
    exponent: [f64; BLOCK + 1],
    per_kelvin: [f64; BLOCK + 1],
    lightness: [f64; BLOCK + 1],
    stretch: [f64; BLOCK + 1],
    tv: [f64; BLOCK + 1],
    td: [f64; BLOCK + 1],
    /// Integral of Tv over each segment's z.
    integral: [f64; BLOCK],
    /// Above 1 where a segment must be cut or integrated more carefully.
    strain: [f64; BLOCK],
}

impl Block {
    fn new() -> Self {
        let nodes = [0.0; BLOCK + 1];
        let segments = [0.0; BLOCK];
        Self {
            exponent: nodes,
            per_kelvin: nodes,
            lightness: nodes,
            stretch: nodes,
            tv: nodes,
            td: nodes,
            integral: segments,
            strain: segments,
        }
    }

    /// One of its levels, at this z.
    fn point(&self, k: usize, z: f64) -> Point {
        Point {
            z,
            exponent: self.exponent[k],
            per_kelvin: self.per_kelvin[k],
            lightness: self.lightness[k],
            stretch: self.stretch[k],
            tv: self.tv[k],
        }
    }

    /// Fills the block from `count` segments' levels (`count + 1` of each column). Levels without humidity hold no
    /// vapour here.
    fn fill(&mut self, z: &[f64], t: &[f64], td: &[Option<f64>]) {
        let nodes = z.len().min(BLOCK + 1);
        let count = nodes.saturating_sub(1);
        // Slices of one length: the compiler sees that no index leaves them, and takes the numbers side by side.
        let (z, t, td) = (&z[..nodes], &t[..nodes], &td[..nodes]);
        let plain = &mut self.td[..nodes];
        for (plain, td) in plain.iter_mut().zip(td) {
            *plain = td.unwrap_or(NO_VAPOUR);
        }
        let exponent = &mut self.exponent[..nodes];
        let per_kelvin = &mut self.per_kelvin[..nodes];
        for i in 0..nodes {
            (exponent[i], per_kelvin[i]) = exponent_and_slope(plain[i]);
        }
        let lightness = &mut self.lightness[..nodes];
        for i in 0..nodes {
            lightness[i] = LIGHTER * share(exponent[i], z[i]);
        }
        let stretch = &mut self.stretch[..nodes];
        let tv = &mut self.tv[..nodes];
        for i in 0..nodes {
            stretch[i] = 1.0 / (1.0 - lightness[i]);
            tv[i] = t[i] * stretch[i];
        }
        let integral = &mut self.integral[..count];
        let strains = &mut self.strain[..count];
        for i in 0..count {
            let h = z[i + 1] - z[i];
            let t_rise = t[i + 1] - t[i];
            let td_rise = plain[i + 1] - plain[i];
            // Slopes times h, so that nothing is divided by it: `Point::slope`, `hermite_integral`.
            let rise = |i: usize| {
                stretch[i] * (t_rise + tv[i] * lightness[i] * (per_kelvin[i] * td_rise + h))
            };
            integral[i] = h * (0.5 * (tv[i] + tv[i + 1]) + (1.0 / 12.0) * (rise(i) - rise(i + 1)));
            let change = (exponent[i + 1] - exponent[i]).abs() + h;
            let weight = t[i] * at_least(lightness[i], lightness[i + 1]);
            strains[i] = strain(h, weight, change);
        }
    }
}

/// How far a step is from being taken as it is (1 = at the limit): too wide, bent too much, integrated too poorly.
#[inline(always)]
fn strain(h: f64, weight: f64, change: f64) -> f64 {
    let square = change * change;
    let bend = weight * square;
    let moisture = at_least(
        bend * (1.0 / (8.0 * MOISTURE_BULGE)),
        bend * square * (1.0 / (720.0 * STEP_ERROR)),
    );
    at_least(moisture, h * (1.0 / WIDEST))
}

impl Column {
    /// Makes this the column of the lowest `segments` segments of the levels, of which the first `humid` levels have
    /// humidity. Needs at least one segment, and strictly growing z.
    pub fn fill(&mut self, levels: &Levels, humid: usize, segments: usize) {
        for column in [&mut self.z, &mut self.tv, &mut self.tv_integral] {
            column.clear();
            column.reserve(segments + segments / 8 + 32);
        }
        let first = levels.point(0);
        let mut sum = 0.0;
        self.push(first.z, first.tv, sum);
        let mut block = Block::new();
        let mut begin = 0;
        while begin < segments {
            let end = (begin + BLOCK).min(segments);
            block.fill(
                &levels.z[begin..=end],
                &levels.t[begin..=end],
                &levels.td[begin..=end],
            );
            if (begin..end).contains(&(humid - 1)) {
                // Dry above its foot: not what its two ends say.
                block.strain[humid - 1 - begin] = f64::INFINITY;
            }
            let mut k = 0;
            while k < end - begin {
                let calm = block.strain[k..end - begin]
                    .iter()
                    .take_while(|strain| **strain <= 1.0)
                    .count();
                self.z
                    .extend_from_slice(&levels.z[begin + k + 1..begin + k + 1 + calm]);
                self.tv.extend_from_slice(&block.tv[k + 1..k + 1 + calm]);
                self.tv_integral
                    .extend(block.integral[k..k + calm].iter().map(|part| {
                        sum += part;
                        sum
                    }));
                k += calm;
                if k < end - begin {
                    let ends = (
                        block.point(k, levels.z[begin + k]),
                        block.point(k + 1, levels.z[begin + k + 1]),
                    );
                    sum = self.careful_segment(levels, begin + k, ends, sum);
                    k += 1;
                }
            }
            begin = end;
        }
        self.measure_departures();
    }

    fn measure_departures(&mut self) {
        let stretches = self.z.len().saturating_sub(1) / STRETCH;
        let (z, tv) = (&self.z, &self.tv);
        self.departures.clear();
        self.departures.extend((0..stretches).map(|stretch| {
            let (foot, head) = (stretch * STRETCH, (stretch + 1) * STRETCH);
            let h = z[head] - z[foot];
            // A stretch without depth (the end of humidity) has no line: its nodes are compared with its foot.
            let slope = if h > 0.0 {
                (tv[head] - tv[foot]) / h
            } else {
                0.0
            };
            // Two by two, so that the compiler may take them side by side.
            let (mut low, mut high) = ([0.0_f64; 2], [0.0_f64; 2]);
            let nodes = z[foot..head]
                .chunks_exact(2)
                .zip(tv[foot..head].chunks_exact(2));
            for (z_two, tv_two) in nodes {
                for k in 0..2 {
                    let departure = tv_two[k] - tv[foot] - slope * (z_two[k] - z[foot]);
                    low[k] = at_most(low[k], departure);
                    high[k] = at_least(high[k], departure);
                }
            }
            let at_head = tv[head] - tv[foot] - slope * h;
            (
                low[0].min(low[1]).min(at_head),
                high[0].max(high[1]).max(at_head),
            )
        }));
    }

    /// Makes this the column of the levels when only the lowest `changed` of them differ from those it was made of;
    /// `kept_node` is the node of the lowest level that stays. `lower` lends its memory.
    pub fn refill(
        &mut self,
        lower: &mut Self,
        levels: &Levels,
        humid: usize,
        changed: usize,
        kept_node: usize,
    ) {
        if changed + 1 >= levels.z.len() {
            self.fill(levels, humid, levels.z.len() - 1);
            return;
        }
        if changed == 0 {
            self.z.drain(..kept_node);
            self.tv.drain(..kept_node);
            self.tv_integral.drain(..kept_node);
            self.measure_departures();
            return;
        }
        lower.fill(levels, humid.min(changed + 1), changed);
        // Only differences of the running integral matter: the new part is fitted to the old.
        let (end, joint) = (lower.tv_integral.pop(), self.tv_integral.get(kept_node));
        let offset = joint.copied().unwrap_or(0.0) - end.unwrap_or(0.0);
        lower.z.pop();
        lower.tv.pop();
        self.z.splice(..kept_node, lower.z.drain(..));
        self.tv.splice(..kept_node, lower.tv.drain(..));
        self.tv_integral.splice(
            ..kept_node,
            lower.tv_integral.drain(..).map(|part| part + offset),
        );
        self.measure_departures();
    }

    /// Adds the nodes of a segment that must be cut, between the points at its ends; returns the new running integral.
    fn careful_segment(
        &mut self,
        levels: &Levels,
        i: usize,
        (mut foot, mut head): (Point, Point),
        mut sum: f64,
    ) -> f64 {
        let segment = levels.segment(i);
        if segment.td.is_none() {
            head = Point::dry(head.z, levels.t[i + 1]);
            if levels.td[i].is_some() {
                // Humidity ends here: a step without width, and dry air above it.
                foot = Point::dry(foot.z, levels.t[i]);
                self.push(foot.z, foot.tv, sum);
            }
        }
        // The virtual increment T (1 - eps) e/p bends with the square of the change of ln e.
        let weight = levels.t[i] * foot.lightness.max(head.lightness);
        let change = foot.moisture_change(&head);
        let h = head.z - foot.z;
        let bend = weight * change * change;
        // Halving a step quarters its bulge and makes its error a sixteenth.
        let pieces = (h / WIDEST)
            .max((bend / (8.0 * MOISTURE_BULGE)).sqrt())
            .max(
                (bend * change * change / (720.0 * STEP_ERROR))
                    .sqrt()
                    .sqrt(),
            )
            .ceil()
            .clamp(1.0, MOST_PIECES);
        let step = h / pieces;
        for piece in 1..pieces as usize {
            let point = segment.point(segment.z + piece as f64 * step);
            sum += foot.integral_to(&point, &segment);
            self.push(point.z, point.tv, sum);
            foot = point;
        }
        sum += foot.integral_to(&head, &segment);
        self.push(head.z, head.tv, sum);
        sum
    }

    #[inline(always)]
    fn push(&mut self, z: f64, tv: f64, integral: f64) {
        self.z.push(z);
        self.tv.push(tv);
        self.tv_integral.push(integral);
    }

    /// Index of the node at the foot of the step that holds `z` (the upper step when `z` is a node).
    pub fn step_at(&self, z: f64) -> usize {
        self.z
            .partition_point(|&node| node <= z)
            .saturating_sub(1)
            .min(self.z.len().saturating_sub(2))
    }

    /// Integral of virtual temperature from the first node to `z` inside the step above node `step`.
    pub fn integral_in(&self, levels: &Levels, step: usize, z: f64) -> f64 {
        if z <= self.z[step] {
            return self.tv_integral[step];
        }
        if z >= self.z[step + 1] {
            return self.tv_integral[step + 1];
        }
        let segment = levels.segment_at(self.z[step]);
        let foot = segment.point(self.z[step]);
        let here = segment.point(z);
        self.tv_integral[step] + foot.integral_to(&here, &segment)
    }
}

/// Integrals over p (Pa) of theta (K Pa) and mixing ratio (Pa) between `bottom` and `top` in z, inside the humid part.
pub(crate) fn theta_and_moisture(levels: &Levels, bottom: f64, top: f64) -> (f64, f64) {
    // T = a + b x with x = ln p: the integral of T (p0/p)^kappa dp is p0^kappa [(T - b/c)/c e^(c x)], c = 1 - kappa.
    let c = 1.0 - KAPPA;
    let p0 = crate::REFERENCE_PRESSURE.powf(KAPPA);
    let (mut theta, mut moisture) = (0.0, 0.0);
    let first = levels.z.partition_point(|&z| z <= bottom).saturating_sub(1);
    let ends = |z: f64, segment: &Segment| (exp(-z), segment.mixing_ratio(z));
    // Pressure and mixing ratio at the head of a segment serve again at the foot of the next.
    let mut shared = None;
    for i in first..levels.z.len() - 1 {
        let (za, zb) = (levels.z[i].max(bottom), levels.z[i + 1].min(top));
        if zb <= za {
            break;
        }
        let segment = levels.segment(i);
        let (pa, wa) = shared.unwrap_or_else(|| ends(za, &segment));
        let head = ends(zb, &segment);
        let (pb, wb) = head;
        shared = Some(head);
        let primitive = |z: f64| (segment.temperature(z) + segment.t_slope / c) / c * exp(-c * z);
        theta += p0 * (primitive(za) - primitive(zb));
        let change = segment.moisture_change(za, zb);
        moisture += if wa.max(wb) * change.powi(4) <= 720.0 * 1e-11 {
            let slope = |z: f64, w: f64, p: f64| p * (segment.mixing_ratio_slope(z, w) - w);
            hermite_integral(
                zb - za,
                (wa * pa, slope(za, wa, pa)),
                (wb * pb, slope(zb, wb, pb)),
            )
        } else {
            let pieces = (change / 0.7)
                .max((zb - za) / 0.2)
                .ceil()
                .clamp(1.0, MOST_PIECES);
            let h = (zb - za) / pieces;
            (0..pieces as usize)
                .map(|k| {
                    let a = za + k as f64 * h;
                    gauss4(a, a + h, |z| segment.mixing_ratio(z) * exp(-z))
                })
                .sum()
        };
    }
    (theta, moisture)
}
