//! Heights above the lowest level, by the hypsometric equation.

use super::{Environment, coordinate};
use crate::numeric::zero_between;
use crate::{GAS_CONSTANT_DRY, GRAVITY, Pressure};

impl Environment {
    /// Geopotential height (m) of a pressure above the lowest level, from the virtual temperature of the profile; `None`
    /// outside it.
    pub fn height_above_bottom(&self, pressure: Pressure) -> Option<f64> {
        self.thickness(self.bottom().pressure, pressure)
    }

    /// The pressure at a geopotential height (m) above the lowest level: [`Environment::height_above_bottom`]
    /// inverted, to 1e-9 of the pressure; `None` outside the profile.
    pub fn pressure_at_height(&self, height: f64) -> Option<Pressure> {
        let column = &self.column;
        let (first, last) = (*column.tv_integral.first()?, *column.tv_integral.last()?);
        let wanted = first + height * GRAVITY / GAS_CONSTANT_DRY;
        if !(wanted >= first && wanted <= last) {
            return None;
        }
        let step = column
            .tv_integral
            .partition_point(|&integral| integral <= wanted)
            .saturating_sub(1)
            .min(column.z.len().saturating_sub(2));
        let levels = self.levels();
        let excess = |z: f64| column.integral_in(&levels, step, z) - wanted;
        let (a, b) = (column.z[step], column.z[step + 1]);
        let z = zero_between(a, excess(a), b, excess(b), excess);
        let (bottom, top) = (coordinate(self.p[0]), coordinate(self.top().pa()));
        Some(if z <= bottom {
            self.bottom().pressure
        } else if z >= top {
            self.top()
        } else {
            Pressure::from_pa((-z).exp())
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn environment() -> Environment {
        Environment::new(
            &[100_000.0, 85_000.0, 70_000.0, 50_000.0, 30_000.0, 10_000.0],
            &[303.0, 291.0, 283.0, 263.0, 233.0, 213.0],
            &[
                Some(294.0),
                Some(287.0),
                Some(268.0),
                Some(243.0),
                None,
                None,
            ],
        )
        .unwrap()
    }

    #[test]
    fn heights_and_pressures_are_each_others_inverse() {
        let environment = environment();
        let top = environment.height_above_bottom(environment.top()).unwrap();
        for share in 0..=100 {
            let height = top * f64::from(share) / 100.0;
            let pressure = environment.pressure_at_height(height).unwrap();
            let back = environment.height_above_bottom(pressure).unwrap();
            assert!((back - height).abs() < 1e-5, "{height} m, back {back} m");
        }
        assert_eq!(
            environment.pressure_at_height(0.0),
            Some(environment.bottom().pressure)
        );
        for outside in [-1.0, top + 1.0, f64::NAN] {
            assert_eq!(environment.pressure_at_height(outside), None);
        }
    }
}
