use super::*;
use crate::Verdict;
use dewbound_sounding::Amendments;
use std::sync::{Arc, Mutex};

fn decision(station: &str, second: i64, parts: &[&str]) -> Decision {
    Decision {
        sounding: SoundingKey {
            station: station.to_owned(),
            date: Some(jiff::civil::date(2031, 5, 17)),
            hour: Some(18),
        },
        station_name: "Nowhere".to_owned(),
        parts: parts.iter().map(|&part| part.to_owned()).collect(),
        verdict: Verdict::ContaminatedAbove {
            pressure_pa: 45_000.0,
        },
        reasons: "wet thermometer \u{2013} \"cold\" kink\nsecond line".to_owned(),
        initials: "xy".to_owned(),
        decided_at: jiff::Timestamp::from_second(1_936_800_000 + second).unwrap(),
        amendments: Amendments::default(),
        cape_jkg: [Some(1234.5), None, Some(2000.0)],
        demo: true,
    }
}

fn parts(of: &Decision) -> BTreeSet<String> {
    of.parts.clone()
}

fn ledger_files(folder: &Path) -> Vec<PathBuf> {
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    files.sort();
    files
}

#[test]
fn a_kept_decision_is_read_by_another_desk() {
    let folder = tempfile::tempdir().unwrap();
    let mut ledger = Ledger::open(folder.path(), "north desk/2").unwrap();
    assert!(
        ledger_files(folder.path()).is_empty(),
        "no file before a decision"
    );
    let first = decision("wmo:00001", 0, &["aa"]);
    ledger.keep(first.clone()).unwrap();

    let other = Ledger::open(folder.path(), "south").unwrap();
    assert_eq!(other.decisions(), std::slice::from_ref(&first));
    assert!(other.problems().is_empty());
    let files = ledger_files(folder.path());
    let name = files[0].file_name().unwrap().to_str().unwrap();
    assert!(
        name.starts_with("north-desk-2--") && name.ends_with("--2031-05.jsonl"),
        "{name}"
    );
}

#[test]
fn the_same_set_of_parts_is_decided_another_set_is_for_review() {
    let folder = tempfile::tempdir().unwrap();
    let mut ledger = Ledger::open(folder.path(), "desk").unwrap();
    let early = decision("wmo:00001", 0, &["aa"]);
    let late = decision("wmo:00001", 10, &["aa", "bb"]);
    ledger.keep(late.clone()).unwrap();
    ledger.keep(early.clone()).unwrap();
    let key = &early.sounding;
    assert_eq!(
        ledger.standing(key, &parts(&early)),
        Standing::Decided(&early)
    );
    assert_eq!(
        ledger.standing(key, &parts(&late)),
        Standing::Decided(&late)
    );
    let more = ["aa", "bb", "cc"].map(str::to_owned).into();
    assert_eq!(
        ledger.standing(key, &more),
        Standing::DecidedOnEarlierData(&late)
    );
    let elsewhere = decision("wmo:00002", 0, &["aa"]).sounding;
    assert_eq!(
        ledger.standing(&elsewhere, &parts(&early)),
        Standing::Undecided
    );
}

#[test]
fn two_processes_write_two_files_and_a_new_month_a_third() {
    let folder = tempfile::tempdir().unwrap();
    let mut one = Ledger::open(folder.path(), "desk").unwrap();
    let mut two = Ledger::open(folder.path(), "desk").unwrap();
    one.keep(decision("a", 0, &["aa"])).unwrap();
    two.keep(decision("b", 1, &["bb"])).unwrap();
    one.keep(decision("c", 40 * 86_400, &["cc"])).unwrap();
    one.keep(decision("d", 40 * 86_400 + 1, &["dd"])).unwrap();
    assert_eq!(ledger_files(folder.path()).len(), 3);
    two.refresh().unwrap();
    let stations: Vec<_> = two
        .decisions()
        .iter()
        .map(|decision| decision.sounding.station.as_str())
        .collect();
    assert_eq!(stations, ["a", "b", "c", "d"]);
}

