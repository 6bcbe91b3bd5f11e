//! The well mixed layer that reaches the ground, and the moisture it implies at the surface.

use crate::{Column, Thresholds};
use dewbound_sounding::Profile;
use dewbound_sounding::thermo::{Pressure, Temperature, dewpoint_from_mixing_ratio};
use std::ops::RangeInclusive;

/// Thresholds read here.
pub(crate) const MIXED_THRESHOLDS: [&str; 4] = [
    "mixed-layer.contact_hpa",
    "mixed-layer.theta_tolerance_k",
    "mixed-layer.depth_hpa",
    "mixed-layer.entrainment_share",
];

/// A layer of constant theta, within a tolerance, from the ground up.
#[derive(Debug, Clone, PartialEq)]
pub struct MixedLayer {
    /// Pressure of the surface level.
    pub bottom: Pressure,
    /// Top: the last level whose theta is within the tolerance.
    pub top: Pressure,
    /// Theta just above the contact layer.
    pub theta: Temperature,
    /// Tolerance of theta that was applied, K.
    pub tolerance: f64,
    /// Mean mixing ratio (integral over p) without the surface level, the contact layer and the entrainment zone, kg/kg. `None` when no humidity is known there.
    pub mean_mixing_ratio: Option<f64>,
    /// Levels of the column that mean was taken over.
    pub(crate) interior: Vec<usize>,
}

impl MixedLayer {
    /// The mixed layer of a profile: `None` when none reaches the ground or it is too shallow to be judged.
    pub fn of(profile: &Profile, thresholds: &Thresholds) -> Option<Self> {
        Self::in_column(&Column::of(profile, thresholds), thresholds)
    }

    pub(crate) fn in_column(column: &Column, thresholds: &Thresholds) -> Option<Self> {
        let surface = column.surface_pressure()?;
        let contact = 100.0 * thresholds.get("mixed-layer.contact_hpa");
        let tolerance = thresholds.get("mixed-layer.theta_tolerance_k");
        let theta = &column.smooth_theta;
        let first = column.first_at_or_above(surface - contact).max(1);
        if first >= column.len() {
            return None;
        }
        // Fine data: the median just above the contact layer; coded: the first level there.
        let reference = if column.fine {
            let end = column
                .first_at_or_above(column.pressure[first] - contact)
                .max(first + 1);
            median(theta.get(first..end)?)?
        } else {
            theta[first]
        };
        // Stable air at the ground means the layer doesn't reach it.
        if column.theta[0] < reference - tolerance {
            return None;
        }
        let mut last = first;
        while last + 1 < column.len() && (theta[last + 1] - reference).abs() <= tolerance {
            last += 1;
        }
        let top = column.pressure[last];
        if (theta[first] - reference).abs() > tolerance
            || surface - top < 100.0 * thresholds.get("mixed-layer.depth_hpa")
        {
            return None;
        }
        let highest_fitted = if column.fine {
            top + thresholds.get("mixed-layer.entrainment_share") * (surface - top)
        } else {
            top
        };
        // Warmer than this, air from above the layer has been mixed in already.
        let warmest = reference + 0.5 * tolerance;
        let interior = known(column, first..=last)
            .filter(|&level| column.pressure[level] >= highest_fitted && theta[level] <= warmest)
            .collect::<Vec<_>>();
        Some(Self {
            bottom: Pressure::from_pa(surface),
            top: Pressure::from_pa(top),
            theta: Temperature::from_k(reference),
            tolerance,
            mean_mixing_ratio: pressure_mean(column, &interior),
            interior,
        })
    }

    /// Dew point at the surface if its air were the layer's mean.
    pub fn implied_dewpoint(&self) -> Option<Temperature> {
        self.mean_mixing_ratio
            .map(|w| dewpoint_from_mixing_ratio(self.bottom, w))
            .filter(|dewpoint| dewpoint.k().is_finite())
    }
}

fn known(column: &Column, levels: RangeInclusive<usize>) -> impl Iterator<Item = usize> {
    levels.filter(|&level| column.mixing_ratio.get(level).copied().flatten().is_some())
}

/// Mean of the mixing ratio over p by the trapezoid rule.
fn pressure_mean(column: &Column, levels: &[usize]) -> Option<f64> {
    let point = |level: usize| Some((column.pressure[level], column.mixing_ratio[level]?));
    let (&first, &last) = (levels.first()?, levels.last()?);
    let depth = column.pressure[first] - column.pressure[last];
    if depth <= 0.0 {
        return column.mixing_ratio[first];
    }
    let mut area = 0.0;
    for pair in levels.windows(2) {
        let &[lower, upper] = pair else { continue };
        let ((p0, w0), (p1, w1)) = (point(lower)?, point(upper)?);
        area += 0.5 * (w0 + w1) * (p0 - p1);
    }
    Some(area / depth)
}

fn median(values: &[f64]) -> Option<f64> {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    sorted.get(sorted.len() / 2).copied()
}

/// A straight line through points of equal weight.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Line {
    pub mean_x: f64,
    pub mean_y: f64,
    pub slope: f64,
    /// Root mean square of what the line leaves over.
    pub residual: f64,
}

impl Line {
    /// Least squares. `None` without points; slope 0 when all x are alike.
    pub fn fit(points: impl Iterator<Item = (f64, f64)> + Clone) -> Option<Self> {
        let count = points.clone().count();
        if count == 0 {
            return None;
        }
        let n = count as f64;
        let (sx, sy) = points
            .clone()
            .fold((0.0, 0.0), |(sx, sy), (x, y)| (sx + x, sy + y));
        let (mean_x, mean_y) = (sx / n, sy / n);
        let (mut xx, mut xy, mut yy) = (0.0, 0.0, 0.0);
        for (x, y) in points {
            let (dx, dy) = (x - mean_x, y - mean_y);
            xx += dx * dx;
            xy += dx * dy;
            yy += dy * dy;
        }
        let slope = if xx > 0.0 { xy / xx } else { 0.0 };
        Some(Self {
            mean_x,
            mean_y,
            slope,
            residual: ((yy - slope * xy).max(0.0) / n).sqrt(),
        })
    }

    pub fn at(&self, x: f64) -> f64 {
        self.mean_y + self.slope * (x - self.mean_x)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn line_through_points_on_a_line() {
        let line = Line::fit((0..10).map(|i| (f64::from(i), 3.0 - 0.5 * f64::from(i)))).unwrap();
        assert_relative_eq!(line.slope, -0.5, epsilon = 1e-12);
        assert_relative_eq!(line.at(20.0), -7.0, epsilon = 1e-12);
        assert_relative_eq!(line.residual, 0.0, epsilon = 1e-9);
        assert!(Line::fit(std::iter::empty()).is_none());
        assert_eq!(Line::fit(std::iter::once((1.0, 2.0))).unwrap().at(5.0), 2.0);
    }
}
