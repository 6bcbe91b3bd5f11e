//! Winds given by height, put among the levels given by pressure.

use crate::profile::SAME_PRESSURE;
use crate::telling::place;
use crate::{Level, Note, Profile};
use dewbound_thermo::Pressure;

/// A level that says nothing but the wind at a height.
pub(crate) fn by_height_alone(level: &Level) -> bool {
    level.pressure.is_none()
        && level.temperature.is_none()
        && level.dewpoint.is_none()
        && level.height.is_some()
        && level.wind.is_some()
}

/// Puts winds given by height into the profile, by the heights of its rows; notes it once. Returns which levels (by index) found a place.
///
/// A wind at a pressure that already has one is left out.
pub(crate) fn place_winds(
    profile: &mut Profile,
    levels: &[Level],
    notes: &mut Vec<Note>,
) -> Vec<usize> {
    let wanted: Vec<(usize, &Level)> = levels
        .iter()
        .enumerate()
        .filter(|(_, level)| by_height_alone(level))
        .collect();
    if wanted.is_empty() {
        return Vec::new();
    }
    let mut ladder: Vec<(f64, f64)> = Vec::new();
    let from = profile.surface.unwrap_or(0);
    for (height, &pressure) in profile.heights().iter().zip(&profile.pressure).skip(from) {
        if let Some(height) = *height
            && ladder.last().is_none_or(|&(below, _)| height > below)
        {
            ladder.push((height, pressure.ln()));
        }
    }
    // Heights are those of the rows before any wind was put in.
    let rows = profile.clone();
    let mut placed = Vec::new();
    let mut first = None;
    for (index, level) in wanted {
        let (Some(height), Some(wind)) = (level.height, level.wind) else {
            continue;
        };
        let Some(pressure) = pressure_at(&rows, &ladder, height) else {
            continue;
        };
        let at = profile
            .pressure
            .partition_point(|&p| p > pressure + SAME_PRESSURE);
        let same = profile
            .pressure
            .get(at)
            .is_some_and(|&p| (p - pressure).abs() <= SAME_PRESSURE);
        if same {
            let Some(slot @ None) = profile.wind.get_mut(at) else {
                continue;
            };
            *slot = Some(wind);
        } else {
            profile.pressure.insert(at, pressure);
            profile.height.insert(at, Some(height));
            profile.temperature.insert(at, None);
            profile.dewpoint.insert(at, None);
            profile.wind.insert(at, Some(wind));
            profile.received.insert(at, Some(index));
            profile.surface = profile
                .surface
                .map(|row| if row >= at { row + 1 } else { row });
        }
        placed.push(index);
        first.get_or_insert(level);
    }
    if let Some(first) = first {
        notes.push(Note {
            place: place(first),
            what: match placed.len() {
                1 => "1 wind given by height placed by the heights of the pressure levels"
                    .to_string(),
                n => format!(
                    "{n} winds given by height placed by the heights of the pressure levels"
                ),
            },
            why: "the message gives no pressure for them".to_string(),
        });
    }
    placed
}

/// Pressure (Pa) at a height between two rungs of the ladder (rising heights, ln p), where the profile has that height; `None`
/// outside.
fn pressure_at(profile: &Profile, ladder: &[(f64, f64)], height: f64) -> Option<f64> {
    let above = ladder.partition_point(|&(z, _)| z <= height);
    let &(z0, mut low) = ladder.get(above.checked_sub(1)?)?;
    if z0 == height {
        return Some(low.exp());
    }
    let &(_, mut high) = ladder.get(above)?;
    // Halving 30 times leaves less than a pascal of any layer.
    for _ in 0..30 {
        let middle = 0.5 * (low + high);
        if profile.height_at(Pressure::from_pa(middle.exp()))? < height {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some((0.5 * (low + high)).exp())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{level, received, strictly_falling, wind_level};
    use crate::{Numbers, Wind};

    fn wind_at(height: f64) -> Level {
        Level {
            height: Some(height),
            ..Level {
                pressure: None,
                ..wind_level(0.0, 270.0, height.abs() / 1000.0)
            }
        }
    }

    /// US Standard Atmosphere 1976 (from memory): geopotential height, pressure, temperature; heights at two levels only.
    fn standard() -> Vec<Level> {
        [
            (0.0, 1013.25, 15.0),
            (1_000.0, 898.746, 8.5),
            (3_000.0, 701.085, -4.5),
            (5_000.0, 540.199, -17.5),
            (11_000.0, 226.321, -56.5),
        ]
        .into_iter()
        .map(|(height, hpa, t)| Level {
            height: [0.0, 11_000.0].contains(&height).then_some(height),
            ..level(hpa, t, t - 20.0)
        })
        .collect()
    }

    #[test]
    fn winds_find_their_pressure() {
        let mut levels = standard();
        levels.extend([2_000.0, 5_000.0, 8_000.0].map(wind_at));
        let (profile, notes) = received(levels);
        assert!(strictly_falling(&profile));
        assert_eq!(profile.surface, Some(0));
        for (height, hpa) in [(2_000.0, 794.952), (5_000.0, 540.199), (8_000.0, 355.998)] {
            let row = profile
                .wind
                .iter()
                .position(|wind| {
                    *wind
                        == Some(Wind {
                            direction: 270.0,
                            speed: height / 1000.0,
                        })
                })
                .unwrap();
            // Coarse rows: within 1 % of the table.
            assert!(
                (profile.pressure[row] / 100.0 / hpa - 1.0).abs() < 0.01,
                "{height}: {}",
                profile.pressure[row]
            );
        }
        assert_eq!(notes.len(), 1);
        assert_eq!(
            notes[0].what,
            "3 winds given by height placed by the heights of the pressure levels"
        );
        // The environment doesn't notice.
        assert_eq!(
            Numbers::of(&profile).surface,
            Numbers::of(&received(standard()).0).surface
        );
    }

    #[test]
    fn outside_the_profile_is_told() {
        let mut levels = standard();
        levels.extend([-50.0, 3_000.0, 14_000.0].map(wind_at));
        let (_, notes) = received(levels);
        let whats: Vec<&str> = notes.iter().map(|note| note.what.as_str()).collect();
        assert_eq!(
            whats,
            [
                "1 wind given by height placed by the heights of the pressure levels",
                "2 levels without pressure left out"
            ]
        );
        // Without any height to go by, nothing is placed.
        let mut levels = standard();
        for level in &mut levels {
            level.height = None;
        }
        levels.push(wind_at(3_000.0));
        let (profile, notes) = received(levels);
        assert_eq!(profile.len(), 5);
        assert_eq!(notes[0].what, "1 level without pressure left out");
    }
}
