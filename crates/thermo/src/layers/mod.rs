//! Numbers of a whole profile and of an ascent through it, beyond CAPE and CIN.
//!
//! Heights are geopotential heights above the lowest level of the environment, from the hypsometric equation.

mod bounds;
mod convective;
mod downdraft;
mod freezing;
mod grid;
mod growth_zone;
mod humidity;
mod inflow;
mod judge;
mod lapse;
mod mixed_layer;
mod of_parcel;
mod of_profile;
mod theta_e;
mod walk;

pub use convective::*;
pub use downdraft::*;
pub use inflow::*;
pub use of_parcel::*;
pub use of_profile::*;

use crate::{Environment, Pressure};

/// A level of the profile found by a condition on it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LevelAt {
    /// Pressure there.
    pub pressure: Pressure,
    /// Geopotential height above the lowest level, m.
    pub height: f64,
}

impl LevelAt {
    /// The level at a pressure; `None` outside the profile.
    pub fn of(environment: &Environment, pressure: Pressure) -> Option<Self> {
        let height = environment.height_above_bottom(pressure)?;
        Some(Self { pressure, height })
    }

    /// The level at z = -ln p inside the profile.
    fn at_z(environment: &Environment, z: f64) -> Option<Self> {
        Self::of(environment, pressure_at(environment, z))
    }
}

/// Pressure at z = -ln p; never outside the profile, and that of a level where z is one's own.
fn pressure_at(environment: &Environment, z: f64) -> Pressure {
    let (pressures, levels) = (environment.pressure(), environment.levels());
    let level = levels.z.partition_point(|&level| level < z);
    match (levels.z.get(level), pressures.get(level)) {
        (Some(&own), Some(&p)) if own == z => Pressure::from_pa(p),
        _ => {
            let (bottom, top) = (environment.bottom().pressure.pa(), environment.top().pa());
            Pressure::from_pa((-z).exp().min(bottom).max(top))
        }
    }
}
