//! Station files of the Integrated Global Radiosonde Archive, version 2, as text.
//!
//! Column positions, units and special values are those of the archive's own format description ("Format Description of
//! IGRA 2 Sounding Data Files", NOAA). `-9999` is a value never there and becomes absent silently; `-8888` is one the
//! archive's quality control removed and is counted in a note. The processing flags say which climatological checks a
//! value has passed; they change no value and are not kept.

use crate::stations::{position, wmo_number};
use crate::tally::Tally;
use crate::{Loaded, digest, text, when};
use dewbound_sounding::{
    Digest, HumidityReported, Level, LevelKind, Note, Place, Sounding, Source, Station, Times,
    Wind,
    thermo::{Pressure, Temperature, dewpoint_from_relative_humidity},
};
use jiff::{SignedDuration, Timestamp, civil::Date};
use std::collections::{BTreeSet, HashMap};
use std::ops::Range;

/// Lines in which the first header is looked for.
const HEADER_WITHIN: usize = 50;

/// Whether the text has a header record near its start.
pub(crate) fn recognises(text: &str) -> bool {
    text::lines(text)
        .take(HEADER_WITHIN)
        .any(|(_, line)| is_header(line))
}

/// `#`, eleven signs of identifier, a blank, a year: no other `#` line looks like this.
fn is_header(line: &str) -> bool {
    let bytes = line.as_bytes();
    let id = bytes.get(1..12).unwrap_or_default();
    let year = bytes.get(13..17).unwrap_or_default();
    bytes.first() == Some(&b'#')
        && id.len() == 11
        && id.iter().all(u8::is_ascii_alphanumeric)
        && bytes.get(12) == Some(&b' ')
        && year.len() == 4
        && year.iter().all(u8::is_ascii_digit)
}

/// Reads every sounding of a station file.
pub(crate) fn read(text: &str) -> Loaded {
    let mut loaded = Loaded::default();
    let mut seen: HashMap<Digest, usize> = HashMap::new();
    let mut record: Option<Record> = None;
    let mut stray = Tally::default();
    let mut finish = |record: Option<Record>, loaded: &mut Loaded| {
        let Some(record) = record else { return };
        let line = record.line;
        match record.sounding() {
            Ok((sounding, digest)) => {
                if let Some(first) = seen.get(&digest) {
                    loaded.notes.push(Note {
                        place: Place::Line(line),
                        what: format!(
                            "this record repeats the one at line {first}, sign for sign, and was not used again"
                        ),
                        why: String::new(),
                    });
                } else {
                    seen.insert(digest, line);
                    loaded.soundings.push(sounding);
                }
            }
            Err(notes) => loaded.notes.extend(notes),
        }
    };
    for (number, line) in text::lines(text) {
        if line.starts_with('#') {
            finish(record.take(), &mut loaded);
            if is_header(line) {
                record = Some(Record {
                    line: number,
                    header: line,
                    rows: Vec::new(),
                });
            } else {
                stray.add(
                    "header",
                    0,
                    number,
                    || "a header record that cannot be read; its levels were not used".into(),
                    "it should be `#`, the station's identifier, date, hour",
                );
            }
        } else if let Some(record) = &mut record {
            if !line.trim().is_empty() {
                record.rows.push((number, line));
            }
        } else if !line.trim().is_empty() {
            stray.add(
                "stray",
                0,
                number,
                || "the line belongs to no header record and was not used".into(),
                "",
            );
        }
    }
    finish(record, &mut loaded);
    loaded.notes.extend(stray.notes());
    loaded
}

/// A header record and the data records under it.
struct Record<'a> {
    line: usize,
    header: &'a str,
    rows: Vec<(usize, &'a str)>,
}

