//! Colours of the window, as tokens: nothing else in this crate names a colour.
//!
//! Hues are those of Okabe & Ito (2008, "Color universal design"), darkened where they have to carry text. No state is
//! told by hue alone.

use crate::args::ThemeName;
use crate::fonts;
use dewbound_session::chart::{Colour, Ink, Palette};
use eframe::egui::{
    self, Color32, CornerRadius, FontFamily, FontId, Margin, Shadow, Stroke, Style, TextStyle,
    Visuals, vec2,
};

/// Colours of everything outside the chart's own display list.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Theme {
    /// Which one this is.
    pub name: ThemeName,
    /// Colours of the chart.
    pub palette: Palette,
    /// Behind the panels.
    pub desk: Color32,
    /// Panels.
    pub panel: Color32,
    /// Cards, fields: what lies on a panel.
    pub card: Color32,
    /// Buttons.
    pub raised: Color32,
    /// Buttons under the pointer.
    pub raised_hover: Color32,
    /// Edges and separators.
    pub line: Color32,
    /// Text.
    pub ink: Color32,
    /// Text of less weight.
    pub quiet: Color32,
    /// Focus, selection, the one button that matters.
    pub accent: Color32,
    /// Behind what is selected.
    pub selected: Color32,
    /// Text on `accent`.
    pub on_accent: Color32,
    /// Erroneous, failed.
    pub danger: Color32,
    /// Text on `danger`.
    pub on_danger: Color32,
    /// Doubtful, to be reviewed.
    pub warn: Color32,
    /// Text on `warn`.
    pub on_warn: Color32,
    /// Kept, repaired.
    pub good: Color32,
    /// Curve of the surface parcel.
    pub surface: Color32,
    /// Curve of the mixed parcel.
    pub mixed: Color32,
    /// Curve of the most unstable parcel.
    pub most_unstable: Color32,
    /// The credible interval.
    pub interval: Color32,
    /// Shadow of windows and menus.
    pub shadow: Color32,
}

const fn hex(rgb: u32) -> Color32 {
    Color32::from_rgb((rgb >> 16) as u8, (rgb >> 8) as u8, rgb as u8)
}

const LIGHT: Theme = Theme {
    name: ThemeName::Light,
    palette: Palette::Light,
    desk: hex(0xe6_dfcf),
    panel: hex(0xf4_efe4),
    card: hex(0xfd_faf4),
    raised: hex(0xe9_e2d2),
    raised_hover: hex(0xdd_d4bf),
    line: hex(0xb8_ac92),
    ink: hex(0x1e_2429),
    quiet: hex(0x55_5c64),
    accent: hex(0x00_5f96),
    selected: hex(0xcf_e3f1),
    on_accent: hex(0xff_ffff),
    danger: hex(0xa8_4300),
    on_danger: hex(0xff_ffff),
    warn: hex(0xe6_9f00),
    on_warn: hex(0x1e_2429),
    good: hex(0x00_664a),
    surface: hex(0xa8_4300),
    mixed: hex(0x00_5f96),
    most_unstable: hex(0x8a_4a74),
    interval: hex(0xef_e6d0),
    shadow: Color32::from_black_alpha(40),
};

const DARK: Theme = Theme {
    name: ThemeName::Dark,
    palette: Palette::Dark,
    desk: hex(0x0e_1114),
    panel: hex(0x1a_1f24),
    card: hex(0x23_2930),
    raised: hex(0x2f_3740),
    raised_hover: hex(0x3d_4751),
    line: hex(0x56_616c),
    ink: hex(0xee_ebe2),
    quiet: hex(0xaa_b0b6),
    accent: hex(0x56_b4e9),
    selected: hex(0x1f_4359),
    on_accent: hex(0x0e_1114),
    danger: hex(0xf0_8a4b),
    on_danger: hex(0x0e_1114),
    warn: hex(0xf0_c050),
    on_warn: hex(0x0e_1114),
    good: hex(0x4f_c9a4),
    surface: hex(0xf0_8a4b),
    mixed: hex(0x56_b4e9),
    most_unstable: hex(0xdf_9cc4),
    interval: hex(0x33_3a3c),
    shadow: Color32::from_black_alpha(140),
};

impl Theme {
    /// The theme of a name.
    pub const fn of(name: ThemeName) -> Self {
        match name {
            ThemeName::Light => LIGHT,
            ThemeName::Dark => DARK,
        }
    }

    /// The other one.
    pub const fn other(name: ThemeName) -> ThemeName {
        match name {
            ThemeName::Light => ThemeName::Dark,
            ThemeName::Dark => ThemeName::Light,
        }
    }

    /// Colour of one of the chart's inks.
    pub fn chart_ink(&self, ink: Ink) -> Color32 {
        let Colour { r, g, b, a } = self.palette.colour(ink);
        Color32::from_rgba_unmultiplied(r, g, b, a)
    }

    /// Puts the theme in force.
    pub(crate) fn install(&self, ctx: &egui::Context) {
        let theme = match self.name {
            ThemeName::Light => egui::Theme::Light,
            ThemeName::Dark => egui::Theme::Dark,
        };
        ctx.set_theme(theme);
        ctx.set_style_of(theme, self.style());
    }

