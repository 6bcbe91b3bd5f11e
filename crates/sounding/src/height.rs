//! Heights along a profile.

use crate::Profile;
use dewbound_thermo::{GAS_CONSTANT_DRY, GRAVITY, Pressure};

impl Profile {
    /// Geopotential height (m) at a pressure: received heights interpolated in ln p, hypsometric where they are missing;
    /// `None` when no height anchors the profile.
    ///
    /// Between two received heights the curve between them is the hypsometric one, stretched to fit both, where temperatures are known, else linear
    /// in ln p. Below the lowest and above the highest received height it is hypsometric from there, as far as temperature is known. `None`
    /// outside the profile.
    pub fn height_at(&self, pressure: Pressure) -> Option<f64> {
        let pressure = pressure.pa();
        let above = self.pressure.partition_point(|&p| p >= pressure);
        let height = |row: usize| Some((*self.pressure.get(row)?, (*self.height.get(row)?)?));
        let below_anchor = (0..above).rev().find_map(height);
        if let Some((p, z)) = below_anchor
            && p == pressure
        {
            return Some(z);
        }
        let above_anchor = (above..self.len()).find_map(height);
        match (below_anchor, above_anchor) {
            (Some((p0, z0)), Some((p1, z1))) => {
                let share = match (self.thickness(p0, pressure), self.thickness(p0, p1)) {
                    (Some(part), Some(whole)) if whole > 0.0 => part / whole,
                    _ => (p0 / pressure).ln() / (p0 / p1).ln(),
                };
                Some(z0 + share * (z1 - z0))
            }
            (Some((p0, z0)), None) => Some(z0 + self.thickness(p0, pressure)?),
            (None, Some((p1, z1))) => Some(z1 - self.thickness(pressure, p1)?),
            (None, None) => None,
        }
    }

    /// [`Profile::height_at`] for every row, in one pass.
    pub fn heights(&self) -> Vec<Option<f64>> {
        let cumulative = self.cumulative_thickness();
        let mut heights = self.height.clone();
        let anchors: Vec<usize> = (0..self.len())
            .filter(|&row| matches!(self.height.get(row), Some(Some(_))))
            .collect();
        let mut next = 0;
        for row in 0..self.len() {
            while anchors.get(next).is_some_and(|&anchor| anchor < row) {
                next += 1;
            }
            let below = next.checked_sub(1).and_then(|at| anchors.get(at)).copied();
            let above = anchors.get(next).copied();
            let value = |anchor: usize| {
                (
                    self.height.get(anchor).copied().flatten(),
                    cumulative.get(anchor).copied().flatten(),
                )
            };
            let here = cumulative.get(row).copied().flatten();
            let filled = match (below, above) {
                (_, Some(anchor)) if anchor == row => continue,
                (Some(b), Some(a)) => {
                    let ((Some(z0), c0), (Some(z1), c1)) = (value(b), value(a)) else {
                        continue;
                    };
                    let share = match (c0, here, c1) {
                        (Some(c0), Some(c), Some(c1)) if c1 > c0 => (c - c0) / (c1 - c0),
                        _ => match (
                            self.pressure.get(b),
                            self.pressure.get(row),
                            self.pressure.get(a),
                        ) {
                            (Some(p0), Some(p), Some(p1)) => (p0 / p).ln() / (p0 / p1).ln(),
                            _ => continue,
                        },
                    };
                    Some(z0 + share * (z1 - z0))
                }
                (Some(anchor), None) | (None, Some(anchor)) => match (value(anchor), here) {
                    ((Some(z), Some(c)), Some(here)) => Some(z + here - c),
                    _ => None,
                },
                (None, None) => None,
            };
            if let Some(height) = heights.get_mut(row) {
                *height = filled;
            }
        }
        heights
    }

    /// Thickness (m) of the layer between two pressures (`bottom` >= `top`) from virtual temperature linear in ln p; air
    /// without dew point counts as dry. `None` when temperature is not known throughout.
    fn thickness(&self, bottom: f64, top: f64) -> Option<f64> {
        if bottom == top {
            return Some(0.0);
        }
        let first = self.pressure.partition_point(|&p| p >= bottom);
        let last = self.pressure.partition_point(|&p| p > top);
        let mut sum = 0.0;
        let mut below = (bottom, self.virtual_temperature_at(bottom)?);
        for row in first..last {
            if let Some(tv) = self.virtual_temperature(row) {
                let pressure = *self.pressure.get(row)?;
                sum += 0.5 * (below.1 + tv) * (below.0 / pressure).ln();
                below = (pressure, tv);
            }
        }
        sum += 0.5 * (below.1 + self.virtual_temperature_at(top)?) * (below.0 / top).ln();
        Some(GAS_CONSTANT_DRY / GRAVITY * sum)
    }

    /// Thickness (m) from the lowest row with temperature to each row; `None` outside the rows with temperature.
    fn cumulative_thickness(&self) -> Vec<Option<f64>> {
        let mut cumulative = vec![None; self.len()];
        let mut below: Option<(usize, f64, f64, f64)> = None;
        for row in 0..self.len() {
            let (Some(tv), Some(&pressure)) =
                (self.virtual_temperature(row), self.pressure.get(row))
            else {
                continue;
            };
            let mut sum = 0.0;
            if let Some((last, p0, tv0, sum0)) = below {
                let depth = (p0 / pressure).ln();
                let to = |tv: f64, depth: f64| {
                    sum0 + GAS_CONSTANT_DRY / GRAVITY * 0.5 * (tv0 + tv) * depth
                };
                for between in last + 1..row {
                    if let (Some(&p), Some(slot)) =
                        (self.pressure.get(between), cumulative.get_mut(between))
                    {
                        let part = (p0 / p).ln();
                        *slot = Some(to(tv0 + part / depth * (tv - tv0), part));
                    }
                }
                sum = to(tv, depth);
            }
            if let Some(slot) = cumulative.get_mut(row) {
                *slot = Some(sum);
            }
            below = Some((row, pressure, tv, sum));
        }
        cumulative
    }

