//! Numbers of one ascent beyond CAPE and CIN.

use super::LevelAt;
use crate::{Environment, Lifted, Temperature};

/// Numbers of one ascent beyond CAPE and CIN. Absent is `None`: outside the profile, or no free convection.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelNumbers {
    /// Height of the LCL above the lowest level, m.
    pub lcl_height: Option<f64>,
    /// Height of the LFC above the lowest level, m.
    pub lfc_height: Option<f64>,
    /// Height of the EL above the lowest level, m.
    pub el_height: Option<f64>,
    /// Part of CAPE below 3 km above the lowest level, J/kg.
    pub cape_below_3km: Option<f64>,
    /// Part of CAPE where the environment is between -10 and -30 °C, J/kg.
    pub cape_in_growth_zone: Option<f64>,
    /// CAPE divided by the depth from LFC to EL, m/s².
    pub normalised_cape: Option<f64>,
    /// Temperature of the environment minus that of the parcel at 500 hPa, K.
    pub lifted_index: Option<f64>,
    /// Where heating from below would make cumulus, for the parcel's mixing ratio.
    pub convective: Option<Convective>,
}

/// The convective condensation level and the temperature the ground needs for it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Convective {
    /// The convective condensation level.
    pub level: LevelAt,
    /// Convective temperature: of the lowest level when the air up there is reached dry-adiabatically.
    pub temperature: Temperature,
}

impl ParcelNumbers {
    /// Of a parcel lifted through its environment.
    pub fn of(_environment: &Environment, _lifted: &Lifted) -> Self {
        Self::default()
    }
}
