//! Sections 3 and 4: tropopauses (88) and maximum winds (77, 66 when it is the top).

use super::{
    context::{Aside, Context, air_cost, is_marker, wind_cost},
    framing::{Word, quote},
    groups::{cut, is_missing, number},
};
use dewbound_sounding::{Level, LevelKind};

/// Whether a group opens a tropopause or maximum-wind level, or says that there is none (999).
pub(super) fn is_extreme(group: &str) -> bool {
    let rest = cut(group, 2, 5);
    group.len() == 5
        && matches!(cut(group, 0, 2), "88" | "77" | "66")
        && (number(rest).is_some() || is_missing(rest))
}

/// Reads the sections; returns the number of groups they took, up to the next section's number.
pub(super) fn read(words: &[Word], context: &mut Context) -> usize {
    let mut at = 0;
    let mut strays = Vec::new();
    while let Some(&word) = words.get(at) {
        if is_marker(word.text) {
            break;
        }
        if !is_extreme(word.text) {
            strays.push(at);
            at += 1;
            continue;
        }
        at += 1;
        if cut(word.text, 2, 5) == "999" {
            continue;
        }
        let rest = words.get(at..).unwrap_or(&[]);
        at += if word.text.starts_with("88") {
            tropopause(word, rest, context)
        } else {
            maximum_wind(word, rest, context)
        };
    }
    context.strays(words, strays.into_iter());
    at
}

fn tropopause(word: Word, rest: &[Word], context: &mut Context) -> usize {
    let name = "the tropopause";
    let mut level = Level {
        pressure: context.pressure(word, name),
        kind: LevelKind::Tropopause,
        line: Some(word.line),
        ..Level::default()
    };
    let mut taken = 0;
    let air = rest
        .first()
        .filter(|next| air_cost(next.text, level.pressure) == 0 || !opens_other(next.text));
    if let Some(&air) = air {
        context.air(&mut level, air, name);
        taken = 1;
    } else {
        context.note(
            word.line,
            format!("{name} left without temperature and dew point"),
            "its temperature group is missing",
        );
    }
    taken += wind(&mut level, word, rest.get(taken), name, context);
    context.levels.push(level);
    taken
}

fn maximum_wind(word: Word, rest: &[Word], context: &mut Context) -> usize {
    let name = "the maximum wind";
    let mut level = Level {
        pressure: context.pressure(word, name),
        kind: LevelKind::MaximumWind,
        line: Some(word.line),
        ..Level::default()
    };
    let mut taken = wind(&mut level, word, rest.first(), name, context);
    context.levels.push(level);
    if let Some(shear) = rest.get(taken)
        && is_shear(shear.text)
    {
        context.aside.push(Aside {
            what: "wind shear about the maximum wind",
            text: shear.text.into(),
            line: shear.line,
        });
        taken += 1;
    }
    taken
}

fn wind(
    level: &mut Level,
    head: Word,
    next: Option<&Word>,
    name: &str,
    context: &mut Context,
) -> usize {
    match next {
        Some(&next) if wind_cost(next.text, context.unit) == 0 || !opens_other(next.text) => {
            context.wind(level, next, name);
            1
        }
        _ => {
            context.note(
                head.line,
                format!("{name} ({}) left without wind", quote(&[head])),
                "its wind group is missing",
            );
            0
        }
    }
}

/// `4vbvbvava`: the shear 1 km below and above. It follows the wind at once, where no other section can start with
/// 41414 (clouds belong to part B).
fn is_shear(group: &str) -> bool {
    let pair = |text: &str| number(text).is_some() || is_missing(text);
    group.len() == 5 && group.starts_with('4') && pair(cut(group, 1, 3)) && pair(cut(group, 3, 5))
}

fn opens_other(group: &str) -> bool {
    is_marker(group) || is_extreme(group)
}
