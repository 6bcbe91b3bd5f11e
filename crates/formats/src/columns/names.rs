//! The names a header may use: one table, from which reading, error texts and documentation derive.

use dewbound_sounding::thermo::{Pressure, Temperature};

/// What a column holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) enum Quantity {
    Pressure,
    Temperature,
    Dewpoint,
    RelativeHumidity,
    MixingRatio,
    Height,
    HeightAboveGround,
    WindDirection,
    WindSpeed,
    Elapsed,
    Clock,
    Latitude,
    Longitude,
}

impl Quantity {
    /// How many there are.
    pub const COUNT: usize = 13;

    /// Place in an array of all quantities.
    pub const fn index(self) -> usize {
        self as usize
    }

    /// A bit of its own.
    pub const fn bit(self) -> u16 {
        1 << self as u16
    }
}

/// A unit: how to bring it to SI, and what is plausible in it.
#[derive(Debug)]
pub(crate) struct Unit {
    /// To SI (Pa, K, 1, kg/kg, m, m/s, s, degrees).
    pub to_si: fn(f64) -> f64,
    /// Below this no value is plausible, in this unit: only used to tell codes for "missing" from values.
    pub lowest: f64,
    /// Above this no value is plausible.
    pub largest: f64,
}

/// One column: what it holds, in which unit, and the names it goes by.
#[derive(Debug)]
pub(crate) struct Column {
    pub quantity: Quantity,
    /// The name this project writes.
    pub name: &'static str,
    /// Other spellings accepted.
    pub also: &'static [&'static str],
    pub unit: Unit,
}

const fn same(value: f64) -> f64 {
    value
}
const fn hundredth(value: f64) -> f64 {
    value / 100.0
}
const fn thousandth(value: f64) -> f64 {
    value / 1000.0
}
const fn hpa(value: f64) -> f64 {
    Pressure::from_hpa(value).pa()
}
const fn celsius(value: f64) -> f64 {
    Temperature::from_c(value).k()
}
const fn fahrenheit(value: f64) -> f64 {
    Temperature::from_f(value).k()
}
/// International foot, 0.3048 m exactly.
const fn feet(value: f64) -> f64 {
    value * 0.3048
}
/// International knot, 1852 m an hour exactly.
const fn knots(value: f64) -> f64 {
    value * 1852.0 / 3600.0
}
const fn kilometres_an_hour(value: f64) -> f64 {
    value / 3.6
}

const fn unit(to_si: fn(f64) -> f64, lowest: f64, largest: f64) -> Unit {
    Unit {
        to_si,
        lowest,
        largest,
    }
}

const fn column(
    quantity: Quantity,
    name: &'static str,
    also: &'static [&'static str],
    unit: Unit,
) -> Column {
    Column {
        quantity,
        name,
        also,
        unit,
    }
}

/// Every column understood, in the order in which they are named to people.
pub(crate) const COLUMNS: &[Column] = {
    use Quantity::*;
    &[
        column(
            Pressure,
            "pressure_hpa",
            &["pressure_mb", "pressure_mbar", "p_hpa"],
            unit(hpa, 0.0, 1200.0),
        ),
        column(
            Pressure,
            "pressure_pa",
            &["p_pa"],
            unit(same, 0.0, 120_000.0),
        ),
        column(
            Temperature,
            "temperature_c",
            &["temperature_degc", "temp_c", "air_temperature_c", "t_c"],
            unit(celsius, -150.0, 100.0),
        ),
        column(
            Temperature,
            "temperature_k",
            &["temp_k", "air_temperature_k", "t_k"],
            unit(same, 0.0, 400.0),
        ),
        column(
            Temperature,
            "temperature_f",
            &["temperature_degf", "temp_f", "air_temperature_f", "t_f"],
            unit(fahrenheit, -250.0, 200.0),
        ),
        column(
            Dewpoint,
            "dewpoint_c",
            &[
                "dewpoint_degc",
                "dew_point_c",
                "dewpoint_temperature_c",
                "td_c",
            ],
            unit(celsius, -250.0, 100.0),
        ),
        column(
            Dewpoint,
            "dewpoint_k",
            &["dew_point_k", "dewpoint_temperature_k", "td_k"],
            unit(same, 0.0, 400.0),
        ),
        column(
            Dewpoint,
            "dewpoint_f",
            &[
                "dewpoint_degf",
                "dew_point_f",
                "dewpoint_temperature_f",
                "td_f",
            ],
            unit(fahrenheit, -400.0, 200.0),
        ),
        column(
            RelativeHumidity,
            "rh_pct",
            &["relative_humidity_pct", "humidity_pct"],
            unit(hundredth, 0.0, 200.0),
        ),
        column(
            RelativeHumidity,
            "rh_1",
            &["relative_humidity_1"],
            unit(same, 0.0, 2.0),
        ),
        column(
            MixingRatio,
            "mixing_ratio_gkg",
            &["mixing_ratio_g_kg"],
            unit(thousandth, 0.0, 100.0),
        ),
        column(
            MixingRatio,
            "mixing_ratio_kgkg",
            &["mixing_ratio_kg_kg", "mixing_ratio_1"],
            unit(same, 0.0, 0.1),
        ),
        column(
            Height,
            "height_m",
            &["height_msl_m", "height_asl_m", "geopotential_height_m"],
            unit(same, -500.0, 60_000.0),
        ),
        column(
            Height,
            "height_ft",
            &["height_msl_ft", "height_asl_ft"],
            unit(feet, -1600.0, 200_000.0),
        ),
        column(
            HeightAboveGround,
            "height_agl_m",
            &["height_above_ground_m"],
            unit(same, -500.0, 60_000.0),
        ),
        column(
            HeightAboveGround,
            "height_agl_ft",
            &["height_above_ground_ft"],
            unit(feet, -1600.0, 200_000.0),
        ),
        column(
            WindDirection,
            "wind_dir_deg",
            &["wind_direction_deg", "wind_from_direction_deg"],
            unit(same, 0.0, 360.0),
        ),
        column(
            WindSpeed,
            "wind_speed_ms",
            &["wind_speed_m_s", "wind_speed_mps"],
            unit(same, 0.0, 300.0),
        ),
        column(
            WindSpeed,
            "wind_speed_kt",
            &["wind_speed_kn", "wind_speed_kts", "wind_speed_knots"],
            unit(knots, 0.0, 600.0),
        ),
        column(
            WindSpeed,
            "wind_speed_kmh",
            &["wind_speed_km_h"],
            unit(kilometres_an_hour, 0.0, 998.0),
        ),
        // A dropsonde's clock may run below zero for longer than 999 s.
        column(
            Elapsed,
            "time_s",
            &["elapsed_s", "elapsed_time_s", "time_elapsed_s"],
            unit(same, -9_000.0, 50_000.0),
        ),
        // Seconds of the day, or since 1970 where the field carries a date.
        column(
            Clock,
            "time_utc",
            &["clock_utc", "datetime_utc"],
            unit(same, 0.0, 1e11),
        ),
        column(
            Latitude,
            "lat",
            &["latitude", "lat_deg", "latitude_deg"],
            unit(same, -90.0, 90.0),
        ),
        column(
            Longitude,
            "lon",
            &["longitude", "lon_deg", "longitude_deg"],
            unit(same, -180.0, 360.0),
        ),
    ]
};

