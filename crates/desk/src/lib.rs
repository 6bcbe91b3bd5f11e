//! The desk: the window of Dewbound.
//!
//! Each frame begins in `logic`: what the last frame's widgets asked for, pointer and keys read against the last
//! frame's geometry, applied to the session, computed. Only then is the frame painted, from one revision, and nothing
//! changes while it is.
//!
//! Deliberately absent: any number. Everything shown is computed below, in the session and the crates under it.

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod app;
mod args;
mod ask;
mod chart_frame;
mod chart_keys;
mod chart_paint;
mod chart_view;
mod config;
mod dialogs;
mod display;
mod files;
mod findings;
mod fonts;
mod handle;
mod icon;
mod input;
mod keys;
mod layout;
mod marks;
mod menu;
mod motion;
mod number_rows;
mod numbers;
mod paper;
mod preferences;
mod quantity;
mod response;
mod startup;
mod status;
mod strokes;
mod text;
mod theme;
mod timing;
mod title;
mod tray;
mod units;
mod verdict;
mod view;
mod winds_frame;
mod winds_keys;
mod winds_list;
mod winds_pointer;
mod winds_view;

pub use app::Desk;
pub use args::{Args, Graphics, ThemeName};
pub use startup::run;

/// Strings of the interface that are not in sight all the time, so that a test can ask for their glyphs.
pub fn interface_strings() -> Vec<String> {
    let mut strings = vec![status::CAUTION.to_owned(), chart_view::HINT.to_owned()];
    for quantity in dewbound_session::quantity::all() {
        let particulars = quantity.particulars().map(|(_, text)| text);
        strings.extend(
            [quantity.label, quantity.definition, quantity.group.title()]
                .into_iter()
                .chain(particulars)
                .map(str::to_owned),
        );
    }
    let keys = keys::HANDLE_KEYS.iter().chain(keys::CHART_KEYS);
    for (keys, what) in keys.chain(keys::WINDS_KEYS) {
        strings.extend([(*keys).to_owned(), (*what).to_owned()]);
    }
    strings
}
