//! How a sounding stands.

use crate::ledger::Decision;

/// State of the verdict on one sounding.
#[derive(Debug, Clone, PartialEq)]
pub enum Standing {
    /// Nothing decided, nothing drafted.
    Undecided,
    /// Something has been changed or drafted, nothing decided.
    Draft,
    /// The verdict is on its way to the disk; not kept yet.
    Keeping,
    /// Decided on exactly these data.
    Decided(Decision),
    /// Decided on other message parts of the same ascent.
    DecidedOnEarlierData(Decision),
}

impl Standing {
    /// In words, as in the tray.
    pub fn words(&self) -> String {
        match self {
            Self::Undecided => "undecided".to_owned(),
            Self::Draft => "draft".to_owned(),
            Self::Keeping => "being kept".to_owned(),
            Self::Decided(decision) => {
                format!("{} ({})", decision.verdict.words(), decision.initials)
            }
            Self::DecidedOnEarlierData(_) => "decided on earlier data: review".to_owned(),
        }
    }

    /// Somebody still has to decide.
    pub fn is_open(&self) -> bool {
        !matches!(self, Self::Decided(_))
    }

    /// The decision, whichever data it was made on.
    pub fn decision(&self) -> Option<&Decision> {
        match self {
            Self::Decided(decision) | Self::DecidedOnEarlierData(decision) => Some(decision),
            Self::Undecided | Self::Draft | Self::Keeping => None,
        }
    }
}
