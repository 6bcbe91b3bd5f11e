//! Numbers of a whole profile.

use super::LevelAt;
use super::downdraft::{Downdraft, downdraft};
use super::freezing::{freezing_level, wet_bulb_zero};
use super::humidity::{mean_of_lowest, precipitable_water};
use super::inflow::{InflowLayer, inflow_layer};
use super::lapse::lapse_rate;
use super::mixed_layer::{by_parcel, by_richardson};
use crate::winds::WindProfile;
use crate::{Environment, Pressure};

/// Numbers of a whole profile. Absent is `None`.
///
/// They belong to the interpolated profile: inserting interpolated levels changes none of them, but for the edges of the
/// inflow layer, which are levels where there are any.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct LayerNumbers {
    /// Effective inflow layer.
    pub inflow: Option<InflowLayer>,
    /// Downdraft CAPE.
    pub downdraft: Option<Downdraft>,
    /// Precipitable water over the lowest level, kg/m² (= mm of water): the integral of the mixing ratio over p, divided by
    /// g, up to the last known humidity (AMS Glossary; from memory). The mass of vapour itself, by specific humidity, is
    /// about 1 % less.
    pub precipitable_water: Option<f64>,
    /// Lowest level where temperature falls from above to 0 °C. Absent when the lowest level is already at or below.
    pub freezing_level: Option<LevelAt>,
    /// Lowest level where the wet-bulb temperature falls from above to 0 °C. Absent when it is at or below at the lowest
    /// level, and where humidity ends first.
    pub wet_bulb_zero: Option<LevelAt>,
    /// Fall of temperature with height, K/m, between the ends of the layer: from the lowest level to 3 km above it.
    pub lapse_rate_to_3km: Option<f64>,
    /// From 3 to 6 km above the lowest level, K/m.
    pub lapse_rate_3_to_6km: Option<f64>,
    /// From 850 to 500 hPa, K/m. Absent when either is outside the profile.
    pub lapse_rate_850_to_500hpa: Option<f64>,
    /// From 700 to 500 hPa, K/m.
    pub lapse_rate_700_to_500hpa: Option<f64>,
    /// Mean relative humidity over water of the lowest 100 hPa, 1 = saturated: its integral mean over p. Absent unless the
    /// humidity of the whole layer is known.
    pub humidity_lowest_100hpa: Option<f64>,
    /// From 700 to 500 hPa.
    pub humidity_700_to_500hpa: Option<f64>,
    /// Top of the mixed layer by the parcel method (Holzworth 1964; from memory): where virtual potential temperature first
    /// rises above that of the lowest level. Absent where it does so from the ground on.
    pub mixed_layer_by_parcel: Option<LevelAt>,
    /// Top of the mixed layer by the bulk Richardson number, critical value 0.25, the wind at the ground set to zero
    /// (Vogelezang & Holtslag 1996; Seidel et al. 2012; from memory). Absent without wind.
    pub mixed_layer_by_richardson: Option<LevelAt>,
}

impl LayerNumbers {
    /// Of an environment; the wind is needed for the bulk Richardson number only.
    pub fn of(environment: &Environment, winds: Option<&WindProfile>) -> Self {
        let [p850, p700, p500] = [850.0, 700.0, 500.0].map(Pressure::from_hpa);
        let bottom = environment.bottom().pressure;
        let [p3km, p6km] = [3_000.0, 6_000.0].map(|height| environment.pressure_at_height(height));
        let lapse_rate = |lower: Option<Pressure>, upper: Option<Pressure>| {
            lapse_rate(environment, lower?, upper?)
        };
        Self {
            inflow: inflow_layer(environment),
            downdraft: downdraft(environment),
            precipitable_water: precipitable_water(environment),
            freezing_level: freezing_level(environment),
            wet_bulb_zero: wet_bulb_zero(environment),
            lapse_rate_to_3km: lapse_rate(Some(bottom), p3km),
            lapse_rate_3_to_6km: lapse_rate(p3km, p6km),
            lapse_rate_850_to_500hpa: lapse_rate(Some(p850), Some(p500)),
            lapse_rate_700_to_500hpa: lapse_rate(Some(p700), Some(p500)),
            humidity_lowest_100hpa: mean_of_lowest(environment, Pressure::from_hpa(100.0)),
            humidity_700_to_500hpa: environment.mean_relative_humidity(p700, p500),
            mixed_layer_by_parcel: by_parcel(environment),
            mixed_layer_by_richardson: winds.and_then(|winds| by_richardson(environment, winds)),
        }
    }
}
