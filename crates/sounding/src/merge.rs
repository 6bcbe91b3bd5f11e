//! Cleaning, ordering and merging the received levels.

use crate::flight::{Flight, flight};
use crate::profile::SAME_PRESSURE;
use crate::{Level, LevelKind, Note, Place, Profile, Sampling, Sounding, Wind};

/// Pressures (Pa) a balloon can meet; the highest on record at sea level is below 1,090 hPa.
const PRESSURES: std::ops::RangeInclusive<f64> = 10.0..=110_000.0;
/// Temperatures and dew points (K) that can't be ruled out outright: far outside every record from ground to stratopause.
const TEMPERATURES: std::ops::RangeInclusive<f64> = 140.0..=340.0;
const DEWPOINTS: std::ops::RangeInclusive<f64> = 120.0..=320.0;
/// Heights, m.
const HEIGHTS: std::ops::RangeInclusive<f64> = -1_000.0..=80_000.0;
/// Wind speeds, m/s.
const SPEEDS: std::ops::RangeInclusive<f64> = 0.0..=250.0;
/// Dew point above temperature up to this (K) is rounding or slight supersaturation: saturated.
const SATURATED_WITHIN: f64 = 1.0;
/// A complete level this close (Pa) above an incomplete surface serves in its place.
const SERVES_WITHIN: f64 = 1_000.0;
/// Longest median step (Pa) of fine data, and the fewest pressures to judge by.
const FINE_STEP: f64 = 300.0;
const FINE_ROWS: usize = 20;

/// Occurrences of one kind of trouble, told one by one in coded data and as one note in fine data.
struct Tally {
    /// What a single note for many says, after the count.
    many: &'static str,
    why: &'static str,
    seen: Vec<(Place, String)>,
}

impl Tally {
    fn new(many: &'static str, why: &'static str) -> Self {
        Self {
            many,
            why,
            seen: Vec::new(),
        }
    }

    fn add(&mut self, place: Place, what: String) {
        self.seen.push((place, what));
    }

    fn tell(self, sampling: Sampling, notes: &mut Vec<Note>) {
        let count = self.seen.len();
        let why = self.why.to_string();
        if sampling == Sampling::Coded || count <= 3 {
            notes.extend(self.seen.into_iter().map(|(place, what)| Note {
                place,
                what,
                why: why.clone(),
            }));
        } else if let Some((place, first)) = self.seen.into_iter().next() {
            notes.push(Note {
                place,
                what: format!("{count} {}; the first: {first}", self.many),
                why,
            });
        }
    }
}

/// See [`Profile::received`].
pub(crate) fn received(sounding: &Sounding) -> (Profile, Vec<Note>) {
    let mut notes = Vec::new();
    let mut unusable = Tally::new(
        "values that can't be used count as missing",
        "not a number, or outside what air can be",
    );
    let mut saturated = Tally::new(
        "dew points slightly above temperature: counted as saturated",
        "up to 1 K is rounding or slight supersaturation",
    );
    let clean: Vec<Level> = sounding
        .levels
        .iter()
        .enumerate()
        .map(|(index, level)| cleaned(index, level, &mut unusable, &mut saturated))
        .collect();

    let with_pressure: Vec<usize> = (0..clean.len())
        .filter(|&row| clean.get(row).is_some_and(|level| level.pressure.is_some()))
        .collect();
    let sampling = sampling(&clean);
    unusable.tell(sampling, &mut notes);
    saturated.tell(sampling, &mut notes);
    note_without_pressure(&sounding.levels, &clean, &mut notes);

    let mut marked = with_pressure.iter().copied().filter(|&row| {
        clean
            .get(row)
            .is_some_and(|level| level.kind == LevelKind::Surface)
    });
    let surface_marked = marked.next();
    let flight = match sampling {
        Sampling::Fine => flight(&clean, &with_pressure, surface_marked),
        Sampling::Coded => None,
    };
    let (rows, mut surface_level) = match &flight {
        Some(flight) => {
            note_left_out(flight, &clean, &mut notes);
            (flight.leg.clone(), flight.surface)
        }
        None => (with_pressure, surface_marked),
    };
    if surface_level.is_none() {
        surface_level = surface_marked.filter(|row| rows.contains(row));
    }

    let mut conflicts = Tally::new(
        "levels repeat a pressure with other values; the value received first is kept",
        "one pressure, one row",
    );
    let mut profile = merged(&clean, rows, sampling, &mut conflicts);
    conflicts.tell(sampling, &mut notes);

    choose_surface(&mut profile, surface_level, &clean, &mut notes);
    if let (Some(row), Some(elevation)) = (profile.surface, sounding.station.elevation)
        && HEIGHTS.contains(&elevation)
        && let Some(height) = profile.height.get_mut(row)
    {
        height.get_or_insert(elevation);
    }
    (profile, notes)
}

