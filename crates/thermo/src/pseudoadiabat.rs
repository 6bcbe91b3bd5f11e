//! The saturated pseudo-adiabat: constant eq. 39 theta-e (Bolton 1980) of saturated air, where T_L = T and w is the
//! saturation mixing ratio.
//!
//! Derivatives are analytic. Along the pseudo-adiabat ln theta-e(T, z) stays the same, so that dT/dz is minus the ratio
//! of its two partial derivatives.

use crate::elementary::{exp, ln};
use crate::saturation::{E0, dln_e_water, e_water, exponent_and_slope, virtual_temperature};
use crate::{EPSILON, KAPPA, Pressure, REFERENCE_PRESSURE, Temperature};

/// Exponent of the latent heat in eq. 39: (3036/T_L - 1.78) w (1 + 0.448 w).
#[inline]
pub(crate) fn latent_term(t_lcl: f64, w: f64) -> f64 {
    (3036.0 / t_lcl - 1.78) * w * (1.0 + 0.448 * w)
}

/// ln theta-e of saturated air and what follows from it analytically.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Saturated {
    /// ln theta-e.
    pub ln_theta_e: f64,
    /// Its derivative with temperature at constant pressure, 1/K.
    pub per_kelvin: f64,
    /// dT/dz along the pseudo-adiabat, z = -ln p, K.
    pub slope: f64,
    /// Saturation mixing ratio, kg/kg.
    pub w: f64,
    /// Its derivative dw/dz along the pseudo-adiabat.
    pub w_slope: f64,
}

impl Saturated {
    /// Virtual temperature of this air at its temperature `t`, and its derivative dTv/dz along the pseudo-adiabat, K.
    #[inline]
    pub fn virtual_temperature_and_slope(&self, t: f64) -> (f64, f64) {
        let per_kelvin = virtual_temperature(1.0, self.w);
        let share = 1.0 / (1.0 + self.w);
        let slope =
            per_kelvin * self.slope + t * (1.0 / EPSILON - 1.0) * share * share * self.w_slope;
        (per_kelvin * t, slope)
    }
}

/// Saturated air at a temperature and pressure; `None` at and beyond boiling.
#[inline]
pub(crate) fn saturated(t: f64, p: f64) -> Option<Saturated> {
    let (exponent, dln_e) = exponent_and_slope(t);
    let e = E0 * exp(exponent);
    let dry = p - e;
    if dry <= 0.0 {
        return None;
    }
    let (per_dry, per_t) = (1.0 / dry, 1.0 / t);
    let w = EPSILON * e * per_dry;
    let total_over_dry = p * per_dry;
    let latent = 3036.0 * per_t - 1.78;
    let amount = w * (1.0 + 0.448 * w);
    let per_w = latent * (1.0 + 0.896 * w);
    // dw = w p/(p-e) (d ln e - d ln p), and d ln p = -dz.
    let w_scale = w * total_over_dry;
    let per_kelvin = per_t + KAPPA * dln_e * e * per_dry - 3036.0 * per_t * per_t * amount
        + per_w * w_scale * dln_e;
    let per_z = KAPPA * total_over_dry + per_w * w_scale;
    let slope = -per_z / per_kelvin;
    Some(Saturated {
        ln_theta_e: ln(t) + KAPPA * ln(REFERENCE_PRESSURE * per_dry) + latent * amount,
        per_kelvin,
        slope,
        w,
        w_slope: w_scale * (dln_e * slope + 1.0),
    })
}

