//! Standard output and standard error.

use anyhow::{Context, Result};
use std::io::{self, BufWriter, StdoutLock, Write};

/// Standard output, buffered.
pub struct Output(BufWriter<StdoutLock<'static>>);

impl Output {
    /// Locks standard output.
    pub fn new() -> Self {
        Self(BufWriter::new(io::stdout().lock()))
    }

    /// Writes text and hands it on, so that a reader sees each sounding when it is ready.
    pub fn write(&mut self, text: &str) -> Result<()> {
        self.0
            .write_all(text.as_bytes())
            .and_then(|()| self.0.flush())
            .context("standard output")
    }

    /// Hands on what is left.
    pub fn finish(&mut self) -> Result<()> {
        self.0.flush().context("standard output")
    }
}

/// Says something on standard error. Nobody listening there is no reason to stop.
pub fn say(text: &str) {
    let _ = writeln!(io::stderr().lock(), "{text}");
}

/// The reader of our output has gone.
pub fn is_closed_pipe(error: &anyhow::Error) -> bool {
    error
        .downcast_ref::<io::Error>()
        .or_else(|| error.root_cause().downcast_ref::<io::Error>())
        .is_some_and(|error| error.kind() == io::ErrorKind::BrokenPipe)
}
