//! What the end-to-end tests share, and the generator of the demo soundings.

pub mod demo;
pub mod desk;
pub mod open_data;
pub mod reference;
pub mod residuals;
pub mod slow_parcel;
pub mod wire;
