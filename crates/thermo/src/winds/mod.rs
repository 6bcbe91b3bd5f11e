//! Wind: a profile against height, and what is read from it.

mod composites;
mod integrals;
mod motion;
mod numbers;
mod profile;
mod vector;

pub use composites::*;
pub use motion::*;
pub use numbers::*;
pub use profile::*;
pub use vector::*;
