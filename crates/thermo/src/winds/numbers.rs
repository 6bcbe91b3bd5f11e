//! Numbers read from the wind profile.

use super::{Vector, WindProfile};
use crate::InflowLayer;

/// Which storm motion helicity is measured against.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub enum Motion {
    /// The one to the right of the mean wind: the usual one north of the equator.
    #[default]
    Right,
    /// The one to the left of the mean wind: the usual one south of the equator.
    Left,
    /// One the user has set.
    Set(Vector),
}

/// Motions of supercells by the internal-dynamics method.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StormMotion {
    /// To the right of the mean wind.
    pub right: Vector,
    /// To the left of the mean wind.
    pub left: Vector,
    /// The mean wind they deviate from.
    pub mean: Vector,
}

/// What the effective layer's wind numbers need of the rest of the profile. Heights are above the ground, m.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct EffectiveLayer {
    /// The effective inflow layer.
    pub inflow: Option<InflowLayer>,
    /// Height of the most unstable parcel's equilibrium level, m.
    pub el_height: Option<f64>,
}

/// Numbers read from the wind profile. Absent (`None`) where the wind doesn't reach that high or that low.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct WindNumbers {
    /// Mean wind 0-6 km, by height.
    pub mean_0_to_6km: Option<Vector>,
    /// Mean wind 0-6 km, by pressure (mass).
    pub mean_0_to_6km_by_pressure: Option<Vector>,
    /// Wind at 1 km minus wind at the ground.
    pub difference_0_to_1km: Option<Vector>,
    /// At 3 km minus at the ground.
    pub difference_0_to_3km: Option<Vector>,
    /// At 6 km minus at the ground.
    pub difference_0_to_6km: Option<Vector>,
    /// At half the height of the most unstable EL minus at the base of the effective inflow layer.
    pub difference_effective: Option<Vector>,
    /// Storm motion from fixed layers (Bunkers et al. 2000).
    pub motion: Option<StormMotion>,
    /// Storm motion from the effective layer (Bunkers et al. 2014).
    pub motion_effective: Option<StormMotion>,
    /// The motion helicity is measured against.
    pub motion_used: Option<Vector>,
    /// Storm-relative helicity 0-1 km, m²/s².
    pub helicity_0_to_1km: Option<f64>,
    /// Storm-relative helicity 0-3 km, m²/s².
    pub helicity_0_to_3km: Option<f64>,
    /// Storm-relative helicity of the effective inflow layer, m²/s².
    pub helicity_effective: Option<f64>,
    /// Angle between the storm-relative wind at the ground and the wind difference of the lowest 500 m, degrees, 0..180.
    pub critical_angle: Option<f64>,
}

impl WindNumbers {
    /// Of a wind profile.
    pub fn of(_winds: &WindProfile, _layer: EffectiveLayer, _motion: Motion) -> Self {
        Self::default()
    }
}
