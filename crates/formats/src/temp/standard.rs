//! Section 2 of parts A and C: the surface and the standard isobaric surfaces.

use super::{
    align::{Block, Piece, Scheme, align},
    context::{Context, air_cost, is_marker, is_surface_pressure, wind_cost},
    extremes::is_extreme,
    framing::{Part, Word, quote},
    groups::{self, cut, is_missing, number},
    heights::{self, Coded},
    standard_atmosphere,
};
use dewbound_sounding::{Level, LevelKind};

/// A level a part can hold: its two figures, and its pressure in hPa (`None`: the ground).
struct Slot {
    figures: &'static str,
    hectopascals: Option<u16>,
}

const fn slot(figures: &'static str, hectopascals: u16) -> Slot {
    Slot {
        figures,
        hectopascals: Some(hectopascals),
    }
}

const LOWER: [Slot; 12] = [
    Slot {
        figures: "99",
        hectopascals: None,
    },
    slot("00", 1000),
    slot("92", 925),
    slot("85", 850),
    slot("70", 700),
    slot("50", 500),
    slot("40", 400),
    slot("30", 300),
    slot("25", 250),
    slot("20", 200),
    slot("15", 150),
    slot("10", 100),
];

const UPPER: [Slot; 5] = [
    slot("70", 70),
    slot("50", 50),
    slot("30", 30),
    slot("20", 20),
    slot("10", 10),
];

impl Slot {
    fn pascals(&self) -> Option<f64> {
        self.hectopascals.map(|value| f64::from(value) * 100.0)
    }

    fn name(&self) -> String {
        self.hectopascals.map_or_else(
            || "the surface level".into(),
            |value| format!("the {value} hPa level"),
        )
    }
}

/// Whether the indicator `Id` promises a wind group.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Promise {
    Given,
    /// The indicator names two levels by one figure (100 and 150, 200 and 250), or is unreadable.
    Open,
    LeftOut,
}

/// Reads code table 1734 (from memory): in part A the hundreds, in part C the tens of hectopascals of the highest
/// standard level whose wind is given; 0 is 1,000 hPa; a solidus says that none is.
fn promise(indicator: char, slot: &Slot, part: Part) -> Promise {
    let Some(hectopascals) = slot.hectopascals else {
        return if indicator == '/' {
            Promise::Open
        } else {
            Promise::Given
        };
    };
    let figure = hectopascals / if part.upper() { 10 } else { 100 };
    match indicator.to_digit(10) {
        None if indicator == '/' => Promise::LeftOut,
        None => Promise::Open,
        Some(highest) => {
            let highest = if highest == 0 { 10 } else { highest };
            let shared = matches!(hectopascals, 100 | 200) && !part.upper();
            match u32::from(figure).cmp(&highest) {
                std::cmp::Ordering::Less => Promise::LeftOut,
                std::cmp::Ordering::Equal if shared => Promise::Open,
                _ => Promise::Given,
            }
        }
    }
}

struct Standard<'a> {
    words: &'a [Word<'a>],
    slots: &'static [Slot],
    part: Part,
    indicator: char,
    unit: Option<f64>,
}

impl Standard<'_> {
    fn text(&self, at: usize) -> &str {
        self.words.get(at).map_or("", |word| word.text)
    }

    fn level_cost(&self, slot: &Slot, text: &str) -> u32 {
        let figures = cut(text, 2, 5);
        if is_missing(figures) {
            return 0;
        }
        let plausible = match slot.pascals() {
            None => {
                matches!(groups::pressure(figures, false), Ok(Some(pressure)) if is_surface_pressure(pressure))
            }
            Some(pressure) => number(figures).is_some_and(|figures| {
                // From 500 hPa up only one reading is near the atmosphere; below, every figure is possible.
                let tens = f64::from(figures) * 10.0;
                let standard = standard_atmosphere::height(pressure);
                let spread = if self.part.upper() { 4_000.0 } else { 1_800.0 };
                pressure > 50_000.0
                    || (0..=4).any(|leading| {
                        (tens + 10_000.0 * f64::from(leading) - standard).abs() < spread
                    })
            }),
        };
        if plausible && text.len() == 5 { 0 } else { 3 }
    }
}

