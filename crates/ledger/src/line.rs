//! One line of a ledger file.

use crate::Decision;
use serde::{Deserialize, Serialize};
use serde_json::value::RawValue;

/// Version of the line's shape.
const SCHEMA: u32 = 1;

#[derive(Serialize, Deserialize)]
struct Line<'a> {
    schema: u32,
    crc32: String,
    #[serde(borrow)]
    decision: &'a RawValue,
}

/// The schema alone, read first so that a line of a newer program is told apart from a damaged one.
#[derive(Deserialize)]
struct Schema {
    schema: u32,
}

fn checksum(text: &str) -> String {
    format!("{:08x}", crc32fast::hash(text.as_bytes()))
}

/// The line for a decision, with its line end.
pub(crate) fn encode(decision: &Decision) -> serde_json::Result<String> {
    let raw = serde_json::value::to_raw_value(decision)?;
    let mut line = serde_json::to_string(&Line {
        schema: SCHEMA,
        crc32: checksum(raw.get()),
        decision: &raw,
    })?;
    line.push('\n');
    Ok(line)
}

/// The decision in a line (without its line end), or what is wrong with it in a phrase.
pub(crate) fn decode(text: &str) -> Result<Decision, String> {
    if let Ok(Schema { schema }) = serde_json::from_str(text)
        && schema != SCHEMA
    {
        return Err(format!(
            "written in schema {schema}, this program reads {SCHEMA}; use the newer program to see it"
        ));
    }
    let line: Line =
        serde_json::from_str(text).map_err(|error| format!("not a ledger line ({error})"))?;
    let sum = checksum(line.decision.get());
    if sum != line.crc32 {
        return Err(format!(
            "checksum is {sum}, the line says {}: damaged",
            line.crc32
        ));
    }
    serde_json::from_str(line.decision.get()).map_err(|error| format!("not a decision ({error})"))
}
