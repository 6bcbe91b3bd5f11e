//! Layers in which theta falls with height.

use crate::Column;
use dewbound_sounding::thermo::{GAS_CONSTANT_DRY, GRAVITY};
use std::ops::Range;

/// A rise of theta from its lowest value that ends a layer, K. Smaller rises are noise inside it.
const RECOVERY_K: f64 = 0.5;
/// Share of the fall by which the ends may be drawn in so that a layer doesn't reach into well mixed air beside it.
const TRIM_SHARE: f64 = 0.1;
/// The most by which the ends are drawn in, K.
const TRIM_MOST_K: f64 = 0.2;
/// Rounding of pressure in coded messages, Pa.
const CODED_PRESSURE_STEP: f64 = 100.0;

/// A layer over which theta falls.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Falling {
    /// Level of its foot.
    pub base: usize,
    /// Level of its top.
    pub top: usize,
    /// Theta at the foot minus theta at the top, K, > 0.
    pub drop: f64,
}

/// Maximal layers within `levels` over which `theta` falls by at least `least`.
///
/// A layer runs from a highest value to the lowest one before theta has recovered by half a kelvin.
pub(crate) fn falling_layers(theta: &[f64], levels: Range<usize>, least: f64) -> Vec<Falling> {
    let mut layers = Vec::new();
    let mut close = |peak: usize, trough: usize| {
        if trough > peak && theta[peak] - theta[trough] >= least {
            layers.push(trimmed(theta, peak, trough, least));
        }
    };
    let mut levels = levels.start..levels.end.min(theta.len());
    let Some(first) = levels.next() else {
        return layers;
    };
    let (mut peak, mut trough) = (first, first);
    for level in levels {
        if theta[level] < theta[trough] {
            trough = level;
        } else if theta[level] >= theta[peak] || theta[level] - theta[trough] >= RECOVERY_K {
            close(peak, trough);
            (peak, trough) = (level, level);
        }
    }
    close(peak, trough);
    layers
}

fn trimmed(theta: &[f64], peak: usize, trough: usize, least: f64) -> Falling {
    let drop = theta[peak] - theta[trough];
    let trim = (TRIM_SHARE * drop)
        .min(TRIM_MOST_K)
        .min(0.5 * (drop - least))
        .max(0.0);
    let base = (peak..=trough)
        .rev()
        .find(|&level| theta[level] >= theta[peak] - trim)
        .unwrap_or(peak);
    let top = (base..=trough)
        .find(|&level| theta[level] <= theta[trough] + trim)
        .unwrap_or(trough);
    Falling {
        base,
        top,
        drop: theta[base] - theta[top],
    }
}

/// How far the ends of a layer may move when it is measured on the narrower average, Pa.
const SHARPEN_WITHIN: f64 = 250.0;

/// A layer found on the wider average of fine data, measured on the narrower one: its ends move to the highest and the
/// lowest theta near them. Coded layers stay as they are.
pub(crate) fn sharpened(column: &Column, layer: Falling) -> Falling {
    if !column.fine {
        return layer;
    }
    let theta = &column.sharp_theta;
    let near = |level: usize| {
        let p = column.pressure[level];
        let end = column
            .pressure
            .partition_point(|&other| other >= p - SHARPEN_WITHIN);
        column.first_at_or_above(p + SHARPEN_WITHIN)..end
    };
    let higher = |&a: &usize, &b: &usize| theta[a].total_cmp(&theta[b]);
    let base = near(layer.base).max_by(higher).unwrap_or(layer.base);
    let top = near(layer.top)
        .filter(|&level| level > base)
        .min_by(higher)
        .unwrap_or(layer.top);
    if base >= top {
        return layer;
    }
    Falling {
        base,
        top,
        drop: theta[base] - theta[top],
    }
}

/// The steepest fall of temperature over at least `depth` metres in or touching a layer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Steepest {
    /// Lapse rate, K/m, as read.
    pub lapse: f64,
    /// Beyond g/Rd even when rounding is taken off.
    pub autoconvective: bool,
}

/// Lapse rate at which density is constant with height, K/m.
pub(crate) const AUTOCONVECTIVE: f64 = GRAVITY / GAS_CONSTANT_DRY;

/// Steepest lapse rate over at least `depth` m among levels from `depth` below the foot to `depth` above the top.
pub(crate) fn steepest(
    column: &Column,
    layer: Falling,
    depth: f64,
    temperature_step: f64,
) -> Option<Steepest> {
    let z = &column.thickness;
    let reach = |level: usize, by: f64| z.partition_point(|&other| other < z[level] + by);
    let first = reach(layer.base, -depth);
    let last = reach(layer.top, depth).min(column.len().checked_sub(1)?);
    let mut steepest: Option<Steepest> = None;
    let mut upper = first;
    for lower in first..=layer.top {
        while upper <= last && z[upper] - z[lower] < depth {
            upper += 1;
        }
        if upper > last {
            break;
        }
        let thickness = z[upper] - z[lower];
        let fall = column.smooth_temperature(lower) - column.smooth_temperature(upper);
        let (fall_at_least, thickness_at_most) = if column.fine {
            (fall, thickness)
        } else {
            let t = column.temperature[upper];
            let rounding =
                GAS_CONSTANT_DRY / GRAVITY * t * CODED_PRESSURE_STEP / column.pressure[upper];
            (fall - temperature_step, thickness + rounding)
        };
        let lapse = fall / thickness;
        let autoconvective = fall_at_least > AUTOCONVECTIVE * thickness_at_most;
        steepest = Some(match steepest {
            Some(so_far) => Steepest {
                lapse: so_far.lapse.max(lapse),
                autoconvective: so_far.autoconvective || autoconvective,
            },
            None => Steepest {
                lapse,
                autoconvective,
            },
        });
    }
    steepest
}

#[cfg(test)]
mod tests {
    use super::*;

    fn spans(theta: &[f64], least: f64) -> Vec<(usize, usize)> {
        falling_layers(theta, 0..theta.len(), least)
            .iter()
            .map(|layer| (layer.base, layer.top))
            .collect()
    }

    #[test]
    fn finds_each_fall_once() {
        assert_eq!(
            spans(&[300.0, 301.0, 303.0, 301.0, 304.0, 306.0], 1.0),
            [(2, 3)]
        );
        assert_eq!(spans(&[303.0, 301.5, 304.0, 302.0], 1.0), [(0, 1), (2, 3)]);
        assert_eq!(spans(&[300.0, 300.5, 300.0, 300.4, 301.0], 1.0), []);
        assert_eq!(spans(&[], 1.0), []);
    }

    #[test]
    fn small_rises_stay_inside_a_layer_and_mixed_air_outside() {
        assert_eq!(
            spans(&[300.0, 303.0, 302.0, 302.2, 301.0, 304.0], 1.0),
            [(1, 4)]
        );
        // Nearly neutral air on both sides is not part of it.
        assert_eq!(
            spans(&[303.1, 303.0, 303.05, 300.0, 299.9, 300.3], 1.0),
            [(2, 3)]
        );
    }

    #[test]
    fn a_fall_at_the_threshold_keeps_its_ends() {
        let layers = falling_layers(&[301.0, 300.95, 300.0], 0..3, 1.0);
        assert_eq!(layers.len(), 1);
        assert!(layers[0].drop >= 1.0 - 1e-9);
    }
}
