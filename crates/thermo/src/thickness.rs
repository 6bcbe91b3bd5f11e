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
/// The hypsometric equation, `Rd/g (Tv1 + Tv2)/2 ln(p1/p2)`; positive when `upper` has the lower pressure. Exact for that
/// profile; found against the US Standard Atmosphere 1976 at levels 250 m apart: 1e-5 of the height, all of it the
/// difference between its gas constant and 287.05.
///
/// ```
/// use dewbound_thermo::*;
/// // US Standard Atmosphere 1976: isothermal at 216.65 K from 11 km (226.32 hPa) to 20 km (54.749 hPa).
/// let level = |hpa| VirtualLevel {
///     pressure: Pressure::from_hpa(hpa),
///     virtual_temperature: Temperature::from_k(216.65),
/// };
/// assert!((thickness(level(226.32), level(54.749)) - 9000.0).abs() < 1.0);
/// ```
pub fn thickness(lower: VirtualLevel, upper: VirtualLevel) -> f64 {
    GAS_CONSTANT_DRY / GRAVITY
        * 0.5
        * (lower.virtual_temperature.k() + upper.virtual_temperature.k())
        * (lower.pressure.pa() / upper.pressure.pa()).ln()
}
