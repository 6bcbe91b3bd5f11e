//! A table to a sounding.

use super::Section;
use super::comments::Comments;
use super::course::{self, Course};
use super::header::TableHeader;
use super::names::Quantity;
use super::rows::{self, Row};
use super::units;
use crate::ReadOptions;
use crate::stations::{distance_km, position};
use crate::tally::Tally;
use dewbound_sounding::{
    HumidityReported, Level, LevelKind, Note, Place, Position, Sounding, Source, Station, Times,
    Wind,
    thermo::{Pressure, Temperature, dewpoint_from_mixing_ratio, dewpoint_from_relative_humidity},
};
use std::collections::BTreeSet;

/// Builds the sounding; `Err` with notes when no row holds a level.
pub(crate) fn sounding(
    section: &Section,
    cut_short: bool,
    options: &ReadOptions,
) -> Result<Sounding, Vec<Note>> {
    let mut comments = Comments::read(section.comments.iter().copied());
    let mut notes = std::mem::take(&mut comments.notes);
    notes.extend(notes_on_header(section, &comments));

    let mut tally = Tally::default();
    let mut rows = rows::read(&section.header, &section.rows, cut_short, &mut tally);
    notes.extend(units::set_aside_impossible(
        &section.header,
        section.header_line,
        &mut rows,
    ));
    if lacks_half_the_wind(&section.header) {
        for row in &mut rows {
            row.set(Quantity::WindDirection, None);
            row.set(Quantity::WindSpeed, None);
        }
    }
    let launch = course::count_from_launch(&mut rows, comments.launch, comments.date, &mut notes);
    let course = course::keep_one_course(&mut rows, comments.dropsonde, &mut notes);
    drop_empty(&mut rows, &mut tally);
    if rows.is_empty() {
        notes.extend(tally.notes());
        notes.push(Note {
            place: Place::Line(section.header_line),
            what: "no row under this header holds a level".into(),
            why: String::new(),
        });
        return Err(notes);
    }

    let surface = surface_row(&rows, course);
    let mut station = std::mem::take(&mut comments.station);
    place_station(&mut station, &rows, course, options, &mut notes);
    let above_ground = comments.heights_above_ground;
    set_elevation(&mut station, &rows, surface, above_ground, &mut notes);
    let lift = HeightsFrom::new(&station, above_ground, course, &rows, &mut notes);

    let mut levels: Vec<Level> = rows
        .iter()
        .map(|row| level(row, &lift, &mut tally))
        .collect();
    if let Some(level) = surface
        .filter(|index| starts_at_launch(&rows, *index))
        .and_then(|index| levels.get_mut(index))
    {
        level.kind = LevelKind::Surface;
    }
    notes.extend(tally.notes());
    notes.sort_by_key(|note| note.place);

    Ok(Sounding {
        station,
        times: Times {
            launch,
            nominal: comments.nominal,
            ..Times::default()
        },
        levels,
        humidity_reported: humidity_reported(&rows),
        released_aloft: course == Course::Descent,
        source: Source {
            format: "columns",
            parts: BTreeSet::from([section.digest.clone().digest()]),
            ..Source::default()
        },
        notes,
        demo: comments.demo,
        ..Sounding::default()
    })
}

fn drop_empty(rows: &mut Vec<Row>, tally: &mut Tally) {
    rows.retain(|row| {
        if row.is_empty() {
            tally.add(
                "empty",
                0,
                row.line,
                || "the row holds no measurement and is no level".into(),
                "",
            );
        }
        !row.is_empty()
    });
}

fn lacks_half_the_wind(header: &TableHeader) -> bool {
    header.has(Quantity::WindDirection) != header.has(Quantity::WindSpeed)
}

/// Columns and comments that are not used, one note each.
fn notes_on_header(section: &Section, comments: &Comments) -> Vec<Note> {
    let header = &section.header;
    let mut notes = Vec::new();
    let mut note = |what: String, why: &str| {
        notes.push(Note {
            place: Place::Line(section.header_line),
            what,
            why: why.into(),
        });
    };
    if !header.unknown.is_empty() {
        note(
            format!("columns not used: {}", header.unknown.join(", ")),
            "their names are not among those understood",
        );
    }
    if !header.repeated.is_empty() {
        note(
            format!("columns not used: {}", header.repeated.join(", ")),
            "an earlier column gives the same quantity",
        );
    }
    for (name, names) in &header.without_unit {
        note(
            format!("column not used: {name}"),
            &format!(
                "its name doesn't say the unit: write {}",
                names.join(" or ")
            ),
        );
    }
    if lacks_half_the_wind(header) {
        note(
            "winds not used".into(),
            "a wind needs a column of direction and one of speed",
        );
    }
    if let (Some((line, _)), false) = (section.comments.first(), comments.unused.is_empty()) {
        notes.push(Note {
            place: Place::Line(*line),
            what: format!("`#` lines not used: {}", comments.unused.join(", ")),
            why: String::new(),
        });
    }
    notes
}

