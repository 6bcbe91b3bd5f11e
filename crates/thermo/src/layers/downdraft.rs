//! Downdraft CAPE: what evaporation could do to the driest-feeling air of the lowest 400 hPa.

use super::theta_e::Running;
use super::walk::{WIDEST, pieces, walk};
use crate::column::Segment;
use crate::environment::coordinate;
use crate::numeric::zero_between;
use crate::pseudoadiabat::{refine, saturated};
use crate::saturation::virtual_temperature;
use crate::{
    EPSILON, Environment, GAS_CONSTANT_DRY, Pressure, Temperature, temperature_on_pseudoadiabat,
};

/// Depth that is searched, Pa.
const SEARCHED: f64 = 40_000.0;
/// Depth of the layer whose mean counts, Pa.
const LAYER: f64 = 10_000.0;
/// Spacing of the layers tried, Pa.
const SPACING: f64 = 500.0;
/// Where the air is colder by more than this (K) at both ends of a stretch no deeper (ln p, dew point in K) than these, it
/// is colder all through: virtual temperatures bend by less than 0.5 K there.
const CALM: f64 = 1.0;
const CALM_DEPTH: f64 = 0.1;
const CALM_DEWPOINT: f64 = 8.0;
/// Widest step of the descent's table in ln p.
const TABLE: f64 = 0.1;

/// Downdraft CAPE and where the air comes from (after Gilmore & Wicker 1998, MWR 126, and Emanuel 1994; from memory).
///
/// - The layer: of all layers 100 hPa deep whose base is the lowest level's pressure less a multiple of 5 hPa, and
///   whose top is no more than 400 hPa above the lowest level, the one with the least integral mean over p of eq. 39
///   theta-e along the interpolated profile; of equals the lowest.
/// - The air: saturated, with that mean theta-e, at the layer's centre pressure: the wet bulb of the layer's mean air.
/// - The descent: saturated pseudo-adiabatic, of constant eq. 39 theta-e, to the lowest level. Virtual temperature on both
///   sides.
/// - The energy: Rd times the integral of (virtual temperature of the surroundings minus that of the air) over ln p, of
///   the stretches where the air is colder. **Stretches where it is warmer count for nothing**, as below the LCL of an
///   ascent; `warmer` holds them.
/// - Absent where the humidity is known through less than 400 hPa.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Downdraft {
    /// Energy from the origin down to the lowest level, J/kg, >= 0.
    pub cape: f64,
    /// What the stretches warmer than their surroundings would take from it, J/kg, <= 0.
    pub warmer: f64,
    /// Centre of the layer of least mean theta-e.
    pub origin: Pressure,
    /// That mean.
    pub theta_e: Temperature,
    /// Its wet-bulb temperature, from which the air descends.
    pub wet_bulb: Temperature,
}

pub(super) fn downdraft(environment: &Environment) -> Option<Downdraft> {
    let bottom = environment.bottom().pressure.pa();
    let (base, mean) = least_layer(environment, bottom)?;
    let origin = Pressure::from_pa(base - 0.5 * LAYER);
    let theta_e = Temperature::from_k(mean);
    let wet_bulb = temperature_on_pseudoadiabat(theta_e, origin);
    let path = Descent::new(mean.ln(), wet_bulb.k(), environment, origin)?;
    let (colder, warmer) = path.areas(environment);
    Some(Downdraft {
        cape: GAS_CONSTANT_DRY * colder,
        warmer: -GAS_CONSTANT_DRY * warmer + 0.0,
        origin,
        theta_e,
        wet_bulb,
    })
}

/// Base (Pa) and mean theta-e (K) of the layer of least mean theta-e.
fn least_layer(environment: &Environment, bottom: f64) -> Option<(f64, f64)> {
    const COUNT: usize = ((SEARCHED - LAYER) / SPACING) as usize;
    const DEEP: usize = (LAYER / SPACING) as usize;
    let top = bottom - SEARCHED;
    let known = environment.pressure().get(environment.humid_levels() - 1)?;
    if *known > top {
        return None;
    }
    // Running integral at every multiple of the spacing.
    let mut at = [0.0; COUNT + DEEP + 1];
    let mut running = Running::new(environment);
    for (k, integral) in at.iter_mut().enumerate() {
        *integral = running.down_to(bottom - k as f64 * SPACING)?;
    }
    let mut least: Option<(f64, usize)> = None;
    for (k, (base, top)) in at.iter().zip(&at[DEEP..]).enumerate() {
        let mean = (top - base) * (1.0 / LAYER);
        // Less by more than rounding: of equals the lowest.
        if least.is_none_or(|(so_far, _)| mean < so_far - 1e-9 * so_far) {
            least = Some((mean, k));
        }
    }
    least.map(|(mean, k)| (bottom - k as f64 * SPACING, mean))
}

/// Virtual temperature of the descending air: cubics between exact nodes, and the running integral over z.
struct Descent {
    bottom: f64,
    top: f64,
    step: f64,
    /// Value, slope times step, integral from the bottom up to the node.
    nodes: [(f64, f64, f64); NODES + 1],
}

/// Steps of the table: the deepest descent is from 50 hPa below the top of what is searched, and profiles whose lowest level
/// is little above 400 hPa are the tallest in ln p.
const NODES: usize = 40;

