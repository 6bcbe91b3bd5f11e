//! A sonde rising through an invented atmosphere, with what its sensors and its balloon do to the data.

use super::atmosphere::Atmosphere;
use super::noise::{Correlated, Random};
use dewbound_thermo::{Air, Pressure, Temperature, dewpoint_from_relative_humidity};

/// One transmitted sample.
#[derive(Debug, Clone, Copy)]
pub struct Sample {
    /// Seconds since launch.
    pub time: f64,
    /// Pressure, hPa.
    pub pressure: f64,
    /// Height above mean sea level, m.
    pub height: f64,
    /// Temperature, degC.
    pub temperature: f64,
    /// Relative humidity over water, 0..=1.
    pub humidity: f64,
    /// Direction the wind blows from, degrees.
    pub direction: f64,
    /// Wind speed, m/s.
    pub speed: f64,
}

impl Sample {
    /// Dew point, degC.
    pub fn dewpoint(&self) -> f64 {
        dewpoint_from_relative_humidity(Temperature::from_c(self.temperature), self.humidity).c()
    }
}

/// What goes wrong on the way, in terms of sensors and balloon.
#[derive(Debug, Clone, Copy, Default)]
pub struct Faults {
    /// The thermometer leaves a cloud wet at this height (m above sea level) and dries with this time constant (s).
    pub wet_thermometer: Option<(f64, f64)>,
    /// Ice loads the balloon from this height: the rate of ascent falls by half over 1,000 m, the balloon is lost at the second.
    pub icing: Option<(f64, f64)>,
    /// The screen's hygrometer at the ground reads the dew point too high by this, K.
    pub screen_dewpoint_bias: f64,
}

/// Launches a sonde: one sample every `interval` seconds, up to `top` metres above sea level or until it is lost.
pub fn launch(
    atmosphere: &Atmosphere,
    seed: u64,
    interval: f64,
    top: f64,
    faults: Faults,
) -> Vec<Sample> {
    let mut random = Random::new(seed);
    let mut air_temperature = Correlated::new(0.22, 350.0, &mut random);
    let mut air_humidity = Correlated::new(0.018, 250.0, &mut random);
    let mut sensor_temperature = Correlated::new(0.04, 20.0, &mut random);
    let mut sensor_humidity = Correlated::new(0.004, 30.0, &mut random);
    let mut gust = [
        Correlated::new(0.7, 200.0, &mut random),
        Correlated::new(0.7, 200.0, &mut random),
    ];

    let ground = atmosphere.ground();
    let top = top.min(atmosphere.top());
    let mut height = ground;
    let mut time = 0.0;
    let mut dry_since = None;
    let mut samples = Vec::new();
    while height < top {
        let icing = faults
            .icing
            .map_or(0.0, |(from, _)| ((height - from) / 1000.0).clamp(0.0, 1.0));
        if faults.icing.is_some_and(|(_, lost)| height >= lost) {
            break;
        }
        let rate = 5.0 * (1.0 - 0.5 * icing) + 0.15 * random.normal();
        let step = rate * interval;

        let truth = atmosphere.at(height);
        // Structure of the free air fades towards the ground, where turbulence mixes it away.
        let aloft = ((height - ground - 300.0) / 2500.0).clamp(0.08, 1.0);
        let temperature_now =
            truth.air.temperature.k() + aloft * air_temperature.step(step, &mut random);
        let relative = truth.air.relative_humidity();
        // Clouds stay saturated, dry air has little to vary.
        let room = (4.0 * relative * (1.0 - relative)).clamp(0.0, 1.0);
        let relative_now =
            (relative + aloft * room * air_humidity.step(step, &mut random)).clamp(0.01, 1.0);

        let mut measured = temperature_now + sensor_temperature.step(step, &mut random);
        if let Some((cloud_top, constant)) = faults.wet_thermometer
            && height > cloud_top
        {
            let since = *dry_since.get_or_insert(time);
            let wet = Air {
                pressure: truth.air.pressure,
                temperature: Temperature::from_k(temperature_now),
                dewpoint: dewpoint_from_relative_humidity(
                    Temperature::from_k(temperature_now),
                    relative_now,
                ),
            }
            .wet_bulb();
            measured -= (temperature_now - wet.k()) * (-(time - since) / constant).exp();
        }
        let humidity = (relative_now + sensor_humidity.step(step, &mut random)).clamp(0.01, 1.0);
        let wind = (
            truth.wind.0 + aloft * gust[0].step(step, &mut random),
            truth.wind.1 + aloft * gust[1].step(step, &mut random),
        );
        samples.push(Sample {
            time,
            pressure: truth.air.pressure.hpa(),
            height,
            temperature: measured - dewbound_thermo::ZERO_CELSIUS,
            humidity,
            direction: (-wind.0).atan2(-wind.1).to_degrees().rem_euclid(360.0),
            speed: wind.0.hypot(wind.1),
        });
        height += step.max(0.5 * interval);
        time += interval;
    }
    if let Some(first) = samples.first_mut() {
        let screen = Air {
            pressure: Pressure::from_hpa(first.pressure),
            temperature: Temperature::from_c(first.temperature),
            dewpoint: Temperature::from_c(first.dewpoint() + faults.screen_dewpoint_bias),
        };
        first.humidity = screen.relative_humidity().min(1.0);
    }
    samples
}
