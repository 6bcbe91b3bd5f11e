//! Numbers of a whole profile.

use super::LevelAt;
use crate::winds::WindProfile;
use crate::{Environment, Pressure, Temperature};

/// Numbers of a whole profile. Absent is `None`.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct LayerNumbers {
    /// Effective inflow layer.
    pub inflow: Option<InflowLayer>,
    /// Downdraft CAPE.
    pub downdraft: Option<Downdraft>,
    /// Water vapour over the lowest level, kg/m² (= mm of water).
    pub precipitable_water: Option<f64>,
    /// Lowest level where temperature crosses 0 °C.
    pub freezing_level: Option<LevelAt>,
    /// Lowest level where the wet-bulb temperature crosses 0 °C.
    pub wet_bulb_zero: Option<LevelAt>,
    /// Fall of temperature with height, K/m: from the lowest level to 3 km above it.
    pub lapse_rate_to_3km: Option<f64>,
    /// From 3 to 6 km above the lowest level, K/m.
    pub lapse_rate_3_to_6km: Option<f64>,
    /// From 850 to 500 hPa, K/m.
    pub lapse_rate_850_to_500hpa: Option<f64>,
    /// From 700 to 500 hPa, K/m.
    pub lapse_rate_700_to_500hpa: Option<f64>,
    /// Mean relative humidity over water of the lowest 100 hPa, 1 = saturated.
    pub humidity_lowest_100hpa: Option<f64>,
    /// From 700 to 500 hPa.
    pub humidity_700_to_500hpa: Option<f64>,
    /// Top of the mixed layer by the parcel method.
    pub mixed_layer_by_parcel: Option<LevelAt>,
    /// Top of the mixed layer by the bulk Richardson number.
    pub mixed_layer_by_richardson: Option<LevelAt>,
}

/// The effective inflow layer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InflowLayer {
    /// Its base.
    pub bottom: LevelAt,
    /// Its top.
    pub top: LevelAt,
}

/// Downdraft CAPE and where the air comes from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Downdraft {
    /// Energy from the origin down to the lowest level, J/kg, >= 0.
    pub cape: f64,
    /// Centre of the layer of least mean theta-e.
    pub origin: Pressure,
    /// Its wet-bulb temperature, from which the air descends.
    pub wet_bulb: Temperature,
}

impl LayerNumbers {
    /// Of an environment; the wind is needed for the bulk Richardson number only.
    pub fn of(_environment: &Environment, _winds: Option<&WindProfile>) -> Self {
        Self::default()
    }
}
