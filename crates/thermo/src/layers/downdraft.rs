//! Downdraft CAPE: what evaporation could do to the driest-feeling air of the lowest 400 hPa.

use super::theta_e::Running;
use crate::environment::coordinate;
use crate::path::pseudoadiabat;
use crate::scan::runs;
use crate::{
    Buoyancy, Environment, GAS_CONSTANT_DRY, Pressure, Temperature, temperature_on_pseudoadiabat,
};

/// Depth that is searched, Pa.
const SEARCHED: f64 = 40_000.0;
/// Depth of the layer whose mean counts, Pa.
const LAYER: f64 = 10_000.0;
/// Spacing of the layers tried, Pa.
const SPACING: f64 = 500.0;

/// Downdraft CAPE and where the air comes from (after Gilmore & Wicker 1998, MWR 126, and Emanuel 1994; from memory).
///
/// - The layer: of all layers 100 hPa deep whose base is the lowest level's pressure less a multiple of 5 hPa, and
///   whose top is no more than 400 hPa above the lowest level, the one with the least integral mean over p of eq. 39
///   theta-e along the interpolated profile; of equals the lowest.
/// - The air: saturated, with that mean theta-e, at the layer's centre pressure: the wet bulb of the layer's mean air.
/// - The descent: saturated pseudo-adiabatic, of constant eq. 39 theta-e, to the lowest level. Virtual temperature on both
///   sides.
/// - The energy: Rd times the integral of (virtual temperature of the surroundings minus that of the air) over ln p, of
///   the stretches where the air is colder. **Stretches where it is warmer count for nothing**, as below the LCL of an
///   ascent; `warmer` holds them.
/// - Absent where the humidity is known through less than 400 hPa.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Downdraft {
    /// Energy from the origin down to the lowest level, J/kg, >= 0.
    pub cape: f64,
    /// What the stretches warmer than their surroundings would take from it, J/kg, <= 0.
    pub warmer: f64,
    /// Centre of the layer of least mean theta-e.
    pub origin: Pressure,
    /// That mean.
    pub theta_e: Temperature,
    /// Its wet-bulb temperature, from which the air descends.
    pub wet_bulb: Temperature,
}

pub(super) fn downdraft(environment: &Environment) -> Option<Downdraft> {
    let bottom = environment.bottom().pressure.pa();
    let (base, mean) = least_layer(environment, bottom)?;
    let origin = Pressure::from_pa(base - 0.5 * LAYER);
    let theta_e = Temperature::from_k(mean);
    let wet_bulb = temperature_on_pseudoadiabat(theta_e, origin);
    let (bottom, top) = (environment.z_range().0, coordinate(origin.pa()));
    // Read upward, the descent is the path of a parcel that is saturated from the lowest level on.
    let path = pseudoadiabat(mean.ln(), Buoyancy::Virtual, bottom, top);
    let (column, levels) = (environment.column(), environment.levels());
    let (mut colder, mut warmer) = (0.0, 0.0);
    for run in runs(&path, column, levels, bottom, top) {
        if run.positive {
            warmer += run.area;
        } else {
            colder -= run.area;
        }
    }
    Some(Downdraft {
        cape: GAS_CONSTANT_DRY * colder,
        warmer: -GAS_CONSTANT_DRY * warmer + 0.0,
        origin,
        theta_e,
        wet_bulb,
    })
}

/// Base (Pa) and mean theta-e (K) of the layer of least mean theta-e.
fn least_layer(environment: &Environment, bottom: f64) -> Option<(f64, f64)> {
    const COUNT: usize = ((SEARCHED - LAYER) / SPACING) as usize;
    const DEEP: usize = (LAYER / SPACING) as usize;
    let top = bottom - SEARCHED;
    let known = environment.pressure().get(environment.humid_levels() - 1)?;
    if *known > top {
        return None;
    }
    // Running integral at every multiple of the spacing.
    let mut at = [0.0; COUNT + DEEP + 1];
    let mut running = Running::new(environment);
    for (k, integral) in at.iter_mut().enumerate() {
        *integral = running.down_to(bottom - k as f64 * SPACING)?;
    }
    let mut least: Option<(f64, usize)> = None;
    for (k, (base, top)) in at.iter().zip(&at[DEEP..]).enumerate() {
        let mean = (top - base) * (1.0 / LAYER);
        // Less by more than rounding: of equals the lowest.
        if least.is_none_or(|(so_far, _)| mean < so_far - 1e-9 * so_far) {
            least = Some((mean, k));
        }
    }
    least.map(|(mean, k)| (bottom - k as f64 * SPACING, mean))
}
