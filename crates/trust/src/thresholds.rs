//! Thresholds with unit and source, shipped in `assets/thresholds.json`, overridable per office.

use serde::Deserialize;
use std::collections::BTreeMap;
use std::sync::LazyLock;

/// One threshold.
#[derive(Debug, Clone, PartialEq, Deserialize)]
pub struct Threshold {
    /// Value in `unit`.
    pub value: f64,
    /// Unit; empty when there is none.
    pub unit: String,
    /// Rule that reads it (or the kind of data it prepares).
    pub rule: String,
    /// What it decides.
    pub what: String,
    /// Where the value comes from.
    pub source: String,
    /// The office has set this value, not the program.
    #[serde(default)]
    pub overridden: bool,
}

/// Thresholds in force.
#[derive(Debug, Clone, PartialEq)]
pub struct Thresholds {
    by_name: BTreeMap<String, Threshold>,
}

/// Why a thresholds file can't be used.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum ThresholdsError {
    /// Not JSON of the expected shape.
    #[error("thresholds, line {line}: {what}")]
    Syntax {
        /// Line of the file.
        line: usize,
        /// What is wrong.
        what: String,
    },
    /// A name no rule reads.
    #[error("thresholds: unknown name {name}; known: {known}")]
    Unknown {
        /// The name.
        name: String,
        /// Names understood.
        known: String,
    },
}

const SHIPPED: &str = include_str!("../../../assets/thresholds.json");

// A test reads the shipped file strictly; the empty map below can only be met by a build that fails that test.
static DEFAULT: LazyLock<BTreeMap<String, Threshold>> =
    LazyLock::new(|| serde_json::from_str(SHIPPED).unwrap_or_default());

impl Default for Thresholds {
    fn default() -> Self {
        Self {
            by_name: DEFAULT.clone(),
        }
    }
}

impl Thresholds {
    /// Value of a threshold by name, in its stated unit.
    ///
    /// An unknown name gives NaN, with which every comparison fails: a rule that asks for it stays silent.
    pub fn get(&self, name: &str) -> f64 {
        self.by_name
            .get(name)
            .map_or(f64::NAN, |threshold| threshold.value)
    }

    /// All of them, by name.
    pub fn iter(&self) -> impl Iterator<Item = (&str, &Threshold)> {
        self.by_name
            .iter()
            .map(|(name, threshold)| (name.as_str(), threshold))
    }

    /// The defaults with an office's own values laid over them: a JSON object of name and number.
    ///
    /// ```
    /// use dewbound_trust::Thresholds;
    /// let office = Thresholds::default().with_overrides(r#"{"moisture-slope.jump_k": 3}"#)?;
    /// assert_eq!(office.get("moisture-slope.jump_k"), 3.0);
    /// # Ok::<(), dewbound_trust::ThresholdsError>(())
    /// ```
    pub fn with_overrides(&self, json: &str) -> Result<Self, ThresholdsError> {
        let values: BTreeMap<String, f64> = serde_json::from_str(json).map_err(|error| ThresholdsError::Syntax {
            line: error.line(),
            what: format!("{error}; expected an object of names and numbers, such as {{\"moisture-slope.jump_k\": 2.5}}"),
        })?;
        let mut laid = self.clone();
        for (name, value) in values {
            let Some(threshold) = laid.by_name.get_mut(&name) else {
                let known = self
                    .by_name
                    .keys()
                    .map(String::as_str)
                    .collect::<Vec<_>>()
                    .join(", ");
                return Err(ThresholdsError::Unknown { name, known });
            };
            threshold.value = value;
            threshold.overridden = true;
        }
        Ok(laid)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::RULES;

    #[test]
    fn shipped_file_is_complete_and_sourced() {
        let read: BTreeMap<String, Threshold> = serde_json::from_str(SHIPPED).unwrap();
        assert!(read.len() > 20);
        for (name, threshold) in &read {
            assert!(threshold.value.is_finite(), "{name}");
            assert!(
                !threshold.what.is_empty()
                    && !threshold.source.is_empty()
                    && !threshold.rule.is_empty(),
                "{name}"
            );
            assert!(!threshold.overridden, "{name}");
        }
    }

    #[test]
    fn every_name_a_rule_reads_exists_and_every_name_is_read() {
        let shipped = Thresholds::default();
        let mut read = std::collections::BTreeSet::new();
        for rule in RULES {
            for name in rule.thresholds() {
                assert!(shipped.get(name).is_finite(), "{} reads {name}", rule.id());
                read.insert(*name);
            }
        }
        for (name, _) in shipped.iter() {
            assert!(read.contains(name), "{name} is read by no rule");
        }
    }

    #[test]
    fn unknown_name_keeps_rules_silent_instead_of_panicking() {
        assert!(Thresholds::default().get("no-such-rule.limit").is_nan());
    }

    #[test]
    fn overrides_replace_values_only() {
        let shipped = Thresholds::default();
        let office = shipped
            .with_overrides(r#"{"superadiabatic-aloft.theta_drop_k": 1.5}"#)
            .unwrap();
        assert_eq!(office.get("superadiabatic-aloft.theta_drop_k"), 1.5);
        let changed: Vec<_> = office
            .iter()
            .filter(|(_, t)| t.overridden)
            .map(|(n, _)| n)
            .collect();
        assert_eq!(changed, ["superadiabatic-aloft.theta_drop_k"]);
        assert_eq!(shipped.get("superadiabatic-aloft.theta_drop_k"), 1.0);
    }

    #[test]
    fn bad_overrides_say_where_and_what() {
        let shipped = Thresholds::default();
        let unknown = shipped
            .with_overrides(r#"{"no-such": 1}"#)
            .unwrap_err()
            .to_string();
        assert!(
            unknown.contains("no-such") && unknown.contains("moisture-slope.jump_k"),
            "{unknown}"
        );
        let syntax = shipped
            .with_overrides("{\n\"moisture-slope.jump_k\": \"two\"\n}")
            .unwrap_err()
            .to_string();
        assert!(syntax.contains("line 2"), "{syntax}");
    }
}
