//! Numbers of a whole profile and of an ascent through it, beyond CAPE and CIN.
//!
//! Heights are geopotential heights above the lowest level of the environment, from the hypsometric equation.

mod of_parcel;
mod of_profile;

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
}
