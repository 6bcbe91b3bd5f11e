//! Where a parcel starts: mixed and most unstable.

use crate::air::quick_ln_theta_e;
use crate::saturation::NO_VAPOUR;
use crate::{
    Air, Environment, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
};

/// Depth over which the mixed parcel is averaged unless told otherwise.
pub const MIXED_DEPTH: Pressure = Pressure::from_hpa(100.0);
/// Levels looked at together.
const BLOCK: usize = 64;
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
    let (p, t, td) = (
        environment.pressure(),
        environment.temperature(),
        environment.dewpoint(),
    );
    let within = p.iter().take_while(|&&p| p >= limit).count();
    let humid = td[..within].iter().take_while(|td| td.is_some()).count();
    let mut best: Option<(f64, usize)> = None;
    // Block by block, first theta-e of all its levels (plain arithmetic, side by side), then the choice.
    let mut ln_theta_e = [0.0; BLOCK];
    for begin in (0..humid).step_by(BLOCK) {
        let end = (begin + BLOCK).min(humid);
        let block = &mut ln_theta_e[..end - begin];
        ln_theta_e_of(&p[begin..end], &t[begin..end], &td[begin..end], block);
        for (level, &value) in (begin..).zip(block.iter()) {
            // Strictly greater: of equals the lowest.
            if best.is_none_or(|(largest, _)| value > largest) && candidate(level) {
                best = Some((value, level));
            }
        }
    }
    let (_, level) = best?;
    let air = Air {
        pressure: Pressure::from_pa(*p.get(level)?),
        temperature: Temperature::from_k(*t.get(level)?),
        dewpoint: Temperature::from_k((*td.get(level)?)?),
    };
    Some((level, air))
}

/// ln theta-e of levels with humidity. Not generic and not inlined, so that it is vectorised once, here.
#[inline(never)]
pub(crate) fn ln_theta_e_of(p: &[f64], t: &[f64], td: &[Option<f64>], out: &mut [f64]) {
    for (out, td) in out.iter_mut().zip(td) {
        *out = td.unwrap_or(NO_VAPOUR);
    }
    for ((out, &p), &t) in out.iter_mut().zip(p).zip(t) {
        *out = quick_ln_theta_e(p, t, *out);
    }
}
