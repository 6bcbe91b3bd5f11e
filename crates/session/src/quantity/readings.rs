//! What the declared numbers are read from, and what is lacking where one is absent.

use crate::sounding::{Further, Numbers, OtherAscents, Parcel};
use crate::thermo::{Ascent, EffectiveLayer, WindProfile};
use crate::wording::number;

/// Everything computed of one profile.
#[derive(Debug, Clone, Copy)]
pub struct Readings<'a> {
    /// The three parcels.
    pub numbers: &'a Numbers,
    /// Further numbers.
    pub further: &'a Further,
    /// Other kinds of ascent; `None`: not computed.
    pub other: Option<&'a OtherAscents>,
}

impl Readings<'_> {
    pub(super) fn ascent(&self, parcel: Parcel) -> Option<&Ascent> {
        self.numbers.parcel(parcel)
    }

    /// CAPE of a parcel is a lower limit.
    pub(super) fn at_least(&self, parcel: Parcel) -> bool {
        self.ascent(parcel).is_some_and(|ascent| ascent.at_least)
    }
}

/// Place of a parcel in arrays ordered as [`Parcel::ALL`].
pub(super) fn index(parcel: Parcel) -> usize {
    match parcel {
        Parcel::Surface => 0,
        Parcel::Mixed => 1,
        Parcel::MostUnstable => 2,
    }
}

/// What a number needs before anything else, so that its absence can be explained by what is lacking in this very profile.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Needs {
    /// A parcel.
    Parcel,
    /// A parcel that comes to be lighter than its surroundings.
    FreeConvection,
    /// A parcel that is no longer so where the profile ends.
    EquilibriumLevel,
    /// A profile with temperature and humidity at its foot.
    Environment,
    /// An effective inflow layer.
    Inflow,
    /// Winds of known height.
    Wind,
    /// Winds from the ground to this height, m.
    WindTo(u32),
    /// A storm motion from fixed layers.
    FixedMotion,
    /// A storm motion, the user's or that of fixed layers.
    Motion,
    /// A storm motion, and winds from the ground to this height, m.
    MotionAndWindTo(u32),
    /// A storm motion, and winds through the effective inflow layer.
    MotionAndInflow,
    /// Winds of known height, an effective inflow layer and the equilibrium level of the most unstable parcel.
    WindInflowAndEl,
    /// The same, and winds through the lower half of the storm's depth.
    LowerHalfOfStorm,
    /// Other kinds of ascent, which are computed only when asked for.
    OtherAscents,
}

const NO_FREE_CONVECTION: &str = "no free convection: nowhere above its condensation level is the parcel lighter than its surroundings";
const STILL_BUOYANT: &str =
    "the parcel is still lighter than its surroundings where the profile ends";
const NO_WIND: &str = "fewer than two winds of known height";
const NO_INFLOW: &str = "no effective inflow layer: no level has enough CAPE with little CIN";
const NO_EL: &str = "the most unstable parcel has no known EL";
const UNCHANGED: &str = "no shear from 0–500 m to 5.5–6 km";

/// What of the wind is lacking between two heights, m above the ground; `None`: nothing that can be told.
fn out_of_reach(profile: &WindProfile, from: f64, to: f64) -> Option<String> {
    let (first, last) = (profile.levels().first()?, profile.levels().last()?);
    if profile.at(from).is_none() && first.height > from {
        return Some(format!("the lowest wind is at {}", height(first.height)));
    }
    (last.height < to).then(|| {
        // Tenths of a kilometre could make it as high as is needed.
        let hidden = (last.height / 100.0).round() * 100.0 >= to;
        let end = if hidden {
            metres(last.height)
        } else {
            height(last.height)
        };
        format!("the wind ends at {end}")
    })
}

/// "4.2 km", below 1 km "450 m".
fn height(above_ground: f64) -> String {
    if above_ground < 1000.0 {
        metres(above_ground)
    } else {
        format!("{} km", number(above_ground / 1000.0, 1))
    }
}

