//! Parcels and what becomes of them: CAPE, CIN, LCL, LFC, EL.

use crate::bare::Surroundings;
use crate::environment::coordinate;
use crate::path::{Cubic, Parcel};
use crate::saturation::virtual_temperature;
use crate::scan::{Run, runs};
use crate::{Air, Environment, GAS_CONSTANT_DRY, Lcl, Method, Pressure, Temperature, exact};

/// A layer above the LCL in which the parcel is warmer (virtually) than its surroundings.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BuoyantLayer {
    /// Base.
    pub bottom: Pressure,
    /// Top.
    pub top: Pressure,
    /// Area, J/kg, > 0.
    pub area: f64,
}

/// A parcel lifted through an environment.
///
/// - Below the LCL the parcel keeps its mixing ratio w and its potential temperature with the exponent 0.2854 (1 - 0.28 w);
///   above it, it follows the [`Method`], with the virtual temperature of its saturation mixing ratio. Eq. 15 doesn't quite
///   meet saturation at the LCL: virtual temperature steps by less than 0.05 K there, by more where ice forms at once
///   ([`Condensate::WaterAndIce`](crate::Condensate::WaterAndIce)).
/// - Area = -Rd times the integral of (virtual temperature of the parcel minus that of the environment) over ln p;
///   virtual temperature on both sides as recommended by Doswell & Rasmussen (1994, WAF 9, 625-629).
/// - CAPE is the sum of all positive area above the LCL. The EL is the top of the highest buoyant layer.
/// - The LFC is the base of the buoyant layer of largest area, which is the LCL when the parcel is buoyant from there
///   on. A small layer at the LCL under a cap doesn't make the LFC.
/// - CIN is all negative area from the start to the LFC. Positive area below the LCL counts for nothing.
/// - Crossings are roots of the interpolated profile, not levels. Areas below 1e-4 J/kg are rounding: they make no layer
///   and split none.
#[derive(Debug, Clone, PartialEq)]
pub struct Ascent {
    /// Where the parcel starts.
    pub start: Air,
    /// Its condensation level.
    pub lcl: Lcl,
    /// Its equivalent potential temperature.
    pub theta_e: Temperature,
    /// CAPE, J/kg, >= 0. A lower limit when `at_least`.
    pub cape: f64,
    /// CIN, J/kg, <= 0; `None`: no free convection.
    pub cin: Option<f64>,
    /// Level of free convection: base of the buoyant layer of largest area.
    pub lfc: Option<Pressure>,
    /// Equilibrium level: top of the highest buoyant layer; `None` also when the parcel is still buoyant at the top.
    pub el: Option<Pressure>,
    /// CAPE is a lower limit: still buoyant at the top, or the profile ends at a pressure above 200 hPa.
    pub at_least: bool,
    /// Every buoyant layer above the LCL, from the lowest.
    pub buoyant: Vec<BuoyantLayer>,
}

/// A profile that ends at a pressure above this can't show the whole of CAPE.
const TOP_NEEDED: Pressure = Pressure::from_hpa(200.0);
/// Areas below this (J/kg) are rounding, of values or of the tabulated path: they neither make a layer nor split one.
const NEGLIGIBLE: f64 = 1e-4;

/// Lifts a parcel from `start` through `environment`. Levels below the start are ignored; from a start below the bottom,
/// areas are counted from the bottom up. A dew point above the temperature counts as saturation.
///
/// The parcel's path is a cubic through nodes every 0.1 in ln p, within 0.2 mK of the exact one. For the default process the
/// nodes are interpolated in a table of pseudo-adiabats that all parcels share (theta-e 230..430 K, 1100..1 hPa; outside it
/// a parcel solves for nodes of its own); a lapse rate is integrated from node to node. CAPE and CIN are within 0.01 % (or 0.01 J/kg) of
/// [`lift_exactly`](crate::lift_exactly) and don't depend on how many levels the interpolated profile is cut into (1e-6).
///
/// `None` when the start lies above the top of the environment or is not finite.
pub fn lift(environment: &Environment, start: Air, method: Method) -> Option<Ascent> {
    Lifted::of(environment, start, method).map(|lifted| lifted.ascent)
}

