//! The digest by which a message part is recognised again.

use dewbound_sounding::Digest;
use sha2::{Digest as _, Sha256};

/// SHA-256 over lines, each ended by one `\n` whatever the file used, so that a copy that only passed through another
/// system's line ends is the same part.
#[derive(Debug, Clone, Default)]
pub(crate) struct Lines(Sha256);

impl Lines {
    /// The next line.
    pub fn add(&mut self, line: &str) {
        self.0.update(line.as_bytes());
        self.0.update(b"\n");
    }

    /// The digest of all lines so far.
    pub fn digest(self) -> Digest {
        self.0.finalize().into()
    }
}

/// [`Lines`] at once.
pub(crate) fn of_lines<'a>(lines: impl IntoIterator<Item = &'a str>) -> Digest {
    let mut all = Lines::default();
    lines.into_iter().for_each(|line| all.add(line));
    all.digest()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Expected value from coreutils: `printf 'abc\n' | sha256sum`.
    #[test]
    fn is_sha_256_with_one_line_feed() {
        let mut lines = Lines::default();
        lines.add("abc");
        let hex: String = lines.digest().iter().map(|b| format!("{b:02x}")).collect();
        assert_eq!(
            hex,
            "edeaaff3f1774ad2888673770c6d64097e391bc362d7d6fb34982ddf0efd18cb"
        );
    }
}
