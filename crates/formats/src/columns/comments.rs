//! The `#` lines above a table: station, times, position.
//!
//! The convention written here is one `# key: value` a line:
//!
//! ```text
//! # station: Upper Vale            name for people
//! # wmo: 01234                     also wigos, icao, id (any other identifier)
//! # time: 2031-05-17T17:31:05Z     launch
//! # nominal: 2031-05-17T18:00Z     the hour it is filed under
//! # position: 47.5, 8.25, 430      latitude, longitude, elevation in metres
//! # heights: above ground          when height_m is not above sea level
//! # demo: true                     invented data; a line that begins with INVENTED DATA says the same
//! ```
//!
//! Other habits met in the wild are understood too: `site: NAME, COUNTRY / 01234`, `site: CODE;Name`,
//! `release: 2031, 05, 17, 17:31:05`, `location_lon_lat_alt: ..., 8.25, 47.5, 430`, `height_reference: GPM_AGL`, and
//! `key=value` pairs in one line (`site= code= lat= lon= alt_m= date= start_utc=`).

use crate::{delimited::plain_name, number, stations::position, when};
use dewbound_sounding::{Note, Place, Station};
use jiff::{
    Timestamp,
    civil::{Date, Time},
};

/// What the `#` lines of one sounding say.
#[derive(Debug, Default, PartialEq)]
pub(crate) struct Comments {
    pub station: Station,
    pub launch: Option<Timestamp>,
    pub nominal: Option<Timestamp>,
    pub date: Option<Date>,
    /// Time of day of the launch, when it stands without its date.
    pub start: Option<Time>,
    pub heights_above_ground: bool,
    pub dropsonde: bool,
    pub demo: bool,
    /// Keys that mean nothing here.
    pub unused: Vec<String>,
    pub notes: Vec<Note>,
    latitude: Option<f64>,
    longitude: Option<f64>,
}

