//! Readers: bytes in, soundings and notes out. One module a format.
//!
//! Imperfect content is not an error: a reader returns what it understood plus notes that say what it didn't, where,
//! and why. Only a file in which nothing can be read is an error.

mod stations;
pub mod temp;

use dewbound_sounding::{Note, Sounding};
use jiff::{Timestamp, civil::Date};

pub use stations::*;

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

/// Why nothing could be read.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum ReadError {
    /// The file could not be opened or read.
    #[error("{file}: {source}")]
    Io {
        /// File name.
        file: String,
        /// What the system said.
        source: std::io::Error,
    },
    /// No reader recognises the content.
    #[error(
        "{file}: not recognised as TEMP text, an IGRA station file or columns with units; {hint}"
    )]
    Unrecognised {
        /// File name.
        file: String,
        /// What to do.
        hint: String,
    },
}

/// Reads bytes by content (the name only helps with dates and compression).
pub fn read(_name: &str, _bytes: &[u8], _options: &ReadOptions) -> Result<Loaded, ReadError> {
    todo!()
}

/// Opens and reads one file.
pub fn read_path(_path: &std::path::Path, _options: &ReadOptions) -> Result<Loaded, ReadError> {
    todo!()
}
