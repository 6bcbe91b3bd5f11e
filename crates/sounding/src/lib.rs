//! A sounding as received, the amendments a forecaster makes, and the working profile that results.
//!
//! Data flow one way: a reader makes a [`Sounding`], which is never changed again; [`Profile::received`] orders and
//! merges its levels; [`Amendments`] applied to that give a [`Working`] profile; [`Numbers`] are computed from it.
//!
//! Deliberately absent: file formats, findings, and anything that decides what is true.
//!
//! ```
//! use dewbound_sounding::thermo::Temperature;
//! use dewbound_sounding::{Amendments, Daylight, Level, Numbers, Profile, Sounding};
//!
//! let level = |hpa: f64, t: f64, td: f64| Level {
//!     pressure: Some(hpa * 100.0),
//!     temperature: Some(t + 273.15),
//!     dewpoint: Some(td + 273.15),
//!     ..Level::default()
//! };
//! let sounding = Sounding {
//!     levels: vec![
//!         level(970.0, 29.0, 19.0),
//!         level(850.0, 19.4, 13.0),
//!         level(700.0, 9.0, -4.0),
//!         level(500.0, -12.0, -30.0),
//!         level(300.0, -41.0, -60.0),
//!         level(150.0, -62.0, -80.0),
//!     ],
//!     ..Sounding::default()
//! };
//! let (received, notes) = Profile::received(&sounding);
//! assert!(notes.is_empty());
//! let before = Numbers::of(&received).surface.map(|parcel| parcel.cape);
//!
//! let wetter = Amendments::default().with_surface_dewpoint(Temperature::from_c(20.0));
//! let working = wetter.apply(&received, Daylight::Unknown);
//! let after = Numbers::of(&working.profile).surface.map(|parcel| parcel.cape);
//! assert!(after > before);
//! assert_eq!(working.reach.why, "level: default, day or night unknown");
//! ```

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod amend;
mod apply;
mod clean;
mod flight;
mod further;
mod height;
mod layers;
mod merge;
mod mixed_layer;
mod numbers;
mod profile;
mod reach;
mod received;
mod station;
mod sun;
mod telling;
#[cfg(test)]
mod testing;
mod wind_profile;
mod winds;

pub use amend::*;
pub use further::*;
pub use mixed_layer::*;
pub use numbers::*;
pub use profile::*;
pub use received::*;
pub use station::*;
pub use sun::*;

pub use dewbound_thermo as thermo;
