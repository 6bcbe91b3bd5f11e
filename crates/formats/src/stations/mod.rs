//! The office's station table, `stations.csv`.
//!
//! Columns `wmo,wigos,icao,name,lat,lon,elevation_m` in any order, separated by comma, semicolon or tab; others are
//! left alone. Lines that begin with `#` are remarks. What is added later is written back without touching the rest of
//! the file: remarks, further columns and rows that could not be read all stay as the office wrote them.

mod layout;
mod place;

use crate::delimited::Delimiter;
use crate::text;
use dewbound_sounding::{Note, Place, Station};
use layout::{COLUMNS, ELEVATIONS, Layout, column, is_row};
pub(crate) use place::{distance_km, position, wmo_number};
use std::collections::HashMap;

/// Why a station cannot be added.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum StationTableError {
    /// Nothing by which it would be found again.
    #[error("the station has no WIGOS id, WMO number, ICAO indicator or name to keep it under")]
    NoIdentifier,
    /// A position off the globe or an elevation no ground has.
    #[error("{what} is impossible")]
    Impossible {
        /// The value with its name.
        what: String,
    },
}

/// Stations by WMO number, WIGOS id and ICAO indicator.
///
/// ```
/// use dewbound_formats::StationTable;
/// use dewbound_sounding::Station;
///
/// let (table, notes) = StationTable::parse("wmo,name,lat,lon,elevation_m\n01234,Upper Vale,47.5,8.25,430\n");
/// assert!(notes.is_empty());
/// let mut station = Station { wmo: Some("01234".into()), ..Station::default() };
/// table.fill(&mut station);
/// assert_eq!(station.elevation, Some(430.0));
/// ```
#[derive(Debug, Clone, Default, PartialEq)]
pub struct StationTable {
    stations: Vec<Entry>,
    by_key: HashMap<String, usize>,
    /// The text it came from, line by line.
    lines: Vec<String>,
    layout: Option<Layout>,
}

#[derive(Debug, Clone, PartialEq)]
struct Entry {
    station: Station,
    /// Index of its line.
    line: usize,
}

impl StationTable {
    /// Reads a table. What cannot be read is noted and left as it stands.
    pub fn parse(text: &str) -> (Self, Vec<Note>) {
        let text = text.strip_prefix('\u{FEFF}').unwrap_or(text);
        let mut table = Self {
            lines: text::lines(text).map(|(_, line)| line.to_owned()).collect(),
            ..Self::default()
        };
        let mut notes = Vec::new();
        let mut note = |line: usize, what: String, why: &str| {
            notes.push(Note {
                place: Place::Line(line),
                what,
                why: why.into(),
            });
        };
        for (number, line) in text::lines(text) {
            if !is_row(line) {
                continue;
            }
            let Some(layout) = &table.layout else {
                let layout = Layout::read(line, number - 1);
                if layout.columns.iter().flatten().count() == 0 {
                    note(
                        number,
                        "the station table has no header and was not used".into(),
                        "its first line must name the columns: wmo,wigos,icao,name,lat,lon,elevation_m",
                    );
                    break;
                }
                // Few offices use all identifiers; what the table is for should be there.
                let mut missing = layout.missing();
                missing.retain(|name| ["lat", "lon", "elevation_m"].contains(name));
                if !missing.is_empty() {
                    note(
                        number,
                        format!("the station table has no column {}", missing.join(", ")),
                        "",
                    );
                }
                table.layout = Some(layout);
                continue;
            };
            let station = layout.station(line, |what, why| note(number, what, why));
            let keys = keys(&station);
            if keys.is_empty() {
                note(
                    number,
                    "the row names no station and was not used".into(),
                    "it needs a WIGOS id, WMO number, ICAO indicator or name",
                );
                continue;
            }
            let known = keys
                .iter()
                .enumerate()
                .find_map(|(rank, key)| Some((rank, key, *table.by_key.get(key)?)));
            if let Some((rank, key, index)) = known {
                let first = table.stations.get(index).map_or(0, |entry| entry.line + 1);
                // Two stations may share an ICAO indicator, not the identifier they are known by best.
                let same = rank == 0;
                let outcome = if same {
                    "this row was not used"
                } else {
                    "that row is found by it"
                };
                note(
                    number,
                    format!("{key} stands in line {first} already; {outcome}"),
                    "",
                );
                if same {
                    continue;
                }
            }
            table.push(station, number - 1);
        }
        (table, notes)
    }

