//! CAPE by other kinds of ascent: several times the work of everything else, so never in the frame of a drag, and kept until
//! the profile changes.

use crate::sounding::{Amendments, Daylight, OtherAscents};
use crate::{Item, Session};

/// What was computed, and of which profile.
#[derive(Debug, Clone)]
pub(crate) struct OtherKept {
    /// With these amendments the working profile was made.
    amendments: Amendments,
    daylight: Daylight,
    working: OtherAscents,
    received: OtherAscents,
}

/// CAPE by other kinds of ascent as there is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OtherShown<'a> {
    /// Of the working profile, or, when stale, of what it was; `None`: not computed yet.
    pub working: Option<&'a OtherAscents>,
    /// Of the received profile.
    pub received: Option<&'a OtherAscents>,
    /// The working profile has changed since. To be drawn as stale.
    pub stale: bool,
}

impl<'a> OtherShown<'a> {
    pub(crate) fn of(item: &'a Item) -> Self {
        let kept = item.other.as_ref();
        Self {
            working: kept.map(|kept| &kept.working),
            received: kept.map(|kept| &kept.received),
            stale: kept.is_some_and(|kept| !kept.is_of(item)),
        }
    }

    /// [`crate::Command::CompareAscents`] would tell more.
    pub fn is_wanting(&self) -> bool {
        self.working.is_none() || self.stale
    }
}

impl OtherKept {
    fn of(item: &Item) -> Self {
        let analysed = &item.analysed;
        let received = match &item.other {
            Some(kept) => kept.received,
            None => OtherAscents::of(&analysed.profile, &analysed.numbers),
        };
        let results = &item.results;
        let working = if results.working.profile == *analysed.profile {
            received
        } else {
            OtherAscents::of(&results.working.profile, &results.numbers)
        };
        Self {
            amendments: item.document().amendments.clone(),
            daylight: item.daylight(),
            working,
            received,
        }
    }

    fn is_of(&self, item: &Item) -> bool {
        self.daylight == item.daylight() && self.amendments == item.document().amendments
    }
}

impl Session {
    pub(crate) fn compare_ascents(&mut self) {
        let Some(item) = self.current.and_then(|id| self.item_mut(id)) else {
            return;
        };
        if !item.in_gesture() && item.other_ascents().is_wanting() {
            item.other = Some(OtherKept::of(item));
        }
    }
}
