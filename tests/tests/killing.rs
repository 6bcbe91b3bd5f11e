//! Killing a desk: what was said to be kept is kept.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::ledger::Ledger;
use dewbound_session::{Session, Weight};
use dewbound_tests::desk::config;
use std::collections::BTreeSet;
use std::fs;
use std::io::{BufRead, BufReader};
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

fn desk_to_kill(folder: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_decide-until-killed"));
    command
        .arg(folder)
        .stdin(Stdio::null())
        .stdout(Stdio::piped());
    command
}

/// What the desk said before it was killed, which is done when it has said so many, after waiting a little.
fn kept_until_killed(folder: &Path, after: usize, spin: usize) -> Vec<String> {
    let mut child = desk_to_kill(folder).spawn().unwrap();
    let mut lines = BufReader::new(child.stdout.take().unwrap()).lines();
    let mut kept: Vec<String> = lines
        .by_ref()
        .take(after)
        .map(|line| line.unwrap())
        .collect();
    // So that the blow falls at another moment of the next decision each time.
    for _ in 0..spin {
        std::hint::spin_loop();
    }
    child.kill().unwrap();
    assert!(!child.wait().unwrap().success(), "it never ends by itself");
    // What it had said by then; a last line cut short was not said in full.
    kept.extend(
        lines
            .map_while(Result::ok)
            .filter(|line| line.starts_with("kept reason ")),
    );
    kept
}

fn ledger_files(folder: &Path) -> Vec<PathBuf> {
    let mut files: Vec<PathBuf> = fs::read_dir(folder.join("ledger"))
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    files.sort();
    files
}

#[test]
fn whatever_was_said_to_be_kept_is_in_the_ledger_after_a_kill() {
    for round in 0..20 {
        let folder = tempfile::tempdir().unwrap();
        let after = 1 + round % 5;
        let kept = kept_until_killed(folder.path(), after, round * 20_000);
        assert!(kept.len() >= after, "round {round}: {kept:?}");

        let mut session = Session::new(config(folder.path()));
        session.wait();
        let decided: BTreeSet<String> = session
            .decisions(false)
            .unwrap()
            .iter()
            .map(|decision| format!("kept {}", decision.reasons))
            .collect();
        for line in &kept {
            assert!(decided.contains(line), "round {round}: {line:?} is lost");
        }
        // The one that was being decided may be there too; more can't be.
        assert!(decided.len() <= kept.len() + 1, "round {round}");
        // A line that was being written is skipped and told; nothing else is.
        let told: Vec<&str> = session
            .messages()
            .iter()
            .filter(|told| told.weight == Weight::Failed)
            .map(|told| told.what.as_str())
            .collect();
        let cut = ledger_files(folder.path())
            .iter()
            .filter(|file| !fs::read(file).unwrap().ends_with(b"\n"))
            .filter(|file| !fs::read(file).unwrap().is_empty())
            .count();
        assert_eq!(told.len(), cut, "round {round}: {told:?}");
    }
}

#[test]
fn a_ledger_written_by_killed_desks_still_serves_the_next_ones() {
    let folder = tempfile::tempdir().unwrap();
    let mut kept = Vec::new();
    for round in 0..4 {
        kept.push(kept_until_killed(folder.path(), 2, round * 50_000).len());
    }
    assert_eq!(ledger_files(folder.path()).len(), 4, "a file a process");
    let ledger = Ledger::open(&folder.path().join("ledger"), "desk").unwrap();
    assert!(ledger.decisions().len() >= kept.iter().sum());
}

#[test]
fn a_line_cut_short_anywhere_is_skipped_told_and_left() {
    let folder = tempfile::tempdir().unwrap();
    let kept = kept_until_killed(folder.path(), 3, 0);
    let file = ledger_files(folder.path()).remove(0);
    let whole = fs::read(&file).unwrap();
    let ends: Vec<usize> = (1..)
        .zip(&whole)
        .filter(|(_, byte)| **byte == b'\n')
        .map(|(end, _)| end)
        .collect();
    assert!(ends.len() >= kept.len());
    let (second, third) = (ends[1], ends[2]);
    for length in (second + 1..third).step_by(37).chain([third - 1]) {
        fs::write(&file, &whole[..length]).unwrap();
        let mut session = Session::new(config(folder.path()));
        session.wait();
        assert_eq!(session.decisions(false).unwrap().len(), 2, "{length} bytes");
        let told = session.messages();
        assert!(
            told.iter()
                .any(|told| told.weight == Weight::Failed && told.what.contains("line 3")),
            "{length} bytes: {told:?}"
        );
        drop(session);
        assert_eq!(fs::read(&file).unwrap(), whole[..length], "left as it is");
    }
}
