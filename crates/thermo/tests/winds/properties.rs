//! What must hold of any wind profile.

use super::*;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use std::f64::consts::TAU;

/// Fixed cases, and no files left behind.
fn config() -> ProptestConfig {
    ProptestConfig {
        cases: 256,
        failure_persistence: None,
        rng_seed: RngSeed::Fixed(0x7769_6E64),
        ..ProptestConfig::default()
    }
}

prop_compose! {
    /// A wind profile from the ground or a little above it to beyond 6 km.
    fn plausible()(
        lowest in 0.0..45.0_f64,
        steps in prop::collection::vec((20.0..900.0_f64, -25.0..45.0_f64, -30.0..30.0_f64), 3..40),
        top in (7000.0..15_000.0_f64, -20.0..60.0_f64, -30.0..30.0_f64),
    ) -> Vec<WindLevel> {
        let mut height = lowest;
        let mut levels = Vec::new();
        for (step, u, v) in steps {
            levels.push(level(height, vector(u, v)));
            height += step;
        }
        levels.push(level(height.max(top.0), vector(top.1, top.2)));
        levels
    }
}

fn any_layer() -> impl Strategy<Value = EffectiveLayer> {
    (0.0..1500.0_f64, 100.0..3000.0_f64, 2000.0..11_000.0_f64)
        .prop_map(|(bottom, depth, el)| layer(bottom, bottom + depth, el))
}

fn any_motion() -> impl Strategy<Value = Motion> {
    prop_oneof![
        Just(Motion::Right),
        Just(Motion::Left),
        (-30.0..30.0_f64, -30.0..30.0_f64).prop_map(|(u, v)| Motion::Set(vector(u, v))),
    ]
}

/// Every number, by what a change of all winds does to it.
#[derive(Debug, Clone, Copy)]
struct All {
    /// The critical angle last.
    scalars: [Option<f64>; 4],
    /// Deviations of storms too.
    differences: [Option<Vector>; 6],
    /// Motions too.
    winds: [Option<Vector>; 9],
}

fn all(numbers: &WindNumbers) -> All {
    let motions = [numbers.motion, numbers.motion_effective];
    let deviation = |motion: StormMotion| motion.right - motion.mean;
    All {
        scalars: [
            numbers.helicity_0_to_1km,
            numbers.helicity_0_to_3km,
            numbers.helicity_effective,
            numbers.critical_angle,
        ],
        differences: [
            numbers.difference_0_to_1km,
            numbers.difference_0_to_3km,
            numbers.difference_0_to_6km,
            numbers.difference_effective,
            motions[0].map(deviation),
            motions[1].map(deviation),
        ],
        winds: [
            numbers.mean_0_to_6km,
            numbers.mean_0_to_6km_by_pressure,
            numbers.motion_used,
            motions[0].map(|motion| motion.mean),
            motions[0].map(|motion| motion.right),
            motions[0].map(|motion| motion.left),
            motions[1].map(|motion| motion.mean),
            motions[1].map(|motion| motion.right),
            motions[1].map(|motion| motion.left),
        ],
    }
}

fn same(a: Option<f64>, b: Option<f64>, tolerance: f64) -> bool {
    match (a, b) {
        (Some(a), Some(b)) => (a - b).abs() <= tolerance,
        (a, b) => a == b,
    }
}

fn same_vector(a: Option<Vector>, b: Option<Vector>) -> bool {
    same(a.map(|a| a.u), b.map(|b| b.u), 1e-9) && same(a.map(|a| a.v), b.map(|b| b.v), 1e-9)
}

/// What a change of all winds does: to the scalars a factor, to differences and winds a function each.
#[derive(Clone, Copy)]
struct Change<'a> {
    helicity: f64,
    difference: &'a dyn Fn(Vector) -> Vector,
    wind: &'a dyn Fn(Vector) -> Vector,
}

