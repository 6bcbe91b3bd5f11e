//! What the end-to-end tests share, and the generator of the demo soundings.

pub mod demo;
