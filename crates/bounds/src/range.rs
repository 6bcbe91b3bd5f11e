//! Smallest and largest value inside the interval.

use crate::{Response, Sample};
use dewbound_trust::sounding::Parcel;
use dewbound_trust::sounding::thermo::Temperature;

/// A value and the surface dew point it was met at.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Extreme {
    /// J/kg.
    pub value: f64,
    /// Surface dew point.
    pub dewpoint: Temperature,
}

/// Range of CAPE.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CapeRange {
    /// Smallest.
    pub least: Extreme,
    /// Largest.
    pub most: Extreme,
}

/// Range of CIN (J/kg, <= 0).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CinRange {
    /// Most negative: the strongest cap.
    pub strongest: Extreme,
    /// Least negative: the weakest cap.
    pub weakest: Extreme,
}

/// Range of one parcel's numbers over the interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Range {
    /// CAPE.
    pub cape: CapeRange,
    /// CIN where there is free convection; `None` when there is none anywhere inside.
    pub cin: Option<CinRange>,
    /// Somewhere inside there is no free convection: CAPE 0 and no CIN.
    pub cin_absent_somewhere: bool,
    /// Somewhere inside CAPE is a lower limit.
    pub at_least_somewhere: bool,
    /// Somewhere inside the parcel can't be computed.
    pub parcel_absent_somewhere: bool,
}

impl Response {
    /// Smallest and largest CAPE and CIN of a parcel inside the interval, over the samples there; `None` when the parcel is absent throughout.
    pub fn range(&self, parcel: Parcel) -> Option<Range> {
        let mut range: Option<Range> = None;
        let mut absent = false;
        for sample in self.inside() {
            let Some(ascent) = sample.numbers.parcel(parcel) else {
                absent = true;
                continue;
            };
            let extreme = |value| Extreme {
                value,
                dewpoint: sample.dewpoint,
            };
            let cape = extreme(ascent.cape);
            let range = range.get_or_insert(Range {
                cape: CapeRange {
                    least: cape,
                    most: cape,
                },
                cin: None,
                cin_absent_somewhere: false,
                at_least_somewhere: false,
                parcel_absent_somewhere: false,
            });
            if cape.value < range.cape.least.value {
                range.cape.least = cape;
            }
            if cape.value > range.cape.most.value {
                range.cape.most = cape;
            }
            range.at_least_somewhere |= ascent.at_least;
            match ascent.cin.map(extreme) {
                None => range.cin_absent_somewhere = true,
                Some(cin) => {
                    let known = range.cin.get_or_insert(CinRange {
                        strongest: cin,
                        weakest: cin,
                    });
                    if cin.value < known.strongest.value {
                        known.strongest = cin;
                    }
                    if cin.value > known.weakest.value {
                        known.weakest = cin;
                    }
                }
            }
        }
        if let Some(range) = &mut range {
            range.parcel_absent_somewhere = absent;
        }
        range
    }

    /// Samples inside the interval, from the driest, and the profile as received when it counts.
    pub fn inside(&self) -> impl Iterator<Item = &Sample> {
        self.samples
            .iter()
            .chain(&self.as_received)
            .filter(|sample| self.interval.contains(sample.dewpoint))
    }
}
