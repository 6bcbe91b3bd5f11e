//! Sections 5 and 6 of parts B and D: levels significant for temperature and humidity, and (21212) for wind.

use super::{
    align::{Block, Piece, Scheme, align},
    context::{Context, air_cost, is_marker, wind_cost},
    framing::{Part, Word, quote},
    groups::{self, cut, is_missing},
};
use dewbound_sounding::{Level, LevelKind};

/// For what the levels are significant.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Significance {
    Thermal,
    Wind,
}

struct Significant<'a> {
    words: &'a [Word<'a>],
    significance: Significance,
    part: Part,
    unit: Option<f64>,
}

impl Significant<'_> {
    fn text(&self, at: usize) -> &str {
        self.words.get(at).map_or("", |word| word.text)
    }
}

/// The level's number: 0 for 00 (the surface), 1 for 11, ..., 9 for 99.
fn ordinal(group: &str) -> Option<usize> {
    match group.as_bytes() {
        [a @ b'0'..=b'9', b, ..] if a == b => Some(usize::from(a - b'0')),
        _ => None,
    }
}

/// The number after this one: 99 is followed by 11.
fn following(ordinal: usize) -> usize {
    ordinal % 9 + 1
}

/// Numbers left out when `found` stands where `expected` should. State 0 is the start, where 00 may be absent.
fn skipped(expected: usize, found: usize) -> usize {
    if expected == 0 {
        found.saturating_sub(1)
    } else {
        (found + 9 - expected) % 9
    }
}

impl Scheme for Significant<'_> {
    fn groups(&self) -> usize {
        self.words.len()
    }

    fn states(&self) -> usize {
        10
    }

    fn blocks(&self, at: usize, state: usize, found: &mut Vec<Block>) {
        let text = self.text(at);
        let Some(slot) = ordinal(text).filter(|&slot| slot > 0 || state == 0) else {
            return;
        };
        let figures = cut(text, 2, 5);
        let pressure = groups::pressure(figures, self.part.upper());
        let next = self.text(at + 1);
        let level = match pressure {
            Ok(Some(_)) if text.len() == 5 => 0,
            // A layer of missing data is coded nn/// /////.
            Ok(None) if is_missing(next) => 0,
            Ok(_) => 2,
            Err(_) => 3,
        };
        let value = match self.significance {
            Significance::Thermal => air_cost(next, pressure.ok().flatten()),
            Significance::Wind => wind_cost(next, self.unit),
        };
        let base = level + 3 * skipped(state, slot) as u32;
        let mut offer = |paired: bool, cost: u32| {
            found.push(Block {
                slot,
                next: following(slot),
                air: paired && self.significance == Significance::Thermal,
                wind: paired && self.significance == Significance::Wind,
                cost: base + cost,
            });
        };
        offer(true, value);
        offer(false, 5);
    }

    fn end(&self, at: usize) -> Option<u32> {
        is_marker(self.text(at)).then_some(0)
    }
}

/// Reads the section; returns the number of groups it took.
pub(super) fn read(words: &[Word], significance: Significance, context: &mut Context) -> usize {
    let scheme = Significant {
        words,
        significance,
        part: context.part,
        unit: context.unit,
    };
    let (pieces, end) = align(&scheme);
    let strays = pieces.iter().filter_map(|piece| match piece {
        Piece::Stray(at) => Some(*at),
        Piece::Level { .. } => None,
    });
    context.strays(words, strays);
    let mut expected = 0;
    for piece in pieces {
        let Piece::Level { at, block } = piece else {
            continue;
        };
        let Some(&word) = words.get(at) else { continue };
        if skipped(expected, block.slot) > 0 {
            context.note(
                word.line,
                format!(
                    "significant levels are numbered {} where {} should follow",
                    cut(word.text, 0, 2),
                    expected.max(1) * 11
                ),
                "a level may have been lost",
            );
        }
        expected = block.next;
        let value = words
            .get(at + 1)
            .copied()
            .filter(|_| block.air || block.wind);
        if let Some(level) = level(word, value, block, significance, context) {
            context.levels.push(level);
        }
    }
    end
}

fn level(
    word: Word,
    value: Option<Word>,
    block: Block,
    significance: Significance,
    context: &mut Context,
) -> Option<Level> {
    let what = match significance {
        Significance::Thermal => "temperature",
        Significance::Wind => "wind",
    };
    if is_missing(cut(word.text, 2, 5)) && value.is_none_or(|value| is_missing(value.text)) {
        context.note(
            word.line,
            format!(
                "group {} marks a layer of missing {what} between the significant levels beside it",
                quote(&[word])
            ),
            "values in between are interpolated across the gap",
        );
        return None;
    }
    let name = format!("the significant level {}", quote(&[word]));
    let surface = block.slot == 0 && !context.part.upper();
    let mut level = Level {
        pressure: if surface {
            context.surface_pressure(word)
        } else {
            context.pressure(word, &name)
        },
        kind: match significance {
            _ if surface => LevelKind::Surface,
            Significance::Thermal => LevelKind::SignificantThermal,
            Significance::Wind => LevelKind::SignificantWind,
        },
        line: Some(word.line),
        ..Level::default()
    };
    match (value, significance) {
        (Some(value), Significance::Thermal) => context.air(&mut level, value, &name),
        (Some(value), Significance::Wind) => context.wind(&mut level, value, &name),
        (None, _) => context.note(
            word.line,
            format!("{name} left without {what}"),
            "the group that should follow is missing",
        ),
    }
    Some(level)
}
