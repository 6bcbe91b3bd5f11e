//! The digest by which a message part is recognised again.

use dewbound_sounding::Digest;
use sha2::{Digest as _, Sha256};

/// SHA-256 over lines, each ended by one `\n` whatever the file used, so that a copy that only passed through another
/// system's line ends is the same part.
pub(crate) fn of_lines<'a>(lines: impl IntoIterator<Item = &'a str>) -> Digest {
    let mut hasher = Sha256::new();
    for line in lines {
        hasher.update(line.as_bytes());
        hasher.update(b"\n");
    }
    hasher.finalize().into()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Expected value from coreutils: `printf 'abc\n' | sha256sum`.
    #[test]
    fn is_sha_256_with_one_line_feed() {
        let hex: String = of_lines(["abc"])
            .iter()
            .map(|b| format!("{b:02x}"))
            .collect();
        assert_eq!(
            hex,
            "edeaaff3f1774ad2888673770c6d64097e391bc362d7d6fb34982ddf0efd18cb"
        );
    }
}
