//! Dewbound on the command line: weighs soundings without a window.
//!
//! Data go to standard output, talk to standard error. Exit codes: 0 all weighed, 1 a file could not be read or a
//! sounding not weighed, 2 wrong usage.

mod arguments;
mod explain;
mod output;
mod rules;
mod weigh;

use arguments::{Arguments, Task};
use clap::Parser;
use output::Output;
use std::process::ExitCode;

fn main() -> ExitCode {
    // clap ends the process itself on wrong usage, with exit code 2.
    let arguments = Arguments::parse();
    let mut output = Output::new();
    let result = match arguments.task {
        Task::Weigh(options) => weigh::run(&options, &mut output),
        Task::Explain(options) => explain::run(&options, &mut output),
        Task::Rules { json } => rules::run(json, &mut output).map(|()| true),
    };
    match result.and_then(|all| output.finish().map(|()| all)) {
        Ok(true) => ExitCode::SUCCESS,
        Ok(false) => ExitCode::from(1),
        // Whoever read has had enough; that is no error.
        Err(error) if output::is_closed_pipe(&error) => ExitCode::SUCCESS,
        Err(error) => {
            output::say(&format!("dewbound-cli: {error:#}"));
            ExitCode::from(1)
        }
    }
}
