//! What the forecaster has changed: the part of the state that undo moves through.

use crate::SurfaceQuantity;
use crate::ledger::Verdict;
use crate::sounding::Amendments;
use crate::thermo::{Pressure, Temperature, Vector};
use serde::{Deserialize, Serialize};

/// Which end of the credible interval.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum IntervalEnd {
    /// The drier end.
    Low,
    /// The moister end.
    High,
}

/// Ends of the interval the user has pinned, K.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Pins {
    /// The drier end, K.
    pub low_k: Option<f64>,
    /// The moister end, K.
    pub high_k: Option<f64>,
}

impl Pins {
    /// One end.
    pub fn end(&self, end: IntervalEnd) -> Option<Temperature> {
        match end {
            IntervalEnd::Low => self.low_k,
            IntervalEnd::High => self.high_k,
        }
        .map(Temperature::from_k)
    }
}

/// Editable state of one sounding. Small; undo keeps whole copies.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
pub struct Document {
    /// The ordered amendments and the chosen reach.
    pub amendments: Amendments,
    /// Pinned ends of the interval.
    #[serde(default)]
    pub pins: Pins,
    /// A level the user picked to lift a parcel from, Pa.
    #[serde(default)]
    pub picked_level_pa: Option<f64>,
    /// A storm motion the user set: towards east and towards north, m/s.
    #[serde(default)]
    pub storm_motion_ms: Option<[f64; 2]>,
    /// Verdict being drafted.
    #[serde(default)]
    pub verdict: Option<Verdict>,
    /// Reasons being drafted.
    #[serde(default)]
    pub reasons: String,
}

impl Document {
    /// Nothing has been changed.
    pub fn is_untouched(&self) -> bool {
        *self == Self::default()
    }

    /// The same numbers follow from both; they differ in the verdict being drafted at most.
    pub(crate) fn computes_like(&self, other: &Self) -> bool {
        self.amendments == other.amendments
            && self.pins == other.pins
            && self.picked_level_pa == other.picked_level_pa
            && self.storm_motion_ms == other.storm_motion_ms
    }

    /// The surface value these amendments set, when they do.
    pub fn surface(&self, quantity: SurfaceQuantity) -> Option<Temperature> {
        match quantity {
            SurfaceQuantity::Dewpoint => self.amendments.surface_dewpoint(),
            SurfaceQuantity::Temperature => self.amendments.surface_temperature(),
        }
    }

    /// The storm motion the user set.
    pub fn storm_motion(&self) -> Option<Vector> {
        self.storm_motion_ms.map(|[u, v]| Vector { u, v })
    }

    /// The picked level.
    pub fn picked_level(&self) -> Option<Pressure> {
        self.picked_level_pa.map(Pressure::from_pa)
    }
}
