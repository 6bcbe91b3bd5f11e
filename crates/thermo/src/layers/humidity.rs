//! Water in the column, and how humid layers are.

use crate::{Environment, GRAVITY, Pressure};

/// Precipitable water, kg/m²: the integral of the **mixing ratio** over p, divided by g, from the lowest level to the last
/// known humidity (AMS Glossary; from memory). The specific humidity in its place would give the mass of vapour itself, less
/// by the share of vapour in the air: 1 % where the mixing ratio is 10 g/kg.
///
/// Found against fine quadrature: 1e-6 kg/m². `None` when only the lowest level has humidity.
pub(super) fn precipitable_water(environment: &Environment) -> Option<f64> {
    Some(environment.moisture_integral()? / GRAVITY)
}

/// Mean relative humidity of the lowest `depth`.
pub(super) fn mean_of_lowest(environment: &Environment, depth: Pressure) -> Option<f64> {
    let bottom = environment.bottom().pressure;
    let top = Pressure::from_pa(bottom.pa() - depth.pa());
    environment.mean_relative_humidity(bottom, top)
}
