//! Sections 3 and 4: tropopauses (88) and maximum winds (77, 66 when it is the top).

use super::{
    align::{self, Block, INSIDE, MISSING, Piece, Scheme, align},
    context::{Aside, Context, air_cost, is_extreme, is_marker, wind_cost},
    framing::{Word, quote},
    groups::{self, cut, is_missing, number},
};
use dewbound_sounding::{Level, LevelKind};

/// `4vbvbvava`: the shear 1 km below and above the maximum wind.
fn is_shear(group: &str) -> bool {
    let pair = |text: &str| number(text).is_some() || is_missing(text);
    group.len() == 5 && group.starts_with('4') && pair(cut(group, 1, 3)) && pair(cut(group, 3, 5))
}

const NONE: usize = 0;
const TROPOPAUSE: usize = 1;
const MAXIMUM_WIND: usize = 2;
const SHEAR: usize = 3;

/// States of the section: 0 anywhere, 1 right after a maximum wind, where its shear can follow.
struct Extremes<'a> {
    words: &'a [Word<'a>],
    unit: Option<f64>,
    upper: bool,
}

impl Extremes<'_> {
    fn text(&self, at: usize) -> &str {
        self.words.get(at).map_or("", |word| word.text)
    }
}

impl Scheme for Extremes<'_> {
    fn groups(&self) -> usize {
        self.words.len()
    }

    fn states(&self) -> usize {
        2
    }

    fn blocks(&self, at: usize, state: usize, found: &mut Vec<Block>) {
        let text = self.text(at);
        let pressure = groups::pressure(cut(text, 2, 5), self.upper).ok().flatten();
        let mut offer = |slot, length, air, wind, cost| {
            found.push(Block {
                slot,
                next: usize::from(slot == MAXIMUM_WIND),
                length,
                air,
                wind,
                cost,
            });
        };
        if state == 1 && is_shear(text) {
            offer(SHEAR, 1, None, None, 0);
        }
        if !is_extreme(text) {
            return;
        }
        let air = |offset: usize| air_cost(self.text(at + offset), pressure);
        let wind = |offset: usize| wind_cost(self.text(at + offset), self.unit);
        if cut(text, 2, 5) == "999" {
            offer(NONE, 1, None, None, 0);
        } else if text.starts_with("88") {
            offer(TROPOPAUSE, 3, Some(1), Some(2), air(1) + wind(2));
            offer(TROPOPAUSE, 2, Some(1), None, air(1) + MISSING);
            offer(TROPOPAUSE, 2, None, Some(1), wind(1) + MISSING);
            offer(TROPOPAUSE, 1, None, None, 2 * MISSING);
            offer(TROPOPAUSE, 4, Some(1), Some(3), air(1) + wind(3) + INSIDE);
            offer(TROPOPAUSE, 4, Some(2), Some(3), air(2) + wind(3) + INSIDE);
        } else {
            offer(MAXIMUM_WIND, 2, None, Some(1), wind(1));
            offer(MAXIMUM_WIND, 1, None, None, MISSING);
            offer(MAXIMUM_WIND, 3, None, Some(2), wind(2) + INSIDE);
        }
    }

    fn skips(&self, _state: usize, _slot: usize) -> bool {
        false
    }

    /// Clouds (41414) belong to part B: here those figures are a shear.
    fn end(&self, at: usize) -> Option<u32> {
        let text = self.text(at);
        (is_marker(text) && text != "41414").then_some(0)
    }
}

/// What reading the sections costs when they start at each group.
pub(super) fn costs(words: &[Word], unit: Option<f64>, upper: bool) -> Vec<u32> {
    align::costs(&Extremes { words, unit, upper })
}

/// Reads the sections; returns the number of groups they took, up to the next section's number.
pub(super) fn read(words: &[Word], context: &mut Context) -> usize {
    let scheme = Extremes {
        words,
        unit: context.unit,
        upper: context.part.upper(),
    };
    let reading = align(&scheme);
    context.strays(words, reading.strays.into_iter());
    for piece in reading.levels {
        let Some(&word) = words.get(piece.at) else {
            continue;
        };
        match piece.block.slot {
            TROPOPAUSE => {
                let name = "the tropopause";
                level(words, word, piece, LevelKind::Tropopause, name, context);
            }
            MAXIMUM_WIND => {
                let name = "the maximum wind";
                level(words, word, piece, LevelKind::MaximumWind, name, context);
            }
            SHEAR => context.aside.push(Aside {
                what: "wind shear about the maximum wind",
                text: word.text.into(),
                line: word.line,
            }),
            _ => {}
        }
    }
    reading.end
}

fn level(
    words: &[Word],
    head: Word,
    piece: Piece,
    kind: LevelKind,
    name: &str,
    context: &mut Context,
) {
    let name = format!("{name} ({})", quote(&[head]));
    let mut level = Level {
        pressure: context.pressure(head, &name),
        kind,
        line: Some(head.line),
        ..Level::default()
    };
    let word = |offset: usize| words.get(piece.at + offset).copied();
    let air = piece.block.air.and_then(word);
    let wind = piece.block.wind.and_then(word);
    if let (Some(only), None) = (air, wind)
        && context.could_be_either(only, &name)
    {
        context.levels.push(level);
        return;
    }
    if air.is_none() && kind == LevelKind::Tropopause {
        context.note(
            head.line,
            format!("{name} left without temperature and dew point"),
            "its temperature group is missing",
        );
    }
    if wind.is_none() {
        context.note(
            head.line,
            format!("{name} left without wind"),
            "its wind group is missing",
        );
    }
    let values = words.get(piece.at + 1..piece.at + piece.span);
    let pressure = level.pressure;
    context.settle(
        &mut level,
        pressure,
        values.unwrap_or(&[]),
        (air, wind),
        &name,
    );
    context.levels.push(level);
}
