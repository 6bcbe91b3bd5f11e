//! Formulas for one point of moist air.
//!
//! T, Td, T_L = temperature, dew point, temperature at the LCL (K); p, e = pressure, vapour pressure; w = mixing ratio
//! (kg/kg); eps = Rd/Rv. Bolton = Bolton (1980), MWR 108, 1046-1053.

use crate::{EPSILON, KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, pseudoadiabat, saturation};

/// One point of moist air.
///
/// The dew point is taken as it stands for vapour pressure, mixing ratio and what follows from them; for the
/// condensation level and theta-e a dew point above the temperature counts as saturation.
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

/// Dry potential temperature, `theta = T (1000 hPa / p)^0.2854`.
///
/// The exponent is Bolton's and takes no account of vapour. Positive p.
///
/// ```
/// use dewbound_thermo::*;
/// let theta = potential_temperature(Pressure::from_hpa(1000.0), Temperature::from_c(20.0));
/// assert!((theta.c() - 20.0).abs() < 1e-9);
/// ```
pub fn potential_temperature(pressure: Pressure, temperature: Temperature) -> Temperature {
    Temperature::from_k(temperature.k() * (REFERENCE_PRESSURE / pressure.pa()).powf(KAPPA))
}

/// Temperature of dry air of this potential temperature at this pressure: [`potential_temperature`] inverted.
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

/// ln theta-e (eq. 39) of air known to be usable, with the inlined logarithm: for scans of many levels.
#[inline]
pub(crate) fn quick_ln_theta_e(p: f64, t: f64, td: f64) -> f64 {
    use crate::elementary::{at_least, at_most, exp, ln};
    // Eq. 15 gives the temperature itself for saturated air; the pole at 56 K is as good as dry.
    let held = at_least(at_most(td, t), 57.0);
    let ln_t = ln(t);
    let t_lcl = 1.0 / (1.0 / (held - 56.0) + (ln_t - ln(held)) * (1.0 / 800.0)) + 56.0;
    let e = saturation::E0 * exp(saturation::exponent(td));
    let per_dry = 1.0 / (p - e);
    let w = EPSILON * e * per_dry;
    ln_t + KAPPA * ln(REFERENCE_PRESSURE * per_dry)
        + 0.28 * w * (ln_t - ln(t_lcl))
        + pseudoadiabat::latent_term(t_lcl, w)
}

impl Air {
    /// Dew point, not above the temperature, in K.
    #[inline]
    pub(crate) fn td(&self) -> f64 {
        // Not `min`, which would make a temperature of a dew point that is no number.
        let (t, td) = (self.temperature.k(), self.dewpoint.k());
        if td > t { t } else { td }
    }

    /// Vapour pressure: eq. 10 at the dew point.
    pub fn vapour_pressure(&self) -> Pressure {
        saturation::saturation_vapour_pressure(self.dewpoint)
    }

    /// Mixing ratio, kg/kg: `w = eps e / (p - e)`; infinite where e reaches the pressure.
    pub fn mixing_ratio(&self) -> f64 {
        saturation::mixing_ratio(self.pressure.pa(), saturation::e_water(self.dewpoint.k()))
    }

    /// Relative humidity over water, `e_s(Td) / e_s(T)`, 1 = saturated.
    pub fn relative_humidity(&self) -> f64 {
        (saturation::exponent(self.dewpoint.k()) - saturation::exponent(self.temperature.k())).exp()
    }

    /// Virtual temperature, `T (1 + w/eps) / (1 + w)`: exact for ideal gases.
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

    /// Lifting condensation level: Bolton eq. 15, and the pressure where air of constant theta with the exponent
    /// 0.2854 (1 - 0.28 w) has that temperature.
    ///
    /// `T_L = 1 / (1/(Td - 56) + ln(T/Td)/800) + 56`; `p_L = p (T_L/T)^(1 / (0.2854 (1 - 0.28 w)))`. Within 0.1 K for
    /// -35..35 °C (Bolton; from memory). Saturated air is its own LCL. Air so dry that Td is at or below the pole of eq. 15
    /// (56 K) has T_L = Td.
    ///
    /// ```
    /// use dewbound_thermo::*;
    /// let air = Air {
    ///     pressure: Pressure::from_hpa(1000.0),
    ///     temperature: Temperature::from_c(20.0),
    ///     dewpoint: Temperature::from_c(10.0),
    /// };
    /// let lcl = air.lcl();
    /// // The rule of thumb of 125 m for each K of depression (common practice, no source): 1,250 m, 865 hPa.
    /// assert!((lcl.pressure.hpa() - 865.0).abs() < 10.0);
    /// assert!((lcl.temperature.c() - 7.8).abs() < 0.5);
    /// ```
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

