//! Sections 5 and 6 of parts B and D: levels significant for temperature and humidity, and (21212) for wind.

use super::{
    align::{Block, INSIDE, MISSING, Piece, STRAY, Scheme, align},
    context::{Context, Cost, air_cost, is_marker, wind_cost},
    framing::{Part, Word, quote},
    groups::{self, cut, is_missing},
};
use dewbound_sounding::{Level, LevelKind};

/// For what the levels are significant.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Significance {
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
        let value = |offset: usize| {
            let value = self.text(at + offset);
            let cost = match self.significance {
                Significance::Thermal => air_cost(value, pressure.ok().flatten()),
                Significance::Wind => wind_cost(value, self.unit),
            };
            // A level group sent twice is no value.
            cost + if value == text { STRAY } else { 0 }
        };
        let base = level + 3 * skipped(state, slot) as u32;
        let mut offer = |length: usize, value: Option<usize>, cost: u32| {
            let of = |wanted: Significance| value.filter(|_| self.significance == wanted);
            found.push(Block {
                slot,
                next: following(slot),
                length,
                air: of(Significance::Thermal),
                wind: of(Significance::Wind),
                cost: base + cost,
            });
        };
        offer(2, Some(1), value(1));
        offer(1, None, MISSING);
        // With one group too many between them.
        offer(3, Some(2), value(2) + INSIDE);
    }

    fn skips(&self, state: usize, slot: usize) -> bool {
        skipped(state, slot) > 0
    }

    fn end(&self, at: usize) -> Option<u32> {
        let text = self.text(at);
        if is_marker(text) {
            return Some(0);
        }
        // The surface level once more opens the winds even when their section number is lost.
        let again = at > 1 && text.starts_with("00") && text == self.text(0);
        (again && self.significance == Significance::Thermal).then_some(MISSING)
    }
}

/// Reads both sections; returns the number of groups they took.
pub(super) fn read(words: &[Word], context: &mut Context) -> usize {
    let taken = section(words, Significance::Thermal, context);
    match words.get(taken) {
        Some(word) if word.text == "21212" => {
            // A number sent twice opens one section.
            let numbers = rest(words, taken).iter();
            let start = taken + numbers.take_while(|word| word.text == "21212").count();
            start + winds(rest(words, start), context)
        }
        Some(word) if !is_marker(word.text) => {
            context.note(
                word.line,
                format!("winds taken to start at group {}", quote(&[*word])),
                "the levels start anew from below without the section number 21212",
            );
            taken + winds(rest(words, taken), context)
        }
        _ => taken,
    }
}

/// Reads the section of winds, its number left out.
pub(super) fn winds(words: &[Word], context: &mut Context) -> usize {
    section(words, Significance::Wind, context)
}

fn rest<'a, 'w>(words: &'w [Word<'a>], from: usize) -> &'w [Word<'a>] {
    words.get(from..).unwrap_or(&[])
}

/// Where levels start anew from below: numbers leave the order or begin again while pressure jumps up. A section number
/// was lost there, and what follows must not be read as temperatures.
fn restart(words: &[Word], levels: &[Piece], upper: bool) -> Option<usize> {
    let pressure = |piece: &Piece| level_pressure(words, piece, upper);
    levels.windows(2).find_map(|pair| {
        let [below, above] = pair else { return None };
        let slot = above.block.slot;
        let anew = slot <= 1 || skipped(below.block.next, slot) > 0;
        let jump = pressure(above)? > 1.2 * pressure(below)?;
        (anew && jump).then_some(above.at)
    })
}

fn section(words: &[Word], significance: Significance, context: &mut Context) -> usize {
    let scheme = Significant {
        words,
        significance,
        part: context.part,
        unit: context.unit,
    };
    let reading = align(&scheme);
    let end = match significance {
        Significance::Thermal => restart(words, &reading.levels, context.part.upper()),
        Significance::Wind => None,
    }
    .unwrap_or(reading.end);
    let strays = reading.strays.into_iter().filter(|&at| at < end);
    context.strays(words, strays);
    let pieces: Vec<Piece> = reading
        .levels
        .into_iter()
        .filter(|piece| piece.at < end)
        .collect();
    let mut expected = 0;
    let mut regular_end = 0;
    let mut below = None;
    for (index, &piece) in pieces.iter().enumerate() {
        let Some(&word) = words.get(piece.at) else {
            continue;
        };
        let at = |piece: &Piece| level_pressure(words, piece, context.part.upper());
        let pressure = at(&piece);
        let above = pieces.get(index + 1).and_then(at);
        let regular = piece.at == regular_end && piece.span == 2;
        regular_end = piece.at + piece.block.length;
        let falls =
            |from: Option<f64>, to: Option<f64>| from.zip(to).is_none_or(|(from, to)| from > to);
        let in_order = falls(below, pressure) && falls(pressure, above);
        if !regular && !in_order {
            let groups = words.get(piece.at..regular_end).unwrap_or(&[]);
            context.note(
                word.line,
                format!("{} set aside", quote(groups)),
                "a group is missing or too many here, and the pressure is out of order: probably no level group",
            );
            continue;
        }
        // Its value could be the next level's group, its own value being the one that is lost.
        let next_lacks = pieces.get(index + 1).is_some_and(|next| {
            let lost = scheme.skips(piece.block.next, next.block.slot) && next.at > regular_end;
            lost || next.block.length == 1
        });
        let opens_next = words
            .get(piece.at + 1)
            .is_some_and(|value| ordinal(value.text) == Some(piece.block.next));
        if next_lacks && opens_next {
            let groups = words.get(piece.at..regular_end).unwrap_or(&[]);
            context.note(
                word.line,
                format!("{} set aside", quote(groups)),
                "a group is missing here, and the second could open the level that is missing after it",
            );
            expected = piece.block.next;
            continue;
        }
        if skipped(expected, piece.block.slot) > 0 {
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
        expected = piece.block.next;
        below = pressure.or(below);
        if let Some(level) = level(words, word, piece, significance, context) {
            context.levels.push(level);
        }
    }
    end
}

fn level_pressure(words: &[Word], piece: &Piece, upper: bool) -> Option<f64> {
    let word = words.get(piece.at)?;
    groups::pressure(cut(word.text, 2, 5), upper).ok().flatten()
}

fn level(
    words: &[Word],
    word: Word,
    piece: Piece,
    significance: Significance,
    context: &mut Context,
) -> Option<Level> {
    let offset = piece.block.air.or(piece.block.wind);
    let value = offset
        .and_then(|offset| words.get(piece.at + offset))
        .copied();
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
    let surface = piece.block.slot == 0 && !context.part.upper();
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
    let Some(value) = value else {
        context.note(
            word.line,
            format!("{name} left out: no {what} group follows it"),
            "a level group alone tells nothing",
        );
        return None;
    };
    let unit = context.unit;
    let cost = |text: &str| match significance {
        Significance::Thermal => air_cost(text, level.pressure),
        Significance::Wind => wind_cost(text, unit),
    };
    let values = words.get(piece.at + 1..piece.at + piece.span);
    let (air, wind): (Cost, Cost) = match significance {
        Significance::Thermal => (Some(&cost), None),
        Significance::Wind => (None, Some(&cost)),
    };
    let certain = context.certain(values.unwrap_or(&[]), &name, air, wind);
    if certain.air && certain.wind {
        match significance {
            Significance::Thermal => context.air(&mut level, value, &name),
            Significance::Wind => context.wind(&mut level, value, &name),
        }
    }
    Some(level)
}
