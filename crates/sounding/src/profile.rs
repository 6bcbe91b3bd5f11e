//! The received levels put in order: falling pressure, one row a pressure.

use crate::{Note, Sampling, Sounding, Wind};
use dewbound_thermo::{Air, Environment, EnvironmentError, Pressure};

/// Levels of strictly falling pressure, as columns of one length. Received or amended.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Profile {
    /// Pressure, Pa, falling strictly.
    pub pressure: Vec<f64>,
    /// Geopotential height above mean sea level, m.
    pub height: Vec<Option<f64>>,
    /// Temperature, K.
    pub temperature: Vec<Option<f64>>,
    /// Dew point over water, K.
    pub dewpoint: Vec<Option<f64>>,
    /// Wind.
    pub wind: Vec<Option<Wind>>,
    /// Index into [`Sounding::levels`] of the first level merged into this row; `None` for inserted rows.
    pub received: Vec<Option<usize>>,
    /// Row of the surface level; `None` when the message has none.
    pub surface: Option<usize>,
    /// How the levels were chosen.
    pub sampling: Sampling,
}

impl Profile {
    /// Orders and merges the levels of a sounding.
    ///
    /// Levels at one pressure are merged: the first received value of each field is kept, later ones fill gaps, a
    /// conflict is noted. Levels without pressure are left out (noted). The surface level is the one the format marks, else the lowest that reports
    /// temperature or wind. If it lacks temperature or humidity and a complete level lies within 10 hPa above it, that
    /// one serves, with a note. Values that are not numbers, or physically impossible beyond any doubt, count as missing, with a note.
    pub fn received(_sounding: &Sounding) -> (Self, Vec<Note>) {
        todo!()
    }

    /// Number of rows.
    pub fn len(&self) -> usize {
        self.pressure.len()
    }

    /// No rows at all.
    pub fn is_empty(&self) -> bool {
        self.pressure.is_empty()
    }

    /// Pressure of the surface level.
    pub fn surface_pressure(&self) -> Option<Pressure> {
        self.surface
            .and_then(|row| self.pressure.get(row))
            .map(|&p| Pressure::from_pa(p))
    }

    /// Air at the surface level, when it has temperature and dew point.
    pub fn surface_air(&self) -> Option<Air> {
        todo!()
    }

    /// Pressure of the highest row with a temperature.
    pub fn top(&self) -> Option<Pressure> {
        todo!()
    }

    /// The air a parcel rises through: rows with temperature, from the surface (or, without one, the lowest complete row) upward.
    pub fn environment(&self) -> Result<Environment, EnvironmentError> {
        todo!()
    }

    /// Rows of the environment as indices into this profile.
    pub fn environment_rows(&self) -> Vec<usize> {
        todo!()
    }

    /// Geopotential height (m) at a pressure: received heights interpolated in ln p, hypsometric where they are missing;
    /// `None` when no height anchors the profile.
    pub fn height_at(&self, _pressure: Pressure) -> Option<f64> {
        todo!()
    }
}
