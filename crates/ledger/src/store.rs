//! The folder of files.

use crate::{Decision, SoundingKey};
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// Something in the folder that could not be used.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// File name.
    pub file: String,
    /// Line, from 1; `None`: the whole file.
    pub line: Option<usize>,
    /// What is wrong with it, and that it was left as it is.
    pub what: String,
}

/// Why a decision was not kept.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum LedgerError {
    /// The folder can't be made or read.
    #[error("ledger folder {folder}: {source}")]
    Folder {
        /// Folder.
        folder: PathBuf,
        /// What the system said.
        source: std::io::Error,
    },
    /// Writing or syncing failed: the decision is not kept.
    #[error("not kept: {file}: {source}; free space or choose another folder with --ledger, then decide again")]
    NotKept {
        /// File.
        file: PathBuf,
        /// What the system said.
        source: std::io::Error,
    },
}

/// How a sounding stands with the ledger.
#[derive(Debug, Clone, PartialEq)]
pub enum Standing<'a> {
    /// Nothing decided.
    Undecided,
    /// Decided on exactly these data.
    Decided(&'a Decision),
    /// Decided on a different set of message parts: to be reviewed.
    DecidedOnEarlierData(&'a Decision),
}

/// A folder of decisions, read at opening; this process appends to a file of its own.
#[derive(Debug)]
pub struct Ledger {
    _private: (),
}

impl Ledger {
    /// Opens a folder (made if missing) and reads every ledger file in it. `desk` names this desk in the file's name.
    pub fn open(_folder: &Path, _desk: &str) -> Result<Self, LedgerError> {
        todo!()
    }

    /// Appends a decision; when this returns `Ok` it is on the disk.
    pub fn keep(&mut self, _decision: Decision) -> Result<(), LedgerError> {
        todo!()
    }

    /// All decisions, oldest first.
    pub fn decisions(&self) -> &[Decision] {
        todo!()
    }

    /// How a sounding with these message parts stands.
    pub fn standing(&self, _sounding: &SoundingKey, _parts: &BTreeSet<String>) -> Standing<'_> {
        todo!()
    }

    /// What in the folder could not be used.
    pub fn problems(&self) -> &[Problem] {
        todo!()
    }

    /// The folder.
    pub fn folder(&self) -> &Path {
        todo!()
    }
}
