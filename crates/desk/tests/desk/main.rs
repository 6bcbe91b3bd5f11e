//! The window from outside: start-up as a process, tasks by role and label, pictures.

#![allow(clippy::unwrap_used, clippy::expect_used)]

mod glyphs;
mod keyboard;
mod numbers;
mod opening;
mod pictures;
mod pointer;
mod shown;
mod startup;
mod support;
mod winds;
