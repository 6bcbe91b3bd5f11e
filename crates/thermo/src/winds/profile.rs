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

/// Wind against height above the ground, its components linear in height between levels.
///
/// **Invariant:** at least two levels, heights rise strictly, every value is finite.
#[derive(Debug, Clone, PartialEq)]
pub struct WindProfile {
    levels: Vec<WindLevel>,
}

impl WindProfile {
    /// From levels in any order. Levels that aren't finite are left out, and of several at one height the first is kept; `None` when
    /// fewer than two remain.
    pub fn new(levels: impl IntoIterator<Item = WindLevel>) -> Option<Self> {
        let mut levels: Vec<WindLevel> = levels
            .into_iter()
            .filter(|level| {
                level.height.is_finite() && level.wind.u.is_finite() && level.wind.v.is_finite()
            })
            .collect();
        levels.sort_by(|a, b| a.height.total_cmp(&b.height));
        levels.dedup_by(|later, kept| later.height <= kept.height);
        (levels.len() >= 2).then_some(Self { levels })
    }

    /// The levels, from the lowest.
    pub fn levels(&self) -> &[WindLevel] {
        &self.levels
    }

    /// Wind at a height (m above the ground); `None` outside the profile.
    pub fn at(&self, height: f64) -> Option<Vector> {
        let above = self.levels.partition_point(|level| level.height <= height);
        let below = self.levels.get(above.checked_sub(1)?)?;
        if below.height == height {
            return Some(below.wind);
        }
        let above = self.levels.get(above)?;
        let share = (height - below.height) / (above.height - below.height);
        Some(below.wind + (above.wind - below.wind) * share)
    }
}
