//! Parcels and what becomes of them: CAPE, CIN, LCL, LFC, EL.

use crate::{Air, Environment, Lcl, Pressure, Temperature};

/// How a saturated parcel cools.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
#[non_exhaustive]
pub enum Method {
    /// The pseudo-adiabat of constant eq. 39 theta-e; condensate falls out.
    #[default]
    PseudoAdiabat,
}

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

/// Lifts a parcel from `start` through `environment`. Levels below the start are ignored.
///
/// `None` when the start lies above the top of the environment or is not finite.
pub fn lift(_environment: &Environment, _start: Air, _method: Method) -> Option<Ascent> {
    todo!()
}

/// Depth over which the mixed parcel is averaged unless told otherwise.
pub const MIXED_DEPTH: Pressure = Pressure::from_hpa(100.0);
/// Depth searched for the most unstable parcel.
pub const MOST_UNSTABLE_DEPTH: Pressure = Pressure::from_hpa(300.0);

/// The mixed parcel: integral means over p of theta and w in the lowest `depth`, lifted from the bottom's pressure.
pub fn mixed_start(_environment: &Environment, _depth: Pressure) -> Option<Air> {
    todo!()
}

/// The most unstable parcel: the level of largest theta-e in the lowest `depth`, with its index.
///
/// `candidate` says which levels may be chosen (levels inserted by interpolation are not).
pub fn most_unstable_start(
    _environment: &Environment,
    _depth: Pressure,
    _candidate: impl Fn(usize) -> bool,
) -> Option<(usize, Air)> {
    todo!()
}

/// Temperature and virtual temperature of a rising parcel.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ParcelState {
    /// Pressure.
    pub pressure: Pressure,
    /// Temperature.
    pub temperature: Temperature,
    /// Virtual temperature.
    pub virtual_temperature: Temperature,
}

/// The parcel's path at the given pressures (any order; those below the start are left out), for drawing.
pub fn parcel_path(_start: Air, _method: Method, _pressures: &[Pressure]) -> Vec<ParcelState> {
    todo!()
}
