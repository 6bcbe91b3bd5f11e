//! The conventions of an ascent, one by one, and what happens at the edges of them.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_thermo::*;

/// Pressure hPa, temperature degC, dew point degC.
type Level = (f64, f64, Option<f64>);

fn environment(levels: &[Level]) -> Environment {
    let p: Vec<f64> = levels.iter().map(|level| level.0 * 100.0).collect();
    let t: Vec<f64> = levels.iter().map(|level| level.1 + ZERO_CELSIUS).collect();
    let td: Vec<Option<f64>> = levels
        .iter()
        .map(|level| level.2.map(|td| td + ZERO_CELSIUS))
        .collect();
    Environment::new(&p, &t, &td).unwrap()
}

fn air(p: f64, t: f64, td: f64) -> Air {
    Air {
        pressure: Pressure::from_hpa(p),
        temperature: Temperature::from_c(t),
        dewpoint: Temperature::from_c(td),
    }
}

fn lifted(environment: &Environment, start: Air) -> Ascent {
    lift(environment, start, Method::default()).unwrap()
}

/// A warm and moist day with a cap at 850..800 hPa.
const CAPPED: [Level; 8] = [
    (1000.0, 30.0, Some(21.0)),
    (850.0, 18.0, Some(14.0)),
    (800.0, 20.0, Some(2.0)),
    (700.0, 11.0, Some(-5.0)),
    (500.0, -10.0, Some(-30.0)),
    (300.0, -40.0, Some(-55.0)),
    (200.0, -55.0, Some(-75.0)),
    (100.0, -60.0, Some(-85.0)),
];

#[test]
fn a_capped_profile_has_everything() {
    let environment = environment(&CAPPED);
    let ascent = lifted(&environment, environment.bottom());
    let (lfc, el) = (ascent.lfc.unwrap(), ascent.el.unwrap());
    assert!(ascent.lcl.pressure > lfc && lfc > el && el > environment.top());
    assert!(
        ascent.cape > 1000.0 && ascent.cin.unwrap() < -20.0 && !ascent.at_least,
        "{ascent:?}"
    );
    // At LFC and EL the virtual temperatures meet.
    for pressure in [lfc, el] {
        let parcel = parcel_path(ascent.start, Method::default(), &[pressure])[0];
        let (_, surroundings) = environment.virtual_at(pressure).unwrap();
        assert!(
            (parcel.virtual_temperature.k() - surroundings).abs() < 1e-3,
            "{pressure:?}"
        );
    }
}

/// The area by a plain sum over a million slices.
#[test]
fn areas_are_what_a_plain_sum_says() {
    let environment = environment(&CAPPED);
    let ascent = lifted(&environment, environment.bottom());
    let (bottom, top) = (
        environment.bottom().pressure.pa().ln(),
        environment.top().pa().ln(),
    );
    let slices = 40_000;
    let h = (bottom - top) / f64::from(slices);
    let (mut cape, mut cin) = (0.0, 0.0);
    let pressures: Vec<Pressure> = (0..slices)
        .map(|i| Pressure::from_pa((bottom - (f64::from(i) + 0.5) * h).exp()))
        .collect();
    for state in parcel_path(ascent.start, Method::default(), &pressures) {
        let (_, surroundings) = environment.virtual_at(state.pressure).unwrap();
        let area = GAS_CONSTANT_DRY * (state.virtual_temperature.k() - surroundings) * h;
        if area > 0.0 && state.pressure < ascent.lcl.pressure {
            cape += area;
        } else if area < 0.0 && state.pressure > ascent.lfc.unwrap() {
            cin += area;
        }
    }
    assert!(
        (cape - ascent.cape).abs() < 0.1,
        "{cape} and {}",
        ascent.cape
    );
    assert!(
        (cin - ascent.cin.unwrap()).abs() < 0.05,
        "{cin} and {:?}",
        ascent.cin
    );
}