/// Index of the row on the ground: the first of an ascent, when it measured temperature or wind and nothing lies well
/// below it.
fn surface_row(rows: &[Row], course: Course) -> Option<usize> {
    if course == Course::Descent {
        return None;
    }
    let index = rows.iter().position(|row| {
        row.get(Quantity::Temperature).is_some()
            || (row.get(Quantity::WindDirection).is_some()
                && row.get(Quantity::WindSpeed).is_some())
    })?;
    // Heights from satellites wander by tens of metres while the balloon is let go; 10 hPa is about 85 m.
    const WANDERS: f64 = 1000.0;
    let most = rows
        .iter()
        .filter_map(|row| row.get(Quantity::Pressure))
        .fold(0.0, f64::max);
    let pressure = rows.get(index)?.get(Quantity::Pressure)?;
    (starts_at_launch(rows, index) || pressure + WANDERS >= most).then_some(index)
}

/// Whether a row is the moment of launch.
fn starts_at_launch(rows: &[Row], index: usize) -> bool {
    rows.get(index)
        .and_then(|row| row.get(Quantity::Elapsed))
        .is_some_and(|elapsed| elapsed.abs() < 1.0)
}

/// Position from the `#` lines, the station table, or the sonde's own first fix; a fix far from what is written wins,
/// since satellites make no typing errors.
fn place_station(
    station: &mut Station,
    rows: &[Row],
    course: Course,
    options: &ReadOptions,
    notes: &mut Vec<Note>,
) {
    let written = station.position;
    if let Some(table) = options.stations {
        table.fill(station);
    }
    if let Some(place) = written
        && place.latitude == place.longitude
    {
        notes.push(Note {
            place: Place::File,
            what: format!(
                "latitude and longitude are both {}: one may be a copy of the other; day and night depend on it",
                place.latitude
            ),
            why: String::new(),
        });
    }
    let Some(fix) = first_fix(rows, course) else {
        return;
    };
    match station.position {
        None => {
            station.position = Some(fix);
            notes.push(Note {
                place: Place::File,
                what: format!(
                    "the station's position is that of the {} row, {}",
                    if course == Course::Ascent {
                        "first"
                    } else {
                        "lowest"
                    },
                    spelled(fix)
                ),
                why: "no `#` line gives one".into(),
            });
        }
        Some(place) if distance_km(place, fix) > 100.0 => {
            station.position = Some(fix);
            notes.push(Note {
                place: Place::File,
                what: format!(
                    "the `#` lines or the station table put the station at {}, the sonde's own position starts {:.0} km \
                     away at {}; the sonde's is used",
                    spelled(place),
                    distance_km(place, fix),
                    spelled(fix)
                ),
                why: "a typed position can hold a typing error".into(),
            });
        }
        Some(_) => {}
    }
}

fn spelled(place: Position) -> String {
    format!("{}, {}", place.latitude, place.longitude)
}

/// The first position that the next one confirms (within a tenth of a degree), so that one wild fix is no station.
fn first_fix(rows: &[Row], course: Course) -> Option<Position> {
    let fixes: Vec<(f64, Position)> = rows
        .iter()
        .filter_map(|row| {
            let place = position(row.get(Quantity::Latitude)?, row.get(Quantity::Longitude)?)?;
            Some((row.get(Quantity::Pressure).unwrap_or(0.0), place))
        })
        .collect();
    let confirmed = |pair: &&[(f64, Position)]| match pair {
        [(_, a), (_, b)] => {
            (a.latitude - b.latitude).abs() < 0.1 && (a.longitude - b.longitude).abs() < 0.1
        }
        _ => false,
    };
    let mut pairs = fixes.windows(2).filter(confirmed).filter_map(<[_]>::first);
    let found = match course {
        Course::Ascent => pairs.next(),
        Course::Descent => pairs.max_by(|a, b| a.0.total_cmp(&b.0)),
    };
    found.map(|(_, place)| *place)
}

/// Elevation from the row on the ground when nothing else gives it, and a word when they disagree.
fn set_elevation(
    station: &mut Station,
    rows: &[Row],
    surface: Option<usize>,
    above_ground: bool,
    notes: &mut Vec<Note>,
) {
    let Some(height) = surface
        .and_then(|index| rows.get(index))
        .and_then(|row| row.get(Quantity::Height))
        .filter(|_| !above_ground)
    else {
        return;
    };
    match station.elevation {
        None => station.elevation = Some(height),
        Some(elevation) if (elevation - height).abs() > 50.0 => notes.push(Note {
            place: Place::File,
            what: format!(
                "the ground is at {elevation} m by the station's elevation, at {height} m by the first row"
            ),
            why: "if the heights are above ground, name the column height_agl_m".into(),
        }),
        Some(_) => {}
    }
}

