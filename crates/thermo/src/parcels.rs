//! Where a parcel starts: mixed and most unstable.

use crate::air::quick_ln_theta_e;
use crate::{
    Air, Environment, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
};

/// Depth over which the mixed parcel is averaged unless told otherwise.
pub const MIXED_DEPTH: Pressure = Pressure::from_hpa(100.0);
/// Depth searched for the most unstable parcel.
pub const MOST_UNSTABLE_DEPTH: Pressure = Pressure::from_hpa(300.0);

/// The mixed parcel: integral means over p of theta and w in the lowest `depth`, lifted from the bottom's pressure.
pub fn mixed_start(environment: &Environment, depth: Pressure) -> Option<Air> {
    let pressure = environment.bottom().pressure;
    let top = Pressure::from_pa(pressure.pa() - depth.pa());
    mean_start(environment, pressure, top)
}

/// The mean parcel of any layer: integral means over p of theta and w between two pressures (`bottom` > `top`), lifted
/// from its base.
///
/// The layer is clipped to the part of the profile whose humidity is known; `None` when nothing of it is left.
pub fn mean_start(environment: &Environment, bottom: Pressure, top: Pressure) -> Option<Air> {
    let (theta, w) = environment.layer_mean(bottom, top)?;
    let pressure = Pressure::from_pa(bottom.pa().min(environment.bottom().pressure.pa()));
    let temperature = temperature_on_dry_adiabat(Temperature::from_k(theta), pressure);
    let dewpoint = dewpoint_from_mixing_ratio(pressure, w);
    Some(Air {
        pressure,
        temperature,
        dewpoint: Temperature::from_k(dewpoint.k().min(temperature.k())),
    })
}

/// The most unstable parcel: the level of largest theta-e in the lowest `depth`, with its index.
///
/// `candidate` says which levels may be chosen (levels inserted by interpolation are not).
pub fn most_unstable_start(
    environment: &Environment,
    depth: Pressure,
    candidate: impl Fn(usize) -> bool,
) -> Option<(usize, Air)> {
    let limit = environment.bottom().pressure.pa() - depth.pa();
    let columns = environment
        .pressure()
        .iter()
        .zip(environment.temperature())
        .zip(environment.dewpoint());
    let mut best: Option<(f64, usize, Air)> = None;
    for (level, ((&p, &t), &td)) in columns
        .enumerate()
        .take_while(|(_, ((p, _), _))| **p >= limit)
    {
        let Some(td) = td else { break };
        if !candidate(level) {
            continue;
        }
        let ln_theta_e = quick_ln_theta_e(p, t, td);
        // Strictly greater: of equals the lowest.
        if best.is_none_or(|(largest, _, _)| ln_theta_e > largest) {
            let (temperature, dewpoint) = (Temperature::from_k(t), Temperature::from_k(td));
            best = Some((
                ln_theta_e,
                level,
                Air {
                    pressure: Pressure::from_pa(p),
                    temperature,
                    dewpoint,
                },
            ));
        }
    }
    best.map(|(_, level, air)| (level, air))
}