impl Record<'_> {
    fn sounding(self) -> Result<(Sounding, Digest), Vec<Note>> {
        let mut notes = Notes {
            line: self.line,
            notes: Vec::new(),
        };
        let mut tally = Tally::default();
        let header = Fields {
            text: self.header,
            line: self.line,
        };
        let mut station = station(header.text);
        station.position = place(&header, &mut notes, &mut tally);
        let times = times(&header, &mut notes, &mut tally);
        let announced = header.number("NUMLEV", 32..36, &mut tally);

        let mut removed = 0;
        let mut tenths = Vec::new();
        let mut levels = Vec::with_capacity(self.rows.len());
        for &(line, text) in &self.rows {
            let row = Fields { text, line };
            if let Some(level) = row.level(&mut removed, &mut tenths, &mut tally) {
                levels.push(level);
            }
        }
        if let Some(announced) = announced
            && !levels.is_empty()
            && usize::try_from(announced) != Ok(self.rows.len())
        {
            notes.add(
                format!(
                    "the header announces {announced} levels, {} follow",
                    self.rows.len()
                ),
                "the record may be cut short",
            );
        }
        if removed > 0 {
            let plural = if removed == 1 {
                "value was"
            } else {
                "values were"
            };
            notes.add(
                format!("{removed} {plural} removed by the archive's quality control (-8888)"),
                "",
            );
        }
        notes.notes.extend(tally.notes());
        let mut notes = notes.notes;
        if levels.is_empty() {
            notes.push(Note {
                place: Place::Line(self.line),
                what: "a header record without levels was not used".into(),
                why: "the file may be cut short here".into(),
            });
            return Err(notes);
        }
        station.elevation = levels
            .iter()
            .find(|level| level.kind == LevelKind::Surface)
            .and_then(|level| level.height);
        let lines = self.rows.iter().map(|(_, line)| *line);
        let digest = digest::of_lines(std::iter::once(self.header).chain(lines));
        let humidity = levels.iter().any(|level| level.relative_humidity.is_some());
        let sounding = Sounding {
            station,
            times,
            levels,
            humidity_reported: if humidity {
                HumidityReported::RelativeHumidity
            } else {
                HumidityReported::DewPoint
            },
            temperature_step: temperature_step(&tenths),
            source: Source {
                format: "IGRA",
                parts: BTreeSet::from([digest]),
                ..Source::default()
            },
            notes,
            ..Sounding::default()
        };
        Ok((sounding, digest))
    }
}

/// Notes on the header record.
struct Notes {
    line: usize,
    notes: Vec<Note>,
}

impl Notes {
    fn add(&mut self, what: String, why: &str) {
        self.notes.push(Note {
            place: Place::Line(self.line),
            what,
            why: why.into(),
        });
    }
}

/// Identifier; its last five digits are the WMO number where the network code (third sign) is M.
fn station(header: &str) -> Station {
    let id = header.get(1..12).unwrap_or_default();
    let wmo = (id.as_bytes().get(2) == Some(&b'M'))
        .then(|| id.get(6..).and_then(wmo_number))
        .flatten();
    Station {
        wmo,
        text: Some(id.to_owned()),
        ..Station::default()
    }
}

/// Position in ten-thousandths of a degree; off the globe (as for moving stations) it is unknown.
fn place(
    header: &Fields,
    notes: &mut Notes,
    tally: &mut Tally,
) -> Option<dewbound_sounding::Position> {
    let latitude = header.number("LAT", 55..62, tally)?;
    let longitude = header.number("LON", 63..71, tally)?;
    let place = position(latitude as f64 / 1e4, longitude as f64 / 1e4);
    if place.is_none() {
        notes.add(
            format!(
                "the header gives no position ({}, {})",
                latitude as f64 / 1e4,
                longitude as f64 / 1e4
            ),
            "add the station to the station table",
        );
    }
    place
}

/// Nominal hour and release.
fn times(header: &Fields, notes: &mut Notes, tally: &mut Tally) -> Times {
    let mut number = |name, columns| header.number(name, columns, tally);
    let date = (|| {
        let year = i16::try_from(number("YEAR", 13..17)?).ok()?;
        let month = i8::try_from(number("MONTH", 18..20)?).ok()?;
        let day = i8::try_from(number("DAY", 21..23)?).ok()?;
        Date::new(year, month, day).ok()
    })();
    let hour = number("HOUR", 24..26);
    let release = number("RELTIME", 27..31);
    let Some(date) = date else {
        notes.add(
            "the header's date cannot be read; the time is unknown".into(),
            "",
        );
        return Times::default();
    };
    let at = |hour: i64, minute: i64| {
        let hour = i8::try_from(hour).ok()?;
        let minute = i8::try_from(minute).ok()?;
        let time = jiff::civil::Time::new(hour, minute, 0, 0).ok()?;
        when::utc(date.to_datetime(time))
    };
    let nominal = hour.filter(|hour| *hour != 99).and_then(|hour| at(hour, 0));
    if hour.is_some_and(|hour| hour != 99) && nominal.is_none() {
        notes.add(
            "the header's hour is impossible; it counts as missing".into(),
            "",
        );
    }
    let mut times = Times {
        nominal,
        ..Times::default()
    };
    let Some(release) = release.filter(|release| *release != 9999) else {
        if nominal.is_none() {
            notes.add("the header gives neither hour nor release time".into(), "");
        }
        return times;
    };
    let (hour, minute) = (release / 100, release % 100);
    let minute_known = minute != 99;
    let Some(release) = at(hour, if minute_known { minute } else { 0 }) else {
        notes.add(
            format!("release time {release:04} is impossible; it counts as missing"),
            "",
        );
        return times;
    };
    if !minute_known {
        notes.add(
            format!("the minute of the release is not known; {hour:02}:00 is taken"),
            "",
        );
    }
    times.launch = match nominal {
        Some(nominal) => Some(nearest_day(release, nominal)),
        None => {
            times.assumed = true;
            notes.add(
                format!(
                    "the hour is missing; the release at {hour:02}:{:02} is taken to be on {date}",
                    if minute_known { minute } else { 0 }
                ),
                "the date is that of the hour: a release late in the evening may belong to the day before",
            );
            Some(release)
        }
    };
    times
}

