//! The air a parcel rises through.

mod heights;
mod integrals;
mod refill;

use crate::column::{Column, Levels, theta_and_moisture};
use crate::saturation::{self, NO_VAPOUR};
use crate::{Air, GAS_CONSTANT_DRY, GRAVITY, Pressure, Temperature, elementary};

/// Why an environment can't be built from these columns.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum EnvironmentError {
    /// Columns of different length.
    #[error(
        "{pressures} pressures, {temperatures} temperatures and {dewpoints} dew points: one of each is needed at every level"
    )]
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
    /// Levels whose dew point was above the temperature and counts as saturation.
    pub above_saturation: usize,
}

/// The air a parcel rises through: temperature and dew point linear in ln p between levels of falling pressure.
///
/// Virtual temperature and its integral are worked out once, when it is made, at the levels and, where they are far
/// apart or moisture bends between them, in between; lifting another parcel is then mostly additions.
///
/// ```
/// use dewbound_thermo::*;
/// let environment = Environment::new(
///     &[100_000.0, 70_000.0, 50_000.0],
///     &[298.0, 280.0, 262.0],
///     &[Some(290.0), None, Some(240.0)],
/// )?;
/// assert_eq!(environment.humidity().interpolated, 1);
/// // Between levels, and outside the profile.
/// assert!(environment.at(Pressure::from_hpa(850.0)).is_some());
/// assert!(environment.at(Pressure::from_hpa(400.0)).is_none());
/// # Ok::<(), EnvironmentError>(())
/// ```
///
/// **Invariant:** pressures fall strictly, every value is finite, the lowest level has a dew point, no dew point is
/// above the temperature, and the vapour pressure is below half the pressure at every level.
#[derive(Debug, Clone)]
pub struct Environment {
    z: Vec<f64>,
    p: Vec<f64>,
    t: Vec<f64>,
    td: Vec<Option<f64>>,
    /// What is known of each level's dew point.
    flags: Vec<u8>,
    /// Levels with humidity, from the bottom.
    humid: usize,
    humidity: HumidityKnown,
    column: Column,
    /// Memory for making the lower part again.
    scratch: Column,
}

impl Environment {
    /// From columns of one length: pressure (Pa, falling strictly), temperature (K), dew point (K, `None` = missing).
    ///
    /// A missing dew point is interpolated between known levels (linear in ln p); above the last known one the air
    /// counts as dry. A dew point above the temperature counts as saturation. See [`Environment::humidity`].
    pub fn new(
        pressure: &[f64],
        temperature: &[f64],
        dewpoint: &[Option<f64>],
    ) -> Result<Self, EnvironmentError> {
        Self::empty().refilled(pressure, temperature, dewpoint)
    }