/// The temperature (K) at which saturated air at `p` has this ln theta-e, and the state there. Newton from `guess`, kept
/// inside a bracket, until the step is below `tolerance` (K).
#[inline]
pub(crate) fn solve(ln_theta_e: f64, p: f64, guess: f64, tolerance: f64) -> (f64, Saturated) {
    // theta-e is never below the dry theta of the same temperature, so the dry adiabat is an upper limit.
    let mut high = (ln_theta_e + KAPPA * (p / REFERENCE_PRESSURE).ln()).exp();
    let mut low = 0.0;
    let mut t = if guess > low && guess < high {
        guess
    } else {
        high
    };
    for _ in 0..100 {
        let Some(state) = saturated(t, p) else {
            high = t;
            t = 0.5 * (low + high);
            continue;
        };
        let excess = state.ln_theta_e - ln_theta_e;
        if excess > 0.0 {
            high = t;
        } else {
            low = t;
        }
        let newton = t - excess / state.per_kelvin;
        let next = if newton > low && newton < high {
            newton
        } else {
            0.5 * (low + high)
        };
        if (newton - t).abs() < tolerance {
            // The state moves with the last small step to first order only; its temperature is what counts.
            return (newton, state);
        }
        t = next;
    }
    (
        t,
        saturated(t, p).unwrap_or(Saturated {
            ln_theta_e,
            per_kelvin: 1.0 / t,
            slope: -KAPPA * t,
            w: 0.0,
            w_slope: 0.0,
        }),
    )
}

/// Newton steps from a guess known to be good: the temperature (K), and the state there to first order.
///
/// Newton's step is quadratic, its error about 0.03/K times the square of the step; after a step of less than `trust`
/// (K) that is believed. What doesn't come down to it in a few steps goes to [`solve`].
#[inline]
pub(crate) fn refine(ln_theta_e: f64, p: f64, guess: f64, trust: f64) -> (f64, Saturated) {
    let mut t = guess;
    for _ in 0..4 {
        let Some(state) = saturated(t, p) else { break };
        let step = (ln_theta_e - state.ln_theta_e) / state.per_kelvin;
        t += step;
        if step.abs() <= trust {
            return (t, state);
        }
    }
    solve(ln_theta_e, p, guess, trust)
}

/// A first guess of the pseudo-adiabat's temperature, K: Davies-Jones (2008, MWR 136), numbers as coded in earthkit-meteo.
///
/// The paper states 0.34 K over 100..1050 hPa and up to 40 °C of wet-bulb potential temperature; found here: 0.66 K at 100 hPa
/// and 39 °C, elsewhere 0.49 K. An error in it costs a step of Newton's, not accuracy.
pub(crate) fn first_guess(theta_e: f64, p: f64) -> f64 {
    let ratio = p / REFERENCE_PRESSURE;
    let pi = ratio.powf(KAPPA);
    let t_e = theta_e * pi;
    let x = (273.15 / t_e).powf(1.0 / KAPPA);
    let k1 = (-38.5 * pi + 137.81) * pi - 53.737;
    let k2 = (-4.392 * pi + 56.831) * pi - 0.384;
    let guess = if x * (0.1859 * ratio + 0.6512) > 1.0 {
        let e = e_water(t_e);
        let w = EPSILON * e / (p - e).max(0.5 * p);
        t_e - 2675.0 * w / (1.0 + 2675.0 * w * dln_e_water(t_e))
    } else if x >= 1.0 {
        273.15 + k1 - k2 * x
    } else if x >= 0.4 {
        273.15 + (k1 - 1.21) - (k2 - 1.21) * x
    } else {
        273.15 + (k1 - 2.66) - (k2 - 1.21) * x + 0.58 / x
    };
    guess.min(t_e)
}

