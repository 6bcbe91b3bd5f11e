//! What follows from a document: computed inside one command, all of one revision.

use crate::doubt::{DoubtKey, Sampling};
use crate::sounding::{Numbers, Profile, Working};
use crate::thermo::{Ascent, Method, Pressure, lift};
use crate::trust::{Cost, Priced, price, rank};
use crate::{Analysed, Document, Doubt, sentence};
use std::sync::Arc;
use std::time::{Duration, Instant};

/// Counts changes of documents over a whole session. Undo makes a new revision too.
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

    fn of(priced: &Priced) -> Self {
        Self {
            costs: priced.costs.clone(),
            headline: priced.headline,
            applied: priced.applied,
        }
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
    /// Order in which the cards are shown: indices, worst first; held while [`crate::Session::hold_order`] says so.
    pub order: Vec<usize>,
    /// Interval, response, ranges.
    pub doubt: Arc<Doubt>,
    /// The sentence above the response: which parcel matters, and whether the surface doubt reaches it.
    pub which_parcel: String,
    /// Computing time of this revision.
    pub computing: Duration,
    /// Order by the costs of this revision, whatever is held.
    ranked: Vec<usize>,
    doubt_key: DoubtKey,
    /// The doubt without the working value, which is the same for every surface dew point.
    sampled: Arc<Doubt>,
}

/// A repair seen but not applied.
#[derive(Debug, Clone, PartialEq)]
pub struct Preview {
    /// The profile with it (without it, when it is applied).
    pub working: Working,
    /// Its numbers.
    pub numbers: Numbers,
    /// The repair is applied at the moment, so this is what it would be without.
    pub applied: bool,
}

impl Results {
    /// Results of a document, from nothing.
    pub fn of(analysed: &Analysed, document: &Document) -> Self {
        Self::compute(
            analysed,
            document,
            Revision::default(),
            None,
            Sampling::Full,
        )
    }

    /// Results of the document that follows; keeps of `previous` what can't have changed.
    pub(crate) fn next(
        analysed: &Analysed,
        document: &Document,
        revision: Revision,
        previous: &Self,
        hold_order: bool,
        sampling: Sampling,
    ) -> Self {
        let mut results = Self::compute(analysed, document, revision, Some(previous), sampling);
        if hold_order && previous.order.len() == results.order.len() {
            results.order.clone_from(&previous.order);
        }
        results
    }

    /// Lets the order follow the costs again; true when that changed it.
    pub(crate) fn sort(&mut self) -> bool {
        let changed = self.order != self.ranked;
        self.order.clone_from(&self.ranked);
        changed
    }

    fn compute(
        analysed: &Analysed,
        document: &Document,
        revision: Revision,
        previous: Option<&Self>,
        sampling: Sampling,
    ) -> Self {
        let started = Instant::now();
        let amendments = &document.amendments;
        let working = amendments.apply(&analysed.profile, analysed.daylight);
        let numbers = Numbers::of(&working.profile);
        let picked = document
            .picked_level()
            .and_then(|level| picked_ascent(&working.profile, level));
        let priced = price(
            &analysed.findings,
            &analysed.profile,
            amendments,
            analysed.daylight,
            &numbers,
        );
        let ranked = rank(&priced, at_least(&numbers));
        let cards = priced.iter().map(Card::of).collect();
        let doubt_key = DoubtKey::of(document);
        let sampled = match previous {
            Some(previous)
                if previous.doubt_key == doubt_key
                    && (sampling == Sampling::InFrame || !previous.sampled.coarse) =>
            {
                previous.sampled.clone()
            }
            _ => Arc::new(Doubt::of(analysed, document, sampling)),
        };
        let dewpoint = working.profile.surface_air().map(|air| air.dewpoint);
        let doubt = sampled
            .including(dewpoint, &numbers)
            .map_or_else(|| sampled.clone(), Arc::new);
        let which_parcel = sentence::which_parcel(&working.profile, &numbers, &doubt);
        Self {
            revision,
            working,
            numbers,
            picked,
            cards,
            order: ranked.clone(),
            doubt,
            which_parcel,
            computing: started.elapsed(),
            ranked,
            doubt_key,
            sampled,
        }
    }
}

/// Any of the three is a lower limit only.
fn at_least(numbers: &Numbers) -> bool {
    [&numbers.surface, &numbers.mixed, &numbers.most_unstable]
        .into_iter()
        .flatten()
        .any(|ascent| ascent.at_least)
}

fn picked_ascent(profile: &Profile, level: Pressure) -> Option<Ascent> {
    let environment = profile.environment().ok()?;
    let start = environment.at(level)?;
    lift(&environment, start, Method::default())
}
