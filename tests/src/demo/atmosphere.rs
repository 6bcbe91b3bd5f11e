//! An invented atmosphere, built upward layer by layer.

use dewbound_thermo::{
    Air, GAS_CONSTANT_DRY, GRAVITY, Pressure, Temperature, ZERO_CELSIUS,
    dewpoint_from_mixing_ratio, saturation_mixing_ratio,
};

/// Vertical step of the integration, m.
const STEP: f64 = 5.0;

/// Humidity at the top of a layer.
#[derive(Debug, Clone, Copy)]
pub enum Humidity {
    /// Relative humidity over water, 0..=1, linear in height.
    Relative(f64),
    /// Mixing ratio, g/kg, linear in height.
    Mixing(f64),
}

/// Air at one height of the invented atmosphere.
#[derive(Debug, Clone, Copy)]
pub struct Point {
    /// Height above mean sea level, m.
    pub height: f64,
    /// The air there.
    pub air: Air,
    /// Wind towards east and north, m/s.
    pub wind: (f64, f64),
}

/// The invented atmosphere over one station.
#[derive(Debug, Clone)]
pub struct Atmosphere {
    points: Vec<Point>,
}

impl Atmosphere {
    /// Begins at the ground: height (m), pressure (hPa), temperature and dew point (degC).
    pub fn from_ground(height: f64, pressure: f64, temperature: f64, dewpoint: f64) -> Self {
        let air = Air {
            pressure: Pressure::from_hpa(pressure),
            temperature: Temperature::from_c(temperature),
            dewpoint: Temperature::from_c(dewpoint),
        };
        Self {
            points: vec![Point {
                height,
                air,
                wind: (0.0, 0.0),
            }],
        }
    }

    /// Adds a layer: depth (m), lapse rate (K/km, positive = cooling upward), humidity at its top.
    pub fn layer(mut self, depth: f64, lapse: f64, humidity: Humidity) -> Self {
        let steps = (depth / STEP).round().max(1.0) as usize;
        let step = depth / steps as f64;
        let base = *self.last();
        let from = match humidity {
            Humidity::Relative(_) => base.air.relative_humidity(),
            Humidity::Mixing(_) => base.air.mixing_ratio() * 1000.0,
        };
        for index in 1..=steps {
            let below = *self.last();
            let share = index as f64 / steps as f64;
            let temperature = base.air.temperature.k() - lapse / 1000.0 * share * depth;
            let mean = 0.5 * (temperature + below.air.temperature.k());
            // Virtual temperature of the layer from the humidity below: a step of 5 m makes the difference nothing.
            let mean_virtual =
                mean * below.air.virtual_temperature().k() / below.air.temperature.k();
            let pressure = Pressure::from_pa(
                below.air.pressure.pa()
                    * (-GRAVITY * step / (GAS_CONSTANT_DRY * mean_virtual)).exp(),
            );
            let temperature = Temperature::from_k(temperature);
            let saturated = saturation_mixing_ratio(pressure, temperature);
            let mixing = match humidity {
                Humidity::Relative(to) => {
                    // w = eps e / (p - e); the relative humidity is of vapour pressures.
                    let relative = from + (to - from) * share;
                    let eps = dewbound_thermo::EPSILON;
                    let vapour = relative * pressure.pa() * saturated / (eps + saturated);
                    eps * vapour / (pressure.pa() - vapour)
                }
                Humidity::Mixing(to) => (from + (to - from) * share) / 1000.0,
            };
            let dewpoint = dewpoint_from_mixing_ratio(pressure, mixing.clamp(1e-7, saturated));
            self.points.push(Point {
                height: below.height + step,
                air: Air {
                    pressure,
                    temperature,
                    dewpoint,
                },
                wind: (0.0, 0.0),
            });
        }
        self
    }

    /// Adds a layer of constant theta (well mixed).
    pub fn mixed(self, depth: f64, humidity: Humidity) -> Self {
        // g/cp with cp = Rd/0.2854, so that theta is constant in the same convention.
        let lapse = 1000.0 * GRAVITY / (GAS_CONSTANT_DRY / dewbound_thermo::KAPPA);
        self.layer(depth, lapse, humidity)
    }

    /// Adds a layer up to a temperature (degC).
    pub fn layer_to(self, depth: f64, temperature: f64, humidity: Humidity) -> Self {
        let lapse = (self.last().air.temperature.k() - ZERO_CELSIUS - temperature) / depth * 1000.0;
        self.layer(depth, lapse, humidity)
    }

    /// Sets the wind, linear in height between `(height above ground m, direction degrees, speed m/s)`.
    pub fn wind(mut self, nodes: &[(f64, f64, f64)]) -> Self {
        let ground = self.points.first().map_or(0.0, |point| point.height);
        let vectors: Vec<(f64, f64, f64)> = nodes
            .iter()
            .map(|&(height, direction, speed)| {
                let from = direction.to_radians();
                (ground + height, -speed * from.sin(), -speed * from.cos())
            })
            .collect();
        for point in &mut self.points {
            let next = vectors.partition_point(|node| node.0 <= point.height);
            let low = vectors[next.saturating_sub(1).min(vectors.len() - 1)];
            let high = vectors[next.min(vectors.len() - 1)];
            let share = if high.0 > low.0 {
                (point.height - low.0) / (high.0 - low.0)
            } else {
                0.0
            };
            point.wind = (
                low.1 + share * (high.1 - low.1),
                low.2 + share * (high.2 - low.2),
            );
        }
        self
    }

    fn last(&self) -> &Point {
        &self.points[self.points.len() - 1]
    }

    /// Height of the ground, m.
    pub fn ground(&self) -> f64 {
        self.points[0].height
    }

    /// Height of the top, m.
    pub fn top(&self) -> f64 {
        self.last().height
    }

    /// The air at a height between ground and top, linear between points (ln p too).
    pub fn at(&self, height: f64) -> Point {
        let next = self
            .points
            .partition_point(|point| point.height <= height)
            .clamp(1, self.points.len() - 1);
        let (low, high) = (&self.points[next - 1], &self.points[next]);
        let share = ((height - low.height) / (high.height - low.height)).clamp(0.0, 1.0);
        let mix = |a: f64, b: f64| a + share * (b - a);
        Point {
            height,
            air: Air {
                pressure: Pressure::from_pa(
                    mix(low.air.pressure.pa().ln(), high.air.pressure.pa().ln()).exp(),
                ),
                temperature: Temperature::from_k(mix(
                    low.air.temperature.k(),
                    high.air.temperature.k(),
                )),
                dewpoint: Temperature::from_k(mix(low.air.dewpoint.k(), high.air.dewpoint.k())),
            },
            wind: (mix(low.wind.0, high.wind.0), mix(low.wind.1, high.wind.1)),
        }
    }
}