    fn style(&self) -> Style {
        let mut style = Style {
            visuals: self.visuals(),
            animation_time: 0.0,
            ..Style::default()
        };
        style.text_styles = [
            (
                TextStyle::Small,
                FontId::new(11.0, FontFamily::Proportional),
            ),
            (TextStyle::Body, FontId::new(13.0, FontFamily::Proportional)),
            (
                TextStyle::Button,
                FontId::new(13.0, FontFamily::Proportional),
            ),
            (TextStyle::Heading, FontId::new(20.0, fonts::bold())),
            (
                TextStyle::Monospace,
                FontId::new(13.0, FontFamily::Monospace),
            ),
        ]
        .into();
        style.spacing.item_spacing = vec2(6.0, 4.0);
        style.spacing.button_padding = vec2(8.0, 4.0);
        style.spacing.interact_size.y = 26.0;
        style.spacing.window_margin = Margin::same(12);
        style.spacing.menu_margin = Margin::same(6);
        style.spacing.tooltip_width = 380.0;
        // A bar that floats over what it scrolls would hide text.
        style.spacing.scroll = egui::style::ScrollStyle::solid();
        style.interaction.selectable_labels = true;
        style
    }

    fn visuals(&self) -> Visuals {
        let mut visuals = match self.name {
            ThemeName::Light => Visuals::light(),
            ThemeName::Dark => Visuals::dark(),
        };
        visuals.weak_text_color = Some(self.quiet);
        visuals.hyperlink_color = self.accent;
        visuals.faint_bg_color = self.raised;
        visuals.extreme_bg_color = self.card;
        visuals.text_edit_bg_color = Some(self.card);
        visuals.code_bg_color = self.raised;
        visuals.warn_fg_color = self.warn;
        visuals.error_fg_color = self.danger;
        visuals.window_fill = self.panel;
        visuals.window_stroke = Stroke::new(1.0, self.line);
        visuals.panel_fill = self.panel;
        visuals.window_corner_radius = CornerRadius::same(4);
        visuals.menu_corner_radius = CornerRadius::same(4);
        visuals.disabled_alpha = 0.6;
        let shadow = Shadow {
            offset: [2, 4],
            blur: 10,
            spread: 0,
            color: self.shadow,
        };
        visuals.window_shadow = shadow;
        visuals.popup_shadow = shadow;
        visuals.selection.bg_fill = self.selected;
        visuals.selection.stroke = Stroke::new(1.5, self.accent);
        visuals.text_cursor.stroke = Stroke::new(2.0, self.accent);
        let corner = CornerRadius::same(3);
        let widgets = &mut visuals.widgets;
        for (widget, fill, edge) in [
            (
                &mut widgets.noninteractive,
                self.panel,
                Stroke::new(1.0, self.line),
            ),
            (
                &mut widgets.inactive,
                self.raised,
                Stroke::new(1.0, self.line),
            ),
            (
                &mut widgets.hovered,
                self.raised_hover,
                Stroke::new(1.0, self.quiet),
            ),
            (
                &mut widgets.active,
                self.raised_hover,
                Stroke::new(2.0, self.accent),
            ),
            (
                &mut widgets.open,
                self.raised_hover,
                Stroke::new(1.0, self.line),
            ),
        ] {
            widget.bg_fill = fill;
            widget.weak_bg_fill = fill;
            widget.bg_stroke = edge;
            widget.fg_stroke = Stroke::new(1.0, self.ink);
            widget.corner_radius = corner;
            widget.expansion = 0.0;
        }
        visuals
    }
}

/// Text in the bold face.
pub(crate) fn bold(text: impl Into<String>) -> egui::RichText {
    egui::RichText::new(text).family(fonts::bold())
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative luminance and contrast: Web Content Accessibility Guidelines 2.2, definitions.
    fn contrast(a: Color32, b: Color32) -> f64 {
        let luminance = |colour: Color32| {
            let channel = |value: u8| {
                let c = f64::from(value) / 255.0;
                if c <= 0.04045 {
                    c / 12.92
                } else {
                    ((c + 0.055) / 1.055).powf(2.4)
                }
            };
            0.2126 * channel(colour.r())
                + 0.7152 * channel(colour.g())
                + 0.0722 * channel(colour.b())
        };
        let (a, b) = (luminance(a), luminance(b));
        (a.max(b) + 0.05) / (a.min(b) + 0.05)
    }

    #[test]
    fn text_can_be_read() {
        for name in [ThemeName::Light, ThemeName::Dark] {
            let theme = Theme::of(name);
            let pairs = [
                (
                    "ink",
                    theme.ink,
                    vec![
                        theme.panel,
                        theme.card,
                        theme.raised,
                        theme.raised_hover,
                        theme.selected,
                    ],
                ),
                (
                    "quiet",
                    theme.quiet,
                    vec![theme.panel, theme.card, theme.selected],
                ),
                ("danger", theme.danger, vec![theme.panel, theme.card]),
                ("good", theme.good, vec![theme.panel, theme.card]),
                ("accent", theme.accent, vec![theme.panel, theme.card]),
                ("on accent", theme.on_accent, vec![theme.accent]),
                ("on danger", theme.on_danger, vec![theme.danger]),
                ("on warn", theme.on_warn, vec![theme.warn]),
                ("surface", theme.surface, vec![theme.card]),
                ("mixed", theme.mixed, vec![theme.card]),
                ("most unstable", theme.most_unstable, vec![theme.card]),
            ];
            for (what, text, grounds) in pairs {
                for ground in grounds {
                    let found = contrast(text, ground);
                    // 4.5:1 is level AA for text of ordinary size.
                    assert!(
                        found >= 4.5,
                        "{name:?}: {what} on {ground:?} has {found:.2}"
                    );
                }
            }
        }
    }
}
