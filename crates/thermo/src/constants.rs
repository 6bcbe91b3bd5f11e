//! Physical constants of every number in this project.

/// Gas constant of dry air, J/(kg K).
pub const GAS_CONSTANT_DRY: f64 = 287.05;
/// Gas constant of water vapour, J/(kg K).
pub const GAS_CONSTANT_VAPOUR: f64 = 461.52;
/// Ratio of the gas constants of dry air and water vapour.
pub const EPSILON: f64 = GAS_CONSTANT_DRY / GAS_CONSTANT_VAPOUR;
/// Standard acceleration of gravity, m/s².
pub const GRAVITY: f64 = 9.80665;
/// 0 °C in K.
pub const ZERO_CELSIUS: f64 = 273.15;
/// Exponent of dry potential temperature, as in Bolton (1980).
pub const KAPPA: f64 = 0.2854;
/// Reference pressure of potential temperature, Pa.
pub const REFERENCE_PRESSURE: f64 = 100_000.0;