/// A level with only the values that can be used.
fn cleaned(index: usize, level: &Level, unusable: &mut Tally, saturated: &mut Tally) -> Level {
    let place = place(level);
    let mut checked = |value: Option<f64>,
                       range: &std::ops::RangeInclusive<f64>,
                       name: &str,
                       shown: fn(f64) -> String| {
        let value = value?;
        if range.contains(&value) {
            return Some(value);
        }
        unusable.add(
            place,
            format!(
                "{name} {} of received level {} counts as missing",
                shown(value),
                index + 1
            ),
        );
        None
    };
    let celsius = |k: f64| format!("{:.1} °C", k - 273.15);
    let pressure = checked(level.pressure, &PRESSURES, "pressure", hpa);
    let height = checked(level.height, &HEIGHTS, "height", |z| format!("{z} m"));
    let temperature = checked(level.temperature, &TEMPERATURES, "temperature", celsius);
    let mut dewpoint = checked(level.dewpoint, &DEWPOINTS, "dew point", celsius);
    let wind = level.wind.filter(|wind| {
        let speed = checked(Some(wind.speed), &SPEEDS, "wind speed", |v| {
            format!("{v} m/s")
        });
        let direction = checked(
            Some(wind.direction),
            &(0.0..=360.0),
            "wind direction",
            |d| format!("{d}°"),
        );
        speed.is_some() && direction.is_some()
    });
    if let (Some(t), Some(td)) = (temperature, dewpoint)
        && td > t
    {
        if td - t <= SATURATED_WITHIN {
            dewpoint = Some(t);
            saturated.add(
                place,
                format!(
                    "dew point {} above temperature {} at {}: counted as saturated",
                    celsius(td),
                    celsius(t),
                    at(pressure)
                ),
            );
        } else {
            dewpoint = None;
            unusable.add(
                place,
                format!(
                    "dew point {} far above temperature {} at {}: counts as missing",
                    celsius(td),
                    celsius(t),
                    at(pressure)
                ),
            );
        }
    }
    Level {
        pressure,
        height,
        temperature,
        dewpoint,
        wind,
        ..*level
    }
}

/// Fine or coded: see [`Profile::received`].
fn sampling(levels: &[Level]) -> Sampling {
    let mut pressures: Vec<f64> = levels
        .iter()
        .filter(|level| level.temperature.is_some())
        .filter_map(|level| level.pressure)
        .collect();
    pressures.sort_by(|a, b| b.total_cmp(a));
    pressures.dedup_by(|a, b| (*a - *b).abs() <= SAME_PRESSURE);
    let Some(&bottom) = pressures.first() else {
        return Sampling::Coded;
    };
    pressures.retain(|&p| p >= bottom - 50_000.0);
    let mut steps: Vec<f64> = pressures
        .windows(2)
        .filter_map(|pair| if let [a, b] = pair { Some(a - b) } else { None })
        .collect();
    if pressures.len() < FINE_ROWS {
        return Sampling::Coded;
    }
    steps.sort_by(f64::total_cmp);
    match steps.get(steps.len() / 2) {
        Some(&median) if median <= FINE_STEP => Sampling::Fine,
        _ => Sampling::Coded,
    }
}

