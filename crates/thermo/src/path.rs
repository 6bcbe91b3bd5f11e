//! A rising parcel's virtual temperature as a smooth function of z = -ln p.
//!
//! Nodes come from a table that all parcels share ([`adiabats`]) or are solved for, with their analytic slopes; a cubic
//! Hermite polynomial runs between them. A new process supplies its own nodes and nothing else changes.

use crate::environment::coordinate;
use crate::pseudoadiabat::{first_guess, refine};
use crate::saturation::{e_water, mixing_ratio, virtual_temperature};
use crate::{Air, Buoyancy, Method, Temperature, adiabats, air, lapse_path};

/// Spacing of the nodes in z.
pub(crate) const SPACING: f64 = 0.1;
/// Newton stops when its step (K) is below this; the error left is about 0.03/K times its square.
const STEP: f64 = 1e-4;

/// Piecewise cubic on a uniform grid, with its running integral.
#[derive(Debug, Clone)]
pub(crate) struct Cubic {
    start: f64,
    /// Polynomials in the share of the step, lowest power first, and the integral up to the step.
    pieces: Vec<([f64; 4], f64)>,
    /// Upper parts of steps in which the slope jumps, from the lowest; most paths have none.
    splits: Vec<Split>,
}

/// From `z` on another polynomial serves in step `k`.
#[derive(Debug, Clone)]
pub(crate) struct Split {
    pub k: usize,
    pub z: f64,
    /// As the step's own: polynomial in the share of the whole step, and the integral as if it served from its foot.
    pub piece: ([f64; 4], f64),
}

impl Cubic {
    /// From the values and slopes of nodes at `start`, `start + SPACING`, ... Fewer than two nodes give zero everywhere.
    pub fn new(start: f64, values: &[f64], slopes: &[f64]) -> Self {
        let mut integral = 0.0;
        let mut pieces = Vec::with_capacity(values.len());
        let (mut below, mut below_slope) = (
            values.first().copied().unwrap_or(0.0),
            slopes.first().copied().unwrap_or(0.0) * SPACING,
        );
        for (&value, &slope) in values.iter().zip(slopes).skip(1) {
            let (rise, slope) = (value - below, slope * SPACING);
            let c = [
                below,
                below_slope,
                3.0 * rise - 2.0 * below_slope - slope,
                below_slope + slope - 2.0 * rise,
            ];
            pieces.push((c, integral));
            integral +=
                SPACING * (c[0] + c[1] * (1.0 / 2.0) + c[2] * (1.0 / 3.0) + c[3] * (1.0 / 4.0));
            (below, below_slope) = (value, slope);
        }
        Self::of_pieces(start, pieces, Vec::new())
    }

    pub(crate) fn of_pieces(start: f64, pieces: Vec<([f64; 4], f64)>, splits: Vec<Split>) -> Self {
        Self {
            start,
            pieces,
            splits,
        }
    }

    /// What serves at z in step k, when that isn't the step's own polynomial.
    #[inline]
    fn split(&self, k: usize, z: f64) -> Option<&Split> {
        // Nearly always there is none to look at.
        self.splits
            .iter()
            .rfind(|split| split.k == k && split.z <= z)
    }

    /// Where the slope jumps, rising.
    pub fn kinks(&self) -> impl Iterator<Item = f64> + '_ {
        self.splits.iter().map(|split| split.z)
    }

    #[inline]
    fn locate(&self, z: f64) -> (&([f64; 4], f64), f64) {
        const NONE: &([f64; 4], f64) = &([0.0; 4], 0.0);
        let share = (z - self.start) * (1.0 / SPACING);
        let k = (share as usize).min(self.pieces.len().saturating_sub(1));
        let piece = match self.split(k, z) {
            Some(split) => &split.piece,
            None => self.pieces.get(k).unwrap_or(NONE),
        };
        (piece, share - k as f64)
    }

    /// The polynomial that serves at z, the z its step starts from, and the z up to which it serves.
    #[inline]
    pub fn piece_at(&self, z: f64) -> Piece {
        let share = (z - self.start) * (1.0 / SPACING);
        let k = (share as usize).min(self.pieces.len().saturating_sub(1));
        let head = if k + 1 < self.pieces.len() {
            self.start + (k + 1) as f64 * SPACING
        } else {
            f64::INFINITY
        };
        let piece = match self.split(k, z) {
            Some(split) => Some(&split.piece),
            None => self.pieces.get(k),
        };
        let next = self.splits.iter().find(|split| split.k == k && split.z > z);
        Piece {
            coefficients: piece.map_or([0.0; 4], |piece| piece.0),
            foot: self.start + k as f64 * SPACING,
            head: next.map_or(head, |split| split.z),
        }
    }

    /// Value at z.
    #[inline]
    pub fn value(&self, z: f64) -> f64 {
        let ((c, _), s) = self.locate(z);
        c[0] + s * (c[1] + s * (c[2] + s * c[3]))
    }

    /// Integral from the first node to z.
    #[inline]
    pub fn integral(&self, z: f64) -> f64 {
        let ((c, before), s) = self.locate(z);
        before
            + SPACING
                * s
                * (c[0]
                    + s * (c[1] * (1.0 / 2.0) + s * (c[2] * (1.0 / 3.0) + s * c[3] * (1.0 / 4.0))))
    }
}

