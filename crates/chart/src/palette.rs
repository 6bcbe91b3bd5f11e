//! Colours.

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
        Ink::Paper => rgb(0xfbf7ee),
        Ink::Handle(Handle::Dewpoint) => rgb(0x00664a),
        _ => rgb(0x333333),
    }
}

const fn dark(ink: Ink) -> Colour {
    match ink {
        Ink::Paper => rgb(0x16191d),
        Ink::Bracket(BracketGrade::Erroneous) => rgb(0xd55e00),
        _ => rgb(0xdddddd),
    }
}