impl Comments {
    /// Reads comment lines (with their numbers).
    pub fn read<'a>(lines: impl IntoIterator<Item = (usize, &'a str)>) -> Self {
        let mut comments = Self::default();
        for (line, text) in lines {
            comments.line(line, text);
        }
        if comments.launch.is_none()
            && let (Some(date), Some(start)) = (comments.date, comments.start)
        {
            comments.launch = when::utc(date.to_datetime(start));
        }
        if let (Some(latitude), Some(longitude)) = (comments.latitude, comments.longitude) {
            match position(latitude, longitude) {
                Some(position) => comments.station.position = Some(position),
                None => comments.notes.push(Note {
                    place: Place::File,
                    what: format!("{latitude}, {longitude} is no position and not used"),
                    why: String::new(),
                }),
            }
        }
        comments
    }

    fn line(&mut self, line: usize, text: &str) {
        let text = bare(text);
        if text.is_empty() {
            return;
        }
        let lower = text.to_lowercase();
        self.dropsonde |= lower.contains("dropsonde");
        if lower.starts_with("invented data") {
            self.demo = true;
            return;
        }
        let pairs = pairs(text);
        if !pairs.is_empty() {
            for (key, value) in pairs {
                self.entry(line, key, value);
            }
        } else if let Some((key, value)) = text.split_once(':') {
            self.entry(line, key, value);
        } else {
            self.unused.push(shortened(text));
        }
    }

    fn note(&mut self, line: usize, what: String, why: &str) {
        self.notes.push(Note {
            place: Place::Line(line),
            what,
            why: why.into(),
        });
    }

    fn entry(&mut self, line: usize, written: &str, value: &str) {
        let (key, value) = (plain_name(written), value.trim());
        if value.is_empty() {
            return;
        }
        let understood = match key.as_str() {
            "station" | "site" | "name" | "station_name" => {
                self.site(line, value);
                true
            }
            "wmo" | "wmo_id" | "wmo_number" => self.wmo(value),
            "wigos" | "wigos_id" => {
                self.station.wigos = Some(value.to_owned());
                true
            }
            "icao" | "icao_id" => {
                self.station.icao = Some(value.to_ascii_uppercase());
                true
            }
            "id" | "code" | "station_id" | "site_code" => {
                self.identifier(value);
                true
            }
            "time" | "launch" | "launch_time" | "release" | "release_time" | "start_utc"
            | "start" => self.launch(value),
            "nominal" | "nominal_time" => {
                self.nominal = when::timestamp(value);
                self.nominal.is_some()
            }
            "date" => {
                self.date = when::date(value);
                self.date.is_some()
            }
            "position" | "location" => self.position(value),
            "location_lon_lat_alt" => self.longitude_first(value),
            "lat" | "latitude" | "lon" | "longitude" => self.coordinate(&key, value),
            "elevation" | "elevation_m" | "alt_m" | "altitude_m" => {
                self.station.elevation = elevation(value);
                self.station.elevation.is_some()
            }
            "heights" | "height_reference" => self.heights(value),
            "demo" => match value.to_ascii_lowercase().as_str() {
                "true" | "yes" | "1" => {
                    self.demo = true;
                    true
                }
                "false" | "no" | "0" => true,
                _ => false,
            },
            _ => {
                self.unused.push(shortened(written.trim()));
                return;
            }
        };
        if !understood {
            self.note(
                line,
                format!(
                    "`{key}: {}` is not understood and not used",
                    shortened(value)
                ),
                match key.as_str() {
                    "time" | "launch" | "launch_time" | "release" | "release_time"
                    | "start_utc" | "start" | "nominal" | "nominal_time" | "date" => {
                        "write a time as 2031-05-17T18:00Z"
                    }
                    "position" | "location" => {
                        "write a position as latitude, longitude, elevation in metres"
                    }
                    _ => "",
                },
            );
        }
    }

    /// `NAME`, `NAME, COUNTRY / 01234`, `CODE;Name`, `ABCD Name`.
    fn site(&mut self, line: usize, value: &str) {
        let mut name = value;
        if let Some((code, rest)) = value.split_once(';') {
            self.identifier(code.trim());
            name = rest;
        }
        let mut pieces: Vec<&str> = name
            .split(" / ")
            .map(|piece| piece.trim().trim_end_matches('/').trim())
            .filter(|piece| !piece.is_empty())
            .collect();
        if let Some(last) = pieces.last().copied()
            && last.len() == 5
            && self.wmo(last)
        {
            pieces.pop();
        }
        let Some((first, others)) = pieces.split_first() else {
            return;
        };
        if !others.is_empty() {
            self.note(
                line,
                format!(
                    "`{}` in the site's name is not understood",
                    others.join(" / ")
                ),
                "",
            );
        }
        let mut name = *first;
        if let Some((word, rest)) = name.split_once(' ')
            && is_icao(word)
            && rest.chars().any(char::is_lowercase)
        {
            self.station.icao = Some(word.to_owned());
            name = rest;
        }
        self.station.name = Some(name.replace(" ,", ",").replace('_', " ").trim().to_owned());
    }

    fn wmo(&mut self, value: &str) -> bool {
        let number = crate::stations::wmo_number(value);
        let understood = number.is_some();
        self.station.wmo = number.or(self.station.wmo.take());
        understood
    }

    /// An identifier of unstated kind.
    fn identifier(&mut self, value: &str) {
        if is_icao(value) {
            self.station.icao = Some(value.to_owned());
        } else if value.len() != 5 || !self.wmo(value) {
            self.station.text = Some(value.to_owned());
        }
    }

    fn launch(&mut self, value: &str) -> bool {
        let nominal = value.to_ascii_lowercase().contains("nominal");
        match (when::timestamp(value), when::time_of_day(value)) {
            (Some(time), _) if nominal => self.nominal = Some(time),
            (Some(time), _) => self.launch = Some(time),
            (None, Some(start)) => self.start = Some(start),
            (None, None) => return false,
        }
        true
    }

    /// `latitude, longitude[, elevation]`.
    fn position(&mut self, value: &str) -> bool {
        let parts: Vec<&str> = value.split(',').map(str::trim).collect();
        match parts.as_slice() {
            [latitude, longitude] => self.place(latitude, longitude, None),
            [latitude, longitude, up] => self.place(latitude, longitude, Some(up)),
            _ => false,
        }
    }

    /// The last three of a list: longitude, latitude, height of the ground.
    fn longitude_first(&mut self, value: &str) -> bool {
        let parts: Vec<&str> = value.split(',').map(str::trim).collect();
        match parts.as_slice() {
            [.., longitude, latitude, up] => self.place(latitude, longitude, Some(up)),
            _ => false,
        }
    }

    /// All or nothing: an elevation beside an impossible position may belong to another place.
    fn place(&mut self, latitude: &str, longitude: &str, up: Option<&str>) -> bool {
        let position = degrees(latitude, ['N', 'S'])
            .zip(degrees(longitude, ['E', 'W']))
            .and_then(|(latitude, longitude)| position(latitude, longitude));
        let up = up.map(elevation);
        let understood = position.is_some() && up != Some(None);
        if understood {
            self.station.position = position;
            self.station.elevation = up.flatten().or(self.station.elevation);
        }
        understood
    }

    /// One coordinate of a pair that comes in two entries.
    fn coordinate(&mut self, key: &str, value: &str) -> bool {
        let (slot, letters) = if key.starts_with("lat") {
            (&mut self.latitude, ['N', 'S'])
        } else {
            (&mut self.longitude, ['E', 'W'])
        };
        *slot = degrees(value, letters);
        slot.is_some()
    }

    fn heights(&mut self, value: &str) -> bool {
        let value = plain_name(value);
        let above_ground = ["agl", "above_ground"]
            .iter()
            .any(|words| value.contains(words));
        let above_sea = ["msl", "asl", "above_sea", "above_mean_sea"]
            .iter()
            .any(|words| value.contains(words));
        self.heights_above_ground |= above_ground;
        above_ground != above_sea
    }
}

