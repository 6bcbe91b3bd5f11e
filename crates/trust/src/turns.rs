//! Where a flight turns back in pressure, and whether that mixes two passes through one layer.

use crate::Context;
use dewbound_sounding::thermo::Pressure;
use dewbound_sounding::{LevelKind, Sampling};

/// An episode in which pressure rose against the order received.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Turn {
    /// Pressure from which it turned back and to which it rose, Pa.
    pub from: f64,
    pub to: f64,
    /// Line of the first row back and of the one at which the flight is past `from` again.
    pub line: Option<usize>,
    pub until: Option<usize>,
    /// The largest difference of temperature between two passes at one pressure, K: at the two ends of the layer passed
    /// twice. `None` when it is never passed again or no temperature is known.
    pub apart: Option<f64>,
}

/// A layer that was passed more than once with temperatures too different to belong to one profile.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Mixed {
    /// Pa.
    pub bottom: f64,
    pub top: f64,
    /// K.
    pub apart: f64,
    pub line: Option<usize>,
    pub until: Option<usize>,
}

#[derive(Clone, Copy)]
struct Step {
    p: f64,
    t: Option<f64>,
    line: Option<usize>,
}

/// Episodes in which pressure rose against the received order by more than jitter and rounding.
pub(crate) fn turns(context: &Context) -> Vec<Turn> {
    let sounding = context.sounding;
    let fine = context.profile.sampling == Sampling::Fine;
    // Fine data also hold the wait before launch and the way down after the burst, which the profile leaves out.
    let flight = if fine {
        flight(context)
    } else {
        0..sounding.levels.len()
    };
    let levels = sounding.levels.get(flight).unwrap_or_default();
    let surface = context
        .profile
        .surface_pressure()
        .map_or(f64::INFINITY, Pressure::pa);
    let waiting = surface - 100.0 * context.thresholds.get("level-order.prelaunch_hpa");
    // One level in a group of coded levels may be rounded to its neighbour's pressure, not beyond it.
    let tolerance = if fine {
        100.0 * context.thresholds.get("level-order.fine_reversal_hpa")
    } else {
        0.0
    };
    let groups: &[Option<u8>] = if fine {
        &[None]
    } else {
        &[Some(1), Some(2), Some(3), Some(4)]
    };
    let mut turns = Vec::new();
    for &group in groups {
        let mut steps: Vec<Step> = levels
            .iter()
            .filter(|level| group.is_none() || order_group(level.kind) == group)
            .filter_map(|level| {
                Some(Step {
                    p: level.pressure.filter(|p| p.is_finite() && *p > 0.0)?,
                    t: level.temperature.filter(|t| t.is_finite()),
                    line: level.line,
                })
            })
            .collect();
        if falling_sonde(&steps) {
            steps.reverse();
        }
        turns.extend(episodes(&steps, waiting, tolerance));
    }
    turns
}

/// The layers of a fine flight in which passes are mixed, from the ground up, those that overlap as one.
pub(crate) fn mixed_passes(context: &Context, turns: &[Turn]) -> Vec<Mixed> {
    if context.profile.sampling != Sampling::Fine {
        return Vec::new();
    }
    let mut layers: Vec<Mixed> = turns
        .iter()
        .filter_map(|turn| {
            let limit = context.thresholds.get("level-order.passes_k");
            Some(Mixed {
                bottom: turn.to,
                top: turn.from,
                apart: turn.apart.filter(|&apart| apart >= limit)?,
                line: turn.line,
                until: turn.until,
            })
        })
        .collect();
    layers.sort_by(|a, b| b.bottom.total_cmp(&a.bottom));
    let mut merged: Vec<Mixed> = Vec::with_capacity(layers.len());
    for layer in layers {
        match merged.last_mut() {
            Some(below) if below.top <= layer.bottom => {
                below.top = below.top.min(layer.top);
                below.apart = below.apart.max(layer.apart);
                below.line = below.line.min(layer.line);
                below.until = below.until.max(layer.until);
            }
            _ => merged.push(layer),
        }
    }
    merged
}

/// Kinds of level that a coded message lists each in its own falling order.
fn order_group(kind: LevelKind) -> Option<u8> {
    match kind {
        LevelKind::Standard => Some(1),
        LevelKind::SignificantThermal => Some(2),
        LevelKind::SignificantWind => Some(3),
        LevelKind::Other => Some(4),
        // One or a few a message, wherever its code puts them.
        LevelKind::Surface | LevelKind::Tropopause | LevelKind::MaximumWind => None,
    }
}

/// The received levels from the surface of the profile to its top, in whichever order they came.
fn flight(context: &Context) -> std::ops::Range<usize> {
    let profile = context.profile;
    let received = |row: usize| profile.received.get(row).copied().flatten();
    let surface = received(profile.surface.unwrap_or(0));
    let top = (0..profile.len()).rev().find_map(received);
    match (surface, top) {
        (Some(surface), Some(top)) => surface.min(top)..surface.max(top) + 1,
        _ => 0..context.sounding.levels.len(),
    }
}

/// Most steps go up in pressure: a sonde dropped from an aircraft.
fn falling_sonde(steps: &[Step]) -> bool {
    let up = steps
        .windows(2)
        .filter(|pair| matches!(pair, [a, b] if b.p > a.p))
        .count();
    steps.len() > 2 && 2 * up > steps.len()
}

/// One turn while it is followed: indices of its steps.
struct Open {
    low: usize,
    first: usize,
    high: usize,
}

fn episodes(steps: &[Step], waiting: f64, tolerance: f64) -> Vec<Turn> {
    let mut episodes = Vec::new();
    let mut lowest: Option<(usize, f64)> = None;
    let mut open: Option<Open> = None;
    for (index, step) in steps.iter().enumerate() {
        let Some((low, least)) = lowest.filter(|&(_, least)| step.p > least) else {
            episodes.extend(
                open.take()
                    .and_then(|open| closed(steps, &open, Some(index))),
            );
            lowest = Some((index, step.p));
            continue;
        };
        match &mut open {
            Some(open) => {
                if steps.get(open.high).is_some_and(|high| step.p > high.p) {
                    open.high = index;
                }
            }
            None if step.p > least + tolerance && least < waiting => {
                open = Some(Open {
                    low,
                    first: index,
                    high: index,
                });
            }
            None => {}
        }
    }
    episodes.extend(open.and_then(|open| closed(steps, &open, None)));
    episodes
}

fn closed(steps: &[Step], open: &Open, end: Option<usize>) -> Option<Turn> {
    let (low, high) = (steps.get(open.low)?, steps.get(open.high)?);
    let end = end.and_then(|end| steps.get(end));
    // The last step on the way up that was at the pressure to which it came back.
    let before = steps
        .get(..=open.low)?
        .iter()
        .rev()
        .find(|step| step.p >= high.p);
    let differ = |a: Option<&Step>, b: Option<&Step>| Some((a?.t? - b?.t?).abs());
    let at_top = differ(end, Some(low));
    let at_bottom = differ(before, Some(high));
    Some(Turn {
        from: low.p,
        to: high.p,
        line: steps.get(open.first)?.line,
        until: end.and_then(|step| step.line),
        apart: end.and_then(|_| at_top.into_iter().chain(at_bottom).reduce(f64::max)),
    })
}
