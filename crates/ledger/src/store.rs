//! The folder of files.

use crate::{Appender, Decision, Disk, RealDisk, SoundingKey, line};
use std::collections::BTreeSet;
use std::io;
use std::path::{Path, PathBuf};

/// Something in the folder that could not be used. It was left as it is.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// File name.
    pub file: String,
    /// Line, from 1; `None`: the whole file.
    pub line: Option<usize>,
    /// What is wrong with it.
    pub what: String,
}

/// Why the ledger can't be used, or a decision was not kept.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum LedgerError {
    /// The folder can't be made or read.
    #[error(
        "ledger folder {folder}: {source}; choose a folder you may write to with --ledger",
        folder = folder.display()
    )]
    Folder {
        /// Folder.
        folder: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// Writing or syncing failed: the decision is not kept.
    #[error(
        "not kept: {file}: {source}; free space or choose another folder with --ledger, then decide again",
        file = file.display()
    )]
    NotKept {
        /// File.
        file: PathBuf,
        /// What the system said.
        source: io::Error,
    },
}

/// How a sounding stands with the ledger.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Standing<'a> {
    /// Nothing decided.
    Undecided,
    /// Decided on exactly these data.
    Decided(&'a Decision),
    /// Decided on a different set of message parts: to be reviewed.
    DecidedOnEarlierData(&'a Decision),
}

/// The file this process appends to.
#[derive(Debug)]
struct Writer {
    path: PathBuf,
    month: (i16, i8),
    file: Box<dyn Appender>,
}

/// A folder of decisions, read at opening; this process appends to a file of its own.
///
/// **Invariant:** a file is written by the process that created it and by no other, and never again after a write or a
/// sync of it has failed (its tail is then unknown; the next decision starts a new file).
#[derive(Debug)]
pub struct Ledger {
    folder: PathBuf,
    desk: String,
    disk: Box<dyn Disk>,
    writer: Option<Writer>,
    decisions: Vec<Decision>,
    problems: Vec<Problem>,
}

impl Ledger {
    /// Opens a folder (made if missing) and reads every ledger file in it. `desk` names this desk in the file's name.
    ///
    /// No file is made until the first decision. Errors: the folder can't be made or listed; a file that can't be
    /// read or a line that can't be used is a [`Problem`], not an error.
    pub fn open(folder: &Path, desk: &str) -> Result<Self, LedgerError> {
        Self::with_disk(folder, desk, Box::new(RealDisk))
    }

    /// Like [`Ledger::open`], writing through `disk`.
    pub fn with_disk(folder: &Path, desk: &str, disk: Box<dyn Disk>) -> Result<Self, LedgerError> {
        std::fs::create_dir_all(folder).map_err(|source| LedgerError::Folder {
            folder: folder.to_owned(),
            source,
        })?;
        let mut ledger = Self {
            folder: folder.to_owned(),
            desk: file_name_part(desk),
            disk,
            writer: None,
            decisions: Vec::new(),
            problems: Vec::new(),
        };
        ledger.refresh()?;
        Ok(ledger)
    }

    /// Reads the folder again, to see what other desks have decided since.
    pub fn refresh(&mut self) -> Result<(), LedgerError> {
        let folder_error = |source| LedgerError::Folder {
            folder: self.folder.clone(),
            source,
        };
        let mut paths = std::fs::read_dir(&self.folder)
            .map_err(folder_error)?
            .map(|entry| entry.map(|entry| entry.path()))
            .collect::<io::Result<Vec<_>>>()
            .map_err(folder_error)?;
        paths.retain(|path| {
            path.extension()
                .is_some_and(|extension| extension == "jsonl")
        });
        paths.sort();

        self.decisions.clear();
        self.problems.clear();
        for path in paths {
            let (decisions, problems) = read_file(&path);
            self.decisions.extend(decisions);
            self.problems.extend(problems);
        }
        self.sort();
        Ok(())
    }

    /// Oldest first; the sort is stable, so decisions of the same instant keep the order of their lines.
    fn sort(&mut self) {
        self.decisions.sort_by_key(|decision| decision.decided_at);
    }

    /// Appends a decision. When this returns `Ok`, it is on the disk and may be called kept; on any error it counts as
    /// not kept, and the next decision goes to a new file.
    pub fn keep(&mut self, decision: Decision) -> Result<(), LedgerError> {
        let date = decision.decided_at.to_zoned(jiff::tz::TimeZone::UTC).date();
        let month = (date.year(), date.month());
        let mut writer = match self.writer.take() {
            Some(writer) if writer.month == month => writer,
            _ => self.new_writer(month)?,
        };
        let written = line::encode(&decision)
            .map_err(io::Error::from)
            .and_then(|line| writer.file.append(line.as_bytes()))
            .and_then(|()| writer.file.sync());
        if let Err(source) = written {
            return Err(LedgerError::NotKept {
                file: writer.path,
                source,
            });
        }
        self.writer = Some(writer);
        self.decisions.push(decision);
        self.sort();
        Ok(())
    }

    fn new_writer(&mut self, month: (i16, i8)) -> Result<Writer, LedgerError> {
        let not_kept = |file: &Path, source| LedgerError::NotKept {
            file: file.to_owned(),
            source,
        };
        let mut random = [0; 8];
        getrandom::fill(&mut random)
            .map_err(|error| not_kept(&self.folder, io::Error::other(error)))?;
        let id: String = random.iter().map(|byte| format!("{byte:02x}")).collect();
        let (year, number) = month;
        let path = self
            .folder
            .join(format!("{}--{id}--{year:04}-{number:02}.jsonl", self.desk));
        let file = self
            .disk
            .create_new(&path)
            .map_err(|source| not_kept(&path, source))?;
        Ok(Writer { path, month, file })
    }

    /// All decisions, oldest first.
    pub fn decisions(&self) -> &[Decision] {
        &self.decisions
    }

    /// How a sounding with these message parts (hex digests) stands: by the newest decision on exactly these data,
    /// else the newest on other data of the same station and hour.
    pub fn standing(&self, sounding: &SoundingKey, parts: &BTreeSet<String>) -> Standing<'_> {
        let mut earlier = None;
        for decision in self.decisions.iter().rev() {
            if decision.sounding == *sounding {
                if decision.parts == *parts {
                    return Standing::Decided(decision);
                }
                earlier = earlier.or(Some(decision));
            }
        }
        earlier.map_or(Standing::Undecided, Standing::DecidedOnEarlierData)
    }

    /// What in the folder could not be used.
    pub fn problems(&self) -> &[Problem] {
        &self.problems
    }

    /// The folder.
    pub fn folder(&self) -> &Path {
        &self.folder
    }
}