impl Scheme for Standard<'_> {
    fn groups(&self) -> usize {
        self.words.len()
    }

    fn states(&self) -> usize {
        self.slots.len() + 1
    }

    fn blocks(&self, at: usize, state: usize, found: &mut Vec<Block>) {
        let text = self.text(at);
        for (index, slot) in self.slots.iter().enumerate().skip(state) {
            if cut(text, 0, 2) != slot.figures {
                continue;
            }
            // Levels below the ground may be left out, so skipping at the start is free.
            let skipped = if state <= 1 { 0 } else { index - state };
            let base = self.level_cost(slot, text) + 2 * skipped as u32;
            let promise = promise(self.indicator, slot, self.part);
            let (given, left_out) = match promise {
                Promise::Given => (0, 5),
                Promise::Open => (0, 0),
                Promise::LeftOut => (1, 0),
            };
            let air = air_cost(self.text(at + 1), slot.pascals());
            let mut offer = |air: bool, wind: bool, cost: u32| {
                found.push(Block {
                    slot: index,
                    next: index + 1,
                    air,
                    wind,
                    cost: base + cost,
                });
            };
            offer(
                true,
                true,
                air + wind_cost(self.text(at + 2), self.unit) + given,
            );
            offer(true, false, air + left_out);
            offer(
                false,
                true,
                7 + wind_cost(self.text(at + 1), self.unit) + given,
            );
            offer(false, false, 8);
        }
    }

    fn end(&self, at: usize) -> Option<u32> {
        let text = self.text(at);
        if is_marker(text) || text.starts_with("88") && is_extreme(text) {
            return Some(0);
        }
        // Maximum wind comes after the tropopause: a 77 before an 88 is more likely a temperature.
        let rest = self.words.get(at..).unwrap_or(&[]);
        let tropopause_follows = rest
            .iter()
            .take_while(|word| !is_marker(word.text))
            .any(|word| word.text.starts_with("88") && is_extreme(word.text));
        is_extreme(text).then_some(if tropopause_follows { 6 } else { 0 })
    }
}

/// Reads the section; returns the number of groups it took.
pub(super) fn read(words: &[Word], indicator: char, context: &mut Context) -> usize {
    let slots: &'static [Slot] = if context.part.upper() { &UPPER } else { &LOWER };
    let scheme = Standard {
        words,
        slots,
        part: context.part,
        indicator,
        unit: context.unit,
    };
    let (pieces, end) = align(&scheme);
    let strays = pieces.iter().filter_map(|piece| match piece {
        Piece::Stray(at) => Some(*at),
        Piece::Level { .. } => None,
    });
    context.strays(words, strays);
    let mut coded = Vec::new();
    let mut unpromised = None;
    for piece in pieces {
        let Piece::Level { at, block } = piece else {
            continue;
        };
        let (Some(slot), Some(&word)) = (slots.get(block.slot), words.get(at)) else {
            continue;
        };
        let promise = promise(indicator, slot, context.part);
        let level = level(&scheme, slot, block, at, promise, context);
        if promise == Promise::LeftOut && level.wind.is_some() {
            unpromised.get_or_insert((word.line, slot.name()));
        }
        coded.push(Coded {
            pressure: slot.pascals().unwrap_or_default(),
            figures: slot
                .pascals()
                .and_then(|_| height_figures(word, slot, context)),
            temperature: level.temperature,
            height: None,
        });
        context.levels.push(level);
    }
    if let Some((line, name)) = unpromised {
        context.note(
            line,
            format!("a wind is given at {name} and taken as received"),
            &format!("the date group's last figure ({indicator}) says that none is given so high"),
        );
    }
    heights(coded, context);
    end
}

