//! Section 1: who reports, from where, for which day and hour, in which unit of wind.

use super::{
    framing::{Letters, Platform, Word, quote},
    groups::{KNOT, cut, number},
};
use dewbound_sounding::{Note, Place, Position, Station};

/// Day of the month and hour, as coded.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct DayHour {
    pub day: i8,
    pub hour: i8,
}

/// A part's identification.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Header {
    /// Station with what the message says of it.
    pub station: Station,
    /// Absent when the group is unreadable.
    pub when: Option<DayHour>,
    /// Unit of wind speed, m/s.
    pub unit: Option<f64>,
    /// Last figure of the date group: in parts A and C the highest level with wind.
    pub indicator: char,
    /// Nothing follows but NIL.
    pub nil: bool,
    /// Groups taken, the part's letters among them.
    pub length: usize,
}

/// Reads a part's first groups. `Err`: the part can't be attributed to a station.
pub(super) fn read(
    words: &[Word],
    letters: Letters,
    notes: &mut Vec<Note>,
) -> Result<Header, Note> {
    let name = words.first().map_or("", |word| word.text);
    let line = words.first().map_or(1, |word| word.line);
    let note = |line: usize, what: String, why: &str| Note {
        place: Place::Line(line),
        what: format!("{name}: {what}"),
        why: why.into(),
    };
    let refuse = |why: &str| note(line, format!("part set aside: {}", quote(words)), why);
    let mut groups = Groups { words, at: 1 };
    let called = matches!(letters.platform, Platform::Ship | Platform::Mobile);
    let call_sign = called.then(|| groups.call_sign()).flatten();
    let Some(date) = groups.next() else {
        return Err(refuse("nothing follows its letters"));
    };
    if date.text == "NIL" {
        return Err(note(line, "NIL: nothing to report".into(), ""));
    }
    let when = day_hour(date.text);
    if when.is_none() {
        notes.push(note(
            date.line,
            format!("day and hour not understood in group {}", quote(&[date])),
            "the first four figures are the day (50 added for knots) and the hour",
        ));
    }
    let unit = match date.text.as_bytes() {
        [b'0'..=b'3', _, _, _, _] => Some(1.0),
        [b'5'..=b'8', _, _, _, _] => Some(KNOT),
        _ => None,
    };
    let mut station = Station::default();
    if letters.platform == Platform::Land {
        let Some(number) = groups.next() else {
            return Err(refuse("no station number follows the date group"));
        };
        let readable = number.text.len() == 5 && self::number(number.text).is_some();
        if when.is_none() && (!readable || number.text.starts_with("99")) {
            return Err(refuse(
                "neither the date group nor the station number is readable",
            ));
        }
        if readable {
            station.wmo = Some(number.text.into());
        } else {
            notes.push(note(
                number.line,
                format!(
                    "station number not understood in group {}",
                    quote(&[number])
                ),
                "it has five figures; the group is kept as the station's name in the text",
            ));
            station.text = Some(number.text.into());
        }
    } else {
        place(&mut groups, &mut station, &note, notes);
        if letters.platform == Platform::Mobile {
            elevation(&mut groups, &mut station, &note, notes);
        }
        station.text = match (call_sign, station.position) {
            // "SHIP" hides a call sign: the position tells such ships apart.
            (Some("SHIP"), Some(position)) => Some(format!("SHIP {}", degrees(position))),
            (Some(sign), _) => Some(sign.to_string()),
            (None, Some(position)) => Some(format!(
                "{} {}",
                if letters.platform == Platform::Drop {
                    "drop"
                } else {
                    "platform"
                },
                degrees(position)
            )),
            (None, None) => None,
        };
    }
    let rest = words.get(groups.at..).unwrap_or(&[]);
    Ok(Header {
        station,
        when,
        unit,
        indicator: date.text.chars().nth(4).unwrap_or(' '),
        nil: rest.first().is_some_and(|word| word.text == "NIL"),
        length: groups.at,
    })
}

struct Groups<'a, 'w> {
    words: &'w [Word<'a>],
    at: usize,
}

impl<'a> Groups<'a, '_> {
    fn peek(&self, ahead: usize) -> Option<Word<'a>> {
        self.words.get(self.at + ahead).copied()
    }

    fn next(&mut self) -> Option<Word<'a>> {
        let word = self.peek(0)?;
        self.at += 1;
        Some(word)
    }

    /// A call sign stands before the date group. Without one the date group stands first and a position (99...) second.
    fn call_sign(&mut self) -> Option<&'a str> {
        let first = self.peek(0)?;
        let second = self.peek(1)?;
        let left_out = day_hour(first.text).is_some()
            && second.text.starts_with("99")
            && latitude(second.text).is_some();
        if left_out {
            return None;
        }
        self.next().map(|word| word.text)
    }
}

