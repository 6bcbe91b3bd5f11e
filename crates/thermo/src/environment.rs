//! The air a parcel rises through.

use crate::{Air, Pressure};

/// Why an environment can't be built from these columns.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum EnvironmentError {
    /// Columns of different length.
    #[error("{pressures} pressures, {temperatures} temperatures and {dewpoints} dew points: one of each is needed at every level")]
    Lengths {
        /// Count of pressures.
        pressures: usize,
        /// Count of temperatures.
        temperatures: usize,
        /// Count of dew points.
        dewpoints: usize,
    },
    /// Fewer than two levels.
    #[error("{0} levels with temperature: at least 2 are needed")]
    TooFewLevels(usize),
    /// A value that is not a number or is outside what the formulas are good for.
    #[error("level {level}: {quantity} {value} {unit} is not usable")]
    Value {
        /// Index of the level.
        level: usize,
        /// What.
        quantity: &'static str,
        /// The value.
        value: f64,
        /// Its unit.
        unit: &'static str,
    },
    /// Pressure doesn't fall from one level to the next.
    #[error("level {level}: pressure {pressure} Pa is not below {previous} Pa, the level before")]
    Order {
        /// Index of the level.
        level: usize,
        /// Pressure there, Pa.
        pressure: f64,
        /// Pressure of the level before, Pa.
        previous: f64,
    },
    /// The lowest level has no humidity: start at the lowest complete level instead.
    #[error("the lowest level ({pressure} Pa) has no humidity")]
    BottomWithoutHumidity {
        /// Its pressure, Pa.
        pressure: f64,
    },
}

/// What is known of the humidity of an environment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HumidityKnown {
    /// Levels whose dew point was interpolated between known ones.
    pub interpolated: usize,
    /// Levels above the last known dew point, counted as dry.
    pub dry: usize,
    /// The last known dew point, when levels above it count as dry.
    pub dry_above: Option<Pressure>,
}

/// The air a parcel rises through: temperature and dew point linear in ln p between levels of falling pressure.
///
/// **Invariant:** pressures fall strictly, every value is finite, the lowest level has a dew point.
#[derive(Debug, Clone)]
pub struct Environment {
    _private: (),
}

impl Environment {
    /// From columns of one length: pressure (Pa, falling strictly), temperature (K), dew point (K, `None` = missing).
    ///
    /// A missing dew point is interpolated between known levels (linear in ln p); above the last known one the air
    /// counts as dry. See [`Environment::humidity`].
    pub fn new(_pressure: &[f64], _temperature: &[f64], _dewpoint: &[Option<f64>]) -> Result<Self, EnvironmentError> {
        todo!()
    }

    /// Number of levels.
    pub fn len(&self) -> usize {
        todo!()
    }

    /// Never true: an environment has at least two levels.
    pub fn is_empty(&self) -> bool {
        false
    }

    /// Pressures, Pa, falling.
    pub fn pressure(&self) -> &[f64] {
        todo!()
    }

    /// Temperatures, K.
    pub fn temperature(&self) -> &[f64] {
        todo!()
    }

    /// Dew points, K, after filling; `None` where the air counts as dry.
    pub fn dewpoint(&self) -> &[Option<f64>] {
        todo!()
    }

    /// The lowest level.
    pub fn bottom(&self) -> Air {
        todo!()
    }

    /// Air at a pressure inside the profile whose humidity is known there; `None` outside.
    pub fn at(&self, _pressure: Pressure) -> Option<Air> {
        todo!()
    }

    /// Temperature and virtual temperature (K) at a pressure inside the profile, dry air where humidity is unknown.
    pub fn virtual_at(&self, _pressure: Pressure) -> Option<(f64, f64)> {
        todo!()
    }

    /// What is known of the humidity.
    pub fn humidity(&self) -> HumidityKnown {
        todo!()
    }

    /// The same air with relative humidity held at its last known value above the last known dew point.
    pub fn with_humidity_held(&self) -> Self {
        todo!()
    }

    /// Integral means over p of theta (K) and mixing ratio (kg/kg) of the interpolated profile between two
    /// pressures (`bottom` > `top`, clipped to the profile); `None` when they don't overlap with known humidity.
    pub fn layer_mean(&self, _bottom: Pressure, _top: Pressure) -> Option<(f64, f64)> {
        todo!()
    }
}
