//! The received levels put in order: falling pressure, one row a pressure.

use crate::{Note, Sampling, Sounding, Wind};
use dewbound_thermo::{Air, Environment, EnvironmentError, Pressure, Temperature};

/// Levels of strictly falling pressure, as columns of one length. Received or amended.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Profile {
    /// Pressure, Pa, falling strictly.
    pub pressure: Vec<f64>,
    /// Geopotential height above mean sea level, m.
    pub height: Vec<Option<f64>>,
    /// Temperature, K.
    pub temperature: Vec<Option<f64>>,
    /// Dew point over water, K.
    pub dewpoint: Vec<Option<f64>>,
    /// Wind.
    pub wind: Vec<Option<Wind>>,
    /// Index into [`Sounding::levels`] of the first level merged into this row; `None` for inserted rows.
    pub received: Vec<Option<usize>>,
    /// Row of the surface level; `None` when the message has none.
    pub surface: Option<usize>,
    /// How the levels were chosen.
    pub sampling: Sampling,
}

/// Two pressures closer than this (Pa) are one pressure: the noise of binary fractions, far below any reported step.
pub(crate) const SAME_PRESSURE: f64 = 0.01;

impl Profile {
    /// Orders and merges the levels of a sounding.
    ///
    /// Levels at one pressure are merged: the first received value of each field is kept, later ones fill gaps, a
    /// conflict is noted. Levels without pressure are left out (noted), except winds given by height in coded data: they are placed by the
    /// heights of the other levels. The surface level is the one the format marks, else the lowest that
    /// reports temperature or wind. If it lacks temperature or humidity and a complete level lies within 10 hPa above it, that
    /// one serves, with a note. Values that are not numbers, or physically impossible beyond any doubt, count as missing, with a note.
    ///
    /// **Sampling** is read from the data: [`Sampling::Fine`] when at least 20 different pressures with temperature lie in the lowest
    /// 500 hPa and the median step between them is at most 3 hPa (a sample every five seconds at the usual 5 m/s near the ground),
    /// else [`Sampling::Coded`].
    ///
    /// **Fine data in the order of a flight** hold more than the ascent. The balloon waits on the ground, and where
    /// pressure is derived from satellite heights it wanders by 20 hPa meanwhile; after the burst the sonde is often followed down. Rows
    /// of the other leg and rows of the wait (found by following the steady ascent back to where it starts) are left out, with one
    /// note each. The first received row with temperature or wind is then the surface, unless the steady ascent starts more
    /// than 15 hPa below it. Rows whose order is no flight are only merged.
    ///
    /// **Dew point above temperature**: by up to 1 K the air counts as saturated; by more the dew point counts as missing. Both are noted.
    /// A surface level without height takes the station's elevation.
    pub fn received(sounding: &Sounding) -> (Self, Vec<Note>) {
        crate::merge::received(sounding)
    }

    /// Number of rows.
    pub fn len(&self) -> usize {
        self.pressure.len()
    }

    /// No rows at all.
    pub fn is_empty(&self) -> bool {
        self.pressure.is_empty()
    }

    /// Pressure of the surface level.
    pub fn surface_pressure(&self) -> Option<Pressure> {
        self.surface
            .and_then(|row| self.pressure.get(row))
            .map(|&p| Pressure::from_pa(p))
    }

    /// Air at one row, when it has temperature and dew point.
    pub fn air(&self, row: usize) -> Option<Air> {
        let pressure = *self.pressure.get(row)?;
        let temperature = (*self.temperature.get(row)?)?;
        let dewpoint = (*self.dewpoint.get(row)?)?;
        Some(Air {
            pressure: Pressure::from_pa(pressure),
            temperature: Temperature::from_k(temperature),
            dewpoint: Temperature::from_k(dewpoint),
        })
    }

    /// Air at the surface level, when it has temperature and dew point.
    pub fn surface_air(&self) -> Option<Air> {
        self.air(self.surface?)
    }

    /// Pressure of the highest row with a temperature.
    pub fn top(&self) -> Option<Pressure> {
        let row = self.temperature.iter().rposition(Option::is_some)?;
        self.pressure.get(row).map(|&p| Pressure::from_pa(p))
    }

    /// First row of the environment: the surface when complete, else the lowest complete row above it.
    pub(crate) fn environment_start(&self) -> Option<usize> {
        let from = self.surface.unwrap_or(0);
        (from..self.len()).find(|&row| self.complete(row))
    }

    /// The row has temperature and dew point.
    pub(crate) fn complete(&self, row: usize) -> bool {
        matches!(self.temperature.get(row), Some(Some(_)))
            && matches!(self.dewpoint.get(row), Some(Some(_)))
    }

