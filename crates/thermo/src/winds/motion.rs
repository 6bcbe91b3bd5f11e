//! Storm motion from the wind profile.

use super::{EffectiveLayer, Vector, WindProfile};

/// How far a supercell deviates from the mean wind, m/s (Bunkers et al. 2000).
const DEVIATION: f64 = 7.5;
/// Depth of the layers whose means make the shear vector, m (Bunkers et al. 2000).
const END: f64 = 500.0;
/// Top of the fixed layer, m (Bunkers et al. 2000).
const TOP: f64 = 6000.0;
/// Share of the height of the equilibrium level up to which the mean of the effective form goes (Bunkers et al. 2014).
const SHARE_OF_EL: f64 = 0.65;
/// A wind difference below this (m/s) has no direction to go by: it is rounding.
pub(super) const NO_DIRECTION: f64 = 1e-6;

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

impl StormMotion {
    /// From fixed layers: Bunkers et al. (2000, Wea. Forecasting 15, 61-79).
    ///
    /// The mean wind of 0-6 km by height, not by pressure, plus and minus 7.5 m/s at a right angle to the vector from the mean wind
    /// of 0-500 m to that of 5.5-6 km. `None` where the profile doesn't reach from the ground to 6 km, and where that
    /// vector has no direction (shorter than 1e-6 m/s).
    pub fn of_fixed_layers(winds: &WindProfile) -> Option<Self> {
        let mean = winds.mean_by_height(0.0, TOP)?;
        let low = winds.mean_by_height(0.0, END)?;
        let high = winds.mean_by_height(TOP - END, TOP)?;
        Self::deviating(mean, high - low)
    }

    /// From the effective layer: Bunkers et al. (2014, J. Operational Meteor. 2, 129-145), from memory.
    ///
    /// The mean wind by pressure from the base of the effective inflow layer to 65 % of the height of the most unstable
    /// parcel's equilibrium level, plus and minus 7.5 m/s at a right angle to the shear.
    ///
    /// Our choices, where memory of the paper isn't sure: both heights are above the ground (not above the base); the
    /// shear vector goes from the mean wind, by height, of the lowest 500 m of that layer to that of its highest 500 m, as
    /// the form of 2000 does with its own. `None` without the layer, where it is shallower than 1 km (the two would
    /// overlap), where the profile doesn't cover it, where pressure isn't known, and where the shear has no direction.
    pub fn of_effective_layer(winds: &WindProfile, layer: EffectiveLayer) -> Option<Self> {
        let bottom = layer.inflow?.bottom.height;
        let top = SHARE_OF_EL * layer.el_height?;
        if top - bottom < 2.0 * END {
            return None;
        }
        let mean = winds.mean_by_pressure(bottom, top)?;
        let low = winds.mean_by_height(bottom, bottom + END)?;
        let high = winds.mean_by_height(top - END, top)?;
        Self::deviating(mean, high - low)
    }

    fn deviating(mean: Vector, shear: Vector) -> Option<Self> {
        let speed = shear.speed();
        if speed < NO_DIRECTION {
            return None;
        }
        // Turned clockwise by a right angle.
        let deviation = Vector {
            u: shear.v,
            v: -shear.u,
        } * (DEVIATION / speed);
        Some(Self {
            right: mean + deviation,
            left: mean - deviation,
            mean,
        })
    }
}