    /// Virtual temperature (K) of one row; dry without dew point.
    fn virtual_temperature(&self, row: usize) -> Option<f64> {
        match self.air(row) {
            Some(air) => Some(air.virtual_temperature().k()),
            None => *self.temperature.get(row)?,
        }
    }

    /// Virtual temperature (K) at a pressure between rows with temperature.
    fn virtual_temperature_at(&self, pressure: f64) -> Option<f64> {
        let above = self.pressure.partition_point(|&p| p >= pressure);
        let value = |row: usize| Some((*self.pressure.get(row)?, self.virtual_temperature(row)?));
        let (p0, tv0) = (0..above).rev().find_map(value)?;
        if p0 == pressure {
            return Some(tv0);
        }
        let (p1, tv1) = (above..self.len()).find_map(value)?;
        Some(tv0 + (p0 / pressure).ln() / (p0 / p1).ln() * (tv1 - tv0))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{level, received};

    /// US Standard Atmosphere 1976, geopotential height (m), pressure (hPa), temperature (K); from memory, agreeing with its defining formula.
    const STANDARD: [(f64, f64, f64); 13] = [
        (0.0, 1013.25, 288.15),
        (1_000.0, 898.746, 281.65),
        (2_000.0, 794.952, 275.15),
        (3_000.0, 701.085, 268.65),
        (4_000.0, 616.402, 262.15),
        (5_000.0, 540.199, 255.65),
        (6_000.0, 471.810, 249.15),
        (7_000.0, 410.607, 242.65),
        (8_000.0, 355.998, 236.15),
        (9_000.0, 307.425, 229.65),
        (10_000.0, 264.363, 223.15),
        (11_000.0, 226.321, 216.65),
        (20_000.0, 54.7489, 216.65),
    ];

    /// The standard atmosphere without humidity, its lowest level with a height.
    fn standard() -> Profile {
        let levels = STANDARD
            .iter()
            .map(|&(_, hpa, t)| crate::Level {
                dewpoint: None,
                height: (hpa > 1000.0).then_some(0.0),
                ..level(hpa, t - 273.15, 0.0)
            })
            .collect();
        received(levels).0
    }

    #[test]
    fn hypsometric_heights_of_the_standard_atmosphere() {
        let profile = standard();
        let heights = profile.heights();
        for (row, &(z, hpa, _)) in STANDARD.iter().enumerate() {
            let height = profile.height_at(Pressure::from_hpa(hpa)).unwrap();
            // Temperature is linear in height there and in ln p here: 1 km apart that is worth up to a metre over the troposphere.
            assert!(
                (height - z).abs() < 2.0,
                "{hpa} hPa: {height} m, expected {z} m"
            );
            assert!((heights[row].unwrap() - height).abs() < 1e-6);
        }
    }

    #[test]
    fn between_received_heights() {
        let mut profile = standard();
        profile.height[11] = Some(11_000.0);
        // Between two anchors the hypsometric curve is kept: 5,000 m lies where the table has it, and both ends are exact.
        let height = profile.height_at(Pressure::from_hpa(540.199)).unwrap();
        assert!((height - 5_000.0).abs() < 2.0, "{height}");
        assert_eq!(
            profile.height_at(Pressure::from_hpa(226.321)),
            Some(11_000.0)
        );
        // Without temperatures: linear in ln p.
        profile.temperature.fill(None);
        let middle = profile
            .height_at(Pressure::from_hpa((1013.25_f64 * 226.321).sqrt()))
            .unwrap();
        assert!((middle - 5_500.0).abs() < 1e-6, "{middle}");
        assert_eq!(profile.height_at(Pressure::from_hpa(100.0)), None);
    }

    #[test]
    fn one_pass_and_single_heights_agree() {
        let mut profile = standard();
        for (lost, kept) in [
            (vec![0, 3, 4], vec![6]),
            (vec![12], vec![2, 9]),
            (vec![5, 6, 7], vec![0, 12]),
        ] {
            profile = Profile {
                height: vec![None; profile.len()],
                ..standard()
            };
            for row in lost {
                profile.temperature[row] = None;
            }
            for row in kept {
                profile.height[row] = Some(STANDARD[row].0);
            }
            let heights = profile.heights();
            for (row, height) in heights.iter().enumerate() {
                let single = profile.height_at(Pressure::from_pa(profile.pressure[row]));
                match (height, single) {
                    (Some(a), Some(b)) => assert!((a - b).abs() < 1e-6, "row {row}: {a} and {b}"),
                    (a, b) => assert_eq!(*a, b, "row {row}"),
                }
            }
        }
        assert_eq!(profile.height_at(Pressure::from_hpa(1050.0)), None);
    }

    #[test]
    fn no_height_without_an_anchor() {
        let profile = Profile {
            height: vec![None; STANDARD.len()],
            ..standard()
        };
        assert_eq!(profile.height_at(Pressure::from_hpa(500.0)), None);
        assert!(profile.heights().iter().all(Option::is_none));
    }
}
