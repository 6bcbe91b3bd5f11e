//! Wind on a page of its own: speed and direction against height, and the hodograph.
//!
//! One ink throughout. What lies lower is drawn thicker, since it weighs more in what storms feel; heights stand as numbers on the
//! curve. Two scenes in two frames, so that the desk can place them side by side and both can be written as SVG.

mod area;
mod hodograph;
mod hodograph_geometry;
mod hodograph_labels;
mod samples;
mod strips;
mod strips_geometry;
#[cfg(test)]
mod tests;

pub use hodograph::*;
pub use hodograph_geometry::*;
pub use strips::*;
pub use strips_geometry::*;

pub(crate) use samples::{between, kilometres, samples, tick_heights};
pub use samples::{drawn_heights, heights_up_to};

use crate::{SpeedUnit, Units, wording};
use dewbound_sounding::thermo::{Vector, WindNumbers, WindProfile};

/// Nothing above this is drawn, m above the ground: higher winds would squeeze those that storms live in.
pub const WINDS_TOP: f64 = 12_000.0;

/// Everything on the page.
#[derive(Debug, Clone, Copy)]
pub struct WindsPicture<'a> {
    /// Wind against height.
    pub profile: &'a WindProfile,
    /// What is read from it.
    pub numbers: &'a WindNumbers,
    /// A storm motion the user has set.
    pub set: Option<Vector>,
    /// The motion's ring has the keyboard.
    pub focused: bool,
    /// The pointer is over the ring or drags it.
    pub hovered: bool,
    /// Height being read, m above the ground.
    pub cursor: Option<f64>,
    /// A stamp across the head, e.g. "INVENTED DATA".
    pub stamp: Option<&'a str>,
    /// Units shown.
    pub units: Units,
}

impl<'a> WindsPicture<'a> {
    /// A profile with its numbers and nothing else.
    pub fn new(profile: &'a WindProfile, numbers: &'a WindNumbers) -> Self {
        Self {
            profile,
            numbers,
            set: None,
            focused: false,
            hovered: false,
            cursor: None,
            stamp: None,
            units: Units::default(),
        }
    }

    /// The motion that helicity is measured against: where the ring is. Without any it waits at the origin.
    pub fn handle(&self) -> Vector {
        self.set.or(self.numbers.motion_used).unwrap_or_default()
    }
}

/// Displayed units of speed in one m/s.
pub fn per_metre_per_second(unit: SpeedUnit) -> f64 {
    match unit {
        SpeedUnit::Knots => crate::barb::KNOTS,
        SpeedUnit::MetresPerSecond => 1.0,
    }
}

/// Name of a unit of speed.
pub const fn speed_sign(unit: SpeedUnit) -> &'static str {
    match unit {
        SpeedUnit::Knots => "kt",
        SpeedUnit::MetresPerSecond => "m/s",
    }
}

/// "235° 34 kt": where it comes from and how fast. North is 360; calm is said so.
pub fn wind_text(wind: Vector, unit: SpeedUnit) -> String {
    // Below half a knot a wind counts as calm.
    if wind.speed() * crate::barb::KNOTS < 0.5 {
        return "calm".to_owned();
    }
    format!("{} {}", bearing(wind), speed_text(wind.speed(), unit))
}

/// "235°": where it comes from; north is 360 (WMO code table 0877).
pub fn bearing(wind: Vector) -> String {
    match (wind.direction_from().round() as i64).rem_euclid(360) {
        0 => "360°".to_owned(),
        direction => format!("{direction:03}°"),
    }
}

/// "34 kt": whole knots, tenths of m/s.
fn speed_text(metres_per_second: f64, unit: SpeedUnit) -> String {
    let units = Units {
        speed: unit,
        ..Units::default()
    };
    wording::speed(metres_per_second, units)
}

/// "2.4 km: 235° 34 kt".
pub fn wind_line(profile: &WindProfile, height: f64, unit: SpeedUnit) -> String {
    let text = profile
        .at(height)
        .map_or_else(|| "no wind known".to_owned(), |wind| wind_text(wind, unit));
    format!("{} km: {text}", wording::fixed(height / 1000.0, 1))
}