#[test]
fn layers_add_up_and_the_largest_makes_the_lfc() {
    // A small buoyant layer under a cap, a large one above it, a stable layer at 450..420 hPa that splits it.
    let environment = environment(&[
        (1000.0, 26.0, Some(22.0)),
        (950.0, 21.5, Some(20.0)),
        (900.0, 18.5, Some(16.0)),
        (870.0, 24.0, Some(5.0)),
        (700.0, 8.0, Some(-10.0)),
        (500.0, -12.0, Some(-35.0)),
        (450.0, -17.0, Some(-40.0)),
        (420.0, -10.0, Some(-40.0)),
        (400.0, -21.0, Some(-45.0)),
        (250.0, -50.0, Some(-65.0)),
        (200.0, -52.0, Some(-75.0)),
        (100.0, -60.0, Some(-85.0)),
    ]);
    let ascent = lifted(&environment, environment.bottom());
    assert!(ascent.buoyant.len() >= 3, "{ascent:?}");
    let sum: f64 = ascent.buoyant.iter().map(|layer| layer.area).sum();
    assert!((sum - ascent.cape).abs() < 1e-9);
    let largest = ascent
        .buoyant
        .iter()
        .max_by(|a, b| a.area.total_cmp(&b.area))
        .unwrap();
    assert_eq!(ascent.lfc, Some(largest.bottom));
    assert_eq!(ascent.el, Some(ascent.buoyant.last().unwrap().top));
    // The first, small layer doesn't hide the cap above it.
    assert!(
        ascent.buoyant[0].area < largest.area && ascent.lfc.unwrap() < ascent.buoyant[0].bottom
    );
    assert!(ascent.cin.unwrap() < -1.0, "{ascent:?}");
}

#[test]
fn a_parcel_buoyant_at_its_lcl_has_its_lfc_there() {
    let environment = environment(&[
        (1000.0, 25.0, Some(10.0)),
        (500.0, -25.0, Some(-40.0)),
        (300.0, -50.0, Some(-65.0)),
        (100.0, -50.0, Some(-85.0)),
    ]);
    let ascent = lifted(&environment, air(1000.0, 29.0, 22.0));
    assert_eq!(ascent.lfc, Some(ascent.lcl.pressure));
    assert_eq!(ascent.cin, Some(0.0));
    assert!(ascent.cin.unwrap().is_sign_positive());
}

#[test]
fn no_buoyant_layer_means_no_free_convection() {
    let environment = environment(&[
        (1000.0, 5.0, Some(-5.0)),
        (850.0, 5.0, Some(-5.0)),
        (500.0, -10.0, Some(-30.0)),
        (150.0, -50.0, Some(-75.0)),
    ]);
    let ascent = lifted(&environment, environment.bottom());
    assert_eq!(
        (ascent.cape, ascent.cin, ascent.lfc, ascent.el),
        (0.0, None, None, None)
    );
    assert!(!ascent.at_least && ascent.buoyant.is_empty());
}

#[test]
fn a_profile_that_ends_early_gives_a_lower_limit() {
    // Still buoyant at the top.
    let short = environment(&CAPPED[..5]);
    let ascent = lifted(&short, short.bottom());
    assert!(ascent.at_least && ascent.el.is_none() && ascent.cape > 0.0);
    assert_eq!(ascent.buoyant.last().unwrap().top, short.top());
    let whole = environment(&CAPPED);
    assert!(ascent.cape < lifted(&whole, whole.bottom()).cape);
    // Not buoyant there, but the top is above 200 hPa.
    let stable = environment(&[(1000.0, 5.0, Some(-5.0)), (250.0, -40.0, Some(-60.0))]);
    let ascent = lifted(&stable, stable.bottom());
    assert!(ascent.at_least && ascent.cape == 0.0 && ascent.cin.is_none());
    // Down to 200 hPa exactly.
    let enough = environment(&[(1000.0, 5.0, Some(-5.0)), (200.0, -40.0, Some(-60.0))]);
    assert!(!lifted(&enough, enough.bottom()).at_least);
}