    fn push(&mut self, station: Station, line: usize) {
        for key in keys(&station) {
            self.by_key.entry(key).or_insert(self.stations.len());
        }
        self.stations.push(Entry { station, line });
    }

    /// Number of stations.
    pub fn len(&self) -> usize {
        self.stations.len()
    }

    /// No stations at all.
    pub fn is_empty(&self) -> bool {
        self.stations.is_empty()
    }

    /// Every station, in file order.
    pub fn iter(&self) -> impl Iterator<Item = &Station> {
        self.stations.iter().map(|entry| &entry.station)
    }

    /// By WMO number; a lost leading zero is forgiven.
    pub fn by_wmo(&self, wmo: &str) -> Option<&Station> {
        self.by_key(&format!("WMO number {}", wmo_number(wmo)?))
    }

    /// By WIGOS id.
    pub fn by_wigos(&self, wigos: &str) -> Option<&Station> {
        self.by_key(&format!("WIGOS id {}", wigos.trim()))
    }

    /// By ICAO location indicator, in either case.
    pub fn by_icao(&self, icao: &str) -> Option<&Station> {
        self.by_key(&format!(
            "ICAO indicator {}",
            icao.trim().to_ascii_uppercase()
        ))
    }

    fn by_key(&self, key: &str) -> Option<&Station> {
        let index = *self.by_key.get(key)?;
        self.stations.get(index).map(|entry| &entry.station)
    }

    /// The row for a station: by WIGOS id, else WMO number, else ICAO indicator; a station that has none of these, by its
    /// name or other identifier.
    pub fn find(&self, station: &Station) -> Option<&Station> {
        keys(station).iter().find_map(|key| self.by_key(key))
    }

    /// Fills in name, position and elevation that the station lacks. What it has is never overridden.
    pub fn fill(&self, station: &mut Station) {
        let Some(known) = self.find(station) else {
            return;
        };
        if station.name.is_none() {
            station.name.clone_from(&known.name);
        }
        station.position = station.position.or(known.position);
        station.elevation = station.elevation.or(known.elevation);
    }

    /// What to tell a person when message and table place one station far apart; `None` when they agree.
    pub fn disagreement(&self, station: &Station) -> Option<String> {
        let known = self.find(station)?;
        let far = station
            .position
            .zip(known.position)
            .map(|(a, b)| distance_km(a, b))
            .filter(|distance| *distance > 50.0);
        let high = station
            .elevation
            .zip(known.elevation)
            .map(|(a, b)| (a - b).abs())
            .filter(|difference| *difference > 100.0);
        match (far, high) {
            (None, None) => None,
            (Some(far), None) => Some(format!(
                "its position lies {far:.0} km from the one in the station table"
            )),
            (None, Some(high)) => Some(format!(
                "its elevation differs by {high:.0} m from the one in the station table"
            )),
            (Some(far), Some(high)) => Some(format!(
                "its position lies {far:.0} km, its elevation {high:.0} m from those in the station table"
            )),
        }
    }

    /// Adds a station, or what is newly known about one: given fields replace those in its row, the others stay.
    pub fn insert(&mut self, station: Station) -> Result<(), StationTableError> {
        let mut station = station;
        station.wmo = match station.wmo {
            Some(wmo) => Some(wmo_number(&wmo).ok_or(StationTableError::Impossible {
                what: format!("WMO number {wmo}"),
            })?),
            None => None,
        };
        if let Some(place) = station.position
            && position(place.latitude, place.longitude).is_none()
        {
            return Err(StationTableError::Impossible {
                what: format!("position {}, {}", place.latitude, place.longitude),
            });
        }
        if let Some(elevation) = station.elevation
            && !ELEVATIONS.contains(&elevation)
        {
            return Err(StationTableError::Impossible {
                what: format!("elevation {elevation} m"),
            });
        }
        // A station known by another identifier only is kept under that, as its name.
        if station.name.is_none() {
            station.name = station.text.take();
        }
        station.text = None;
        let keys = keys(&station);
        if keys.is_empty() {
            return Err(StationTableError::NoIdentifier);
        }
        let known = keys.iter().find_map(|key| self.by_key.get(key)).copied();
        let layout = self.layout_with_all_columns();
        let entry = known.and_then(|index| Some((index, self.stations.get_mut(index)?)));
        if let Some((index, entry)) = entry {
            merge(&mut entry.station, station);
            if let Some(line) = self.lines.get_mut(entry.line) {
                *line = layout.write(&entry.station, line);
            }
            for key in self::keys(&entry.station) {
                self.by_key.entry(key).or_insert(index);
            }
        } else {
            let line = self.lines.len();
            self.lines.push(layout.write(&station, ""));
            self.push(station, line);
        }
        Ok(())
    }

