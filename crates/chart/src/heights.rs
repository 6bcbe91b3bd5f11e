//! Heights of a sounding against pressure.

use dewbound_sounding::{Profile, thermo::Pressure};

/// Height above sea level against pressure, and where the ground is. Made once per sounding.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct HeightScale {
    /// ln p (Pa), falling.
    log_pressure: Vec<f64>,
    /// m above mean sea level, rising.
    height: Vec<f64>,
    /// Ground above mean sea level, m.
    ground: Option<f64>,
}

impl HeightScale {
    /// From a profile (best the received one: heights hardly change with an edit).
    pub fn of(_profile: &Profile) -> Self {
        Self::default()
    }

    /// Height above mean sea level at a pressure inside the profile, m.
    pub fn above_sea(&self, _pressure: Pressure) -> Option<f64> {
        None
    }

    /// Height above the surface level at a pressure inside the profile, m.
    pub fn above_ground(&self, _pressure: Pressure) -> Option<f64> {
        None
    }

    /// Pressure at a height above mean sea level inside the profile.
    pub fn pressure_at(&self, _height: f64) -> Option<Pressure> {
        None
    }
}
