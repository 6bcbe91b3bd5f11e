//! Decisions about soundings, kept for good.
//!
//! A ledger is a folder of JSON-lines files. Every running desk writes a file of its own, only ever appended to and
//! never reopened for writing, so that any number of desks can share a folder, also on a network drive. A line is
//! on the disk (synced) before the desk says "kept".
//!
//! A line is `{"schema":1,"crc32":"<8 hex digits>","decision":{...}}`; the checksum covers the bytes of the decision
//! exactly as they stand in the line.
//!
//! Deliberately absent: changing or deleting a decision. A later decision on the same sounding supersedes it.

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod decision;
mod disk;
mod line;
mod store;

pub use decision::*;
pub use disk::*;
pub use store::*;
