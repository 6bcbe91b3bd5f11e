//! Moist thermodynamics on plain slices: formulas, adiabats, parcels, CAPE and CIN.
//!
//! Everything is SI inside: Pa, K, kg/kg, J/kg. The conventions of every number are fixed here once and are the
//! same wherever the number is shown.
//!
//! Deliberately absent: files, stations, times, heights above a station, and any opinion on whether a value is
//! to be believed. Those live in the crates above.

mod air;
mod constants;
mod environment;
mod lift;
mod units;

pub use air::*;
pub use constants::*;
pub use environment::*;
pub use lift::*;
pub use units::*;
