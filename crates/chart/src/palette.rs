//! Colours.
//!
//! The hues are those of Okabe & Ito (Color Universal Design, 2008): told apart with every common kind of colour vision.
//! On light paper they are darkened, on dark paper lightened, until lines stand out at 3:1 and text at 4.5:1 (WCAG 2
//! contrast). No state is told by hue alone: dashes, hatching, shape and labels go with it.

use crate::{BracketGrade, Handle, Ink};

/// A colour with opacity, sRGB.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Colour {
    /// Red.
    pub r: u8,
    /// Green.
    pub g: u8,
    /// Blue.
    pub b: u8,
    /// Opacity, 255 = opaque; not premultiplied.
    pub a: u8,
}

/// Which set of colours.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default)]
pub enum Palette {
    /// Chart paper: warm off-white, quiet isopleths.
    #[default]
    Light,
    /// Dark.
    Dark,
}

const fn rgb(hex: u32) -> Colour {
    rgba(hex, 255)
}

const fn rgba(hex: u32, a: u8) -> Colour {
    Colour {
        r: (hex >> 16) as u8,
        g: (hex >> 8) as u8,
        b: hex as u8,
        a,
    }
}

impl Palette {
    /// Colour of an ink.
    pub const fn colour(self, ink: Ink) -> Colour {
        match self {
            Self::Light => light(ink),
            Self::Dark => dark(ink),
        }
    }
}

const fn light(ink: Ink) -> Colour {
    match ink {
        Ink::Paper | Ink::OnMark => rgb(0xfbf7ee),
        Ink::Edge | Ink::Label | Ink::Wind | Ink::LevelMark => rgb(0x2b2a27),
        Ink::QuietLabel | Ink::HeightScale | Ink::Cursor | Ink::HelicityHatch => rgb(0x5d5a53),
        Ink::Isotherm => rgb(0x968a7c),
        Ink::Isobar | Ink::WindRing => rgb(0x908b82),
        Ink::FreezingIsotherm => rgb(0x4d6f8f),
        Ink::DryAdiabat => rgb(0xb0834f),
        Ink::MoistAdiabat => rgb(0x6e9380),
        Ink::MixingRatioLine => rgb(0x956d8b),
        Ink::IsothermLabel => rgb(0x6b5f50),
        Ink::DryAdiabatLabel => rgb(0x8a5a22),
        Ink::MoistAdiabatLabel => rgb(0x3f6d58),
        Ink::MixingRatioLabel => rgb(0x7d5373),
        Ink::Ground => rgb(0x93886f),
        Ink::Temperature | Ink::Handle(Handle::Temperature) | Ink::Whisker(Handle::Temperature) => {
            rgb(0xbf4a00)
        }
        Ink::Dewpoint | Ink::Handle(Handle::Dewpoint) | Ink::Whisker(Handle::Dewpoint) => {
            rgb(0x0063a0)
        }
        Ink::VirtualTemperature => rgb(0x7a3a10),
        Ink::ReceivedTemperature => rgb(0xd55e00),
        Ink::ReceivedDewpoint => rgb(0x2b86c4),
        Ink::PreviewTemperature | Ink::PreviewDewpoint => rgb(0x00795a),
        Ink::Parcel => rgb(0x000000),
        Ink::ParcelBand => rgba(0x56b4e9, 96),
        Ink::CapeHatch => rgb(0x9a6300),
        Ink::CinHatch => rgb(0x007a5c),
        Ink::Bracket(grade) => match grade {
            BracketGrade::Erroneous => rgb(0x8f2f67),
            BracketGrade::Doubtful => rgb(0x9b3f75),
            BracketGrade::Informative | BracketGrade::Repaired => rgb(0x5d5a53),
            BracketGrade::FromEdit => rgb(0x2b2a27),
        },
        Ink::Candidate => rgb(0x2b2a27),
        Ink::CandidateSetAside => rgb(0x6e6a61),
        Ink::Focus => rgb(0x000000),
        Ink::Stamp => rgb(0x9b3f75),
    }
}

