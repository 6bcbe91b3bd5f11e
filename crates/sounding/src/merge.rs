//! Ordering and merging the received levels.

use crate::clean::{HEIGHTS, cleaned};
use crate::flight::{Flight, flight};
use crate::profile::SAME_PRESSURE;
use crate::telling::{Tally, at, count_of_levels, hpa, place};
use crate::winds::place_winds;
use crate::{Level, LevelKind, Note, Place, Profile, Sampling, Sounding, Wind};

/// A complete level this close (Pa) above an incomplete surface serves in its place.
const SERVES_WITHIN: f64 = 1_000.0;
/// Longest median step (Pa) of fine data, and the fewest pressures to judge by.
const FINE_STEP: f64 = 300.0;
const FINE_ROWS: usize = 20;

/// See [`Profile::received`].
pub(crate) fn received(sounding: &Sounding) -> (Profile, Vec<Note>) {
    let mut notes = Vec::new();
    let mut unusable = Tally::new(
        "values that can't be used",
        "counted as missing",
        "not a number, or outside what air can be",
    );
    let mut saturated = Tally::new(
        "dew points slightly above temperature",
        "counted as saturated",
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
        "levels repeat a pressure with other values",
        "the value received first is kept",
        "one pressure, one row",
    );
    let used = rows.len();
    let mut profile = merged(&clean, rows, sampling, &mut conflicts);
    match sampling {
        Sampling::Coded => conflicts.tell(sampling, &mut notes),
        Sampling::Fine if conflicts.is_empty() => {}
        Sampling::Fine => note_shared_pressures(used - profile.len(), &clean, &mut notes),
    }

    choose_surface(&mut profile, surface_level, &clean, &mut notes);
    if let (Some(row), Some(elevation)) = (profile.surface, sounding.station.elevation)
        && HEIGHTS.contains(&elevation)
        && let Some(height) = profile.height.get_mut(row)
    {
        height.get_or_insert(elevation);
    }
    let placed = match sampling {
        Sampling::Coded => place_winds(&mut profile, &clean, &mut notes),
        Sampling::Fine => Vec::new(),
    };
    note_without_pressure(&sounding.levels, &clean, &placed, &mut notes);
    (profile, notes)
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

fn note_without_pressure(
    received: &[Level],
    clean: &[Level],
    placed: &[usize],
    notes: &mut Vec<Note>,
) {
    let carries = |level: &Level| {
        level.height.is_some()
            || level.temperature.is_some()
            || level.dewpoint.is_some()
            || level.wind.is_some()
    };
    let left_out: Vec<&Level> = clean
        .iter()
        .zip(received)
        .enumerate()
        .filter(|(index, (clean, level))| {
            clean.pressure.is_none() && carries(level) && !placed.contains(index)
        })
        .map(|(_, (_, level))| level)
        .collect();
    let Some(first) = left_out.first() else {
        return;
    };
    let what = format!(
        "{} without pressure left out",
        count_of_levels(left_out.len())
    );
    notes.push(Note {
        place: place(first),
        what,
        why: "a level has its place in the profile by pressure".to_string(),
    });
}

/// In fine data rows share a pressure as a matter of course, because it is rounded: one note, of the file as a whole.
fn note_shared_pressures(count: usize, levels: &[Level], notes: &mut Vec<Note>) {
    let rows = match count {
        1 => "1 row shares".to_string(),
        n => format!("{n} rows share"),
    };
    let is_multiple = |step: f64| {
        let mut pressures = levels.iter().filter_map(|level| level.pressure);
        pressures.all(|p| (p / step - (p / step).round()).abs() * step < 1e-3)
    };
    let step = [(100.0, "1"), (10.0, "0.1"), (1.0, "0.01")]
        .into_iter()
        .find(|(step, _)| is_multiple(*step))
        .map_or_else(String::new, |(_, hpa)| format!(" ({hpa} hPa steps)"));
    notes.push(Note {
        place: Place::File,
        what: format!(
            "{rows} a pressure with an earlier row{step}; the first value of each is used"
        ),
        why: String::new(),
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
                    "{} repeated with other {}",
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
            // Of winds alone nobody expects a parcel.
            None if profile.temperature.iter().all(Option::is_none) => {}
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
                "{} with temperature below the surface level at {}: not used",
                count_of_levels(below),
                hpa(pressure)
            ),
            why: "the air a parcel rises through starts at the surface".to_string(),
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{
        afternoon, any_fine_levels, any_level, config, level, received, strictly_falling,
        wind_level,
    };
    use crate::{Numbers, Station};
    use proptest::prelude::*;

    #[test]
    fn first_value_kept_gaps_filled_conflicts_noted() {
        let mut first = level(850.0, 18.0, 0.0);
        first.dewpoint = None;
        first.line = Some(7);
        let mut second = level(850.0, 18.4, 12.0);
        second.height = Some(1_480.0);
        second.line = Some(9);
        let mut levels = afternoon();
        levels.retain(|l| l.pressure != Some(85_000.0));
        levels.extend([first, second]);
        let (profile, notes) = received(levels);
        let row = profile
            .pressure
            .iter()
            .position(|&p| p == 85_000.0)
            .unwrap();
        assert_eq!(profile.temperature[row], Some(18.0 + 273.15));
        assert_eq!(profile.dewpoint[row], Some(12.0 + 273.15));
        assert_eq!(profile.height[row], Some(1_480.0));
        assert_eq!(profile.received[row], Some(10));
        let [note] = notes.as_slice() else {
            panic!("{notes:?}")
        };
        assert_eq!(note.place, Place::Line(9));
        assert_eq!(
            note.what,
            "850 hPa repeated with other temperature: the value received first is kept"
        );
    }

    #[test]
    fn repeated_alike_is_no_conflict() {
        let mut levels = afternoon();
        levels.extend(afternoon());
        let (twice, notes) = received(levels);
        assert_eq!(notes, []);
        assert_eq!(twice, received(afternoon()).0);
    }

    #[test]
    fn levels_below_ground_carry_heights_only() {
        let mut levels = afternoon();
        levels.insert(
            0,
            Level {
                pressure: Some(100_000.0),
                height: Some(55.0),
                kind: LevelKind::Standard,
                ..Level::default()
            },
        );
        let (profile, notes) = received(levels);
        assert_eq!(notes, []);
        assert_eq!(profile.surface, Some(1));
        assert_eq!(profile.surface_pressure().unwrap().hpa(), 960.0);
        assert_eq!(
            profile.environment().unwrap().bottom().pressure.hpa(),
            960.0
        );
        assert_eq!(profile.environment_rows().first(), Some(&1));
        // Temperatures below a marked surface are told and not used.
        let mut levels = afternoon();
        levels[1].kind = LevelKind::Surface;
        let (profile, notes) = received(levels);
        assert_eq!(profile.surface, Some(1));
        assert_eq!(profile.environment_rows().first(), Some(&1));
        assert!(
            notes[0]
                .what
                .contains("1 level with temperature below the surface level at 955 hPa")
        );
    }

    #[test]
    fn a_complete_level_close_above_serves() {
        let mut levels = afternoon();
        levels[0].dewpoint = None;
        let (profile, notes) = received(levels.clone());
        assert_eq!(profile.surface_pressure().unwrap().hpa(), 955.0);
        assert!(
            notes[0]
                .what
                .contains("the complete level at 955 hPa serves"),
            "{notes:?}"
        );
        assert!(Numbers::of(&profile).surface.is_some());

        // No complete level within 10 hPa: no surface parcel; the others start at the lowest complete level and say so.
        levels.remove(1);
        let (profile, notes) = received(levels);
        assert_eq!(profile.surface_pressure().unwrap().hpa(), 960.0);
        assert!(
            notes[0]
                .what
                .contains("no surface parcel until both are set")
        );
        let numbers = Numbers::of(&profile);
        assert!(
            numbers.surface.is_none() && numbers.mixed.is_some() && numbers.most_unstable.is_some()
        );
        assert_eq!(numbers.starts_at.unwrap().hpa(), 900.0);
    }

    #[test]
    fn wind_alone_makes_a_surface() {
        let mut levels = afternoon();
        levels.push(wind_level(965.0, 180.0, 4.0));
        let (profile, notes) = received(levels);
        // Then it lacks temperature, and the level 5 hPa above serves.
        assert_eq!(profile.surface, Some(1));
        assert!(
            notes[0]
                .what
                .contains("the surface level at 965 hPa lacks temperature or humidity")
        );
    }

    #[test]
    fn values_no_air_can_have_are_missing() {
        let mut levels = afternoon();
        levels[2].temperature = Some(f64::NAN);
        levels[3].dewpoint = Some(900.0);
        levels[4].wind = Some(Wind {
            direction: 400.0,
            speed: 5.0,
        });
        levels[5].height = Some(f64::INFINITY);
        levels[6].line = Some(33);
        levels[6].dewpoint = levels[6].temperature.map(|t| t + 3.0);
        levels.push(Level {
            pressure: Some(-5.0),
            ..level(1.0, 0.0, 0.0)
        });
        levels.push(Level {
            height: Some(3_000.0),
            ..Level::default()
        });
        // Vapour at 20 °C has 23 hPa: more than half of 40 hPa.
        levels.push(level(40.0, 20.0, 20.0));
        let (profile, notes) = received(levels);
        assert_eq!(profile.temperature[2], None);
        assert_eq!(profile.dewpoint[3], None);
        assert_eq!(profile.wind[4], None);
        assert_eq!(profile.height[5], None);
        assert_eq!(profile.dewpoint[6], None);
        assert_eq!(profile.len(), 12);
        let whats: Vec<&str> = notes.iter().map(|note| note.what.as_str()).collect();
        let expect = [
            "temperature NaN °C of received level 3: counted as missing",
            "dew point 626.9 °C of received level 4: counted as missing",
            "wind direction 400° of received level 5: counted as missing",
            "height inf m of received level 6: counted as missing",
            "dew point −9.3 °C far above temperature −12.3 °C at 500 hPa: counted as missing",
            "pressure -0.1 hPa of received level 12: counted as missing",
            "dew point 20.0 °C at 40 hPa, where vapour would outweigh the air: counted as missing",
            "2 levels without pressure left out",
        ];
        assert_eq!(whats, expect);
        assert_eq!(notes[4].place, Place::Line(33));
        assert!(Numbers::of(&profile).surface.is_some());
    }

    #[test]
    fn slight_supersaturation_is_saturation() {
        let mut levels = afternoon();
        levels[3].dewpoint = levels[3].temperature.map(|t| t + 0.4);
        let (profile, notes) = received(levels);
        assert_eq!(profile.dewpoint[3], profile.temperature[3]);
        assert_eq!(notes.len(), 1);
    }

    #[test]
    fn nothing_received() {
        let (profile, notes) = received(Vec::new());
        assert_eq!((profile.len(), profile.surface, notes.len()), (0, None, 0));
        assert!(Numbers::of(&profile).problem.is_some());
        let (profile, _) = received(vec![wind_level(900.0, 10.0, 3.0)]);
        assert!(Numbers::of(&profile).problem.is_some());
        assert_eq!(profile.top(), None);
    }

    #[test]
    fn surface_takes_the_station_elevation() {
        let sounding = Sounding {
            station: Station {
                elevation: Some(420.0),
                ..Station::default()
            },
            levels: afternoon(),
            ..Sounding::default()
        };
        let (profile, _) = Profile::received(&sounding);
        assert_eq!(profile.height[0], Some(420.0));
        assert!(profile.heights().iter().all(Option::is_some));
    }

    #[test]
    fn sampling_is_read_from_the_steps() {
        assert_eq!(received(afternoon()).0.sampling, Sampling::Coded);
        let every = |step: f64| {
            (0..150)
                .map(|n| level(1000.0 - step * f64::from(n), 10.0, 5.0))
                .collect()
        };
        assert_eq!(received(every(2.9)).0.sampling, Sampling::Fine);
        assert_eq!(received(every(3.1)).0.sampling, Sampling::Coded);
    }

    proptest! {
        #![proptest_config(config())]

        #[test]
        fn any_levels_make_a_sound_profile(levels in prop_oneof![
            prop::collection::vec(any_level(), 0..60).boxed(),
            any_fine_levels().boxed(),
        ]) {
            let (profile, _) = received(levels.clone());
            prop_assert!(strictly_falling(&profile));
            let columns = [
                profile.height.len(), profile.temperature.len(), profile.dewpoint.len(), profile.wind.len(), profile.received.len(),
            ];
            prop_assert!(columns.iter().all(|&n| n == profile.len()));
            prop_assert!(profile.surface.is_none_or(|row| row < profile.len()));
            prop_assert!(profile.received.iter().flatten().all(|&index| index < levels.len()));
            for (t, td) in profile.temperature.iter().zip(&profile.dewpoint) {
                prop_assert!(t.is_none_or(f64::is_finite) && td.is_none_or(f64::is_finite));
                if let (Some(t), Some(td)) = (t, td) {
                    prop_assert!(td <= t);
                }
            }
            let numbers = Numbers::of(&profile);
            if let Some(problem) = numbers.problem {
                // Whatever comes in, the only thing that can be wrong is that there is too little of it.
                let too_little = matches!(problem,
                    dewbound_thermo::EnvironmentError::TooFewLevels(_)
                    | dewbound_thermo::EnvironmentError::BottomWithoutHumidity { .. });
                prop_assert!(too_little, "{}", problem);
            }
            let _ = profile.heights();
        }

        #[test]
        fn order_does_not_matter_for_distinct_pressures(
            (levels, shuffled) in prop::collection::vec(any_level(), 1..60).prop_map(|levels| {
                // Distinct pressures, and at most one marked surface.
                let mut seen: Vec<f64> = Vec::new();
                levels.into_iter().filter(|level| {
                    let new = level.pressure.is_some_and(|p| p.is_finite() && seen.iter().all(|q| (q - p).abs() > 1.0));
                    if new { seen.extend(level.pressure); }
                    new && level.kind != LevelKind::Surface
                }).collect::<Vec<_>>()
            }).prop_flat_map(|levels| (Just(levels.clone()), Just(levels).prop_shuffle()))
        ) {
            let (mut a, _) = received(levels.clone());
            let (mut b, _) = received(shuffled.clone());
            let pressures = |profile: &mut Profile, levels: &[Level]| -> Vec<Option<f64>> {
                std::mem::take(&mut profile.received).into_iter().flatten().map(|index| levels[index].pressure).collect()
            };
            prop_assert_eq!(pressures(&mut a, &levels), pressures(&mut b, &shuffled));
            prop_assert_eq!(a, b);
        }
    }
}
