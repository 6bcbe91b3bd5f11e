//! The convective condensation level and the convective temperature.

use super::walk::first_fall;
use super::{LevelAt, pressure_at};
use crate::air::moist_exponent;
use crate::environment::coordinate;
use crate::saturation::{E0, exponent};
use crate::{Ascent, EPSILON, Environment, Temperature};

/// The convective condensation level and the temperature the ground needs for it.
///
/// The level is the lowest at or above the parcel's start where the temperature of the surroundings falls to the dew
/// point of the parcel's mixing ratio; the start itself when they are already that cold there. The temperature follows
/// theta with the exponent of every unsaturated ascent here, 0.2854 (1 - 0.28 w), from there down to the pressure of the
/// lowest level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Convective {
    /// The convective condensation level.
    pub level: LevelAt,
    /// Convective temperature: of the lowest level when the air up there is reached dry-adiabatically.
    pub temperature: Temperature,
}

/// `None` when the surroundings are nowhere that cold, and for a parcel without vapour.
pub(super) fn convective(environment: &Environment, ascent: &Ascent) -> Option<Convective> {
    let w = ascent.start.mixing_ratio();
    let (z_bottom, z_top) = environment.z_range();
    let from = coordinate(ascent.start.pressure.pa()).max(z_bottom);
    // ln of the vapour pressure of this mixing ratio, over E0, is this less z.
    let vapour = (w / ((EPSILON + w) * E0)).ln();
    if !vapour.is_finite() {
        return None;
    }
    // Eq. 10's exponent bends downward in T, so this does in z: it can't dip below zero and return inside a segment.
    let excess = |t: f64, z: f64| exponent(t) - (vapour - z);
    let t_from = environment.levels().segment_at(from).temperature(from);
    let z = if excess(t_from, from) <= 0.0 {
        from
    } else {
        first_fall(environment, from, z_top, f64::INFINITY, |segment, z| {
            excess(segment.temperature(z), z)
        })?
    };
    let level = LevelAt::of(environment, pressure_at(environment, z))?;
    let t = environment.levels().segment_at(z).temperature(z);
    Some(Convective {
        level,
        temperature: Temperature::from_k(t * (moist_exponent(w) * (z - z_bottom)).exp()),
    })
}