    /// The air a parcel rises through: rows with temperature, from the surface (or, without one, the lowest complete row) upward.
    ///
    /// # Errors
    ///
    /// When fewer than two rows have temperature, none has humidity, or the formulas can't take a value.
    pub fn environment(&self) -> Result<Environment, EnvironmentError> {
        let Some(start) = self.environment_start() else {
            let from = self.surface.unwrap_or(0);
            let lowest =
                (from..self.len()).find(|&row| matches!(self.temperature.get(row), Some(Some(_))));
            return Err(match lowest.and_then(|row| self.pressure.get(row)) {
                Some(&pressure) => EnvironmentError::BottomWithoutHumidity { pressure },
                None => EnvironmentError::TooFewLevels(0),
            });
        };
        let room = self.len() - start;
        let mut pressures = Vec::with_capacity(room);
        let mut temperatures = Vec::with_capacity(room);
        let mut dewpoints = Vec::with_capacity(room);
        let rows = self
            .pressure
            .iter()
            .zip(&self.temperature)
            .zip(&self.dewpoint);
        for ((&pressure, &temperature), &dewpoint) in rows.skip(start) {
            if let Some(temperature) = temperature {
                pressures.push(pressure);
                temperatures.push(temperature);
                dewpoints.push(dewpoint);
            }
        }
        Environment::new(&pressures, &temperatures, &dewpoints)
    }

    /// Rows of the environment as indices into this profile; empty when there is none.
    pub fn environment_rows(&self) -> Vec<usize> {
        let Some(start) = self.environment_start() else {
            return Vec::new();
        };
        (start..self.len())
            .filter(|&row| matches!(self.temperature.get(row), Some(Some(_))))
            .collect()
    }
}

/// Changing rows: for the amendments alone.
impl Profile {
    /// Value of a column at a pressure, linear in ln p between the rows (from `from` up) that have one.
    pub(crate) fn interpolated(
        &self,
        column: &[Option<f64>],
        from: usize,
        pressure: f64,
    ) -> Option<f64> {
        let above = self.pressure.partition_point(|&p| p >= pressure);
        let below = (from..above)
            .rev()
            .find_map(|row| Some((row, (*column.get(row)?)?)))?;
        let p_below = *self.pressure.get(below.0)?;
        if p_below - pressure < SAME_PRESSURE {
            return Some(below.1);
        }
        let above = (above..self.len()).find_map(|row| Some((row, (*column.get(row)?)?)))?;
        let p_above = *self.pressure.get(above.0)?;
        let share = (p_below / pressure).ln() / (p_below / p_above).ln();
        Some(below.1 + share * (above.1 - below.1))
    }

    /// The row at this pressure, with temperature: the one that is there, else one inserted by interpolation, which changes nothing in the
    /// environment. `None` outside the rows with temperature from the surface up.
    pub(crate) fn row_at(&mut self, pressure: f64) -> Option<usize> {
        let from = self.surface.unwrap_or(0);
        let near = self
            .pressure
            .partition_point(|&p| p > pressure + SAME_PRESSURE);
        let same = self
            .pressure
            .get(near)
            .is_some_and(|&p| (p - pressure).abs() <= SAME_PRESSURE);
        if same && matches!(self.temperature.get(near), Some(Some(_))) {
            return Some(near);
        }
        let temperature = self.interpolated(&self.temperature, from, pressure)?;
        let dewpoint = self
            .interpolated(&self.dewpoint, from, pressure)
            .map(|dewpoint| dewpoint.min(temperature));
        if !same {
            self.pressure.insert(near, pressure);
            self.height.insert(near, None);
            self.temperature.insert(near, None);
            self.dewpoint.insert(near, None);
            self.wind.insert(near, None);
            self.received.insert(near, None);
            self.surface = self
                .surface
                .map(|row| if row >= near { row + 1 } else { row });
        }
        if let (Some(t), Some(td)) = (self.temperature.get_mut(near), self.dewpoint.get_mut(near)) {
            *t = Some(temperature);
            *td = td.or(dewpoint);
        }
        Some(near)
    }

    /// Keeps the rows for which `keep` says so; the surface row must be among them.
    pub(crate) fn retain(&mut self, keep: impl Fn(usize, f64) -> bool) {
        let kept: Vec<usize> = self
            .pressure
            .iter()
            .enumerate()
            .filter(|&(row, &p)| keep(row, p))
            .map(|(row, _)| row)
            .collect();
        fn pick<T: Copy>(column: &mut Vec<T>, kept: &[usize]) {
            *column = kept
                .iter()
                .filter_map(|&row| column.get(row).copied())
                .collect();
        }
        pick(&mut self.pressure, &kept);
        pick(&mut self.height, &kept);
        pick(&mut self.temperature, &kept);
        pick(&mut self.dewpoint, &kept);
        pick(&mut self.wind, &kept);
        pick(&mut self.received, &kept);
        self.surface = self
            .surface
            .and_then(|row| kept.iter().position(|&k| k == row));
    }
}
