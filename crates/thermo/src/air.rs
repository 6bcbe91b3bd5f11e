//! Formulas for one point of moist air.

use crate::{Pressure, Temperature};

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

/// Saturation vapour pressure over water: Bolton (1980) eq. 10.
pub fn saturation_vapour_pressure(_temperature: Temperature) -> Pressure {
    todo!()
}

/// Saturation vapour pressure over ice, for the rules that say so.
pub fn saturation_vapour_pressure_over_ice(_temperature: Temperature) -> Pressure {
    todo!()
}

/// Dew point from vapour pressure: eq. 10 inverted.
pub fn dewpoint_from_vapour_pressure(_vapour_pressure: Pressure) -> Temperature {
    todo!()
}

/// Dew point from relative humidity over water (0..=1 and slightly above).
pub fn dewpoint_from_relative_humidity(_temperature: Temperature, _relative_humidity: f64) -> Temperature {
    todo!()
}

/// Dew point of air of this mixing ratio (kg/kg) at this pressure.
pub fn dewpoint_from_mixing_ratio(_pressure: Pressure, _mixing_ratio: f64) -> Temperature {
    todo!()
}

/// Saturation mixing ratio, kg/kg.
pub fn saturation_mixing_ratio(_pressure: Pressure, _temperature: Temperature) -> f64 {
    todo!()
}

/// Dry potential temperature.
pub fn potential_temperature(_pressure: Pressure, _temperature: Temperature) -> Temperature {
    todo!()
}

/// Temperature of dry air of this potential temperature at this pressure.
pub fn temperature_on_dry_adiabat(_theta: Temperature, _pressure: Pressure) -> Temperature {
    todo!()
}

impl Air {
    /// Vapour pressure.
    pub fn vapour_pressure(&self) -> Pressure {
        todo!()
    }

    /// Mixing ratio, kg/kg.
    pub fn mixing_ratio(&self) -> f64 {
        todo!()
    }

    /// Relative humidity over water, 1 = saturated.
    pub fn relative_humidity(&self) -> f64 {
        todo!()
    }

    /// Virtual temperature.
    pub fn virtual_temperature(&self) -> Temperature {
        todo!()
    }

    /// Dry potential temperature.
    pub fn potential_temperature(&self) -> Temperature {
        todo!()
    }

    /// Lifting condensation level: Bolton (1980) eq. 15, pressure along the moist-exponent dry adiabat.
    pub fn lcl(&self) -> Lcl {
        todo!()
    }

    /// Equivalent potential temperature: Bolton (1980) eq. 39.
    pub fn theta_e(&self) -> Temperature {
        todo!()
    }

    /// Wet-bulb temperature (the pseudo-adiabat of this air's theta-e at its own pressure).
    pub fn wet_bulb(&self) -> Temperature {
        todo!()
    }
}

/// Temperature at `pressure` on the saturated pseudo-adiabat of constant eq. 39 `theta_e` (exact Newton solution).
pub fn temperature_on_pseudoadiabat(_theta_e: Temperature, _pressure: Pressure) -> Temperature {
    todo!()
}
