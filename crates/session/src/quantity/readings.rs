//! What the declared numbers are read from, and what is lacking where one is absent.

use crate::sounding::{Further, Numbers, OtherAscents, Parcel};
use crate::thermo::Ascent;

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
    /// Winds of known height and an effective inflow layer.
    WindAndInflow,
    /// Other kinds of ascent, which are computed only when asked for.
    OtherAscents,
}

const NO_FREE_CONVECTION: &str = "no free convection: nowhere above its condensation level is the parcel lighter than its surroundings";
const STILL_BUOYANT: &str =
    "the parcel is still lighter than its surroundings where the profile ends";
const NO_WIND: &str = "fewer than two winds of known height";
const NO_INFLOW: &str = "no effective inflow layer: no level has enough CAPE with little CIN";

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
            Self::WindAndInflow => wind().or_else(without_environment).or_else(inflow),
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
