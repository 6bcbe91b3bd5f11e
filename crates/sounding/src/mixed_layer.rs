//! The mixed layer over the surface.

use crate::Profile;
use dewbound_thermo::{KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, potential_temperature};

/// The mixed layer ends where theta exceeds the surface value by this (K). Common practice, no source.
pub const MIXED_LAYER_EXCESS: f64 = 1.0;
/// A mixed layer shallower than this is not taken for one. Common practice, no source.
pub const MIXED_LAYER_LEAST_DEPTH: Pressure = Pressure::from_hpa(30.0);

impl Profile {
    /// Top of the mixed layer: first level where theta exceeds the surface value by 1 K, placed between two levels by theta linear in
    /// ln p. `None` without a surface temperature or when no level exceeds it.
    pub fn mixed_top(&self) -> Option<Pressure> {
        let surface = self.surface?;
        let temperature = (*self.temperature.get(surface)?)?;
        self.mixed_top_of(Temperature::from_k(temperature))
    }

    /// The same for a surface of this temperature.
    pub(crate) fn mixed_top_of(&self, surface_temperature: Temperature) -> Option<Pressure> {
        let surface = self.surface?;
        let p_surface = *self.pressure.get(surface)?;
        let theta = potential_temperature(Pressure::from_pa(p_surface), surface_temperature).k();
        self.first_above(surface, theta, theta + MIXED_LAYER_EXCESS)
    }

    /// Pressure where theta first exceeds `limit` above the row `from`, whose theta is `theta_from`.
    pub(crate) fn first_above(&self, from: usize, theta_from: f64, limit: f64) -> Option<Pressure> {
        let mut below = (*self.pressure.get(from)?, theta_from);
        for (&pressure, &temperature) in self.pressure.iter().zip(&self.temperature).skip(from + 1)
        {
            let Some(temperature) = temperature else {
                continue;
            };
            let theta = temperature * (REFERENCE_PRESSURE / pressure).powf(KAPPA);
            if theta > limit {
                let share = ((limit - below.1) / (theta - below.1)).clamp(0.0, 1.0);
                let ln_p = below.0.ln() + share * (pressure / below.0).ln();
                return Some(Pressure::from_pa(ln_p.exp()));
            }
            below = (pressure, theta);
        }
        None
    }
}
