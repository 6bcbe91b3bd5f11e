//! What else is computed of a profile, beyond the three parcels: computed once for what is shown, not for every sample of a
//! response.

use crate::wind_profile::wind_profile;
use crate::{Numbers, Parcel, Profile};
use dewbound_thermo::{
    Buoyancy, Composites, Condensate, EffectiveLayer, LayerNumbers, Lifted, Method, Motion,
    ParcelNumbers, Process, WindNumbers, WindProfile, lift,
};
use std::sync::Arc;

/// Numbers beyond the three parcels'.
///
/// Heights are above the lowest level of the environment, which is the surface unless that lacks temperature or humidity; the
/// wind's heights are above the same level.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Further {
    /// Of each parcel, in the order of [`Parcel::ALL`]; `None` where there is no parcel.
    pub parcels: [Option<ParcelNumbers>; 3],
    /// Of the whole profile; all absent without an environment.
    pub layers: LayerNumbers,
    /// Wind against height; `None` with fewer than two winds of known height.
    pub wind_profile: Option<Arc<WindProfile>>,
    /// Read from the wind.
    pub winds: WindNumbers,
    /// Composite indices.
    pub composites: Composites,
}

impl Further {
    /// Of a working profile and its numbers. `received` is the profile as received: winds and their heights are its own, whatever is
    /// done to temperature and humidity.
    pub fn of(received: &Profile, working: &Profile, numbers: &Numbers, motion: Motion) -> Self {
        let wind_profile = wind_profile(received, working).map(Arc::new);
        let environment = working.environment().ok();
        let parcels = Parcel::ALL.map(|which| {
            let environment = environment.as_ref()?;
            let start = numbers.parcel(which)?.start;
            let lifted = Lifted::of(environment, start, Method::default())?;
            Some(ParcelNumbers::of(environment, &lifted))
        });
        let layers = environment
            .as_ref()
            .map_or_else(LayerNumbers::default, |environment| {
                LayerNumbers::of(environment, wind_profile.as_deref())
            });
        let effective = EffectiveLayer {
            inflow: layers.inflow,
            el_height: parcels[2].and_then(|parcel| parcel.el_height),
        };
        let winds = wind_profile
            .as_deref()
            .map_or_else(WindNumbers::default, |profile| {
                WindNumbers::of(profile, effective, motion)
            });
        Self {
            parcels,
            layers,
            wind_profile,
            winds,
            composites: Composites::default(),
        }
    }
}

/// CAPE of the three parcels by other kinds of ascent, J/kg, in the order of [`Parcel::ALL`].
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct OtherAscents {
    /// The pseudo-adiabatic lapse rate integrated.
    pub direct: [Option<f64>; 3],
    /// Condensate kept, its weight counted.
    pub reversible: [Option<f64>; 3],
    /// The default process, without the virtual-temperature correction.
    pub without_virtual: [Option<f64>; 3],
    /// The pseudo-adiabatic lapse rate integrated, with ice.
    pub direct_with_ice: [Option<f64>; 3],
    /// Condensate kept, with ice.
    pub reversible_with_ice: [Option<f64>; 3],
}

impl OtherAscents {
    /// Of a profile. Each takes as long as the default ascent or longer: not for every frame of a drag.
    pub fn of(profile: &Profile, numbers: &Numbers) -> Self {
        let Ok(environment) = profile.environment() else {
            return Self::default();
        };
        let cape = |method: Method| {
            Parcel::ALL.map(|which| {
                let start = numbers.parcel(which)?.start;
                lift(&environment, start, method).map(|ascent| ascent.cape)
            })
        };
        Self {
            direct: cape(Method::of(Process::Direct(Condensate::Water))),
            reversible: cape(Method::of(Process::Reversible(Condensate::Water))),
            without_virtual: cape(Method {
                buoyancy: Buoyancy::Temperature,
                ..Method::default()
            }),
            direct_with_ice: cape(Method::of(Process::Direct(Condensate::WaterAndIce))),
            reversible_with_ice: cape(Method::of(Process::Reversible(Condensate::WaterAndIce))),
        }
    }
}
