//! The tray as text, where no window can be had.

use crate::Args;
use crate::config::config;
use dewbound_session::{Session, report};
use std::io::Write as _;
use std::process::ExitCode;

/// Prints the sentence that says why there is no window, then the tray.
pub(crate) fn print_tray(args: &Args, sentence: &str) -> ExitCode {
    let mut session = Session::new(config(args));
    if args.paths.is_empty() {
        session.open_demo();
    } else {
        session.open_paths(args.paths.clone());
    }
    session.wait();
    for message in session.messages() {
        eprintln!("{}", message.line());
    }
    let text = format!("{sentence}\n\n{}", report::tray(&session));
    // A reader that has seen enough and closed the pipe is no error.
    let mut out = std::io::stdout().lock();
    let _ = out.write_all(text.as_bytes()).and_then(|()| out.flush());
    ExitCode::SUCCESS
}
