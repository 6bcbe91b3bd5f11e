//! How far the numbers move inside the credible surface moisture.

pub use dewbound_trust as trust;
