//! The effective inflow layer.

use super::LevelAt;
use super::judge::Judge;
use crate::{Air, Environment, Method, Pressure, lift};

/// Least CAPE of air that feeds a storm, J/kg.
pub(super) const LEAST_CAPE: f64 = 100.0;
/// Most negative CIN of air that feeds a storm, J/kg.
pub(super) const LEAST_CIN: f64 = -250.0;
/// Spacing of the starts, Pa.
pub(super) const SPACING: f64 = 500.0;
/// Rounding of a pressure, Pa.
const ROUNDING: f64 = 1e-6;

/// The effective inflow layer (Thompson, Mead & Edwards 2007, WAF 22, 102-115): the lowest contiguous air that could feed a
/// storm.
///
/// - A start **qualifies** when the parcel lifted from it has CAPE of at least 100 J/kg and CIN of at least -250 J/kg.
/// - Starts are tried every 5 hPa from the lowest level upward, up to the last known humidity; the air is the
///   interpolated profile's. The first that qualifies begins the layer.
/// - The **base** is then moved down: of the levels between that start and the failed one beneath it, from the top, as long as
///   they qualify.
/// - The layer goes on upward while starts qualify. From the last that does, levels and starts above it are tried one by one;
///   the next that qualifies continues the layer if it lies less than 5 hPa above the last that did (an isolated
///   failure), and otherwise the layer ends at the last that did: its **top**.
///
/// So either edge is a level or one of the 5 hPa starts; inserting levels may move it by less than 5 hPa. A base and top at
/// the same level are a layer of one start.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InflowLayer {
    /// Its base.
    pub bottom: LevelAt,
    /// Its top.
    pub top: LevelAt,
}

/// Whether a start qualifies, by lifting it; and whether it certainly fails on CAPE.
pub(super) fn qualifies_lifted(environment: &Environment, start: Air) -> (bool, bool) {
    /// More than the error of an ascent's CAPE, J/kg.
    const CERTAIN: f64 = 0.1;
    let Some(ascent) = lift(environment, start, Method::default()) else {
        return (false, false);
    };
    let enough = ascent.cape >= LEAST_CAPE;
    (
        enough && ascent.cin.is_some_and(|cin| cin >= LEAST_CIN),
        ascent.cape < LEAST_CAPE - CERTAIN,
    )
}

pub(super) fn inflow_layer(environment: &Environment) -> Option<InflowLayer> {
    let mut judge = Judge::new(environment);
    let bottom = environment.bottom().pressure.pa();
    let mut first = 0;
    loop {
        let p = bottom - first as f64 * SPACING;
        if judge.is_over(p) {
            return None;
        }
        // Straight to the first start above what fails anyway.
        let reached = judge.fails_up_to(p);
        if reached < p {
            first = ((bottom - reached) / SPACING) as usize + 1;
            continue;
        }
        if judge.qualifies(environment.at(Pressure::from_pa(p))?) {
            break;
        }
        first += 1;
    }
    edges(environment, first, &mut |start| judge.qualifies(start))
}

/// The layer that begins with the `first` of the 5 hPa starts, the lowest that qualifies.
fn edges(
    environment: &Environment,
    first: usize,
    judge: &mut impl FnMut(Air) -> bool,
) -> Option<InflowLayer> {
    let p0 = environment.bottom().pressure.pa();
    let pressure = |k: usize| p0 - k as f64 * SPACING;
    let levels = environment.pressure();
    let mut judge_at = |p: f64| {
        let air = environment.at(Pressure::from_pa(p))?;
        Some(judge(air))
    };

    let mut bottom = pressure(first);
    if first > 0 {
        let failed = pressure(first - 1);
        let above = levels.partition_point(|&p| p > bottom);
        for &p in levels[..above].iter().rev().take_while(|p| **p < failed) {
            if judge_at(p) != Some(true) {
                break;
            }
            bottom = p;
        }
    }

    let mut k = first;
    let mut top = pressure(first);
    'layer: loop {
        while judge_at(pressure(k + 1)) == Some(true) {
            k += 1;
            top = pressure(k);
        }
        // The start above failed, or there is none. One by one from here.
        let mut next_start = k + 1;
        let mut level = levels.partition_point(|&p| p >= top);
        loop {
            let by_level = levels.get(level).copied().unwrap_or(f64::NEG_INFINITY);
            let by_start = pressure(next_start);
            let p = by_level.max(by_start);
            if p <= top - SPACING + ROUNDING {
                break 'layer;
            }
            // Known to have failed.
            let known = by_start >= by_level && next_start == k + 1;
            if by_level == p {
                level += 1;
            }
            if by_start == p {
                next_start += 1;
            }
            if known {
                continue;
            }
            match judge_at(p) {
                None => break 'layer,
                Some(false) => {}
                Some(true) => {
                    top = p;
                    if by_start == p {
                        k = next_start - 1;
                        continue 'layer;
                    }
                }
            }
        }
    }
    let at = |p: f64| LevelAt::of(environment, Pressure::from_pa(p));
    Some(InflowLayer {
        bottom: at(bottom)?,
        top: at(top)?,
    })
}
