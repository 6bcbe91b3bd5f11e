//! What else is computed of a profile, beyond the three parcels: computed once for what is shown, not for every sample of a
//! response.

use crate::wind_profile::WindSource;
use crate::{Numbers, Parcel, Profile};
use dewbound_thermo::{
    Buoyancy, CompositeInputs, Composites, Condensate, EffectiveLayer, Environment, LayerNumbers,
    Lifted, Method, Motion, ParcelNumbers, Process, Vector, WindNumbers, WindProfile, lift,
};
use std::sync::Arc;

/// Numbers beyond the three parcels'.
///
/// Heights are above the lowest level of the environment, which is the surface unless that lacks temperature or humidity; the
/// wind's heights are above the same level. Those of layers and parcels are hypsometric, those of the winds as received: they
/// may differ by some metres, see [`EffectiveLayer`].
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Further {
    /// Of each parcel, in the order of [`Parcel::ALL`]; `None` where there is no parcel.
    pub parcels: [Option<ParcelNumbers>; 3],
    /// Of the whole profile; all absent without an environment.
    pub layers: LayerNumbers,
    /// Wind against height; `None` with fewer than two winds of known height.
    pub wind_profile: Option<Arc<WindProfile>>,
    /// Read from the wind.
    pub winds: WindNumbers,
    /// Composite indices.
    pub composites: Composites,
    /// What the wind profile is made of.
    wind_source: Option<Arc<WindSource>>,
}

impl Further {
    /// Of a working profile and its numbers. `received` is the profile as received: winds and their heights are its own, whatever is
    /// done to temperature and humidity. `environment` is that of [`Numbers::and_environment`] of the working profile.
    pub fn of(
        received: &Profile,
        working: &Profile,
        environment: Option<&Environment>,
        numbers: &Numbers,
        motion: Motion,
    ) -> Self {
        let wind_source = WindSource::of(working).map(Arc::new);
        let wind_profile = wind_source
            .as_deref()
            .and_then(|source| source.profile(received))
            .map(Arc::new);
        Self::with_winds(
            environment,
            numbers,
            (wind_source, wind_profile),
            |winds, layer| WindNumbers::of(winds, layer, motion),
        )
    }

    /// The same as [`Further::of`], when `previous` is of another working profile of the same profile as received, with any motion: while
    /// the winds and the level they are counted from stay, their profile and what is read from it alone are taken from there.
    pub fn next(
        received: &Profile,
        working: &Profile,
        environment: Option<&Environment>,
        numbers: &Numbers,
        motion: Motion,
        previous: &Self,
    ) -> Self {
        let wind_source = WindSource::of(working);
        if wind_source.as_ref() != previous.wind_source.as_deref() {
            return Self::of(received, working, environment, numbers, motion);
        }
        let winds = (previous.wind_source.clone(), previous.wind_profile.clone());
        Self::with_winds(environment, numbers, winds, |winds, layer| {
            WindNumbers::next(winds, layer, motion, &previous.winds)
        })
    }

    fn with_winds(
        environment: Option<&Environment>,
        numbers: &Numbers,
        (wind_source, wind_profile): (Option<Arc<WindSource>>, Option<Arc<WindProfile>>),
        wind_numbers: impl FnOnce(&WindProfile, EffectiveLayer) -> WindNumbers,
    ) -> Self {
        let parcels = Parcel::ALL.map(|which| {
            let environment = environment?;
            let start = numbers.parcel(which)?.start;
            let lifted = Lifted::of(environment, start, Method::default())?;
            Some(ParcelNumbers::of(environment, &lifted))
        });
        let layers = environment.map_or_else(LayerNumbers::default, |environment| {
            LayerNumbers::of(environment, wind_profile.as_deref())
        });
        let effective = EffectiveLayer {
            inflow: layers.inflow,
            el_height: parcels[2].and_then(|parcel| parcel.el_height),
        };
        let winds = wind_profile
            .as_deref()
            .map_or_else(WindNumbers::default, |profile| {
                wind_numbers(profile, effective)
            });
        let composites = Composites::of(&composite_inputs(numbers, &parcels, &layers, &winds));
        Self {
            parcels,
            layers,
            wind_profile,
            winds,
            composites,
            wind_source,
        }
    }
}

