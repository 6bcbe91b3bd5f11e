//! The saturated ascent from its heat balance, for the processes that aren't eq. 39.
//!
//! For a kilogram of dry air, z = -ln p, p_d = p - e, g = d ln e / dT, r_v = eps e / p_d and so
//! dr_v = r_v (p/p_d) (g dT + dz):
//!
//! `cp dT + L dr_v + L_f f' r_c dT = V dp`, `V = Rd T / p_d`, hence
//!
//! `dT/dz = -(p/p_d) (Rd T + L r_v) / (cp + L_f f' r_c + L r_v (p/p_d) g)`.
//!
//! - L = L_v + (1 - f) L_f: what a kilogram of vapour gives off, f = liquid share (see [`crate::condensate`]);
//!   f' = df/dT, r_c = kept condensate, which freezes as f falls.
//! - cp = cpd + r_v cpv, and f r_c cl + (1 - f) r_c ci with condensate kept (r_c = r_t - r_v).
//! - L_v and L_f change with temperature by Kirchhoff's equation, with constant heat capacities.
//!
//! Without ice and with Clausius and Clapeyron's g these are the pseudo-adiabatic and the reversible moist-adiabatic
//! lapse rate of the AMS Glossary of Meteorology (from memory). Heat capacities and latent heats: Emanuel (1994),
//! Atmospheric Convection (from memory). Here g is the derivative of the saturation formula itself.

use crate::condensate::Branch;
use crate::numeric::zero_between;
use crate::path::Parcel;
use crate::saturation::virtual_temperature;
use crate::{Condensate, EPSILON, GAS_CONSTANT_DRY, Process, ZERO_CELSIUS};

/// Heat capacity of dry air at constant pressure, J/(kg K).
pub(crate) const DRY_AIR: f64 = 1005.7;
/// Heat capacity of vapour at constant pressure, J/(kg K).
pub(crate) const VAPOUR: f64 = 1870.0;
/// Heat capacity of water, J/(kg K).
pub(crate) const WATER: f64 = 4190.0;
/// Heat capacity of ice, J/(kg K).
pub(crate) const ICE: f64 = 2106.0;
/// Latent heat of vaporisation at 0 °C, J/kg.
const VAPORISATION: f64 = 2.501e6;
/// Latent heat of fusion at 0 °C, J/kg.
const FUSION: f64 = 3.337e5;
/// Vapour is never counted as a larger share of the pressure than this: there is always dry air.
const MOST_VAPOUR: f64 = 0.9;
/// A march is never longer than this many nodes: far above, all that is left is a dry adiabat.
const MOST_NODES: usize = 20_000;

/// Latent heat of vaporisation, J/kg.
#[inline]
pub(crate) fn vaporisation(t: f64) -> f64 {
    VAPORISATION + (VAPOUR - WATER) * (t - ZERO_CELSIUS)
}

/// Latent heat of fusion, J/kg.
#[inline]
fn fusion(t: f64) -> f64 {
    FUSION + (WATER - ICE) * (t - ZERO_CELSIUS)
}

/// A saturated process.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Lapse {
    pub condensate: Condensate,
    /// Total water, kg/kg of dry air, when condensate is kept.
    pub kept: Option<f64>,
}

/// Saturated air on its way.
#[derive(Debug, Clone, Copy)]
pub(crate) struct State {
    /// dT/dz, K.
    pub slope: f64,
    /// Mixing ratio of vapour.
    pub vapour: f64,
    /// Its dz derivative along the way.
    pub vapour_slope: f64,
}

impl Lapse {
    /// Slope of temperature and what belongs to it.
    #[inline]
    pub fn state(&self, branch: Branch, t: f64, p: f64) -> State {
        let phase = branch.phase(t);
        let dry = p - phase.e.min(MOST_VAPOUR * p);
        let vapour = EPSILON * (p - dry) / dry;
        let wide = p / dry;
        let latent = vaporisation(t) + (1.0 - phase.liquid) * fusion(t);
        let mut heat = DRY_AIR + vapour * VAPOUR;
        if let Some(total) = self.kept {
            let condensed = (total - vapour).max(0.0);
            heat += condensed * (phase.liquid * WATER + (1.0 - phase.liquid) * ICE)
                + condensed * phase.liquid_per_kelvin * fusion(t);
        }
        let released = latent * vapour;
        let slope =
            -wide * (GAS_CONSTANT_DRY * t + released) / (heat + released * wide * phase.dln_e);
        State {
            slope,
            vapour,
            vapour_slope: vapour * wide * (phase.dln_e * slope + 1.0),
        }
    }

