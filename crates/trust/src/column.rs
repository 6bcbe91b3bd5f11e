//! The part of a profile the rules judge: levels with temperature from the surface upward, and what follows from them.

use crate::Thresholds;
use dewbound_sounding::thermo::{
    Air, EPSILON, GAS_CONSTANT_DRY, GRAVITY, KAPPA, Pressure, REFERENCE_PRESSURE, Temperature,
    saturation_vapour_pressure, saturation_vapour_pressure_over_ice,
};
use dewbound_sounding::{Profile, Sampling};

/// Levels with temperature, from the surface (or the lowest such level) upward, as columns of one length.
///
/// Computed once per sounding and shared by all rules. SI units.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Column {
    /// Row in the profile.
    pub row: Vec<usize>,
    /// Pressure, Pa, falling.
    pub pressure: Vec<f64>,
    /// Temperature, K.
    pub temperature: Vec<f64>,
    /// Dew point, K, as received (not interpolated).
    pub dewpoint: Vec<Option<f64>>,
    /// Mixing ratio, kg/kg, where the dew point is known.
    pub mixing_ratio: Vec<Option<f64>>,
    /// Potential temperature, K.
    pub theta: Vec<f64>,
    /// Potential temperature averaged over a few hPa in fine data; the same as `theta` in coded data.
    pub smooth_theta: Vec<f64>,
    /// The same over a narrower average, for measuring what was found on the wider one.
    pub sharp_theta: Vec<f64>,
    /// Hypsometric height above the lowest level, m.
    pub thickness: Vec<f64>,
    /// The first level is the surface level.
    pub from_surface: bool,
    /// A sample every few seconds, not coded levels.
    pub fine: bool,
}

impl Column {
    /// The column of a profile, fine data averaged as the thresholds say.
    pub fn of(profile: &Profile, thresholds: &Thresholds) -> Self {
        let width = |name| Pressure::from_hpa(thresholds.get(name)).pa();
        let mut column = Self {
            fine: profile.sampling == Sampling::Fine,
            ..Self::default()
        };
        let from = profile.surface.unwrap_or(0);
        let mut below: Option<(f64, f64, f64)> = None;
        for (row, &p) in profile.pressure.iter().enumerate().skip(from) {
            let Some(t) = profile.temperature.get(row).copied().flatten() else {
                continue;
            };
            if !(p > 0.0 && t > 0.0) {
                continue;
            }
            let td = profile.dewpoint.get(row).copied().flatten();
            let w = td.map(|td| {
                Air {
                    pressure: Pressure::from_pa(p),
                    temperature: Temperature::from_k(t),
                    dewpoint: Temperature::from_k(td),
                }
                .mixing_ratio()
            });
            // Near the top of the atmosphere e can exceed p for an absurd dew point: no mixing ratio then.
            let w = w.filter(|w| w.is_finite() && *w >= 0.0);
            let ln_p = p.ln();
            let tv = w.map_or(t, |w| t * (1.0 + w / EPSILON) / (1.0 + w));
            let z = below.map_or(0.0, |(z, ln_below, tv_below)| {
                z + GAS_CONSTANT_DRY / GRAVITY * 0.5 * (tv + tv_below) * (ln_below - ln_p)
            });
            below = Some((z, ln_p, tv));
            if column.row.is_empty() {
                column.from_surface = profile.surface == Some(row);
            }
            column.row.push(row);
            column.pressure.push(p);
            column.temperature.push(t);
            column.dewpoint.push(td);
            column.mixing_ratio.push(w);
            column
                .theta
                .push(t * ((REFERENCE_PRESSURE.ln() - ln_p) * KAPPA).exp());
            column.thickness.push(z);
        }
        let averaged = |name| {
            if column.fine {
                let fixed = usize::from(column.from_surface);
                running_mean(&column.pressure, &column.theta, width(name), fixed)
            } else {
                column.theta.clone()
            }
        };
        (column.smooth_theta, column.sharp_theta) = (
            averaged("fine.average_hpa"),
            averaged("fine.sharp_average_hpa"),
        );
        column
    }

    /// Number of levels.
    pub fn len(&self) -> usize {
        self.row.len()
    }

    /// No level with temperature.
    pub fn is_empty(&self) -> bool {
        self.row.is_empty()
    }

