//! A fault of the program itself in one sounding.

use std::panic::{AssertUnwindSafe, catch_unwind};

/// The program itself failed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("the program failed on this, which is a defect of the program")]
pub struct Defect;

impl Defect {
    /// What to do about it.
    pub const REMEDY: &'static str =
        "Everything else is untouched by it; please report it with the file";

    /// On one line, after the name of what it happened on.
    pub fn line(&self, about: &str) -> String {
        format!("{about}: {self}. {}", Self::REMEDY)
    }
}

/// Does something of which a fault must not take other soundings with it, nor the window. What `work` was changing when it
/// failed must not be used any more.
pub fn guarded<T>(work: impl FnOnce() -> T) -> Result<T, Defect> {
    catch_unwind(AssertUnwindSafe(work)).map_err(|_| Defect)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fault_is_an_error_and_anything_else_passes() {
        assert_eq!(guarded(|| 7), Ok(7));
        let failed: Result<i32, Defect> = guarded(|| panic!("on purpose"));
        let line = failed.unwrap_err().line("a.txt, Vale");
        assert!(line.starts_with("a.txt, Vale: the program failed on this"));
    }
}