/// The text of a comment line. Spreadsheets quote it when it holds a comma, and pad it with empty fields.
pub(crate) fn bare(line: &str) -> &str {
    line.trim_matches(|sign: char| sign.is_whitespace() || matches!(sign, ',' | ';' | '"' | '#'))
}

/// Whether a line is a comment.
pub(crate) fn is_comment(line: &str) -> bool {
    let line = line.trim_start();
    line.starts_with('#') || line.starts_with("\"#")
}

/// `key=value` tokens of a line.
fn pairs(text: &str) -> Vec<(&str, &str)> {
    text.split(|character: char| character.is_whitespace() || character == ';')
        .filter_map(|token| token.split_once('='))
        .filter(|(key, value)| !key.is_empty() && !value.is_empty())
        .collect()
}

fn is_icao(word: &str) -> bool {
    word.len() == 4 && word.bytes().all(|byte| byte.is_ascii_uppercase())
}

/// Degrees, with or without a letter for the hemisphere (`[positive, negative]`).
fn degrees(text: &str, [positive, negative]: [char; 2]) -> Option<f64> {
    let text = text.trim();
    let (text, sign) = match text.chars().last().map(|last| last.to_ascii_uppercase()) {
        Some(last) if last == positive => (text.get(..text.len() - 1)?, 1.0),
        Some(last) if last == negative => (text.get(..text.len() - 1)?, -1.0),
        _ => (text, 1.0),
    };
    match number::cell(text.trim_end_matches('°'), false) {
        number::Cell::Value(value) => Some(sign * value),
        _ => None,
    }
}

fn elevation(text: &str) -> Option<f64> {
    match number::cell(text.trim_end_matches('m'), false) {
        number::Cell::Value(value) if (-500.0..=9000.0).contains(&value) => Some(value),
        _ => None,
    }
}

