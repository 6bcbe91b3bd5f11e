//! By what a sounding is recognised: its ascent, and the exact message parts.

use crate::ledger::{SoundingKey, digests};
use crate::sounding::Sounding;
use sha2::{Digest as _, Sha256};
use std::collections::BTreeSet;

/// Ascent and message parts of one sounding.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Identity {
    /// Station, date and hour.
    pub key: SoundingKey,
    /// SHA-256 of each part, hex.
    pub parts: BTreeSet<String>,
}

impl Identity {
    /// Of a sounding.
    pub fn of(sounding: &Sounding) -> Self {
        Self {
            key: SoundingKey::of(sounding),
            parts: digests(&sounding.source.parts).into_iter().collect(),
        }
    }

    /// One digest for the whole, hex: that of the single part, or for several parts the SHA-256 over their digests
    /// (32 bytes each) in ascending order; `None` when there is no part.
    pub fn sha256(sounding: &Sounding) -> Option<String> {
        let parts = &sounding.source.parts;
        if parts.len() < 2 {
            return digests(parts).into_iter().next();
        }
        let mut hash = Sha256::new();
        for part in parts {
            hash.update(part);
        }
        Some(hex(&hash.finalize()))
    }

    /// A file name without extension that is safe everywhere and differs whenever ascent or parts differ.
    pub fn file_stem(&self) -> String {
        let safe: String = self
            .key
            .station
            .chars()
            .take(60)
            .map(|c| if c.is_ascii_alphanumeric() { c } else { '-' })
            .collect();
        let date = self
            .key
            .date
            .map_or_else(|| "no-date".to_owned(), |date| date.to_string());
        let hour = self
            .key
            .hour
            .map_or_else(|| "no-hour".to_owned(), |hour| format!("{hour:02}"));
        let mut hash = Sha256::new();
        hash.update(self.key.station.as_bytes());
        for part in &self.parts {
            hash.update([0]);
            hash.update(part.as_bytes());
        }
        let short: String = hex(&hash.finalize()).chars().take(12).collect();
        format!("{safe}--{date}--{hour}--{short}")
    }
}

fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn sounding(parts: &[[u8; 32]]) -> Sounding {
        let mut sounding = Sounding::default();
        sounding.station.text = Some("Ship/ÄÖ 7".to_owned());
        sounding.source.parts = parts.iter().copied().collect();
        sounding
    }

    #[test]
    fn one_part_is_its_own_digest_and_several_are_hashed_in_order() {
        assert_eq!(Identity::sha256(&sounding(&[])), None);
        assert_eq!(
            Identity::sha256(&sounding(&[[0xab; 32]])),
            Some("ab".repeat(32))
        );
        // SHA-256 of 64 zero-then-one bytes, from `(printf '\0%.0s' {1..32}; printf '\1%.0s' {1..32}) | sha256sum`.
        let two = Identity::sha256(&sounding(&[[1; 32], [0; 32]]));
        assert_eq!(
            two.as_deref(),
            Some("5c85955f709283ecce2b74f1b1552918819f390911816e7bb466805a38ab87f3")
        );
    }

    #[test]
    fn file_stems_are_safe_and_differ_with_the_parts() {
        let one = Identity::of(&sounding(&[[1; 32]])).file_stem();
        let other = Identity::of(&sounding(&[[2; 32]])).file_stem();
        assert_ne!(one, other);
        assert!(
            one.chars().all(|c| c.is_ascii_alphanumeric() || c == '-'),
            "{one}"
        );
    }
}
