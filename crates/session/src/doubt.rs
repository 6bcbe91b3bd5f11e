//! How far the numbers move inside the credible surface moisture.

use crate::sounding::{Amendment, Amendments, Parcel};
use crate::thermo::Temperature;
use crate::{Analysed, Document, Pins};

/// Where a candidate for the true surface dew point comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum CandidateKind {
    /// As reported.
    Reported,
    /// Implied by the mixed layer.
    MixedLayer,
    /// Pinned by the user, drier end.
    PinnedLow,
    /// Pinned by the user, moister end.
    PinnedHigh,
}

/// A candidate for the true surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidate {
    /// Where it comes from.
    pub kind: CandidateKind,
    /// Its dew point; `None`: there is none, and `note` says why.
    pub dewpoint: Option<Temperature>,
    /// CAPE of the three parcels there (order of [`Parcel::ALL`]), J/kg.
    pub cape: [Option<f64>; 3],
    /// One line for people.
    pub note: String,
}

/// The credible interval of the surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub struct Interval {
    /// Drier end.
    pub low: Temperature,
    /// Moister end.
    pub high: Temperature,
    /// Where the ends come from, for people ("provisional: ...").
    pub why: String,
}

/// The numbers of one parcel at one surface dew point.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelPoint {
    /// CAPE, J/kg.
    pub cape: Option<f64>,
    /// CIN, J/kg.
    pub cin: Option<f64>,
    /// CAPE is a lower limit there.
    pub at_least: bool,
}

/// One point of the response curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ResponsePoint {
    /// Surface dew point.
    pub dewpoint: Temperature,
    /// The three parcels, in the order of [`Parcel::ALL`].
    pub parcels: [ParcelPoint; 3],
}

/// Smallest and largest value of a number anywhere inside the interval, with the dew points where they are taken.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Extremes {
    /// Smallest value (for CIN the strongest cap), J/kg.
    pub least: f64,
    /// Dew point there.
    pub least_at: Temperature,
    /// Largest value (for CIN the weakest cap), J/kg.
    pub most: f64,
    /// Dew point there.
    pub most_at: Temperature,
    /// Some value inside the interval is a lower limit only.
    pub at_least: bool,
}

/// Ranges of one parcel over the interval.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelRange {
    /// CAPE; `None`: no parcel or no interval.
    pub cape: Option<Extremes>,
    /// CIN; `None`: no parcel, no interval, or no free convection anywhere inside it.
    pub cin: Option<Extremes>,
    /// Somewhere inside the interval there is no free convection.
    pub sometimes_no_free_convection: bool,
}

/// Everything that depends on all of the document except the dragged surface dew point.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Doubt {
    /// Candidates side by side.
    pub candidates: Vec<Candidate>,
    /// The credible interval; `None` when the surface has no usable air.
    pub interval: Option<Interval>,
    /// Numbers against surface dew point, by rising dew point; reaches beyond the interval on both sides.
    pub response: Vec<ResponsePoint>,
    /// Ranges in the order of [`Parcel::ALL`].
    pub ranges: [ParcelRange; 3],
    /// Why there is no interval or response; empty when there is one.
    pub problem: String,
}

impl Doubt {
    /// Range of one parcel.
    pub fn range(&self, parcel: Parcel) -> &ParcelRange {
        let [surface, mixed, most_unstable] = &self.ranges;
        match parcel {
            Parcel::Surface => surface,
            Parcel::Mixed => mixed,
            Parcel::MostUnstable => most_unstable,
        }
    }
}

/// What the doubt depends on: all of the document but the surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct DoubtKey {
    amendments: Amendments,
    pins: Pins,
}

impl DoubtKey {
    pub(crate) fn of(document: &Document) -> Self {
        let mut amendments = document.amendments.clone();
        amendments
            .entries
            .retain(|entry| entry.enabled && !matches!(entry.amendment, Amendment::SurfaceDewpoint { .. }));
        Self {
            amendments,
            pins: document.pins,
        }
    }
}

impl Doubt {
    pub(crate) fn of(_analysed: &Analysed, _document: &Document) -> Self {
        Self::default()
    }
}
