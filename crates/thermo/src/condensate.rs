//! Water, ice, and the mixture of both between 0 °C and -20 °C.
//!
//! f = liquid share of the condensate: 1 at 0 °C and above, 0 at -20 °C and below, linear in between. The saturation
//! vapour pressure is mixed by the same share. Such a linear ramp is usual in models (e.g. Bryan & Fritsch 2004, MWR 132;
//! Peters, Mulholland & Chavas 2022, JAS 79; limits differ; from memory). The limits 0 and -20 °C: common practice,
//! no source.

use crate::elementary::exp;
use crate::saturation::{E0, exponent_and_slope};
use crate::{Condensate, ZERO_CELSIUS};

/// Temperature from which downward all condensate is ice, K.
const ALL_ICE: f64 = ZERO_CELSIUS - 20.0;
/// Factor in the exponent over ice, WMO-No. 8, annex 4.B (from memory).
const A_ICE: f64 = 22.46;
/// Offset in that exponent, K.
const B_ICE: f64 = 272.62;

/// Which of the three formulas holds. Each is smooth, and may be evaluated a little beyond its limits: an integration
/// that stays on one branch up to a limit meets no kink.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Branch {
    Water,
    Mixture,
    Ice,
}

/// Saturation at one temperature.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Phase {
    /// Saturation vapour pressure, Pa.
    pub e: f64,
    /// d ln e / dT, 1/K.
    pub dln_e: f64,
    /// Liquid share of the condensate.
    pub liquid: f64,
    /// Its derivative with temperature, 1/K.
    pub liquid_per_kelvin: f64,
}

impl Branch {
    /// The branch that holds from this temperature downward.
    pub fn at(condensate: Condensate, t: f64) -> Self {
        match condensate {
            Condensate::Water => Self::Water,
            Condensate::WaterAndIce if t > ZERO_CELSIUS => Self::Water,
            Condensate::WaterAndIce if t > ALL_ICE => Self::Mixture,
            Condensate::WaterAndIce => Self::Ice,
        }
    }

    /// The temperature (K) down to which this branch holds, and the branch below it.
    pub fn limit(self, condensate: Condensate) -> Option<(f64, Self)> {
        match (condensate, self) {
            (Condensate::WaterAndIce, Self::Water) => Some((ZERO_CELSIUS, Self::Mixture)),
            (Condensate::WaterAndIce, Self::Mixture) => Some((ALL_ICE, Self::Ice)),
            _ => None,
        }
    }

    /// Saturation by this branch.
    #[inline]
    pub fn phase(self, t: f64) -> Phase {
        match self {
            Self::Water => {
                let (exponent, dln_e) = exponent_and_slope(t);
                Phase {
                    e: E0 * exp(exponent),
                    dln_e,
                    liquid: 1.0,
                    liquid_per_kelvin: 0.0,
                }
            }
            Self::Ice => {
                let (e, dln_e) = over_ice(t);
                Phase {
                    e,
                    dln_e,
                    liquid: 0.0,
                    liquid_per_kelvin: 0.0,
                }
            }
            Self::Mixture => {
                let (over_ice, dln_ice) = over_ice(t);
                let (exponent, dln_water) = exponent_and_slope(t);
                let over_water = E0 * exp(exponent);
                let per_kelvin = 1.0 / (ZERO_CELSIUS - ALL_ICE);
                let liquid = (t - ALL_ICE) * per_kelvin;
                let ice = 1.0 - liquid;
                let e = liquid * over_water + ice * over_ice;
                let slope = per_kelvin * (over_water - over_ice)
                    + liquid * over_water * dln_water
                    + ice * over_ice * dln_ice;
                Phase {
                    e,
                    dln_e: slope / e,
                    liquid,
                    liquid_per_kelvin: per_kelvin,
                }
            }
        }
    }
}

/// Saturation vapour pressure over ice (Pa) and its logarithmic derivative (1/K).
#[inline]
fn over_ice(t: f64) -> (f64, f64) {
    // A kelvin from the pole, where vapour has long vanished.
    let above_pole = (t - ZERO_CELSIUS + B_ICE).max(1.0);
    let exponent = A_ICE * (t - ZERO_CELSIUS) / above_pole;
    (
        E0 * exp(exponent),
        A_ICE * B_ICE / (above_pole * above_pole),
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Temperature, saturation_vapour_pressure, saturation_vapour_pressure_over_ice};

    #[test]
    fn branches_meet_at_their_limits_and_end_in_the_pure_phases() {
        for (t, upper, lower) in [
            (ZERO_CELSIUS, Branch::Water, Branch::Mixture),
            (ALL_ICE, Branch::Mixture, Branch::Ice),
        ] {
            let (a, b) = (upper.phase(t), lower.phase(t));
            assert!((a.e / b.e - 1.0).abs() < 1e-12 && (a.liquid - b.liquid).abs() < 1e-12);
            assert_eq!(upper.limit(Condensate::WaterAndIce), Some((t, lower)));
            assert_eq!(Branch::at(Condensate::WaterAndIce, t), lower);
            assert_eq!(Branch::at(Condensate::WaterAndIce, t + 1e-9), upper);
        }
        for t in [200.0, 240.0, 253.0] {
            let there = Temperature::from_k(t);
            let (water, ice) = (Branch::Water.phase(t).e, Branch::Ice.phase(t).e);
            assert!((water / saturation_vapour_pressure(there).pa() - 1.0).abs() < 1e-12);
            assert!((ice / saturation_vapour_pressure_over_ice(there).pa() - 1.0).abs() < 1e-12);
        }
        assert_eq!(Branch::Water.limit(Condensate::Water), None);
    }

    #[test]
    fn derivatives_are_those_of_the_formulas() {
        for branch in [Branch::Water, Branch::Mixture, Branch::Ice] {
            for t in [215.0, 254.0, 263.0, 272.0, 290.0] {
                let d = 1e-3;
                let (a, b) = (branch.phase(t - d), branch.phase(t + d));
                let phase = branch.phase(t);
                assert!((phase.dln_e - (b.e / a.e).ln() / (2.0 * d)).abs() < 1e-8);
                let share = (b.liquid - a.liquid) / (2.0 * d);
                assert!((phase.liquid_per_kelvin - share).abs() < 1e-9);
            }
        }
    }
}
