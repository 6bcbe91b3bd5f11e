//! FM 35 TEMP text: parts A to D, with PILOT-type wind parts (PPAA to PPDD) merged in.

use crate::{Loaded, ReadOptions};

/// Whether the text looks like TEMP bulletins.
pub fn recognises(_text: &str) -> bool {
    todo!()
}

/// Reads every bulletin in a text. `name` is the file's name (dates may be taken from it).
pub fn read(_name: &str, _text: &str, _options: &ReadOptions) -> Loaded {
    todo!()
}
