//! Wind against height above the level the numbers start at.

use crate::Profile;
use dewbound_thermo::{Pressure, Vector, WindLevel, WindProfile};

/// The winds of the working profile at the heights of the profile as received, above the working profile's lowest usable level.
pub(crate) fn wind_profile(received: &Profile, working: &Profile) -> Option<WindProfile> {
    let ground = working.environment_start().or(working.surface)?;
    let ground = received.height_at(Pressure::from_pa(*working.pressure.get(ground)?))?;
    let rows = working.pressure.iter().zip(&working.wind);
    WindProfile::new(rows.filter_map(|(&pressure, wind)| {
        let wind = (*wind)?;
        let pressure = Pressure::from_pa(pressure);
        Some(WindLevel {
            height: received.height_at(pressure)? - ground,
            pressure: Some(pressure),
            wind: Vector::from_wind(wind.direction, wind.speed),
        })
    }))
}
