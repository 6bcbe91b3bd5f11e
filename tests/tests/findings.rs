//! Findings on whole files: the story each demo sounding tells, and no panic on real ascents.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_formats::{ReadOptions, StationTable, read_path};
use dewbound_sounding::{Amendments, Daylight, Numbers, Profile, Sounding, daylight};
use dewbound_tests::open_data;
use dewbound_trust::{
    Context, Cost, Finding, Grade, Priced, Thresholds, findings, price, rank, with_repair,
};
use std::collections::BTreeSet;
use std::path::Path;

struct Judged {
    profile: Profile,
    numbers: Numbers,
    daylight: Daylight,
    findings: Vec<Finding>,
}

fn judge(sounding: &Sounding) -> Judged {
    let (profile, _) = Profile::received(sounding);
    let numbers = Numbers::of(&profile);
    let daylight = daylight(sounding);
    let findings = findings(&Context {
        sounding,
        profile: &profile,
        numbers: &numbers,
        daylight,
        thresholds: &Thresholds::default(),
    });
    Judged {
        profile,
        numbers,
        daylight,
        findings,
    }
}

impl Judged {
    fn priced(&self) -> Vec<Priced<'_>> {
        price(
            &self.findings,
            &self.profile,
            &Amendments::default(),
            self.daylight,
            &self.numbers,
        )
    }

    /// What must hold of any sounding.
    fn check(&self, name: &str) {
        let keys: BTreeSet<_> = self.findings.iter().map(Finding::key).collect();
        assert_eq!(keys.len(), self.findings.len(), "{name}: a key twice");
        let priced = self.priced();
        assert_eq!(rank(&priced, false).len(), priced.len());
        for state in &priced {
            let finding = state.finding;
            assert!(
                !finding.summary.is_empty()
                    && !finding.guilty.is_empty()
                    && !finding.innocent.is_empty(),
                "{name}: {}",
                finding.key()
            );
            for evidence in &finding.evidence {
                assert!(
                    evidence.value.is_finite(),
                    "{name}: {} {}",
                    finding.key(),
                    evidence.key
                );
            }
            // Taking the repair moves the numbers by the cost shown.
            for (repair, cost) in finding.repairs.iter().zip(&state.costs) {
                let taken = with_repair(&Amendments::default(), finding, repair);
                let after = Numbers::of(&taken.apply(&self.profile, self.daylight).profile);
                assert_eq!(
                    *cost,
                    Cost::between(&after, &self.numbers),
                    "{name}: {} {}",
                    finding.key(),
                    repair.id
                );
            }
        }
    }
}

fn demo(prefix: &str) -> Judged {
    let folder = Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/../demo-soundings"));
    let stations = std::fs::read_to_string(folder.join("stations.csv")).unwrap();
    let (stations, _) = StationTable::parse(&stations);
    let path = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .find(|path| {
            path.file_name()
                .unwrap()
                .to_string_lossy()
                .starts_with(prefix)
        })
        .unwrap_or_else(|| panic!("no demo sounding {prefix}"));
    let options = ReadOptions {
        stations: Some(&stations),
        ..ReadOptions::default()
    };
    let loaded = read_path(&path, &options).unwrap();
    assert_eq!(loaded.soundings.len(), 1, "{prefix}");
    judge(&loaded.soundings[0])
}

#[test]
fn demo_soundings_tell_their_story_first() {
    for (prefix, rule) in [
        ("vellmarsh", "moisture-slope"),
        ("sandrel", "wet-thermometer"),
        ("orlo-ridge", "moisture-slope"),
        ("tamsel-creek", "early-end"),
    ] {
        let judged = demo(prefix);
        judged.check(prefix);
        let priced = judged.priced();
        let at_least = judged
            .numbers
            .most_unstable
            .as_ref()
            .is_some_and(|ascent| ascent.at_least);
        let first = rank(&priced, at_least)
            .first()
            .map(|&index| priced[index].finding.rule);
        assert_eq!(first, Some(rule), "{prefix}");
    }
    for prefix in ["brennick-flats", "corriden-field", "hathwyn", "lowmere-gap"] {
        let judged = demo(prefix);
        let doubts: Vec<_> = judged
            .findings
            .iter()
            .filter(|finding| finding.grade > Grade::Informative)
            .map(Finding::key)
            .collect();
        assert!(doubts.is_empty(), "{prefix}: {doubts:?}");
    }
}

/// Real ascents, which are not part of the repository: `DEWBOUND_OPEN_DATA` names the folder that holds them.
#[test]
fn real_ascents_are_judged_without_panic() {
    let Some(folder) = open_data::folder("findings on real files") else {
        return;
    };
    let mut judged = 0;
    for path in open_data::files(&folder).unwrap() {
        let loaded = read_path(&path, &ReadOptions::default()).unwrap();
        for sounding in &loaded.soundings {
            judge(sounding).check(&path.display().to_string());
            judged += 1;
        }
    }
    assert!(judged > 100, "{judged} soundings");
    // Seen in the raw rows: a sonde wet above cloud at 854 hPa (40 K/km over 50 m where humidity falls from 100 %), and a first row
    // after launch at 2.5 degC between neighbours of 27 degC.
    for (file, rule) in [
        ("csv/tropics_Colombo_2011100304.csv", "wet-thermometer"),
        ("csv/tropics_Surabaya_2012021306.csv", "surface-mismatch"),
    ] {
        let loaded = read_path(&folder.join(file), &ReadOptions::default()).unwrap();
        let found = judge(&loaded.soundings[0]).findings;
        assert!(
            found.iter().any(|finding| finding.rule == rule),
            "{file}: {found:#?}"
        );
    }
}