    /// Virtual temperature, or density temperature with condensate kept: T (1 + r_v/eps) / (1 + r_t), Emanuel (1994)
    /// eq. 4.3.6 (from memory).
    #[inline]
    pub fn virtual_temperature(&self, t: f64, vapour: f64) -> f64 {
        match self.kept {
            Some(total) => t * (1.0 + vapour / EPSILON) / (1.0 + total),
            None => virtual_temperature(t, vapour),
        }
    }

    /// d Tv / dz where temperature is `t`.
    #[inline]
    pub fn virtual_slope(&self, t: f64, state: &State) -> f64 {
        let per_kelvin = self.virtual_temperature(1.0, state.vapour);
        let per_vapour = match self.kept {
            Some(total) => 1.0 / (EPSILON * (1.0 + total)),
            None => {
                let share = 1.0 / (1.0 + state.vapour);
                (1.0 / EPSILON - 1.0) * share * share
            }
        };
        per_kelvin * state.slope + t * per_vapour * state.vapour_slope
    }

    /// One step of the classical Runge-Kutta method in z.
    #[inline]
    fn step(&self, branch: Branch, z: f64, t: f64, first: f64, h: f64) -> f64 {
        let half = (-0.5 * h).exp();
        let p0 = (-z).exp();
        let (p1, p2) = (p0 * half, p0 * half * half);
        let slope = |t: f64, p: f64| self.state(branch, t, p).slope;
        let second = slope(t + 0.5 * h * first, p1);
        let third = slope(t + 0.5 * h * second, p1);
        let fourth = slope(t + h * third, p2);
        t + h / 6.0 * (first + 2.0 * (second + third) + fourth)
    }

    /// The z at which the way from (z, t) comes down to temperature `limit`: the same method in T.
    fn height_of(&self, branch: Branch, mut z: f64, mut t: f64, limit: f64) -> f64 {
        const STEPS: u8 = 2;
        let h = (limit - t) / f64::from(STEPS);
        let per_kelvin = |t: f64, z: f64| 1.0 / self.state(branch, t, (-z).exp()).slope;
        for _ in 0..STEPS {
            let first = per_kelvin(t, z);
            let second = per_kelvin(t + 0.5 * h, z + 0.5 * h * first);
            let third = per_kelvin(t + 0.5 * h, z + 0.5 * h * second);
            let fourth = per_kelvin(t + h, z + h * third);
            z += h / 6.0 * (first + 2.0 * (second + third) + fourth);
            t += h;
        }
        z
    }
}

/// A point of an ascent at which it was computed.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Node {
    pub z: f64,
    pub t: f64,
    /// State by the branch that holds below this point.
    pub below: State,
    /// State by the branch that holds above it. The two differ at 0 °C and -20 °C alone.
    pub above: State,
    /// Whether the branch changes here.
    pub kink: bool,
}

/// A saturated ascent from its condensation level up.
#[derive(Debug, Clone)]
pub(crate) struct March {
    pub lapse: Lapse,
    /// z rises from node to node; the first is the start.
    pub nodes: Vec<Node>,
}

