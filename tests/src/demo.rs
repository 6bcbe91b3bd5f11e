//! The demo soundings: an invented atmosphere, a sonde with faults, and the formats they are written in.
//!
//! Everything is deterministic: `cargo run -p dewbound-tests --bin make-demo-soundings` writes `demo-soundings/` anew,
//! and a test compares the result with what is kept there.

pub mod atmosphere;
pub mod balloon;
pub mod coded;
pub mod noise;
pub mod stories;
pub mod write;
