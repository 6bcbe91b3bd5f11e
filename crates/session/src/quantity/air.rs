//! Moisture and temperature.

use super::energy::{DOWNDRAFT, DOWNDRAFT_SOURCE, NO_DOWNDRAFT, of_parcel};
use super::{Group, Needs, Of, Quantity, Unit, Value};

/// All of this group.
pub(super) const QUANTITIES: &[Quantity] = &[
    Quantity {
        key: "theta_e_k",
        label: "θe",
        unit: Unit::Kelvin,
        decimals: 1,
        group: Group::Air,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.theta_e.k()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Equivalent potential temperature of the parcel at its start.",
        method: "From temperature, pressure and mixing ratio at the start.",
        source: "Bolton 1980 (MWR 108), eq. 39",
        inputs: "start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "start_c",
        label: "Start T",
        unit: Unit::Temperature,
        decimals: 1,
        group: Group::Air,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.start.temperature.k()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Temperature of the parcel at its start.",
        method: "For the mixed parcel from the mean potential temperature of the lowest 100 hPa.",
        source: "Convention of this program",
        inputs: "temperature of the start, or of the lowest 100 hPa",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "start_dewpoint_c",
        label: "Start Td",
        unit: Unit::Temperature,
        decimals: 1,
        group: Group::Air,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.start.dewpoint.k()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Dew point of the parcel at its start.",
        method: "For the mixed parcel from the mean mixing ratio of the lowest 100 hPa.",
        source: "Convention of this program",
        inputs: "dew point of the start, or of the lowest 100 hPa",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "lcl_c",
        label: "LCL T",
        unit: Unit::Temperature,
        decimals: 1,
        group: Group::Air,
        of: Of::Parcel(|readings, parcel| {
            readings
                .ascent(parcel)
                .map(|ascent| Value::Number(ascent.lcl.temperature.k()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Temperature of the parcel at its condensation level.",
        method: "Eq. 15 from temperature and dew point at the start.",
        source: "Bolton 1980 (MWR 108), eq. 15",
        inputs: "start of the parcel",
        absent: "no parcel can be formed: no temperature or no humidity where it would start",
    },
    Quantity {
        key: "convective_temperature_c",
        label: "Convective T",
        unit: Unit::Temperature,
        decimals: 1,
        group: Group::Air,
        of: Of::Parcel(|readings, parcel| {
            let convective = of_parcel(readings, parcel)?.convective?;
            Some(Value::Number(convective.temperature.k()))
        }),
        range: None,
        needs: Needs::Parcel,
        definition: "Temperature the lowest usable level must reach for cumulus to form by heating alone.",
        method: "From the convective condensation level down along constant potential temperature.",
        source: "Common practice, no source",
        inputs: "CCL",
        absent: "there is no parcel, or the surroundings are nowhere that cold",
    },
    Quantity {
        key: "precipitable_water_mm",
        label: "Precipitable water",
        unit: Unit::Water,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .precipitable_water
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Water vapour over the lowest usable level, as a depth of water.",
        method: "Integral of the mixing ratio over pressure, divided by g, up to the last known humidity. The mass of vapour itself is about 1 % less.",
        source: "AMS Glossary of Meteorology, from memory",
        inputs: "pressure and dew point",
        absent: "humidity is known at the lowest level only",
    },
    Quantity {
        key: "humidity_lowest_100hpa_pct",
        label: "Humidity, lowest 100 hPa",
        unit: Unit::Percent,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .humidity_lowest_100hpa
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean relative humidity over water of the lowest 100 hPa.",
        method: "Integral mean over pressure.",
        source: "Saturation: Bolton 1980 (MWR 108), eq. 10; the depth: common practice, no source",
        inputs: "temperature and dew point",
        absent: "humidity is not known through the layer",
    },
    Quantity {
        key: "humidity_700_to_500hpa_pct",
        label: "Humidity, 700–500 hPa",
        unit: Unit::Percent,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .humidity_700_to_500hpa
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean relative humidity over water from 700 to 500 hPa.",
        method: "Integral mean over pressure.",
        source: "Saturation: Bolton 1980 (MWR 108), eq. 10; the layer: common practice, no source",
        inputs: "temperature and dew point",
        absent: "humidity is not known through the layer",
    },
    Quantity {
        key: "lapse_rate_0_to_3km_kkm",
        label: "Lapse rate, 0–3 km",
        unit: Unit::LapseRate,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| readings.further.layers.lapse_rate_to_3km.map(Value::Number)),
        range: None,
        needs: Needs::Environment,
        definition: "Mean fall of temperature with height from the lowest usable level to 3 km above it.",
        method: "Difference of the temperatures of the two levels over their distance; temperature itself, not virtual.",
        source: "Common practice, no source",
        inputs: "temperature, and the heights of the two levels",
        absent: "the profile ends below 3 km",
    },
    Quantity {
        key: "lapse_rate_3_to_6km_kkm",
        label: "Lapse rate, 3–6 km",
        unit: Unit::LapseRate,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .lapse_rate_3_to_6km
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean fall of temperature with height from 3 to 6 km above the lowest usable level.",
        method: "Difference of the temperatures of the two levels over their distance; temperature itself, not virtual.",
        source: "Common practice, no source",
        inputs: "temperature, and the heights of the two levels",
        absent: "the profile ends below 6 km",
    },
    Quantity {
        key: "lapse_rate_850_to_500hpa_kkm",
        label: "Lapse rate, 850–500 hPa",
        unit: Unit::LapseRate,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .lapse_rate_850_to_500hpa
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean fall of temperature with height from 850 to 500 hPa.",
        method: "Difference of the temperatures of the two levels over their distance; temperature itself, not virtual.",
        source: "Common practice, no source",
        inputs: "temperature, and the heights of the two levels",
        absent: "the profile starts above 850 hPa or ends below 500 hPa",
    },
    Quantity {
        key: "lapse_rate_700_to_500hpa_kkm",
        label: "Lapse rate, 700–500 hPa",
        unit: Unit::LapseRate,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .lapse_rate_700_to_500hpa
                .map(Value::Number)
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean fall of temperature with height from 700 to 500 hPa.",
        method: "Difference of the temperatures of the two levels over their distance; temperature itself, not virtual.",
        source: "Common practice, no source",
        inputs: "temperature, and the heights of the two levels",
        absent: "the profile starts above 700 hPa or ends below 500 hPa",
    },
    Quantity {
        key: "downdraft_wet_bulb_c",
        label: "Downdraft wet bulb",
        unit: Unit::Temperature,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .downdraft
                .map(|downdraft| Value::Number(downdraft.wet_bulb.k()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Wet-bulb temperature of the air the downdraft starts with, at its origin.",
        method: DOWNDRAFT,
        source: DOWNDRAFT_SOURCE,
        inputs: "temperature and dew point of the lowest 400 hPa",
        absent: NO_DOWNDRAFT,
    },
    Quantity {
        key: "downdraft_theta_e_k",
        label: "Downdraft θe",
        unit: Unit::Kelvin,
        decimals: 1,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .further
                .layers
                .downdraft
                .map(|downdraft| Value::Number(downdraft.theta_e.k()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Mean equivalent potential temperature of the layer the downdraft starts from.",
        method: DOWNDRAFT,
        source: DOWNDRAFT_SOURCE,
        inputs: "temperature and dew point of the lowest 400 hPa",
        absent: NO_DOWNDRAFT,
    },
    Quantity {
        key: "humidity_ends_hpa",
        label: "Humidity ends at",
        unit: Unit::Pressure,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            let above = readings.numbers.humidity?.dry_above?;
            Some(Value::Number(above.pa()))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "The last level with a dew point; the air above counts as dry.",
        method: "Highest level with a dew point, where levels above have none.",
        source: "Convention of this program",
        inputs: "levels as received",
        absent: "every level up to the highest has a dew point",
    },
    Quantity {
        key: "levels_counted_dry",
        label: "Levels counted as dry",
        unit: Unit::None,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .numbers
                .humidity
                .map(|known| Value::Number(known.dry as f64))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Levels above the last known dew point, counted as dry.",
        method: "Counted.",
        source: "Convention of this program",
        inputs: "levels as received",
        absent: "there is no parcel",
    },
    Quantity {
        key: "levels_interpolated",
        label: "Levels with filled dew point",
        unit: Unit::None,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .numbers
                .humidity
                .map(|known| Value::Number(known.interpolated as f64))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Levels between known dew points whose own is interpolated.",
        method: "Counted; dew point linear in the logarithm of pressure.",
        source: "Convention of this program",
        inputs: "levels as received",
        absent: "there is no parcel",
    },
    Quantity {
        key: "levels_counted_saturated",
        label: "Levels above saturation",
        unit: Unit::None,
        decimals: 0,
        group: Group::Air,
        of: Of::Profile(|readings| {
            readings
                .numbers
                .humidity
                .map(|known| Value::Number(known.above_saturation as f64))
        }),
        range: None,
        needs: Needs::Environment,
        definition: "Levels whose dew point is above their temperature and counts as saturation.",
        method: "Counted.",
        source: "Convention of this program",
        inputs: "levels as received",
        absent: "there is no parcel",
    },
];