/// A desk's name made safe for a file name; a double hyphen separates the parts of the name, so none is left in it.
fn file_name_part(desk: &str) -> String {
    let words: Vec<&str> = desk
        .split(|letter: char| !letter.is_alphanumeric() && letter != '_')
        .filter(|word| !word.is_empty())
        .collect();
    if words.is_empty() {
        "desk".to_owned()
    } else {
        words.join("-").chars().take(60).collect()
    }
}

/// Every usable line of a file, and what is wrong with the others.
fn read_file(path: &Path) -> (Vec<Decision>, Vec<Problem>) {
    let file = path
        .file_name()
        .map(|name| name.to_string_lossy().into_owned())
        .unwrap_or_default();
    let problem = |line, what| Problem {
        file: file.clone(),
        line,
        what,
    };
    let bytes = match std::fs::read(path) {
        Ok(bytes) => bytes,
        Err(error) => {
            return (
                Vec::new(),
                vec![problem(None, format!("not read: {error}"))],
            );
        }
    };
    let mut decisions = Vec::new();
    let mut problems = Vec::new();
    let lines = bytes.split_inclusive(|&byte| byte == b'\n');
    for (number, line) in (1..).zip(lines) {
        let Some(line) = line.strip_suffix(b"\n") else {
            problems.push(problem(
                Some(number),
                "the last line has no end (writing was cut short): skipped, left as it is"
                    .to_owned(),
            ));
            continue;
        };
        match line::decode(&String::from_utf8_lossy(line)) {
            Ok(decision) => decisions.push(decision),
            Err(what) => problems.push(problem(
                Some(number),
                format!("{what}: skipped, left as it is"),
            )),
        }
    }
    (decisions, problems)
}

#[cfg(test)]
mod tests;
