//! Dewbound: a desk for judging soundings.

use clap::Parser;
use std::process::ExitCode;

fn main() -> ExitCode {
    dewbound_desk::run(dewbound_desk::Args::parse())
}
