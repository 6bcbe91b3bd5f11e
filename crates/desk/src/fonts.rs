//! The one text face: B612, drawn for cockpit screens, with tabular figures.
//!
//! Nothing is taken from the system for our own strings, so that a forecaster's desk looks alike everywhere; only
//! names in other scripts may fall back to a system face.

use eframe::egui::{self, FontData, FontDefinitions, FontFamily};
use std::sync::Arc;

const REGULAR: &[u8] = include_bytes!("../../../assets/fonts/B612-Regular.otf");
const BOLD: &[u8] = include_bytes!("../../../assets/fonts/B612-Bold.otf");

/// The bold family, for numbers that decide and for headings.
pub fn bold() -> FontFamily {
    FontFamily::Name("bold".into())
}

/// The families of the desk.
pub fn definitions() -> FontDefinitions {
    let mut fonts = FontDefinitions::empty();
    for (name, bytes) in [("regular", REGULAR), ("bold", BOLD)] {
        fonts
            .font_data
            .insert(name.to_owned(), Arc::new(FontData::from_static(bytes)));
    }
    for (family, name) in [
        (FontFamily::Proportional, "regular"),
        // Tabular figures make a separate monospaced face unnecessary.
        (FontFamily::Monospace, "regular"),
        (bold(), "bold"),
    ] {
        fonts.families.insert(family, vec![name.to_owned()]);
    }
    fonts
}

/// Puts the families in force.
pub(crate) fn install(ctx: &egui::Context) {
    ctx.set_fonts(definitions());
}
