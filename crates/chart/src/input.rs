//! What the foreground is drawn from.

use crate::{BracketGrade, Handle, HeightScale, Point};
use dewbound_sounding::{
    Profile,
    thermo::{Air, Ascent, Environment, Method, Pressure, Temperature},
};

/// Unit of temperature as shown.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum TemperatureUnit {
    /// degC.
    #[default]
    Celsius,
    /// degF.
    Fahrenheit,
}

/// Unit of height as shown.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum HeightUnit {
    /// Kilometres on the scale, metres in the readout.
    #[default]
    Metric,
    /// Feet; thousands of feet on the scale.
    Feet,
}

/// Unit of wind speed in the readout; barbs are in knots whatever is chosen.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum SpeedUnit {
    /// Knots.
    #[default]
    Knots,
    /// m/s.
    MetresPerSecond,
}

/// Units as shown.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Units {
    /// Of temperature and dew point; isotherms stay in degC.
    pub temperature: TemperatureUnit,
    /// Of height.
    pub height: HeightUnit,
    /// Of wind speed.
    pub speed: SpeedUnit,
}

/// Everything on top of the isopleths.
#[derive(Debug, Clone, Copy)]
pub struct Picture<'a> {
    /// The working profile.
    pub working: &'a Profile,
    /// The profile as received; drawn behind where it differs. `None` or the same profile: nothing behind.
    pub received: Option<&'a Profile>,
    /// The profile as a previewed repair would make it.
    pub preview: Option<&'a Profile>,
    /// The chosen parcel.
    pub parcel: Option<ParcelDrawing<'a>>,
    /// Findings.
    pub brackets: &'a [Bracket],
    /// Handles at the surface level; none without a surface.
    pub surface: Option<&'a SurfaceMarks>,
    /// Height scale of this sounding.
    pub heights: Option<&'a HeightScale>,
    /// Pointer or keyboard cursor inside the plot: the readout follows it.
    pub cursor: Option<Point>,
    /// On the southern hemisphere the feathers of the barbs change sides.
    pub southern: bool,
    /// A stamp across the head of the plot, e.g. "INVENTED DATA".
    pub stamp: Option<&'a str>,
    /// Units of readout and height scale.
    pub units: Units,
}

impl<'a> Picture<'a> {
    /// A profile and nothing else.
    pub fn new(working: &'a Profile) -> Self {
        Self {
            working,
            received: None,
            preview: None,
            parcel: None,
            brackets: &[],
            surface: None,
            heights: None,
            cursor: None,
            southern: false,
            stamp: None,
            units: Units::default(),
        }
    }
}

/// The parcel to be drawn: its *virtual* temperature, since that is what CAPE and CIN are areas of. The hatching lies
/// between it and the virtual temperature of the surroundings.
#[derive(Debug, Clone, Copy)]
pub struct ParcelDrawing<'a> {
    /// The working parcel.
    pub ascent: &'a Ascent,
    /// How it cools.
    pub method: Method,
    /// The air it rises through; computed from the working profile when `None`.
    pub environment: Option<&'a Environment>,
    /// Starts of the same parcel at the two ends of the interval: the band lies between their paths and the working one's.
    pub interval: Option<[Air; 2]>,
    /// Name for the legend, e.g. "surface parcel".
    pub name: &'a str,
}

/// A finding's mark along the profile.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bracket {
    /// Its number in the list of findings.
    pub number: usize,
    /// How it is drawn.
    pub grade: BracketGrade,
    /// Lower end.
    pub bottom: Pressure,
    /// Upper end; the same as `bottom` for a single level.
    pub top: Pressure,
    /// Its card is open.
    pub selected: bool,
}

/// The two handles.
#[derive(Debug, Clone, PartialEq)]
pub struct SurfaceMarks {
    /// Pressure of the surface level.
    pub pressure: Pressure,
    /// Surface temperature; `None`: no handle.
    pub temperature: Option<SurfaceMark>,
    /// Surface dew point; `None`: no handle.
    pub dewpoint: Option<SurfaceMark>,
}

/// One handle and what is known about its value.
#[derive(Debug, Clone, PartialEq)]
pub struct SurfaceMark {
    /// Working value: where the ring is.
    pub value: Temperature,
    /// Ends of the credible interval.
    pub interval: Option<[Temperature; 2]>,
    /// Candidates for the true value.
    pub candidates: Vec<CandidateMark>,
    /// Has the keyboard.
    pub focused: bool,
    /// Pointer over it or dragging it.
    pub hovered: bool,
}

impl SurfaceMark {
    /// A handle and nothing else.
    pub fn new(value: Temperature) -> Self {
        Self {
            value,
            interval: None,
            candidates: Vec::new(),
            focused: false,
            hovered: false,
        }
    }
}

/// One candidate for a true surface value.
#[derive(Debug, Clone, PartialEq)]
pub struct CandidateMark {
    /// Value.
    pub value: Temperature,
    /// A word, e.g. "reported", "mixed layer".
    pub label: String,
    /// Trusted, not set aside.
    pub trusted: bool,
}

impl SurfaceMarks {
    /// One of the two.
    pub fn mark(&self, handle: Handle) -> Option<&SurfaceMark> {
        match handle {
            Handle::Temperature => self.temperature.as_ref(),
            Handle::Dewpoint => self.dewpoint.as_ref(),
        }
    }
}