fn note_without_pressure(received: &[Level], clean: &[Level], notes: &mut Vec<Note>) {
    let carries = |level: &Level| {
        level.height.is_some()
            || level.temperature.is_some()
            || level.dewpoint.is_some()
            || level.wind.is_some()
    };
    let left_out: Vec<&Level> = clean
        .iter()
        .zip(received)
        .filter(|(clean, level)| clean.pressure.is_none() && carries(level))
        .map(|(_, level)| level)
        .collect();
    let Some(first) = left_out.first() else {
        return;
    };
    let what = match left_out.len() {
        1 => "1 level without pressure left out".to_string(),
        n => format!("{n} levels without pressure left out"),
    };
    notes.push(Note {
        place: place(first),
        what,
        why: "a level has its place in the profile by pressure".to_string(),
    });
}

fn note_left_out(flight: &Flight, levels: &[Level], notes: &mut Vec<Note>) {
    let mut tell = |rows: &[usize], what: &str, why: &str| {
        let Some(first) = rows.first().and_then(|&row| levels.get(row)) else {
            return;
        };
        let (low, high) = rows
            .iter()
            .filter_map(|&row| levels.get(row)?.pressure)
            .fold((f64::INFINITY, 0.0_f64), |(low, high), p| {
                (low.min(p), high.max(p))
            });
        let number = if rows.len() == 1 {
            "1 row".to_string()
        } else {
            format!("{} rows", rows.len())
        };
        notes.push(Note {
            place: place(first),
            what: format!("{number} {what} left out ({} to {})", hpa(high), hpa(low)),
            why: why.to_string(),
        });
    };
    tell(
        &flight.waiting,
        "of the wait before launch",
        "pressure wanders there without the sonde rising; the first row stands for the surface",
    );
    tell(
        &flight.below_surface,
        "after launch below the surface pressure",
        "the ascent starts at the surface",
    );
    if flight.ascending {
        tell(
            &flight.other_leg,
            "of the descent after the top",
            "the profile is the ascent",
        );
    } else {
        tell(
            &flight.other_leg,
            "before the descent",
            "the profile is the descent",
        );
    }
}

/// One row a pressure, falling.
fn merged(
    levels: &[Level],
    mut rows: Vec<usize>,
    sampling: Sampling,
    conflicts: &mut Tally,
) -> Profile {
    let pressure = |row: &usize| {
        levels
            .get(*row)
            .and_then(|level| level.pressure)
            .unwrap_or(f64::NAN)
    };
    rows.sort_by(|a, b| pressure(b).total_cmp(&pressure(a)).then(a.cmp(b)));
    let mut profile = Profile {
        sampling,
        ..Profile::default()
    };
    // The received order decides within a pressure, so groups are gathered before they are merged.
    let mut group: Vec<usize> = Vec::new();
    let mut group_pressure = f64::NAN;
    for row in rows {
        let p = pressure(&row);
        if !group.is_empty() && group_pressure - p > SAME_PRESSURE {
            push_group(levels, &mut group, &mut profile, conflicts);
        }
        if group.is_empty() {
            group_pressure = p;
        }
        group.push(row);
    }
    push_group(levels, &mut group, &mut profile, conflicts);
    profile
}

fn push_group(
    levels: &[Level],
    group: &mut Vec<usize>,
    profile: &mut Profile,
    conflicts: &mut Tally,
) {
    group.sort_unstable();
    let mut members = group
        .iter()
        .filter_map(|&row| Some((row, levels.get(row)?)));
    let Some((first_row, &first)) = members.next() else {
        return;
    };
    let mut kept = first;
    for (_, level) in members {
        let mut differing = Vec::new();
        keep_first(&mut kept.height, level.height, 0.5, || {
            differing.push("height")
        });
        keep_first(&mut kept.temperature, level.temperature, 0.01, || {
            differing.push("temperature")
        });
        keep_first(&mut kept.dewpoint, level.dewpoint, 0.01, || {
            differing.push("dew point")
        });
        match (kept.wind, level.wind) {
            (None, wind) => kept.wind = wind,
            (Some(a), Some(b)) if winds_differ(a, b) => differing.push("wind"),
            _ => {}
        }
        if !differing.is_empty() {
            conflicts.add(
                place(level),
                format!(
                    "{} repeated with other {}; the first received is kept",
                    at(kept.pressure),
                    differing.join(", ")
                ),
            );
        }
    }
    // A later level may have filled the dew point of an earlier temperature.
    if let (Some(t), Some(td)) = (kept.temperature, kept.dewpoint) {
        kept.dewpoint = Some(td.min(t));
    }
    profile.pressure.push(kept.pressure.unwrap_or(f64::NAN));
    profile.height.push(kept.height);
    profile.temperature.push(kept.temperature);
    profile.dewpoint.push(kept.dewpoint);
    profile.wind.push(kept.wind);
    profile.received.push(Some(first_row));
    group.clear();
}