fn composite_inputs(
    numbers: &Numbers,
    [surface, mixed, _]: &[Option<ParcelNumbers>; 3],
    layers: &LayerNumbers,
    winds: &WindNumbers,
) -> CompositeInputs {
    let cape = |which| numbers.parcel(which).map(|ascent| ascent.cape);
    CompositeInputs {
        surface_cape: cape(Parcel::Surface),
        surface_lcl_height: surface.and_then(|parcel| parcel.lcl_height),
        mixed_cape: cape(Parcel::Mixed),
        mixed_cin: numbers.parcel(Parcel::Mixed).and_then(|ascent| ascent.cin),
        mixed_lcl_height: mixed.and_then(|parcel| parcel.lcl_height),
        most_unstable_cape: cape(Parcel::MostUnstable),
        inflow_base_height: layers.inflow.map(|inflow| inflow.bottom.height),
        helicity_0_to_1km: winds.helicity_0_to_1km,
        helicity_effective: winds.helicity_effective,
        difference_0_to_6km: winds.difference_0_to_6km.map(Vector::speed),
        difference_effective: winds.difference_effective.map(Vector::speed),
    }
}

/// CAPE of the three parcels by other kinds of ascent, J/kg, in the order of [`Parcel::ALL`].
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct OtherAscents {
    /// The pseudo-adiabatic lapse rate integrated.
    pub direct: [Option<f64>; 3],
    /// Condensate kept, its weight counted.
    pub reversible: [Option<f64>; 3],
    /// The default process, without the virtual-temperature correction.
    pub without_virtual: [Option<f64>; 3],
    /// The pseudo-adiabatic lapse rate integrated, with ice.
    pub direct_with_ice: [Option<f64>; 3],
    /// Condensate kept, with ice.
    pub reversible_with_ice: [Option<f64>; 3],
}

