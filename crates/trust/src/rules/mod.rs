//! One rule a file; [`crate::RULES`] is the list.

mod early_end;
mod impossible_value;
mod level_order;
mod moisture_slope;
mod repair;
mod superadiabatic_aloft;
mod superadiabatic_contact;
mod surface_mismatch;
mod unsettled;
mod wet_thermometer;

pub use early_end::EarlyEnd;
pub use impossible_value::ImpossibleValue;
pub use level_order::LevelOrder;
pub(crate) use level_order::PASSES_APART;
pub use moisture_slope::MoistureSlope;
pub use superadiabatic_aloft::SuperadiabaticAloft;
pub use superadiabatic_contact::SuperadiabaticContact;
pub use surface_mismatch::{Refuted, RefutedSurface, SurfaceMismatch};
pub use wet_thermometer::WetThermometer;