    /// [`insert`](Self::insert) for building a table in one expression.
    pub fn with(mut self, station: Station) -> Result<Self, StationTableError> {
        self.insert(station)?;
        Ok(self)
    }

    /// The text to write back: the file as it was read, plus what was added since.
    pub fn to_csv(&self) -> String {
        let mut text = String::new();
        if self.layout.is_none() && self.lines.is_empty() {
            text.push_str(&COLUMNS.join(","));
            text.push('\n');
        }
        for line in &self.lines {
            text.push_str(line);
            text.push('\n');
        }
        text
    }

    /// Makes room for every column in the text, so that any station can be written.
    fn layout_with_all_columns(&mut self) -> Layout {
        let Some(layout) = &mut self.layout else {
            // What stood there without a header was not used; as remarks it stays without being taken for a header.
            for line in &mut self.lines {
                if is_row(line) {
                    line.insert_str(0, "# ");
                }
            }
            let layout = Layout {
                delimiter: Delimiter::COMMA,
                line: self.lines.len(),
                columns: (0..COLUMNS.len()).map(Some).collect(),
            };
            self.lines.push(COLUMNS.join(","));
            self.layout = Some(layout.clone());
            return layout;
        };
        let missing = layout.missing();
        if missing.is_empty() {
            return layout.clone();
        }
        let delimiter = layout.delimiter;
        // New columns stand to the right of the longest row, surplus fields included.
        let widest = self
            .lines
            .iter()
            .skip(layout.line)
            .filter(|line| is_row(line))
            .map(|line| delimiter.fields(line).len())
            .max()
            .unwrap_or(0);
        layout.columns.resize(widest, None);
        layout
            .columns
            .extend(missing.iter().map(|name| column(name)));
        let total = layout.columns.len();
        for (index, line) in self.lines.iter_mut().enumerate().skip(layout.line) {
            if !is_row(line) {
                continue;
            }
            // Through fields, so that a quote left open doesn't swallow what is added.
            let mut fields: Vec<String> = delimiter
                .fields(line)
                .into_iter()
                .map(|field| field.into_owned())
                .collect();
            if index == layout.line {
                fields.resize(widest, String::new());
                fields.extend(missing.iter().map(|name| (*name).to_owned()));
            }
            fields.resize(total.max(fields.len()), String::new());
            *line = delimiter.join(&fields);
        }
        layout.clone()
    }
}

/// Given fields replace, absent ones leave what is there.
fn merge(known: &mut Station, new: Station) {
    let Station {
        wigos,
        wmo,
        icao,
        text: _,
        name,
        position,
        elevation,
    } = new;
    known.wigos = wigos.or(known.wigos.take());
    known.wmo = wmo.or(known.wmo.take());
    known.icao = icao.or(known.icao.take());
    known.name = name.or(known.name.take());
    known.position = position.or(known.position);
    known.elevation = elevation.or(known.elevation);
}

