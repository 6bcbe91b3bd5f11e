//! From a path or from bytes to soundings.

use crate::formats::{self, ReadOptions};
use crate::sounding::{Note, Sounding};
use crate::{Office, demo};
use jiff::{Timestamp, civil::Date};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Soundings of one file, ready for [`crate::Analysed::of`], and the notes that belong to none of them.
#[derive(Debug, Default)]
pub struct ReadFile {
    /// In file order.
    pub soundings: Vec<Sounding>,
    /// Notes about the file.
    pub notes: Vec<Note>,
}

/// Why nothing could be read.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum ReadFailure {
    /// The system refused.
    #[error("can't be read: {0}")]
    Io(#[from] io::Error),
    /// No reader could make anything of it.
    #[error(transparent)]
    Format(#[from] formats::ReadError),
    /// A file that holds no sounding.
    #[error("no sounding in it{}", notes_text(.0))]
    Empty(Vec<Note>),
}

impl ReadFailure {
    /// What happened, to be put after the name of the file, which is not said again.
    pub fn what(&self, name: &str) -> String {
        let text = self.to_string();
        match text.strip_prefix(name) {
            Some(rest) if !name.is_empty() => rest.trim_start_matches([':', ',', ' ']).to_owned(),
            _ => text,
        }
    }

    /// What to do about it; empty when [`ReadFailure::what`] says it.
    pub fn remedy(&self) -> &'static str {
        match self {
            Self::Io(_) => "Check that the file exists and that you may read it",
            Self::Format(_) => "",
            Self::Empty(_) => "Check that it is the file you meant",
        }
    }

    /// On one line, after the name of the file.
    pub fn line(&self, name: &str) -> String {
        let line = format!("{name}: {}", self.what(name));
        match self.remedy() {
            "" => line,
            remedy => format!("{line}. {remedy}"),
        }
    }
}

fn notes_text(notes: &[Note]) -> String {
    let mut text = String::new();
    for note in notes {
        text.push_str("; ");
        text.push_str(&crate::wording::note(note));
    }
    text
}

/// Reads one file.
pub fn read_file(
    path: &Path,
    office: &Office,
    as_of: Option<Date>,
) -> Result<ReadFile, ReadFailure> {
    let bytes = fs::read(path)?;
    let modified = fs::metadata(path)
        .and_then(|metadata| metadata.modified())
        .ok()
        .and_then(|time| Timestamp::try_from(time).ok());
    read_bytes(&path.display().to_string(), &bytes, modified, office, as_of)
}

/// Reads bytes. `modified`: their date, for messages that code day and hour only.
pub fn read_bytes(
    name: &str,
    bytes: &[u8],
    modified: Option<Timestamp>,
    office: &Office,
    as_of: Option<Date>,
) -> Result<ReadFile, ReadFailure> {
    // The demo files belong to an invented date, whoever opens them and whenever.
    let demo = demo::find(bytes);
    let stations = demo.map_or(&office.stations, |_| demo::stations());
    let options = ReadOptions {
        as_of: demo.map(|_| demo::AS_OF).or(as_of),
        modified,
        stations: Some(stations),
    };
    let loaded = formats::read(name, bytes, &options)?;
    if loaded.soundings.is_empty() {
        return Err(ReadFailure::Empty(loaded.notes));
    }
    let mut soundings = loaded.soundings;
    for sounding in &mut soundings {
        sounding.demo |= demo.is_some();
        office.locate(sounding);
    }
    Ok(ReadFile {
        soundings,
        notes: loaded.notes,
    })
}

/// The files a path means.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Meant {
    /// To be read, in order of name.
    pub files: Vec<PathBuf>,
    /// Station tables found among the files of a folder, which hold no soundings.
    pub station_tables: Vec<PathBuf>,
}

/// The files meant by a path: itself, or the files of a folder and of the folders in it. Hidden ones are left out.
pub fn files_of(path: &Path) -> io::Result<Meant> {
    if !path.is_dir() {
        return Ok(Meant {
            files: vec![path.to_owned()],
            ..Meant::default()
        });
    }
    let mut files = Vec::new();
    for inner in listed(path)? {
        if inner.is_dir() {
            files.extend(listed(&inner)?.into_iter().filter(|path| path.is_file()));
        } else {
            files.push(inner);
        }
    }
    let (station_tables, files) = files
        .into_iter()
        .partition(|file| file.file_name().is_some_and(|name| name == "stations.csv"));
    Ok(Meant {
        files,
        station_tables,
    })
}

/// What to tell about a station table among the files of a folder.
pub const STATION_TABLE: &str =
    "a station table, not a sounding, so it was not read here; in the office folder it would serve";

fn listed(folder: &Path) -> io::Result<Vec<PathBuf>> {
    let mut paths = fs::read_dir(folder)?
        .map(|entry| entry.map(|entry| entry.path()))
        .collect::<io::Result<Vec<_>>>()?;
    paths.retain(|path| {
        path.file_name()
            .is_some_and(|name| !name.to_string_lossy().starts_with('.'))
    });
    paths.sort();
    Ok(paths)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_folder_means_its_files_and_those_one_folder_down() {
        let folder = tempfile::tempdir().unwrap();
        let root = folder.path();
        fs::create_dir_all(root.join("b/deeper")).unwrap();
        for name in [
            "c.txt",
            "a.txt",
            ".hidden",
            "b/one.csv",
            "b/deeper/two.csv",
            "stations.csv",
        ] {
            fs::write(root.join(name), "").unwrap();
        }
        let named =
            |names: &[&str]| -> Vec<PathBuf> { names.iter().map(|name| root.join(name)).collect() };
        let meant = files_of(root).unwrap();
        assert_eq!(meant.files, named(&["a.txt", "b/one.csv", "c.txt"]));
        assert_eq!(meant.station_tables, named(&["stations.csv"]));
        // A path that is no folder is a file, whatever its name; whether it exists is found out when it is read.
        for name in ["absent", "stations.csv"] {
            assert_eq!(files_of(&root.join(name)).unwrap().files, named(&[name]));
        }
    }
}
