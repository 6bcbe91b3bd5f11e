//! Findings on a received profile, their repairs, and what each repair costs.
//!
//! A [`Finding`] belongs to the received profile and never changes while the user works; only the cost of its
//! repairs does, because cost is measured on the working profile.
//!
//! [`findings`] runs every rule of [`RULES`]; [`price`] says what each repair costs; [`rank`] puts them worst first;
//! [`with_repair`] and [`without_repair`] are the two directions of the toggle those costs describe.
//!
//! Deliberately absent: any automatic repair. The forecaster decides.

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod column;
mod cost;
mod finding;
mod layers;
mod mixed;
mod rank;
mod rule;
pub mod rules;
#[cfg(test)]
mod synthetic;
mod thresholds;
mod toggle;
mod turns;
mod words;

pub use column::*;
pub use cost::*;
pub use finding::*;
pub use mixed::MixedLayer;
pub use rank::*;
pub use rule::*;
pub use rules::{Refuted, RefutedSurface};
pub use thresholds::*;
pub use toggle::{applied_repair, repair_source, with_repair, without_repair};

pub use dewbound_sounding as sounding;
