//! One sounding of the tray with everything that belongs to it.

use crate::sounding::{Daylight, Note, Numbers, Profile, Sounding};
use crate::thermo::Temperature;
use crate::trust::Finding;
use crate::{Analysed, Document, Preview, RepairId, Results, Revision, Standing, SurfaceQuantity};
use std::sync::Arc;

/// Identity of an item in the tray; never used twice in one session.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ItemId(pub(crate) u64);

/// One sounding of the tray.
#[derive(Debug)]
pub struct Item {
    pub(crate) id: ItemId,
    pub(crate) analysed: Arc<Analysed>,
    pub(crate) document: Document,
    pub(crate) undo: Vec<Document>,
    pub(crate) redo: Vec<Document>,
    pub(crate) gesture: Option<Document>,
    pub(crate) results: Results,
    pub(crate) standing: Standing,
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
        &self.document
    }

    /// The revision of the document; [`Results::revision`] is always the same.
    pub fn revision(&self) -> Revision {
        self.results.revision
    }

    /// Everything computed for that revision.
    pub fn results(&self) -> &Results {
        &self.results
    }

    /// How it stands.
    pub fn standing(&self) -> &Standing {
        &self.standing
    }

    /// Invented demonstration data.
    pub fn demo(&self) -> bool {
        self.analysed.sounding.demo
    }

    /// A drag is under way.
    pub fn in_gesture(&self) -> bool {
        self.gesture.is_some()
    }

    /// There is a step to undo.
    pub fn can_undo(&self) -> bool {
        !self.undo.is_empty()
    }

    /// There is a step to redo.
    pub fn can_redo(&self) -> bool {
        !self.redo.is_empty()
    }

    /// Surface value as received.
    pub fn received_surface(&self, quantity: SurfaceQuantity) -> Option<Temperature> {
        surface_of(&self.analysed.profile, quantity)
    }

    /// Surface value of the working profile: where the handle is drawn.
    pub fn working_surface(&self, quantity: SurfaceQuantity) -> Option<Temperature> {
        surface_of(&self.results.working.profile, quantity)
    }

    /// Profile and numbers with a repair (or without it, when it is applied); the document stays as it is.
    pub fn preview(&self, _repair: RepairId) -> Option<Preview> {
        todo!()
    }

    /// The line for the chat or the log: station, time, verdict, CAPE range, reason, caution.
    pub fn copy_line(&self) -> String {
        todo!()
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