/// What a station is found under, most certain first, spelled so that a note can name it.
fn keys(station: &Station) -> Vec<String> {
    let mut keys = Vec::new();
    let mut push = |kind: &str, id: &str| {
        let key = format!("{kind} {id}");
        if !id.is_empty() && !keys.contains(&key) {
            keys.push(key);
        }
    };
    if let Some(wigos) = &station.wigos {
        push("WIGOS id", wigos.trim());
        // WIGOS ids of the issuers 20000 and 20001 end in the WMO number (WIGOS guide, WMO-No. 1165; from memory).
        let wmo = ["0-20000-0-", "0-20001-0-"]
            .iter()
            .find_map(|issuer| wigos.trim().strip_prefix(issuer))
            .filter(|number| number.len() == 5)
            .and_then(wmo_number);
        if let Some(wmo) = wmo {
            push("WMO number", &wmo);
        }
    }
    if let Some(wmo) = station.wmo.as_deref().and_then(wmo_number) {
        push("WMO number", &wmo);
        push("WIGOS id", &format!("0-20000-0-{wmo}"));
    }
    if let Some(icao) = &station.icao {
        push("ICAO indicator", &icao.trim().to_ascii_uppercase());
    }
    // Names are shared by many places: they count only where nothing better is known.
    if keys.is_empty() {
        for name in [&station.name, &station.text].into_iter().flatten() {
            let key = format!("name {}", name.trim().to_lowercase());
            if !name.trim().is_empty() && !keys.contains(&key) {
                keys.push(key);
            }
        }
    }
    keys
}

#[cfg(test)]
mod tests {
    use super::*;
    use dewbound_sounding::Position;

    fn parse(text: &str) -> StationTable {
        let (table, notes) = StationTable::parse(text);
        assert_eq!(notes, []);
        table
    }

    #[track_caller]
    fn check_notes(text: &str, expect: &[(usize, &str)]) -> StationTable {
        let (table, notes) = StationTable::parse(text);
        assert_eq!(notes.len(), expect.len(), "{notes:#?}");
        for (note, (line, part)) in notes.iter().zip(expect) {
            assert_eq!(note.place, Place::Line(*line));
            assert!(note.what.contains(part), "{}", note.what);
        }
        table
    }

    const TABLE: &str = "\
# the vale office
elevation_m,name,wmo,icao,lat,lon,wigos,remark
430,Upper Vale,01234,zzuv,47.5,8.25,0-20000-0-01234,on the hill
12.5,\"Lower Vale, harbour\",1235,,-3.5,188.5,,
";

    #[test]
    fn finds_by_every_identifier() {
        let table = parse(TABLE);
        assert_eq!(table.len(), 2);
        let upper = table.by_wmo("1234").unwrap();
        assert_eq!(upper.elevation, Some(430.0));
        assert_eq!(table.by_wigos("0-20000-0-01234"), Some(upper));
        assert_eq!(table.by_icao("ZZUV"), Some(upper));
        let lower = table.by_wmo("01235").unwrap();
        assert_eq!(lower.name.as_deref(), Some("Lower Vale, harbour"));
        assert_eq!(lower.position.unwrap().longitude, -171.5);
        // The WMO number inside a WIGOS id.
        assert_eq!(table.by_wigos("0-20000-0-01235"), Some(lower));
        assert_eq!(table.by_wmo("99999"), None);
    }

    #[test]
    fn fills_only_what_is_lacking() {
        let table = parse(TABLE);
        let mut station = Station {
            icao: Some("ZZUV".into()),
            elevation: Some(400.0),
            ..Station::default()
        };
        table.fill(&mut station);
        assert_eq!(station.name.as_deref(), Some("Upper Vale"));
        assert_eq!(station.elevation, Some(400.0));
        assert_eq!(station.position.unwrap().latitude, 47.5);
        assert_eq!(
            station.wmo, None,
            "identifiers decide under what decisions are filed"
        );
    }

    #[test]
    fn faults_are_noted_and_cost_only_themselves() {
        let table = check_notes(
            "wmo,name,lat,lon,elevation_m\n\
             01234,A,95,8,430\n\
             01235,B,47,,30\n\
             01236,C,47,8,high\n\
             123456,,47,8,30\n\
             01234,again,47,8,30\n\
             01237,D,47,8,30000\n",
            &[
                (2, "position 95, 8 is impossible"),
                (3, "incomplete"),
                (4, "elevation_m `high`"),
                (5, "`123456` is no WMO number"),
                (5, "names no station"),
                (6, "stands in line 2 already"),
                (7, "elevation_m 30000"),
            ],
        );
        assert_eq!(table.len(), 4);
        assert_eq!(table.by_wmo("01234").unwrap().elevation, Some(430.0));
        assert_eq!(
            table.by_wmo("01236").unwrap().position.unwrap().latitude,
            47.0
        );
    }

