//! Real observations, which are not part of the repository.

use std::ffi::OsStr;
use std::io::{self, Write};
use std::path::PathBuf;

/// Names the folder of real observations, with `temp`, `igra` and `csv` in it.
pub const FOLDER: &str = "DEWBOUND_OPEN_DATA";
/// `1`: a test that can't run fails.
pub const REQUIRE: &str = "DEWBOUND_REQUIRE_ALL";

/// The folder of real observations. `None`: the test is to be skipped, which has been told on standard error.
///
/// # Panics
///
/// When there is no folder and no test may be skipped.
pub fn folder(test: &str) -> Option<PathBuf> {
    if let Some(folder) = std::env::var_os(FOLDER) {
        return Some(PathBuf::from(folder));
    }
    assert!(
        std::env::var_os(REQUIRE).as_deref() != Some(OsStr::new("1")),
        "{REQUIRE}=1, but {FOLDER} names no folder"
    );
    // Past the test harness, which hides what passing tests print.
    let _ = writeln!(
        io::stderr(),
        "skipped: {test} (set {FOLDER} to the folder of real observations)"
    );
    None
}

/// Every file of soundings in it, in order of name.
///
/// # Errors
///
/// When a folder can't be listed.
pub fn files(folder: &std::path::Path) -> io::Result<Vec<PathBuf>> {
    let mut files = Vec::new();
    for part in ["csv", "igra", "temp"] {
        for entry in std::fs::read_dir(folder.join(part))? {
            let path = entry?.path();
            // The description of a format lies beside its files.
            if path.extension() != Some(OsStr::new("rst")) {
                files.push(path);
            }
        }
    }
    files.sort();
    Ok(files)
}