#[test]
fn profiles_that_end_below_the_lcl() {
    let environment = environment(&[(1000.0, 30.0, Some(5.0)), (900.0, 21.0, Some(3.0))]);
    let ascent = lifted(&environment, environment.bottom());
    assert!(ascent.lcl.pressure < environment.top());
    assert_eq!(
        (ascent.cape, ascent.cin, ascent.lfc, ascent.el),
        (0.0, None, None, None)
    );
    assert!(ascent.at_least);
}

#[test]
fn dry_air_lifts_too() {
    let environment = environment(&[
        (1000.0, 30.0, Some(-60.0)),
        (500.0, -20.0, None),
        (100.0, -60.0, None),
    ]);
    let ascent = lifted(&environment, environment.bottom());
    assert!(ascent.lcl.pressure.pa() > 0.0 && ascent.cape.is_finite());
    // The driest dew point there is.
    let none = dewpoint_from_mixing_ratio(Pressure::from_hpa(1000.0), 0.0);
    let ascent = lifted(
        &environment,
        Air {
            dewpoint: none,
            ..environment.bottom()
        },
    );
    assert_eq!(ascent.cape, 0.0);
    assert_eq!(ascent.start.mixing_ratio(), 0.0);
    let theta = ascent.start.potential_temperature().k();
    assert!((ascent.theta_e.k() - theta).abs() < 1e-9);
}

#[test]
fn a_saturated_start_is_its_own_lcl() {
    let environment = environment(&CAPPED);
    for excess in [0.0, 1e-13, 0.05, 3.0] {
        let start = air(850.0, 18.0, 18.0 + excess);
        let ascent = lifted(&environment, start);
        assert_eq!(ascent.lcl.pressure, start.pressure, "{excess}");
        assert_eq!(ascent.start.dewpoint, start.temperature);
        assert_eq!(ascent, lifted(&environment, air(850.0, 18.0, 18.0)));
    }
}

#[test]
fn a_start_may_lie_between_levels_and_levels_below_it_do_not_count() {
    let whole = environment(&CAPPED);
    let start = whole.at(Pressure::from_hpa(925.0)).unwrap();
    let from_above = environment(&{
        let mut levels = vec![(925.0, start.temperature.c(), Some(start.dewpoint.c()))];
        levels.extend_from_slice(&CAPPED[1..]);
        levels
    });
    let (a, b) = (lifted(&whole, start), lifted(&from_above, start));
    assert!(
        (a.cape - b.cape).abs() < 1e-6 * b.cape,
        "{} and {}",
        a.cape,
        b.cape
    );
    assert!((a.cin.unwrap() - b.cin.unwrap()).abs() < 1e-6 * b.cape);
}

#[test]
fn starts_outside_the_profile() {
    let environment = environment(&CAPPED);
    assert_eq!(
        lift(&environment, air(99.0, -60.0, -90.0), Method::default()),
        None
    );
    // From the top level itself there is nowhere to go.
    let ascent = lifted(&environment, air(100.0, -60.0, -90.0));
    assert_eq!((ascent.cape, ascent.cin), (0.0, None));
    // From below the bottom: the parcel arrives, and areas are counted from there.
    let below = lifted(&environment, air(1020.0, 31.0, 22.0));
    assert!(below.cape > 0.0 && below.lfc.unwrap().hpa() <= 1000.0);
}

#[test]
fn numbers_that_are_none_are_refused() {
    let environment = environment(&CAPPED);
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, -1.0, 0.0] {
        let good = environment.bottom();
        for start in [
            Air {
                pressure: Pressure::from_pa(bad),
                ..good
            },
            Air {
                temperature: Temperature::from_k(bad),
                ..good
            },
            Air {
                dewpoint: Temperature::from_k(bad),
                ..good
            },
        ] {
            assert_eq!(
                lift(&environment, start, Method::default()),
                None,
                "{start:?}"
            );
            assert!(parcel_path(start, Method::default(), &[Pressure::from_hpa(500.0)]).is_empty());
        }
        assert!(environment.at(Pressure::from_pa(bad)).is_none());
        assert!(
            environment
                .layer_mean(Pressure::from_pa(bad), Pressure::from_hpa(900.0))
                .is_none()
                || bad == f64::INFINITY
        );
    }
    // Smaller than a float is good for.
    let start = Air {
        pressure: Pressure::from_pa(1e-310),
        ..environment.bottom()
    };
    assert_eq!(lift(&environment, start, Method::default()), None);
    assert!(
        parcel_path(
            environment.bottom(),
            Method::default(),
            &[Pressure::from_pa(1e-310)]
        )
        .is_empty()
    );
    // Vapour fills more than half of the pressure: not air.
    assert_eq!(
        lift(&environment, air(1000.0, 90.0, 90.0), Method::default()),
        None
    );
}

