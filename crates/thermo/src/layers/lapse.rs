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
