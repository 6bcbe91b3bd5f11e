//! One sounding of the tray with everything that belongs to it.

use crate::history::History;
use crate::other::{OtherKept, OtherShown};
use crate::results::further_of;
use crate::sounding::{Daylight, Note, Numbers, Profile, Sounding};
use crate::thermo::Temperature;
use crate::trust::{Finding, Repair, applied_repair, with_repair, without_repair};
use crate::{
    Analysed, Document, Identity, Preview, RepairId, Results, Revision, Standing, SurfaceQuantity,
};
use jiff::Timestamp;
use std::sync::Arc;

/// Identity of an item in the tray; never used twice in one session.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ItemId(pub(crate) u64);

/// One sounding of the tray.
///
/// **Invariant:** `results` are those of `document`, always.
#[derive(Debug)]
pub struct Item {
    pub(crate) id: ItemId,
    pub(crate) identity: Identity,
    pub(crate) analysed: Arc<Analysed>,
    pub(crate) history: History,
    pub(crate) results: Results,
    /// Other kinds of ascent, where they have been asked for.
    pub(crate) other: Option<OtherKept>,
    pub(crate) standing: Standing,
    /// The document when nothing is drafted: untouched, or as it was decided.
    pub(crate) baseline: Document,
    /// Time of the decision the baseline is from.
    pub(crate) decided_at: Option<Timestamp>,
    /// A decision on its way to the disk, with the document it was made on.
    pub(crate) keeping: Option<(Timestamp, Document)>,
}

impl Item {
    /// Identity.
    pub fn id(&self) -> ItemId {
        self.id
    }

    /// As received.
    pub fn sounding(&self) -> &Arc<Sounding> {
        &self.analysed.sounding
    }

    /// All that follows from the sounding as received.
    pub fn analysed(&self) -> &Arc<Analysed> {
        &self.analysed
    }

    /// The received profile.
    pub fn received(&self) -> &Arc<Profile> {
        &self.analysed.profile
    }

    /// Numbers of the received profile.
    pub fn received_numbers(&self) -> &Numbers {
        &self.analysed.numbers
    }

    /// Findings on the received profile.
    pub fn findings(&self) -> &[Finding] {
        &self.analysed.findings
    }

    /// Whether the sun has been heating the ground.
    pub fn daylight(&self) -> Daylight {
        self.analysed.daylight
    }

    /// Notes of the reader and of the merging.
    pub fn notes(&self) -> &[Note] {
        &self.analysed.notes
    }

    /// What has been changed.
    pub fn document(&self) -> &Document {
        self.history.document()
    }

    /// The revision of the document; [`Results::revision`] is always the same.
    pub fn revision(&self) -> Revision {
        self.results.revision
    }

    /// Everything computed for that revision.
    pub fn results(&self) -> &Results {
        &self.results
    }

    /// CAPE by other kinds of ascent, as far as [`crate::Command::CompareAscents`] has asked for it.
    pub fn other_ascents(&self) -> OtherShown<'_> {
        OtherShown::of(self)
    }

    /// How it stands.
    pub fn standing(&self) -> &Standing {
        &self.standing
    }

    /// Invented demonstration data.
    pub fn demo(&self) -> bool {
        self.analysed.sounding.demo
    }

    /// Something has been changed or drafted that isn't decided.
    pub fn is_draft(&self) -> bool {
        *self.document() != self.baseline
    }

    /// A drag is under way.
    pub fn in_gesture(&self) -> bool {
        self.history.in_gesture()
    }

    /// There is a step to undo.
    pub fn can_undo(&self) -> bool {
        self.history.can_undo()
    }

    /// There is a step to redo.
    pub fn can_redo(&self) -> bool {
        self.history.can_redo()
    }

    /// Surface value as received.
    pub fn received_surface(&self, quantity: SurfaceQuantity) -> Option<Temperature> {
        surface_of(&self.analysed.profile, quantity)
    }

    /// Surface value of the working profile: where the handle is drawn.
    pub fn working_surface(&self, quantity: SurfaceQuantity) -> Option<Temperature> {
        surface_of(&self.results.working.profile, quantity)
    }

    /// By what it is recognised.
    pub fn identity(&self) -> &Identity {
        &self.identity
    }

    /// Whether a repair is among the enabled amendments.
    pub fn is_applied(&self, repair: RepairId) -> bool {
        self.finding_and_repair(repair).is_some_and(|(finding, _)| {
            applied_repair(&self.document().amendments, finding) == Some(repair.repair)
        })
    }

    /// Profile and numbers with a repair (or without it, when it is applied); the document stays as it is.
    pub fn preview(&self, id: RepairId) -> Option<Preview> {
        let (finding, repair) = self.finding_and_repair(id)?;
        let amendments = &self.document().amendments;
        let applied = applied_repair(amendments, finding) == Some(id.repair);
        let amendments = if applied {
            without_repair(amendments, finding, repair)
        } else {
            with_repair(amendments, finding, repair)
        };
        let working = amendments.apply(self.received(), self.daylight());
        let (numbers, environment) = Numbers::and_environment(&working.profile);
        let further = further_of(
            &self.analysed,
            self.document(),
            &working.profile,
            environment.as_ref(),
            &numbers,
            Some(&self.results.further),
        );
        Some(Preview {
            working,
            numbers,
            further,
            applied,
        })
    }

    /// The line for the chat or the log: station, time, verdict, CAPE range, reason, caution.
    pub fn copy_line(&self) -> String {
        crate::sentence::copy_line(self)
    }

    pub(crate) fn finding_and_repair(&self, id: RepairId) -> Option<(&Finding, &Repair)> {
        let finding = self.findings().get(id.finding)?;
        Some((finding, finding.repairs.get(id.repair)?))
    }

    /// The surface handle of a quantity can be moved: its row exists and, for the dew point, has a temperature.
    pub(crate) fn surface_row(&self) -> Option<usize> {
        self.analysed.profile.surface
    }
}

fn surface_of(profile: &Profile, quantity: SurfaceQuantity) -> Option<Temperature> {
    let row = profile.surface?;
    let column = match quantity {
        SurfaceQuantity::Dewpoint => &profile.dewpoint,
        SurfaceQuantity::Temperature => &profile.temperature,
    };
    (*column.get(row)?).map(Temperature::from_k)
}
