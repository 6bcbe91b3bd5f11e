//! Every change there is.

use crate::ledger::Verdict;
use crate::sounding::{Amendment, Position, Reach};
use crate::thermo::{Pressure, Temperature, Vector};
use crate::{IntervalEnd, ItemId, MessageId};

/// Which surface value; also names the two handles.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum SurfaceQuantity {
    /// Surface dew point.
    Dewpoint,
    /// Surface temperature.
    Temperature,
}

impl SurfaceQuantity {
    /// In words: "surface dew point".
    pub fn words(self) -> &'static str {
        match self {
            Self::Dewpoint => "surface dew point",
            Self::Temperature => "surface temperature",
        }
    }
}

/// A repair of a finding of the current sounding, by index into [`crate::Item::findings`] and [`crate::trust::Finding::repairs`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct RepairId {
    /// Index of the finding.
    pub finding: usize,
    /// Index of the repair within it.
    pub repair: usize,
}

/// One change, to be given to [`crate::Session::apply`]. Everything but choosing and closing acts on the current sounding.
#[derive(Debug, Clone, PartialEq)]
pub enum Command {
    /// Make an item the current one.
    Select(ItemId),
    /// The next one down the tray.
    SelectNext,
    /// The one above in the tray.
    SelectPrevious,
    /// Take an item out of the tray (its draft and its decisions stay).
    Close(ItemId),

    /// Set a surface value. Held to Td <= T; a value refused outright is told in a message.
    SetSurface(SurfaceQuantity, Temperature),
    /// Move a surface value by so many kelvins. `repeat`: the key is being held down, so this joins the undo step before it.
    Nudge {
        /// Which value.
        quantity: SurfaceQuantity,
        /// By how much, K.
        by_k: f64,
        /// A repetition of a key held down.
        repeat: bool,
    },
    /// Back to the received value.
    ResetSurface(SurfaceQuantity),
    /// Choose how far a surface edit reaches; `None`: the default of this profile.
    SetReach(Option<Reach>),
    /// Add a repair's amendments (or switch them on again).
    ApplyRepair(RepairId),
    /// Take a repair's amendments out.
    WithdrawRepair(RepairId),
    /// Add any other amendment at the end of the list.
    AddAmendment(Amendment),
    /// Switch one entry of the list on or off.
    ToggleAmendment(usize),
    /// Take one entry out of the list.
    RemoveAmendment(usize),
    /// Take all entries out; the chosen reach goes back to the default too.
    ClearAmendments,
    /// Pin an end of the interval at a dew point.
    Pin(IntervalEnd, Temperature),
    /// Pin an end of the interval at the working dew point.
    PinAtWorking(IntervalEnd),
    /// Let an end of the interval go again.
    Unpin(IntervalEnd),
    /// Lift a parcel from this level too; `None`: no longer.
    PickLevel(Option<Pressure>),
    /// Measure helicity against this storm motion; `None`: against the estimated one. Not finite: refused.
    SetStormMotion(Option<Vector>),
    /// Move the storm motion by so much (m/s): from the one set, else from the estimated one, else from none.
    NudgeStormMotion {
        /// By how much.
        by: Vector,
        /// A repetition of a key held down: joins the undo step before it.
        repeat: bool,
    },

    /// One step back.
    Undo,
    /// One step forward again.
    Redo,
    /// A drag (or a text edit) begins: everything until [`Command::EndGesture`] is one undo step.
    BeginGesture,
    /// The drag ends; the draft is written.
    EndGesture,
    /// The drag is given up (Esc): all is as it was when it began.
    CancelGesture,

    /// Choose the verdict being drafted.
    ChooseVerdict(Option<Verdict>),
    /// The reasons being drafted. Successive edits are one undo step.
    SetReasons(String),
    /// Who is on shift; remembered in the office folder.
    SetInitials(String),
    /// Keep the drafted verdict in the ledger.
    Decide,

    /// Compute CAPE by other kinds of ascent for the document as it is; no change. Nothing while a drag is under way.
    CompareAscents,

    /// The position of the current sounding's station, typed once; remembered in the office folder.
    SetPosition(Position),
    /// Put a message away.
    Dismiss(MessageId),
}
