//! Random profiles.
#![allow(dead_code, clippy::unwrap_used, clippy::expect_used)]

pub mod profiles;
