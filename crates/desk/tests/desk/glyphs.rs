//! Every string of the interface can be drawn with the face that comes along.

use crate::support::*;
use dewbound_session::ACTIONS;
use eframe::egui::FontId;

/// What the face was chosen for: degree, minus, superscripts, arrows, Greek, signs of comparison, dots and dashes.
const WANTED: &str = "0123456789 °−⁻⁰¹²³⁴⁵⁶⁷⁸⁹←→↑↓θΘσΔμ≥≤±·–—…×√";

#[test]
fn the_face_has_what_it_was_chosen_for() {
    let (_folder, window) = usual();
    for font in [
        FontId::proportional(13.0),
        FontId::new(13.0, eframe::egui::FontFamily::Name("bold".into())),
    ] {
        for c in WANTED.chars() {
            assert!(
                window.ctx.fonts_mut(|fonts| fonts.has_glyph(&font, c)),
                "{font:?} has no {c:?} (U+{:04X})",
                c as u32
            );
        }
    }
}

#[test]
fn figures_are_tabular() {
    let (_folder, window) = usual();
    let widths: Vec<f32> = "0123456789"
        .chars()
        .map(|c| {
            window
                .ctx
                .fonts_mut(|fonts| fonts.glyph_width(&FontId::proportional(13.0), c))
        })
        .collect();
    assert!(
        widths.iter().all(|width| (width - widths[0]).abs() < 1e-3),
        "{widths:?}"
    );
}

/// The harness panics at the first character no font can draw; here every story, card and box has been laid out, and the
/// strings that were not are asked for one by one.
#[test]
fn every_string_has_glyphs() {
    let (_folder, mut window) = usual();
    let mut strings: Vec<String> = ACTIONS
        .iter()
        .flat_map(|declaration| [declaration.label, declaration.tooltip])
        .map(str::to_owned)
        .collect();
    strings.extend(dewbound_desk::interface_strings());
    for rule in dewbound_session::trust::RULES {
        strings.extend([rule.title(), rule.about(), rule.source()].map(str::to_owned));
    }
    let all = window.state().session().items().len();
    for _ in 0..all {
        window.key_press(eframe::egui::Key::PageDown);
        window.run();
        strings.extend(texts(&window));
        for finding in item(&window).findings() {
            strings.extend([
                finding.summary.clone(),
                finding.guilty.clone(),
                finding.innocent.clone(),
                finding.caveat.clone(),
            ]);
            strings.extend(finding.repairs.iter().map(|repair| repair.what.clone()));
            strings.extend(
                finding
                    .evidence
                    .iter()
                    .flat_map(|evidence| [evidence.label.to_owned(), evidence.unit.to_owned()]),
            );
        }
    }
    let font = FontId::proportional(13.0);
    for text in strings {
        for c in text.chars().filter(|c| !c.is_control()) {
            assert!(
                window.ctx.fonts_mut(|fonts| fonts.has_glyph(&font, c)),
                "no {c:?} (U+{:04X}) for {text:?}",
                c as u32
            );
        }
    }
}