    #[test]
    fn without_header_nothing_is_guessed() {
        let table = check_notes(
            "01234,0-20000-0-01234,ZZUV,A,47,8,430\n",
            &[(1, "no header")],
        );
        assert!(table.is_empty());
    }

    #[test]
    fn spreadsheets_of_other_countries() {
        let (table, _) =
            StationTable::parse("\u{FEFF}wmo;name;lat;lon;elevation_m\r\n1234;A;47,5;8,25;430\r\n");
        assert_eq!(
            table.by_wmo("01234").unwrap().position.unwrap().latitude,
            47.5
        );
    }

    #[test]
    fn additions_are_written_beside_what_was_there() {
        let mut table = parse(TABLE);
        table
            .insert(Station {
                wmo: Some("01235".into()),
                elevation: Some(13.0),
                ..Station::default()
            })
            .unwrap();
        table
            .insert(Station {
                text: Some("FIELD-7".into()),
                position: position(10.0, 20.0),
                ..Station::default()
            })
            .unwrap();
        assert_eq!(
            table.to_csv(),
            "\
# the vale office
elevation_m,name,wmo,icao,lat,lon,wigos,remark
430,Upper Vale,01234,zzuv,47.5,8.25,0-20000-0-01234,on the hill
13,\"Lower Vale, harbour\",01235,,-3.5,-171.5,,
,FIELD-7,,,10,20,,
"
        );
        let again = parse(&table.to_csv());
        assert!(again.iter().eq(table.iter()));
        let mut station = Station {
            text: Some("FIELD-7".into()),
            ..Station::default()
        };
        again.fill(&mut station);
        assert_eq!(station.position, position(10.0, 20.0));
    }

    #[test]
    fn columns_that_were_lacking_are_added() {
        let (table, _) = StationTable::parse("wmo,name\n01234,A\n\n# end\n");
        let table = table
            .with(Station {
                wmo: Some("01234".into()),
                elevation: Some(5.0),
                ..Station::default()
            })
            .unwrap();
        assert_eq!(
            table.to_csv(),
            "wmo,name,wigos,icao,lat,lon,elevation_m\n01234,A,,,,,5\n\n# end\n"
        );
    }

    #[test]
    fn a_new_table_has_its_header() {
        assert_eq!(
            StationTable::default().to_csv(),
            "wmo,wigos,icao,name,lat,lon,elevation_m\n"
        );
        let table = StationTable::default()
            .with(Station {
                icao: Some("zzuv".into()),
                name: Some("A \"B\"".into()),
                ..Station::default()
            })
            .unwrap();
        assert!(parse(&table.to_csv()).by_icao("ZZUV").is_some());
    }

    #[test]
    fn what_has_no_header_becomes_a_remark_when_a_station_is_added() {
        let (table, _) = StationTable::parse("01234,A,47,8\n");
        let table = table
            .with(Station {
                wmo: Some("01235".into()),
                ..Station::default()
            })
            .unwrap();
        assert_eq!(
            table.to_csv(),
            "# 01234,A,47,8\nwmo,wigos,icao,name,lat,lon,elevation_m\n01235,,,,,,\n"
        );
    }

    #[test]
    fn impossible_additions_are_refused() {
        let refused = |station: Station| StationTable::default().with(station).unwrap_err();
        assert_eq!(refused(Station::default()), StationTableError::NoIdentifier);
        let named = Station {
            name: Some("A".into()),
            ..Station::default()
        };
        let error = refused(Station {
            elevation: Some(f64::NAN),
            ..named.clone()
        });
        assert!(matches!(error, StationTableError::Impossible { .. }));
        let error = refused(Station {
            position: Some(Position {
                latitude: 91.0,
                longitude: 0.0,
            }),
            ..named
        });
        assert_eq!(error.to_string(), "position 91, 0 is impossible");
    }

    #[test]
    fn disagreements_are_worded() {
        let table = parse(TABLE);
        let mut station = table.by_wmo("01234").unwrap().clone();
        assert_eq!(table.disagreement(&station), None);
        station.position = position(48.5, 8.25);
        let words = table.disagreement(&station).unwrap();
        // One degree of latitude: 111.2 km on this sphere.
        assert!(words.contains("111 km"), "{words}");
    }
}
