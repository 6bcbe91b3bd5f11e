//! Lines of fixed columns, and the level in one.

use crate::tally::Tally;
use dewbound_sounding::{
    Level, LevelKind, Wind,
    thermo::{Pressure, Temperature, dewpoint_from_relative_humidity},
};
use std::ops::Range;

/// Why a field has no number.
enum Absent {
    Missing,
    Removed,
}

/// A line of fixed columns.
pub(super) struct Fields<'a> {
    pub text: &'a str,
    pub line: usize,
}

impl Fields<'_> {
    /// The integer in columns (from 0); a field the line doesn't reach, or holds garbage, is noted.
    pub fn number(
        &self,
        name: &'static str,
        columns: Range<usize>,
        tally: &mut Tally,
    ) -> Option<i64> {
        self.raw(name, columns, tally).ok()
    }

    fn raw(
        &self,
        name: &'static str,
        columns: Range<usize>,
        tally: &mut Tally,
    ) -> Result<i64, Absent> {
        if self.text.len() < columns.end {
            tally.add(
                "cut",
                0,
                self.line,
                || format!("the record ends before {name}; what is there was used"),
                "a field that is cut in two is no number",
            );
            return Err(Absent::Missing);
        }
        let field = self.text.get(columns.clone()).map(str::trim);
        match field.map(|field| (field, field.parse::<i64>())) {
            Some((_, Ok(-9999))) => Err(Absent::Missing),
            Some((_, Ok(-8888))) => Err(Absent::Removed),
            Some((_, Ok(number))) => Ok(number),
            Some(("", _)) => Err(Absent::Missing),
            Some((field, Err(_))) => {
                tally.add(
                    name,
                    columns.start,
                    self.line,
                    || {
                        format!(
                            "`{field}` in columns {} to {} ({name}) is not a number and was set aside",
                            columns.start + 1,
                            columns.end
                        )
                    },
                    "",
                );
                Err(Absent::Missing)
            }
            // A sign of several bytes stands across the edge of the field.
            None => {
                tally.add(
                    "signs",
                    0,
                    self.line,
                    || format!("foreign signs in {name}; it was set aside"),
                    "",
                );
                Err(Absent::Missing)
            }
        }
    }

    /// A data record. `removed` counts what the archive's quality control took out, `tenths` collects temperatures.
    pub fn level(
        &self,
        removed: &mut usize,
        tenths: &mut Vec<i64>,
        tally: &mut Tally,
    ) -> Option<Level> {
        let kinds = self.text.as_bytes();
        let (Some(major @ b'1'..=b'3'), Some(minor @ b'0'..=b'2')) = (kinds.first(), kinds.get(1))
        else {
            tally.add(
                "kind",
                0,
                self.line,
                || "the line doesn't start with a kind of level and was not used".into(),
                "",
            );
            return None;
        };
        let mut field = |name, columns| match self.raw(name, columns, tally) {
            Ok(number) => Some(number),
            Err(Absent::Removed) => {
                *removed += 1;
                None
            }
            Err(Absent::Missing) => None,
        };
        let elapsed = field("ETIME", 3..8);
        let pressure = field("PRESS", 9..15);
        let height = field("GPH", 16..21);
        let temperature = field("TEMP", 22..27);
        let humidity = field("RH", 28..33);
        let depression = field("DPDP", 34..39);
        let direction = field("WDIR", 40..45);
        let speed = field("WSPD", 46..51);

        tenths.extend(temperature);
        let elapsed = elapsed.and_then(|elapsed| {
            let (minutes, seconds) = (elapsed / 100, elapsed % 100);
            let valid = elapsed >= 0 && seconds < 60;
            if !valid {
                tally.add(
                    "ETIME",
                    0,
                    self.line,
                    || format!("elapsed time {elapsed} is impossible and was set aside"),
                    "the format is minutes and two digits of seconds",
                );
            }
            valid.then_some((minutes * 60 + seconds) as f64)
        });
        let temperature = temperature.map(|tenths| Temperature::from_c(tenths as f64 / 10.0).k());
        let relative_humidity = humidity
            .map(|tenths| tenths as f64 / 1000.0)
            .filter(|humidity| {
                let possible = (0.0..=1.5).contains(humidity);
                if !possible {
                    tally.add(
                        "RH",
                        1,
                        self.line,
                        || {
                            format!(
                                "relative humidity {:.1} % is impossible and was set aside",
                                humidity * 100.0
                            )
                        },
                        "",
                    );
                }
                possible
            });
        let depressed = || {
            let depression = depression.filter(|depression| *depression >= 0)?;
            Some(temperature? - depression as f64 / 10.0)
        };
        if depression.is_some_and(|depression| depression < 0) {
            tally.add(
                "DPDP",
                1,
                self.line,
                || "a negative dew-point depression was set aside".into(),
                "",
            );
        }
        let from_humidity = || {
            let humidity = relative_humidity.filter(|humidity| *humidity > 0.0)?;
            let air = Temperature::from_k(temperature?);
            Some(dewpoint_from_relative_humidity(air, humidity).k())
        };
        let dewpoint = depressed()
            .or_else(from_humidity)
            .filter(|dewpoint| dewpoint.is_finite());
        let wind = match (direction, speed) {
            (Some(direction @ 0..=360), Some(speed @ 0..)) => Some(Wind {
                direction: direction as f64,
                speed: speed as f64 / 10.0,
            }),
            (None, None) => None,
            _ => {
                tally.add(
                    "wind",
                    0,
                    self.line,
                    || "direction and speed make no wind together and were set aside".into(),
                    "",
                );
                None
            }
        };
        let kind = match (major, minor) {
            (_, b'1') => LevelKind::Surface,
            (_, b'2') => LevelKind::Tropopause,
            (b'1', _) => LevelKind::Standard,
            _ => LevelKind::Other,
        };
        Some(Level {
            pressure: pressure.map(|pa| Pressure::from_pa(pa as f64).pa()),
            height: height.map(|metres| metres as f64),
            temperature,
            dewpoint,
            relative_humidity,
            wind,
            elapsed,
            kind,
            line: Some(self.line),
        })
    }
}