fn keep_first(kept: &mut Option<f64>, later: Option<f64>, tolerance: f64, conflict: impl FnOnce()) {
    match (*kept, later) {
        (None, later) => *kept = later,
        (Some(a), Some(b)) if (a - b).abs() > tolerance => conflict(),
        _ => {}
    }
}

fn winds_differ(a: Wind, b: Wind) -> bool {
    let turn = (a.direction - b.direction).rem_euclid(360.0);
    (a.speed - b.speed).abs() > 0.1 || (a.speed > 0.1 && turn.min(360.0 - turn) > 0.5)
}

/// The surface row: given, else the lowest that reports temperature or wind; replaced by a complete one close above when incomplete.
fn choose_surface(
    profile: &mut Profile,
    level: Option<usize>,
    levels: &[Level],
    notes: &mut Vec<Note>,
) {
    let given = level
        .and_then(|row| levels.get(row)?.pressure)
        .and_then(|p| {
            profile
                .pressure
                .iter()
                .position(|&q| (p - q).abs() <= SAME_PRESSURE)
        });
    let lowest = || {
        (0..profile.len()).find(|&row| {
            matches!(profile.temperature.get(row), Some(Some(_)))
                || matches!(profile.wind.get(row), Some(Some(_)))
        })
    };
    let Some(row) = given.or_else(lowest) else {
        return;
    };
    profile.surface = Some(row);
    let pressure = profile.pressure.get(row).copied().unwrap_or(f64::NAN);
    if !profile.complete(row) {
        let near = (row + 1..profile.len())
            .take_while(|&above| {
                profile
                    .pressure
                    .get(above)
                    .is_some_and(|&p| pressure - p <= SERVES_WITHIN)
            })
            .find(|&above| profile.complete(above));
        let place = Place::Level(row);
        match near {
            Some(above) => {
                let p_above = profile.pressure.get(above).copied();
                notes.push(Note {
                    place,
                    what: format!(
                        "the surface level at {} lacks temperature or humidity: the complete level at {} serves as the surface",
                        hpa(pressure),
                        at(p_above)
                    ),
                    why: "it lies within 10 hPa above".to_string(),
                });
                profile.surface = Some(above);
            }
            None => notes.push(Note {
                place,
                what: format!(
                    "the surface level at {} lacks temperature or humidity: no surface parcel until both are set",
                    hpa(pressure)
                ),
                why: "no complete level lies within 10 hPa above".to_string(),
            }),
        }
    }
    let below = (0..row)
        .filter(|&below| matches!(profile.temperature.get(below), Some(Some(_))))
        .count();
    if below > 0 {
        notes.push(Note {
            place: Place::Level(0),
            what: format!(
                "{below} {} with temperature below the surface level at {}: not used",
                if below == 1 { "level" } else { "levels" },
                hpa(pressure)
            ),
            why: "the air a parcel rises through starts at the surface".to_string(),
        });
    }
}

fn place(level: &Level) -> Place {
    level.line.map_or(Place::File, Place::Line)
}

fn at(pressure: Option<f64>) -> String {
    pressure.map_or_else(|| "unknown pressure".to_string(), hpa)
}

/// A pressure as people read it, no more decimals than it has.
pub(crate) fn hpa(pa: f64) -> String {
    let tenths = (pa / 10.0).round() / 10.0;
    if (tenths - tenths.round()).abs() < 1e-9 {
        format!("{tenths:.0} hPa")
    } else {
        format!("{tenths:.1} hPa")
    }
}