#[test]
fn columns_that_are_no_environment_say_why() {
    let (p, t, td) = ([1e5, 9e4], [290.0, 285.0], [Some(285.0), Some(280.0)]);
    let error = |p: &[f64], t: &[f64], td: &[Option<f64>]| {
        Environment::new(p, t, td).unwrap_err().to_string()
    };
    assert_eq!(
        error(&p, &t[..1], &td),
        "2 pressures, 1 temperatures and 2 dew points: one of each is needed at every level"
    );
    assert_eq!(
        error(&p[..1], &t[..1], &td[..1]),
        "1 levels with temperature: at least 2 are needed"
    );
    assert_eq!(
        error(&[1e5, f64::NAN], &t, &td),
        "level 1: pressure NaN Pa is not usable"
    );
    assert_eq!(
        error(&[1e5, 0.0], &t, &td),
        "level 1: pressure 0 Pa is not usable"
    );
    assert_eq!(
        error(&[1e5, 1e5], &t, &td),
        "level 1: pressure 100000 Pa is not below 100000 Pa, the level before"
    );
    assert_eq!(
        error(&p, &[290.0, f64::NAN], &td),
        "level 1: temperature NaN K is not usable"
    );
    assert_eq!(
        error(&p, &t, &[Some(285.0), Some(f64::NAN)]),
        "level 1: dew point NaN K is not usable"
    );
    assert_eq!(
        error(&p, &t, &[None, Some(280.0)]),
        "the lowest level (100000 Pa) has no humidity"
    );
    // 60 degC of dew point at 200 hPa: it would boil.
    assert_eq!(
        error(&[1e5, 2e4], &[340.0, 340.0], &[Some(285.0), Some(333.0)]),
        "level 1: dew point 333 K is not usable"
    );
    // Different in the last bit only.
    let barely = f64::from_bits(1e5_f64.to_bits() - 1);
    assert!(matches!(
        Environment::new(&[1e5, barely], &t, &td),
        Err(EnvironmentError::Order { level: 1, .. })
    ));
}

#[test]
fn missing_humidity_is_interpolated_below_and_dry_above() {
    let environment = environment(&[
        (1000.0, 25.0, Some(20.0)),
        (900.0, 18.0, None),
        (800.0, 12.0, Some(10.0)),
        (500.0, -10.0, None),
        (200.0, -55.0, None),
    ]);
    let humidity = environment.humidity();
    assert_eq!(
        (
            humidity.interpolated,
            humidity.dry,
            humidity.above_saturation
        ),
        (1, 2, 0)
    );
    assert_eq!(humidity.dry_above, Some(Pressure::from_hpa(800.0)));
    let share = (1000.0_f64 / 900.0).ln() / (1000.0_f64 / 800.0).ln();
    let expected = 20.0 - 10.0 * share + ZERO_CELSIUS;
    assert!((environment.dewpoint()[1].unwrap() - expected).abs() < 1e-9);
    assert_eq!(environment.dewpoint()[3], None);
    // Right above the last known dew point the air is dry.
    let (t, tv) = environment.virtual_at(Pressure::from_hpa(799.0)).unwrap();
    assert_eq!(t, tv);
    assert!(environment.at(Pressure::from_hpa(799.0)).is_none());
    let (t, tv) = environment.virtual_at(Pressure::from_hpa(800.0)).unwrap();
    assert!(tv > t + 1.0);

    let held = environment.with_humidity_held();
    assert_eq!((held.humidity().dry, held.humidity().dry_above), (0, None));
    let rh = environment
        .at(Pressure::from_hpa(800.0))
        .unwrap()
        .relative_humidity();
    assert!(
        (held
            .at(Pressure::from_hpa(500.0))
            .unwrap()
            .relative_humidity()
            - rh)
            .abs()
            < 1e-9
    );
    // Dry surroundings are lighter by less: more CAPE.
    let bottom = environment.bottom();
    assert!(lifted(&environment, bottom).cape > lifted(&held, bottom).cape);
}