fn metres(above_ground: f64) -> String {
    format!("{} m", number(above_ground, 0))
}

impl Needs {
    /// What is lacking of it; `None`: nothing.
    pub(super) fn lacking(self, readings: &Readings, parcel: Parcel) -> Option<String> {
        let without_environment = || {
            let problem = readings.numbers.problem.as_ref()?;
            Some(format!("no parcel: {problem}"))
        };
        let no_parcel = || {
            if readings.ascent(parcel).is_some() {
                return None;
            }
            let text = match parcel {
                Parcel::Surface => "no parcel: the surface has no temperature or no dew point",
                _ => "no parcel can be formed from this profile",
            };
            Some(text.to_owned())
        };
        let inflow = || {
            let none = readings.further.layers.inflow.is_none();
            none.then(|| NO_INFLOW.to_owned())
        };
        let wind = || {
            let none = readings.further.wind_profile.is_none();
            none.then(|| NO_WIND.to_owned())
        };
        let reach = |from: f64, to: f64| {
            let profile = readings.further.wind_profile.as_deref()?;
            out_of_reach(profile, from, to)
        };
        let fixed_motion = || {
            reach(0.0, 6000.0).or_else(|| {
                let none = readings.further.winds.motion.is_none();
                none.then(|| UNCHANGED.to_owned())
            })
        };
        let motion = || {
            if readings.further.winds.motion_used.is_some() {
                return None;
            }
            fixed_motion().map(|why| format!("no storm motion: {why}"))
        };
        let layer = || EffectiveLayer {
            inflow: readings.further.layers.inflow,
            el_height: readings
                .further
                .parcels
                .get(index(Parcel::MostUnstable))
                .and_then(|parcel| parcel.as_ref()?.el_height),
        };
        let inflow_and_el = || {
            wind()
                .or_else(without_environment)
                .or_else(inflow)
                .or_else(|| {
                    let none = layer().el_height.is_none();
                    none.then(|| NO_EL.to_owned())
                })
        };
        let buoyancy = || {
            let ascent = readings.ascent(parcel)?;
            let none = ascent.buoyant.is_empty();
            none.then(|| NO_FREE_CONVECTION.to_owned())
        };
        let top = || {
            let ascent = readings.ascent(parcel)?;
            let none = ascent.el.is_none();
            none.then(|| STILL_BUOYANT.to_owned())
        };
        match self {
            Self::Environment => without_environment(),
            Self::Inflow => without_environment().or_else(inflow),
            Self::Wind => wind(),
            Self::WindTo(top) => wind().or_else(|| reach(0.0, f64::from(top))),
            Self::FixedMotion => wind().or_else(fixed_motion),
            Self::Motion => wind().or_else(motion),
            Self::MotionAndWindTo(top) => wind()
                .or_else(motion)
                .or_else(|| reach(0.0, f64::from(top))),
            Self::MotionAndInflow => wind()
                .or_else(without_environment)
                .or_else(inflow)
                .or_else(motion)
                .or_else(|| {
                    let inflow = readings.further.layers.inflow?;
                    reach(inflow.bottom.height, inflow.top.height)
                }),
            Self::WindInflowAndEl => inflow_and_el(),
            Self::LowerHalfOfStorm => inflow_and_el().or_else(|| {
                let (bottom, top) = layer().lower_half_of_storm()?;
                reach(bottom, top)
            }),
            Self::Parcel => without_environment().or_else(no_parcel),
            Self::FreeConvection => without_environment().or_else(no_parcel).or_else(buoyancy),
            Self::EquilibriumLevel => without_environment()
                .or_else(no_parcel)
                .or_else(buoyancy)
                .or_else(top),
            Self::OtherAscents => without_environment().or_else(no_parcel).or_else(|| {
                let none = readings.other.is_none();
                none.then(|| "not computed yet".to_owned())
            }),
        }
    }
}
