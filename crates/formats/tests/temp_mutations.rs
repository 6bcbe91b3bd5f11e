//! The TEMP reader on broken reports: no panic, nothing that is not finite, and no group's fault spreads.
//!
//! A fixed small share always runs; `DEWBOUND_LONG=1` runs many more.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod temp_common;

use temp_common::{ALM, VALE, assert_sound, bare, body, poorer, read};

/// A small generator of repeatable numbers (Marsaglia's xorshift, 64 bits).
struct Numbers(u64);

impl Numbers {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        self.0
    }

    fn below(&mut self, limit: usize) -> usize {
        (self.next() % limit.max(1) as u64) as usize
    }
}

fn rounds(usual: usize) -> usize {
    if std::env::var_os("DEWBOUND_LONG").is_some_and(|value| value == "1") {
        usual * 200
    } else {
        usual
    }
}

/// One random change to a text.
fn mutate(text: &mut Vec<char>, numbers: &mut Numbers) {
    const SPICE: [char; 20] = [
        '/', '=', ' ', '\n', '\r', '\u{1}', '\u{3}', '0', '5', '9', '8', '7', 'T', 'A', 'N', 'x',
        '°', '\u{feff}', '\0', '𝟙',
    ];
    let at = numbers.below(text.len() + 1);
    let length = numbers.below(40).min(text.len() - at);
    match numbers.below(6) {
        0 if at < text.len() => text[at] = SPICE[numbers.below(SPICE.len())],
        1 => text.insert(at, SPICE[numbers.below(SPICE.len())]),
        2 => drop(text.drain(at..at + length)),
        3 => {
            let copy: Vec<char> = text[at..at + length].to_vec();
            let to = numbers.below(text.len() + 1);
            text.splice(to..to, copy);
        }
        4 => {
            let other = numbers.below(text.len().max(1));
            if at < text.len() {
                text.swap(at, other);
            }
        }
        _ if numbers.below(20) == 0 => text.truncate(at),
        _ => {
            let digit = char::from(b'0' + numbers.below(10) as u8);
            if let Some(place) = text.get_mut(at)
                && place.is_ascii_digit()
            {
                *place = digit;
            }
        }
    }
}

#[test]
fn random_changes_never_panic_nor_give_nonsense() {
    let mut numbers = Numbers(0x5EED_0BA1_1005_0001);
    let base: Vec<char> = format!("{VALE}{ALM}").chars().collect();
    for _ in 0..rounds(400) {
        let mut text = base.clone();
        for _ in 0..=numbers.below(12) {
            mutate(&mut text, &mut numbers);
        }
        let text: String = text.into_iter().collect();
        let lines = text.split(['\n', '\r']).count();
        let loaded = read("20310630.txt", &text);
        assert_sound(&loaded, lines);
    }
}

/// Whatever happens to the groups of one report, the other one is read as before.
#[test]
fn a_broken_report_leaves_the_next_alone() {
    let mut numbers = Numbers(0x5EED_0BA1_1005_0002);
    let plain = read("20310630.txt", ALM).soundings.remove(0);
    for _ in 0..rounds(100) {
        let mut text: Vec<char> = VALE.chars().collect();
        for _ in 0..=numbers.below(12) {
            mutate(&mut text, &mut numbers);
        }
        let text: String = text.into_iter().collect();
        let loaded = read("20310630.txt", &format!("{text}\n{ALM}"));
        let found = loaded
            .soundings
            .iter()
            .find(|sounding| sounding.source.parts == plain.source.parts)
            .expect("the intact report");
        assert_eq!(bare(&found.levels), bare(&plain.levels));
    }
}

/// Every group in turn made unreadable, lost, or doubled: at most one level suffers (a run of winds by altitude suffers
/// together), what is left of it is as it was, and a note says so.
#[test]
fn one_bad_group_costs_one_level() {
    let mut changed = 0;
    for text in [VALE, ALM] {
        let plain = read("20310630.txt", text).soundings.remove(0);
        let before = bare(&plain.levels);
        for (at, group) in body(text) {
            for fault in ["7x8//", "", &format!("{group} {group}")] {
                let broken = format!("{}{fault}{}", &text[..at], &text[at + group.len()..]);
                let loaded = read("20310630.txt", &broken);
                let case = format!("{group} at {at} made {fault:?}");
                assert_eq!(loaded.soundings.len(), 1, "{case}");
                let sounding = &loaded.soundings[0];
                let after = bare(&sounding.levels);
                let lost: Vec<_> = before
                    .iter()
                    .filter(|level| !after.contains(level))
                    .collect();
                let new: Vec<_> = after
                    .iter()
                    .filter(|level| !before.contains(level))
                    .collect();
                // Winds by altitude stand in runs of three: which is whose can't be told, so they go together. A value
                // whose level group is lost at a section's end competes with the one before it: both go.
                let notes = temp_common::said(sounding);
                let run = ["can't be told which wind", "PPBB: groups", "PPDD: groups"];
                let most = if run.iter().any(|text| notes.contains(text)) {
                    6
                } else if notes.contains("compete") {
                    2
                } else {
                    1
                };
                assert!(lost.len() <= most, "{case}: lost {lost:?}\n{notes}");
                for level in &new {
                    assert!(
                        before.iter().any(|old| poorer(level, old)),
                        "{case}: invented {level:?}\n{:?}",
                        sounding.notes
                    );
                }
                if !lost.is_empty() {
                    changed += 1;
                    assert!(
                        sounding
                            .notes
                            .iter()
                            .any(|note| !plain.notes.contains(note)),
                        "{case}: nothing said"
                    );
                }
            }
        }
    }
    assert!(changed > 200, "only {changed} cases changed anything");
}
