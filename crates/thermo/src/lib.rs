//! Moist thermodynamics on plain slices: formulas, adiabats, parcels, CAPE and CIN.
//!
//! Everything is SI inside: Pa, K, kg/kg, J/kg. The conventions of every number are fixed here once and are the
//! same wherever the number is shown.
//!
//! - One point of air: [`Air`] and what follows from it; saturation and dew point as functions.
//! - The air a parcel rises through: [`Environment`], linear in ln p between levels.
//! - A parcel: from any [`Air`], from [`Environment::bottom`], [`mixed_start`] or [`most_unstable_start`].
//! - What becomes of it: [`lift`], an [`Ascent`]; [`parcel_path`] for drawing.
//!
//! Absent is `None`: no free convection has no LFC, and no CIN. A number that is only a lower limit says so.
//!
//! Deliberately absent: files, stations, times, heights above a station, and any opinion on whether a value is
//! to be believed. Those live in the crates above.
//!
//! ```
//! use dewbound_thermo::*;
//!
//! // Pressure (Pa), temperature (K), dew point (K; `None` = missing).
//! let environment = Environment::new(
//!     &[100_000.0, 85_000.0, 70_000.0, 50_000.0, 30_000.0, 20_000.0, 10_000.0],
//!     &[303.0, 291.0, 283.0, 263.0, 233.0, 218.0, 213.0],
//!     &[Some(294.0), Some(287.0), Some(268.0), Some(243.0), Some(218.0), None, None],
//! )?;
//! let ascent = lift(&environment, environment.bottom(), Method::default()).expect("starts inside");
//! assert!(ascent.cape > 1000.0 && !ascent.at_least);
//! assert!(ascent.lfc < Some(ascent.lcl.pressure) && ascent.el < ascent.lfc);
//! // Two levels have no dew point: counted as dry, and said.
//! assert_eq!(environment.humidity().dry, 2);
//! # Ok::<(), EnvironmentError>(())
//! ```
#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod adiabats;
mod air;
mod bare;
mod column;
mod condensate;
mod constants;
mod elementary;
mod environment;
mod exact;
mod lapse;
mod lapse_path;
mod layers;
mod lift;
mod method;
mod numeric;
mod parcels;
mod path;
mod pseudoadiabat;
mod saturation;
mod scan;
mod thickness;
mod units;
mod wet_bulb;
mod winds;

pub use air::*;
pub use constants::*;
pub use environment::*;
pub use exact::lift_exactly;
pub use layers::*;
pub use lift::*;
pub use method::*;
pub use parcels::*;
pub use pseudoadiabat::temperature_on_pseudoadiabat;
pub use saturation::{
    dewpoint_from_mixing_ratio, dewpoint_from_relative_humidity, dewpoint_from_vapour_pressure,
    saturation_mixing_ratio, saturation_vapour_pressure, saturation_vapour_pressure_over_ice,
};
pub use thickness::*;
pub use units::*;
pub use wet_bulb::*;
pub use winds::*;
