//! Levels and heights.

use super::energy::{DOWNDRAFT, DOWNDRAFT_SOURCE, NO_DOWNDRAFT, of_parcel};
use super::{Group, Needs, Of, Quantity, Unit, Value};

const INFLOW: &str = "The lowest contiguous air whose own parcels have at least 100 J/kg of CAPE and CIN of at least \
     −250 J/kg; starts every 5 hPa from the lowest level up, edges refined at the levels between.";
const NO_INFLOW: &str = "no air has enough CAPE with little enough CIN";
const MIXED_PARCEL: &str =
    "virtual potential temperature rises from the ground on, or never above its value there";
const MIXED_RICHARDSON: &str =
    "there is no wind at the lowest level, or the number never exceeds its limit";

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "start_hpa",
        label: "Start",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.start.pressure.pa()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Pressure where the parcel starts.",
        method: "The surface level; the same with the means of the lowest 100 hPa; the received level of largest equivalent potential temperature in the lowest 300 hPa.",
        source: "Convention of this program",
        inputs: "pressure, temperature and dew point of the lowest 300 hPa",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "lcl_m",
        label: "LCL height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?.lcl_height.map(Value::Number)
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Height of the lifting condensation level above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "LCL; temperature and dew point from the lowest level up to it",
        absent: "there is no parcel, or its condensation level lies above the profile",
    },
    Quantity {
        key: "lcl_hpa",
        label: "LCL",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.lcl.pressure.pa()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Lifting condensation level: where the rising parcel is first saturated.",
        method: "Temperature by eq. 15; pressure along the potential temperature of moist air.",
        source: "Bolton 1980 (MWR 108), eq. 15",
        inputs: "start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "lfc_hpa",
        label: "LFC",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .and_then(|ascent| ascent.lfc.map(|level| Value::Number(level.pa())))
        }),
        range: None,
        needs: Needs::FreeConvection,
        definition: "Level of free convection: base of the buoyant layer with the largest area.",
        method: "Exact zero crossing of the difference of virtual temperatures; the condensation level where the parcel is buoyant from there on.",
        source: "Convention of this program",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no parcel, or no free convection: nowhere above its condensation level is the parcel lighter than its surroundings",
    },
    Quantity {
        key: "lfc_m",
        label: "LFC height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?.lfc_height.map(Value::Number)
        }),
        range: None,
        needs: Needs::FreeConvection,
        definition: "Height of the level of free convection above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "LFC; temperature and dew point up to it",
        absent: "there is no parcel, or no free convection: nowhere above its condensation level is the parcel lighter than its surroundings",
    },
    Quantity {
        key: "el_hpa",
        label: "EL",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .and_then(|ascent| ascent.el.map(|level| Value::Number(level.pa())))
        }),
        range: None,
        needs: Needs::EquilibriumLevel,
        definition: "Equilibrium level: top of the highest buoyant layer.",
        method: "Exact zero crossing of the difference of virtual temperatures.",
        source: "Convention of this program",
        inputs: "temperature and dew point of every level, start of the parcel",
        absent: "there is no free convection, or the parcel is still lighter than its surroundings where the profile ends",
    },
    Quantity {
        key: "el_m",
        label: "EL height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            of_parcel(readings, parcel)?.el_height.map(Value::Number)
        }),
        range: None,
        needs: Needs::EquilibriumLevel,
        definition: "Height of the equilibrium level above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "EL; temperature and dew point up to it",
        absent: "there is no free convection, or the parcel is still lighter than its surroundings where the profile ends",
    },
    Quantity {
        key: "convective_level_hpa",
        label: "CCL",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            let convective = of_parcel(readings, parcel)?.convective?;
            Some(Value::Number(convective.level.pressure.pa()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Convective condensation level: base of the cumulus that heating from below alone would make.",
        method: "The lowest level at or above the start where the temperature of the surroundings falls to the dew point of the parcel's mixing ratio; the start itself where they are that cold already.",
        source: "Common practice, no source",
        inputs: "mixing ratio of the parcel, temperature of the levels above",
        absent: "there is no parcel, or the surroundings are nowhere that cold",
    },
    Quantity {
        key: "convective_level_m",
        label: "CCL height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Parcel(|readings, parcel| {
            let convective = of_parcel(readings, parcel)?.convective?;
            Some(Value::Number(convective.level.height))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Height of the convective condensation level above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "CCL; temperature and dew point up to it",
        absent: "there is no parcel, or the surroundings are nowhere that cold",
    },
    Quantity {
        key: "lowest_usable_hpa",
        label: "Lowest usable level",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            let from = readings.numbers.starts_at?;
            Some(Value::Number(from.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Where the mixed and the most unstable parcel start, and heights begin, when the surface is unusable.",
        method: "The lowest level with temperature and humidity.",
        source: "Convention of this program",
        inputs: "levels as received",
        absent: "the surface itself is usable",
    },
    Quantity {
        key: "most_unstable_is_surface",
        label: "Most unstable = surface",
        unit: Unit::None,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings.numbers.most_unstable.as_ref()?;
            Some(Value::YesNo(readings.numbers.most_unstable_is_surface))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Whether the most unstable parcel is the surface parcel.",
        method: "Yes when the level of largest equivalent potential temperature is the surface level.",
        source: "Convention of this program",
        inputs: "start of the most unstable parcel",
        absent: "there is no most unstable parcel",
    },
    Quantity {
        key: "freezing_level_m",
        label: "Freezing level height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .freezing_level
                .map(|level| Value::Number(level.height))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Height above the lowest usable level of the lowest level where temperature falls to 0 °C.",
        method: "Temperature linear in the logarithm of pressure between levels; height by the hypsometric equation.",
        source: "Convention of this program",
        inputs: "temperature and dew point up to it",
        absent: "the lowest level is at 0 °C or colder, or it never freezes above",
    },
    Quantity {
        key: "freezing_level_hpa",
        label: "Freezing level",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .freezing_level
                .map(|level| Value::Number(level.pressure.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "The lowest level where temperature falls to 0 °C.",
        method: "Temperature linear in the logarithm of pressure between levels.",
        source: "Convention of this program",
        inputs: "temperature",
        absent: "the lowest level is at 0 °C or colder, or it never freezes above",
    },
    Quantity {
        key: "wet_bulb_zero_m",
        label: "Wet-bulb zero height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .wet_bulb_zero
                .map(|level| Value::Number(level.height))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Height above the lowest usable level of the lowest level where the wet-bulb temperature falls to 0 °C.",
        method: "Where equivalent potential temperature is that of saturated air of 0 °C; exact on the interpolated profile; height by the hypsometric equation.",
        source: "Bolton 1980 (MWR 108), eq. 39",
        inputs: "temperature and dew point up to it",
        absent: "the wet bulb is at 0 °C or below at the lowest level, or humidity ends first",
    },
    Quantity {
        key: "wet_bulb_zero_hpa",
        label: "Wet-bulb zero",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .wet_bulb_zero
                .map(|level| Value::Number(level.pressure.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "The lowest level where the wet-bulb temperature falls to 0 °C.",
        method: "Where equivalent potential temperature is that of saturated air of 0 °C; exact on the interpolated profile.",
        source: "Pseudo-adiabat: Bolton 1980 (MWR 108), eq. 39",
        inputs: "temperature and dew point",
        absent: "the wet bulb is at 0 °C or below at the lowest level, or humidity ends first",
    },
    Quantity {
        key: "inflow_bottom_m",
        label: "Inflow base height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .inflow
                .map(|layer| Value::Number(layer.bottom.height))
        }),
        range: None,
        needs: Needs::Inflow,
        definition: "Height of the base of the effective inflow layer above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "base of the inflow layer",
        absent: NO_INFLOW,
    },
    Quantity {
        key: "inflow_bottom_hpa",
        label: "Inflow base",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .inflow
                .map(|layer| Value::Number(layer.bottom.pressure.pa()))
        }),
        range: None,
        needs: Needs::Inflow,
        definition: "Base of the effective inflow layer: the lowest level from which air can rise freely.",
        method: INFLOW,
        source: "Thompson, Mead and Edwards 2007 (WAF 22)",
        inputs: "temperature and dew point of every level",
        absent: NO_INFLOW,
    },
    Quantity {
        key: "inflow_top_m",
        label: "Inflow top height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .inflow
                .map(|layer| Value::Number(layer.top.height))
        }),
        range: None,
        needs: Needs::Inflow,
        definition: "Height of the top of the effective inflow layer above the lowest usable level.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "top of the inflow layer",
        absent: NO_INFLOW,
    },
    Quantity {
        key: "inflow_top_hpa",
        label: "Inflow top",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .inflow
                .map(|layer| Value::Number(layer.top.pressure.pa()))
        }),
        range: None,
        needs: Needs::Inflow,
        definition: "Top of the effective inflow layer.",
        method: INFLOW,
        source: "Thompson, Mead and Edwards 2007 (WAF 22)",
        inputs: "temperature and dew point of every level",
        absent: NO_INFLOW,
    },
    Quantity {
        key: "mixed_layer_by_parcel_m",
        label: "Mixed top, parcel, height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .mixed_layer_by_parcel
                .map(|level| Value::Number(level.height))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Height above the lowest usable level of the top of the mixed layer by the parcel method.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "the same top",
        absent: MIXED_PARCEL,
    },
    Quantity {
        key: "mixed_layer_by_parcel_hpa",
        label: "Mixed top, parcel",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .mixed_layer_by_parcel
                .map(|level| Value::Number(level.pressure.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Top of the mixed layer by the parcel method: how high air from the ground rises without condensing.",
        method: "Where virtual potential temperature first rises above that of the lowest usable level.",
        source: "Holzworth 1964 (MWR 92), from memory",
        inputs: "temperature and dew point",
        absent: MIXED_PARCEL,
    },
    Quantity {
        key: "mixed_layer_by_richardson_m",
        label: "Mixed top, Richardson, height",
        unit: Unit::Height,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .mixed_layer_by_richardson
                .map(|level| Value::Number(level.height))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Height above the lowest usable level of the top of the mixed layer by the bulk Richardson number.",
        method: "Height of the pressure level by the hypsometric equation with virtual temperature, above the lowest usable level.",
        source: "Hypsometric equation",
        inputs: "the same top",
        absent: MIXED_RICHARDSON,
    },
    Quantity {
        key: "mixed_layer_by_richardson_hpa",
        label: "Mixed top, Richardson",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .mixed_layer_by_richardson
                .map(|level| Value::Number(level.pressure.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Top of the mixed layer by the bulk Richardson number: how high turbulence of heat and wind together reaches.",
        method: "Where the bulk Richardson number from the lowest usable level up first exceeds 0.25, the wind at the ground set to zero.",
        source: "Vogelezang and Holtslag 1996, Seidel et al. 2012, from memory",
        inputs: "temperature, dew point and wind",
        absent: MIXED_RICHARDSON,
    },
    Quantity {
        key: "downdraft_origin_hpa",
        label: "Downdraft origin",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Levels,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .downdraft
                .map(|downdraft| Value::Number(downdraft.origin.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Where the air of the downdraft comes from: centre of the layer of least mean equivalent potential temperature.",
        method: DOWNDRAFT,
        source: DOWNDRAFT_SOURCE,
        inputs: "temperature and dew point of the lowest 400 hPa",
        absent: NO_DOWNDRAFT,
    },
];
