//! The list of rules; help, docs, thresholds and tests all derive from it.

use crate::{Finding, Thresholds};
use dewbound_sounding::{Daylight, Numbers, Profile, Sounding};

/// Everything a rule may look at. Read only.
#[derive(Debug, Clone, Copy)]
pub struct Context<'a> {
    /// The sounding as received.
    pub sounding: &'a Sounding,
    /// Its ordered, merged levels.
    pub profile: &'a Profile,
    /// Numbers of the received profile (the early-end rule needs the EL).
    pub numbers: &'a Numbers,
    /// Whether the sun has been heating the ground.
    pub daylight: Daylight,
    /// Thresholds in force.
    pub thresholds: &'a Thresholds,
}

/// One rule. Each is a unit struct; [`RULES`] is the list.
pub trait Rule: Sync {
    /// Id, kebab case.
    fn id(&self) -> &'static str;
    /// Title for people.
    fn title(&self) -> &'static str;
    /// Published anchor, or "common practice, no source".
    fn source(&self) -> &'static str;
    /// What it sees, in a sentence or two.
    fn about(&self) -> &'static str;
    /// Names of the thresholds it reads.
    fn thresholds(&self) -> &'static [&'static str];
    /// Looks.
    fn check(&self, context: &Context) -> Vec<Finding>;
}

/// All rules, in the order checked.
pub static RULES: &[&dyn Rule] = &[];

/// Everything all rules see on the received profile, in order of falling pressure of their layers.
pub fn findings(_context: &Context) -> Vec<Finding> {
    todo!()
}
