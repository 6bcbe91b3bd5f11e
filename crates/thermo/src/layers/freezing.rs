//! Where it freezes: temperature and wet-bulb temperature of 0 °C.

use super::LevelAt;
use super::walk::{WIDEST, first_fall};
use crate::air::quick_ln_theta_e;
use crate::elementary::exp;
use crate::pseudoadiabat::saturated;
use crate::{Environment, ZERO_CELSIUS};

/// The lowest level where temperature falls from above 0 °C to 0 °C, going up; exact on the interpolated profile. `None`
/// when the lowest level is at 0 °C or colder (a warm layer above it notwithstanding), and when it never freezes.
pub(super) fn freezing_level(environment: &Environment) -> Option<LevelAt> {
    let levels = environment.levels();
    let above = levels.t.iter().position(|&t| t <= ZERO_CELSIUS)?;
    let below = above.checked_sub(1)?;
    let (z, t) = (levels.z, levels.t);
    let share = (t[below] - ZERO_CELSIUS) / (t[below] - t[above]);
    let z = if t[above] == ZERO_CELSIUS {
        z[above]
    } else {
        z[below] + share * (z[above] - z[below])
    };
    LevelAt::at_z(environment, z)
}

/// The lowest level where the wet-bulb temperature falls from above 0 °C to 0 °C, going up. `None` when it is at 0 °C or
/// below at the lowest level, and when humidity ends before.
///
/// The wet bulb is at 0 °C where theta-e is that of saturated air of 0 °C and the same pressure: no inversion is needed.
/// Crossings are exact; two of them closer than 0.01 in ln p and 1 K in dew point, inside one segment, are not seen.
pub(super) fn wet_bulb_zero(environment: &Environment) -> Option<LevelAt> {
    let levels = environment.levels();
    let humid = environment.humid_levels();
    // The wet bulb is above the dew point: nothing to look for while that is above 0 °C.
    let dew = levels.td[..humid]
        .iter()
        .position(|td| td.is_some_and(|td| td <= ZERO_CELSIUS))?;
    let from = levels.z[dew.saturating_sub(1)];
    let to = levels.z[humid - 1];
    let z = first_fall(environment, from, to, WIDEST, |segment, z| {
        let Some((td, slope)) = segment.td else {
            return f64::NAN;
        };
        let t = segment.temperature(z);
        let td = (td + slope * (z - segment.z)).min(t);
        // Cheaper than theta-e, and with the same sign.
        if t <= ZERO_CELSIUS {
            return t - ZERO_CELSIUS;
        }
        if td > ZERO_CELSIUS {
            return td - ZERO_CELSIUS;
        }
        let p = exp(-z);
        saturated(ZERO_CELSIUS, p)
            .map_or(f64::NAN, |ice| quick_ln_theta_e(p, t, td) - ice.ln_theta_e)
    })?;
    LevelAt::at_z(environment, z)
}