/// One polynomial of a [`Cubic`].
#[derive(Debug, Clone, Copy)]
pub(crate) struct Piece {
    coefficients: [f64; 4],
    foot: f64,
    /// Up to here it serves.
    pub head: f64,
}

impl Piece {
    /// Value at z.
    #[inline(always)]
    pub fn value(&self, z: f64) -> f64 {
        let c = &self.coefficients;
        let s = (z - self.foot) * (1.0 / SPACING);
        (c[0] + s * c[1]) + s * s * (c[2] + s * c[3])
    }
}

/// What a parcel keeps on its way.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Parcel {
    /// The start, its dew point not above its temperature.
    pub start: Air,
    pub lcl: crate::Lcl,
    pub z_start: f64,
    pub z_lcl: f64,
    pub ln_theta_e: f64,
    /// Mixing ratio below the LCL.
    pub w: f64,
    /// Exponent of the dry ascent.
    exponent: f64,
}

impl Parcel {
    /// `None` when the start is not finite or not air: vapour at half the pressure or more.
    pub fn new(start: Air) -> Option<Self> {
        let (p, t) = (start.pressure.pa(), start.temperature.k());
        let td = start.dewpoint.k();
        let usable = p.is_finite()
            && p >= f64::MIN_POSITIVE
            && t.is_finite()
            && t > 56.0
            && td.is_finite()
            && td > 0.0;
        if !usable {
            return None;
        }
        let td = td.min(t);
        let start = Air {
            dewpoint: Temperature::from_k(td),
            ..start
        };
        let e = e_water(td);
        if e >= 0.5 * p {
            return None;
        }
        let w = mixing_ratio(p, e);
        let lcl = start.lcl();
        let ln_theta_e = air::ln_theta_e(t, p - e, w, lcl.temperature.k());
        let exponent = air::moist_exponent(w);
        let z_start = coordinate(p);
        let z_lcl = if td >= t {
            z_start
        } else {
            coordinate(lcl.pressure.pa())
        };
        let finite = z_lcl.is_finite() && ln_theta_e.is_finite();
        finite.then_some(Self {
            start,
            lcl,
            z_start,
            z_lcl,
            ln_theta_e,
            w,
            exponent,
        })
    }

    /// Temperature below the LCL at z, K.
    pub fn dry_temperature(&self, z: f64) -> f64 {
        self.start.temperature.k() * (self.exponent * (self.z_start - z)).exp()
    }

    /// What counts of the unsaturated ascent from the start to `z_end` or the LCL.
    pub fn dry(&self, buoyancy: Buoyancy, z_end: f64) -> Cubic {
        let end = z_end.min(self.z_lcl);
        let count = steps(self.z_start, end);
        let per_kelvin = match buoyancy {
            Buoyancy::Virtual => virtual_temperature(1.0, self.w),
            Buoyancy::Temperature => 1.0,
        };
        // An exponential's nodes follow from one another; over so few steps rounding stays rounding.
        let fall = (-self.exponent * SPACING).exp();
        let mut tv = per_kelvin * self.start.temperature.k();
        let values: Vec<f64> = (0..=count)
            .map(|_| {
                let here = tv;
                tv *= fall;
                here
            })
            .collect();
        let slopes: Vec<f64> = values.iter().map(|tv| -self.exponent * tv).collect();
        Cubic::new(self.z_start, &values, &slopes)
    }

    /// What counts of the saturated ascent from the LCL to at least `z_end`.
    pub fn saturated(&self, method: Method, z_end: f64) -> Cubic {
        lapse_path::path(self, method, steps(self.z_lcl, z_end))
            .unwrap_or_else(|| pseudoadiabat(self.ln_theta_e, method.buoyancy, self.z_lcl, z_end))
    }
}

/// The pseudo-adiabat of a theta-e from `z_from` (or a little below) to at least `z_end`: from the common table, or else from
/// nodes solved for here.
pub(crate) fn pseudoadiabat(ln_theta_e: f64, buoyancy: Buoyancy, z_from: f64, z_end: f64) -> Cubic {
    let shared = match buoyancy {
        Buoyancy::Virtual => adiabats::path(ln_theta_e, z_from, z_end),
        Buoyancy::Temperature => None,
    };
    shared.unwrap_or_else(|| solved_pseudoadiabat(ln_theta_e, buoyancy, z_from, z_end))
}

