//! The standard atmosphere and thicknesses: what a coded height or temperature is compared with.

use dewbound_sounding::thermo::{GAS_CONSTANT_DRY, GRAVITY};

/// Metres per kelvin and unit of ln p.
const SCALE: f64 = GAS_CONSTANT_DRY / GRAVITY;

/// One layer of the US Standard Atmosphere 1976: pressure (Pa), height (geopotential m) and temperature (K) at its base,
/// lapse rate (K/m).
struct Layer {
    pressure: f64,
    height: f64,
    temperature: f64,
    lapse: f64,
}

/// Surface to 32 km; the last layer is continued upward.
const LAYERS: [Layer; 3] = [
    Layer {
        pressure: 101_325.0,
        height: 0.0,
        temperature: 288.15,
        lapse: -0.0065,
    },
    Layer {
        pressure: 22_632.06,
        height: 11_000.0,
        temperature: 216.65,
        lapse: 0.0,
    },
    Layer {
        pressure: 5_474.89,
        height: 20_000.0,
        temperature: 216.65,
        lapse: 0.001,
    },
];

fn layer(pressure: f64) -> &'static Layer {
    let [ground, middle, upper] = &LAYERS;
    if pressure > middle.pressure {
        ground
    } else if pressure > upper.pressure {
        middle
    } else {
        upper
    }
}

/// Temperature (K) of the standard atmosphere at a pressure (Pa, positive).
pub(super) fn temperature(pressure: f64) -> f64 {
    let layer = layer(pressure);
    layer.temperature * (layer.pressure / pressure).powf(layer.lapse * SCALE)
}

/// Height (geopotential m) of the standard atmosphere at a pressure (Pa, positive).
pub(super) fn height(pressure: f64) -> f64 {
    let layer = layer(pressure);
    if layer.lapse == 0.0 {
        layer.height + SCALE * layer.temperature * (layer.pressure / pressure).ln()
    } else {
        layer.height + (temperature(pressure) - layer.temperature) / layer.lapse
    }
}

/// One end of a layer of air.
#[derive(Debug, Clone, Copy)]
pub(super) struct End {
    /// Pressure, Pa, positive.
    pub pressure: f64,
    /// Temperature, K.
    pub temperature: Option<f64>,
}

/// Thickness (m) from `lower` to `upper`, negative when `upper` is the one below: the hypsometric equation with the mean
/// of the temperatures at both ends. A missing temperature is the other's plus the standard atmosphere's difference.
/// Moisture is left out: it adds less than 20 m between standard levels, far below what a missing leading figure means.
pub(super) fn thickness(lower: End, upper: End) -> f64 {
    let standard = |end: End| temperature(end.pressure);
    let (below, above) = match (lower.temperature, upper.temperature) {
        (Some(below), Some(above)) => (below, above),
        (Some(below), None) => (below, below + standard(upper) - standard(lower)),
        (None, Some(above)) => (above + standard(lower) - standard(upper), above),
        (None, None) => (standard(lower), standard(upper)),
    };
    SCALE * (below + above) / 2.0 * (lower.pressure / upper.pressure).ln()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// US Standard Atmosphere 1976, geopotential heights of the standard isobaric surfaces (values from memory).
    #[test]
    fn heights_of_the_standard_levels() {
        for (hectopascals, expect) in [
            (1000.0, 111.0),
            (850.0, 1457.0),
            (700.0, 3012.0),
            (500.0, 5574.0),
            (300.0, 9164.0),
            (200.0, 11_784.0),
            (100.0, 16_180.0),
            (50.0, 20_576.0),
            (30.0, 23_849.0),
            (10.0, 31_055.0),
        ] {
            let found = height(hectopascals * 100.0);
            assert!((found - expect).abs() < 3.0, "{hectopascals}: {found}");
        }
    }

    #[test]
    fn thickness_agrees_with_the_heights() {
        let end = |hectopascals: f64| End {
            pressure: hectopascals * 100.0,
            temperature: None,
        };
        for (below, above) in [
            (1000.0, 850.0),
            (700.0, 500.0),
            (500.0, 700.0),
            (50.0, 30.0),
        ] {
            let found = thickness(end(below), end(above));
            let expect = height(above * 100.0) - height(below * 100.0);
            assert!((found - expect).abs() < 10.0, "{below} to {above}: {found}");
        }
    }
}
