//! The sounding on top of the isopleths.

use crate::{Geometry, Picture, Readout, Scene, Touch};

/// The painted sounding and what can be touched in it.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Foreground {
    /// To be painted over the background.
    pub scene: Scene,
    /// What can be touched.
    pub touch: Touch,
    /// What the cursor reads (painted too).
    pub readout: Option<Readout>,
}

/// Curves, parcel, areas, brackets, handles, wind, height scale and cursor. Cheap enough for every frame.
pub fn foreground(_geometry: &Geometry, _picture: &Picture<'_>) -> Foreground {
    Foreground::default()
}
