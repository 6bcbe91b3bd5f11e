//! Moist thermodynamics and winds on plain slices: formulas, adiabats, parcels, CAPE and CIN, layer and wind numbers.
//!
//! Everything is SI inside: Pa, K, kg/kg, J/kg, m, m/s. The conventions of every number are fixed here once and are the
//! same wherever the number is shown.
//!
//! - One point of air: [`Air`] and what follows from it; saturation and dew point as functions.
//! - The air a parcel rises through: [`Environment`], linear in ln p between levels.
//! - A parcel: from any [`Air`], from [`Environment::bottom`], [`mixed_start`], [`mean_start`] or [`most_unstable_start`].
//! - What becomes of it: [`lift()`], an [`Ascent`], by any [`Method`]; [`Lifted`] for parts of its areas; [`parcel_path`] for
//!   drawing.
//! - Numbers beyond CAPE and CIN: [`ParcelNumbers`], [`LayerNumbers`].
//! - Wind: [`WindProfile`], [`WindNumbers`], [`Composites`].
//!
//! Absent is `None`: no free convection has no LFC, and no CIN. A number that is only a lower limit says so.
//!
//! Deliberately absent: files, stations, times, heights above sea level, and any opinion on whether a value is to be
//! believed. Those live in the crates above.
//!
//! # The route to speed
//!
//! Dragging a dew point recomputes everything in every frame, and thousands of ascents at that. What is done once is not
//! done again, and nothing is looked at more closely than the answer needs:
//!
//! - **An environment's share is paid once.** [`Environment`] holds virtual temperature and its running integral at nodes: its
//!   levels, and points between them where steps are wide or moisture bends. Steps are integrated by the end-corrected
//!   trapezium and cut until its error is below 0.2 µK of mean virtual temperature. [`Environment::refilled`] computes anew only the lower levels
//!   that differ.
//! - **Pseudo-adiabats are tabulated once for all parcels** (ln theta-e 0.01 apart, ln p 0.1 apart; values, slopes and their
//!   derivatives; 0.3 MB, some milliseconds at the first ascent). A parcel's path is a cubic in ln p, read from the table by
//!   a cubic in ln theta-e: within 0.2 mK for theta-e 230..430 K and 1100..1 hPa, found 0.09 mK. Outside, and for the other
//!   processes, a parcel's nodes are solved for or integrated. Cubics have exact integrals, so that an area costs two readings.
//! - **Only crossings are looked at closely.** Stretches of the column are passed over whole where buoyancy at their ends is
//!   further from zero than path and environment can bend in between. Crossings are roots of the interpolated profile.
//! - **Starts are judged by bounds.** The effective inflow layer asks only on which side of its limits CAPE and CIN are:
//!   sums over coarse cells bound both, and a start is lifted only when the bounds don't tell.
//! - **Logarithm and exponential are inlined**, so that loops over levels run side by side in the registers any processor has.
//!
//! [`lift_exactly`] has none of this: it is what all of this is checked against.
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