const fn dark(ink: Ink) -> Colour {
    match ink {
        Ink::Paper | Ink::OnMark => rgb(0x15181c),
        Ink::Edge | Ink::Label | Ink::Wind | Ink::LevelMark => rgb(0xe8e4da),
        Ink::QuietLabel | Ink::HeightScale | Ink::Cursor | Ink::HelicityHatch => rgb(0xaba89f),
        Ink::Isotherm => rgb(0x6d675e),
        Ink::Isobar | Ink::WindRing => rgb(0x6c6a66),
        Ink::FreezingIsotherm => rgb(0x84a9cc),
        Ink::DryAdiabat => rgb(0x7f6542),
        Ink::MoistAdiabat => rgb(0x4f7767),
        Ink::MixingRatioLine => rgb(0x94708d),
        Ink::IsothermLabel => rgb(0xa89f90),
        Ink::DryAdiabatLabel => rgb(0xc29a66),
        Ink::MoistAdiabatLabel => rgb(0x77b095),
        Ink::MixingRatioLabel => rgb(0xb98bb0),
        Ink::Ground => rgb(0x7f775f),
        Ink::Temperature | Ink::Handle(Handle::Temperature) | Ink::Whisker(Handle::Temperature) => {
            rgb(0xff8a3d)
        }
        Ink::Dewpoint | Ink::Handle(Handle::Dewpoint) | Ink::Whisker(Handle::Dewpoint) => {
            rgb(0x56b4e9)
        }
        Ink::VirtualTemperature => rgb(0xe0a684),
        Ink::ReceivedTemperature => rgb(0xd55e00),
        Ink::ReceivedDewpoint => rgb(0x2f8fd0),
        Ink::PreviewTemperature | Ink::PreviewDewpoint => rgb(0x2fd0a0),
        Ink::Parcel => rgb(0xffffff),
        Ink::ParcelBand => rgba(0x56b4e9, 72),
        Ink::CapeHatch => rgb(0xe69f00),
        Ink::CinHatch => rgb(0x1fbf92),
        Ink::Bracket(grade) => match grade {
            BracketGrade::Erroneous => rgb(0xf09ac6),
            BracketGrade::Doubtful => rgb(0xdd8fb8),
            BracketGrade::Informative | BracketGrade::Repaired => rgb(0xaba89f),
            BracketGrade::FromEdit => rgb(0xe8e4da),
        },
        Ink::Candidate => rgb(0xe8e4da),
        Ink::CandidateSetAside => rgb(0x9a978e),
        Ink::Focus => rgb(0xf0e442),
        Ink::Stamp => rgb(0xdd8fb8),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Relative luminance and contrast ratio: WCAG 2.2, definitions.
    fn luminance(c: Colour) -> f64 {
        let linear = |v: u8| {
            let v = f64::from(v) / 255.0;
            if v <= 0.04045 {
                v / 12.92
            } else {
                ((v + 0.055) / 1.055).powf(2.4)
            }
        };
        0.2126 * linear(c.r) + 0.7152 * linear(c.g) + 0.0722 * linear(c.b)
    }

    fn contrast(a: Colour, b: Colour) -> f64 {
        let (a, b) = (luminance(a), luminance(b));
        (a.max(b) + 0.05) / (a.min(b) + 0.05)
    }

    /// A see-through colour on an opaque one.
    fn over(top: Colour, below: Colour) -> Colour {
        let share = f64::from(top.a) / 255.0;
        let mix =
            |t: u8, b: u8| (share * f64::from(t) + (1.0 - share) * f64::from(b)).round() as u8;
        Colour {
            r: mix(top.r, below.r),
            g: mix(top.g, below.g),
            b: mix(top.b, below.b),
            a: 255,
        }
    }

    /// Inks never used for text.
    const LINES: [Ink; 16] = [
        Ink::ReceivedTemperature,
        Ink::ReceivedDewpoint,
        Ink::Edge,
        Ink::WindRing,
        Ink::HelicityHatch,
        Ink::Isotherm,
        Ink::FreezingIsotherm,
        Ink::Isobar,
        Ink::DryAdiabat,
        Ink::MoistAdiabat,
        Ink::MixingRatioLine,
        Ink::Ground,
        Ink::VirtualTemperature,
        Ink::Parcel,
        Ink::Cursor,
        Ink::Focus,
    ];

    #[test]
    fn the_ends_of_the_contrast_scale_are_right() {
        // WCAG 2.2: black on white 21:1.
        assert!((contrast(rgb(0), rgb(0xffffff)) - 21.0).abs() < 1e-9);
    }

    #[test]
    fn text_and_lines_stand_out_from_the_paper() {
        for palette in [Palette::Light, Palette::Dark] {
            let paper = palette.colour(Ink::Paper);
            for ink in Ink::ALL {
                let least = match ink {
                    Ink::Paper | Ink::ParcelBand => continue,
                    Ink::OnMark => {
                        let mark = palette.colour(Ink::Bracket(BracketGrade::Erroneous));
                        let got = contrast(palette.colour(ink), mark);
                        assert!(got >= 4.5, "{palette:?} {ink:?}: {got:.2}");
                        continue;
                    }
                    ink if LINES.contains(&ink) => 3.0,
                    _ => 4.5,
                };
                let got = contrast(palette.colour(ink), paper);
                assert!(got >= least, "{palette:?} {ink:?}: {got:.2}");
            }
        }
    }

    #[test]
    fn curves_stand_out_from_the_parcel_band() {
        for palette in [Palette::Light, Palette::Dark] {
            let band = over(palette.colour(Ink::ParcelBand), palette.colour(Ink::Paper));
            let curves = [
                Ink::Temperature,
                Ink::Dewpoint,
                Ink::Parcel,
                Ink::CapeHatch,
                Ink::CinHatch,
                Ink::VirtualTemperature,
            ];
            for ink in curves {
                let got = contrast(palette.colour(ink), band);
                assert!(got >= 3.0, "{palette:?} {ink:?}: {got:.2}");
            }
        }
    }
}
