//! Thresholds with unit and source, shipped in `assets/thresholds.json`, overridable per office.

/// Thresholds in force.
#[derive(Debug, Clone, PartialEq)]
pub struct Thresholds {
    _private: (),
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

impl Default for Thresholds {
    fn default() -> Self {
        todo!()
    }
}

impl Thresholds {
    /// Value of a threshold by name, in its stated unit.
    pub fn get(&self, _name: &str) -> f64 {
        todo!()
    }

    /// The defaults with an office's own values laid over them.
    pub fn with_overrides(&self, _json: &str) -> Result<Self, ThresholdsError> {
        todo!()
    }
}
