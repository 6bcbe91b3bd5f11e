//! Wind against height above the level the numbers start at.

use crate::{Profile, Wind};
use dewbound_thermo::{Pressure, Vector, WindLevel, WindProfile};

/// What a wind profile is made of: with the profile as received, all that it depends on.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct WindSource {
    /// Pressure of the level heights are counted from, Pa.
    ground: f64,
    /// Pressure (Pa, falling) and wind of the rows that have one, from the surface up.
    rows: Vec<(f64, Wind)>,
}

impl WindSource {
    /// Of a working profile; `None` when it has no level to count heights from.
    ///
    /// The ground is the lowest level of the environment: the surface, unless that lacks temperature or humidity; without any environment
    /// the surface. Rows below the surface level are no wind over it, and rows an amendment took out contribute nothing.
    pub fn of(working: &Profile) -> Option<Self> {
        let ground = working.environment_start().or(working.surface)?;
        let rows = working.pressure.iter().zip(&working.wind);
        Some(Self {
            ground: *working.pressure.get(ground)?,
            rows: rows
                .skip(working.surface.unwrap_or(0))
                .filter_map(|(&pressure, &wind)| Some((pressure, wind?)))
                .collect(),
        })
    }

    /// The winds at the heights of the profile as received, whatever has been done to temperature and humidity since; `None`
    /// with fewer than two winds of known height.
    ///
    /// - A profile without any height has those of the hypsometric equation.
    /// - Winds between the surface and the ground, where the two differ, lie at heights below 0.
    /// - A lowest row without wind is left out: the wind at the ground is then what [`WindProfile::at_ground`] makes of the
    ///   lowest wind above it.
    /// - Heights that don't rise while pressure falls can't all be right: of the winds there, as few as possible are left out.
    pub fn profile(&self, received: &Profile) -> Option<WindProfile> {
        let anchored;
        let (profile, heights) = if received.height.iter().any(Option::is_some) {
            (received, received.heights())
        } else {
            anchored = self.anchored(received)?;
            (&anchored, anchored.heights())
        };
        let height_of = |pressure: f64| {
            let row = profile.pressure.partition_point(|&p| p > pressure);
            if profile.pressure.get(row) == Some(&pressure) {
                heights.get(row).copied().flatten()
            } else {
                profile.height_at(Pressure::from_pa(pressure))
            }
        };
        let ground = height_of(self.ground)?;
        let levels: Vec<WindLevel> = self
            .rows
            .iter()
            .filter_map(|&(pressure, wind)| {
                Some(WindLevel {
                    height: height_of(pressure)? - ground,
                    pressure: Some(Pressure::from_pa(pressure)),
                    wind: Vector::from_wind(wind.direction, wind.speed),
                })
            })
            .collect();
        let heights: Vec<f64> = levels.iter().map(|level| level.height).collect();
        WindProfile::new(
            longest_rise(&heights)
                .into_iter()
                .filter_map(|level| levels.get(level).copied()),
        )
    }

    /// The profile with a height of 0 at the ground, from which the others follow by the hypsometric equation.
    fn anchored(&self, received: &Profile) -> Option<Profile> {
        let row = received.pressure.iter().position(|&p| p == self.ground)?;
        let mut profile = received.clone();
        *profile.height.get_mut(row)? = Some(0.0);
        Some(profile)
    }
}

