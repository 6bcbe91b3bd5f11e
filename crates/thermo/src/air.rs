//! Formulas for one point of moist air.

use crate::{KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, pseudoadiabat, saturation};

/// One point of moist air.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Air {
    /// Pressure.
    pub pressure: Pressure,
    /// Temperature.
    pub temperature: Temperature,
    /// Dew point over water.
    pub dewpoint: Temperature,
}

/// The lifting condensation level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Lcl {
    /// Pressure there.
    pub pressure: Pressure,
    /// Temperature there.
    pub temperature: Temperature,
}

/// Dry potential temperature.
pub fn potential_temperature(pressure: Pressure, temperature: Temperature) -> Temperature {
    Temperature::from_k(temperature.k() * (REFERENCE_PRESSURE / pressure.pa()).powf(KAPPA))
}

/// Temperature of dry air of this potential temperature at this pressure.
pub fn temperature_on_dry_adiabat(theta: Temperature, pressure: Pressure) -> Temperature {
    Temperature::from_k(theta.k() * (pressure.pa() / REFERENCE_PRESSURE).powf(KAPPA))
}

/// Exponent of the dry adiabat of air of mixing ratio `w`: 0.2854 (1 - 0.28 w), Bolton (1980).
#[inline]
pub(crate) fn moist_exponent(w: f64) -> f64 {
    KAPPA * (1.0 - 0.28 * w)
}

/// Eq. 15 in K; a dew point above the temperature counts as saturation.
#[inline]
pub(crate) fn lcl_temperature(t: f64, td: f64) -> f64 {
    // 56 K is the pole of eq. 15; air that dry has no water to speak of.
    if td >= t || td <= 56.0 {
        return td.min(t);
    }
    1.0 / (1.0 / (td - 56.0) + (t / td).ln() / 800.0) + 56.0
}

/// Natural logarithm of eq. 39 theta-e (K), from quantities already at hand.
#[inline]
pub(crate) fn ln_theta_e(t: f64, dry_pressure: f64, w: f64, t_lcl: f64) -> f64 {
    t.ln()
        + KAPPA * (REFERENCE_PRESSURE / dry_pressure).ln()
        + 0.28 * w * (t / t_lcl).ln()
        + pseudoadiabat::latent_term(t_lcl, w)
}

impl Air {
    /// Dew point, not above the temperature, in K.
    #[inline]
    pub(crate) fn td(&self) -> f64 {
        self.dewpoint.k().min(self.temperature.k())
    }

    /// Vapour pressure.
    pub fn vapour_pressure(&self) -> Pressure {
        saturation::saturation_vapour_pressure(self.dewpoint)
    }

    /// Mixing ratio, kg/kg.
    pub fn mixing_ratio(&self) -> f64 {
        saturation::mixing_ratio(self.pressure.pa(), saturation::e_water(self.dewpoint.k()))
    }

    /// Relative humidity over water, 1 = saturated.
    pub fn relative_humidity(&self) -> f64 {
        (saturation::exponent(self.dewpoint.k()) - saturation::exponent(self.temperature.k())).exp()
    }

    /// Virtual temperature.
    pub fn virtual_temperature(&self) -> Temperature {
        Temperature::from_k(saturation::virtual_temperature(
            self.temperature.k(),
            self.mixing_ratio(),
        ))
    }

    /// Dry potential temperature.
    pub fn potential_temperature(&self) -> Temperature {
        potential_temperature(self.pressure, self.temperature)
    }

    /// Lifting condensation level: Bolton (1980) eq. 15, pressure along the moist-exponent dry adiabat.
    pub fn lcl(&self) -> Lcl {
        let (t, td) = (self.temperature.k(), self.td());
        if td >= t {
            return Lcl {
                pressure: self.pressure,
                temperature: self.temperature,
            };
        }
        let t_lcl = lcl_temperature(t, td);
        let w = self.mixing_ratio();
        Lcl {
            pressure: Pressure::from_pa(
                self.pressure.pa() * (t_lcl / t).powf(1.0 / moist_exponent(w)),
            ),
            temperature: Temperature::from_k(t_lcl),
        }
    }

    /// Equivalent potential temperature: Bolton (1980) eq. 39.
    pub fn theta_e(&self) -> Temperature {
        let (p, t, td) = (self.pressure.pa(), self.temperature.k(), self.td());
        let e = saturation::e_water(td);
        let w = saturation::mixing_ratio(p, e);
        Temperature::from_k(ln_theta_e(t, p - e, w, lcl_temperature(t, td)).exp())
    }

    /// Wet-bulb temperature (the pseudo-adiabat of this air's theta-e at its own pressure).
    pub fn wet_bulb(&self) -> Temperature {
        pseudoadiabat::temperature_on_pseudoadiabat(self.theta_e(), self.pressure)
    }
}
