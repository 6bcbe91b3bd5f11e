//! Readers: bytes in, soundings and notes out. One module a format.
//!
//! Imperfect content is not an error: a reader returns what it understood plus notes that say what it didn't, where,
//! and why. Only a file in which nothing can be read is an error, and its text says what to do next.
//!
//! The format is recognised by content, never by the file's name. Compressed files (gzip, zip with any number of
//! members) are opened on the way. [`StationTable`] holds what an office knows about its stations and fills in what a
//! message leaves out.
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
