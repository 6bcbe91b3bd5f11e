//! Numbers read from the wind profile.

use super::motion::NO_DIRECTION;
use super::{StormMotion, Vector, WindProfile};
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

/// What the effective layer's wind numbers need of the rest of the profile. Heights are above the ground, m.
///
/// They come from the hypsometric equation, the heights of the winds as a rule from the report: at 5 km the two differ by a few
/// metres in fine data, by up to 20 m where a report holds few levels.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct EffectiveLayer {
    /// The effective inflow layer.
    pub inflow: Option<InflowLayer>,
    /// Height of the most unstable parcel's equilibrium level, m.
    pub el_height: Option<f64>,
}

impl EffectiveLayer {
    /// The lower half of the storm's depth, which reaches from the base of the inflow layer to the equilibrium level of the most
    /// unstable parcel (Thompson et al. 2007, Wea. Forecasting 22, 102-115): both ends, m above the ground.
    ///
    /// The middle lies halfway between the base and the equilibrium level. That is half the height of the equilibrium level
    /// above the ground only when the base is at the ground.
    pub fn lower_half_of_storm(&self) -> Option<(f64, f64)> {
        let base = self.inflow?.bottom.height;
        let el = self.el_height?;
        (base < el).then_some((base, base + 0.5 * (el - base)))
    }
}

/// Numbers read from the wind profile. Absent (`None`) where the wind doesn't reach that high or that low.
///
/// Heights are above the ground, and the wind at the ground is [`WindProfile::at_ground`].
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
    /// Effective bulk wind difference (Thompson et al. 2007): over [`EffectiveLayer::lower_half_of_storm`].
    pub difference_effective: Option<Vector>,
    /// Storm motion from fixed layers (Bunkers et al. 2000).
    pub motion: Option<StormMotion>,
    /// Storm motion from the effective layer (Bunkers et al. 2014).
    pub motion_effective: Option<StormMotion>,
    /// The motion helicity is measured against: the one set, else that of the fixed layers to the chosen side, which no doubt of
    /// moisture touches.
    pub motion_used: Option<Vector>,
    /// Storm-relative helicity 0-1 km, m²/s².
    pub helicity_0_to_1km: Option<f64>,
    /// Storm-relative helicity 0-3 km, m²/s².
    pub helicity_0_to_3km: Option<f64>,
    /// Storm-relative helicity of the effective inflow layer, m²/s².
    pub helicity_effective: Option<f64>,
    /// Critical angle (Esterheld & Giuliano 2008, Electronic J. Severe Storms Meteor. 3 (2), 1-24; from memory): between the
    /// storm-relative wind at the ground and the wind difference of the lowest 500 m, degrees, 0..180. At 90 the vorticity
    /// there is streamwise (or, of the other sign, antistreamwise). Absent where one of the two has no direction (shorter than 1e-6 m/s).
    pub critical_angle: Option<f64>,
}

impl WindNumbers {
    /// Of a wind profile.
    pub fn of(winds: &WindProfile, layer: EffectiveLayer, motion: Motion) -> Self {
        let numbers = Self::of_fixed_layers(winds);
        let used = numbers.chosen(motion);
        numbers.against(winds, used).with_effective(winds, layer)
    }

    /// The same as [`WindNumbers::of`], when `previous` is of the same wind profile, whatever its layer and motion were: what
    /// can't have changed is taken from there.
    pub fn next(
        winds: &WindProfile,
        layer: EffectiveLayer,
        motion: Motion,
        previous: &Self,
    ) -> Self {
        let mut numbers = *previous;
        let used = numbers.chosen(motion);
        if used != numbers.motion_used {
            numbers = numbers.against(winds, used);
        }
        numbers.with_effective(winds, layer)
    }

    /// What depends on the winds alone.
    fn of_fixed_layers(winds: &WindProfile) -> Self {
        Self {
            mean_0_to_6km: winds.mean_by_height(0.0, 6000.0),
            mean_0_to_6km_by_pressure: winds.mean_by_pressure(0.0, 6000.0),
            difference_0_to_1km: winds.difference(0.0, 1000.0),
            difference_0_to_3km: winds.difference(0.0, 3000.0),
            difference_0_to_6km: winds.difference(0.0, 6000.0),
            motion: StormMotion::of_fixed_layers(winds),
            ..Self::default()
        }
    }

    /// The motion to be used.
    fn chosen(&self, motion: Motion) -> Option<Vector> {
        match motion {
            Motion::Right => self.motion.map(|motion| motion.right),
            Motion::Left => self.motion.map(|motion| motion.left),
            Motion::Set(motion) => Some(motion),
        }
        .filter(|motion| motion.u.is_finite() && motion.v.is_finite())
    }

    /// What depends on the winds and the motion.
    fn against(self, winds: &WindProfile, motion: Option<Vector>) -> Self {
        let helicity = |top| winds.helicity(0.0, top, motion?);
        Self {
            motion_used: motion,
            helicity_0_to_1km: helicity(1000.0),
            helicity_0_to_3km: helicity(3000.0),
            critical_angle: motion.and_then(|motion| critical_angle(winds, motion)),
            ..self
        }
    }

    /// What depends on the effective layer too.
    fn with_effective(self, winds: &WindProfile, layer: EffectiveLayer) -> Self {
        let helicity = || {
            let inflow = layer.inflow?;
            winds.helicity(inflow.bottom.height, inflow.top.height, self.motion_used?)
        };
        Self {
            difference_effective: layer
                .lower_half_of_storm()
                .and_then(|(bottom, top)| winds.difference(bottom, top)),
            motion_effective: StormMotion::of_effective_layer(winds, layer),
            helicity_effective: helicity(),
            ..self
        }
    }
}

fn critical_angle(winds: &WindProfile, motion: Vector) -> Option<f64> {
    let inflow = winds.at_ground()? - motion;
    let shear = winds.difference(0.0, 500.0)?;
    if inflow.speed() < NO_DIRECTION || shear.speed() < NO_DIRECTION {
        return None;
    }
    let angle = inflow.cross(shear).abs().atan2(inflow.dot(shear));
    Some(angle.to_degrees()).filter(|angle| angle.is_finite())
}
