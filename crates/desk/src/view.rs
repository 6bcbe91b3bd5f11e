//! What the window remembers that is no part of any document.

use crate::args::ThemeName;
use crate::preferences::Preferences;
use crate::timing::Timing;
use dewbound_session::chart::{HodographView, Units, View as ChartView, WINDS_TOP};
use dewbound_session::quantity::Group;
use dewbound_session::sounding::Parcel;
use dewbound_session::thermo::Vector;
use dewbound_session::{Item, ItemId, Preview, RepairId, Revision, SurfaceQuantity};
use eframe::egui;
use std::collections::{BTreeSet, HashMap};

/// Findings or numbers, where only one has room.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub(crate) enum Tab {
    /// Findings.
    #[default]
    Findings,
    /// Numbers.
    Numbers,
}

/// What the centre of the window shows.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub(crate) enum Page {
    /// The skew-T chart and the response.
    #[default]
    Chart,
    /// Wind against height and the hodograph.
    Winds,
}

/// A box over the window.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) enum DialogBox {
    /// What every key does.
    Keys,
    /// What the program is for, and what it is not.
    About,
    /// Who decides; asked at the first verdict.
    Initials(String),
    /// Paths, where the system offers no file dialog.
    Paths(String),
    /// Where the station lies: latitude and longitude as typed.
    Position(String, String),
    /// Everything the desk has to tell.
    Messages,
}

/// What the pointer is doing since it went down.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Gesture {
    /// Dragging a handle; `grab_k` is the handle's value less the value under the pointer when it was taken.
    Handle {
        /// Which.
        quantity: SurfaceQuantity,
        /// K.
        grab_k: f64,
    },
    /// Dragging the working value of the response.
    Response {
        /// K.
        grab_k: f64,
    },
    /// Dragging the storm motion; `grab_ms` is the motion less what is under the pointer when it was taken.
    Motion {
        /// m/s, towards east and north.
        grab_ms: Vector,
    },
    /// Dragging the paper.
    Pan,
    /// Dragging the hodograph's paper.
    PanWinds,
    /// Given up with Esc; nothing until the button is up.
    GivenUp,
}

/// A number being typed into a handle.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) struct Typing {
    /// Which handle.
    pub quantity: SurfaceQuantity,
    /// So far.
    pub text: String,
}

/// A repair seen but not applied, kept while its button is under the pointer.
#[derive(Debug, Clone)]
pub(crate) struct Previewed {
    /// Of which sounding.
    pub item: ItemId,
    /// Of which revision.
    pub revision: Revision,
    /// Which repair.
    pub repair: RepairId,
    /// What it would make of the profile; `None`: it can't be told.
    pub preview: Option<Preview>,
}

/// The window's own state.
#[derive(Debug)]
pub(crate) struct View {
    /// Colours.
    pub theme: ThemeName,
    /// Size of everything.
    pub zoom: f32,
    /// Units shown.
    pub units: Units,
    /// What the centre shows.
    pub page: Page,
    /// Which tab.
    pub tab: Tab,
    /// Groups of numbers that are open.
    pub open_groups: BTreeSet<Group>,
    /// Whose path is drawn; `None`: the one that matters for the sounding as received.
    pub parcel: Option<Parcel>,
    /// Part of the diagram looked at, where it isn't the fitting one.
    pub charts: HashMap<ItemId, ChartView>,
    /// Part of the hodograph looked at, where it isn't the fitting one.
    pub hodographs: HashMap<ItemId, HodographView>,
    /// The winds are drawn up to here, m.
    pub winds_top: f64,
    /// Height at which the winds are read, from the keyboard, m.
    pub height: Option<f64>,
    /// The storm motion being typed.
    pub motion_typed: Option<String>,
    /// The open card.
    pub card: Option<(ItemId, usize)>,
    /// The repair being looked at.
    pub previewed: Option<Previewed>,
    /// The number being typed.
    pub typing: Option<Typing>,
    /// What the pointer is doing.
    pub gesture: Option<Gesture>,
    /// Where the chart is read, from the keyboard.
    pub cursor: Option<egui::Pos2>,
    /// The line over the chart until the first drag.
    pub hint: bool,
    /// Another sounding has become the current one: its line of the tray is brought into sight.
    pub reveal: bool,
    /// The box over the window.
    pub dialog: Option<DialogBox>,
    /// Computing times.
    pub timing: Timing,
    /// They are shown.
    pub show_timing: bool,
}

impl View {
    /// At the start.
    pub fn new(preferences: &Preferences, show_timing: bool) -> Self {
        Self {
            theme: preferences.theme,
            zoom: preferences.zoom,
            units: preferences.units,
            page: Page::default(),
            tab: Tab::default(),
            open_groups: BTreeSet::new(),
            parcel: None,
            charts: HashMap::new(),
            hodographs: HashMap::new(),
            winds_top: WINDS_TOP,
            height: None,
            motion_typed: None,
            card: None,
            previewed: None,
            typing: None,
            gesture: None,
            cursor: None,
            hint: false,
            reveal: false,
            dialog: None,
            timing: Timing::default(),
            show_timing,
        }
    }

    /// Whose path is drawn: the chosen one, else the surface parcel, unless as received it has no CAPE and another one has. The
    /// received numbers decide, so that the choice doesn't jump while something is dragged.
    pub fn parcel(&self, item: &Item) -> Parcel {
        if let Some(chosen) = self.parcel {
            return chosen;
        }
        let cape = |parcel| {
            item.received_numbers()
                .parcel(parcel)
                .map_or(0.0, |ascent| ascent.cape)
        };
        if cape(Parcel::Surface) > 0.0 {
            return Parcel::Surface;
        }
        // Of equals the first: max_by would take the last.
        Parcel::ALL
            .into_iter()
            .rev()
            .max_by(|&a, &b| cape(a).total_cmp(&cape(b)))
            .unwrap_or(Parcel::Surface)
    }

    /// Opens a group of numbers, or closes it.
    pub fn toggle_group(&mut self, group: Group) {
        if !self.open_groups.remove(&group) {
            self.open_groups.insert(group);
        }
    }

    /// The open card of a sounding.
    pub fn open_card(&self, item: ItemId) -> Option<usize> {
        self.card
            .and_then(|(of, card)| (of == item).then_some(card))
    }
}
