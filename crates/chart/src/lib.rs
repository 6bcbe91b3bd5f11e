//! Skew-T log-p geometry and isopleths as a display list.
//!
//! A [`Geometry`] places pressure and temperature in a frame. [`background`] gives the isopleths of a view (keep it until the
//! geometry changes: [`BackgroundCache`]), [`foreground`] the sounding on top, rebuilt every frame while something is
//! dragged. Both are a [`Scene`]: a list of primitives already clipped, dashed and hatched by rule, so that the desk,
//! SVG, PDF and PNG draw the same picture. A scene names what a thing *is* ([`Ink`]); a [`Palette`] says its colour.
//!
//! The page of the winds ([`hodograph`], [`wind_strips`]) is two more scenes, with geometries of their own.
//!
//! Deliberately absent: windows, pointers, fonts, findings, and any number that is not already in the profile or the ascent.
//!
//! ```
//! use dewbound_chart::{Geometry, Rect, View};
//! use dewbound_sounding::thermo::{Pressure, Temperature};
//! let geometry = Geometry::new(Rect::new(0.0, 0.0, 900.0, 700.0), View::default());
//! let spot = geometry.point(Pressure::from_hpa(500.0), Temperature::from_c(-10.0));
//! let (p, t) = geometry.at(spot);
//! assert!((p.hpa() - 500.0).abs() < 1e-6 && (t.c() + 10.0).abs() < 1e-6);
//! ```

#![cfg_attr(test, allow(clippy::unwrap_used, clippy::expect_used))]

mod background;
mod barb;
mod brackets;
mod canvas;
mod curve;
mod foreground;
mod geometry;
mod handles;
mod hatch;
mod heights;
mod input;
mod isopleths;
mod legend;
mod palette;
mod parcel;
mod readout;
mod scene;
mod surface;
mod svg;
mod winds;
mod winds_page;
mod wording;

pub use background::*;
pub use foreground::*;
pub use geometry::*;
pub use handles::*;
pub use heights::*;
pub use input::*;
pub use palette::*;
pub use readout::*;
pub use scene::*;
pub use svg::*;
pub use winds_page::*;
