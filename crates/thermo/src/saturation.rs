//! Saturation over water and ice, and the dew point.
//!
//! e = vapour pressure, p = pressure (Pa); t = temperature in °C, T in K; w = mixing ratio, kg of vapour to a kg of dry
//! air; eps = Rd/Rv.

use crate::elementary::at_least;
use crate::{EPSILON, Pressure, Temperature, ZERO_CELSIUS};

/// e_s at 0 °C in eq. 10, Pa.
pub(crate) const E0: f64 = 611.2;
/// Factor in the exponent of eq. 10.
const A: f64 = 17.67;
/// Offset in the exponent of eq. 10, K.
const B: f64 = 243.5;

/// Temperature at which eq. 10 has its pole, K: no vapour at all at and below it.
pub(crate) const NO_VAPOUR: f64 = ZERO_CELSIUS - B;

/// Nearest to the pole (K) that is computed; vapour has long vanished there.
const TINY: f64 = 1.0;

/// Eq. 10 in Pa; zero at and below its pole.
#[inline]
pub(crate) fn e_water(t: f64) -> f64 {
    let above_pole = t - NO_VAPOUR;
    if above_pole <= 0.0 {
        return 0.0;
    }
    E0 * (A * (t - ZERO_CELSIUS) / above_pole).exp()
}

/// d ln e_s / dT of eq. 10, 1/K.
#[inline]
pub(crate) fn dln_e_water(t: f64) -> f64 {
    let above_pole = t - NO_VAPOUR;
    if above_pole <= 0.0 {
        return 0.0;
    }
    A * B / (above_pole * above_pole)
}

/// Exponent of eq. 10: the logarithm of e_s / 611.2 Pa; so far down at the pole that its exponential is zero.
#[inline(always)]
pub(crate) fn exponent(t: f64) -> f64 {
    A * (t - ZERO_CELSIUS) / at_least(t - NO_VAPOUR, TINY)
}

/// [`exponent`] and its derivative with temperature, 1/K.
#[inline(always)]
pub(crate) fn exponent_and_slope(t: f64) -> (f64, f64) {
    let per = 1.0 / at_least(t - NO_VAPOUR, TINY);
    (A * (t - ZERO_CELSIUS) * per, A * B * per * per)
}

/// Dew point of a vapour pressure in Pa.
#[inline]
pub(crate) fn dewpoint(e: f64) -> f64 {
    if e <= 0.0 {
        return NO_VAPOUR;
    }
    let y = (e / E0).ln();
    ZERO_CELSIUS + B * y / (A - y)
}

/// Mixing ratio of a vapour pressure at a pressure; infinite when there is no room for dry air.
#[inline]
pub(crate) fn mixing_ratio(p: f64, e: f64) -> f64 {
    if e >= p {
        f64::INFINITY
    } else {
        EPSILON * e / (p - e)
    }
}

/// Virtual temperature of air of this temperature and mixing ratio.
#[inline]
pub(crate) fn virtual_temperature(t: f64, w: f64) -> f64 {
    t * (1.0 + w / EPSILON) / (1.0 + w)
}

/// Saturation vapour pressure over water: Bolton (1980, MWR 108, 1046-1053) eq. 10.
///
/// `e_s = 611.2 Pa exp(17.67 t / (t + 243.5))`, t in °C. Within 0.3 % for -35..35 °C (Bolton; found against IAPWS: 0.13 %);
/// below, over supercooled water, it is used all the way down, to zero at its pole at -243.5 °C. A pure phase: no
/// enhancement factor.
///
/// ```
/// use dewbound_thermo::*;
/// // Eq. 10 at 15 °C as printed in the function reference of a national centre (its constant seems to be 6.1121 hPa).
/// let e = saturation_vapour_pressure(Temperature::from_c(15.0));
/// assert!((e.hpa() - 17.04077).abs() < 5e-4);
/// ```
pub fn saturation_vapour_pressure(temperature: Temperature) -> Pressure {
    Pressure::from_pa(e_water(temperature.k()))
}

/// Saturation vapour pressure over ice, for the rules that say so: WMO-No. 8, annex 4.B (from memory), without the
/// enhancement factor.
///
/// `e_i = 611.2 Pa exp(22.46 t / (t + 272.62))`, t in °C, for -65..0 °C; found against the sublimation pressure of IAPWS
/// R14-08: 0.2 %. An ascent uses it where its condensate may be ice ([`crate::Condensate::WaterAndIce`]).
///
/// ```
/// use dewbound_thermo::*;
/// // IAPWS R14-08 at -20 °C: 103.24 Pa.
/// let e = saturation_vapour_pressure_over_ice(Temperature::from_c(-20.0));
/// assert!((e.pa() / 103.24 - 1.0).abs() < 0.01);
/// ```
pub fn saturation_vapour_pressure_over_ice(temperature: Temperature) -> Pressure {
    let c = temperature.c();
    let above_pole = c + 272.62;
    if above_pole <= 0.0 {
        return Pressure::from_pa(0.0);
    }
    Pressure::from_pa(611.2 * (22.46 * c / above_pole).exp())
}

/// Dew point from vapour pressure: eq. 10 inverted, exactly.
///
/// `t = 243.5 y / (17.67 - y)`, `y = ln(e / 611.2 Pa)`. No vapour at all gives the pole of eq. 10, -243.5 °C.
///
/// ```
/// use dewbound_thermo::*;
/// let dewpoint = dewpoint_from_vapour_pressure(Pressure::from_hpa(17.04077));
/// assert!((dewpoint.c() - 15.0).abs() < 1e-3);
/// ```
pub fn dewpoint_from_vapour_pressure(vapour_pressure: Pressure) -> Temperature {
    Temperature::from_k(dewpoint(vapour_pressure.pa()))
}

/// Dew point from relative humidity over water (0..=1 and slightly above): the dew point of `rh e_s(T)`.
///
/// ```
/// use dewbound_thermo::*;
/// let t = Temperature::from_c(20.0);
/// assert!((dewpoint_from_relative_humidity(t, 1.0).c() - 20.0).abs() < 1e-9);
/// assert!(dewpoint_from_relative_humidity(t, 0.5).c() < 10.0);
/// ```
pub fn dewpoint_from_relative_humidity(
    temperature: Temperature,
    relative_humidity: f64,
) -> Temperature {
    Temperature::from_k(dewpoint(relative_humidity * e_water(temperature.k())))
}

/// Dew point of air of this mixing ratio (kg/kg) at this pressure: of `e = p w / (eps + w)`.
pub fn dewpoint_from_mixing_ratio(pressure: Pressure, mixing_ratio: f64) -> Temperature {
    Temperature::from_k(dewpoint(
        pressure.pa() * mixing_ratio / (EPSILON + mixing_ratio),
    ))
}

/// Saturation mixing ratio over water, kg/kg: `w = eps e_s / (p - e_s)`; infinite where e_s reaches the pressure.
pub fn saturation_mixing_ratio(pressure: Pressure, temperature: Temperature) -> f64 {
    mixing_ratio(pressure.pa(), e_water(temperature.k()))
}
