//! What painting asks for. Nothing changes while a frame is painted: widgets put an [`Ask`] on the list, and the next
//! frame begins by carrying it out.

use crate::view::{DialogBox, Tab};
use dewbound_session::chart::Units;
use dewbound_session::quantity::Group;
use dewbound_session::sounding::Parcel;
use dewbound_session::{Action, Command, ItemId, RepairId};
use eframe::egui;

/// One thing to be done before the next frame is painted.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Ask {
    /// A change of the document or the tray.
    Command(Command),
    /// Something with a name of its own.
    Action(Action),
    /// Which of the two tabs is shown.
    Tab(Tab),
    /// Whose path and areas are drawn.
    Parcel(Parcel),
    /// Open a group of numbers, or close it.
    Group(Group),
    /// Other units.
    Units(Units),
    /// Open a card, or close the open one.
    Card(ItemId, Option<usize>),
    /// Open, change or close a box over the window.
    Dialog(Option<DialogBox>),
    /// Initials were given in a box; then decide.
    SignAndDecide(String),
    /// Paths typed by hand, one a line.
    OpenTyped(String),
}

/// What one painted frame hands back.
#[derive(Debug, Default)]
pub(crate) struct Asks {
    /// To be done, in order.
    pub list: Vec<Ask>,
    /// The repair whose button is under the pointer or has the keyboard.
    pub preview: Option<RepairId>,
    /// What has the keyboard, said in the status line.
    pub focused: Option<String>,
}

impl Asks {
    /// Puts one on the list.
    pub fn push(&mut self, ask: Ask) {
        self.list.push(ask);
    }

    /// A change of the document.
    pub fn command(&mut self, command: Command) {
        self.push(Ask::Command(command));
    }

    /// Remembers what has the keyboard, when this does.
    pub fn describe(&mut self, response: &egui::Response, what: impl FnOnce() -> String) {
        if response.has_focus() {
            self.focused = Some(what());
        }
    }
}
