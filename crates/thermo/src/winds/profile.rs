//! Wind against height.

use super::Vector;
use crate::Pressure;

/// One level with wind.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WindLevel {
    /// Height above the ground, m.
    pub height: f64,
    /// Pressure; unknown in reports that give wind by height alone.
    pub pressure: Option<Pressure>,
    /// The wind.
    pub wind: Vector,
}

/// A lowest wind that lies no higher than this above the ground (m) serves as the wind at the ground; common practice, no source.
pub const GROUND_WIND_BELOW: f64 = 50.0;

/// Beyond these a value is no height (m) and no wind (m/s) of an atmosphere; keeps every sum finite.
const HIGHEST: f64 = 1e6;
const STRONGEST: f64 = 1e4;

/// Wind against height above the ground, its components linear in height between levels.
///
/// - **The ground** is height 0. Where the lowest level lies above it by no more than [`GROUND_WIND_BELOW`], its wind holds
///   from there down to the ground; where it lies higher, there is no wind at the ground. Levels below 0 are allowed.
/// - **Pressure** between levels: its logarithm is linear in height. Levels without pressure take theirs from their
///   neighbours by that rule; so do levels whose pressure isn't below that of the level with pressure beneath them. Below
///   the lowest and above the highest pressure there is none, except down to the ground from a lowest level that serves
///   for it, by the slope of the two lowest levels.
/// - Every integral is exact for these curves: it doesn't change when interpolated levels are inserted.
///
/// **Invariant:** at least two levels, heights rise strictly, every value is finite.
#[derive(Debug, Clone, PartialEq)]
pub struct WindProfile {
    levels: Vec<WindLevel>,
    /// Natural logarithm of pressure (Pa) at each level.
    ln_pressure: Vec<Option<f64>>,
}

/// The profile at one height.
#[derive(Debug, Clone, Copy)]
pub(super) struct Knot {
    pub height: f64,
    pub wind: Vector,
    pub ln_pressure: Option<f64>,
}

impl WindProfile {
    /// From levels in any order. Levels that aren't finite, or are beyond 1,000 km or 10 km/s, are left out, and of several at
    /// one height the first is kept; `None` when fewer than two remain.
    pub fn new(levels: impl IntoIterator<Item = WindLevel>) -> Option<Self> {
        let within = |value: f64, limit: f64| value.abs() <= limit;
        let mut levels: Vec<WindLevel> = levels
            .into_iter()
            .filter(|level| {
                within(level.height, HIGHEST)
                    && within(level.wind.u, STRONGEST)
                    && within(level.wind.v, STRONGEST)
            })
            .collect();
        levels.sort_by(|a, b| a.height.total_cmp(&b.height));
        levels.dedup_by(|later, kept| later.height <= kept.height);
        (levels.len() >= 2).then(|| Self {
            ln_pressure: ln_pressures(&levels),
            levels,
        })
    }

    /// The levels, from the lowest.
    pub fn levels(&self) -> &[WindLevel] {
        &self.levels
    }

    /// Wind at a height (m above the ground); `None` outside the profile.
    pub fn at(&self, height: f64) -> Option<Vector> {
        self.knot(height).map(|knot| knot.wind)
    }

    /// Wind at the ground: at height 0, or of the lowest level where that lies no more than [`GROUND_WIND_BELOW`] above it.
    pub fn at_ground(&self) -> Option<Vector> {
        self.at(0.0)
    }

    /// Pressure at a height (m above the ground), see [`WindProfile`]; `None` where it isn't known.
    pub fn pressure_at(&self, height: f64) -> Option<Pressure> {
        let ln_pressure = self.knot(height)?.ln_pressure?;
        Some(Pressure::from_pa(ln_pressure.exp()))
    }

    /// The profile at a height; `None` outside it.
    pub(super) fn knot(&self, height: f64) -> Option<Knot> {
        let above = self.levels.partition_point(|level| level.height <= height);
        let Some(below) = above.checked_sub(1) else {
            return self.knot_under_the_lowest(height);
        };
        let lower = self.knot_of(below)?;
        if lower.height == height {
            return Some(lower);
        }
        let upper = self.knot_of(above)?;
        let share = (height - lower.height) / (upper.height - lower.height);
        Some(Knot {
            height,
            wind: lower.wind + (upper.wind - lower.wind) * share,
            ln_pressure: lower
                .ln_pressure
                .zip(upper.ln_pressure)
                .map(|(lower, upper)| lower + (upper - lower) * share),
        })
    }

    /// The lowest wind, where it serves down to the ground.
    fn knot_under_the_lowest(&self, height: f64) -> Option<Knot> {
        let (lowest, next) = (self.knot_of(0)?, self.knot_of(1)?);
        let serves = height >= 0.0 && lowest.height <= GROUND_WIND_BELOW;
        serves.then(|| Knot {
            height,
            wind: lowest.wind,
            ln_pressure: lowest
                .ln_pressure
                .zip(next.ln_pressure)
                .map(|(first, second)| {
                    let slope = (first - second) / (next.height - lowest.height);
                    first + slope * (lowest.height - height)
                }),
        })
    }

    /// The profile at one of its levels.
    fn knot_of(&self, level: usize) -> Option<Knot> {
        let WindLevel { height, wind, .. } = *self.levels.get(level)?;
        Some(Knot {
            height,
            wind,
            ln_pressure: self.ln_pressure.get(level).copied().flatten(),
        })
    }

    /// The pieces of the profile between two heights, lower end and upper end of each, from the lowest; `None` unless
    /// `bottom < top` and both lie in the profile.
    pub(super) fn pieces(
        &self,
        bottom: f64,
        top: f64,
    ) -> Option<impl Iterator<Item = (Knot, Knot)>> {
        // No height that isn't a number lies in the profile.
        let (first, last) = (self.knot(bottom)?, self.knot(top)?);
        if bottom >= top {
            return None;
        }
        let from = self.levels.partition_point(|level| level.height <= bottom);
        let to = self.levels.partition_point(|level| level.height < top);
        let ends = (from..to)
            .filter_map(|level| self.knot_of(level))
            .chain([last]);
        let mut lower = first;
        Some(ends.map(move |upper| (std::mem::replace(&mut lower, upper), upper)))
    }
}

/// Logarithm of pressure at each level, interpolated where it is missing or doesn't fall.
fn ln_pressures(levels: &[WindLevel]) -> Vec<Option<f64>> {
    let mut known: Vec<Option<f64>> = vec![None; levels.len()];
    let mut below: Option<(usize, f64, f64)> = None;
    for (at, level) in levels.iter().enumerate() {
        let Some(ln_pressure) = level
            .pressure
            .map(|pressure| pressure.pa().ln())
            .filter(|ln| ln.is_finite())
        else {
            continue;
        };
        if let Some((from, height, lower)) = below {
            if ln_pressure >= lower {
                continue;
            }
            let slope = (ln_pressure - lower) / (level.height - height);
            for (slot, between) in known.iter_mut().zip(levels).take(at).skip(from + 1) {
                *slot = Some(lower + slope * (between.height - height));
            }
        }
        if let Some(slot) = known.get_mut(at) {
            *slot = Some(ln_pressure);
        }
        below = Some((at, level.height, ln_pressure));
    }
    known
}
