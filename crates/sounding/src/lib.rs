//! A sounding as received, the amendments a forecaster makes, and the working profile that results.
//!
//! Data flow one way: a reader makes a [`Sounding`], which is never changed again; [`Profile::received`] orders and
//! merges its levels; [`Amendments`] applied to that give a [`Working`] profile; [`Numbers`] are computed from it.
//!
//! Deliberately absent: file formats, findings, and anything that decides what is true.

mod amend;
mod apply;
mod flight;
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

pub use amend::*;
pub use mixed_layer::*;
pub use numbers::*;
pub use profile::*;
pub use received::*;
pub use station::*;
pub use sun::*;

pub use dewbound_thermo as thermo;
