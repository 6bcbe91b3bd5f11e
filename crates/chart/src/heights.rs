//! Heights of a sounding against pressure, and the scale beside the plot.

use crate::canvas::{Canvas, Lettering};
use crate::isopleths::spacing;
use crate::wording::{FOOT, fixed};
use crate::{Anchor, Geometry, HeightUnit, Ink, Point, Stroke, Units};
use dewbound_sounding::{Profile, thermo::Pressure};

/// Height above sea level against pressure, and where the ground is. Made once per sounding.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct HeightScale {
    /// ln p (Pa), falling.
    log_pressure: Vec<f64>,
    /// m above mean sea level, in general rising.
    height: Vec<f64>,
    /// Ground above mean sea level, m.
    ground: Option<f64>,
}

/// Rows of the table at most; a thousandth of the depth of the atmosphere is finer than a screen.
const MOST_ROWS: usize = 1000;
/// Widest step of the table in ln p: between levels farther apart the hypsometric curve is followed.
const WIDEST_STEP: f64 = 0.02;

impl HeightScale {
    /// From a profile (best the received one: heights hardly change with an edit).
    pub fn of(profile: &Profile) -> Self {
        let heights = profile.heights();
        let known: Vec<(f64, f64)> = profile
            .pressure
            .iter()
            .zip(&heights)
            .filter_map(|(&pa, &z)| Some((pa.ln(), z?)))
            .filter(|(log, z)| log.is_finite() && z.is_finite())
            .collect();
        let every = known.len() / MOST_ROWS + 1;
        let last = known.len().saturating_sub(1);
        let mut scale = Self {
            ground: profile
                .surface
                .and_then(|row| heights.get(row).copied().flatten()),
            ..Self::default()
        };
        for (row, &(log, z)) in known.iter().enumerate() {
            if row % every != 0 && row != last {
                continue;
            }
            if let Some(&below) = scale.log_pressure.last() {
                let steps = ((below - log) / WIDEST_STEP).ceil().clamp(1.0, 200.0);
                for step in 1..steps as usize {
                    let log = below + (log - below) * step as f64 / steps;
                    if let Some(z) = profile.height_at(Pressure::from_pa(log.exp())) {
                        scale.log_pressure.push(log);
                        scale.height.push(z);
                    }
                }
            }
            scale.log_pressure.push(log);
            scale.height.push(z);
        }
        scale
    }

    /// Height above mean sea level at a pressure inside the profile, m.
    pub fn above_sea(&self, pressure: Pressure) -> Option<f64> {
        let log = pressure.pa().ln();
        let above = self.log_pressure.partition_point(|&l| l > log);
        let (&l1, &z1) = (self.log_pressure.get(above)?, self.height.get(above)?);
        if l1 == log {
            return Some(z1);
        }
        let below = above.checked_sub(1)?;
        let (&l0, &z0) = (self.log_pressure.get(below)?, self.height.get(below)?);
        Some(z0 + (l0 - log) / (l0 - l1) * (z1 - z0))
    }

    /// Height above the surface level at a pressure inside the profile, m.
    pub fn above_ground(&self, pressure: Pressure) -> Option<f64> {
        Some(self.above_sea(pressure)? - self.ground?)
    }

    /// Height of the surface level above mean sea level, m.
    pub fn ground(&self) -> Option<f64> {
        self.ground
    }

    /// Pressure at a height above mean sea level inside the profile; the lowest such place where heights don't rise steadily.
    pub fn pressure_at(&self, height: f64) -> Option<Pressure> {
        let rows = self.log_pressure.iter().zip(&self.height);
        let pairs = rows.clone().zip(rows.skip(1));
        for ((&l0, &z0), (&l1, &z1)) in pairs {
            if z0 <= height && height <= z1 && z1 > z0 {
                let log = l0 + (height - z0) / (z1 - z0) * (l1 - l0);
                return Some(Pressure::from_pa(log.exp()));
            }
        }
        None
    }

    /// Metres in a unit of the scale, and its name.
    fn unit(units: Units) -> (f64, &'static str) {
        match units.height {
            HeightUnit::Metric => (1000.0, "km"),
            HeightUnit::Feet => (1000.0 * FOOT, "thousand ft"),
        }
    }

