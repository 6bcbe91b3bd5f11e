//! What the desk has to tell.

/// Identity of a message.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct MessageId(pub(crate) u64);

/// How much it matters.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Weight {
    /// Something was done ("kept").
    Done,
    /// Something should be known.
    Told,
    /// Something failed.
    Failed,
}

/// One message; stays until dismissed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Message {
    /// Identity.
    pub id: MessageId,
    /// How much it matters.
    pub weight: Weight,
    /// The file, folder or sounding it is about; empty when none.
    pub about: String,
    /// What happened.
    pub what: String,
    /// What to do; empty when nothing.
    pub remedy: String,
}

impl Message {
    pub(crate) fn says_like(&self, other: &Self) -> bool {
        (self.weight, &self.about, &self.what) == (other.weight, &other.about, &other.what)
    }

    /// On one line.
    pub fn line(&self) -> String {
        let mut line = String::new();
        if !self.about.is_empty() {
            line.push_str(&self.about);
            line.push_str(": ");
        }
        line.push_str(&self.what);
        if !self.remedy.is_empty() {
            line.push_str(". ");
            line.push_str(&self.remedy);
        }
        line
    }
}