/// Temperature at `pressure` on the saturated pseudo-adiabat of constant eq. 39 `theta_e`: Newton's method on
/// ln theta-e, to 1e-10 K. NaN for anything that isn't finite and positive.
///
/// The formula itself stands for the pseudo-adiabatic process to 0.2 K (Davies-Jones 2008).
///
/// ```
/// use dewbound_thermo::*;
/// // Root of eq. 39 by SciPy 1.15.3 (Brent): theta-e 340 K at 500 hPa.
/// let t = temperature_on_pseudoadiabat(Temperature::from_k(340.0), Pressure::from_hpa(500.0));
/// assert!((t.k() - 266.317_432_98).abs() < 1e-6);
/// ```
pub fn temperature_on_pseudoadiabat(theta_e: Temperature, pressure: Pressure) -> Temperature {
    let (theta_e, p) = (theta_e.k(), pressure.pa());
    if !(theta_e > 0.0 && theta_e.is_finite() && p > 0.0 && p.is_finite()) {
        return Temperature::from_k(f64::NAN);
    }
    Temperature::from_k(solve(theta_e.ln(), p, first_guess(theta_e, p), 1e-10).0)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Analytic derivatives against differences.
    #[test]
    fn derivatives_are_those_of_the_formula() {
        for (t, p) in [
            (300.0, 1e5),
            (285.0, 8e4),
            (260.0, 5e4),
            (230.0, 3e4),
            (200.0, 1e4),
            (150.0, 1e3),
        ] {
            let state = saturated(t, p).unwrap();
            let d = 1e-3;
            let slope = (saturated(t + d, p).unwrap().ln_theta_e
                - saturated(t - d, p).unwrap().ln_theta_e)
                / (2.0 * d);
            assert!((state.per_kelvin / slope - 1.0).abs() < 1e-6, "{t} {p}");
            let up = |h: f64| solve(state.ln_theta_e, p * (-h).exp(), t, 1e-11);
            let h = 1e-4;
            assert!(
                (state.slope - (up(h).0 - up(-h).0) / (2.0 * h)).abs() < 1e-4,
                "{t} {p}"
            );
            let w = |h: f64| saturated(up(h).0, p * (-h).exp()).unwrap().w;
            let w_slope = (w(h) - w(-h)) / (2.0 * h);
            assert!(
                (state.w_slope - w_slope).abs() <= 1e-5 * w_slope.abs() + 1e-12,
                "{t} {p}"
            );
        }
    }

    /// From the paper's domain into deserts of it: every solution is one.
    #[test]
    fn solutions_solve_the_equation_anywhere() {
        for theta_e in [150.0, 220.0, 280.0, 340.0, 400.0, 600.0, 1200.0] {
            for p in [10.0, 100.0, 1e3, 1e4, 5e4, 1e5, 1.2e5] {
                let t = temperature_on_pseudoadiabat(
                    Temperature::from_k(theta_e),
                    Pressure::from_pa(p),
                )
                .k();
                let back = saturated(t, p).unwrap().ln_theta_e.exp();
                assert!(
                    (back / theta_e - 1.0).abs() < 1e-9,
                    "theta-e {theta_e} K at {p} Pa: {t} K has {back} K"
                );
            }
        }
        for bad in [f64::NAN, f64::INFINITY, -1.0, 0.0] {
            assert!(
                temperature_on_pseudoadiabat(Temperature::from_k(bad), Pressure::from_pa(5e4))
                    .k()
                    .is_nan()
            );
            assert!(
                temperature_on_pseudoadiabat(Temperature::from_k(300.0), Pressure::from_pa(bad))
                    .k()
                    .is_nan()
            );
        }
    }

    /// Davies-Jones (2008) states 0.34 K within 100..1050 hPa and 40 degC of wet-bulb potential temperature, for constants
    /// that may differ a little; a wrong coefficient would show as several K.
    #[test]
    fn the_first_guess_is_nearly_as_good_as_published() {
        for theta_w in (-20..=40).step_by(4) {
            let start = 273.15 + f64::from(theta_w);
            let ln_theta_e = saturated(start, REFERENCE_PRESSURE).unwrap().ln_theta_e;
            for p in (100..=1050).step_by(50).map(|p| f64::from(p) * 100.0) {
                let guess = first_guess(ln_theta_e.exp(), p);
                let t = solve(ln_theta_e, p, guess, 1e-10).0;
                assert!(
                    (guess - t).abs() < 0.5,
                    "theta-w {theta_w} degC at {p} Pa: {guess} K for {t} K"
                );
            }
        }
    }
}
