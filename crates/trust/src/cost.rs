//! What a repair costs: numbers with it minus numbers without it, on the working profile.

use crate::{Finding, Repair};
use dewbound_sounding::{Amendments, Daylight, Numbers, Profile};

/// Change of one parcel's numbers. `None` where a number is absent on either side.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Change {
    /// CAPE, J/kg.
    pub cape: Option<f64>,
    /// CIN, J/kg.
    pub cin: Option<f64>,
}

/// Cost of one repair for each parcel.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Cost {
    /// Surface parcel.
    pub surface: Change,
    /// Mixed parcel.
    pub mixed: Change,
    /// Most unstable parcel.
    pub most_unstable: Change,
}

impl Cost {
    /// Largest absolute CAPE change over the parcels, J/kg; `None` when unknown for all.
    pub fn cape_magnitude(&self) -> Option<f64> {
        todo!()
    }
}

/// State of a finding's repairs on the working profile.
#[derive(Debug, Clone, PartialEq)]
pub struct Priced<'a> {
    /// The finding.
    pub finding: &'a Finding,
    /// Cost of each repair, in the order of [`Finding::repairs`]; `None` = unknown (not zero).
    pub costs: Vec<Option<Cost>>,
    /// Index of the headline repair: the largest |CAPE change|, CIN change breaking ties.
    pub headline: Option<usize>,
    /// Index of a repair that is already among the enabled amendments (its cost is then what it has changed: with minus without).
    pub applied: Option<usize>,
}

/// Prices one repair: numbers with it minus numbers without it.
pub fn cost(_repair: &Repair, _received: &Profile, _amendments: &Amendments, _daylight: Daylight) -> Option<Cost> {
    todo!()
}

/// Prices every finding on the working profile. `working` are the numbers of `amendments` as they stand (not recomputed).
pub fn price<'a>(
    _findings: &'a [Finding],
    _received: &Profile,
    _amendments: &Amendments,
    _daylight: Daylight,
    _working: &Numbers,
) -> Vec<Priced<'a>> {
    todo!()
}

/// Order in which cards are shown, worst first: indices into `priced` (design: unknown costs stand above all priced
/// ones when erroneous or when the result is "at least", else after the last one of >= 100 J/kg).
pub fn rank(_priced: &[Priced], _at_least: bool) -> Vec<usize> {
    todo!()
}