/// An ascent with the parcel's path still at hand: for parts of its areas, and for the parcel at a level.
#[derive(Debug, Clone)]
pub struct Lifted<'e> {
    /// The numbers of the whole ascent.
    pub ascent: Ascent,
    surroundings: Surroundings<'e>,
    method: Method,
    /// What counts of the parcel above the LCL; `None` when that lies above the top.
    saturated: Option<Cubic>,
}

impl<'e> Lifted<'e> {
    /// Lifts a parcel, as [`lift`] does.
    pub fn of(environment: &'e Environment, start: Air, method: Method) -> Option<Self> {
        let parcel = Parcel::new(start)?;
        if parcel.start.pressure < environment.top() {
            return None;
        }
        let (z_bottom, z_top) = environment.z_range();
        let z_from = parcel.z_start.max(z_bottom);
        let z_lcl = parcel.z_lcl.max(z_from);
        let surroundings = Surroundings::of(environment, method.buoyancy);
        let (column, levels) = (surroundings.column(), surroundings.levels());
        let dry = parcel.dry(method.buoyancy, z_top);
        let below = runs(&dry, column, levels, z_from, z_lcl.min(z_top));
        let saturated = (z_lcl < z_top).then(|| parcel.saturated(method, z_top));
        let mut above = Vec::new();
        if let Some(path) = &saturated {
            // A scan may take it that the path is smooth.
            let kinks = path.kinks().filter(|z| z_lcl < *z && *z < z_top);
            let mut foot = z_lcl;
            for head in kinks.chain([z_top]) {
                above.extend(runs(path, column, levels, foot, head));
                foot = head;
            }
        }
        Some(Self {
            ascent: assemble(environment, &parcel, &below, above),
            surroundings,
            method,
            saturated,
        })
    }

    /// The parcel at a pressure, by exact solution; `None` below its start.
    pub fn parcel_at(&self, pressure: Pressure) -> Option<ParcelState> {
        parcel_path(self.ascent.start, self.method, &[pressure])
            .first()
            .copied()
    }

    /// The part of CAPE between two pressures (`lower` > `upper`), J/kg: positive area above the LCL. Zero where there is
    /// none, and where the layer is empty.
    pub fn cape_between(&self, lower: Pressure, upper: Pressure) -> f64 {
        let Some(path) = &self.saturated else {
            return 0.0;
        };
        let column = self.surroundings.column();
        let levels = self.surroundings.levels();
        let integral = |pressure: Pressure| {
            let z = coordinate(pressure.pa());
            path.integral(z) - column.integral_in(&levels, column.step_at(z), z)
        };
        let parts = self.ascent.buoyant.iter().map(|layer| {
            let bottom = Pressure::from_pa(layer.bottom.pa().min(lower.pa()));
            let top = Pressure::from_pa(layer.top.pa().max(upper.pa()));
            if bottom == layer.bottom && top == layer.top {
                layer.area
            } else if bottom > top {
                (GAS_CONSTANT_DRY * (integral(top) - integral(bottom))).max(0.0)
            } else {
                0.0
            }
        });
        parts.sum::<f64>() + 0.0
    }
}