    /// Pressure of the surface level, Pa, when it has a temperature.
    pub fn surface_pressure(&self) -> Option<f64> {
        self.pressure.first().copied().filter(|_| self.from_surface)
    }

    /// Temperature that goes with the averaged theta, K.
    pub fn smooth_temperature(&self, level: usize) -> f64 {
        if self.fine {
            self.smooth_theta[level] * (self.pressure[level] / REFERENCE_PRESSURE).powf(KAPPA)
        } else {
            self.temperature[level]
        }
    }

    /// Relative humidity over water, 1 = saturated.
    pub fn relative_humidity(&self, level: usize) -> Option<f64> {
        let td = self.dewpoint[level]?;
        let e = saturation_vapour_pressure(Temperature::from_k(td)).pa();
        Some(e / saturation_vapour_pressure(Temperature::from_k(self.temperature[level])).pa())
    }

    /// How near the air is to saturation over water, or over ice below freezing: 1 = saturated.
    ///
    /// Cloud below freezing may be of either, so the nearer one counts.
    pub fn saturation(&self, level: usize) -> Option<f64> {
        let td = self.dewpoint[level]?;
        let t = Temperature::from_k(self.temperature[level]);
        let e = saturation_vapour_pressure(Temperature::from_k(td)).pa();
        let water = saturation_vapour_pressure(t).pa();
        let limit = if t.c() < 0.0 {
            water.min(saturation_vapour_pressure_over_ice(t).pa())
        } else {
            water
        };
        Some(e / limit)
    }

    /// First level at or above (lower pressure than) a pressure; the length when there is none.
    pub fn first_at_or_above(&self, pa: f64) -> usize {
        self.pressure.partition_point(|&p| p > pa)
    }
}

/// Mean of `values` over `width` of pressure centred on each level; the first `fixed` levels are kept as they are and
/// enter no mean (the surface value comes from another instrument).
fn running_mean(pressure: &[f64], values: &[f64], width: f64, fixed: usize) -> Vec<f64> {
    let mut sums = Vec::with_capacity(values.len() + 1);
    // Sums of departures from a middling value: theta grows fast aloft and the digits are wanted below.
    let offset = values.first().copied().unwrap_or(0.0);
    let mut sum = 0.0;
    sums.push(sum);
    for value in values {
        sum += value - offset;
        sums.push(sum);
    }
    let half = 0.5 * width;
    let (mut low, mut high) = (fixed, fixed);
    let mut mean = Vec::with_capacity(values.len());
    for (level, &p) in pressure.iter().enumerate() {
        if level < fixed {
            mean.push(values[level]);
            continue;
        }
        while low < level && pressure[low] > p + half {
            low += 1;
        }
        high = high.max(level + 1);
        while high < pressure.len() && pressure[high] >= p - half {
            high += 1;
        }
        mean.push(offset + (sums[high] - sums[low]) / (high - low) as f64);
    }
    mean
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn running_mean_keeps_straight_lines_and_spares_the_surface() {
        let pressure: Vec<f64> = (0..200).map(|i| 100_000.0 - 50.0 * f64::from(i)).collect();
        let mut values: Vec<f64> = (0..200).map(|i| 300.0 + 0.01 * f64::from(i)).collect();
        values[0] = 310.0;
        let mean = running_mean(&pressure, &values, 500.0, 1);
        assert_eq!(mean[0], 310.0);
        for i in 10..190 {
            assert_relative_eq!(mean[i], values[i], epsilon = 1e-9);
        }
    }

    #[test]
    fn thickness_agrees_with_the_standard_atmosphere() {
        // US Standard Atmosphere 1976, geopotential: 1000 m 281.65 K 898.746 hPa; 2000 m 275.15 K 794.952 hPa (dry).
        let profile = Profile {
            pressure: vec![101_325.0, 89_874.6, 79_495.2],
            temperature: vec![Some(288.15), Some(281.65), Some(275.15)],
            dewpoint: vec![None; 3],
            height: vec![None; 3],
            wind: vec![None; 3],
            received: vec![None; 3],
            surface: Some(0),
            sampling: Sampling::Coded,
        };
        let column = Column::of(&profile, &Thresholds::default());
        assert_relative_eq!(column.thickness[1], 1000.0, epsilon = 0.5);
        assert_relative_eq!(column.thickness[2], 2000.0, epsilon = 0.5);
    }
}
