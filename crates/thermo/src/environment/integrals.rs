//! Integrals of moisture over pressure, along the interpolated profile.

use super::{Environment, coordinate};
use crate::column::Segment;
use crate::elementary::exp;
use crate::numeric::{gauss4, hermite_integral};
use crate::saturation::{E0, exponent_and_slope};
use crate::{EPSILON, GAS_CONSTANT_DRY, GRAVITY, Pressure};

/// Change of ln of the integrand that one Gauss rule takes: its error is then below 1e-11.
const GAUSS_CHANGE: f64 = 0.7;

/// A quantity of the air in a segment: its value times p, that product's slope dz, and its change of logarithm.
trait Moist {
    /// Largest error of a step of the end-corrected trapezium, in units of the quantity; wider steps take the Gauss rule.
    const STEP_ERROR: f64;
    /// Value times p, and d(value p)/dz, at z.
    fn at(segment: &Segment, td: (f64, f64), z: f64, p: f64) -> (f64, f64);
    /// How far the terms of its logarithm move between two heights, in size.
    fn change(segment: &Segment, td: (f64, f64), a: f64, b: f64) -> f64;
}

/// Mixing ratio.
struct MixingRatio;

/// Relative humidity over water.
struct RelativeHumidity;

impl Moist for MixingRatio {
    const STEP_ERROR: f64 = 1e-11;

    #[inline(always)]
    fn at(segment: &Segment, (td, td_slope): (f64, f64), z: f64, p: f64) -> (f64, f64) {
        let (exponent, per_kelvin) = exponent_and_slope(td + td_slope * (z - segment.z));
        let e = (E0 * exp(exponent)).min(0.5 * p);
        let w = EPSILON * e / (p - e);
        let slope = w * (1.0 + w / EPSILON) * (per_kelvin * td_slope + 1.0);
        (w * p, p * (slope - w))
    }

    #[inline]
    fn change(segment: &Segment, (td, td_slope): (f64, f64), a: f64, b: f64) -> f64 {
        let exponent = |z: f64| exponent_and_slope(td + td_slope * (z - segment.z)).0;
        (exponent(b) - exponent(a)).abs() + (b - a)
    }
}

impl Moist for RelativeHumidity {
    const STEP_ERROR: f64 = 1e-9;

    #[inline(always)]
    fn at(segment: &Segment, (td, td_slope): (f64, f64), z: f64, p: f64) -> (f64, f64) {
        let t = segment.temperature(z);
        let (dew, per_dew) = exponent_and_slope((td + td_slope * (z - segment.z)).min(t));
        let (dry, per_dry) = exponent_and_slope(t);
        let value = p * exp(dew - dry);
        (
            value,
            value * (per_dew * td_slope - per_dry * segment.t_slope - 1.0),
        )
    }

    #[inline]
    fn change(segment: &Segment, td: (f64, f64), a: f64, b: f64) -> f64 {
        let exponent = |z: f64| exponent_and_slope(segment.temperature(z)).0;
        (exponent(b) - exponent(a)).abs() + MixingRatio::change(segment, td, a, b)
    }
}

impl Environment {
    /// How many levels have humidity, from the lowest: at least one.
    pub(crate) fn humid_levels(&self) -> usize {
        self.humid
    }

    /// Integral of virtual temperature over z from the lowest level to z = -ln p inside the profile, K.
    pub(crate) fn virtual_integral(&self, z: f64) -> f64 {
        let column = &self.column;
        let first = column.tv_integral.first().copied().unwrap_or(0.0);
        column.integral_in(&self.levels(), column.step_at(z), z) - first
    }

    /// Geopotential height (m) above the lowest level of z = -ln p inside the profile.
    pub(crate) fn height_at_z(&self, z: f64) -> f64 {
        GAS_CONSTANT_DRY / GRAVITY * self.virtual_integral(z)
    }

    /// Integral of the mixing ratio over p (Pa) from the lowest level to the last known humidity; `None` when only the
    /// lowest level has any.
    pub(crate) fn moisture_integral(&self) -> Option<f64> {
        let last = self.humid - 1;
        (last > 0).then(|| self.integral::<MixingRatio>(self.z[0], self.z[last]))
    }

    /// Integral mean over p of the relative humidity over water (1 = saturated) between two pressures (`bottom` > `top`);
    /// `None` unless the whole layer has known humidity.
    ///
    /// ```
    /// use dewbound_thermo::*;
    /// let (p, t) = ([100_000.0, 85_000.0, 70_000.0], [298.0, 288.0, 279.0]);
    /// let td = t.map(|t| Some(dewpoint_from_relative_humidity(Temperature::from_k(t), 0.6).k()));
    /// let environment = Environment::new(&p, &t, &td)?;
    /// let layer = [1000.0, 850.0].map(Pressure::from_hpa);
    /// assert!((environment.mean_relative_humidity(layer[0], layer[1]).unwrap() - 0.6).abs() < 0.002);
    /// # Ok::<(), EnvironmentError>(())
    /// ```
    pub fn mean_relative_humidity(&self, bottom: Pressure, top: Pressure) -> Option<f64> {
        let (pb, pt) = (bottom.pa(), top.pa());
        let known = pb <= self.p[0] && pt >= self.p[self.humid - 1] && pb > pt;
        known.then(|| self.integral::<RelativeHumidity>(coordinate(pb), coordinate(pt)) / (pb - pt))
    }

    /// Integral over p from `bottom` to `top` in z, inside the humid part.
    fn integral<M: Moist>(&self, bottom: f64, top: f64) -> f64 {
        let levels = self.levels();
        let first = self.z.partition_point(|&z| z <= bottom).saturating_sub(1);
        let mut sum = 0.0;
        for i in first..self.humid - 1 {
            let (a, b) = (self.z[i].max(bottom), self.z[i + 1].min(top));
            if b <= a {
                break;
            }
            let segment = levels.segment(i);
            let Some(td) = segment.td else { break };
            let pressure = |z: f64, level: usize| {
                if z == self.z[level] {
                    self.p[level]
                } else {
                    exp(-z)
                }
            };
            let change = M::change(&segment, td, a, b);
            let foot = M::at(&segment, td, a, pressure(a, i));
            let head = M::at(&segment, td, b, pressure(b, i + 1));
            let largest = foot.0.max(head.0);
            let square = change * change;
            sum += if largest * square * square <= 720.0 * M::STEP_ERROR * self.p[i] {
                hermite_integral(b - a, foot, head)
            } else {
                let pieces = (change / GAUSS_CHANGE).ceil().clamp(1.0, 200.0);
                let h = (b - a) / pieces;
                (0..pieces as usize)
                    .map(|k| {
                        let a = a + k as f64 * h;
                        gauss4(a, a + h, |z| M::at(&segment, td, z, exp(-z)).0)
                    })
                    .sum()
            };
        }
        sum
    }
}