/// The numbers of an ascent from its runs below and above the LCL.
pub(crate) fn assemble(
    environment: &Environment,
    parcel: &Parcel,
    below: &[Run],
    above: Vec<Run>,
) -> Ascent {
    let (_, z_top) = environment.z_range();
    let above = merged(above);
    let last = above.last().or(below.last());
    let buoyant_at_top =
        last.is_some_and(|run| run.positive && GAS_CONSTANT_DRY * run.area >= NEGLIGIBLE);
    let pressure_at = |z: f64| {
        if z == parcel.z_lcl {
            parcel.lcl.pressure
        } else if z == z_top {
            environment.top()
        } else {
            Pressure::from_pa((-z).exp())
        }
    };

    let mut negative: f64 = below
        .iter()
        .filter(|run| !run.positive)
        .map(|run| run.area)
        .sum();
    let mut buoyant = Vec::new();
    // Base of the largest layer so far, its area, and the negative area beneath it.
    let mut largest: Option<(Pressure, f64, f64)> = None;
    for run in &above {
        if !run.positive {
            negative += run.area;
            continue;
        }
        let area = GAS_CONSTANT_DRY * run.area;
        if area < NEGLIGIBLE {
            continue;
        }
        let layer = BuoyantLayer {
            bottom: pressure_at(run.bottom),
            top: pressure_at(run.top),
            area,
        };
        if largest.is_none_or(|(_, other, _)| area > other) {
            largest = Some((layer.bottom, area, negative));
        }
        buoyant.push(layer);
    }

    Ascent {
        start: parcel.start,
        lcl: parcel.lcl,
        theta_e: Temperature::from_k(parcel.ln_theta_e.exp()),
        // A sum of nothing is -0.0 in Rust; adding zero keeps that from being shown.
        cape: buoyant.iter().map(|layer| layer.area).sum::<f64>() + 0.0,
        cin: largest.map(|(_, _, negative)| {
            let cin = GAS_CONSTANT_DRY * negative;
            if cin < -NEGLIGIBLE { cin } else { 0.0 }
        }),
        lfc: largest.map(|(bottom, _, _)| bottom),
        el: if buoyant_at_top {
            None
        } else {
            buoyant.last().map(|layer| layer.top)
        },
        at_least: buoyant_at_top || environment.top() > TOP_NEEDED,
        buoyant,
    }
}

/// Runs with those of negligible area given to their neighbour, so that rounding doesn't split a layer.
fn merged(runs: Vec<Run>) -> Vec<Run> {
    let mut kept: Vec<Run> = Vec::with_capacity(runs.len());
    let mut pending: Option<Run> = None;
    for mut run in runs {
        if let Some(small) = pending.take() {
            run.bottom = small.bottom;
            run.area += small.area;
        }
        let negligible = GAS_CONSTANT_DRY * run.area.abs() < NEGLIGIBLE;
        match kept.last_mut() {
            Some(last) if negligible || last.positive == run.positive => {
                last.top = run.top;
                last.area += run.area;
            }
            None if negligible => pending = Some(run),
            _ => kept.push(run),
        }
    }
    kept.extend(pending);
    kept
}

/// Temperature and virtual temperature of a rising parcel.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ParcelState {
    /// Pressure.
    pub pressure: Pressure,
    /// Temperature.
    pub temperature: Temperature,
    /// Virtual temperature; with condensate kept, the density temperature.
    pub virtual_temperature: Temperature,
}

/// Step of an integrated path for drawing, in z; its error is below 1e-6 K.
const DRAWN: f64 = 0.01;

/// The parcel's path at the given pressures (any order; those below the start are left out), for drawing.
///
/// Temperature is that of the process, whatever counts as buoyancy; with condensate kept, the virtual temperature is the
/// density temperature.
pub fn parcel_path(start: Air, method: Method, pressures: &[Pressure]) -> Vec<ParcelState> {
    let Some(parcel) = Parcel::new(start) else {
        return Vec::new();
    };
    let reached = |p: f64| p >= f64::MIN_POSITIVE && p <= parcel.start.pressure.pa();
    let highest = pressures
        .iter()
        .map(|pressure| pressure.pa())
        .filter(|p| reached(*p))
        .fold(f64::INFINITY, f64::min);
    let saturated = exact::Saturated::of(&parcel, method.process, coordinate(highest), DRAWN);
    let state = |pressure: &Pressure| {
        let p = pressure.pa();
        if !reached(p) {
            return None;
        }
        let z = coordinate(p);
        let (t, tv) = if z < parcel.z_lcl {
            let t = parcel.dry_temperature(z);
            (t, virtual_temperature(t, parcel.w))
        } else {
            saturated.at(z, p)
        };
        Some(ParcelState {
            pressure: *pressure,
            temperature: Temperature::from_k(t),
            virtual_temperature: Temperature::from_k(tv),
        })
    };
    pressures.iter().filter_map(state).collect()
}
