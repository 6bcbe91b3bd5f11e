//! What every section of a part needs: where it belongs, its unit of wind, and where levels and notes go.

use super::{
    framing::{Part, Word, quote},
    groups, standard_atmosphere,
};
use dewbound_sounding::{Level, Note, Place};

/// A part being read.
#[derive(Debug)]
pub(super) struct Context {
    /// The part's four letters, for notes.
    pub letters: String,
    /// Which part.
    pub part: Part,
    /// Unit of wind speed, m/s; `None` when the day group that tells it is unreadable.
    pub unit: Option<f64>,
    /// Levels so far.
    pub levels: Vec<Level>,
    /// Notes so far.
    pub notes: Vec<Note>,
    /// Groups read past, by what they are.
    pub aside: Vec<Aside>,
    /// A wind could not be given because the unit is unknown.
    pub unit_missed: bool,
    /// Groups after the last standard level that was read could hold a higher one.
    pub unread_top: bool,
}

/// How unlikely it is that a group is a certain value; `None` when no such value is expected.
pub(super) type Cost<'a> = Option<&'a dyn Fn(&str) -> u32>;

/// Which values of a level can be told in spite of a group too many.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Certain {
    pub air: bool,
    pub wind: bool,
}

/// Groups that hold no level.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Aside {
    /// What they are.
    pub what: &'static str,
    /// As they stand.
    pub text: String,
    /// Line of the first.
    pub line: usize,
}

impl Context {
    pub fn note(&mut self, line: usize, what: String, why: &str) {
        self.notes.push(Note {
            place: Place::Line(line),
            what: format!("{}: {what}", self.letters),
            why: why.into(),
        });
    }

    /// Notes groups that could not be placed.
    pub fn stray(&mut self, words: &[Word]) {
        let Some(first) = words.first() else { return };
        let groups = if words.len() == 1 { "group" } else { "groups" };
        self.note(
            first.line,
            format!("{groups} {} set aside", quote(words)),
            "not understood as part of any level where it stands",
        );
    }

    /// Notes several stray groups, each unbroken run once.
    pub fn strays(&mut self, words: &[Word], mut indices: impl Iterator<Item = usize>) {
        let mut run: Option<(usize, usize)> = None;
        loop {
            let index = indices.next();
            run = match (run, index) {
                (Some((from, to)), Some(index)) if index == to => Some((from, to + 1)),
                (ended, index) => {
                    if let Some((from, to)) = ended {
                        self.stray(words.get(from..to).unwrap_or(&[]));
                    }
                    index.map(|index| (index, index + 1))
                }
            };
            if index.is_none() {
                return;
            }
        }
    }

    /// Gives a level its air and wind, each where it is certain among `values`, the groups after the level group.
    pub fn settle(
        &mut self,
        level: &mut Level,
        pressure: Option<f64>,
        values: &[Word],
        (air, wind): (Option<Word>, Option<Word>),
        name: &str,
    ) {
        let unit = self.unit;
        let air_cost = |text: &str| air_cost(text, pressure);
        let wind_cost = |text: &str| wind_cost(text, unit);
        let certain = self.certain(
            values,
            name,
            air.is_some().then_some(&air_cost),
            wind.is_some().then_some(&wind_cost),
        );
        if let Some(air) = air.filter(|_| certain.air) {
            self.air(level, air, name);
        }
        if let Some(wind) = wind.filter(|_| certain.wind) {
            self.wind(level, wind, name);
        }
    }

    /// With a group too many, says which values are certain all the same: those that every possible reading agrees on.
    /// `values` are the groups after the level group; the costs are `None` for a value that isn't expected.
    pub fn certain(&mut self, values: &[Word], name: &str, air: Cost, wind: Cost) -> Certain {
        let mut certain = Certain {
            air: true,
            wind: true,
        };
        let expected = usize::from(air.is_some()) + usize::from(wind.is_some());
        if values.len() <= expected || expected == 0 {
            return certain;
        }
        let texts: Vec<&str> = values.iter().map(|word| word.text).collect();
        let fits = |cost: Cost, text: &str| cost.is_some_and(|cost| cost(text) == 0);
        let mut readings: Vec<(Option<&str>, Option<&str>)> = Vec::new();
        for (index, &first) in texts.iter().enumerate() {
            match (air, wind) {
                (Some(_), Some(_)) => {
                    let later = texts.get(index + 1..).unwrap_or(&[]);
                    let pairs = later
                        .iter()
                        .filter(|second| fits(air, first) && fits(wind, second));
                    readings.extend(pairs.map(|&second| (Some(first), Some(second))));
                }
                (Some(_), None) if fits(air, first) => readings.push((Some(first), None)),
                (None, Some(_)) if fits(wind, first) => readings.push((None, Some(first))),
                _ => {}
            }
        }
        if let Some((first, others)) = readings.split_first() {
            certain.air = others.iter().all(|other| other.0 == first.0);
            certain.wind = others.iter().all(|other| other.1 == first.1);
        }
        let lost = match (certain.air, certain.wind) {
            (true, true) => return certain,
            (false, true) => "temperature and dew point are",
            (true, false) => "wind is",
            (false, false) => "temperature, dew point and wind are",
        };
        if let Some(first) = values.first() {
            self.note(
                first.line,
                format!(
                    "groups {} compete for {name}; {lost} left out",
                    quote(values)
                ),
                "one group too many stands here, and more than one reading is possible",
            );
        }
        certain
    }

