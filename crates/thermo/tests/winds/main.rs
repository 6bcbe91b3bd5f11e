//! Wind numbers against closed forms, plain sums, and what must hold of any wind profile.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod closed_forms;
mod properties;

use dewbound_thermo::*;

fn vector(u: f64, v: f64) -> Vector {
    Vector { u, v }
}

/// Scale height of the air in these tests, m, and pressure at its ground, Pa.
const SCALE: f64 = 8000.0;
const GROUND: f64 = 100_000.0;

fn level(height: f64, wind: Vector) -> WindLevel {
    WindLevel {
        height,
        pressure: Some(Pressure::from_pa(GROUND * (-height / SCALE).exp())),
        wind,
    }
}

fn layer(bottom: f64, top: f64, el: f64) -> EffectiveLayer {
    let at = |height: f64| LevelAt {
        pressure: Pressure::from_pa(GROUND * (-height / SCALE).exp()),
        height,
    };
    EffectiveLayer {
        inflow: Some(InflowLayer {
            bottom: at(bottom),
            top: at(top),
        }),
        el_height: Some(el),
    }
}
