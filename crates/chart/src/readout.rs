//! What the profile says at the cursor.

use crate::{HeightScale, Units};
use dewbound_sounding::{Profile, thermo::Pressure};

/// Values of a profile at one pressure, as text in the units shown.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Readout {
    /// Name and value with unit, in the order shown.
    pub rows: Vec<(&'static str, String)>,
}

impl Readout {
    /// At a pressure. Values are interpolated linearly in ln p between reported levels; what is not known is said so.
    pub fn of(
        _profile: &Profile,
        _pressure: Pressure,
        _heights: Option<&HeightScale>,
        _units: Units,
    ) -> Self {
        Self::default()
    }

    /// All of it in one line, for copying and for screen readers.
    pub fn line(&self) -> String {
        let parts: Vec<String> = self
            .rows
            .iter()
            .map(|(name, value)| format!("{name} {value}"))
            .collect();
        parts.join(", ")
    }
}
