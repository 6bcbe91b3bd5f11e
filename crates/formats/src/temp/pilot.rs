//! Wind parts PPAA to PPDD (FM 32 to 34): winds at standard surfaces, at given altitudes, and maxima.

use super::{
    context::{Aside, Context, is_marker},
    framing::{Word, quote},
    groups::{cut, number},
    significant,
};
use dewbound_sounding::{Level, LevelKind};

/// Standard surfaces in hPa by the two figures of part A, in order.
const LOWER: [(&str, u16); 11] = [
    ("00", 1000),
    ("92", 925),
    ("85", 850),
    ("70", 700),
    ("50", 500),
    ("40", 400),
    ("30", 300),
    ("25", 250),
    ("20", 200),
    ("15", 150),
    ("10", 100),
];

/// The same for part C.
const UPPER: [(&str, u16); 5] = [("70", 70), ("50", 50), ("30", 30), ("20", 20), ("10", 10)];

/// Reads parts A and C; returns the number of groups taken, up to the next section's number.
pub(super) fn standard(words: &[Word], context: &mut Context) -> usize {
    let surfaces: &[(&str, u16)] = if context.part.upper() { &UPPER } else { &LOWER };
    let mut at = 0;
    let mut strays = Vec::new();
    let mut by_height = None;
    while let Some(&word) = words.get(at) {
        if is_marker(word.text) {
            break;
        }
        let rest = words.get(at + 1..).unwrap_or(&[]);
        if let Some((count, first)) = run(word.text, surfaces) {
            if word.text.starts_with("55") {
                by_height.get_or_insert(word.line);
            }
            let opens = |text: &str| run(text, surfaces).is_some() || opens_maximum(text);
            let names = surfaces.iter().skip(first).take(count);
            let levels = names
                .map(|(_, hectopascals)| Level {
                    pressure: Some(f64::from(*hectopascals) * 100.0),
                    kind: LevelKind::Standard,
                    ..Level::default()
                })
                .collect();
            at += 1 + winds(word, rest, opens, levels, context);
        } else if opens_maximum(word.text) {
            at += 1 + maximum(word, rest, context);
        } else {
            strays.push(at);
            at += 1;
        }
    }
    if let Some(line) = by_height {
        context.note(
            line,
            "winds are taken to stand at the standard surfaces they are named for".into(),
            "55 says that pressure was not measured: the heights of the surfaces were assumed by the station",
        );
    }
    context.strays(words, strays.into_iter());
    at
}

/// `44nPP` or `55nPP`: how many surfaces follow and the index of the first.
fn run(group: &str, surfaces: &[(&str, u16)]) -> Option<(usize, usize)> {
    let count = number(cut(group, 2, 3)).filter(|count| (1..=3).contains(count))?;
    let first = surfaces
        .iter()
        .position(|(figures, _)| *figures == cut(group, 3, 5))?;
    (group.len() == 5 && matches!(cut(group, 0, 2), "44" | "55"))
        .then_some((usize::try_from(count).ok()?, first))
}

/// No wind group starts with 6 or 7: directions end at 36.
fn opens_maximum(group: &str) -> bool {
    group.len() == 5
        && (group.starts_with('7') || group.starts_with('6'))
        && number(cut(group, 1, 5)).is_some()
}

/// `77PPP` and `66PPP` by pressure; `7HHHH` and `6HHHH` by height in tens of metres.
fn maximum(word: Word, rest: &[Word], context: &mut Context) -> usize {
    if word.text == "77999" || word.text == "66999" {
        return 0;
    }
    let name = format!("the maximum wind {}", quote(&[word]));
    let by_pressure = matches!(cut(word.text, 0, 2), "77" | "66");
    let mut level = Level {
        kind: LevelKind::MaximumWind,
        line: Some(word.line),
        ..Level::default()
    };
    if by_pressure {
        level.pressure = context.pressure(word, &name);
    } else {
        level.height = number(cut(word.text, 1, 5)).map(|tens| f64::from(tens) * 10.0);
    }
    let Some(&value) = rest
        .first()
        .filter(|value| !is_marker(value.text) && !opens_maximum(value.text))
    else {
        context.note(
            word.line,
            format!("{name} left without wind"),
            "its wind group is missing",
        );
        context.levels.push(level);
        return 0;
    };
    context.wind(&mut level, value, &name);
    context.levels.push(level);
    match rest.get(1) {
        Some(shear)
            if shear.text.len() == 5
                && shear.text.starts_with('4')
                && run(shear.text, &LOWER).is_none() =>
        {
            context.aside.push(Aside {
                what: "wind shear about the maximum wind",
                text: shear.text.into(),
                line: shear.line,
            });
            2
        }
        _ => 1,
    }
}

/// How altitudes of part B and D are counted at a station.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum AltitudeUnit {
    /// 300 m.
    Metres300,
    /// 1,000 ft: what North and Central America means by the code's 300 m.
    Feet1000,
}

