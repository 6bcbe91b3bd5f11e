//! The text of a station table: which field holds what, rows read and written.

use super::place::{position, wmo_number};
use crate::delimited::{Delimiter, plain_name};
use crate::number::{self, Cell};
use dewbound_sounding::Station;

/// The columns of the table, in the order in which a new one is written.
pub(super) const COLUMNS: [&str; 7] = ["wmo", "wigos", "icao", "name", "lat", "lon", "elevation_m"];

/// Column by any of its names.
pub(super) fn column(plain: &str) -> Option<usize> {
    let name = match plain {
        "latitude" => "lat",
        "longitude" => "lon",
        "elevation" => "elevation_m",
        name => name,
    };
    COLUMNS.iter().position(|column| *column == name)
}

/// Lowest and highest ground, m, with room to spare.
pub(super) const ELEVATIONS: std::ops::RangeInclusive<f64> = -500.0..=9_000.0;

/// Where the columns stand in the text.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Layout {
    pub delimiter: Delimiter,
    /// Index of the header line.
    pub line: usize,
    /// For every field, the column it is.
    pub columns: Vec<Option<usize>>,
}

impl Layout {
    /// Reads a header under the delimiter that makes most sense of it.
    pub fn read(line: &str, index: usize) -> Self {
        let under = |delimiter: Delimiter| Self {
            delimiter,
            line: index,
            columns: delimiter
                .fields(line)
                .iter()
                .map(|name| column(&plain_name(name)))
                .collect(),
        };
        Delimiter::ALL
            .into_iter()
            .map(under)
            .max_by_key(|layout| layout.columns.iter().flatten().count())
            .unwrap_or_else(|| under(Delimiter::COMMA))
    }

    /// Columns it lacks.
    pub fn missing(&self) -> Vec<&'static str> {
        COLUMNS
            .iter()
            .enumerate()
            .filter(|(column, _)| !self.columns.contains(&Some(*column)))
            .map(|(_, name)| *name)
            .collect()
    }

    /// Reads a row; `note` takes what and why.
    pub fn station(&self, line: &str, mut note: impl FnMut(String, &'static str)) -> Station {
        let fields = self.delimiter.fields(line);
        let field = |name: &str| {
            let wanted = column(name);
            let index = self.columns.iter().position(|column| *column == wanted)?;
            let field = fields.get(index)?.trim();
            (!field.is_empty()).then_some(field)
        };
        let comma = self.delimiter.allows_decimal_comma();
        let mut number = |name: &'static str| match number::cell(field(name)?, comma) {
            Cell::Value(value) => Some(value),
            Cell::Missing => None,
            Cell::Garbage => {
                note(
                    format!("{name} `{}` is not a number and was not used", field(name)?),
                    "",
                );
                None
            }
        };
        let (latitude, longitude, elevation) =
            (number("lat"), number("lon"), number("elevation_m"));
        let place = match (latitude, longitude) {
            (Some(latitude), Some(longitude)) => {
                let place = position(latitude, longitude);
                if place.is_none() {
                    note(
                        format!("position {latitude}, {longitude} is impossible and was not used"),
                        "latitude runs from -90 to 90, longitude from -180 to 180 (or to 360)",
                    );
                }
                place
            }
            (None, None) => None,
            _ => {
                note(
                    "the position is incomplete and was not used".into(),
                    "both lat and lon are needed",
                );
                None
            }
        };
        let elevation = elevation.filter(|elevation| {
            let possible = ELEVATIONS.contains(elevation);
            if !possible {
                note(
                    format!("elevation_m {elevation} is impossible and was not used"),
                    "it is the height of the ground above sea level in metres",
                );
            }
            possible
        });
        let wmo = field("wmo").and_then(|wmo| {
            let number = wmo_number(wmo);
            if number.is_none() {
                note(
                    format!("`{wmo}` is no WMO number and was not used"),
                    "a WMO number has five digits",
                );
            }
            number
        });
        Station {
            wigos: field("wigos").map(str::to_owned),
            wmo,
            icao: field("icao").map(str::to_ascii_uppercase),
            text: None,
            name: field("name").map(str::to_owned),
            position: place,
            elevation,
        }
    }

    /// A row: the fields of `old`, those known of the station put in their places.
    pub fn write(&self, station: &Station, old: &str) -> String {
        let mut fields: Vec<String> = self
            .delimiter
            .fields(old)
            .into_iter()
            .map(|field| field.into_owned())
            .collect();
        fields.resize(fields.len().max(self.columns.len()), String::new());
        let number = |value: Option<f64>| value.map(|value| value.to_string());
        let values = [
            station.wmo.clone(),
            station.wigos.clone(),
            station.icao.clone(),
            station.name.clone(),
            number(station.position.map(|place| place.latitude)),
            number(station.position.map(|place| place.longitude)),
            number(station.elevation),
        ];
        for (field, column) in fields.iter_mut().zip(&self.columns) {
            let value = column
                .and_then(|column| values.get(column))
                .cloned()
                .flatten();
            if let Some(value) = value {
                // One line a row, whatever was typed.
                *field = value.replace(['\n', '\r'], " ");
            }
        }
        self.delimiter.join(&fields)
    }
}

/// Whether a line is neither blank nor a remark.
pub(super) fn is_row(line: &str) -> bool {
    !line.trim().is_empty() && !line.trim_start().starts_with('#')
}