fn solved_pseudoadiabat(ln_theta_e: f64, buoyancy: Buoyancy, z_from: f64, z_end: f64) -> Cubic {
    let count = steps(z_from, z_end);
    let mut values = Vec::with_capacity(count + 1);
    let mut node_slopes = Vec::with_capacity(count + 1);
    let mut p = (-z_from).exp();
    let mut guess = first_guess(ln_theta_e.exp(), p);
    // Slopes at the node and at the two below it.
    let mut slopes = [0.0; 3];
    let thinner = (-SPACING).exp();
    for k in 0..=count {
        let (t, state) = refine(ln_theta_e, p, guess, STEP);
        p *= thinner;
        let (value, slope) = match buoyancy {
            Buoyancy::Virtual => state.virtual_temperature_and_slope(t),
            Buoyancy::Temperature => (t, state.slope),
        };
        values.push(value);
        node_slopes.push(slope);
        slopes = match k {
            0 => [state.slope; 3],
            1 => [state.slope, slopes[0], 2.0 * slopes[0] - state.slope],
            _ => [state.slope, slopes[0], slopes[1]],
        };
        // Three-step Adams-Bashforth lands within a mK or so, so that one Newton step finishes.
        guess = t + SPACING / 12.0 * (23.0 * slopes[0] - 16.0 * slopes[1] + 5.0 * slopes[2]);
    }
    Cubic::new(z_from, &values, &node_slopes)
}

/// Steps of the table from `start` to at least `end`.
fn steps(start: f64, end: f64) -> usize {
    // The float-to-integer cast saturates; no profile is taller than a few hundred steps.
    (((end - start) / SPACING).ceil() as usize).clamp(1, 1000)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::pseudoadiabat::solve;
    use crate::{GAS_CONSTANT_DRY, Pressure};

    /// Worst departure (K) of the table from exact virtual temperatures up to 10 hPa, and the departure of the whole
    /// area under it (J/kg).
    fn departure(t: f64, td: f64) -> (f64, f64) {
        let start = Air {
            pressure: Pressure::from_hpa(1000.0),
            temperature: Temperature::from_c(t),
            dewpoint: Temperature::from_c(td),
        };
        let parcel = Parcel::new(start).unwrap();
        let end = coordinate(1000.0);
        let (dry, saturated) = (
            parcel.dry(Buoyancy::Virtual, end),
            parcel.saturated(Method::default(), end),
        );
        let points = 20_000;
        let step = (end - parcel.z_start) / f64::from(points);
        let (mut worst, mut area) = (0.0_f64, 0.0);
        for i in 0..points {
            let z = parcel.z_start + (f64::from(i) + 0.5) * step;
            let error = if z < parcel.z_lcl {
                dry.value(z) - virtual_temperature(parcel.dry_temperature(z), parcel.w)
            } else {
                let p = (-z).exp();
                let guess = first_guess(parcel.ln_theta_e.exp(), p);
                let (t, state) = solve(parcel.ln_theta_e, p, guess, 1e-10);
                saturated.value(z) - virtual_temperature(t, state.w)
            };
            worst = worst.max(error.abs());
            area += GAS_CONSTANT_DRY * error * step;
        }
        (worst, area.abs())
    }

    #[test]
    fn the_table_keeps_its_bound() {
        for t in [-30.0, -15.0, 0.0, 10.0, 20.0, 30.0, 35.0, 40.0, 45.0] {
            for depression in [0.0, 2.0, 5.0, 10.0, 20.0, 40.0] {
                let (worst, area) = departure(t, t - depression);
                assert!(
                    worst < 2e-4 && area < 0.01,
                    "{t} less {depression}: {worst:e} K, {area:e} J/kg"
                );
            }
        }
    }

    #[test]
    fn the_integral_belongs_to_the_value() {
        let parcel = Parcel::new(Air {
            pressure: Pressure::from_hpa(950.0),
            temperature: Temperature::from_c(28.0),
            dewpoint: Temperature::from_c(18.0),
        })
        .unwrap();
        let table = parcel.saturated(Method::default(), coordinate(10_000.0));
        let (from, to) = (parcel.z_lcl + 0.03, parcel.z_lcl + 1.47);
        let slices = 10_000;
        let h = (to - from) / f64::from(slices);
        let sum: f64 = (0..slices)
            .map(|i| h * table.value(from + (f64::from(i) + 0.5) * h))
            .sum();
        assert!((table.integral(to) - table.integral(from) - sum).abs() < 1e-6);
    }
}
