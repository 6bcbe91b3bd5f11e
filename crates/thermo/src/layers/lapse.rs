//! Lapse rates of deep layers.

use crate::{Environment, Pressure};

/// Fall of temperature with height (K/m) between two pressures (`lower` > `upper`): temperatures at the two ends over the
/// difference of their geopotential heights. `None` when an end is outside the profile.
pub(super) fn lapse_rate(
    environment: &Environment,
    lower: Pressure,
    upper: Pressure,
) -> Option<f64> {
    let (warm, _) = environment.virtual_at(lower)?;
    let (cold, _) = environment.virtual_at(upper)?;
    let depth = environment.thickness(lower, upper)?;
    (depth > 0.0).then(|| (warm - cold) / depth)
}

/// The same between two heights (m) above the lowest level.
pub(super) fn lapse_rate_by_height(
    environment: &Environment,
    lower: f64,
    upper: f64,
) -> Option<f64> {
    let pressure = |height: f64| environment.pressure_at_height(height);
    lapse_rate(environment, pressure(lower)?, pressure(upper)?)
}