/// The numbers of changed winds are the changed numbers. Helicity is a sum of products of winds of tens of m/s: 1e-8 m²/s² is rounding.
fn check_change(
    levels: &[WindLevel],
    layer: EffectiveLayer,
    (motion, changed_motion): (Motion, Motion),
    change: Change,
) -> Result<(), TestCaseError> {
    let before = WindNumbers::of(
        &WindProfile::new(levels.iter().copied()).unwrap(),
        layer,
        motion,
    );
    let winds = WindProfile::new(levels.iter().map(|&level| WindLevel {
        wind: (change.wind)(level.wind),
        ..level
    }));
    let after = all(&WindNumbers::of(&winds.unwrap(), layer, changed_motion));
    let before = all(&before);
    for (at, (before, after)) in before.scalars.into_iter().zip(after.scalars).enumerate() {
        let factor = if at == 3 { 1.0 } else { change.helicity };
        prop_assert!(
            same(before.map(|before| factor * before), after, 1e-8),
            "scalar {at}: {before:?}, {after:?}"
        );
    }
    for (before, after) in before.differences.into_iter().zip(after.differences) {
        let expected = before.map(change.difference);
        prop_assert!(same_vector(expected, after), "{expected:?}, {after:?}");
    }
    for (before, after) in before.winds.into_iter().zip(after.winds) {
        let expected = before.map(change.wind);
        prop_assert!(same_vector(expected, after), "{expected:?}, {after:?}");
    }
    Ok(())
}