fn day_hour(group: &str) -> Option<DayHour> {
    if group.len() != 5 {
        return None;
    }
    let coded = number(cut(group, 0, 2))?;
    let hour = number(cut(group, 2, 4)).filter(|hour| *hour <= 23)?;
    let day = if coded > 50 { coded - 50 } else { coded };
    (1..=31).contains(&day).then_some(())?;
    Some(DayHour {
        day: i8::try_from(day).ok()?,
        hour: i8::try_from(hour).ok()?,
    })
}

fn latitude(group: &str) -> Option<f64> {
    let tenths = number(cut(group, 2, 5)).filter(|tenths| *tenths <= 900)?;
    (group.len() == 5 && group.starts_with("99")).then_some(f64::from(tenths) / 10.0)
}

/// `99LLL QLLLL MMMUU`: latitude, quadrant and longitude, and the Marsden square that confirms them.
fn place(
    groups: &mut Groups,
    station: &mut Station,
    note: &impl Fn(usize, String, &str) -> Note,
    notes: &mut Vec<Note>,
) {
    let taken: Vec<Word> = (0..3).map_while(|ahead| groups.peek(ahead)).collect();
    let Some((first, second)) = taken.first().zip(taken.get(1)) else {
        return;
    };
    let decoded = latitude(first.text).zip(longitude(second.text));
    let Some((latitude, (north, longitude))) = decoded else {
        notes.push(note(
            first.line,
            format!("position not understood in groups {}", quote(&taken)),
            "expected 99 with latitude in tenths, a quadrant (1, 3, 5, 7) with longitude in tenths, a Marsden square",
        ));
        // Three groups stand here whatever they hold, unless the levels start at once.
        if first.text.starts_with("99") && second.text.len() == 5 {
            groups.at += taken.len();
        }
        return;
    };
    groups.at += 2;
    let position = Position {
        latitude: if north { latitude } else { -latitude },
        longitude,
    };
    station.position = Some(position);
    if let Some(square) = taken.get(2) {
        groups.at += 1;
        if !confirms(square.text, position) {
            notes.push(note(
                square.line,
                format!(
                    "Marsden square group {} doesn't confirm the position {}",
                    quote(&[*square]),
                    degrees(position)
                ),
                "one of the position groups is wrong; the position is kept as coded",
            ));
        }
    }
}

/// `QLLLL`: whether north, and the longitude (code table 3333, from memory: 1 north east, 3 south east, 5 south west, 7
/// north west).
fn longitude(group: &str) -> Option<(bool, f64)> {
    let tenths = number(cut(group, 1, 5)).filter(|tenths| *tenths <= 1800)?;
    let degrees = f64::from(tenths) / 10.0;
    let (north, east) = match (group.len(), group.as_bytes().first()?) {
        (5, b'1') => (true, true),
        (5, b'3') => (false, true),
        (5, b'5') => (false, false),
        (5, b'7') => (true, false),
        _ => return None,
    };
    Some((north, if east { degrees } else { -degrees }))
}

/// Whether `MMMUU` fits: the Marsden square of ten degrees and the units figures of latitude and longitude.
///
/// Squares (from memory): 36 a band westward from Greenwich, 1 to 36 between the equator and 10 N, from 300 southward,
/// from 901 north of 80 N. On a boundary either square is right, so only the units are compared there.
fn confirms(group: &str, position: Position) -> bool {
    let (Some(square), Some(units)) = (number(cut(group, 0, 3)), number(cut(group, 3, 5))) else {
        return group
            .bytes()
            .all(|byte| byte == b'/' || byte.is_ascii_digit());
    };
    let latitude = position.latitude.abs();
    let longitude = position.longitude.abs();
    let unit = |degrees: f64| (degrees + 1e-6).floor() as u32 % 10;
    if units != unit(latitude) * 10 + unit(longitude) {
        return false;
    }
    let boundary = |degrees: f64| (degrees % 10.0).abs() < 0.05 || (degrees % 10.0) > 9.95;
    if boundary(latitude) || boundary(longitude) {
        return true;
    }
    let west = (-position.longitude).rem_euclid(360.0);
    let column = (west / 10.0).floor() as u32 + 1;
    let band = (latitude / 10.0).floor() as u32;
    let expect = match (position.latitude >= 0.0, band) {
        (true, 8) => 900 + column,
        (true, _) => band * 36 + column,
        (false, _) => 300 - 1 + band * 36 + column,
    };
    square == expect
}

