//! Wind: a profile against height, and what is read from it.

mod composites;
mod numbers;
mod profile;
mod vector;

pub use composites::*;
pub use numbers::*;
pub use profile::*;
pub use vector::*;