    /// Ticks and labels to the right of the plot: above sea level; where the ground lies high, round heights above ground
    /// inside the edge as well.
    pub(crate) fn paint(&self, canvas: &mut Canvas, geometry: &Geometry, units: Units) {
        let plot = geometry.plot();
        let frame = geometry.frame();
        let (Some(&low), Some(&high)) = (self.height.first(), self.height.last()) else {
            return;
        };
        let (metres, name) = Self::unit(units);
        // Scale height of the atmosphere: about 7.5 km for each e-fold of pressure.
        let step = spacing(
            geometry.points_per_efold() * metres / 7500.0,
            22.0,
            &[1.0, 2.0, 5.0, 10.0],
        );
        // Tenths only where a whole unit leaves wide gaps.
        let fine = spacing(
            geometry.points_per_efold() * metres / 7500.0,
            70.0,
            &[0.1, 0.2, 0.5, step],
        );
        let step = fine.min(step);
        let mut ticks = Vec::new();
        let title = format!("height above sea level, {name}");
        let turned = Lettering::new(Anchor::Centre, 11.0, Ink::HeightScale)
            .turned(std::f64::consts::FRAC_PI_2);
        canvas.text(
            Point::new(geometry.wind().left - 7.0, plot.centre().y),
            &title,
            turned,
        );
        let lettering = Lettering::new(Anchor::Left, crate::background::AXIS, Ink::HeightScale);
        let first = (low / metres / step).ceil();
        let count = ((high / metres / step).floor() - first).clamp(-1.0, 500.0) as i64;
        for i in 0..=count {
            let value = (first + i as f64) * step;
            let Some(pressure) = self.pressure_at(value * metres) else {
                continue;
            };
            let y = geometry.y(pressure);
            if y < plot.top || y > plot.bottom {
                continue;
            }
            ticks.push([Point::new(plot.right, y), Point::new(plot.right + 5.0, y)]);
            let text = fixed(value, usize::from(step < 1.0));
            let at = (Point::new(plot.right + 8.0, y), Anchor::Left);
            canvas.text_at_first([at], &text, lettering, &frame);
        }
        canvas.segments(&ticks, &frame, Ink::HeightScale, Stroke::solid(1.2));
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_abs_diff_eq;

    /// Pressure (hPa) of the US Standard Atmosphere 1976 at a geopotential height up to 11 km: eq. 33a, closed form.
    fn standard_hpa(metres: f64) -> f64 {
        1013.25 * (288.15 / (288.15 - 0.0065 * metres)).powf(-34.163_195e-3 / 0.0065)
    }

    /// A few levels of that atmosphere.
    fn standard() -> Profile {
        let metres = [
            0.0, 1000.0, 2000.0, 3000.0, 5000.0, 7000.0, 9000.0, 11_000.0,
        ];
        Profile {
            pressure: metres.iter().map(|&z| standard_hpa(z) * 100.0).collect(),
            height: metres.iter().map(|&z| Some(z)).collect(),
            temperature: metres.iter().map(|&z| Some(288.15 - 0.0065 * z)).collect(),
            dewpoint: vec![None; 8],
            wind: vec![None; 8],
            received: vec![None; 8],
            surface: Some(0),
            ..Profile::default()
        }
    }

    #[test]
    fn between_levels_the_standard_atmosphere_is_followed() {
        let scale = HeightScale::of(&standard());
        for z in [500.0, 4000.0, 6000.0, 8000.0, 10_000.0] {
            let hpa = standard_hpa(z);
            assert_abs_diff_eq!(
                scale.above_sea(Pressure::from_hpa(hpa)).unwrap(),
                z,
                epsilon = 2.0
            );
            assert_abs_diff_eq!(scale.pressure_at(z).unwrap().hpa(), hpa, epsilon = 0.2);
        }
        assert_eq!(scale.above_sea(Pressure::from_hpa(1020.0)), None);
        assert_eq!(scale.above_sea(Pressure::from_hpa(200.0)), None);
        assert_eq!(scale.pressure_at(-5.0), None);
    }

    #[test]
    fn above_ground_counts_from_the_surface_level() {
        let mut profile = standard();
        profile.surface = Some(1);
        let scale = HeightScale::of(&profile);
        assert_abs_diff_eq!(
            scale
                .above_ground(Pressure::from_hpa(standard_hpa(3000.0)))
                .unwrap(),
            2000.0,
            epsilon = 1e-6
        );
    }

    #[test]
    fn a_profile_without_heights_has_no_scale() {
        let mut profile = standard();
        profile.height = vec![None; 8];
        let scale = HeightScale::of(&profile);
        assert_eq!(scale.above_sea(Pressure::from_hpa(500.0)), None);
    }
}
