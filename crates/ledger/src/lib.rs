//! Decisions about soundings, kept for good.
//!
//! A ledger is a folder of JSON-lines files. Every running desk writes a file of its own, only ever appended to and
//! never reopened for writing, so that any number of desks can share a folder, also on a network drive. A line is
//! on the disk (synced) before the desk says "kept".
//!
//! Deliberately absent: changing or deleting a decision. A later decision on the same sounding supersedes it.

mod decision;
mod store;

pub use decision::*;
pub use store::*;