#[test]
fn a_dew_point_above_the_temperature_is_saturation() {
    let environment = environment(&[(1000.0, 25.0, Some(25.4)), (500.0, -10.0, Some(-30.0))]);
    assert_eq!(environment.humidity().above_saturation, 1);
    assert_eq!(
        environment.bottom().dewpoint,
        environment.bottom().temperature
    );
}

#[test]
fn layer_means_are_integrals_of_the_profile() {
    // Constant theta and w must come back, however few the levels.
    let theta = Temperature::from_k(305.0);
    let w = 0.012;
    let pressures: Vec<f64> = (0..=80).map(|i| 1e5 - 200.0 * f64::from(i)).collect();
    let t: Vec<f64> = pressures
        .iter()
        .map(|p| temperature_on_dry_adiabat(theta, Pressure::from_pa(*p)).k())
        .collect();
    let td: Vec<_> = pressures
        .iter()
        .map(|p| Some(dewpoint_from_mixing_ratio(Pressure::from_pa(*p), w).k()))
        .collect();
    let environment = Environment::new(&pressures, &t, &td).unwrap();
    let (mean_theta, mean_w) = environment
        .layer_mean(Pressure::from_hpa(1000.0), Pressure::from_hpa(900.0))
        .unwrap();
    assert!(
        (mean_theta - 305.0).abs() < 1e-4 && (mean_w - w).abs() < 1e-8,
        "{mean_theta} {mean_w}"
    );
    let start = mixed_start(&environment, MIXED_DEPTH).unwrap();
    assert!(
        (start.temperature.k() - t[0]).abs() < 1e-4
            && (start.dewpoint.k() - td[0].unwrap()).abs() < 1e-4
    );
    // Upside down, or outside: nothing.
    assert_eq!(
        environment.layer_mean(Pressure::from_hpa(900.0), Pressure::from_hpa(1000.0)),
        None
    );
    assert_eq!(
        environment.layer_mean(Pressure::from_hpa(800.0), Pressure::from_hpa(700.0)),
        None
    );
}

#[test]
fn the_most_unstable_level_is_the_one_of_largest_theta_e() {
    let environment = environment(&[
        (1000.0, 15.0, Some(10.0)),
        (900.0, 18.0, Some(15.0)),
        (850.0, 17.0, Some(15.5)),
        (700.0, 5.0, Some(-5.0)),
        (690.0, 30.0, Some(25.0)),
    ]);
    let level = |candidate: fn(usize) -> bool, depth| {
        most_unstable_start(&environment, Pressure::from_hpa(depth), candidate)
            .map(|(level, _)| level)
    };
    assert_eq!(level(|_| true, 300.0), Some(2));
    assert_eq!(level(|i| i != 2, 300.0), Some(1));
    assert_eq!(level(|_| true, 310.0), Some(4));
    assert_eq!(level(|_| false, 300.0), None);
}

