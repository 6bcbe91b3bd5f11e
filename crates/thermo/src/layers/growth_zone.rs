//! The part of CAPE in surroundings cold enough for ice to grow fast.

use super::pressure_at;
use crate::environment::coordinate;
use crate::{Environment, Lifted, ZERO_CELSIUS};

/// Bounds of the zone: temperature of the surroundings, K.
const WARM: f64 = ZERO_CELSIUS - 10.0;
const COLD: f64 = ZERO_CELSIUS - 30.0;

/// The part of CAPE where the temperature of the surroundings is between -10 and -30 °C: of every such layer, cut at exact
/// crossings. `None` when no part of the profile above the LCL is that cold and no colder.
pub(super) fn cape_in_growth_zone(environment: &Environment, lifted: &Lifted) -> Option<f64> {
    let levels = environment.levels();
    let lcl = coordinate(lifted.ascent.lcl.pressure.pa());
    // z where the layer being looked at begins.
    let mut open: Option<f64> = None;
    let mut reached = false;
    let mut sum = 0.0;
    let mut add = |a: f64, b: f64| {
        if b > a {
            let [lower, upper] = [a, b].map(|z| pressure_at(environment, z));
            sum += lifted.cape_between(lower, upper);
        }
    };
    let first = levels.z.partition_point(|&z| z <= lcl).saturating_sub(1);
    let mut foot = (levels.z[first], levels.t[first]);
    for (&z, &t) in levels.z.iter().zip(levels.t).skip(first + 1) {
        let (z0, t0) = foot;
        foot = (z, t);
        let inside = |t: f64| (COLD..=WARM).contains(&t);
        if inside(t0) && inside(t) {
            open = open.or(Some(z0));
            continue;
        }
        if (t0 > WARM && t > WARM) || (t0 < COLD && t < COLD) {
            continue;
        }
        // Where the segment meets the two bounds, in the order it meets them.
        let meets = |bound: f64| z0 + (z - z0) * (bound - t0) / (t - t0);
        let (enter, leave) = if t < t0 { (WARM, COLD) } else { (COLD, WARM) };
        let a = if inside(t0) {
            open.unwrap_or(z0)
        } else {
            meets(enter)
        };
        reached = true;
        if inside(t) {
            open = Some(a);
        } else {
            add(a, meets(leave));
            open = None;
        }
    }
    if let Some(a) = open {
        reached = true;
        add(a, foot.0);
    }
    reached.then_some(sum + 0.0)
}
