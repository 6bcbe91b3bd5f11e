//! Invented demonstration soundings, built into the program.

use crate::formats::StationTable;
use jiff::civil::{Date, date};
use std::sync::OnceLock;

/// One embedded file.
#[derive(Debug, Clone, Copy)]
pub(crate) struct DemoFile {
    /// File name.
    pub name: &'static str,
    /// Content.
    pub bytes: &'static [u8],
}

/// Embeds files of `demo-soundings/`.
macro_rules! files {
    ($($name:literal),* $(,)?) => {
        &[$(DemoFile {
            name: $name,
            bytes: include_bytes!(concat!("../../../demo-soundings/", $name)),
        }),*]
    };
}

/// The demo tray.
pub(crate) const FILES: &[DemoFile] = files![
    "brennick-flats-20240613-00z-temp.txt",
    "corriden-field-20240613-00z-temp.txt",
    "dunmerrow-20240613-00z-temp-part-a.txt",
    "hathwyn-20240613-00z-temp.txt",
    "lowmere-gap-20240613-12z-station-file.txt",
    "orlo-ridge-20240613-00z-station-file.txt",
    "sandrel-20240613-00z-columns.csv",
    "tamsel-creek-20240613-00z-columns.csv",
    "vellmarsh-20240613-00z-columns.csv",
];

/// Their station table (`stations.csv` beside them).
const STATIONS: &str = include_str!("../../../demo-soundings/stations.csv");

/// The invented date of the tray; day-and-hour groups are nearest in the past to this.
pub(crate) const AS_OF: Date = date(2024, 6, 13);

/// The demo file with these bytes: it is known by its content, wherever it is opened from.
pub(crate) fn find(bytes: &[u8]) -> Option<&'static DemoFile> {
    FILES.iter().find(|file| file.bytes == bytes)
}

/// Stations of the invented region.
pub(crate) fn stations() -> &'static StationTable {
    static TABLE: OnceLock<StationTable> = OnceLock::new();
    TABLE.get_or_init(|| {
        let (table, _notes) = StationTable::parse(STATIONS);
        table
    })
}
