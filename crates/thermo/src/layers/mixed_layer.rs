//! How deep the air is mixed, by two published methods.

use super::LevelAt;
use super::walk::{WIDEST, first_fall};
use crate::column::Segment;
use crate::elementary::exp;
use crate::environment::coordinate;
use crate::winds::WindProfile;
use crate::{Environment, GRAVITY, KAPPA};

/// Critical bulk Richardson number.
const CRITICAL: f64 = 0.25;
/// Excess of virtual potential temperature that is rounding, as a share.
const ROUNDING: f64 = 1e-9;

/// A mixed layer shallower than this (m) is none.
const SHALLOWEST: f64 = 0.1;

/// Virtual potential temperature at z over that of air of virtual temperature `tv0` at `z0`.
#[inline]
fn theta_ratio(segment: &Segment, z: f64, (z0, tv0): (f64, f64)) -> f64 {
    segment.virtual_temperature(z) / tv0 * exp(KAPPA * (z - z0))
}

/// The lowest level's z and virtual temperature.
fn ground(environment: &Environment) -> (f64, f64) {
    (
        environment.z_range().0,
        environment.bottom().virtual_temperature().k(),
    )
}

/// The parcel method (Holzworth 1964, J. Appl. Meteor. 3; from memory): where unsaturated air from the lowest level, lifted
/// with its own temperature, meets the surroundings. By **virtual** potential temperature (exponent 0.2854), so that
/// moisture counts: the lowest level where it rises above that of the lowest level.
///
/// `None` when it rises from the ground on (mixed through less than 0.1 m) and when it never rises above. Exact crossings; a pair closer
/// than 0.01 in ln p inside one segment is not seen.
pub(super) fn by_parcel(environment: &Environment) -> Option<LevelAt> {
    let (z_bottom, z_top) = environment.z_range();
    let ground = ground(environment);
    let z = first_fall(environment, z_bottom, z_top, WIDEST, |segment, z| {
        // At the ground, and in perfectly mixed air above it, only rounding would be left.
        1.0 + ROUNDING - theta_ratio(segment, z, ground)
    })?;
    // Where it rises from the ground on, rounding alone is overcome at once.
    LevelAt::at_z(environment, z).filter(|level| level.height >= SHALLOWEST)
}

/// The bulk Richardson number method (Vogelezang & Holtslag 1996, Boundary-Layer Meteorology 81; Seidel et al. 2012, JGR
/// 117; from memory): the lowest level where
///
/// `Ri = (g / theta_v0) (theta_v - theta_v0) h / (u² + v²)`
///
/// rises to 0.25. Zero = the lowest level, h = height above it; the wind at the ground is set to zero in the
/// denominator, and friction velocity left out, as in Seidel et al.
///
/// Heights of the wind, above the ground, count as heights above the lowest level. `None` without wind up to there, and
/// when the number is above 0.25 from the lowest wind on. Exact crossings; a pair closer than 0.01 in ln p is not seen.
pub(super) fn by_richardson(environment: &Environment, winds: &WindProfile) -> Option<LevelAt> {
    let (lowest, highest) = (winds.levels().first()?, winds.levels().last()?);
    let (z_bottom, z_top) = environment.z_range();
    let z_of = |height: f64| {
        let pressure = environment.pressure_at_height(height)?;
        Some(coordinate(pressure.pa()))
    };
    let from = if lowest.height <= 0.0 {
        z_bottom
    } else {
        z_of(lowest.height)?
    };
    let to = z_of(highest.height).unwrap_or(z_top);
    let ground = ground(environment);
    let z = first_fall(environment, from, to, WIDEST, |segment, z| {
        let height = environment.height_at_z(z);
        // The ends of the wind profile are where the walk begins and ends, but for rounding.
        let Some(wind) = winds.at(height.clamp(lowest.height, highest.height)) else {
            return f64::NAN;
        };
        CRITICAL * wind.dot(wind) - GRAVITY * (theta_ratio(segment, z, ground) - 1.0) * height
    })?;
    LevelAt::at_z(environment, z)
}
