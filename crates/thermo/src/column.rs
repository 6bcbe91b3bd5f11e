//! The environment as integration sees it: virtual temperature at nodes and its running integral.
//!
//! The vertical coordinate everywhere in here is z = -ln p (p in Pa), which grows upward, so that an area is
//! `Rd * integral of (Tv parcel - Tv environment) dz`.

use crate::numeric::{gauss4, hermite_integral};
use crate::saturation::{dln_e_water, e_water, exponent, mixing_ratio, virtual_temperature};
use crate::{EPSILON, KAPPA};

/// Largest spacing of nodes in z.
const WIDEST: f64 = 0.05;
/// Largest departure (K) of virtual temperature from a straight line between nodes that moisture may cause.
pub(crate) const MOISTURE_BULGE: f64 = 0.002;
/// Largest error (K) of the end-corrected trapezium; steps with more take the Gauss rule.
const STEP_ERROR: f64 = 1e-8;
/// A segment is never cut into more pieces than this.
const MOST_PIECES: f64 = 200.0;

/// Virtual temperature and mixing ratio of the interpolated air at nodes, with running integrals.
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
    /// Index of the profile's level at or below each node's upward step.
    pub level: Vec<u32>,
}

/// One segment between two levels: temperature and dew point linear in z.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Segment {
    pub z: f64,
    pub t: f64,
    pub t_slope: f64,
    /// Dew point and its slope; `None` when the air counts as dry.
    pub td: Option<(f64, f64)>,
}

impl Segment {
    #[inline]
    pub fn temperature(&self, z: f64) -> f64 {
        self.t + self.t_slope * (z - self.z)
    }

    #[inline]
    pub fn mixing_ratio(&self, z: f64) -> f64 {
        match self.td {
            Some((td, slope)) => vapour((-z).exp(), e_water(td + slope * (z - self.z))),
            None => 0.0,
        }
    }

    #[inline]
    pub fn virtual_temperature(&self, z: f64) -> f64 {
        virtual_temperature(self.temperature(z), self.mixing_ratio(z))
    }

    /// d Tv / dz where the mixing ratio is `w`.
    #[inline]
    fn virtual_slope(&self, z: f64, w: f64) -> f64 {
        let Some((td, slope)) = self.td else {
            return self.t_slope;
        };
        let dry_share = 1.0 / (1.0 + w);
        let w_slope =
            w * (1.0 + w / EPSILON) * (dln_e_water(td + slope * (z - self.z)) * slope + 1.0);
        dry_share
            * (self.t_slope * (1.0 + w / EPSILON)
                + self.temperature(z) * (1.0 / EPSILON - 1.0) * dry_share * w_slope)
    }