#[test]
fn damaged_lines_are_shown_and_never_rewritten() {
    let folder = tempfile::tempdir().unwrap();
    let mut ledger = Ledger::open(folder.path(), "desk").unwrap();
    let kept = decision("a", 0, &["aa"]);
    ledger.keep(kept.clone()).unwrap();
    let path = ledger_files(folder.path()).remove(0);
    let whole = std::fs::read_to_string(&path).unwrap();
    let flipped = whole.replace("1234.5", "9234.5");
    let newer = whole.replace("\"schema\":1", "\"schema\":2");
    let cut = &whole[..whole.len() / 2];
    let text = format!("{whole}{flipped}{newer}not json\n{cut}");
    std::fs::write(&path, &text).unwrap();

    let mut reader = Ledger::open(folder.path(), "desk").unwrap();
    assert_eq!(reader.decisions(), [kept]);
    let lines: Vec<_> = reader
        .problems()
        .iter()
        .map(|problem| problem.line)
        .collect();
    assert_eq!(lines, [Some(2), Some(3), Some(4), Some(5)]);
    assert!(reader.problems()[0].what.contains("damaged"));
    assert!(reader.problems()[1].what.contains("schema 2"));
    assert!(reader.problems()[3].what.contains("no end"));
    reader.keep(decision("b", 5, &["bb"])).unwrap();
    assert_eq!(
        std::fs::read_to_string(&path).unwrap(),
        text,
        "an old file is left alone"
    );
}

/// A disk that keeps a journal of what was asked of it and fails where told.
#[derive(Debug, Clone, Default)]
struct FaultyDisk {
    journal: Arc<Mutex<Vec<&'static str>>>,
    fail: Arc<Mutex<Option<&'static str>>>,
}

impl FaultyDisk {
    fn step(&self, what: &'static str) -> io::Result<()> {
        self.journal.lock().unwrap().push(what);
        if *self.fail.lock().unwrap() == Some(what) {
            Err(io::Error::new(io::ErrorKind::StorageFull, "no space"))
        } else {
            Ok(())
        }
    }
}

#[derive(Debug)]
struct FaultyFile {
    disk: FaultyDisk,
    file: Box<dyn Appender>,
}

impl Disk for FaultyDisk {
    fn create_new(&mut self, path: &Path) -> io::Result<Box<dyn Appender>> {
        self.step("create")?;
        Ok(Box::new(FaultyFile {
            disk: self.clone(),
            file: RealDisk.create_new(path)?,
        }))
    }
}

impl Appender for FaultyFile {
    fn append(&mut self, bytes: &[u8]) -> io::Result<()> {
        if let Err(error) = self.disk.step("append") {
            // As a full disk does: half of it is written.
            self.file.append(&bytes[..bytes.len() / 2])?;
            return Err(error);
        }
        self.file.append(bytes)
    }

    fn sync(&mut self) -> io::Result<()> {
        self.disk.step("sync")?;
        self.file.sync()
    }
}

#[test]
fn kept_never_precedes_a_successful_sync() {
    for fault in ["create", "append", "sync"] {
        let folder = tempfile::tempdir().unwrap();
        let disk = FaultyDisk::default();
        let mut ledger = Ledger::with_disk(folder.path(), "desk", Box::new(disk.clone())).unwrap();

        *disk.fail.lock().unwrap() = Some(fault);
        let lost = decision("lost", 0, &["aa"]);
        let error = ledger.keep(lost.clone()).unwrap_err();
        assert!(error.to_string().contains("not kept"), "{fault}: {error}");
        assert!(
            ledger.decisions().is_empty(),
            "{fault}: a lost decision is not listed"
        );
        assert_eq!(disk.journal.lock().unwrap().last(), Some(&fault));

        *disk.fail.lock().unwrap() = None;
        disk.journal.lock().unwrap().clear();
        let kept = decision("kept", 1, &["bb"]);
        ledger.keep(kept.clone()).unwrap();
        assert_eq!(
            *disk.journal.lock().unwrap(),
            ["create", "append", "sync"],
            "{fault}: after a fault a new file is begun, and synced before keep returns"
        );
        let reader = Ledger::open(folder.path(), "other").unwrap();
        assert!(reader.decisions().contains(&kept), "{fault}");
    }
}

#[test]
fn a_folder_that_cannot_be_made_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("file");
    std::fs::write(&file, "").unwrap();
    let error = Ledger::open(&file.join("ledger"), "desk").unwrap_err();
    assert!(error.to_string().contains("--ledger"), "{error}");
}

proptest::proptest! {
    #![proptest_config(proptest::prelude::ProptestConfig::with_cases(64))]

    /// Whatever happens to a file's bytes, reading it never panics and never invents a decision.
    #[test]
    fn any_damage_is_survived(at in 0usize..2000, byte: u8) {
        let whole = line::encode(&decision("a", 0, &["aa"])).unwrap();
        let mut bytes = whole.clone().into_bytes();
        let at = at % bytes.len();
        bytes[at] = byte;
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("x.jsonl"), &bytes).unwrap();
        let ledger = Ledger::open(folder.path(), "desk").unwrap();
        for read in ledger.decisions() {
            proptest::prop_assert_eq!(read, &decision("a", 0, &["aa"]));
        }
    }
}