/// Indices of a longest strictly rising part of a series; values that aren't numbers are never in it.
fn longest_rise(values: &[f64]) -> Vec<usize> {
    // `ends[n]` is the end of the rise of n + 1 members that ends lowest, `before` the member before each.
    let mut ends: Vec<usize> = Vec::new();
    let mut before: Vec<Option<usize>> = vec![None; values.len()];
    let value = |index: usize| values.get(index).copied().unwrap_or(f64::NAN);
    for (index, slot) in before.iter_mut().enumerate() {
        let here = value(index);
        if here.is_nan() {
            continue;
        }
        let length = ends.partition_point(|&end| value(end) < here);
        *slot = length
            .checked_sub(1)
            .and_then(|last| ends.get(last))
            .copied();
        match ends.get_mut(length) {
            Some(end) => *end = index,
            None => ends.push(index),
        }
    }
    let mut rise: Vec<usize> = std::iter::successors(ends.last().copied(), |&index| {
        before.get(index).copied().flatten()
    })
    .collect();
    rise.reverse();
    rise
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{config, level, received, wind_level};
    use crate::{Amendment, Amendments, Daylight, Entry, Level};
    use dewbound_thermo::Temperature;
    use proptest::prelude::*;

    /// US Standard Atmosphere 1976, geopotential height (m), pressure (hPa), temperature (°C); from memory.
    const STANDARD: [(f64, f64, f64); 8] = [
        (0.0, 1013.25, 15.0),
        (1_000.0, 898.746, 8.5),
        (2_000.0, 794.952, 2.0),
        (3_000.0, 701.085, -4.5),
        (5_000.0, 540.199, -17.5),
        (6_000.0, 471.810, -24.0),
        (8_000.0, 355.998, -37.0),
        (11_000.0, 226.321, -56.5),
    ];

    /// 120 m above the sea, a westerly of 1 m/s a kilometre above the sea; dry enough that virtual temperature hardly differs.
    fn standard() -> Vec<Level> {
        STANDARD
            .iter()
            .map(|&(height, hpa, t)| Level {
                height: Some(height + 120.0),
                wind: Some(Wind {
                    direction: 270.0,
                    speed: height / 1000.0,
                }),
                ..level(hpa, t, t - 40.0)
            })
            .collect()
    }

    fn of(received: &Profile, working: &Profile) -> Option<WindProfile> {
        WindSource::of(working)?.profile(received)
    }

    fn as_received(levels: Vec<Level>) -> Option<WindProfile> {
        let (profile, _) = received(levels);
        of(&profile, &profile)
    }

    #[track_caller]
    fn check_heights(winds: &WindProfile, expected: &[f64], tolerance: f64) {
        let heights: Vec<f64> = winds.levels().iter().map(|level| level.height).collect();
        assert_eq!(heights.len(), expected.len(), "{heights:?}");
        for (height, expected) in heights.iter().zip(expected) {
            assert!(
                (height - expected).abs() < tolerance,
                "{heights:?}, expected {expected}"
            );
        }
    }

    fn amended(received: &Profile, amendment: Amendment) -> Option<WindProfile> {
        let list = Amendments {
            entries: vec![Entry {
                amendment,
                enabled: true,
                from_repair: None,
            }],
            reach: None,
        };
        let working = list.apply(received, Daylight::Day);
        assert_eq!(working.notes, []);
        of(received, &working.profile)
    }

    const HEIGHTS: [f64; 8] = [
        0.0, 1_000.0, 2_000.0, 3_000.0, 5_000.0, 6_000.0, 8_000.0, 11_000.0,
    ];

    #[test]
    fn heights_are_above_the_ground() {
        let winds = as_received(standard()).unwrap();
        check_heights(&winds, &HEIGHTS, 1e-9);
        let wind = winds.at(4_000.0).unwrap();
        assert!((wind.u - 4.0).abs() < 1e-9 && wind.v.abs() < 1e-9);
        assert_eq!(
            winds.levels()[2].pressure,
            Some(Pressure::from_pa(79_495.2))
        );
    }

    #[test]
    fn temperature_and_humidity_change_nothing_in_it() {
        let (profile, _) = received(standard());
        let before = of(&profile, &profile);
        for amendment in [
            Amendment::SurfaceDewpoint { dewpoint_k: 285.0 },
            Amendment::SurfaceTemperature {
                temperature_k: 294.0,
            },
            Amendment::MixMoisture {
                bottom_pa: 101_325.0,
                top_pa: 79_495.2,
                mixing_ratio: Some(0.003),
            },
        ] {
            assert_eq!(amended(&profile, amendment), before);
        }
    }

    #[test]
    fn rows_taken_out_take_their_wind_with_them() {
        let (profile, _) = received(standard());
        let dropped = Amendment::DropLevels {
            bottom_pa: 79_495.2,
            top_pa: 79_495.2,
        };
        let winds = amended(&profile, dropped).unwrap();
        let mut expected = HEIGHTS.to_vec();
        expected.remove(2);
        check_heights(&winds, &expected, 1e-9);
        // Heights are those received: a temperature taken out lifts nothing.
        let cut = Amendment::DisregardAbove {
            pressure_pa: 50_000.0,
        };
        check_heights(&amended(&profile, cut).unwrap(), &HEIGHTS[..5], 1e-9);
    }

    #[test]
    fn winds_alone() {
        let levels = STANDARD.iter().map(|&(height, hpa, _)| Level {
            height: Some(height + 120.0),
            ..wind_level(hpa, 180.0, 5.0)
        });
        let levels: Vec<Level> = levels.collect();
        check_heights(&as_received(levels.clone()).unwrap(), &HEIGHTS, 1e-9);
        // Nothing to go by.
        let without = |level: Level| Level {
            height: None,
            ..level
        };
        assert_eq!(as_received(levels.into_iter().map(without).collect()), None);
        assert_eq!(as_received(Vec::new()), None);
    }

    #[test]
    fn without_heights_they_are_hypsometric() {
        let levels = standard().into_iter().map(|level| Level {
            height: None,
            ..level
        });
        // Temperature is linear in height there and in ln p here, and the air isn't quite dry: some 2 m each up to 11 km.
        check_heights(&as_received(levels.collect()).unwrap(), &HEIGHTS, 5.0);
    }

    #[test]
    fn a_surface_without_humidity_lies_below_the_ground() {
        let mut levels = standard();
        levels[0].dewpoint = None;
        let winds = as_received(levels).unwrap();
        check_heights(&winds, &HEIGHTS.map(|height| height - 1_000.0), 1e-9);
        assert!((winds.at_ground().unwrap().u - 1.0).abs() < 1e-9);
    }

    #[test]
    fn a_surface_without_wind() {
        let mut levels = standard();
        levels[0].wind = None;
        let winds = as_received(levels.clone()).unwrap();
        check_heights(&winds, &HEIGHTS[1..], 1e-9);
        assert_eq!(winds.at_ground(), None);
        // 40 m up by the standard's formula, 1008.45 hPa: serves.
        levels.push(Level {
            height: Some(160.0),
            ..wind_level(1008.45, 270.0, 3.0)
        });
        let wind = as_received(levels).unwrap().at_ground().unwrap();
        assert!((wind.u - 3.0).abs() < 1e-9);
    }

    #[test]
    fn what_lies_below_the_surface_is_no_wind() {
        let mut levels = standard();
        levels[1].kind = crate::LevelKind::Surface;
        let winds = as_received(levels).unwrap();
        let expected: Vec<f64> = HEIGHTS[1..].iter().map(|height| height - 1_000.0).collect();
        check_heights(&winds, &expected, 1e-9);
    }

    #[test]
    fn a_wrong_height_costs_one_wind() {
        for wrong in [500.0, 15_000.0] {
            let mut levels = standard();
            levels[3].height = Some(wrong);
            let mut expected = HEIGHTS.to_vec();
            expected.remove(3);
            check_heights(&as_received(levels).unwrap(), &expected, 1e-9);
        }
    }

    proptest! {
        #![proptest_config(config())]

        #[test]
        fn the_longest_rise_is_the_longest(values in prop::collection::vec(0..12_i32, 0..11)) {
            let values: Vec<f64> = values.into_iter().map(f64::from).collect();
            let rise = longest_rise(&values);
            prop_assert!(rise.windows(2).all(|pair| pair[0] < pair[1] && values[pair[0]] < values[pair[1]]));
            let longest = (0..1_u32 << values.len())
                .filter_map(|chosen| {
                    let chosen: Vec<f64> = (0..values.len()).filter(|at| chosen >> at & 1 == 1).map(|at| values[at]).collect();
                    chosen.windows(2).all(|pair| pair[0] < pair[1]).then_some(chosen.len())
                })
                .max();
            prop_assert_eq!(Some(rise.len()), longest);
        }

        #[test]
        fn a_surface_dew_point_changes_nothing_in_it(celsius in -30.0..14.0_f64) {
            let (profile, _) = received(standard());
            let list = Amendments::default().with_surface_dewpoint(Temperature::from_c(celsius));
            let working = list.apply(&profile, Daylight::Day);
            prop_assert_eq!(of(&profile, &working.profile), of(&profile, &profile));
        }
    }
}
