//! Checks on real, open observations, which are not part of the repository.

use std::io::Write;
use std::path::{Path, PathBuf};

/// Runs the checks in the folder `DEWBOUND_OPEN_DATA` names. Without it the skip is told and counted on standard error, or
/// fails where `DEWBOUND_REQUIRE_ALL=1`.
pub fn run(what: &str, checks: &[fn(&Path)]) {
    let Some(folder) = std::env::var_os("DEWBOUND_OPEN_DATA").map(PathBuf::from) else {
        assert!(
            std::env::var_os("DEWBOUND_REQUIRE_ALL").is_none_or(|value| value != "1"),
            "DEWBOUND_REQUIRE_ALL=1, but DEWBOUND_OPEN_DATA names no folder"
        );
        // Past the test harness, which hides what passing tests print.
        let _ = writeln!(
            std::io::stderr(),
            "skipped: {} checks of {what} (set DEWBOUND_OPEN_DATA to their folder)",
            checks.len()
        );
        return;
    };
    for check in checks {
        check(&folder);
    }
}