fn of_set(motion: Motion, change: impl Fn(Vector) -> Vector) -> Motion {
    match motion {
        Motion::Set(set) => Motion::Set(change(set)),
        other => other,
    }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn turning_all_winds_turns_the_vectors(
        levels in plausible(), layer in any_layer(), motion in any_motion(), angle in 0.0..TAU,
    ) {
        let (sin, cos) = angle.sin_cos();
        let turned = |wind: Vector| vector(wind.u * cos - wind.v * sin, wind.u * sin + wind.v * cos);
        let change = Change { helicity: 1.0, difference: &turned, wind: &turned };
        check_change(&levels, layer, (motion, of_set(motion, turned)), change)?;
    }

    #[test]
    fn a_wind_added_everywhere_moves_with_the_storm(
        levels in plausible(), layer in any_layer(), motion in any_motion(), u in -20.0..20.0_f64, v in -20.0..20.0_f64,
    ) {
        let moved = |wind: Vector| wind + vector(u, v);
        let change = Change { helicity: 1.0, difference: &|difference| difference, wind: &moved };
        check_change(&levels, layer, (motion, of_set(motion, moved)), change)?;
    }

    #[test]
    fn insertion_of_interpolated_levels_changes_nothing(
        levels in plausible(), layer in any_layer(), motion in any_motion(),
        heights in prop::collection::vec(0.0..7000.0_f64, 1..30), with_pressure in any::<bool>(),
    ) {
        let coarse = WindProfile::new(levels.iter().copied()).unwrap();
        let inserted = heights.iter().map(|&height| WindLevel {
            height,
            pressure: coarse.pressure_at(height).filter(|_| with_pressure),
            wind: coarse.at(height).unwrap(),
        });
        // Levels without pressure have none to take over below the lowest level.
        let inserted = inserted.filter(|level| with_pressure || level.height > levels[0].height);
        let fine = WindProfile::new(levels.iter().copied().chain(inserted)).unwrap();
        let (coarse, fine) = (
            all(&WindNumbers::of(&coarse, layer, motion)), all(&WindNumbers::of(&fine, layer, motion)),
        );
        for (coarse, fine) in coarse.scalars.into_iter().zip(fine.scalars) {
            let tolerance = 1e-9 * coarse.unwrap_or(0.0).abs().max(100.0);
            prop_assert!(same(coarse, fine, tolerance), "{coarse:?}, {fine:?}");
        }
        for (coarse, fine) in coarse.differences.into_iter().zip(fine.differences).chain(coarse.winds.into_iter().zip(fine.winds)) {
            prop_assert!(same_vector(coarse, fine), "{coarse:?}, {fine:?}");
        }
    }

    #[test]
    fn the_mirror_image_swaps_the_movers_and_the_sign_of_helicity(
        levels in plausible(), layer in any_layer(), set in (-30.0..30.0_f64, -30.0..30.0_f64),
    ) {
        let mirrored = |wind: Vector| vector(-wind.u, wind.v);
        let image = levels.iter().map(|&level| WindLevel { wind: mirrored(level.wind), ..level });
        let image = WindProfile::new(image).unwrap();
        let winds = WindProfile::new(levels.iter().copied()).unwrap();
        let set = vector(set.0, set.1);
        for (motion, other) in [
            (Motion::Right, Motion::Left), (Motion::Left, Motion::Right), (Motion::Set(set), Motion::Set(mirrored(set))),
        ] {
            let before = WindNumbers::of(&winds, layer, motion);
            let after = WindNumbers::of(&image, layer, other);
            for (before, after) in [
                (before.motion, after.motion), (before.motion_effective, after.motion_effective),
            ] {
                prop_assert!(same_vector(before.map(|motion| mirrored(motion.right)), after.map(|motion| motion.left)));
                prop_assert!(same_vector(before.map(|motion| mirrored(motion.left)), after.map(|motion| motion.right)));
            }
            let (before, after) = (all(&before).scalars, all(&after).scalars);
            for at in 0..3 {
                prop_assert!(same(before[at].map(|helicity| -helicity), after[at], 1e-8), "{:?}, {:?}", before[at], after[at]);
            }
            prop_assert!(same(before[3], after[3], 1e-8));
        }
    }

    #[test]
    fn next_is_what_of_gives(
        levels in plausible(), first in (any_layer(), any_motion()), second in (any_layer(), any_motion()), gone in any::<bool>(),
    ) {
        let winds = WindProfile::new(levels.iter().copied()).unwrap();
        let previous = WindNumbers::of(&winds, first.0, first.1);
        let layer = if gone { EffectiveLayer::default() } else { second.0 };
        prop_assert_eq!(
            WindNumbers::next(&winds, layer, second.1, &previous), WindNumbers::of(&winds, layer, second.1)
        );
    }

    #[test]
    fn every_number_is_one(
        levels in prop::collection::vec((odd(), odd(), odd(), prop::option::of(odd())), 0..12),
        bottom in odd(), top in odd(), el in prop::option::of(odd()), motion in (odd(), odd()), side in 0..3_usize,
    ) {
        let levels = levels.into_iter().map(|(height, u, v, pressure)| WindLevel {
            height,
            pressure: pressure.map(Pressure::from_pa),
            wind: vector(u, v),
        });
        let at = |height| LevelAt { pressure: Pressure::from_pa(GROUND), height };
        let layer = EffectiveLayer { inflow: Some(InflowLayer { bottom: at(bottom), top: at(top) }), el_height: el };
        let motion = [Motion::Right, Motion::Left, Motion::Set(vector(motion.0, motion.1))][side];
        if let Some(winds) = WindProfile::new(levels) {
            prop_assert!(winds.levels().windows(2).all(|pair| pair[0].height < pair[1].height));
            let All { scalars, differences, winds: vectors } = all(&WindNumbers::of(&winds, layer, motion));
            prop_assert!(scalars.into_iter().flatten().all(f64::is_finite), "{scalars:?}");
            for vector in differences.into_iter().chain(vectors).flatten() {
                prop_assert!(vector.u.is_finite() && vector.v.is_finite());
            }
        }
    }
}

/// Any number, mostly of a size that occurs.
fn odd() -> impl Strategy<Value = f64> {
    prop_oneof![
        6 => -100.0..20_000.0_f64,
        3 => -50.0..50.0_f64,
        2 => prop::sample::select(vec![0.0, -0.0, 1e-310, 5e-324, 1.0, 50.0, 500.0, 1000.0, 6000.0, 1e4, 1e6, 1e300, -1e300]),
        1 => any::<f64>(),
    ]
}