/// A parcel colder than its surroundings at both ends of a coarse segment, warmer inside it.
#[test]
fn a_lens_inside_one_segment_is_found() {
    let start = air(1000.0, 27.0, 20.0);
    let state = |p: f64| {
        parcel_path(start, Method::default(), &[Pressure::from_hpa(p)])[0]
            .virtual_temperature
            .c()
    };
    // A straight line just warmer than the parcel at 700 and 500 hPa; the pseudo-adiabat bulges over it in between.
    let environment = environment(&[
        (1000.0, 27.0, Some(20.0)),
        (900.0, 24.0, Some(5.0)),
        (700.0, state(700.0) + 0.05, Some(-90.0)),
        (500.0, state(500.0) + 0.05, Some(-90.0)),
        (400.0, state(400.0) + 5.0, Some(-90.0)),
        (100.0, -50.0, Some(-90.0)),
    ]);
    let (fast, exact) = (
        lifted(&environment, start),
        lift_exactly(&environment, start, Method::default()).unwrap(),
    );
    assert_eq!(fast.buoyant.len(), 1, "{fast:?}");
    assert!(fast.lfc.unwrap().hpa() < 700.0 && fast.el.unwrap().hpa() > 500.0);
    assert!(
        fast.cape > 1.0 && (fast.cape - exact.cape).abs() < 1e-4 * exact.cape,
        "{} {}",
        fast.cape,
        exact.cape
    );
}

/// Surroundings that are the parcel itself: rounding must not make layers.
#[test]
fn a_neutral_profile_has_no_cape() {
    let start = air(1000.0, 20.0, 20.0);
    let pressures: Vec<Pressure> = (0..=180)
        .map(|i| Pressure::from_hpa(1000.0 - 5.0 * f64::from(i)))
        .collect();
    let path = parcel_path(start, Method::default(), &pressures);
    let column: Vec<f64> = path.iter().map(|state| state.temperature.k()).collect();
    let p: Vec<f64> = pressures.iter().map(|p| p.pa()).collect();
    let td: Vec<Option<f64>> = column.iter().map(|t| Some(*t)).collect();
    let environment = Environment::new(&p, &column, &td).unwrap();
    let ascent = lifted(&environment, start);
    // What is left is the sagitta of chords 5 hPa long.
    assert!(ascent.cape < 0.2, "{ascent:?}");
}

#[test]
fn the_path_for_drawing_keeps_the_order_asked_for() {
    let start = air(950.0, 25.0, 18.0);
    let asked = [300.0, 960.0, 500.0, 950.0, 900.0].map(Pressure::from_hpa);
    let path = parcel_path(start, Method::default(), &asked);
    let got: Vec<f64> = path.iter().map(|state| state.pressure.hpa()).collect();
    assert_eq!(got, [300.0, 500.0, 950.0, 900.0]);
    assert_eq!(path[2].temperature, start.temperature);
    assert!((path[2].virtual_temperature.k() - start.virtual_temperature().k()).abs() < 1e-9);
}

/// Eq. 15 (within 0.1 K) and eq. 39 don't quite meet at the LCL; how far they miss is stated in the docs.
#[test]
fn the_step_at_the_lcl_is_small() {
    for p in [700.0, 850.0, 1000.0] {
        for t in (-30..=45).step_by(3).map(f64::from) {
            for depression in [0.5, 2.0, 5.0, 10.0, 20.0, 40.0] {
                let start = air(p, t, t - depression);
                let lcl = start.lcl();
                let above = temperature_on_pseudoadiabat(start.theta_e(), lcl.pressure);
                let above = Air {
                    pressure: lcl.pressure,
                    temperature: above,
                    dewpoint: above,
                };
                let w = start.mixing_ratio();
                let below = lcl.temperature.k() * (1.0 + w / EPSILON) / (1.0 + w);
                assert!(
                    (above.virtual_temperature().k() - below).abs() < 0.05,
                    "{p} {t} {depression}"
                );
                // An integrated ascent starts saturated by eq. 10 at the LCL of eq. 15.
                for process in [Process::Direct, Process::Reversible] {
                    let method = Method::of(process(Condensate::Water));
                    let just_above = Pressure::from_pa(lcl.pressure.pa() * (1.0 - 1e-12));
                    let above = parcel_path(start, method, &[just_above])[0].virtual_temperature;
                    assert!(
                        (above.k() - below).abs() < 0.05,
                        "{method:?} {p} {t} {depression}"
                    );
                }
            }
        }
    }
}