    pub(crate) fn levels(&self) -> Levels<'_> {
        Levels {
            z: &self.z,
            t: &self.t,
            td: &self.td,
        }
    }

    pub(crate) fn column(&self) -> &Column {
        &self.column
    }

    /// -ln p of the lowest and highest level.
    pub(crate) fn z_range(&self) -> (f64, f64) {
        (self.z[0], self.z[self.z.len() - 1])
    }

    /// Number of levels.
    pub fn len(&self) -> usize {
        self.p.len()
    }

    /// Never true: an environment has at least two levels.
    pub fn is_empty(&self) -> bool {
        false
    }

    /// Pressures, Pa, falling.
    pub fn pressure(&self) -> &[f64] {
        &self.p
    }

    /// Temperatures, K.
    pub fn temperature(&self) -> &[f64] {
        &self.t
    }

    /// Dew points, K, after filling; `None` where the air counts as dry.
    pub fn dewpoint(&self) -> &[Option<f64>] {
        &self.td
    }

    /// The lowest level.
    pub fn bottom(&self) -> Air {
        Air {
            pressure: Pressure::from_pa(self.p[0]),
            temperature: Temperature::from_k(self.t[0]),
            dewpoint: Temperature::from_k(self.td[0].unwrap_or(NO_VAPOUR)),
        }
    }

    /// The highest level's pressure.
    pub fn top(&self) -> Pressure {
        Pressure::from_pa(self.p[self.p.len() - 1])
    }

    /// Segment index and z of a pressure inside the profile.
    fn locate(&self, pressure: Pressure) -> Option<(usize, f64)> {
        let p = pressure.pa();
        let inside = p <= self.p[0] && p >= self.p[self.p.len() - 1];
        if !inside {
            return None;
        }
        let above = self.p.partition_point(|&level| level > p);
        Some((above.saturating_sub(1), coordinate(p)))
    }

    /// Air at a pressure inside the profile whose humidity is known there; `None` outside.
    pub fn at(&self, pressure: Pressure) -> Option<Air> {
        let (i, z) = self.locate(pressure)?;
        let air = |t: f64, td: f64| {
            Some(Air {
                pressure,
                temperature: Temperature::from_k(t),
                dewpoint: Temperature::from_k(td.min(t)),
            })
        };
        // A level's own values, untouched by interpolation.
        for level in [i, i + 1] {
            if self.p.get(level) == Some(&pressure.pa()) {
                return air(self.t[level], self.td[level]?);
            }
        }
        let segment = self.levels().segment(i);
        let (td, slope) = segment.td?;
        air(segment.temperature(z), td + slope * (z - segment.z))
    }

    /// Temperature and virtual temperature (K) at a pressure inside the profile, dry air where humidity is unknown.
    pub fn virtual_at(&self, pressure: Pressure) -> Option<(f64, f64)> {
        if let Some(air) = self.at(pressure) {
            return Some((air.temperature.k(), air.virtual_temperature().k()));
        }
        let (i, z) = self.locate(pressure)?;
        let t = self.levels().segment(i).temperature(z);
        Some((t, t))
    }

    /// What is known of the humidity.
    pub fn humidity(&self) -> HumidityKnown {
        self.humidity
    }

    /// The same air with relative humidity held at its last known value above the last known dew point.
    ///
    /// Vapour there is never more, by mixing ratio, than at the last known level: holding relative humidity over
    /// water through a warm stratosphere would otherwise invent moisture.
    pub fn with_humidity_held(&self) -> Self {
        if self.humid >= self.len() {
            return self.clone();
        }
        let last = self.humid - 1;
        let td_last = self.td[last].unwrap_or(NO_VAPOUR);
        let e_last = saturation::e_water(td_last);
        let rh = e_last / saturation::e_water(self.t[last]);
        let w_last = saturation::mixing_ratio(self.p[last], e_last);
        let mut held = self.clone();
        for i in self.humid..self.len() {
            let e = (rh * saturation::e_water(self.t[i]))
                .min(self.p[i] * w_last / (crate::EPSILON + w_last));
            held.td[i] = Some(saturation::dewpoint(e).min(self.t[i]));
            held.flags[i] |= refill::KNOWN;
        }
        held.humidity = HumidityKnown {
            dry: 0,
            dry_above: None,
            ..self.humidity
        };
        held.humid = self.len();
        let levels = Levels {
            z: &held.z,
            t: &held.t,
            td: &held.td,
        };
        held.column.fill(&levels, held.humid, held.z.len() - 1);
        held
    }

    /// Integral means over p of theta (K) and mixing ratio (kg/kg) of the interpolated profile between two
    /// pressures (`bottom` > `top`, clipped to the profile); `None` when they don't overlap with known humidity.
    pub fn layer_mean(&self, bottom: Pressure, top: Pressure) -> Option<(f64, f64)> {
        if bottom.pa().is_nan() || top.pa().is_nan() {
            return None;
        }
        let bottom = bottom.pa().min(self.p[0]);
        let top = top.pa().max(self.p[self.humid - 1]);
        if bottom <= top {
            return None;
        }
        let (theta, moisture) =
            theta_and_moisture(&self.levels(), coordinate(bottom), coordinate(top));
        let depth = bottom - top;
        Some((theta / depth, moisture / depth))
    }

    /// Geopotential thickness (m) between two pressures inside the profile: Rd/g times the integral of virtual
    /// temperature over ln p. `None` outside; negative when `upper` has the higher pressure.
    pub fn thickness(&self, lower: Pressure, upper: Pressure) -> Option<f64> {
        let integral = |pressure: Pressure| {
            let (_, z) = self.locate(pressure)?;
            Some(
                self.column
                    .integral_in(&self.levels(), self.column.step_at(z), z),
            )
        };
        Some(GAS_CONSTANT_DRY / GRAVITY * (integral(upper)? - integral(lower)?))
    }
}

/// The vertical coordinate of a pressure in Pa.
#[inline]
pub(crate) fn coordinate(p: f64) -> f64 {
    -elementary::ln(p)
}
