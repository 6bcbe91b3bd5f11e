//! CAPE, CIN and their parts.

use super::readings::index;
use super::{Group, Needs, Of, Quantity, Readings, Unit, Value};
use crate::sounding::Parcel;
use crate::thermo::ParcelNumbers;

pub(super) const DOWNDRAFT: &str = "Of all layers 100 hPa deep in the lowest 400 hPa the one of least mean equivalent potential \
     temperature; its air, saturated at the centre of the layer, sinks along the pseudo-adiabat; virtual temperature on both \
     sides; only stretches where it is colder than its surroundings count.";
pub(super) const DOWNDRAFT_SOURCE: &str =
    "After Gilmore and Wicker 1998 (MWR 126) and Emanuel 1994, from memory";
pub(super) const NO_DOWNDRAFT: &str = "humidity is known through less than 400 hPa";

const PSEUDO: &str = "The parcel follows constant potential temperature to its condensation level and constant equivalent \
     potential temperature above; virtual temperature on both sides; exact zero crossings.";

/// Further numbers of a parcel.
pub(super) fn of_parcel<'a>(readings: &'a Readings, parcel: Parcel) -> Option<&'a ParcelNumbers> {
    readings.further.parcels.get(index(parcel))?.as_ref()
}

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "cape_jkg",
        label: "CAPE",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::limit(ascent.cape, ascent.at_least))
        }),
        range: Some(|range| (range.cape, false)),
        needs: Needs::Parcel,
        definition: "Convective available potential energy: all positive area between the parcel and its surroundings above its condensation level, up to the equilibrium level.",
        method: PSEUDO,
        source: "Bolton 1980 (MWR 108), eq. 10, 15, 39; Doswell and Rasmussen 1994 (WAF 9) for the virtual temperature",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cin_jkg",
        label: "CIN",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .and_then(|ascent| ascent.cin.map(Value::Number))
        }),
        range: Some(|range| (range.cin, range.sometimes_no_free_convection)),
        needs: Needs::FreeConvection,
        definition: "Convective inhibition: all negative area from the start to the level of free convection, as a number of at most 0. In its range the strongest cap comes first.",
        method: PSEUDO,
        source: "As for CAPE",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no parcel, or no free convection: nowhere above its condensation level is the parcel lighter than its surroundings",
    },
    Quantity {
        key: "cape_at_least",
        label: "Lower limit",
        unit: Unit::None,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::YesNo(ascent.at_least))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Whether CAPE is only a lower limit, shown with the sign ≥.",
        method: "Yes when the parcel is still lighter than its surroundings where the profile ends, or when the profile ends below 200 hPa, that is at a higher pressure.",
        source: "Convention of this program",
        inputs: "highest level with a temperature, buoyancy there",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "cape_below_3km_jkg",
        label: "CAPE to 3 km",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?
                .cape_below_3km
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "The part of CAPE below 3 km above the lowest usable level.",
        method: "As CAPE, cut off exactly where the height from the hypsometric equation is 3 km. Zero where the parcel is nowhere lighter below that.",
        source: "Height: hypsometric equation. The depth of 3 km is common practice, no source",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no parcel, or the profile ends below 3 km",
    },
    Quantity {
        key: "cape_in_growth_zone_jkg",
        label: "Hail-zone CAPE",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            let cape = of_parcel(readings, parcel)?.cape_in_growth_zone?;
            Some(Value::limit(cape, readings.at_least(parcel)))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "The part of CAPE where the surroundings are between −10 and −30 °C, where hail grows.",
        method: "As CAPE, of every layer whose surroundings are between the two temperatures, cut exactly where they are crossed. A lower limit where CAPE is one.",
        source: "The two temperatures are common practice, no source",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no parcel, or nothing of the profile above its condensation level lies between the two temperatures",
    },
    Quantity {
        key: "cape_humidity_held_jkg",
        label: "CAPE, RH held",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            let held = readings.numbers.cape_humidity_held?;
            let cape = held.get(index(parcel)).copied().flatten()?;
            Some(Value::limit(cape, readings.at_least(parcel)))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "CAPE with the relative humidity of the last known dew point kept above it, instead of dry air.",
        method: "As CAPE, with the levels that have no dew point filled so. Shown beside CAPE where humidity ends below 500 hPa.",
        source: "Convention of this program",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "humidity is known up to 500 hPa or higher, or there is no parcel",
    },
    Quantity {
        key: "normalised_cape_ms2",
        label: "CAPE / depth",
        unit: Unit::Acceleration,
        decimals: 2,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?
                .normalised_cape
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::EquilibriumLevel,
        definition: "CAPE divided by the depth of the layer from the level of free convection to the equilibrium level: the mean buoyant acceleration.",
        method: "CAPE over the difference of the two heights.",
        source: "Blanchard 1998 (WAF 13), from memory",
        inputs: "CAPE, heights of LFC and EL",
        absent: "there is no free convection, or the parcel is still lighter than its surroundings where the profile ends",
    },
    Quantity {
        key: "lifted_index_k",
        label: "Lifted index",
        unit: Unit::Kelvin,
        decimals: 1,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?.lifted_index.map(Value::Number)
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Temperature of the surroundings minus that of the parcel at 500 hPa. Negative: the parcel is warmer.",
        method: "The parcel of CAPE at 500 hPa by exact solution; plain temperatures, without the virtual correction.",
        source: "Galway 1956 (BAMS 37), from memory; here with the three parcels of this program",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no parcel, or the profile doesn't reach 500 hPa, or the parcel starts above it",
    },
    Quantity {
        key: "buoyant_layers",
        label: "Buoyant layers",
        unit: Unit::None,
        decimals: 0,
        group: Group::Energy,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.buoyant.len() as f64))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "How many separate layers above its condensation level the parcel is lighter than its surroundings in.",
        method: "Exact zero crossings of the difference of virtual temperatures; areas below 0.0001 J/kg make no layer and split none.",
        source: "Convention of this program",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "downdraft_cape_jkg",
        label: "Downdraft CAPE",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .downdraft
                .map(|downdraft| Value::Number(downdraft.cape))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Energy that air kept saturated by evaporating rain gains while it sinks to the lowest usable level, at least 0.",
        method: DOWNDRAFT,
        source: DOWNDRAFT_SOURCE,
        inputs: "temperature and dew point of the lowest 400 hPa",
        absent: NO_DOWNDRAFT,
    },
    Quantity {
        key: "downdraft_warmer_jkg",
        label: "Downdraft, warmer part",
        unit: Unit::Energy,
        decimals: 0,
        group: Group::Energy,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .downdraft
                .map(|downdraft| Value::Number(downdraft.warmer))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "What the stretches where the sinking air is warmer than its surroundings would take from downdraft CAPE, at most 0; not counted there.",
        method: DOWNDRAFT,
        source: DOWNDRAFT_SOURCE,
        inputs: "temperature and dew point of the lowest 400 hPa",
        absent: NO_DOWNDRAFT,
    },
];
