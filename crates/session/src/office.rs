//! The office folder: what was prepared for the office, and what is typed once and remembered.

use crate::Config;
use crate::formats::StationTable;
use crate::sounding::{Position, Sounding};
use crate::trust::Thresholds;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use std::io;
use std::path::{Path, PathBuf};

/// Typed once, kept in `remembered.json`.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize)]
pub(crate) struct Remembered {
    #[serde(default)]
    pub initials: Option<String>,
    /// By canonical station id.
    #[serde(default)]
    pub positions: BTreeMap<String, Position>,
}

impl Remembered {
    pub(crate) fn path(office: &Path) -> PathBuf {
        office.join("remembered.json")
    }

    fn load(office: &Path) -> Result<Self, String> {
        let path = Self::path(office);
        match read_optional(&path)? {
            None => Ok(Self::default()),
            Some(text) => {
                serde_json::from_str(&text).map_err(|error| format!("{}: {error}", path.display()))
            }
        }
    }

    pub(crate) fn encode(&self) -> Result<String, serde_json::Error> {
        let mut text = serde_json::to_string_pretty(self)?;
        text.push('\n');
        Ok(text)
    }
}

/// What the office has prepared.
#[derive(Debug, Clone, Default)]
pub struct Office {
    /// Known stations.
    pub stations: StationTable,
    /// Thresholds in force.
    pub thresholds: Thresholds,
    /// Positions typed in, by canonical station id.
    pub positions: BTreeMap<String, Position>,
}

/// Something of the office folder that can't be used.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct OfficeProblem {
    /// File.
    pub about: String,
    /// What is wrong.
    pub what: String,
    /// What to do.
    pub remedy: String,
    /// Nothing of the file is in use.
    pub unused: bool,
}

impl Office {
    /// Reads a station table and a thresholds file. A file that can't be used is a problem; the rest still serves.
    pub fn load(stations: Option<&Path>, thresholds: Option<&Path>) -> (Self, Vec<OfficeProblem>) {
        let mut office = Self::default();
        let mut problems = Vec::new();
        if let Some(path) = stations {
            match std::fs::read_to_string(path) {
                Ok(text) => office.take_stations(path, &text, &mut problems),
                Err(error) => problems.push(unreadable(
                    path,
                    &error,
                    "Station names and positions are missing until it can be read",
                )),
            }
        }
        if let Some(path) = thresholds {
            match std::fs::read_to_string(path) {
                Ok(text) => office.take_thresholds(path, &text, &mut problems),
                Err(error) => problems.push(unreadable(
                    path,
                    &error,
                    "The built-in thresholds are in force",
                )),
            }
        }
        (office, problems)
    }

    fn take_stations(&mut self, path: &Path, text: &str, problems: &mut Vec<OfficeProblem>) {
        let (table, notes) = StationTable::parse(text);
        self.stations = table;
        if text.trim().is_empty() {
            problems.push(OfficeProblem {
                about: path.display().to_string(),
                what: "the station table is empty".to_owned(),
                remedy:
                    "Its first line must name the columns: wmo,wigos,icao,name,lat,lon,elevation_m"
                        .to_owned(),
                unused: true,
            });
        } else if !notes.is_empty() {
            let unused = self.stations.is_empty();
            let lines: Vec<String> = notes.iter().map(crate::wording::note).collect();
            problems.push(OfficeProblem {
                about: path.display().to_string(),
                what: lines.join("\n"),
                remedy: if unused {
                    "No row of it can be used; correct it and start again".to_owned()
                } else {
                    "The other rows serve; correct these and start again".to_owned()
                },
                unused,
            });
        }
    }

    fn take_thresholds(&mut self, path: &Path, text: &str, problems: &mut Vec<OfficeProblem>) {
        match Thresholds::default().with_overrides(text) {
            Ok(thresholds) => self.thresholds = thresholds,
            Err(error) => problems.push(OfficeProblem {
                about: path.display().to_string(),
                what: error.to_string(),
                remedy: "The built-in thresholds are in force; correct the file and start again"
                    .to_owned(),
                unused: true,
            }),
        }
    }

    /// Gives a sounding the position that was typed in for its station, when nothing else says it.
    pub(crate) fn locate(&self, sounding: &mut Sounding) {
        if sounding.station.position.is_none()
            && let Some(id) = sounding.station.canonical_id()
        {
            sounding.station.position = self.positions.get(&id).copied();
        }
    }
}

/// Everything in the folder of a configuration.
pub(crate) fn open(config: &Config) -> (Office, Remembered, Vec<OfficeProblem>) {
    let present = |given: &Option<PathBuf>, name: &str| {
        given
            .clone()
            .or_else(|| Some(config.office.join(name)).filter(|path| path.exists()))
    };
    let stations = present(&config.stations, "stations.csv");
    let thresholds = present(&config.thresholds, "thresholds.json");
    let (mut office, mut problems) = Office::load(stations.as_deref(), thresholds.as_deref());
    let remembered = Remembered::load(&config.office).unwrap_or_else(|what| {
        problems.push(OfficeProblem {
            about: Remembered::path(&config.office).display().to_string(),
            what,
            remedy:
                "Initials and positions typed in earlier are not known; correct or remove the file"
                    .to_owned(),
            unused: true,
        });
        Remembered::default()
    });
    office.positions.clone_from(&remembered.positions);
    (office, remembered, problems)
}

fn read_optional(path: &Path) -> Result<Option<String>, String> {
    match std::fs::read_to_string(path) {
        Ok(text) => Ok(Some(text)),
        Err(error) if error.kind() == io::ErrorKind::NotFound => Ok(None),
        Err(error) => Err(error.to_string()),
    }
}

fn unreadable(path: &Path, error: &io::Error, remedy: &str) -> OfficeProblem {
    let what = if error.kind() == io::ErrorKind::InvalidData {
        "is not text in UTF-8: save it in that encoding".to_owned()
    } else {
        format!("can't be read: {error}")
    };
    OfficeProblem {
        about: path.display().to_string(),
        what,
        remedy: remedy.to_owned(),
        unused: true,
    }
}