impl March {
    /// Nodes `spacing` apart, and at the kinks, from the LCL to at least `z_end`, in steps of no more than `widest`.
    /// `None` for the process that isn't a lapse rate.
    pub fn new(
        parcel: &Parcel,
        process: Process,
        z_end: f64,
        spacing: f64,
        widest: f64,
    ) -> Option<Self> {
        let p = parcel.lcl.pressure.pa();
        let (condensate, keeps) = match process {
            Process::ThetaE => return None,
            Process::Direct(condensate) => (condensate, false),
            Process::Reversible(condensate) => (condensate, true),
        };
        let (t, total) = start(condensate, parcel.lcl.temperature.k(), p);
        let lapse = Lapse {
            condensate,
            kept: keeps.then_some(total),
        };
        let mut branch = Branch::at(condensate, t);
        let mut here = node(&lapse, branch, parcel.z_lcl, t);
        let mut nodes = vec![here];
        let count = ((z_end - parcel.z_lcl) / spacing).ceil();
        for k in 1..=(count.max(1.0) as usize).min(MOST_NODES) {
            let head = parcel.z_lcl + k as f64 * spacing;
            while here.z < head {
                let left = head - here.z;
                let steps = (left / widest).ceil().max(1.0);
                let h = left / steps;
                let last = steps < 1.5;
                let t = lapse.step(branch, here.z, here.t, here.above.slope, h);
                if let Some((limit, next)) = branch.limit(condensate)
                    && t <= limit
                {
                    let z = lapse.height_of(branch, here.z, here.t, limit).min(head);
                    let p = (-z).exp();
                    here = Node {
                        z,
                        t: limit,
                        below: lapse.state(branch, limit, p),
                        above: lapse.state(next, limit, p),
                        kink: true,
                    };
                    branch = next;
                    nodes.push(here);
                    continue;
                }
                here = node(&lapse, branch, if last { head } else { here.z + h }, t);
            }
            // A kink at the node itself is that node already.
            if nodes.last().is_some_and(|last| last.z < head) {
                nodes.push(here);
            }
        }
        Some(Self { lapse, nodes })
    }

    /// Temperature and mixing ratio of vapour at z, from the start up; above the last node a dry adiabat.
    pub fn at(&self, z: f64) -> (f64, f64) {
        let above = self.nodes.partition_point(|node| node.z <= z);
        let Some(foot) = self.nodes.get(above.saturating_sub(1)) else {
            return (0.0, 0.0);
        };
        let Some(head) = self.nodes.get(above) else {
            // No vapour is left here: a dry adiabat.
            let exponent = foot.above.slope / foot.t;
            return (foot.t * (exponent * (z - foot.z)).exp(), foot.above.vapour);
        };
        let h = head.z - foot.z;
        let s = (z - foot.z) / h;
        let (a, b) = (foot.above.slope * h, head.below.slope * h);
        let rise = head.t - foot.t;
        let t = foot.t + s * (a + s * (3.0 * rise - 2.0 * a - b + s * (a + b - 2.0 * rise)));
        let branch = Branch::at(self.lapse.condensate, t);
        (t, self.lapse.state(branch, t, (-z).exp()).vapour)
    }

    /// The z at which the slope jumps.
    pub fn kinks(&self) -> Vec<f64> {
        let kinks = self.nodes.iter().filter(|node| node.kink);
        kinks.map(|node| node.z).collect()
    }
}

fn node(lapse: &Lapse, branch: Branch, z: f64, t: f64) -> Node {
    let state = lapse.state(branch, t, (-z).exp());
    Node {
        z,
        t,
        below: state,
        above: state,
        kink: false,
    }
}

/// Temperature and total water at the start: air saturated over water, the LCL being what it is.
///
/// Below 0 °C that is more vapour than there can be over the mixture of water and ice. The excess condenses at once, at
/// constant pressure and enthalpy: `(cpd + r_v cpv) (T - T_L) = (r_v - r_v,mix(T)) (L_v + (1 - f) L_f)`,
/// up to 0.9 K (300 hPa, -20 °C).
fn start(condensate: Condensate, t_lcl: f64, p: f64) -> (f64, f64) {
    let lapse = Lapse {
        condensate,
        kept: None,
    };
    let total = lapse.state(Branch::Water, t_lcl, p).vapour;
    if Branch::at(condensate, t_lcl) == Branch::Water {
        return (t_lcl, total);
    }
    let missing = |t: f64| {
        let branch = Branch::at(condensate, t);
        let frozen = 1.0 - branch.phase(t).liquid;
        let excess = total - lapse.state(branch, t, p).vapour;
        (DRY_AIR + total * VAPOUR) * (t - t_lcl) - excess * (vaporisation(t) + frozen * fusion(t))
    };
    let (low, high) = (missing(t_lcl), missing(ZERO_CELSIUS));
    if low >= 0.0 || high <= 0.0 {
        return (t_lcl, total);
    }
    (zero_between(t_lcl, low, ZERO_CELSIUS, high, missing), total)
}