    /// Equivalent potential temperature: Bolton eq. 39, with p and e in hPa and T_L of eq. 15.
    ///
    /// `theta_e = T (1000/(p-e))^0.2854 (T/T_L)^(0.28 w) exp[(3036/T_L - 1.78) w (1 + 0.448 w)]`
    ///
    /// Within 0.2 K of the pseudo-adiabatic process (Davies-Jones 2008, MWR 136, 2764-2785). Below the boiling point.
    ///
    /// ```
    /// use dewbound_thermo::*;
    /// // The same formula in earthkit-meteo 1.2.1 (slightly other constants): 1000 hPa, 20 °C, 5 °C.
    /// let air = Air {
    ///     pressure: Pressure::from_hpa(1000.0),
    ///     temperature: Temperature::from_c(20.0),
    ///     dewpoint: Temperature::from_c(5.0),
    /// };
    /// assert!((air.theta_e().k() - 309.225).abs() < 0.3);
    /// ```
    pub fn theta_e(&self) -> Temperature {
        let (p, t, td) = (self.pressure.pa(), self.temperature.k(), self.td());
        let e = saturation::e_water(td);
        let w = saturation::mixing_ratio(p, e);
        Temperature::from_k(ln_theta_e(t, p - e, w, lcl_temperature(t, td)).exp())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_quick_theta_e_is_the_same() {
        for p in [10_000.0, 70_000.0, 100_000.0] {
            for t in [220.0, 273.15, 300.0] {
                for depression in [0.0, 1e-9, 5.0, 60.0, 150.0, 190.0] {
                    let td = Temperature::from_k(t - depression);
                    let air = Air {
                        pressure: Pressure::from_pa(p),
                        temperature: Temperature::from_k(t),
                        dewpoint: td,
                    };
                    let quick = quick_ln_theta_e(p, t, td.k());
                    assert!(
                        (quick - air.theta_e().k().ln()).abs() < 1e-14,
                        "{p} {t} {depression}"
                    );
                }
            }
        }
    }

    /// Saturated air is its own LCL and wet bulb; theta-e stays what it is on the way to the LCL.
    #[test]
    fn saturated_air_is_its_own_lcl_and_wet_bulb() {
        let t = Temperature::from_c(17.0);
        let air = Air {
            pressure: Pressure::from_hpa(900.0),
            temperature: t,
            dewpoint: t,
        };
        assert_eq!(
            air.lcl(),
            Lcl {
                pressure: air.pressure,
                temperature: t
            }
        );
        assert!((air.wet_bulb().k() - t.k()).abs() < 1e-9);
        assert!((air.relative_humidity() - 1.0).abs() < 1e-15);
    }

    #[test]
    fn the_wet_bulb_lies_between_dew_point_and_temperature() {
        for (t, td) in [(30.0, 10.0), (0.0, -10.0), (-20.0, -21.0), (40.0, -30.0)] {
            let [temperature, dewpoint] = [t, td].map(Temperature::from_c);
            let air = Air {
                pressure: Pressure::from_hpa(950.0),
                temperature,
                dewpoint,
            };
            assert!(
                dewpoint < air.wet_bulb() && air.wet_bulb() < temperature,
                "{t} {td}"
            );
        }
    }

    /// No number is made of one that isn't.
    #[test]
    fn not_a_number_stays_so() {
        let nan = f64::NAN;
        let good = Air {
            pressure: Pressure::from_hpa(900.0),
            temperature: Temperature::from_c(20.0),
            dewpoint: Temperature::from_c(10.0),
        };
        for air in [
            Air {
                pressure: Pressure::from_pa(nan),
                ..good
            },
            Air {
                temperature: Temperature::from_k(nan),
                ..good
            },
            Air {
                dewpoint: Temperature::from_k(nan),
                ..good
            },
        ] {
            assert!(
                air.theta_e().k().is_nan() && air.wet_bulb().k().is_nan(),
                "{air:?}"
            );
            assert!(
                air.lcl().pressure.pa().is_nan() || air.lcl().temperature.k().is_nan(),
                "{air:?}"
            );
        }
    }
}
