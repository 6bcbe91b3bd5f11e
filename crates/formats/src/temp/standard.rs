//! Section 2 of parts A and C: the surface and the standard isobaric surfaces.

use super::{
    align::{Block, INSIDE, MISSING, Piece, STRAY, Scheme, align},
    context::{Context, air_cost, is_extreme, is_marker, is_surface_pressure, wind_cost},
    extremes,
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
    /// Cost of reading tropopauses and maximum winds from each group on.
    after: Vec<u32>,
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
        let Some(value) = number(figures).filter(|_| text.len() == 5) else {
            return 3;
        };
        let plausible = match slot.pascals() {
            None => {
                let pressure = groups::pressure(figures, false);
                pressure.is_ok_and(|pressure| pressure.is_some_and(is_surface_pressure))
            }
            // From 500 hPa up only one reading is near the atmosphere; below, every figure is possible. Polar winters lie
            // farther below the standard atmosphere than the tropics above it.
            Some(pressure) => {
                let (below, above) = if self.part.upper() {
                    (4_000.0, 2_500.0)
                } else {
                    (1_800.0, 1_000.0)
                };
                let standard = standard_atmosphere::height(pressure);
                let near = standard - below..=standard + above;
                let tens = f64::from(value) * 10.0;
                pressure > 50_000.0
                    || (0..=4).any(|leading| near.contains(&(tens + 10_000.0 * f64::from(leading))))
            }
        };
        // A wind whose direction looks like a level's figures gives an absurd height: two strays, no less.
        if plausible { 0 } else { 2 * STRAY }
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
            // What a wind costs that is there, and one that isn't.
            let (given, left_out) = match promise {
                Promise::Given => (0, MISSING),
                Promise::Open => (0, 0),
                Promise::LeftOut => (1, 0),
            };
            // A level below the ground is sometimes cut short to its solidi.
            let bare = if is_missing(cut(text, 2, 5)) {
                4
            } else {
                MISSING + left_out
            };
            let air = |offset: usize| {
                let value = self.text(at + offset);
                let doubled = value == text && offset == 1;
                air_cost(value, slot.pascals()) + if doubled { STRAY } else { 0 }
            };
            let wind = |offset: usize| {
                let text = self.text(at + offset);
                let cost = wind_cost(text, self.unit);
                // Where no wind is due, only a flawless group can be one, and a group sent twice is the next level's.
                let doubled = !is_missing(text) && text == self.text(at + offset + 1);
                let undue = promise == Promise::LeftOut && (cost > 0 || doubled);
                cost + if undue { STRAY } else { 0 }
            };
            let mut offer = |length: usize, air: Option<usize>, wind: Option<usize>, cost: u32| {
                found.push(Block {
                    slot: index,
                    next: index + 1,
                    length,
                    air,
                    wind,
                    cost: base + cost,
                });
            };
            offer(3, Some(1), Some(2), air(1) + wind(2) + given);
            offer(2, Some(1), None, air(1) + left_out);
            offer(2, None, Some(1), MISSING + wind(1) + given);
            offer(1, None, None, bare);
            // With one group too many among them.
            offer(4, Some(1), Some(3), air(1) + wind(3) + given + INSIDE);
            offer(4, Some(2), Some(3), air(2) + wind(3) + given + INSIDE);
            offer(3, Some(2), None, air(2) + left_out + INSIDE);
        }
    }

    fn skips(&self, state: usize, slot: usize) -> bool {
        slot > state
    }

    fn end(&self, at: usize) -> Option<u32> {
        let text = self.text(at);
        if is_marker(text) {
            return Some(0);
        }
        // A temperature can look like the start of what follows (77310), so that has to make sense as well; and a maximum
        // wind before a tropopause never does.
        let after = *self.after.get(at).filter(|_| is_extreme(text))?;
        let disorder = !text.starts_with("88")
            && self
                .words
                .iter()
                .skip(at)
                .any(|word| word.text.starts_with("88") && is_extreme(word.text));
        Some(after + if disorder { 3 * STRAY } else { 0 })
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
        after: extremes::costs(words, context.unit, context.part.upper()),
    };
    let reading = align(&scheme);
    let last = reading.levels.last().map(|piece| piece.at);
    context.unread_top = reading.strays.last().copied() > last;
    context.strays(words, reading.strays.into_iter());
    let mut entries: Vec<Entry> = Vec::new();
    let mut unpromised = None;
    let mut before_is_whole = true;
    let mut regular_end = 0;
    for piece in reading.levels {
        let (Some(slot), Some(&word)) = (slots.get(piece.block.slot), words.get(piece.at)) else {
            continue;
        };
        let promise = promise(indicator, slot, context.part);
        let level = level(&scheme, slot, piece, promise, context);
        if promise == Promise::LeftOut && level.wind.is_some() {
            unpromised.get_or_insert((word.line, slot.name()));
        }
        let block = piece.block;
        let values = usize::from(block.air.is_some()) + usize::from(block.wind.is_some());
        let whole = piece.span == 1 + values
            && block.air.is_some()
            && (block.wind.is_some() || promise != Promise::Given);
        entries.push(Entry {
            shaky: !(whole && before_is_whole && piece.at == regular_end),
            coded: slot.pascals().map(|pressure| Coded {
                pressure,
                figures: height_figures(word, slot, context),
                temperature: level.temperature,
                height: None,
            }),
            words: (piece.at, piece.at + block.length),
            name: slot.name(),
            level,
        });
        before_is_whole = whole;
        regular_end = piece.at + block.length;
    }
    if let Some((line, name)) = unpromised {
        context.note(
            line,
            format!("a wind is given at {name} and taken as received"),
            &format!("the date group's last figure ({indicator}) says that none is given so high"),
        );
    }
    heights(words, &mut entries, context);
    context
        .levels
        .extend(entries.into_iter().map(|entry| entry.level));
    reading.end
}

