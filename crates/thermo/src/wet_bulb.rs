//! Wet-bulb temperature and wet-bulb potential temperature in one step: Davies-Jones (2008, MWR 136, 2764-2785).
//!
//! His first guess, then one Newton step on a power of theta-e, which is much straighter in T than its logarithm: he
//! uses theta_e^(-1/kappa) = theta_e^-3.504. With our constants that leaves 2.4 mK where the air is warmest; the power -3
//! used here leaves 1.6 mK.

use crate::pseudoadiabat::{first_guess, saturated, solve};
use crate::{Air, Pressure, REFERENCE_PRESSURE, Temperature};

/// Power of theta-e, negative, in which Newton's step is taken.
const POWER: f64 = 3.0;
/// Largest theta-e of the one-step form, K: that of a wet-bulb potential temperature of 40 °C.
const WARMEST: f64 = 478.4;
/// Smallest theta-e of the one-step form, K.
const COLDEST: f64 = 150.0;

/// Temperature (K) at which saturated air at `p` has this theta-e.
fn one_step(theta_e: f64, p: f64) -> f64 {
    let guess = first_guess(theta_e, p);
    let known = (100e2..=1050e2).contains(&p) && (COLDEST..=WARMEST).contains(&theta_e);
    match saturated(guess, p) {
        Some(state) if known => {
            let excess = POWER * (state.ln_theta_e - theta_e.ln());
            guess - excess.exp_m1() / (POWER * state.per_kelvin)
        }
        _ => solve(theta_e.ln(), p, guess, 1e-10).0,
    }
}

/// Temperature at which saturated air has this eq. 39 theta-e (K) at this pressure: the wet-bulb temperature of any air
/// of that theta-e there.
///
/// Davies-Jones (2008): first guess and one step, within 0.002 K of
/// [`temperature_on_pseudoadiabat`](crate::temperature_on_pseudoadiabat) for 100..1050 hPa and up to 40 °C of wet-bulb
/// potential temperature; beyond, the same equation solved to the end. NaN for anything that isn't finite and positive.
///
/// ```
/// use dewbound_thermo::*;
/// // Root of eq. 39 by SciPy 1.15.3 (Brent): theta-e 340 K at 500 hPa.
/// let t = wet_bulb_temperature(Temperature::from_k(340.0), Pressure::from_hpa(500.0));
/// assert!((t.k() - 266.317_432_98).abs() < 0.002);
/// ```
pub fn wet_bulb_temperature(theta_e: Temperature, pressure: Pressure) -> Temperature {
    let (theta_e, p) = (theta_e.k(), pressure.pa());
    if !(theta_e > 0.0 && theta_e.is_finite() && p > 0.0 && p.is_finite()) {
        return Temperature::from_k(f64::NAN);
    }
    Temperature::from_k(one_step(theta_e, p))
}

/// Wet-bulb potential temperature of this eq. 39 theta-e (K): [`wet_bulb_temperature`] at 1000 hPa.
///
/// ```
/// use dewbound_thermo::*;
/// let t = Temperature::from_c(20.0);
/// let air = Air { pressure: Pressure::from_hpa(1000.0), temperature: t, dewpoint: t };
/// assert!((wet_bulb_potential_temperature(air.theta_e()).c() - 20.0).abs() < 0.002);
/// ```
pub fn wet_bulb_potential_temperature(theta_e: Temperature) -> Temperature {
    wet_bulb_temperature(theta_e, Pressure::from_pa(REFERENCE_PRESSURE))
}

impl Air {
    /// Wet-bulb temperature: where the pseudo-adiabat of this air's theta-e crosses its own pressure, by
    /// [`wet_bulb_temperature`], and never above the temperature or below the dew point. The pseudo-adiabatic one, some
    /// tenths of a degree below a psychrometer's in dry air.
    pub fn wet_bulb(&self) -> Temperature {
        let wet_bulb = wet_bulb_temperature(self.theta_e(), self.pressure).k();
        // Comparisons leave a number that is none as it is.
        Temperature::from_k(if wet_bulb > self.temperature.k() {
            self.temperature.k()
        } else if wet_bulb < self.td() {
            self.td()
        } else {
            wet_bulb
        })
    }

    /// Wet-bulb potential temperature: [`wet_bulb_potential_temperature`] of this air's theta-e.
    pub fn wet_bulb_potential_temperature(&self) -> Temperature {
        wet_bulb_potential_temperature(self.theta_e())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::temperature_on_pseudoadiabat;

    fn saturated_theta_e(t: f64, p: f64) -> f64 {
        saturated(t, p).unwrap().ln_theta_e.exp()
    }

    /// Davies-Jones (2008) states 0.002 K for -20..40 degC of wet-bulb potential temperature and 100..1050 hPa.
    #[test]
    fn one_step_is_within_two_millikelvin() {
        let mut errors = Vec::new();
        for i in 0..=1200 {
            let theta_w = 253.15 + 0.05 * f64::from(i);
            let theta_e = Temperature::from_k(saturated_theta_e(theta_w, 1e5));
            for j in 0..=380 {
                let pressure = Pressure::from_pa(100e2 + 250.0 * f64::from(j));
                let exact = temperature_on_pseudoadiabat(theta_e, pressure);
                errors.push((wet_bulb_temperature(theta_e, pressure).k() - exact.k()).abs());
            }
            let found = wet_bulb_potential_temperature(theta_e).k();
            assert!((found - theta_w).abs() < 0.002, "{theta_w}: {found}");
        }
        errors.sort_by(f64::total_cmp);
        let at = |q: f64| errors[((errors.len() - 1) as f64 * q) as usize];
        println!(
            "one step against convergence: {} cases, q75 {:.1e}, q99 {:.1e}, max {:.1e} K",
            errors.len(),
            at(0.75),
            at(0.99),
            at(1.0)
        );
        assert!(at(1.0) < 0.002);
    }

    /// Colder, thinner, thicker and warmer than the paper's range.
    #[test]
    fn beyond_the_papers_range_it_holds_as_well() {
        for theta_e in [
            120.0, 149.9, 150.1, 180.0, 210.0, 240.0, 253.0, 478.3, 478.5, 600.0,
        ] {
            for p in [1e3, 9_999.0, 1e4, 2e4, 5e4, 8e4, 1.05e5, 1.051e5, 1.2e5] {
                let (theta_e, pressure) = (Temperature::from_k(theta_e), Pressure::from_pa(p));
                let exact = temperature_on_pseudoadiabat(theta_e, pressure).k();
                let found = wet_bulb_temperature(theta_e, pressure).k();
                assert!(
                    (found - exact).abs() < 0.002,
                    "{theta_e:?} {p}: {found} {exact}"
                );
            }
        }
        for bad in [f64::NAN, f64::INFINITY, -1.0, 0.0] {
            let (theta_e, pressure) = (Temperature::from_k(300.0), Pressure::from_hpa(500.0));
            assert!(
                wet_bulb_temperature(Temperature::from_k(bad), pressure)
                    .k()
                    .is_nan()
            );
            assert!(
                wet_bulb_temperature(theta_e, Pressure::from_pa(bad))
                    .k()
                    .is_nan()
            );
        }
    }
}
