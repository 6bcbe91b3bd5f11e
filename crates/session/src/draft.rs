//! Unfinished work, kept per sounding across restarts until it is decided.

use crate::{Document, Identity};
use serde::{Deserialize, Serialize};
use std::collections::BTreeSet;
use std::io;
use std::path::{Path, PathBuf};

/// A draft as it stands on the disk.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
struct DraftFile {
    schema: u32,
    /// Marks the file for whoever finds it.
    state: String,
    station: String,
    parts: BTreeSet<String>,
    document: Document,
}

const SCHEMA: u32 = 1;

/// Where the draft of a sounding is kept.
pub(crate) fn path(folder: &Path, identity: &Identity) -> PathBuf {
    folder.join(format!("{}.json", identity.file_stem()))
}

/// Content of the file.
pub(crate) fn encode(
    identity: &Identity,
    document: &Document,
) -> Result<String, serde_json::Error> {
    let mut text = serde_json::to_string_pretty(&DraftFile {
        schema: SCHEMA,
        state: "draft: not decided".to_owned(),
        station: identity.key.station.clone(),
        parts: identity.parts.clone(),
        document: document.clone(),
    })?;
    text.push('\n');
    Ok(text)
}

/// The draft of a sounding, if there is one. `Err` is a sentence about a draft that can't be used (and is left as it is).
pub(crate) fn load(folder: &Path, identity: &Identity) -> Result<Option<Document>, String> {
    let path = path(folder, identity);
    let text = match std::fs::read_to_string(&path) {
        Ok(text) => text,
        Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(None),
        Err(error) => {
            return Err(format!(
                "the draft {} can't be read: {error}",
                path.display()
            ));
        }
    };
    let file: DraftFile = serde_json::from_str(&text).map_err(|error| {
        format!(
            "the draft {} is not a draft this program can read ({error}); the sounding is shown as received",
            path.display()
        )
    })?;
    if file.schema != SCHEMA {
        return Err(format!(
            "the draft {} has schema {}, this program reads {SCHEMA}; the sounding is shown as received",
            path.display(),
            file.schema
        ));
    }
    if file.parts != identity.parts {
        return Err(format!(
            "the draft {} was made on other data; the sounding is shown as received",
            path.display()
        ));
    }
    Ok(Some(file.document))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::SoundingKey;

    fn identity(part: &str) -> Identity {
        Identity {
            key: SoundingKey {
                station: "wmo:99001".to_owned(),
                date: None,
                hour: Some(12),
            },
            parts: [part.to_owned()].into(),
        }
    }

    #[test]
    fn a_draft_comes_back_as_it_was_and_only_for_its_own_data() {
        let folder = tempfile::tempdir().unwrap();
        let (one, other) = (identity("aa"), identity("bb"));
        let document = Document {
            // A value with no short decimal form must survive bit for bit.
            picked_level_pa: Some(90_000.1 + 0.2),
            storm_motion_ms: Some([7.5, -0.1]),
            reasons: "too moist \"at the ground\"\n".to_owned(),
            ..Document::default()
        };
        std::fs::write(path(folder.path(), &one), encode(&one, &document).unwrap()).unwrap();
        assert_eq!(load(folder.path(), &one), Ok(Some(document)));
        assert_eq!(load(folder.path(), &other), Ok(None));
    }

    #[test]
    fn a_damaged_draft_is_told_and_left() {
        let folder = tempfile::tempdir().unwrap();
        let one = identity("aa");
        let path = path(folder.path(), &one);
        std::fs::write(&path, "{\"schema\":1,").unwrap();
        let told = load(folder.path(), &one).unwrap_err();
        assert!(told.contains("shown as received"), "{told}");
        assert!(path.exists());
    }
}
