//! Readers: bytes in, soundings and notes out. One module a format.
//!
//! Imperfect content is not an error: a reader returns what it understood plus notes that say what it didn't, where,
//! and why. Only a file in which nothing can be read is an error, and its text says what to do next.
//!
//! The format is recognised by content, never by the file's name. Compressed files (gzip, zip with any number of
//! members) are opened on the way. [`StationTable`] holds what an office knows about its stations and fills in what a
//! message leaves out.
//!
//! # Columns with units
//!
//! A table separated by comma, tab or semicolon (then also with decimal commas), columns in any order, under a header
//! whose names carry their units. `Pressure (hPa)` and `pressure_hpa` are one name.
//!
//! | quantity | names |
//! |---|---|
//! | pressure (needed) | `pressure_hpa`, `pressure_pa` |
//! | temperature | `temperature_c`, `temperature_k`, `temperature_f` |
//! | dew point | `dewpoint_c`, `dewpoint_k`, `dewpoint_f` |
//! | or relative humidity over water | `rh_pct`, `rh_1` |
//! | or mixing ratio | `mixing_ratio_gkg`, `mixing_ratio_kgkg` |
//! | height above sea level | `height_m`, `height_ft` |
//! | or above ground | `height_agl_m`, `height_agl_ft` |
//! | wind, both of | `wind_dir_deg` and one of `wind_speed_ms`, `wind_speed_kt`, `wind_speed_kmh` |
//! | time since launch | `time_s` |
//! | or of the clock | `time_utc` |
//! | position of the sonde | `lat`, `lon` |
//!
//! Where dew point and relative humidity both stand, each is kept as written, and relative humidity counts as what the
//! instrument reported. Missing values are empty, `NaN`, `NA`, `/`, or a row of nines beyond what the quantity can be
//! (`-999`, `-9999.0`, `99999`). Lines that begin with `#` say the rest, one `key: value` each:
//!
//! | line | meaning |
//! |---|---|
//! | `# station: Upper Vale` | name for people |
//! | `# wmo: 01234`, `# wigos:`, `# icao:`, `# id:` | identifiers |
//! | `# time: 2031-05-17T17:31:05Z` | launch |
//! | `# nominal: 2031-05-17T18:00Z` | the hour it is filed under |
//! | `# position: 47.5, 8.25, 430` | latitude, longitude, elevation in metres |
//! | `# heights: above ground` | `height_m` is not above sea level |
//! | `# demo: true` | invented data |
//!
//! Rows before the launch and after the balloon burst are another profile in the same table; they are taken out, with
//! a note. Times are UTC.
//!
//! Deliberately absent: any opinion on whether a value is to be believed. An impossible number that is spelled
//! properly is handed on as received; only the spellings of "missing" become absent here.
//!
//! ```
//! use dewbound_formats::{ReadOptions, read};
//!
//! let text = "\
//! ## station: Upper Vale
//! ## time: 2031-05-17T18:00Z
//! ## position: 47.5, 8.25, 430
//! pressure_hpa,temperature_c,dewpoint_c
//! 965.0,27.4,16.1
//! 900.0,21.3,14.8
//! ";
//! let loaded = read("upper-vale.csv", text.as_bytes(), &ReadOptions::default())?;
//! let sounding = &loaded.soundings[0];
//! assert_eq!(sounding.station.elevation, Some(430.0));
//! assert_eq!(sounding.levels[0].pressure, Some(96_500.0));
//! # Ok::<(), dewbound_formats::ReadError>(())
//! ```

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod columns;
mod container;
mod delimited;
mod digest;
mod dispatch;
mod error;
mod igra;
mod number;
mod seems;
mod stations;
mod tally;
pub mod temp;
mod text;
mod when;

use dewbound_sounding::{Note, Sounding};
use jiff::{Timestamp, civil::Date};

pub use columns::names::understood as column_names;
pub use dispatch::{read, read_path};
pub use error::ReadError;
pub use stations::{StationTable, StationTableError};

/// What a reader may need beyond the bytes.
#[derive(Debug, Clone, Copy, Default)]
pub struct ReadOptions<'a> {
    /// The date to which day-and-hour groups are nearest in the past, when given by the user.
    pub as_of: Option<Date>,
    /// The file's own date, used when the name carries none.
    pub modified: Option<Timestamp>,
    /// Known stations: fills in name, position and elevation the message lacks.
    pub stations: Option<&'a StationTable>,
}

/// What a file held.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Loaded {
    /// Soundings in file order, each with its own notes.
    pub soundings: Vec<Sounding>,
    /// Notes about the file that belong to no sounding.
    pub notes: Vec<Note>,
}
