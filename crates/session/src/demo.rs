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
#[allow(unused_macros)]
macro_rules! files {
    ($($name:literal),* $(,)?) => {
        &[$(DemoFile {
            name: $name,
            bytes: include_bytes!(concat!("../../../demo-soundings/", $name)),
        }),*]
    };
}

/// The demo tray.
pub(crate) const FILES: &[DemoFile] = &[];

/// Their station table (`stations.csv` beside them).
const STATIONS: &str = "";

/// The invented date of the tray; day-and-hour groups are nearest in the past to this.
pub(crate) const AS_OF: Date = date(2031, 6, 14);

/// The demo file with these bytes: it is known by its content, wherever it is opened from.
pub(crate) fn find(bytes: &[u8]) -> Option<&'static DemoFile> {
    FILES.iter().find(|file| file.bytes == bytes)
}

/// Stations of the invented region.
pub(crate) fn stations() -> &'static StationTable {
    static TABLE: OnceLock<StationTable> = OnceLock::new();
    TABLE.get_or_init(|| {
        let _ = STATIONS;
        StationTable::default()
    })
}
