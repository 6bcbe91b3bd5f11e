//! Findings on a received profile, their repairs, and what each repair costs.
//!
//! A [`Finding`] belongs to the received profile and never changes while the user works; only the cost of its
//! repairs does, because cost is measured on the working profile.
//!
//! Deliberately absent: any automatic repair. The forecaster decides.

mod cost;
mod finding;
mod rule;
mod thresholds;

pub use cost::*;
pub use finding::*;
pub use rule::*;
pub use thresholds::*;

pub use dewbound_sounding as sounding;
