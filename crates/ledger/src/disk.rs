//! The few things the ledger asks of a disk, as a trait so that tests can make them fail.

use std::fmt::Debug;
use std::fs::{File, OpenOptions};
use std::io::{self, Write};
use std::path::Path;

/// A file open for appending.
pub trait Appender: Debug + Send {
    /// Appends all bytes.
    fn append(&mut self, bytes: &[u8]) -> io::Result<()>;
    /// Returns only when everything appended is on the disk.
    fn sync(&mut self) -> io::Result<()>;
}

/// Makes new files.
pub trait Disk: Debug + Send {
    /// A new file that did not exist before, its name safe on the disk.
    fn create_new(&mut self, path: &Path) -> io::Result<Box<dyn Appender>>;
}

/// The real disk.
#[derive(Debug, Default)]
pub struct RealDisk;

impl Appender for File {
    fn append(&mut self, bytes: &[u8]) -> io::Result<()> {
        self.write_all(bytes)
    }

    fn sync(&mut self) -> io::Result<()> {
        self.sync_all()
    }
}

impl Disk for RealDisk {
    fn create_new(&mut self, path: &Path) -> io::Result<Box<dyn Appender>> {
        let file = OpenOptions::new()
            .append(true)
            .create_new(true)
            .open(path)?;
        // A synced file whose name is lost with the power is lost too. Windows has no folder sync; there the file
        // system journals names itself.
        #[cfg(unix)]
        if let Some(folder) = path.parent() {
            File::open(folder)?.sync_all()?;
        }
        Ok(Box::new(file))
    }
}
