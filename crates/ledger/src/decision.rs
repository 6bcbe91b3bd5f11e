//! What was decided, by whom, why, on which data.

use dewbound_sounding::{Amendments, Digest, Sounding};
use jiff::{Timestamp, civil::Date};
use serde::{Deserialize, Serialize};
use std::collections::BTreeSet;

/// What a forecaster decides about a sounding.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case", tag = "kind")]
pub enum Verdict {
    /// Believed as received.
    Accepted,
    /// Believed with the amendments recorded beside it.
    AcceptedAsAmended,
    /// Not to be believed above a pressure.
    ContaminatedAbove {
        /// Pa.
        pressure_pa: f64,
    },
    /// Not to be believed at all.
    Contaminated,
}

impl Verdict {
    /// In words, as on the desk and in the copied line.
    pub fn words(&self) -> String {
        match self {
            Self::Accepted => "accepted".to_owned(),
            Self::AcceptedAsAmended => "accepted as amended".to_owned(),
            Self::ContaminatedAbove { pressure_pa } => {
                format!("contaminated above {:.0} hPa", pressure_pa / 100.0)
            }
            Self::Contaminated => "contaminated".to_owned(),
        }
    }
}

/// By what a decision is found again: station, date and hour of the ascent.
#[derive(Debug, Clone, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
pub struct SoundingKey {
    /// Canonical station id, e.g. `wmo:72518`; `unknown` when the message names none.
    pub station: String,
    /// UTC date of the ascent; `None` when the message carries no time.
    pub date: Option<Date>,
    /// UTC hour of the ascent.
    pub hour: Option<u8>,
}

impl SoundingKey {
    /// The key of a sounding. A sounding without a station is filed under the digest of its own data, so that two
    /// nameless ones are never taken for each other.
    pub fn of(sounding: &Sounding) -> Self {
        let valid = sounding
            .times
            .valid()
            .map(|time| time.to_zoned(jiff::tz::TimeZone::UTC));
        Self {
            station: sounding
                .station
                .canonical_id()
                .unwrap_or_else(|| format!("data:{}", digests(&sounding.source.parts).join("+"))),
            date: valid.as_ref().map(jiff::Zoned::date),
            hour: valid
                .as_ref()
                .and_then(|time| u8::try_from(time.hour()).ok()),
        }
    }
}

/// Digests as lower-case hex, in order.
pub fn digests(parts: &BTreeSet<Digest>) -> Vec<String> {
    parts
        .iter()
        .map(|digest| digest.iter().map(|byte| format!("{byte:02x}")).collect())
        .collect()
}

/// One decision.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Decision {
    /// What it is about.
    pub sounding: SoundingKey,
    /// Name of the station, for people.
    pub station_name: String,
    /// SHA-256 of each message part the decision was made on, hex.
    pub parts: BTreeSet<String>,
    /// What was decided.
    pub verdict: Verdict,
    /// Why, in the forecaster's words.
    pub reasons: String,
    /// Who.
    pub initials: String,
    /// When.
    pub decided_at: Timestamp,
    /// The amendments in force.
    pub amendments: Amendments,
    /// CAPE of the three parcels (surface, mixed, most unstable) on the working profile, J/kg.
    pub cape_jkg: [Option<f64>; 3],
    /// The sounding is invented demonstration data.
    pub demo: bool,
}
