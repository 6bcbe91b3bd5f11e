//! The three parcels of a profile.

use crate::Profile;
use dewbound_thermo::{Ascent, EnvironmentError, HumidityKnown, Pressure};

/// Which of the three parcels.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Parcel {
    /// From the surface level.
    Surface,
    /// Mean of the lowest 100 hPa.
    Mixed,
    /// Largest theta-e in the lowest 300 hPa.
    MostUnstable,
}

impl Parcel {
    /// All three, in the order shown.
    pub const ALL: [Self; 3] = [Self::Surface, Self::Mixed, Self::MostUnstable];
}

/// The three parcels of one profile, and what limits them.
#[derive(Debug, Clone, PartialEq)]
pub struct Numbers {
    /// Surface parcel; `None` until the surface has temperature and dew point.
    pub surface: Option<Ascent>,
    /// Mixed parcel.
    pub mixed: Option<Ascent>,
    /// Most unstable parcel.
    pub most_unstable: Option<Ascent>,
    /// Row of the profile the most unstable parcel starts at.
    pub most_unstable_row: Option<usize>,
    /// The most unstable parcel is the surface parcel.
    pub most_unstable_is_surface: bool,
    /// What is known of the humidity.
    pub humidity: Option<HumidityKnown>,
    /// CAPE with relative humidity held above the last known dew point, per parcel (order of [`Parcel::ALL`]); present when that
    /// point is below 500 hPa (at a higher pressure).
    pub cape_humidity_held: Option<[Option<f64>; 3]>,
    /// Where the other parcels start when the surface is unusable.
    pub starts_at: Option<Pressure>,
    /// Why there are no numbers at all.
    pub problem: Option<EnvironmentError>,
}

impl Numbers {
    /// Computes all three.
    pub fn of(_profile: &Profile) -> Self {
        todo!()
    }

    /// One of the three.
    pub fn parcel(&self, parcel: Parcel) -> Option<&Ascent> {
        match parcel {
            Parcel::Surface => self.surface.as_ref(),
            Parcel::Mixed => self.mixed.as_ref(),
            Parcel::MostUnstable => self.most_unstable.as_ref(),
        }
    }
}
