//! Numbers of one ascent beyond CAPE and CIN.

use super::convective::{Convective, convective};
use super::growth_zone::cape_in_growth_zone;
use crate::{Environment, Lifted, Method, Pressure, parcel_path};

/// Numbers of one ascent beyond CAPE and CIN. Absent is `None`: outside the profile, or no free convection.
///
/// ```
/// use dewbound_thermo::*;
/// let environment = Environment::new(
///     &[100_000.0, 85_000.0, 70_000.0, 50_000.0, 30_000.0, 20_000.0, 10_000.0],
///     &[303.0, 291.0, 283.0, 263.0, 233.0, 218.0, 213.0],
///     &[Some(294.0), Some(287.0), Some(268.0), Some(243.0), Some(218.0), None, None],
/// )?;
/// let lifted = Lifted::of(&environment, environment.bottom(), Method::default()).unwrap();
/// let numbers = ParcelNumbers::of(&environment, &lifted);
/// assert!(numbers.lifted_index.unwrap() < 0.0 && numbers.lcl_height < numbers.el_height);
/// assert!(numbers.cape_in_growth_zone.unwrap() < lifted.ascent.cape);
/// # Ok::<(), EnvironmentError>(())
/// ```
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelNumbers {
    /// Height of the LCL above the lowest level, m.
    pub lcl_height: Option<f64>,
    /// Height of the LFC above the lowest level, m.
    pub lfc_height: Option<f64>,
    /// Height of the EL above the lowest level, m.
    pub el_height: Option<f64>,
    /// Part of CAPE below 3 km above the lowest level, J/kg. Zero without CAPE; absent when the profile ends lower.
    pub cape_below_3km: Option<f64>,
    /// Part of CAPE where the environment's temperature is between -10 and -30 °C, J/kg: every such layer, cut exactly.
    /// Absent when nothing of the profile above the LCL is; a lower limit where CAPE is one.
    pub cape_in_growth_zone: Option<f64>,
    /// CAPE divided by the height of the EL over the LFC, m/s² (Blanchard 1998, WAF 13; from memory).
    pub normalised_cape: Option<f64>,
    /// Temperature of the environment minus that of the parcel at 500 hPa, K (Galway 1956, BAMS 37; from memory): plain
    /// temperatures, the parcel lifted by the default ascent whatever the method of this one. Absent when it starts above
    /// 500 hPa or the profile doesn't hold 500 hPa.
    pub lifted_index: Option<f64>,
    /// Where heating from below would make cumulus, for the parcel's mixing ratio.
    pub convective: Option<Convective>,
}

impl ParcelNumbers {
    /// Of a parcel lifted through its environment.
    pub fn of(environment: &Environment, lifted: &Lifted) -> Self {
        let ascent = &lifted.ascent;
        let height = |pressure: Pressure| environment.height_above_bottom(pressure);
        let lfc_height = ascent.lfc.and_then(height);
        let el_height = ascent.el.and_then(height);
        let cape_below_3km = environment
            .pressure_at_height(3_000.0)
            .map(|top| lifted.cape_between(environment.bottom().pressure, top));
        let normalised_cape = match (lfc_height, el_height) {
            (Some(lfc), Some(el)) if el > lfc => Some(ascent.cape / (el - lfc)),
            _ => None,
        };
        Self {
            lcl_height: height(ascent.lcl.pressure),
            lfc_height,
            el_height,
            cape_below_3km,
            cape_in_growth_zone: cape_in_growth_zone(environment, lifted),
            normalised_cape,
            lifted_index: lifted_index(environment, lifted),
            convective: convective(environment, ascent),
        }
    }
}

fn lifted_index(environment: &Environment, lifted: &Lifted) -> Option<f64> {
    const LEVEL: Pressure = Pressure::from_hpa(500.0);
    let (surroundings, _) = environment.virtual_at(LEVEL)?;
    let path = parcel_path(lifted.ascent.start, Method::default(), &[LEVEL]);
    Some(surroundings - path.first()?.temperature.k())
}