    /// Where a temperature and a wind should stand and only one group does: whether it could be the wind. Then it is
    /// neither.
    pub fn could_be_either(&mut self, only: Word, name: &str) -> bool {
        let either = !groups::is_missing(only.text) && wind_cost(only.text, self.unit) == 0;
        if either {
            self.note(
                only.line,
                format!(
                    "one group of two is missing at {name}; group {} could be either and is set aside",
                    quote(&[only])
                ),
                "it reads as a temperature and as a wind",
            );
        }
        either
    }

    /// Puts a temperature group into a level.
    pub fn air(&mut self, level: &mut Level, word: Word, name: &str) {
        let air = groups::air(word.text);
        match air.temperature {
            Ok(temperature) => level.temperature = temperature,
            Err(reason) => {
                self.note(
                    word.line,
                    format!(
                        "group {} not understood as temperature; {name} left without temperature and dew point",
                        quote(&[word])
                    ),
                    reason,
                );
                return;
            }
        }
        match air.dewpoint {
            Ok(dewpoint) => level.dewpoint = dewpoint,
            Err(reason) => self.note(
                word.line,
                format!(
                    "dew-point depression of group {} not understood; {name} left without dew point",
                    quote(&[word])
                ),
                reason,
            ),
        }
    }

    /// Puts a wind group into a level.
    pub fn wind(&mut self, level: &mut Level, word: Word, name: &str) {
        match (groups::wind(word.text, self.unit.unwrap_or(1.0)), self.unit) {
            (Ok(wind), Some(_)) => level.wind = wind,
            (Ok(wind), None) => self.unit_missed |= wind.is_some(),
            (Err(reason), _) => self.note(
                word.line,
                format!(
                    "group {} not understood as wind; {name} left without wind",
                    quote(&[word])
                ),
                reason,
            ),
        }
    }

    /// Pressure of a level group; unreadable ones are noted and absent.
    pub fn pressure(&mut self, word: Word, name: &str) -> Option<f64> {
        groups::pressure(groups::cut(word.text, 2, 5), self.part.upper()).unwrap_or_else(|reason| {
            self.note(
                word.line,
                format!(
                    "group {} not understood as pressure; {name} left without pressure",
                    quote(&[word])
                ),
                reason,
            );
            None
        })
    }

    /// Pressure of the ground; one no ground has is noted and absent.
    pub fn surface_pressure(&mut self, word: Word) -> Option<f64> {
        let pressure = self.pressure(word, "the surface level")?;
        if is_surface_pressure(pressure) {
            return Some(pressure);
        }
        self.note(
            word.line,
            format!(
                "group {} gives a surface pressure of {:.0} hPa; the surface level is left without pressure",
                quote(&[word]),
                pressure / 100.0
            ),
            "no station lies so high",
        );
        None
    }
}

/// Whether the ground can have this pressure (Pa): the highest stations that launch balloons have above 500 hPa (common
/// practice, no source).
pub(super) fn is_surface_pressure(pressure: f64) -> bool {
    (45_000.0..=110_000.0).contains(&pressure)
}

/// How unlikely it is that a group is a temperature group at this pressure.
pub(super) fn air_cost(group: &str, pressure: Option<f64>) -> u32 {
    // Code for "no tropopause", "no maximum wind"; as a temperature it would come with a depression of 49.
    if matches!(group, "88999" | "77999" | "66999") {
        return 9;
    }
    let air = groups::air(group);
    let (Ok(temperature), Ok(_)) = (air.temperature, air.dewpoint) else {
        return if air.temperature.is_ok() { 3 } else { 4 };
    };
    if let (Some(temperature), Some(pressure)) = (temperature, pressure) {
        // Wider near the ground, where continents range from -60 to 50 °C.
        let range = if pressure > 70_000.0 { 65.0 } else { 45.0 };
        let off = (temperature - standard_atmosphere::temperature(pressure)).abs() / range;
        if off > 1.5 {
            return 8;
        }
        if off > 1.0 {
            return 3;
        }
    }
    // A section's number can be a temperature (31313 is -31.3 °C), but seldom is.
    if is_marker(group) { 2 } else { 0 }
}

/// How unlikely it is that a group is a wind group. Winds beyond 130 m/s have not been measured below 10 hPa (from
/// memory).
pub(super) fn wind_cost(group: &str, unit: Option<f64>) -> u32 {
    match groups::wind(group, unit.unwrap_or(groups::KNOT)) {
        Ok(Some(wind)) if wind.speed > 195.0 => 8,
        Ok(Some(wind)) if wind.speed > 130.0 => 3,
        Ok(_) => 0,
        Err(_) if is_extreme(group) => 9,
        Err(_) if group.starts_with("99") => 2,
        Err(_) => 4,
    }
}

/// Whether a group opens a tropopause (88) or a maximum wind (77, 66), or says that there is none (999).
pub(super) fn is_extreme(group: &str) -> bool {
    let rest = groups::cut(group, 2, 5);
    group.len() == 5
        && matches!(groups::cut(group, 0, 2), "88" | "77" | "66")
        && (groups::number(rest).is_some() || groups::is_missing(rest))
}

/// Whether a group is the number of a section: 21212, 31313, 41414, 51515 to 59595, 61616 to 69696.
pub(super) fn is_marker(group: &str) -> bool {
    let [a, b, c, d, e] = group.as_bytes() else {
        return false;
    };
    let repeats = a == c && c == e && b == d;
    repeats
        && match (a, b) {
            (b'2', b'1') | (b'3', b'1') | (b'4', b'1') => true,
            (b'5' | b'6', b'1'..=b'9') => a != b,
            _ => false,
        }
}