    /// d w / dz where the mixing ratio is `w`.
    #[inline]
    fn mixing_ratio_slope(&self, z: f64, w: f64) -> f64 {
        match self.td {
            Some((td, slope)) => {
                w * (1.0 + w / EPSILON) * (dln_e_water(td + slope * (z - self.z)) * slope + 1.0)
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

/// Mixing ratio with room for dry air kept: interpolated air never holds more vapour than half its pressure.
#[inline]
fn vapour(p: f64, e: f64) -> f64 {
    mixing_ratio(p, e.min(0.5 * p))
}

/// The levels a column is built from (parallel slices; `known` = number of levels with humidity, from the bottom).
#[derive(Debug, Clone, Copy)]
pub(crate) struct Levels<'a> {
    pub z: &'a [f64],
    pub p: &'a [f64],
    pub t: &'a [f64],
    pub td: &'a [Option<f64>],
}

impl Levels<'_> {
    /// The segment from level `i` to the next; `i` is clamped to a valid segment.
    #[inline]
    pub fn segment(&self, i: usize) -> Segment {
        let i = i.min(self.z.len().saturating_sub(2));
        let width = self.z[i + 1] - self.z[i];
        let per = 1.0 / width;
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
}

impl Column {
    /// Nodes of the levels. Needs at least two levels with strictly growing z.
    pub fn new(levels: &Levels) -> Self {
        let n = levels.z.len();
        let mut column = Column {
            z: Vec::with_capacity(n + n / 4 + 8),
            tv: Vec::with_capacity(n + n / 4 + 8),
            tv_integral: Vec::with_capacity(n + n / 4 + 8),
            level: Vec::with_capacity(n + n / 4 + 8),
        };
        let mut sum = 0.0;
        let mut w = levels.td[0].map_or(0.0, |td| vapour(levels.p[0], e_water(td)));
        column.push(levels.z[0], virtual_temperature(levels.t[0], w), sum, 0);
        let mut humid = levels.td[0].is_some();
        for i in 0..n - 1 {
            let segment = levels.segment(i);
            let (za, zb) = (levels.z[i], levels.z[i + 1]);
            if humid && segment.td.is_none() {
                humid = false;
                w = 0.0;
                column.push(za, levels.t[i], sum, i);
            }
            let w_end = match segment.td {
                Some(_) => vapour(levels.p[i + 1], levels.td[i + 1].map_or(0.0, e_water)),
                None => 0.0,
            };
            // Virtual increment 0.61 T w bends with the square of the change of ln e.
            let weight = 0.61 * levels.t[i] * w.max(w_end);
            let change = segment.moisture_change(za, zb);
            let bend = weight * change * change;
            let mut pieces = 1.0;
            if zb - za > WIDEST || bend > 8.0 * MOISTURE_BULGE {
                pieces = ((zb - za) / WIDEST)
                    .max((bend / (8.0 * MOISTURE_BULGE)).sqrt())
                    .ceil()
                    .min(MOST_PIECES);
            }
            let count = pieces as usize;
            let h = (zb - za) / pieces;
            let mut left = (column.last_tv(), w);
            let mut a = za;
            for piece in 1..=count {
                let (b, w_b) = if piece == count {
                    (zb, w_end)
                } else {
                    let b = za + piece as f64 * h;
                    (b, segment.mixing_ratio(b))
                };
                let tv_b = virtual_temperature(segment.temperature(b), w_b);
                sum += if segment.td.is_none() {
                    0.5 * (b - a) * (left.0 + tv_b)
                } else {
                    let part = if count == 1 {
                        change
                    } else {
                        segment.moisture_change(a, b)
                    };
                    if weight * part.powi(4) <= 720.0 * STEP_ERROR {
                        hermite_integral(
                            b - a,
                            (left.0, segment.virtual_slope(a, left.1)),
                            (tv_b, segment.virtual_slope(b, w_b)),
                        )
                    } else {
                        gauss4(a, b, |z| segment.virtual_temperature(z))
                    }
                };
                column.push(b, tv_b, sum, if piece == count { i + 1 } else { i });
                left = (tv_b, w_b);
                a = b;
            }
            w = w_end;
        }
        column
    }

    fn push(&mut self, z: f64, tv: f64, integral: f64, level: usize) {
        self.z.push(z);
        self.tv.push(tv);
        self.tv_integral.push(integral);
        self.level.push(level as u32);
    }

    fn last_tv(&self) -> f64 {
        self.tv.last().copied().unwrap_or(0.0)
    }

    /// Index of the node at the foot of the step that holds `z` (the upper step when `z` is a node).
    pub fn step_at(&self, z: f64) -> usize {
        self.z
            .partition_point(|&node| node <= z)
            .saturating_sub(1)
            .min(self.z.len().saturating_sub(2))
    }

    /// Virtual temperature at `z` inside the step above node `step`.
    #[inline]
    pub fn tv_in(&self, levels: &Levels, step: usize, z: f64) -> f64 {
        levels
            .segment(self.level[step] as usize)
            .virtual_temperature(z)
    }

    /// Integral of virtual temperature from the first node to `z` inside the step above node `step`.
    pub fn integral_in(&self, levels: &Levels, step: usize, z: f64) -> f64 {
        if z <= self.z[step] {
            return self.tv_integral[step];
        }
        if z >= self.z[step + 1] {
            return self.tv_integral[step + 1];
        }
        let segment = levels.segment(self.level[step] as usize);
        self.tv_integral[step] + gauss4(self.z[step], z, |z| segment.virtual_temperature(z))
    }
}

/// Integrals over p (Pa) of theta (K Pa) and mixing ratio (Pa) between `bottom` and `top` in z, inside the humid part.
pub(crate) fn theta_and_moisture(levels: &Levels, bottom: f64, top: f64) -> (f64, f64) {
    // T = a + b x with x = ln p: the integral of T (p0/p)^kappa dp is p0^kappa [(T - b/c)/c e^(c x)], c = 1 - kappa.
    let c = 1.0 - KAPPA;
    let p0 = crate::REFERENCE_PRESSURE.powf(KAPPA);
    let (mut theta, mut moisture) = (0.0, 0.0);
    let first = levels.z.partition_point(|&z| z <= bottom).saturating_sub(1);
    for i in first..levels.z.len() - 1 {
        let (za, zb) = (levels.z[i].max(bottom), levels.z[i + 1].min(top));
        if zb <= za {
            break;
        }
        let segment = levels.segment(i);
        let primitive =
            |z: f64| (segment.temperature(z) + segment.t_slope / c) / c * (-c * z).exp();
        theta += p0 * (primitive(za) - primitive(zb));
        let (wa, wb) = (segment.mixing_ratio(za), segment.mixing_ratio(zb));
        let change = segment.moisture_change(za, zb);
        let (pa, pb) = ((-za).exp(), (-zb).exp());
        moisture += if wa.max(wb) * change.powi(4) <= 720.0 * 1e-11 {
            let slope = |z: f64, w: f64, p: f64| p * (segment.mixing_ratio_slope(z, w) - w);
            hermite_integral(
                zb - za,
                (wa * pa, slope(za, wa, pa)),
                (wb * pb, slope(zb, wb, pb)),
            )
        } else {
            let pieces = (change / 2.0)
                .max((zb - za) / 0.3)
                .ceil()
                .clamp(1.0, MOST_PIECES);
            let h = (zb - za) / pieces;
            (0..pieces as usize)
                .map(|k| {
                    let a = za + k as f64 * h;
                    gauss4(a, a + h, |z| segment.mixing_ratio(z) * (-z).exp())
                })
                .sum()
        };
    }
    (theta, moisture)
}
