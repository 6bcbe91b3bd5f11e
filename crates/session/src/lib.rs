//! One desk's document: the tray of soundings, what the forecaster has changed, and every number that follows.
//!
//! Everything that changes goes through one door, [`Session::apply`], as a [`Command`]. Results are computed inside
//! that call and carry the [`Revision`] they belong to, so that whatever is painted next shows one revision only.
//! Files are read and analysed on a worker and arrive in [`Session::poll`].
//!
//! ```no_run
//! use dewbound_session::{Command, Config, Session, SurfaceQuantity, thermo::Temperature};
//!
//! let mut session = Session::new(Config::within(std::path::Path::new("office")));
//! session.open_demo();
//! while session.reading() > 0 {
//!     session.poll();
//! }
//! session.apply(Command::SetSurface(SurfaceQuantity::Dewpoint, Temperature::from_c(19.0)));
//! if let Some(item) = session.current() {
//!     println!("{}", item.results().which_parcel);
//! }
//! ```
//!
//! Deliberately absent: anything that paints, pointer positions, the clipboard, dialogs. No egui here.

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod action;
mod analysed;
mod apply;
mod arrivals;
mod command;
mod config;
mod decide;
mod demo;
mod disk;
mod document;
mod doubt;
mod draft;
mod edit;
mod guard;
mod history;
mod identity;
mod item;
mod keeper;
mod message;
mod office;
mod opening;
mod other;
mod possible;
mod pricing;
pub mod quantity;
mod reading;
pub mod report;
mod results;
mod sentence;
mod session;
mod standing;
mod tray;
mod wake;
mod winds;
pub mod wording;

pub use action::*;
pub use analysed::*;
pub use command::*;
pub use config::*;
pub use document::*;
pub use doubt::*;
pub use guard::{Defect, guarded};
pub use identity::*;
pub use item::*;
pub use message::*;
pub use office::{Office, OfficeProblem};
pub use other::OtherShown;
pub use reading::*;
pub use results::*;
pub use session::*;
pub use standing::*;
pub use tray::*;
pub use winds::*;

pub use dewbound_bounds as bounds;
pub use dewbound_chart as chart;
pub use dewbound_formats as formats;
pub use dewbound_ledger as ledger;
pub use dewbound_trust as trust;
pub use dewbound_trust::sounding;
pub use dewbound_trust::sounding::thermo;
