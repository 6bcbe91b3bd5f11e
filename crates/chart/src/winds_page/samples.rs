//! The part of a wind profile that is drawn.

use super::WINDS_TOP;
use dewbound_sounding::thermo::{Vector, WindProfile};

/// Lowest and highest height drawn, m; `None` when the profile has nothing between the ground and [`WINDS_TOP`].
pub fn drawn_heights(profile: &WindProfile) -> Option<[f64; 2]> {
    let levels = profile.levels();
    let bottom = bottom_of(profile, 0.0)?;
    let top = levels.last()?.height.min(WINDS_TOP);
    (bottom < top).then_some([bottom, top])
}

/// The same up to a height, m. Winds that begin above it are shown all the same.
pub fn heights_up_to(profile: &WindProfile, top: f64) -> Option<[f64; 2]> {
    let [bottom, highest] = drawn_heights(profile)?;
    let within = highest.min(top);
    Some([bottom, if bottom < within { within } else { highest }])
}

/// The lowest height from `from` up at which the profile knows the wind: a lowest wind a little above the ground may serve there.
fn bottom_of(profile: &WindProfile, from: f64) -> Option<f64> {
    let lowest = profile.levels().first()?.height;
    Some(if profile.at(from).is_some() {
        from
    } else {
        lowest.max(from)
    })
}

/// Height and wind at every level drawn, and at both ends.
pub(crate) fn samples(profile: &WindProfile) -> Vec<(f64, Vector)> {
    between(profile, 0.0, WINDS_TOP)
}

/// The same between two heights; empty when the profile doesn't reach into them.
pub(crate) fn between(profile: &WindProfile, from: f64, to: f64) -> Vec<(f64, Vector)> {
    let levels = profile.levels();
    let (Some(bottom), Some(last)) = (bottom_of(profile, from), levels.last()) else {
        return Vec::new();
    };
    let top = last.height.min(to);
    if bottom >= top {
        return Vec::new();
    }
    let end = |height: f64| profile.at(height).map(|wind| (height, wind));
    let inner = levels
        .iter()
        .filter(|level| level.height > bottom && level.height < top)
        .map(|level| (level.height, level.wind));
    end(bottom)
        .into_iter()
        .chain(inner)
        .chain(end(top))
        .collect()
}

/// Heights that get a tick, m: every kilometre and half a kilometre, those the profile reaches; the ground where it starts there.
pub(crate) fn tick_heights(profile: &WindProfile) -> Vec<f64> {
    let Some([bottom, top]) = drawn_heights(profile) else {
        return Vec::new();
    };
    let whole = (1..=(WINDS_TOP / 1000.0) as u32).map(|km| 1000.0 * f64::from(km));
    [0.0, 500.0]
        .into_iter()
        .chain(whole)
        .filter(|height| (bottom..=top).contains(height))
        .collect()
}

/// "0.5", "3": kilometres.
pub(crate) fn kilometres(height: f64) -> String {
    let decimals = usize::from(height % 1000.0 != 0.0);
    crate::wording::fixed(height / 1000.0, decimals)
}