/// How heights of rows become heights above sea level.
struct HeightsFrom {
    /// `height_m` is above ground too.
    all_above_ground: bool,
    elevation: Option<f64>,
}

impl HeightsFrom {
    fn new(
        station: &Station,
        all_above_ground: bool,
        course: Course,
        rows: &[Row],
        notes: &mut Vec<Note>,
    ) -> Self {
        let lift = Self {
            all_above_ground,
            elevation: station.elevation,
        };
        let lost = rows
            .iter()
            .any(|row| lift.height_above_ground(row).is_some() && lift.height(row).is_none());
        if lost {
            notes.push(Note {
                place: Place::File,
                what: "heights are above ground and the ground's own height is not known; they are not used".into(),
                why: match course {
                    Course::Ascent => {
                        "add the station to the station table, or a line `# position: latitude, longitude, elevation`"
                    }
                    Course::Descent => "add a line `# elevation_m:` with the height of the ground below",
                }
                .into(),
            });
        }
        lift
    }

    fn height_above_ground(&self, row: &Row) -> Option<f64> {
        let plain = row.get(Quantity::Height).filter(|_| self.all_above_ground);
        row.get(Quantity::HeightAboveGround).or(plain)
    }

    fn height(&self, row: &Row) -> Option<f64> {
        let above_sea = row.get(Quantity::Height).filter(|_| !self.all_above_ground);
        let lifted = || Some(self.height_above_ground(row)? + self.elevation?);
        above_sea.or_else(lifted)
    }
}

fn level(row: &Row, heights: &HeightsFrom, tally: &mut Tally) -> Level {
    let pressure = row.get(Quantity::Pressure);
    let temperature = row.get(Quantity::Temperature);
    let relative_humidity = relative_humidity(row, tally);
    let dewpoint = row
        .get(Quantity::Dewpoint)
        .or_else(|| {
            let humidity = relative_humidity.filter(|humidity| *humidity > 0.0)?;
            let air = Temperature::from_k(temperature?);
            Some(dewpoint_from_relative_humidity(air, humidity).k())
        })
        .or_else(|| {
            let mixing_ratio = row.get(Quantity::MixingRatio).filter(|w| *w > 0.0)?;
            let pressure = Pressure::from_pa(pressure?);
            Some(dewpoint_from_mixing_ratio(pressure, mixing_ratio).k())
        })
        .filter(|dewpoint| dewpoint.is_finite());
    Level {
        pressure,
        height: heights.height(row),
        temperature,
        dewpoint,
        relative_humidity,
        wind: wind(row, tally),
        elapsed: row.get(Quantity::Elapsed),
        kind: LevelKind::Other,
        line: Some(row.line),
    }
}

fn relative_humidity(row: &Row, tally: &mut Tally) -> Option<f64> {
    let humidity = row.get(Quantity::RelativeHumidity)?;
    if !(0.0..=1.5).contains(&humidity) {
        tally.add(
            "humidity",
            0,
            row.line,
            || {
                format!(
                    "relative humidity {:.1} % is impossible and was set aside",
                    humidity * 100.0
                )
            },
            "",
        );
        return None;
    }
    if humidity == 0.0 && row.get(Quantity::Dewpoint).is_none() {
        tally.add(
            "dry",
            0,
            row.line,
            || "relative humidity 0 %: no dew point follows from it".into(),
            "the sensor may have reached the end of its range",
        );
    }
    Some(humidity)
}

fn wind(row: &Row, tally: &mut Tally) -> Option<Wind> {
    let direction = row.get(Quantity::WindDirection);
    let speed = row.get(Quantity::WindSpeed);
    match (direction, speed) {
        (Some(direction), Some(speed)) if (0.0..=360.0).contains(&direction) && speed >= 0.0 => {
            Some(Wind { direction, speed })
        }
        // Calm has no direction.
        (None, Some(0.0)) => Some(Wind {
            direction: 0.0,
            speed: 0.0,
        }),
        (Some(direction), Some(speed)) => {
            tally.add(
                "wind",
                0,
                row.line,
                || format!("wind from {direction} degrees at {speed:.1} m/s is impossible and was set aside"),
                "",
            );
            None
        }
        (None, None) => None,
        (Some(_), None) | (None, Some(_)) => {
            tally.add(
                "half a wind",
                0,
                row.line,
                || "direction without speed, or speed without direction, is no wind and was set aside".into(),
                "",
            );
            None
        }
    }
}

fn humidity_reported(rows: &[Row]) -> HumidityReported {
    let has = |quantity| rows.iter().any(|row| row.get(quantity).is_some());
    if has(Quantity::RelativeHumidity) {
        HumidityReported::RelativeHumidity
    } else if has(Quantity::Dewpoint) || !has(Quantity::MixingRatio) {
        HumidityReported::DewPoint
    } else {
        HumidityReported::MixingRatio
    }
}