/// Names that say what but not in which unit, with the quantity meant.
const WITHOUT_UNIT: &[(Quantity, &[&str])] = &[
    (Quantity::Pressure, &["pressure", "pres", "press", "p"]),
    (
        Quantity::Temperature,
        &["temperature", "temp", "t", "air_temperature"],
    ),
    (
        Quantity::Dewpoint,
        &["dewpoint", "dew_point", "td", "dewpoint_temperature"],
    ),
    (
        Quantity::RelativeHumidity,
        &["rh", "relative_humidity", "humidity"],
    ),
    (Quantity::MixingRatio, &["mixing_ratio"]),
    (
        Quantity::Height,
        &["height", "altitude", "geopotential_height"],
    ),
    (Quantity::WindDirection, &["wind_dir", "wind_direction"]),
    (Quantity::WindSpeed, &["wind_speed"]),
    (Quantity::Elapsed, &["time", "elapsed"]),
];

/// The column a plain name (see [`crate::delimited::plain_name`]) stands for.
pub(crate) fn column_named(plain: &str) -> Option<&'static Column> {
    COLUMNS
        .iter()
        .find(|column| column.name == plain || column.also.contains(&plain))
}

/// For a name that lacks its unit: the names that carry one.
pub(crate) fn names_with_unit(plain: &str) -> Option<Vec<&'static str>> {
    let (quantity, _) = WITHOUT_UNIT
        .iter()
        .find(|(_, names)| names.contains(&plain))?;
    Some(
        COLUMNS
            .iter()
            .filter(|column| column.quantity == *quantity)
            .map(|column| column.name)
            .collect(),
    )
}

/// Names a header of columns may use (further spellings are forgiven), in the order in which people should read them.
pub fn understood() -> Vec<&'static str> {
    COLUMNS.iter().map(|column| column.name).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::delimited::plain_name;
    use approx::assert_relative_eq;

    #[test]
    fn every_name_is_plain_and_stands_for_one_column() {
        let mut seen = std::collections::BTreeSet::new();
        for column in COLUMNS {
            for name in std::iter::once(&column.name).chain(column.also) {
                assert_eq!(plain_name(name), *name);
                assert!(seen.insert(*name), "{name} twice");
                assert_eq!(column_named(name).unwrap().name, column.name);
            }
            assert!(column.quantity.index() < Quantity::COUNT);
        }
    }

    #[test]
    fn the_crate_s_page_names_every_column() {
        let page = include_str!("../lib.rs");
        for name in understood() {
            assert!(page.contains(&format!("`{name}`")), "{name}");
        }
    }

    #[test]
    fn a_name_without_unit_suggests_those_with_one() {
        assert_eq!(
            names_with_unit("temp").unwrap(),
            ["temperature_c", "temperature_k", "temperature_f"]
        );
        assert_eq!(names_with_unit("colour"), None);
        for (_, names) in WITHOUT_UNIT {
            for name in *names {
                assert!(column_named(name).is_none(), "{name} would carry a unit");
            }
        }
    }

    /// Exact by definition (SI brochure; international foot and knot).
    #[test]
    fn units() {
        let si = |name, value| (column_named(name).unwrap().unit.to_si)(value);
        assert_relative_eq!(si("pressure_hpa", 1013.25), 101_325.0);
        assert_relative_eq!(si("temperature_c", -40.0), 233.15);
        assert_relative_eq!(si("temperature_f", -40.0), 233.15);
        assert_relative_eq!(si("dewpoint_f", 212.0), 373.15);
        assert_relative_eq!(si("rh_pct", 50.0), 0.5);
        assert_relative_eq!(si("mixing_ratio_gkg", 12.0), 0.012);
        assert_relative_eq!(si("height_ft", 1000.0), 304.8);
        assert_relative_eq!(si("wind_speed_kt", 36.0), 18.52);
        assert_relative_eq!(si("wind_speed_kmh", 36.0), 10.0);
    }
}
