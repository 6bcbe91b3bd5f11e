//! Saturation over water and ice, and the dew point.

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
    A * (t - ZERO_CELSIUS) / (t - NO_VAPOUR).max(TINY)
}

/// [`exponent`] and its derivative with temperature, 1/K.
#[inline(always)]
pub(crate) fn exponent_and_slope(t: f64) -> (f64, f64) {
    let per = 1.0 / (t - NO_VAPOUR).max(TINY);
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

/// Saturation vapour pressure over water: Bolton (1980) eq. 10.
pub fn saturation_vapour_pressure(temperature: Temperature) -> Pressure {
    Pressure::from_pa(e_water(temperature.k()))
}

/// Saturation vapour pressure over ice, for the rules that say so.
pub fn saturation_vapour_pressure_over_ice(temperature: Temperature) -> Pressure {
    let c = temperature.c();
    let above_pole = c + 272.62;
    if above_pole <= 0.0 {
        return Pressure::from_pa(0.0);
    }
    Pressure::from_pa(611.2 * (22.46 * c / above_pole).exp())
}

/// Dew point from vapour pressure: eq. 10 inverted.
pub fn dewpoint_from_vapour_pressure(vapour_pressure: Pressure) -> Temperature {
    Temperature::from_k(dewpoint(vapour_pressure.pa()))
}

/// Dew point from relative humidity over water (0..=1 and slightly above).
pub fn dewpoint_from_relative_humidity(
    temperature: Temperature,
    relative_humidity: f64,
) -> Temperature {
    Temperature::from_k(dewpoint(relative_humidity * e_water(temperature.k())))
}

/// Dew point of air of this mixing ratio (kg/kg) at this pressure.
pub fn dewpoint_from_mixing_ratio(pressure: Pressure, mixing_ratio: f64) -> Temperature {
    Temperature::from_k(dewpoint(
        pressure.pa() * mixing_ratio / (EPSILON + mixing_ratio),
    ))
}

/// Saturation mixing ratio, kg/kg.
pub fn saturation_mixing_ratio(pressure: Pressure, temperature: Temperature) -> f64 {
    mixing_ratio(pressure.pa(), e_water(temperature.k()))
}
