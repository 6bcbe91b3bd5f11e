//! Heights from pressure and virtual temperature.

use crate::{GAS_CONSTANT_DRY, GRAVITY, Pressure, Temperature};

/// A pressure and the virtual temperature there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VirtualLevel {
    /// Pressure.
    pub pressure: Pressure,
    /// Virtual temperature.
    pub virtual_temperature: Temperature,
}

/// Geopotential thickness (m) between two levels with virtual temperature linear in ln p between them.
///
/// `Rd/g (Tv1 + Tv2)/2 ln(p1/p2)`; positive when `upper` has the lower pressure.
pub fn thickness(lower: VirtualLevel, upper: VirtualLevel) -> f64 {
    GAS_CONSTANT_DRY / GRAVITY
        * 0.5
        * (lower.virtual_temperature.k() + upper.virtual_temperature.k())
        * (lower.pressure.pa() / upper.pressure.pa()).ln()
}