/// `hhhhi`: elevation and its unit (from memory: 1 to 4 metres, 5 to 8 feet, by falling confidence).
fn elevation(
    groups: &mut Groups,
    station: &mut Station,
    note: &impl Fn(usize, String, &str) -> Note,
    notes: &mut Vec<Note>,
) {
    let Some(word) = groups.next() else { return };
    let height = number(cut(word.text, 0, 4)).map(f64::from);
    station.elevation = match (height, word.text.as_bytes().get(4)) {
        (Some(metres), Some(b'1'..=b'4')) => Some(metres),
        (Some(feet), Some(b'5'..=b'8')) => Some(feet * 0.3048),
        _ => None,
    };
    if station.elevation.is_none() {
        notes.push(note(
            word.line,
            format!("elevation not understood in group {}", quote(&[word])),
            "expected four figures and a unit figure from 1 to 8",
        ));
    }
}

fn degrees(position: Position) -> String {
    format!(
        "{:.1}{} {:.1}{}",
        position.latitude.abs(),
        if position.latitude < 0.0 { 'S' } else { 'N' },
        position.longitude.abs(),
        if position.longitude < 0.0 { 'W' } else { 'E' },
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    fn header(text: &str) -> (Result<Header, Note>, Vec<Note>) {
        let words: Vec<_> = text
            .split_whitespace()
            .map(|text| Word { text, line: 1 })
            .collect();
        let mut notes = Vec::new();
        let letters = Letters::read(words[0].text).unwrap();
        let header = read(&words, letters, &mut notes);
        (header, notes)
    }

    #[test]
    fn land() {
        let (found, notes) = header("TTAA 56001 00694 99009");
        let found = found.unwrap();
        assert_eq!(found.when, Some(DayHour { day: 6, hour: 0 }));
        assert_eq!(found.unit, Some(KNOT));
        assert_eq!(found.indicator, '1');
        assert_eq!(found.station.wmo.as_deref(), Some("00694"));
        assert_eq!((found.length, notes.len()), (3, 0));
        let (found, _) = header("TTDD 3112/ 00694 11978");
        let found = found.unwrap();
        assert_eq!(found.when, Some(DayHour { day: 31, hour: 12 }));
        assert_eq!((found.unit, found.indicator), (Some(1.0), '/'));
        assert!(header("TTAA 56001 00694 NIL").0.unwrap().nil);
    }

    /// Position worked out by hand: 29.4 N 86.1 W lies in Marsden square 81 (20 to 30 N is 73 to 108, 80 to 90 W the
    /// ninth square west of Greenwich).
    #[test]
    fn drops_ships_and_mobile_stations() {
        let (found, notes) = header("XXAA 71138 99294 70861 08196 99001");
        let found = found.unwrap();
        assert_eq!(
            found.station.position,
            Some(Position {
                latitude: 29.4,
                longitude: -86.1
            })
        );
        assert_eq!(found.station.text.as_deref(), Some("drop 29.4N 86.1W"));
        assert_eq!((found.length, notes.len()), (5, 0));
        assert_eq!(header("XXAA 71138 99294 70861 08296 99001").1.len(), 1);

        // 35.2 S 18.4 E: 30 to 40 S starts at 300 + 3 * 36 = 408; 18.4 E is 341.6 W, the 35th square: 442.
        let (found, notes) = header("UUAA ABCD7 06121 99352 30184 44258 99015");
        let found = found.unwrap();
        assert_eq!(found.station.text.as_deref(), Some("ABCD7"));
        assert_eq!(found.length, 6);
        assert!(notes.is_empty(), "{notes:?}");
        let (found, _) = header("UUAA 06121 99352 30184 44258 99015");
        assert_eq!(
            found.unwrap().station.text.as_deref(),
            Some("platform 35.2S 18.4E")
        );

        // 45.2 N 8.4 E: 40 to 50 N starts at 145; 8.4 E is 351.6 W, the 36th square: 180.
        let (found, notes) = header("IIAA TEAM1 06121 99452 10084 18058 04301 99970");
        let found = found.unwrap();
        assert_eq!(found.station.elevation, Some(430.0));
        assert!(notes.is_empty(), "{notes:?}");
    }

    #[test]
    fn unreadable_headers() {
        let (found, notes) = header("TTAA 5x001 00694 99009");
        assert_eq!(found.unwrap().when, None);
        assert_eq!(notes.len(), 1);
        let (found, notes) = header("TTAA 56001 7x694 99009");
        assert_eq!(found.unwrap().station.text.as_deref(), Some("7x694"));
        assert_eq!(notes.len(), 1);
        for text in ["TTAA", "TTAA NIL", "TTAA 56001", "TTAA 72694 99009 22868"] {
            assert!(header(text).0.is_err(), "{text}");
        }
        let (found, notes) = header("XXAA 71138 99x94 70861 08196 99001");
        let found = found.unwrap();
        assert_eq!((found.station.position, found.length), (None, 5));
        assert_eq!(notes.len(), 1);
    }
}
