//! What follows from a document: computed inside one command, all of one revision.

use crate::Doubt;
use crate::sounding::{Numbers, Working};
use crate::thermo::Ascent;
use crate::trust::Cost;
use std::sync::Arc;
use std::time::Duration;

/// Counts the changes of one sounding's document. Undo makes a new revision too.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Default)]
pub struct Revision(pub u64);

/// State of one finding's card on the working profile; same index as the finding.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Card {
    /// Cost of each repair, in the finding's order; `None` = unknown, not zero.
    pub costs: Vec<Option<Cost>>,
    /// The headline repair.
    pub headline: Option<usize>,
    /// The repair that is applied at the moment. Its cost is what it has changed.
    pub applied: Option<usize>,
}

impl Card {
    /// Cost of the headline repair.
    pub fn headline_cost(&self) -> Option<&Cost> {
        self.costs.get(self.headline?)?.as_ref()
    }
}

/// Everything shown for one revision of one sounding.
#[derive(Debug, Clone, PartialEq)]
pub struct Results {
    /// The revision all of this belongs to.
    pub revision: Revision,
    /// The working profile, the reach applied and what could not be done.
    pub working: Working,
    /// Numbers of the working profile.
    pub numbers: Numbers,
    /// The parcel of the level the user picked.
    pub picked: Option<Ascent>,
    /// One card a finding, same index as [`crate::Item::findings`].
    pub cards: Vec<Card>,
    /// Order in which the cards are shown: indices, worst first (held while [`crate::Session::hold_order`] says so).
    pub order: Vec<usize>,
    /// Interval, response, ranges.
    pub doubt: Arc<Doubt>,
    /// The sentence above the response: which parcel matters, and whether the surface doubt reaches it.
    pub which_parcel: String,
    /// Computing time of this revision.
    pub computing: Duration,
}

/// A repair seen but not applied.
#[derive(Debug, Clone, PartialEq)]
pub struct Preview {
    /// The profile with it (without it, when it is applied).
    pub working: Working,
    /// Its numbers.
    pub numbers: Numbers,
}
