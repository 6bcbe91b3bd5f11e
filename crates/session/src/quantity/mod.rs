//! Every number, declared once: what it is, how it is computed, where that comes from, what it needs, when it is absent.
//!
//! The desk's rows and hover texts, `weigh --all`, `explain` and the page below are all made of these declarations. Nothing is
//! computed here: a declaration reads its value from what `sounding` and `thermo` have computed.
//!
#![doc = include_str!("../../numbers.md")]

mod air;
mod composite;
mod energy;
mod levels;
mod lookup;
mod other;
mod page;
mod readings;
#[cfg(test)]
mod tests;
mod unit;
mod value;
mod wind;

pub use lookup::{NotFound, find};
pub use page::markdown;
pub use readings::{Needs, Readings};
pub use unit::Unit;
pub use value::Value;
pub(crate) use value::difference_from;

use crate::sounding::Parcel;
use crate::{Extremes, ParcelRange};

/// Numbers that are shown together.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Group {
    /// CAPE, CIN and their parts.
    Energy,
    /// Levels and heights.
    Levels,
    /// Moisture and temperature.
    Air,
    /// Wind.
    Wind,
    /// CAPE by other kinds of ascent.
    OtherAscents,
    /// Composite indices.
    Composites,
}

impl Group {
    /// All, in the order shown.
    pub const ALL: [Self; 6] = [
        Self::Energy,
        Self::Levels,
        Self::Air,
        Self::Wind,
        Self::OtherAscents,
        Self::Composites,
    ];

    /// Its heading.
    pub fn title(self) -> &'static str {
        match self {
            Self::Energy => "CAPE and CIN in parts",
            Self::Levels => "Levels and heights",
            Self::Air => "Moisture and temperature",
            Self::Wind => "Wind",
            Self::OtherAscents => "Other kinds of ascent",
            Self::Composites => "Composite indices",
        }
    }

    /// Its numbers, in the order shown: those of each parcel first, then those of the whole profile.
    pub fn quantities(self) -> &'static [Quantity] {
        match self {
            Self::Energy => energy::QUANTITIES,
            Self::Levels => levels::QUANTITIES,
            Self::Air => air::QUANTITIES,
            Self::Wind => wind::QUANTITIES,
            Self::OtherAscents => other::QUANTITIES,
            Self::Composites => composite::QUANTITIES,
        }
    }
}

/// Every number there is, group by group.
pub fn all() -> impl Iterator<Item = &'static Quantity> {
    Group::ALL.into_iter().flat_map(Group::quantities)
}

/// Where a value is read.
#[derive(Debug, Clone, Copy)]
pub enum Of {
    /// One for each parcel.
    Parcel(fn(&Readings, Parcel) -> Option<Value>),
    /// One for the whole profile.
    Profile(fn(&Readings) -> Option<Value>),
}

/// Its range over the credible interval, and whether it is absent somewhere in there.
pub type RangeOf = fn(&ParcelRange) -> (Option<Extremes>, bool);

/// The declaration of one number.
#[derive(Debug, Clone, Copy)]
pub struct Quantity {
    /// Name in JSON, with its unit.
    pub key: &'static str,
    /// Name for people, short enough for a row of a table.
    pub label: &'static str,
    /// Unit.
    pub unit: Unit,
    /// Decimals shown.
    pub decimals: usize,
    /// Where it is shown.
    pub group: Group,
    /// Its value.
    pub of: Of,
    /// Its range; `None` for numbers shown without one.
    pub range: Option<RangeOf>,
    /// What it needs before anything else.
    pub needs: Needs,
    /// What it is.
    pub definition: &'static str,
    /// How it is computed here.
    pub method: &'static str,
    /// Where that comes from.
    pub source: &'static str,
    /// What it is computed from.
    pub inputs: &'static str,
    /// When there is none.
    pub absent: &'static str,
}

impl Quantity {
    /// There is one for each parcel.
    pub fn is_per_parcel(&self) -> bool {
        matches!(self.of, Of::Parcel(_))
    }

    /// Its value. A number of the whole profile is the same for every parcel. What is not finite is absent.
    pub fn value(&self, readings: &Readings, parcel: Parcel) -> Option<Value> {
        match self.of {
            Of::Parcel(of) => of(readings, parcel),
            Of::Profile(of) => of(readings),
        }
        .filter(Value::is_finite)
    }

    /// Why there is no value, in words that begin small and end without a stop.
    pub fn why_absent(&self, readings: &Readings, parcel: Parcel) -> String {
        self.needs
            .lacking(readings, parcel)
            .unwrap_or_else(|| self.absent.to_owned())
    }
}

/// The five numbers a forecaster looks for first: how much energy, how firmly it is held down, how low the cloud base would
/// be, whether storms would be organised, and whether the air they draw in turns with height.
///
/// The last is that of the effective inflow layer, not of a fixed one: before sunrise the lowest kilometres hold strong turning
/// that no storm above the cold air can use, and a fixed layer would count it.
pub const AT_A_GLANCE: [&str; 5] = [
    "cape_jkg",
    "cin_jkg",
    "lcl_m",
    "difference_0_to_6km_ms",
    "helicity_effective_m2s2",
];

/// The declarations of [`AT_A_GLANCE`].
pub fn at_a_glance() -> impl Iterator<Item = &'static Quantity> {
    of_keys(&AT_A_GLANCE)
}

/// The declarations of these keys, in this order; what is no key is left out.
pub(crate) fn of_keys(keys: &[&str]) -> impl Iterator<Item = &'static Quantity> {
    keys.iter()
        .filter_map(|key| all().find(|quantity| quantity.key == *key))
}
