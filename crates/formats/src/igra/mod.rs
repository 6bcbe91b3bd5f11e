//! Station files of the Integrated Global Radiosonde Archive, version 2, as text.
//!
//! Column positions, units and special values are those of the archive's own format description ("Format Description of
//! IGRA 2 Sounding Data Files", NOAA). `-9999` is a value never there and becomes absent silently; `-8888` is one the
//! archive's quality control removed and is counted in a note. The processing flags say which climatological checks a
//! value has passed; they change no value and are not kept.

mod fields;
mod times;

use crate::stations::{position, wmo_number};
use crate::tally::Tally;
use crate::{Loaded, digest, text};
use dewbound_sounding::{
    Digest, HumidityReported, LevelKind, Note, Place, Sounding, Source, Station,
};
use fields::Fields;
use std::collections::{BTreeSet, HashMap};
use times::times;

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
                    "the header announces {announced} level{}, {} follow",
                    if announced == 1 { "" } else { "s" },
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

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use dewbound_sounding::Wind;

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
        // Without the hour the day of the release is a guess; year and month never are.
        let guessed = nominal.is_none() && launch.is_some();
        assert_eq!(
            (sounding.times.assumed, sounding.times.day_assumed),
            (false, guessed)
        );
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
        let coded = [36, 44, 28, 12, 22, 6, -5, -41, -95, -213];
        assert_eq!(temperature_step(&coded), 0.2);
        assert_eq!(temperature_step(&coded[1..]), 0.1, "too few to tell");
        assert_eq!(
            temperature_step(&[37, 44, 28, 12, 22, 6, -5, -41, -95, -213]),
            0.1
        );
    }
}
