//! Everything that follows from a sounding as received, before anybody has touched it.

use crate::bounds::{Candidates, candidates};
use crate::quantity::Readings;
use crate::sounding::{
    Daylight, Further, Note, Numbers, OtherAscents, Profile, Sounding, daylight,
};
use crate::thermo::Motion;
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
    /// Further numbers of the received profile, with the estimated storm motion.
    pub further: Further,
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
        let (numbers, environment) = Numbers::and_environment(&profile);
        let motion = estimated_motion(&sounding);
        let further = Further::of(&profile, &profile, environment.as_ref(), &numbers, motion);
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
            further,
            findings,
            daylight,
            candidates,
            notes,
        }
    }

    /// What the declared numbers of the received profile are read from.
    pub fn readings<'a>(&'a self, other: Option<&'a OtherAscents>) -> Readings<'a> {
        Readings {
            numbers: &self.numbers,
            further: &self.further,
            other,
        }
    }

    /// The motion helicity is measured against unless the user sets one.
    pub fn estimated_motion(&self) -> Motion {
        estimated_motion(&self.sounding)
    }

    /// Rows of the profile the numbers are made of; when nothing can be lifted, those with a temperature.
    pub fn usable_rows(&self) -> Vec<usize> {
        let rows = self.profile.environment_rows();
        if !rows.is_empty() {
            return rows;
        }
        let temperatures = self.profile.temperature.iter().enumerate();
        temperatures
            .filter_map(|(row, temperature)| temperature.map(|_| row))
            .collect()
    }

    /// How many of these have no humidity of their own.
    pub fn humidity_missing(&self) -> usize {
        self.usable_rows()
            .into_iter()
            .filter(|&row| !matches!(self.profile.dewpoint.get(row), Some(Some(_))))
            .count()
    }
}

/// South of the equator storms deviate to the left; elsewhere, and where the position is unknown, to the right.
fn estimated_motion(sounding: &Sounding) -> Motion {
    match sounding.station.position {
        Some(position) if position.latitude < 0.0 => Motion::Left,
        _ => Motion::Right,
    }
}
