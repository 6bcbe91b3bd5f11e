//! Decisions, kept for good
