//! The sounding exactly as received. Nothing here is ever altered after a reader has made it.

use crate::Station;
use jiff::Timestamp;
use std::collections::BTreeSet;

/// A SHA-256 digest.
pub type Digest = [u8; 32];

/// A horizontal wind.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wind {
    /// Direction it blows from, degrees from north, 0..=360.
    pub direction: f64,
    /// Speed, m/s.
    pub speed: f64,
}

/// What kind of level the format says this is; formats that don't say give `Other`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum LevelKind {
    /// The ground.
    Surface,
    /// A standard isobaric surface.
    Standard,
    /// Significant for temperature or humidity.
    SignificantThermal,
    /// Significant for wind.
    SignificantWind,
    /// Tropopause.
    Tropopause,
    /// Maximum wind.
    MaximumWind,
    /// Anything else.
    #[default]
    Other,
}

/// One level as received, in SI units. Every field may be absent.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Level {
    /// Pressure, Pa.
    pub pressure: Option<f64>,
    /// Geopotential height above mean sea level, m.
    pub height: Option<f64>,
    /// Temperature, K.
    pub temperature: Option<f64>,
    /// Dew point over water, K, reported or computed from the reported humidity.
    pub dewpoint: Option<f64>,
    /// Relative humidity over water as reported, 0..=1, when that was reported.
    pub relative_humidity: Option<f64>,
    /// Wind.
    pub wind: Option<Wind>,
    /// Seconds since launch.
    pub elapsed: Option<f64>,
    /// Kind of level.
    pub kind: LevelKind,
    /// Line of the file (first line is 1), when the format has lines.
    pub line: Option<usize>,
}

/// Which humidity the instrument's message carried.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum HumidityReported {
    /// Relative humidity (a capacitive sensor's own quantity).
    RelativeHumidity,
    /// Dew point or dew-point depression.
    #[default]
    DewPoint,
    /// Mixing ratio.
    MixingRatio,
}

/// How the levels were chosen.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Sampling {
    /// Standard and significant levels: temperature was chosen and rounded by a code.
    #[default]
    Coded,
    /// A sample every second or few.
    Fine,
}

/// Launch and nominal time.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Times {
    /// When the balloon left the ground.
    pub launch: Option<Timestamp>,
    /// The synoptic hour it is filed under.
    pub nominal: Option<Timestamp>,
    /// Month and year were not in the message but assumed.
    pub assumed: bool,
    /// The day of the launch was not certain from the message but assumed.
    pub day_assumed: bool,
}

impl Times {
    /// The time shown and filed under: nominal, else launch.
    pub fn valid(&self) -> Option<Timestamp> {
        self.nominal.or(self.launch)
    }
}

/// Whether later parts of an ascent may still be on their way.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Completeness {
    /// The format holds the whole ascent in one piece.
    #[default]
    Whole,
    /// Parts above 100 hPa were not received: nothing is known of how high the balloon went.
    LaterPartsNotReceived,
    /// Every part was received.
    AllParts,
}

/// Where the bytes came from.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Source {
    /// File name as given.
    pub file: String,
    /// Index of the sounding within the file, from 0.
    pub index: usize,
    /// Name of the format, e.g. `TEMP`.
    pub format: &'static str,
    /// SHA-256 of each of this sounding's own message parts.
    pub parts: BTreeSet<Digest>,
}

/// Where in the input something was seen.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Place {
    /// The file as a whole.
    File,
    /// A line, from 1.
    Line(usize),
    /// A byte offset, from 0.
    Byte(usize),
    /// A level of the merged profile, from 0 at the bottom.
    Level(usize),
}

/// Something a person should know about the input: what was not used or was assumed, where, and why.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Note {
    /// Where.
    pub place: Place,
    /// What was seen and what was done about it.
    pub what: String,
    /// Why; empty when `what` says it all.
    pub why: String,
}

/// One sounding as received.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Sounding {
    /// Station.
    pub station: Station,
    /// Times.
    pub times: Times,
    /// Levels in the order received.
    pub levels: Vec<Level>,
    /// Which humidity was reported.
    pub humidity_reported: HumidityReported,
    /// Rounding of temperature in the format, K (0.1 or 0.2 in coded messages; 0 = unknown or fine).
    pub temperature_step: f64,
    /// Whether later parts may still come.
    pub completeness: Completeness,
    /// Measured on the way down by a sonde let go aloft (a dropsonde): nothing is known of the air above its first level.
    pub released_aloft: bool,
    /// Heights were derived from pressure, temperature and humidity (hypsometric), not measured independently.
    /// `None`: the format doesn't say.
    pub heights_derived: Option<bool>,
    /// Where it came from.
    pub source: Source,
    /// What the reader had to say.
    pub notes: Vec<Note>,
    /// Invented demonstration data.
    pub demo: bool,
}