/// A level read, with what is needed to judge it.
struct Entry {
    level: Level,
    /// Absent for the ground.
    coded: Option<Coded>,
    /// A group is missing or too many in it or right before it, so that it may be stitched together wrongly.
    shaky: bool,
    /// Its groups, from and to.
    words: (usize, usize),
    name: String,
}

fn level(
    scheme: &Standard,
    slot: &Slot,
    piece: Piece,
    promise: Promise,
    context: &mut Context,
) -> Level {
    let name = slot.name();
    let word = |offset: usize| scheme.words.get(piece.at + offset).copied();
    let mut level = Level::default();
    let Some(first) = word(0) else { return level };
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
    let air = piece.block.air.and_then(word);
    let wind = piece.block.wind.and_then(word);
    match (air, wind) {
        // Above 100 hPa a temperature hardly ever reads as a wind, so there the rule holds even where no wind is due.
        (Some(only), None)
            if piece.span == 2 && (promise != Promise::LeftOut || context.part.upper()) =>
        {
            if !context.could_be_either(only, &name) {
                context.air(&mut level, only, &name);
                match promise {
                    Promise::Given => context.note(
                        only.line,
                        format!("{name} left without wind"),
                        "its wind group is missing",
                    ),
                    Promise::Open => context.note(
                        only.line,
                        format!("{name} left without wind"),
                        "it has no wind group; the date group's last figure leaves open whether it should",
                    ),
                    Promise::LeftOut => {}
                }
            }
            return level;
        }
        (None, Some(wind)) => context.note(
            wind.line,
            format!("{name} left without temperature and dew point"),
            "its temperature group is missing",
        ),
        (None, None) => context.note(
            first.line,
            format!("{name} has neither a temperature nor a wind group"),
            "they are missing where they should stand",
        ),
        (Some(_), _) => {}
    }
    let values = scheme.words.get(piece.at + 1..piece.at + piece.span);
    context.settle(
        &mut level,
        slot.pascals(),
        values.unwrap_or(&[]),
        (air, wind),
        &name,
    );
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

/// How far (m) a height may be from what the temperatures imply before a shaky level counts as misread.
const SHAKY_WITHIN: f64 = 250.0;

/// Settles the heights. A shaky level whose height fits no temperature is taken out: its level group is most likely
/// another group.
fn heights(words: &[Word], entries: &mut Vec<Entry>, context: &mut Context) {
    let misfits = loop {
        let indices: Vec<usize> = (0..entries.len())
            .filter(|&index| {
                entries
                    .get(index)
                    .is_some_and(|entry| entry.coded.is_some())
            })
            .collect();
        let mut coded: Vec<Coded> = entries.iter().filter_map(|entry| entry.coded).collect();
        heights::resolve(&mut coded);
        let mut misfits = heights::misfits(&coded);
        for misfit in &mut misfits {
            misfit.index = indices.get(misfit.index).copied().unwrap_or_default();
        }
        let misread = misfits.iter().find(|misfit| {
            let shaky = entries.get(misfit.index).is_some_and(|entry| entry.shaky);
            shaky && misfit.off.abs() > SHAKY_WITHIN
        });
        let Some(misread) = misread else {
            for (entry, resolved) in entries
                .iter_mut()
                .filter(|entry| entry.coded.is_some())
                .zip(coded)
            {
                entry.level.height = resolved.height;
            }
            break misfits;
        };
        let entry = entries.remove(misread.index);
        let groups = words.get(entry.words.0..entry.words.1).unwrap_or(&[]);
        context.note(
            entry.level.line.unwrap_or(1),
            format!("{} set aside: {}", entry.name, quote(groups)),
            "a group is missing or too many here, and the height doesn't fit the temperatures: probably not this level's groups",
        );
    };
    let doubts: Vec<(usize, String)> = misfits
        .iter()
        .filter(|misfit| misfit.judged && misfit.off.abs() > misfit.certain_within)
        .filter_map(|misfit| {
            let level = &entries.get(misfit.index)?.level;
            let text = format!(
                "{:.0} m at {:.0} hPa (the layer below it {:.0} m {})",
                level.height?,
                level.pressure? / 100.0,
                misfit.off.abs(),
                if misfit.off > 0.0 {
                    "too thick"
                } else {
                    "too thin"
                }
            );
            Some((level.line?, text))
        })
        .collect();
    if let Some((line, _)) = doubts.first() {
        let texts: Vec<_> = doubts.iter().map(|(_, text)| text.as_str()).collect();
        context.note(
            *line,
            format!("heights kept as coded: {}", texts.join(", ")),
            "no reading of the figures fits the thickness that the temperatures from the level below imply",
        );
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Code table 1734, from memory: levels with wind, perhaps, and without, as hPa.
    #[test]
    fn what_the_indicator_promises() {
        let check = |indicator: char, part: Part, given: &[u16], open: &[u16]| {
            let slots: &[Slot] = if part.upper() { &UPPER } else { &LOWER };
            let with = |wanted: Promise| -> Vec<u16> {
                let fitting = slots
                    .iter()
                    .filter(|slot| promise(indicator, slot, part) == wanted);
                fitting.filter_map(|slot| slot.hectopascals).collect()
            };
            assert_eq!(with(Promise::Given), given, "{indicator} {part:?}");
            assert_eq!(with(Promise::Open), open, "{indicator} {part:?}");
        };
        check('5', Part::A, &[1000, 925, 850, 700, 500], &[]);
        check('8', Part::A, &[1000, 925, 850], &[]);
        check('0', Part::A, &[1000], &[]);
        check(
            '2',
            Part::A,
            &[1000, 925, 850, 700, 500, 400, 300, 250],
            &[200],
        );
        check('/', Part::A, &[], &[]);
        check('3', Part::C, &[70, 50, 30], &[]);
        check('1', Part::C, &[70, 50, 30, 20, 10], &[]);
        check('x', Part::C, &[], &[70, 50, 30, 20, 10]);
    }
}