impl AltitudeUnit {
    /// By the WMO block: 70 to 78 are Region IV (from memory).
    pub fn of_block(wmo: Option<&str>) -> Self {
        match wmo.and_then(|number| number.get(..2)) {
            Some("70" | "71" | "72" | "73" | "74" | "75" | "76" | "77" | "78") => Self::Feet1000,
            _ => Self::Metres300,
        }
    }

    fn metres(self) -> f64 {
        match self {
            Self::Metres300 => 300.0,
            Self::Feet1000 => 304.8,
        }
    }

    fn name(self) -> &'static str {
        match self {
            Self::Metres300 => "300 m",
            Self::Feet1000 => "1,000 ft (304.8 m)",
        }
    }
}

/// `9tuuu` (300 m), `8tuuu` (500 m), `1tuuu` (300 m, the tens counted from 100): metres a step and steps of each wind.
struct Altitudes {
    metres: f64,
    steps: Vec<u32>,
    usual: bool,
}

/// Reads an altitude group. A group starting with 1 can also be a wind: it is only one in part D (from memory: heights
/// from 30,000 m or 100,000 ft up).
fn altitudes(group: &str, unit: AltitudeUnit, upper: bool) -> Option<Altitudes> {
    let (metres, base) = match group.as_bytes().first()? {
        b'9' => (unit.metres(), 0),
        b'8' => (500.0, 0),
        b'1' if upper => (unit.metres(), 100),
        _ => return None,
    };
    let tens = number(cut(group, 1, 2))? * 10 + base;
    let figures = cut(group, 2, 5);
    let steps: Vec<_> = figures
        .chars()
        .map_while(|figure| figure.to_digit(10))
        .map(|units| tens + units)
        .collect();
    let rest_missing = figures
        .chars()
        .skip(steps.len())
        .all(|figure| figure == '/');
    let rises = steps.is_sorted_by(|a, b| a < b);
    (group.len() == 5 && !steps.is_empty() && rest_missing && rises).then_some(Altitudes {
        metres,
        steps,
        usual: metres == unit.metres(),
    })
}

/// Reads parts B and D; returns the number of groups taken, up to the next section's number.
pub(super) fn by_altitude(words: &[Word], unit: AltitudeUnit, context: &mut Context) -> usize {
    let upper = context.part.upper();
    let mut at = 0;
    let mut strays = Vec::new();
    let mut assumed = None;
    while let Some(&word) = words.get(at) {
        if word.text == "21212" {
            let rest = words.get(at + 1..).unwrap_or(&[]);
            at += 1 + significant::winds(rest, context);
            continue;
        }
        if is_marker(word.text) {
            break;
        }
        let Some(group) = altitudes(word.text, unit, upper) else {
            strays.push(at);
            at += 1;
            continue;
        };
        if group.usual {
            assumed.get_or_insert(word.line);
        }
        let levels = group
            .steps
            .iter()
            .map(|&steps| Level {
                height: (steps > 0).then_some(f64::from(steps) * group.metres),
                kind: if steps > 0 {
                    LevelKind::SignificantWind
                } else {
                    LevelKind::Surface
                },
                ..Level::default()
            })
            .collect();
        let rest = words.get(at + 1..).unwrap_or(&[]);
        // No wind starts with 8 or 9, save 99 for a variable direction.
        let opens = |text: &str| {
            text.starts_with(['8', '9']) && !text.starts_with("99")
                || altitudes(text, unit, false).is_some()
        };
        at += 1 + winds(word, rest, opens, levels, context);
    }
    if let Some(line) = assumed {
        context.note(
            line,
            format!("altitudes of winds counted in steps of {}", unit.name()),
            "the code says 300 m; stations of Region IV (blocks 70 to 78) mean 1,000 ft",
        );
    }
    context.strays(words, strays.into_iter());
    at
}

/// Gives each of a run of levels its wind; returns the number of groups taken. `opens` knows a group that starts another
/// run. With fewer or more winds than levels it can't be told which is whose: then none is used.
fn winds(
    head: Word,
    rest: &[Word],
    opens: impl Fn(&str) -> bool,
    levels: Vec<Level>,
    context: &mut Context,
) -> usize {
    let found = rest
        .iter()
        .take_while(|word| !is_marker(word.text) && !opens(word.text))
        .count();
    let groups = rest.get(..found).unwrap_or(&[]);
    if found != levels.len() {
        context.note(
            head.line,
            format!(
                "group {} announces {} wind{} and {found} follow; set aside: {}",
                quote(&[head]),
                levels.len(),
                if levels.len() == 1 { "" } else { "s" },
                quote(groups)
            ),
            "it can't be told which wind belongs to which level",
        );
        return found;
    }
    for (mut level, &word) in levels.into_iter().zip(groups) {
        let name = match (level.pressure, level.height) {
            (Some(pressure), _) => format!("the {:.0} hPa level", pressure / 100.0),
            (None, Some(height)) => format!("the level at {height:.0} m"),
            (None, None) => "the surface level".into(),
        };
        level.line = Some(word.line);
        context.wind(&mut level, word, &name);
        context.levels.push(level);
    }
    found
}
