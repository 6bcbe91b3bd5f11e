//! Moist thermodynamics on plain slices: formulas, adiabats, parcels, CAPE and CIN.
//!
//! Everything is SI inside: Pa, K, kg/kg, J/kg. The conventions of every number are fixed here once and are the
//! same wherever the number is shown.
//!
//! Deliberately absent: files, stations, times, heights above a station, and any opinion on whether a value is
//! to be believed. Those live in the crates above.
#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod air;
mod column;
mod constants;
mod elementary;
mod environment;
mod exact;
mod lift;
mod numeric;
mod parcels;
mod path;
mod pseudoadiabat;
mod saturation;
mod scan;
mod thickness;
mod units;

pub use air::*;
pub use constants::*;
pub use environment::*;
pub use exact::lift_exactly;
pub use lift::*;
pub use parcels::*;
pub use pseudoadiabat::temperature_on_pseudoadiabat;
pub use saturation::{
    dewpoint_from_mixing_ratio, dewpoint_from_relative_humidity, dewpoint_from_vapour_pressure,
    saturation_mixing_ratio, saturation_vapour_pressure, saturation_vapour_pressure_over_ice,
};
pub use thickness::*;
pub use units::*;