impl OtherAscents {
    /// Of a profile. Each takes as long as the default ascent or longer: not for every frame of a drag.
    pub fn of(profile: &Profile, numbers: &Numbers) -> Self {
        let Ok(environment) = profile.environment() else {
            return Self::default();
        };
        let cape = |method: Method| {
            Parcel::ALL.map(|which| {
                let start = numbers.parcel(which)?.start;
                lift(&environment, start, method).map(|ascent| ascent.cape)
            })
        };
        Self {
            direct: cape(Method::of(Process::Direct(Condensate::Water))),
            reversible: cape(Method::of(Process::Reversible(Condensate::Water))),
            without_virtual: cape(Method {
                buoyancy: Buoyancy::Temperature,
                ..Method::default()
            }),
            direct_with_ice: cape(Method::of(Process::Direct(Condensate::WaterAndIce))),
            reversible_with_ice: cape(Method::of(Process::Reversible(Condensate::WaterAndIce))),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{afternoon, any_amendments, any_fine_levels, any_level, config, received};
    use crate::{Amendment, Amendments, BridgeHumidity, Daylight, Entry, Level, Wind};
    use dewbound_thermo::{InflowLayer, LevelAt, Pressure};
    use proptest::prelude::*;

    /// The afternoon with winds that veer and grow.
    fn windy() -> Vec<Level> {
        let levels = afternoon().into_iter().enumerate();
        levels
            .map(|(row, level)| Level {
                height: (row == 0).then_some(300.0),
                wind: Some(Wind {
                    direction: 150.0 + 13.0 * row as f64,
                    speed: 4.0 + 3.0 * row as f64,
                }),
                ..level
            })
            .collect()
    }

    fn further(list: &Amendments, received: &Profile, previous: Option<&Further>) -> Further {
        let working = list.apply(received, Daylight::Day).profile;
        let (numbers, environment) = Numbers::and_environment(&working);
        let environment = environment.as_ref();
        let motion = Motion::Right;
        match previous {
            Some(previous) => {
                Further::next(received, &working, environment, &numbers, motion, previous)
            }
            None => Further::of(received, &working, environment, &numbers, motion),
        }
    }

    fn only(amendment: Amendment) -> Amendments {
        Amendments {
            entries: vec![Entry {
                amendment,
                enabled: true,
                from_repair: None,
            }],
            reach: None,
        }
    }

    #[test]
    fn the_wind_profile_is_shared_while_the_winds_stay() {
        let (profile, _) = received(windy());
        let before = further(&Amendments::default(), &profile, None);
        let winds = before.wind_profile.as_ref().unwrap();
        assert!(before.winds.helicity_0_to_3km.is_some());
        for (amendment, shared) in [
            (Amendment::SurfaceDewpoint { dewpoint_k: 290.0 }, true),
            (
                Amendment::SurfaceTemperature {
                    temperature_k: 305.0,
                },
                true,
            ),
            (
                Amendment::BridgeLayer {
                    bottom_pa: 82_000.0,
                    top_pa: 50_000.0,
                    humidity: BridgeHumidity::MixingRatio,
                },
                true,
            ),
            (
                Amendment::MixMoisture {
                    bottom_pa: 96_000.0,
                    top_pa: 85_000.0,
                    mixing_ratio: None,
                },
                true,
            ),
            (
                Amendment::DropLevels {
                    bottom_pa: 70_000.0,
                    top_pa: 70_000.0,
                },
                false,
            ),
            (
                Amendment::DisregardAbove {
                    pressure_pa: 55_000.0,
                },
                false,
            ),
        ] {
            let list = only(amendment);
            let next = further(&list, &profile, Some(&before));
            let now = next.wind_profile.as_ref().unwrap();
            assert_eq!(Arc::ptr_eq(winds, now), shared, "{amendment:?}");
            assert_eq!(next, further(&list, &profile, None));
            assert_eq!(
                next.winds.mean_0_to_6km == before.winds.mean_0_to_6km,
                shared
            );
            // And back.
            let back = further(&Amendments::default(), &profile, Some(&next));
            assert_eq!(back, before);
        }
    }

    #[test]
    fn each_input_of_the_composites_is_the_one_named() {
        let (profile, _) = received(windy());
        let numbers = Numbers::of(&profile);
        let parcel = |lcl: f64| {
            Some(ParcelNumbers {
                lcl_height: Some(lcl),
                ..ParcelNumbers::default()
            })
        };
        let at = |height: f64| LevelAt {
            pressure: Pressure::from_hpa(900.0),
            height,
        };
        let layers = LayerNumbers {
            inflow: Some(InflowLayer {
                bottom: at(70.0),
                top: at(800.0),
            }),
            ..LayerNumbers::default()
        };
        let winds = WindNumbers {
            helicity_0_to_1km: Some(110.0),
            helicity_0_to_3km: Some(330.0),
            helicity_effective: Some(220.0),
            difference_0_to_1km: Some(Vector { u: 1.0, v: 0.0 }),
            difference_0_to_6km: Some(Vector { u: 3.0, v: -4.0 }),
            difference_effective: Some(Vector { u: -12.0, v: 5.0 }),
            ..WindNumbers::default()
        };
        let parcels = [parcel(1.0), parcel(2.0), parcel(3.0)];
        let ascent = |which| numbers.parcel(which).unwrap();
        let capes = Parcel::ALL.map(|which| ascent(which).cape);
        assert!(capes[0] != capes[1] && ascent(Parcel::Mixed).cin != ascent(Parcel::Surface).cin);
        assert_eq!(
            composite_inputs(&numbers, &parcels, &layers, &winds),
            CompositeInputs {
                surface_cape: Some(capes[0]),
                surface_lcl_height: Some(1.0),
                mixed_cape: Some(capes[1]),
                mixed_cin: ascent(Parcel::Mixed).cin,
                mixed_lcl_height: Some(2.0),
                most_unstable_cape: Some(capes[2]),
                inflow_base_height: Some(70.0),
                helicity_0_to_1km: Some(110.0),
                helicity_effective: Some(220.0),
                difference_0_to_6km: Some(5.0),
                difference_effective: Some(13.0),
            }
        );
    }

    fn any_profile() -> impl Strategy<Value = Profile> {
        prop_oneof![
            2 => prop::collection::vec(any_level(), 0..40),
            1 => any_fine_levels(),
            2 => Just(windy()),
        ]
        .prop_map(|levels| received(levels).0)
    }

    fn any_motion() -> impl Strategy<Value = Motion> {
        prop_oneof![
            Just(Motion::Right),
            Just(Motion::Left),
            (-30.0..30.0_f64, -30.0..30.0_f64).prop_map(|(u, v)| Motion::Set(Vector { u, v })),
        ]
    }

    proptest! {
        #![proptest_config(config())]

        #[test]
        fn next_is_what_of_gives(
            profile in any_profile(), lists in (any_amendments(), any_amendments()), motions in (any_motion(), any_motion()),
        ) {
            let working = |list: &Amendments| {
                let working = list.apply(&profile, Daylight::Day).profile;
                let (numbers, environment) = Numbers::and_environment(&working);
                (working, environment, numbers)
            };
            let (first, second) = (working(&lists.0), working(&lists.1));
            let previous = Further::of(&profile, &first.0, first.1.as_ref(), &first.2, motions.0);
            let next = Further::next(&profile, &second.0, second.1.as_ref(), &second.2, motions.1, &previous);
            prop_assert_eq!(next, Further::of(&profile, &second.0, second.1.as_ref(), &second.2, motions.1));
        }
    }
}
