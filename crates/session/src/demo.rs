//! Invented demonstration soundings, built into the program.

/// One embedded file.
#[derive(Debug, Clone, Copy)]
pub(crate) struct DemoFile {
    /// File name.
    pub name: &'static str,
    /// Content.
    pub bytes: &'static [u8],
}

/// The files of `demo-soundings/`, the worst story first.
pub(crate) const FILES: &[DemoFile] = &[];