/// Text short enough for a note.
pub(crate) fn shortened(text: &str) -> String {
    const LONGEST: usize = 40;
    match text.char_indices().nth(LONGEST) {
        Some((end, _)) => format!("{}...", text.get(..end).unwrap_or_default()),
        None => text.to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use dewbound_sounding::Position;

    fn read(text: &str) -> Comments {
        Comments::read(crate::text::lines(text))
    }

    fn at(latitude: f64, longitude: f64) -> Option<Position> {
        Some(Position {
            latitude,
            longitude,
        })
    }

    #[test]
    fn own_convention() {
        let comments = read(
            "# station: Upper Vale\n# wmo: 01234\n# wigos: 0-20000-0-01234\n# icao: ZZUV\n# id: UV-7\n\
             # time: 2031-05-17T17:31:05Z\n# nominal: 2031-05-17T18:00Z\n# position: 47.5, 8.25, 430\n\
             # heights: above ground\n# demo: true\n",
        );
        assert_eq!(
            comments.station,
            Station {
                wigos: Some("0-20000-0-01234".into()),
                wmo: Some("01234".into()),
                icao: Some("ZZUV".into()),
                text: Some("UV-7".into()),
                name: Some("Upper Vale".into()),
                position: at(47.5, 8.25),
                elevation: Some(430.0),
            }
        );
        assert_eq!(comments.launch, "2031-05-17T17:31:05Z".parse().ok());
        assert_eq!(comments.nominal, "2031-05-17T18:00:00Z".parse().ok());
        assert!(comments.demo && comments.heights_above_ground);
        assert!(read("# INVENTED DATA: no such place").demo);
        assert!(comments.notes.is_empty() && comments.unused.is_empty());
    }

    #[test]
    fn sites_of_other_habits() {
        let station = |text| read(text).station;
        let found = station("# site: Upper Vale , Nowhere / 01234");
        assert_eq!(found.name.as_deref(), Some("Upper Vale, Nowhere"));
        assert_eq!(found.wmo.as_deref(), Some("01234"));
        let found = station("# site: UPPERVALE, Nowhere /  / 01234");
        assert_eq!(found.name.as_deref(), Some("UPPERVALE, Nowhere"));
        assert_eq!(found.icao, None);
        let found = station("# site: VALE1;Upper Vale, NW");
        assert_eq!(found.text.as_deref(), Some("VALE1"));
        assert_eq!(found.name.as_deref(), Some("Upper Vale, NW"));
        let found = station("# site: ZZUV Upper Vale, NW / 01234");
        assert_eq!(found.icao.as_deref(), Some("ZZUV"));
        assert_eq!(found.name.as_deref(), Some("Upper Vale, NW"));
        let comments = read("# site: Upper Vale / XYZ / 01234");
        assert_eq!(comments.station.wmo.as_deref(), Some("01234"));
        assert_eq!(comments.notes.len(), 1);
    }

    #[test]
    fn spreadsheets_quote_and_pad() {
        let station =
            read("\"# position: 47.5, 8.25, 430\",,,\n# station: Upper Vale,,,,\n").station;
        assert_eq!(station.position, at(47.5, 8.25));
        assert_eq!(station.elevation, Some(430.0));
        assert_eq!(station.name.as_deref(), Some("Upper Vale"));
    }

    #[test]
    fn pairs_in_one_line() {
        let comments = read(
            "# taken from the raw file; site=Nowhere_Vale code=ZZUV lat=-3.5 lon=+188.5 alt_m=+21 \
             date=2031/01/18 start_utc=20:44:13 sonde=X-6",
        );
        assert_eq!(comments.station.name.as_deref(), Some("Nowhere Vale"));
        assert_eq!(comments.station.icao.as_deref(), Some("ZZUV"));
        assert_eq!(comments.station.position, at(-3.5, -171.5));
        assert_eq!(comments.station.elevation, Some(21.0));
        assert_eq!(comments.launch, "2031-01-18T20:44:13Z".parse().ok());
        assert_eq!(comments.unused, ["sonde"]);
    }

    #[test]
    fn positions_and_times_of_other_habits() {
        let comments = read(
            "# release: 203102030100 UTC (nominal)\n\
             # location_lon_lat_alt: 008 15.00'W, 47 30.00'N, -8.250, 47.500, 430.0\n\
             # height_reference: GPM_AGL\n",
        );
        assert_eq!(comments.nominal, "2031-02-03T01:00:00Z".parse().ok());
        assert_eq!(comments.launch, None);
        assert_eq!(comments.station.position, at(47.5, -8.25));
        assert_eq!(comments.station.elevation, Some(430.0));
        assert!(comments.heights_above_ground);
        assert_eq!(
            read("# position: 3.5S, 60W").station.position,
            at(-3.5, -60.0)
        );
    }

    #[test]
    fn what_is_not_understood_is_said() {
        for text in [
            "# time: yesterday noon",
            "# position: 95, 8, 430",
            "# position: here",
            "# wmo: 1234567",
            "# demo: perhaps",
            "# elevation_m: high",
            "# heights: somewhere",
        ] {
            let comments = read(text);
            assert_eq!(comments.notes.len(), 1, "{text}");
            assert_eq!(comments.notes[0].place, Place::Line(1));
            assert_eq!(comments.station, Station::default(), "{text}");
        }
    }
}
