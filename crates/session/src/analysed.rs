//! Everything that follows from a sounding as received, before anybody has touched it.

use crate::bounds::{Candidates, candidates};
use crate::sounding::{Daylight, Note, Numbers, Profile, Sounding, daylight};
use crate::trust::{Context, Finding, Thresholds, findings};
use std::sync::Arc;

/// A sounding as received with what follows from it. Never changes while the user works (only a position typed in later makes a new one).
#[derive(Debug, Clone, PartialEq)]
pub struct Analysed {
    /// As received.
    pub sounding: Arc<Sounding>,
    /// Its levels, ordered and merged.
    pub profile: Arc<Profile>,
    /// Numbers of the received profile.
    pub numbers: Numbers,
    /// What the rules see on it.
    pub findings: Vec<Finding>,
    /// Whether the sun has been heating the ground.
    pub daylight: Daylight,
    /// What the surface dew point might truly be.
    pub candidates: Candidates,
    /// Notes of the reader, then those of the merging.
    pub notes: Vec<Note>,
}

impl Analysed {
    /// Orders the levels, computes the numbers, runs the rules.
    pub fn of(sounding: Sounding, thresholds: &Thresholds) -> Self {
        let (profile, merging) = Profile::received(&sounding);
        let numbers = Numbers::of(&profile);
        let daylight = daylight(&sounding);
        let findings = findings(&Context {
            sounding: &sounding,
            profile: &profile,
            numbers: &numbers,
            daylight,
            thresholds,
        });
        let candidates = candidates(&profile, daylight, thresholds);
        let mut notes = sounding.notes.clone();
        notes.extend(merging);
        Self {
            sounding: Arc::new(sounding),
            profile: Arc::new(profile),
            numbers,
            findings,
            daylight,
            candidates,
            notes,
        }
    }
}