/// The date belongs to the nominal hour: a release at 23:03 for 00 UTC was the day before.
fn nearest_day(release: Timestamp, nominal: Timestamp) -> Timestamp {
    let half = SignedDuration::from_hours(12);
    let day = SignedDuration::from_hours(24);
    let ahead = release.duration_since(nominal);
    let shifted = if ahead > half {
        release.checked_sub(day)
    } else if ahead < -half {
        release.checked_add(day)
    } else {
        Ok(release)
    };
    shifted.unwrap_or(release)
}

/// Temperatures in tenths of a degree that are all even when positive and odd when negative come from the coded message,
/// in which the tenths digit carries the sign (FM 35 TEMP, code table 3931): their step is 0.2 K.
fn temperature_step(tenths: &[i64]) -> f64 {
    let coded = |value: &i64| (value % 2 == 0) == (*value >= 0);
    if tenths.len() >= 10 && tenths.iter().all(coded) {
        0.2
    } else {
        0.1
    }
}

/// Why a field has no number.
enum Absent {
    Missing,
    Removed,
}

/// A line of fixed columns.
struct Fields<'a> {
    text: &'a str,
    line: usize,
}

impl Fields<'_> {
    /// The integer in columns (from 0); a field the line doesn't reach, or holds garbage, is noted.
    fn number(&self, name: &'static str, columns: Range<usize>, tally: &mut Tally) -> Option<i64> {
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

    fn level(
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

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// An invented station with one level of every kind.
    const FILE: &str = "\
#ZZM00001234 2031 05 17 00 2303    6 ncdc-gts ncdc-gts  475000    82500
21     0  96500B  430B  274B  512   113   200    51 
10   100  92500   780B  240A-9999   100 -9999 -9999 
20   312  90000 -9999   215B-8888   -9999   210    70 
22  4512  20000 11900B -575B   50 -9999   230   350 
30   200  -9999   600 -9999 -9999 -9999   205    60 
20  4610  19500 -9999  -561     0 -9999     0     0 
";

    fn text(header: &str, rows: &str) -> String {
        format!("{header}\n{rows}")
    }

    const ROW: &str = "21     0  96500B  430B  274B  512   113   200    51 \n";

    fn one(text: &str) -> Sounding {
        let loaded = read(text);
        assert_eq!(loaded.notes, []);
        assert_eq!(loaded.soundings.len(), 1);
        loaded.soundings.into_iter().next().unwrap()
    }

    #[test]
    fn every_kind_of_level() {
        assert!(recognises(FILE));
        // The row whose depression stands one column off is part of the next test.
        let sounding = one(&FILE.replace("215B-8888   -9999", "215B-8888 -9999"));
        assert_eq!(sounding.station.text.as_deref(), Some("ZZM00001234"));
        assert_eq!(sounding.station.wmo.as_deref(), Some("01234"));
        assert_eq!(sounding.station.position, position(47.5, 8.25));
        assert_eq!(sounding.station.elevation, Some(430.0));
        let [surface, standard, other, tropopause, wind_only, calm] = sounding.levels[..] else {
            panic!("{:#?}", sounding.levels);
        };
        assert_eq!(surface.kind, LevelKind::Surface);
        assert_relative_eq!(surface.pressure.unwrap(), 96_500.0);
        assert_relative_eq!(surface.temperature.unwrap(), 300.55, epsilon = 1e-9);
        assert_relative_eq!(surface.dewpoint.unwrap(), 289.25, epsilon = 1e-9);
        assert_relative_eq!(surface.relative_humidity.unwrap(), 0.512, epsilon = 1e-9);
        assert_eq!(surface.elapsed, Some(0.0));
        assert_eq!(
            surface.wind,
            Some(Wind {
                direction: 200.0,
                speed: 5.1
            })
        );
        assert_eq!(surface.line, Some(2));
        assert_eq!(standard.kind, LevelKind::Standard);
        assert_eq!(standard.elapsed, Some(60.0));
        assert_eq!(standard.wind, None);
        assert_eq!((other.dewpoint, other.height), (None, None));
        assert_eq!(tropopause.kind, LevelKind::Tropopause);
        // 50 tenths: 5 % at -57.5 degC, dew point from it.
        assert!(tropopause.dewpoint.unwrap() < tropopause.temperature.unwrap() - 15.0);
        assert_eq!((wind_only.pressure, wind_only.height), (None, Some(600.0)));
        assert_eq!(calm.dewpoint, None);
        assert_eq!(calm.wind.unwrap().speed, 0.0);
        assert_eq!(
            sounding.humidity_reported,
            HumidityReported::RelativeHumidity
        );
        assert_eq!(sounding.temperature_step, 0.1);
        assert_eq!(sounding.notes.len(), 1, "{:#?}", sounding.notes);
        assert!(sounding.notes[0].what.starts_with("1 value was removed"));
    }

    #[test]
    fn a_shifted_field_is_no_number() {
        let sounding = one(FILE);
        let notes: Vec<_> = sounding
            .notes
            .iter()
            .map(|note| note.what.as_str())
            .collect();
        assert!(
            notes.iter().any(|what| what.contains("not a number")),
            "{notes:?}"
        );
    }

    #[track_caller]
    fn check_times(
        hour: &str,
        release: &str,
        nominal: Option<&str>,
        launch: Option<&str>,
        notes: usize,
    ) {
        let header = format!(
            "#ZZM00001234 2031 03 01 {hour} {release}    1 ncdc-gts ncdc-gts  475000    82500"
        );
        let sounding = one(&text(&header, ROW));
        let parse = |time: Option<&str>| time.map(|time| time.parse().unwrap());
        assert_eq!(sounding.times.nominal, parse(nominal));
        assert_eq!(sounding.times.launch, parse(launch));
        assert_eq!(sounding.notes.len(), notes, "{:?}", sounding.notes);
    }

    #[test]
    fn hours_and_releases() {
        let midnight = Some("2031-03-01T00:00Z");
        check_times("00", "2303", midnight, Some("2031-02-28T23:03Z"), 0);
        check_times(
            "12",
            "1100",
            Some("2031-03-01T12:00Z"),
            Some("2031-03-01T11:00Z"),
            0,
        );
        check_times(
            "23",
            "0010",
            Some("2031-03-01T23:00Z"),
            Some("2031-03-02T00:10Z"),
            0,
        );
        check_times("00", "9999", midnight, None, 0);
        check_times("00", "2399", midnight, Some("2031-02-28T23:00Z"), 1);
        check_times("99", "2330", None, Some("2031-03-01T23:30Z"), 1);
        check_times("99", "9999", None, None, 1);
        check_times("31", "9999", None, None, 2);
        check_times("00", "2375", midnight, None, 1);
    }

    #[test]
    fn cut_short_and_miscounted() {
        let header = "#ZZM00001234 2031 05 17 00 2303    3 ncdc-gts ncdc-gts  475000    82500";
        let sounding = one(&text(header, &format!("{ROW}10   100  92500   780B  24")));
        assert_eq!(sounding.levels.len(), 2);
        assert_eq!(sounding.levels[1].height, Some(780.0));
        assert_eq!(sounding.levels[1].temperature, None, "24 may be 240");
        let notes: Vec<_> = sounding
            .notes
            .iter()
            .map(|note| note.what.as_str())
            .collect();
        assert_eq!(
            notes,
            [
                "the header announces 3 levels, 2 follow",
                "the record ends before TEMP; what is there was used"
            ]
        );
    }

    #[test]
    fn a_bad_record_costs_only_itself() {
        let header = "#ZZM00001234 2031 05 17 00 2303    1 ncdc-gts ncdc-gts  475000    82500";
        let good = text(header, ROW);
        let loaded = read(&format!(
            "stray\n{good}#broken\n{ROW}{good}{}",
            header.replace(" 17 ", " 18 ")
        ));
        assert_eq!(loaded.soundings.len(), 1);
        let notes: Vec<_> = loaded.notes.iter().map(|note| note.what.as_str()).collect();
        assert_eq!(notes.len(), 4, "{notes:#?}");
    }

    #[test]
    fn moving_stations_have_no_number_and_no_place() {
        let header = "#ZZV000ABCDE 2031 05 17 00 2303    1 ncdc-gts ncdc-gts -988888 -9988888";
        let sounding = one(&text(header, ROW));
        assert_eq!(sounding.station.wmo, None);
        assert_eq!(sounding.station.position, None);
        assert_eq!(sounding.notes.len(), 1);
    }

    #[test]
    fn coded_temperatures_step_by_a_fifth() {
        let coded = [38, 42, 26, 14, 20, 4, -7, -43, -93, -217];
        assert_eq!(temperature_step(&coded), 0.2);
        assert_eq!(temperature_step(&coded[1..]), 0.1, "too few to tell");
        assert_eq!(
            temperature_step(&[37, 42, 26, 14, 20, 4, -7, -43, -93, -217]),
            0.1
        );
    }
}
