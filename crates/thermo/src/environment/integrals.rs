//! Integrals of moisture over pressure, along the interpolated profile.

use super::{Environment, coordinate};
use crate::elementary::exp;
use crate::numeric::hermite_integral;
use crate::saturation::{E0, NO_VAPOUR, exponent_and_slope};
use crate::{EPSILON, GAS_CONSTANT_DRY, GRAVITY, Pressure};

/// Change of ln of the integrand that one three-point Gauss rule takes: its error is then below 1e-8 of the integral.
const GAUSS_CHANGE: f64 = 0.5;

/// Where the outer points of the Gauss rule are: the square root of 3/5.
const ASIDE: f64 = 0.774_596_669_241_483_4;

/// Largest error of a step of the end-corrected trapezium, in units of the quantity: mixing ratio, relative humidity.
const MIXING_RATIO_ERROR: f64 = 3e-9;
const HUMIDITY_ERROR: f64 = 3e-9;

/// Mixing ratio at one point, with what its slope needs.
#[derive(Clone, Copy)]
struct MixingRatio {
    per_kelvin: f64,
    w: f64,
}

impl MixingRatio {
    /// At a pressure (Pa) with this dew point (K).
    #[inline(always)]
    fn at(p: f64, td: f64) -> Self {
        let (exponent, per_kelvin) = exponent_and_slope(td);
        let e = (E0 * exp(exponent)).min(0.5 * p);
        Self {
            per_kelvin,
            w: EPSILON * e / (p - e),
        }
    }

    /// p w and its derivative with z where the dew point has this slope.
    #[inline(always)]
    fn times_pressure(&self, p: f64, td_slope: f64) -> (f64, f64) {
        let share = (1.0 + self.w * (1.0 / EPSILON)) * (self.per_kelvin * td_slope + 1.0);
        (p * self.w, p * self.w * (share - 1.0))
    }
}

/// Relative humidity over water at one point, with what its slope needs.
#[derive(Clone, Copy)]
struct RelativeHumidity {
    dew: (f64, f64),
    dry: (f64, f64),
    value: f64,
}

impl RelativeHumidity {
    /// With this temperature and dew point (K).
    #[inline(always)]
    fn at(t: f64, td: f64) -> Self {
        let (dew, dry) = (exponent_and_slope(td.min(t)), exponent_and_slope(t));
        Self {
            dew,
            dry,
            value: exp(dew.0 - dry.0),
        }
    }

    /// Its derivative with z where T and Td have these slopes.
    #[inline(always)]
    fn slope(&self, t_slope: f64, td_slope: f64) -> f64 {
        self.value * (self.dew.1 * td_slope - self.dry.1 * t_slope)
    }

