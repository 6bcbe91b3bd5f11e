//! What follows from a document: computed inside one command, all of one revision.

use crate::doubt::DoubtKey;
use crate::pricing::Pricing;
use crate::quantity::Readings;
use crate::sounding::{Further, Numbers, OtherAscents, Profile, Working};
use crate::thermo::{Ascent, Environment, Method, Motion, Pressure, lift};
use crate::trust::{Cost, Priced};
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
    /// Repairs whose cost is of an earlier revision, because a drag is under way and there are more than a frame can price;
    /// the headline is never among them. To be drawn as stale. Empty: none.
    pub stale: Vec<bool>,
}

impl Card {
    /// Cost of the headline repair.
    pub fn headline_cost(&self) -> Option<&Cost> {
        self.costs.get(self.headline?)?.as_ref()
    }

    /// The cost of a repair is of an earlier revision.
    pub fn is_stale(&self, repair: usize) -> bool {
        self.stale.get(repair).copied().unwrap_or(false)
    }

    pub(crate) fn of(priced: &Priced) -> Self {
        Self {
            costs: priced.costs.clone(),
            headline: priced.headline,
            applied: priced.applied,
            stale: Vec::new(),
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
    /// Further numbers of the working profile.
    pub further: Further,
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

/// How much is computed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Effort {
    /// Everything.
    Full,
    /// What a frame allows.
    InFrame,
}

/// A repair seen but not applied.
#[derive(Debug, Clone, PartialEq)]
pub struct Preview {
    /// The profile with it (without it, when it is applied).
    pub working: Working,
    /// Its numbers.
    pub numbers: Numbers,
    /// Its further numbers.
    pub further: Further,
    /// The repair is applied at the moment, so this is what it would be without.
    pub applied: bool,
}

impl Results {
    /// Results of a document, from nothing.
    pub fn of(analysed: &Analysed, document: &Document) -> Self {
        Self::compute(analysed, document, Revision::default(), None, Effort::Full)
    }

    /// Results of the document that follows; keeps of `previous` what can't have changed.
    pub(crate) fn next(
        analysed: &Analysed,
        document: &Document,
        revision: Revision,
        previous: &Self,
        hold_order: bool,
        effort: Effort,
    ) -> Self {
        let mut results = Self::compute(analysed, document, revision, Some(previous), effort);
        if hold_order && previous.order.len() == results.order.len() {
            results.order.clone_from(&previous.order);
        }
        results
    }

    /// What the declared numbers are read from.
    pub fn readings<'a>(&'a self, other: Option<&'a OtherAscents>) -> Readings<'a> {
        Readings {
            numbers: &self.numbers,
            further: &self.further,
            other,
        }
    }

    /// Something was left coarse or stale because a drag is under way.
    pub(crate) fn is_hasty(&self) -> bool {
        self.doubt.coarse || self.cards.iter().any(|card| card.stale.contains(&true))
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
        effort: Effort,
    ) -> Self {
        let started = Instant::now();
        let amendments = &document.amendments;
        let working = amendments.apply(&analysed.profile, analysed.daylight);
        let (numbers, environment) = Numbers::and_environment(&working.profile);
        let environment = environment.as_ref();
        let previous_further = previous.map(|previous| &previous.further);
        let further = further_of(
            analysed,
            document,
            &working.profile,
            environment,
            &numbers,
            previous_further,
        );
        let picked = document
            .picked_level()
            .and_then(|level| picked_ascent(environment?, level));
        let frame = Frame::of(&working.profile);
        let Pricing { cards, ranked } = match (previous, effort) {
            (Some(previous), Effort::InFrame) => Pricing::in_frame(
                analysed,
                amendments,
                &numbers,
                &previous.cards,
                frame.repairs,
            ),
            _ => Pricing::full(analysed, amendments, &numbers),
        };
        let doubt_key = DoubtKey::of(document);
        let most_samples = (effort == Effort::InFrame).then_some(frame.samples);
        let sampled = match previous {
            Some(previous)
                if previous.doubt_key == doubt_key
                    && (effort == Effort::InFrame || !previous.sampled.coarse) =>
            {
                previous.sampled.clone()
            }
            _ => Arc::new(Doubt::of(analysed, document, most_samples)),
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
            further,
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

/// How much a frame affords while a drag is under way, in computations of the whole profile. Each takes about 0.15
/// microseconds a level, and a frame has 12 ms for everything.
#[derive(Debug, Clone, Copy)]
struct Frame {
    repairs: usize,
    samples: usize,
}

impl Frame {
    fn of(profile: &Profile) -> Self {
        let affordable = 80_000 / profile.len().max(1);
        Self {
            repairs: affordable / 4,
            samples: affordable * 5 / 8,
        }
    }
}

/// Further numbers of a working profile, helicity against the storm motion of the document; what can't have changed since
/// `previous` is taken from there.
pub(crate) fn further_of(
    analysed: &Analysed,
    document: &Document,
    working: &Profile,
    environment: Option<&Environment>,
    numbers: &Numbers,
    previous: Option<&Further>,
) -> Further {
    let motion = document
        .storm_motion()
        .map_or_else(|| analysed.estimated_motion(), Motion::Set);
    let received = &analysed.profile;
    match previous {
        Some(previous) => Further::next(received, working, environment, numbers, motion, previous),
        None => Further::of(received, working, environment, numbers, motion),
    }
}

fn picked_ascent(environment: &Environment, level: Pressure) -> Option<Ascent> {
    lift(environment, environment.at(level)?, Method::default())
}