impl Descent {
    fn new(
        ln_theta_e: f64,
        wet_bulb: f64,
        environment: &Environment,
        origin: Pressure,
    ) -> Option<Self> {
        let bottom = environment.z_range().0;
        let top = coordinate(origin.pa());
        let steps = ((top - bottom) / TABLE).ceil().clamp(1.0, NODES as f64);
        let step = (top - bottom) / steps;
        let count = steps as usize;
        let mut nodes = [(0.0, 0.0, 0.0); NODES + 1];
        let mut guess = wet_bulb;
        for k in (0..=count).rev() {
            let p = (-(bottom + k as f64 * step)).exp();
            let t = refine(ln_theta_e, p, guess, 1e-6).0;
            let state = saturated(t, p)?;
            let per_kelvin = virtual_temperature(1.0, state.w);
            let share = 1.0 / (1.0 + state.w);
            let slope = per_kelvin * state.slope
                + t * (1.0 / EPSILON - 1.0) * share * share * state.w_slope;
            nodes[k] = (per_kelvin * t, slope * step, 0.0);
            guess = t - step * state.slope;
        }
        for k in 0..count {
            let ((v0, m0, before), (v1, m1, _)) = (nodes[k], nodes[k + 1]);
            nodes[k + 1].2 = before + step * (0.5 * (v0 + v1) + (m0 - m1) / 12.0);
        }
        Some(Self {
            bottom,
            top,
            step,
            nodes,
        })
    }

    /// Value and integral from the bottom at z.
    fn at(&self, z: f64) -> (f64, f64) {
        let share = ((z - self.bottom) / self.step).max(0.0);
        let k = (share as usize).min(NODES - 1);
        let s = share - k as f64;
        let ((v0, m0, before), (v1, m1, _)) = (self.nodes[k], self.nodes[k + 1]);
        if s == 0.0 {
            return (v0, before);
        }
        let rise = v1 - v0;
        let (c2, c3) = (3.0 * rise - 2.0 * m0 - m1, m0 + m1 - 2.0 * rise);
        (
            v0 + s * (m0 + s * (c2 + s * c3)),
            before + self.step * s * (v0 + s * (m0 / 2.0 + s * (c2 / 3.0 + s * c3 / 4.0))),
        )
    }

    /// Integrals over z of (surroundings minus air), of the stretches where the air is colder and, with the other sign,
    /// where it is warmer. Crossings are exact; two inside one step of the walk are not seen (less than 1e-3 J/kg).
    fn areas(&self, environment: &Environment) -> (f64, f64) {
        let difference = |z: f64| environment.virtual_integral(z) - self.at(z).1;
        let mut areas = (0.0, 0.0);
        let mut add = |area: f64| {
            if area > 0.0 {
                areas.0 += area;
            } else {
                areas.1 -= area;
            }
        };
        // Integral up to where the stretch of one sign began, and that sign.
        let mut open: Option<(f64, bool)> = None;
        let mut step = |segment: &Segment, a: f64, b: f64| {
            let colder = |z: f64| segment.virtual_temperature(z) - self.at(z).0;
            let (before, positive) = open.unwrap_or_else(|| (difference(a), colder(a) > 0.0));
            let head = colder(b);
            open = Some((before, positive));
            if (head > 0.0) != positive {
                let z = zero_between(a, colder(a), b, head, colder);
                let here = difference(z);
                add(here - before);
                open = Some((here, !positive));
            }
        };
        let mut foot: Option<f64> = None;
        walk(
            environment,
            self.bottom,
            self.top,
            f64::INFINITY,
            |segment, a, b| {
                let colder = |z: f64| segment.virtual_temperature(z) - self.at(z).0;
                let dew = segment.td.map_or(0.0, |(_, slope)| (slope * (b - a)).abs());
                let head = colder(b);
                let calm = foot.is_some_and(|foot| foot > CALM && head > CALM)
                    && b - a <= CALM_DEPTH
                    && dew <= CALM_DEWPOINT;
                foot = Some(head);
                if !calm {
                    pieces(segment, a, b, WIDEST, |a, b| {
                        step(segment, a, b);
                        true
                    });
                }
                true
            },
        );
        if let Some((before, _)) = open {
            add(difference(self.top) - before);
        }
        areas
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::layers::pressure_at;

    #[test]
    fn the_table_of_the_descent_is_the_pseudoadiabat() {
        let (p, t) = ([100_000.0, 50_000.0], [305.0, 262.0]);
        let environment = Environment::new(&p, &t, &[Some(290.0), Some(240.0)]).unwrap();
        let origin = Pressure::from_hpa(650.0);
        for theta_e in [290.0, 310.0, 330.0, 350.0] {
            let theta_e = Temperature::from_k(theta_e);
            let wet_bulb = temperature_on_pseudoadiabat(theta_e, origin).k();
            let path = Descent::new(theta_e.k().ln(), wet_bulb, &environment, origin).unwrap();
            for i in 0..=200 {
                let z = path.bottom + (path.top - path.bottom) * f64::from(i) / 200.0;
                let pressure = pressure_at(&environment, z);
                let t = temperature_on_pseudoadiabat(theta_e, pressure);
                let w = crate::saturation_mixing_ratio(pressure, t);
                let error = path.at(z).0 - virtual_temperature(t.k(), w);
                assert!(
                    error.abs() < 2e-4,
                    "{theta_e:?} at {pressure:?}: {error:e} K"
                );
            }
        }
    }
}