    /// How far its logarithm's terms move to another point, in size.
    #[inline(always)]
    fn change(&self, other: &Self) -> f64 {
        (other.dew.0 - self.dew.0).abs() + (other.dry.0 - self.dry.0).abs()
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
        /// Segments worked on at a time, in plain loops that vectorise.
        const BLOCK: usize = 64;
        const MOST_STRAIN: f64 = 720.0 * MIXING_RATIO_ERROR;
        let last = self.humid - 1;
        if last == 0 {
            return None;
        }
        let zeros = [0.0; BLOCK + 1];
        let (mut td, mut exponents, mut per_kelvin, mut w) = (zeros, zeros, zeros, zeros);
        let (mut parts, mut strain) = ([0.0; BLOCK], [0.0; BLOCK]);
        let mut sum = 0.0;
        let mut begin = 0;
        while begin < last {
            let end = (begin + BLOCK).min(last);
            let count = end - begin;
            let (z, p) = (&self.z[begin..=end], &self.p[begin..=end]);
            for (plain, td) in td.iter_mut().zip(&self.td[begin..=end]) {
                *plain = td.unwrap_or(NO_VAPOUR);
            }
            for i in 0..=count {
                (exponents[i], per_kelvin[i]) = exponent_and_slope(td[i]);
            }
            for i in 0..=count {
                let e = E0 * exp(exponents[i]);
                w[i] = EPSILON * e / (p[i] - e);
            }
            for i in 0..count {
                let h = z[i + 1] - z[i];
                let td_slope = (td[i + 1] - td[i]) / h;
                let at = |i: usize| {
                    let (per_kelvin, w) = (per_kelvin[i], w[i]);
                    MixingRatio { per_kelvin, w }.times_pressure(p[i], td_slope)
                };
                parts[i] = hermite_integral(h, at(i), at(i + 1));
                let change = (exponents[i + 1] - exponents[i]).abs() + h;
                let square = change * change;
                strain[i] = (w[i] + w[i + 1]) * square * square;
            }
            for i in 0..count {
                sum += if strain[i] <= MOST_STRAIN {
                    parts[i]
                } else {
                    // A step cut into k has 1/k⁴ of the error.
                    let pieces = (strain[i] / MOST_STRAIN).sqrt().sqrt().ceil();
                    let h = (z[i + 1] - z[i]) / pieces;
                    let td_slope = (td[i + 1] - td[i]) / (z[i + 1] - z[i]);
                    let at = |p: f64, td: f64| MixingRatio::at(p, td).times_pressure(p, td_slope);
                    let mut foot = at(p[i], td[i]);
                    let mut part = 0.0;
                    for k in 1..=pieces as usize {
                        let above = k as f64 * h;
                        let here = p[i] * exp(-above);
                        let head = at(here, td[i] + td_slope * above);
                        part += hermite_integral(h, foot, head);
                        foot = head;
                    }
                    part
                };
            }
            begin = end;
        }
        Some(sum)
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
        known.then(|| self.humidity_integral(coordinate(pb), coordinate(pt)) / (pb - pt))
    }

    /// Integral of relative humidity over p from `bottom` to `top` in z, inside the humid part.
    fn humidity_integral(&self, bottom: f64, top: f64) -> f64 {
        let levels = self.levels();
        let first = self.z.partition_point(|&z| z <= bottom).saturating_sub(1);
        let mut sum = 0.0;
        // The head of a segment is the foot of the next.
        let mut shared: Option<(f64, RelativeHumidity)> = None;
        for i in first..self.humid - 1 {
            let (a, b) = (self.z[i].max(bottom), self.z[i + 1].min(top));
            if b <= a {
                break;
            }
            let segment = levels.segment(i);
            let Some((td, td_slope)) = segment.td else {
                break;
            };
            let point = |z: f64| {
                RelativeHumidity::at(segment.temperature(z), td + td_slope * (z - segment.z))
            };
            let (pa, foot) = shared.unwrap_or_else(|| {
                let p = exp(-a);
                (p, point(a))
            });
            let pb = if b == self.z[i + 1] {
                self.p[i + 1]
            } else {
                exp(-b)
            };
            let head = point(b);
            shared = Some((pb, head));
            let change = foot.change(&head) + (b - a);
            let square = change * change;
            let largest = foot.value.max(head.value);
            sum += if largest * square * square <= 720.0 * HUMIDITY_ERROR {
                let end = |p: f64, point: &RelativeHumidity| {
                    let slope = point.slope(segment.t_slope, td_slope);
                    (p * point.value, p * (slope - point.value))
                };
                hermite_integral(b - a, end(pa, &foot), end(pb, &head))
            } else {
                let pieces = (change / GAUSS_CHANGE).ceil().clamp(1.0, 200.0);
                let half = 0.5 * (b - a) / pieces;
                // Pressures of the three points from that of the middle one.
                let (aside, onward) = (exp(-ASIDE * half), exp(-2.0 * half));
                let mut p = pa * exp(-half);
                let mut part = 0.0;
                for k in 0..pieces as usize {
                    let z = a + (2.0 * k as f64 + 1.0) * half;
                    let at = |z: f64, p: f64| p * point(z).value;
                    let sides = at(z - ASIDE * half, p / aside) + at(z + ASIDE * half, p * aside);
                    part += half * (8.0 * at(z, p) + 5.0 * sides) * (1.0 / 9.0);
                    p *= onward;
                }
                part
            };
        }
        sum
    }
}