fn level(
    scheme: &Standard,
    slot: &Slot,
    block: Block,
    at: usize,
    promise: Promise,
    context: &mut Context,
) -> Level {
    let words = scheme.words;
    let name = slot.name();
    let word = |index: usize| words.get(index).copied();
    let mut level = Level::default();
    let Some(first) = word(at) else { return level };
    level.line = Some(first.line);
    match slot.pascals() {
        Some(pressure) => {
            level.kind = LevelKind::Standard;
            level.pressure = Some(pressure);
        }
        None => {
            level.kind = LevelKind::Surface;
            level.pressure = context.surface_pressure(first);
        }
    }
    match (word(at + 1), block.air, block.wind) {
        (Some(only), true, false) if promise == Promise::Given => {
            let either = !is_missing(only.text) && wind_cost(only.text, scheme.unit) == 0;
            if either {
                context.note(
                    only.line,
                    format!(
                        "one group of two is missing at {name}; group {} could be either and is set aside",
                        quote(&[only])
                    ),
                    "it reads as a temperature and as a wind",
                );
            } else {
                context.air(&mut level, only, &name);
                context.note(
                    only.line,
                    format!("{name} left without wind"),
                    "its wind group is missing",
                );
            }
        }
        (Some(air), true, _) => context.air(&mut level, air, &name),
        (Some(wind), false, true) => {
            context.wind(&mut level, wind, &name);
            context.note(
                wind.line,
                format!("{name} left without temperature and dew point"),
                "its temperature group is missing",
            );
        }
        _ => context.note(
            first.line,
            format!("{name} has neither a temperature nor a wind group"),
            "they are missing where they should stand",
        ),
    }
    if let (true, true, Some(wind)) = (block.air, block.wind, word(at + 2)) {
        context.wind(&mut level, wind, &name);
    }
    level
}

fn height_figures(word: Word, slot: &Slot, context: &mut Context) -> Option<u32> {
    let figures = cut(word.text, 2, 5);
    if is_missing(figures) {
        return None;
    }
    let height = number(figures).filter(|_| word.text.len() == 5);
    if height.is_none() {
        context.note(
            word.line,
            format!(
                "group {} not understood as height; {} left without height",
                quote(&[word]),
                slot.name()
            ),
            "height has three figures or ///",
        );
    }
    height
}

/// Settles the heights of the levels just read, the last ones of the context.
fn heights(coded: Vec<Coded>, context: &mut Context) {
    let Some(first) = context.levels.len().checked_sub(coded.len()) else {
        return;
    };
    let (indices, mut coded): (Vec<_>, Vec<_>) = coded
        .into_iter()
        .enumerate()
        .filter(|(_, level)| level.pressure > 0.0)
        .map(|(index, level)| (first + index, level))
        .unzip();
    let doubtful = heights::resolve(&mut coded);
    for (index, resolved) in indices.iter().zip(&coded) {
        if let Some(level) = context.levels.get_mut(*index) {
            level.height = resolved.height;
        }
    }
    let doubts: Vec<_> = doubtful
        .iter()
        .filter_map(|&(index, off)| {
            let level = coded.get(index)?;
            Some(format!(
                "{:.0} m at {:.0} hPa ({:.0} m {})",
                level.height?,
                level.pressure / 100.0,
                off.abs(),
                if off > 0.0 { "too thick" } else { "too thin" }
            ))
        })
        .collect();
    let line = doubtful
        .first()
        .and_then(|(index, _)| indices.get(*index))
        .and_then(|index| context.levels.get(*index))
        .and_then(|level| level.line);
    if let Some(line) = line {
        context.note(
            line,
            format!("heights kept as coded: {}", doubts.join(", ")),
            "no reading of the figures fits the thickness that the temperatures from the level below imply",
        );
    }
}
