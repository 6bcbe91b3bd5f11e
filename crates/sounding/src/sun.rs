//! Where the sun stands.

use crate::{Daylight, Position, Sounding};
use jiff::Timestamp;

/// Geometric elevation of the sun's centre above the horizon, degrees (no refraction).
pub fn solar_elevation(_time: Timestamp, _position: Position) -> f64 {
    todo!()
}

/// Whether the sun stood above 10 degrees at launch or within the hour before.
pub fn daylight(_sounding: &Sounding) -> Daylight {
    todo!()
}
