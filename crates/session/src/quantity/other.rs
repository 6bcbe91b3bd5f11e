//! CAPE by other kinds of ascent: how much the choice of method is worth.

use super::readings::index;
use super::{Group, Needs, Of, Quantity, Readings, Unit, Value};
use crate::sounding::{OtherAscents, Parcel};

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "cape_direct_jkg",
        label: "Integrated",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::OtherAscents,
        of: Of::Parcel(|readings, parcel| of_other(readings, parcel, |other| other.direct)),
        range: None,
        needs: Needs::OtherAscents,
        definition: "CAPE of the same parcel by the pseudo-adiabatic lapse rate, integrated step by step.",
        method: "Condensate falls out at once; latent heat by Kirchhoff's equation. Virtual temperature on both sides.",
        source: "Pseudo-adiabatic lapse rate of the AMS Glossary of Meteorology, from memory",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cape_reversible_jkg",
        label: "Reversible",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::OtherAscents,
        of: Of::Parcel(|readings, parcel| of_other(readings, parcel, |other| other.reversible)),
        range: None,
        needs: Needs::OtherAscents,
        definition: "CAPE of the same parcel when all condensate is kept and its weight counts.",
        method: "Condensate stores heat, and its weight counts in the density temperature.",
        source: "Emanuel 1994 (Atmospheric Convection), eq. 4.3.6, from memory",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cape_without_virtual_jkg",
        label: "Not virtual",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::OtherAscents,
        of: Of::Parcel(|readings, parcel| {
            of_other(readings, parcel, |other| other.without_virtual)
        }),
        range: None,
        needs: Needs::OtherAscents,
        definition: "CAPE of the same parcel with temperature in place of virtual temperature on both sides.",
        method: "As CAPE in everything else.",
        source: "Doswell and Rasmussen 1994 (WAF 9) on what the difference means",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cape_direct_with_ice_jkg",
        label: "Integrated, ice",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::OtherAscents,
        of: Of::Parcel(|readings, parcel| {
            of_other(readings, parcel, |other| other.direct_with_ice)
        }),
        range: None,
        needs: Needs::OtherAscents,
        definition: "CAPE of the same parcel by the pseudo-adiabatic lapse rate, with freezing.",
        method: "Water above 0 °C, ice below −20 °C, between them a mixture linear in temperature; all condensate falls out at once.",
        source: "The two temperatures: common practice, no source",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cape_reversible_with_ice_jkg",
        label: "Reversible, ice",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::OtherAscents,
        of: Of::Parcel(|readings, parcel| {
            of_other(readings, parcel, |other| other.reversible_with_ice)
        }),
        range: None,
        needs: Needs::OtherAscents,
        definition: "CAPE of the same parcel when all condensate is kept, with freezing.",
        method: "Water above 0 °C, ice below −20 °C, between them a mixture linear in temperature; its weight reduces buoyancy.",
        source: "The two temperatures: common practice, no source",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
];

/// CAPE of one parcel by one of the other kinds; a lower limit where that of the default ascent is one.
fn of_other(
    readings: &Readings,
    parcel: Parcel,
    kind: fn(&OtherAscents) -> [Option<f64>; 3],
) -> Option<Value> {
    let cape = kind(readings.other?)
        .get(index(parcel))
        .copied()
        .flatten()?;
    Some(Value::limit(cape, readings.at_least(parcel)))
}
