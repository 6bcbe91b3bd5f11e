//! Where a desk keeps its things.

use jiff::civil::Date;
use std::path::{Path, PathBuf};

/// Folders and names of one desk.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Config {
    /// Folder of the ledger; may be shared between desks.
    pub ledger: PathBuf,
    /// Folder of the separate ledger for verdicts on invented demonstration soundings.
    pub demo_ledger: PathBuf,
    /// Folder of unfinished work, one file a sounding.
    pub drafts: PathBuf,
    /// Office folder: `stations.csv`, `thresholds.json`, and what is typed once and remembered (initials, positions).
    pub office: PathBuf,
    /// Thresholds file; `None`: `thresholds.json` of the office folder when there is one.
    pub thresholds: Option<PathBuf>,
    /// Station table; `None`: `stations.csv` of the office folder when there is one.
    pub stations: Option<PathBuf>,
    /// Name of this desk in the ledger's file names.
    pub desk: String,
    /// Initials of whoever is on shift; `None`: those remembered, else asked at the first verdict.
    pub initials: Option<String>,
    /// The date to which day-and-hour groups are nearest in the past.
    pub as_of: Option<Date>,
}

impl Config {
    /// The platform's data and configuration folders; `None` when the system names no home folder.
    pub fn platform() -> Option<Self> {
        let folders = directories::ProjectDirs::from("", "", "Dewbound")?;
        let data = folders.data_dir();
        Some(Self {
            ledger: data.join("ledger"),
            demo_ledger: data.join("demo-ledger"),
            drafts: data.join("drafts"),
            office: folders.config_dir().to_owned(),
            thresholds: None,
            stations: None,
            desk: "desk".to_owned(),
            initials: None,
            as_of: None,
        })
    }

    /// Everything inside one folder.
    pub fn within(folder: &Path) -> Self {
        Self {
            ledger: folder.join("ledger"),
            demo_ledger: folder.join("demo-ledger"),
            drafts: folder.join("drafts"),
            office: folder.join("office"),
            thresholds: None,
            stations: None,
            desk: "desk".to_owned(),
            initials: None,
            as_of: None,
        }
    }
}
