//! Against closed forms and the definitions in plain sums.

use super::*;
use std::f64::consts::{FRAC_PI_2, PI};

/// Levels every `step` m from the ground to `top`.
fn profile(top: f64, step: f64, wind: impl Fn(f64) -> Vector) -> WindProfile {
    let levels = (0..=(top / step).round() as usize).map(|n| {
        let height = n as f64 * step;
        level(height, wind(height))
    });
    WindProfile::new(levels).unwrap()
}

/// A hodograph on a quarter of a circle about `centre`, turning clockwise with height evenly from the ground to `top`.
fn quarter(centre: Vector, radius: f64, top: f64) -> impl Fn(f64) -> Vector {
    move |height| {
        let angle = PI - FRAC_PI_2 * height / top;
        centre + vector(angle.cos(), angle.sin()) * radius
    }
}

#[track_caller]
fn close(found: Vector, expected: Vector, tolerance: f64) {
    let off = (found - expected).speed();
    assert!(off < tolerance, "{found:?} instead of {expected:?}");
}

#[track_caller]
fn near(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() < tolerance,
        "{found} instead of {expected}"
    );
}

#[test]
fn means_of_a_linear_profile() {
    let (ground, slope) = (vector(3.0, -2.0), vector(4e-3, 1e-3));
    let winds = profile(9000.0, 700.0, |height| ground + slope * height);
    // By height: the wind in the middle.
    for (bottom, top) in [(0.0, 6000.0), (350.0, 1234.5), (5500.0, 6000.0)] {
        let mean = winds.mean_by_height(bottom, top).unwrap();
        close(mean, ground + slope * (0.5 * (bottom + top)), 1e-12);
    }
    // By mass in air of constant scale height: the mean height of the mass over the bottom is H - D / (exp(D/H) - 1).
    for (bottom, top) in [(0.0, 6000.0), (0.0, 1.0), (2000.0, 2040.0), (350.0, 1234.5)] {
        let depth: f64 = top - bottom;
        let centre = bottom + SCALE - depth / (depth / SCALE).exp_m1();
        let mean = winds.mean_by_pressure(bottom, top).unwrap();
        close(mean, ground + slope * centre, 1e-9);
    }
    let difference = winds.difference(500.0, 3500.0).unwrap();
    close(difference, slope * 3000.0, 1e-12);
}

#[test]
fn helicity_of_a_straight_hodograph() {
    // The vector product of two winds seen from a point of the line through them is zero; off it, at the distance d to the left of a
    // shear of length s, twice the triangle: -d s.
    let (ground, shear) = (vector(-4.0, 3.0), vector(18.0, 24.0));
    let winds = profile(6000.0, 450.0, |height| ground + shear * (height / 6000.0));
    for share in [-0.5, 0.0, 0.3, 1.0, 2.0] {
        let helicity = winds.helicity(0.0, 3000.0, ground + shear * share);
        near(helicity.unwrap(), 0.0, 1e-10);
    }
    let left = vector(-0.8, 0.6) * 5.0;
    let helicity = winds.helicity(0.0, 3000.0, ground + left);
    near(helicity.unwrap(), -5.0 * 15.0, 1e-10);
    let helicity = winds.helicity(0.0, 3000.0, ground - left);
    near(helicity.unwrap(), 5.0 * 15.0, 1e-10);
}

#[test]
fn helicity_of_an_arc() {
    // Seen from the centre, twice the area of the sector: radius² times the angle turned. 60 chords instead of the arc
    // each make radius² sin(angle/60) of it.
    let centre = vector(7.0, 12.0);
    let (radius, chords) = (15.0_f64, 60.0);
    let winds = profile(3000.0, 3000.0 / chords, quarter(centre, radius, 3000.0));
    let helicity = winds.helicity(0.0, 3000.0, centre).unwrap();
    near(
        helicity,
        radius * radius * chords * (FRAC_PI_2 / chords).sin(),
        1e-9,
    );
    near(helicity / (radius * radius * FRAC_PI_2), 1.0, 2e-4);
    // Of the lowest third, a third; counted from the ground too.
    let third = winds.helicity(0.0, 1000.0, centre).unwrap();
    near(third, helicity / 3.0, 1e-9);
    // Seen from the ground's wind, the segment between chord and arc: radius² (angle - sin(angle)).
    let seen = winds.helicity(0.0, 3000.0, winds.at_ground().unwrap());
    near(
        seen.unwrap() / (radius * radius * (FRAC_PI_2 - 1.0)),
        1.0,
        1e-3,
    );
}

/// The definition in plain sums, 1 m at a time.
#[test]
fn storm_motion_on_a_quarter_circle() {
    let wind = quarter(vector(5.0, 5.0), 20.0, 6000.0);
    let winds = profile(6500.0, 100.0, &wind);
    let between = |height: f64| {
        let below = (height / 100.0).floor() * 100.0;
        let share = (height - below) / 100.0;
        wind(below) * (1.0 - share) + wind(below + 100.0) * share
    };
    let mean = |bottom: usize, top: usize| {
        let sum = (bottom..top).fold(Vector::default(), |sum, metre| {
            sum + between(metre as f64 + 0.5)
        });
        sum * (1.0 / (top - bottom) as f64)
    };
    let shear = mean(5500, 6000) - mean(0, 500);
    let right = shear.v.atan2(shear.u) - FRAC_PI_2;
    let deviation = vector(right.cos(), right.sin()) * 7.5;
    let motion = StormMotion::of_fixed_layers(&winds).unwrap();
    close(motion.mean, mean(0, 6000), 1e-9);
    close(motion.right, mean(0, 6000) + deviation, 1e-9);
    close(motion.left, mean(0, 6000) - deviation, 1e-9);
    // The mean of a quarter of a circle lies at 2/pi of the radius along both axes; chords of 1.5 degrees cut off little.
    close(
        motion.mean,
        vector(5.0 - 40.0 / PI, 5.0 + 40.0 / PI),
        20.0 * 1e-4,
    );
    // By symmetry the shear runs towards the north-east: the right mover deviates towards the south-east.
    close(deviation, vector(7.5, -7.5) * 0.5_f64.sqrt(), 1e-9);

    let numbers = WindNumbers::of(&winds, EffectiveLayer::default(), Motion::Left);
    assert_eq!(numbers.motion, Some(motion));
    assert_eq!(numbers.motion_used, Some(motion.left));
    assert_eq!(numbers.motion_effective, None);
}

#[test]
fn numbers_of_the_effective_layer() {
    let wind = |height: f64| vector(height / 300.0, 12.0 * (height / 2000.0).sin());
    let winds = profile(12_000.0, 1.0, wind);
    let (bottom, top, el) = (600.0, 2100.0, 11_000.0);
    let numbers = WindNumbers::of(
        &winds,
        layer(bottom, top, el),
        Motion::Set(vector(9.0, 1.0)),
    );

    // 600 m to halfway between 600 and 11,000 m.
    let difference = numbers.difference_effective.unwrap();
    close(difference, wind(5800.0) - wind(600.0), 1e-9);

    // 65 % of 11,000 m are 7,150 m. Sums by the metre, weighted with the pressure that falls across it.
    let pressure = |height: f64| GROUND * (-height / SCALE).exp();
    let mut sums = (Vector::default(), 0.0);
    for metre in 600..7150 {
        let height = f64::from(metre);
        let weight = pressure(height) - pressure(height + 1.0);
        sums = (sums.0 + wind(height + 0.5) * weight, sums.1 + weight);
    }
    let mean = sums.0 * (1.0 / sums.1);
    let of = |from: i32, to: i32| {
        let sum = (from..to).fold(Vector::default(), |sum, metre| {
            sum + wind(f64::from(metre) + 0.5)
        });
        sum * (1.0 / f64::from(to - from))
    };
    let shear = of(6650, 7150) - of(600, 1100);
    let right = shear.v.atan2(shear.u) - FRAC_PI_2;
    let motion = numbers.motion_effective.unwrap();
    close(motion.mean, mean, 1e-4);
    close(
        motion.right,
        mean + vector(right.cos(), right.sin()) * 7.5,
        1e-4,
    );
    close(
        motion.left,
        mean - vector(right.cos(), right.sin()) * 7.5,
        1e-4,
    );

    // Minus the integral of (V - C) x dV/dz, by the metre.
    let helicity: f64 = (600..2100)
        .map(|metre| {
            let height = f64::from(metre);
            let shear = wind(height + 1.0) - wind(height);
            shear.cross(wind(height + 0.5) - vector(9.0, 1.0))
        })
        .sum();
    near(numbers.helicity_effective.unwrap(), helicity, 1e-3);

    // No room, no equilibrium level, no layer.
    let shallow = StormMotion::of_effective_layer(&winds, layer(600.0, 2100.0, 2400.0));
    assert_eq!(shallow, None);
    let no_el = EffectiveLayer {
        el_height: None,
        ..layer(bottom, top, el)
    };
    let numbers = WindNumbers::of(&winds, no_el, Motion::Right);
    assert!(numbers.helicity_effective.is_some());
    assert_eq!(numbers.difference_effective, None);
    assert_eq!(numbers.motion_effective, None);
    // An equilibrium level beneath the base of the layer.
    let below = WindNumbers::of(&winds, layer(600.0, 2100.0, 500.0), Motion::Right);
    assert_eq!(below.difference_effective, None);
}

#[test]
fn critical_angles() {
    // From the south at the ground, veering: the difference over 500 m points east.
    let winds = WindProfile::new([
        level(0.0, vector(0.0, 10.0)),
        level(500.0, vector(10.0, 10.0)),
        level(7000.0, vector(30.0, 10.0)),
    ])
    .unwrap();
    for (motion, expected) in [
        (vector(0.0, 0.0), Some(90.0)),
        (vector(0.0, 20.0), Some(90.0)),
        (vector(-5.0, 10.0), Some(0.0)),
        (vector(5.0, 10.0), Some(180.0)),
        (vector(-10.0, 0.0), Some(45.0)),
        (vector(10.0, 0.0), Some(135.0)),
        // Moving with the wind at the ground.
        (vector(0.0, 10.0), None),
    ] {
        let numbers = WindNumbers::of(&winds, EffectiveLayer::default(), Motion::Set(motion));
        match (numbers.critical_angle, expected) {
            (Some(found), Some(expected)) => near(found, expected, 1e-9),
            (found, expected) => assert_eq!(found, expected),
        }
    }
}

#[test]
fn no_shear_no_motion() {
    // Rounding of the means must not be taken for a direction.
    let winds = profile(8000.0, 7.0, |_| Vector::from_wind(237.0, 13.7));
    let numbers = WindNumbers::of(&winds, layer(0.0, 1500.0, 11_000.0), Motion::Right);
    assert_eq!(numbers.motion, None);
    assert_eq!(numbers.motion_effective, None);
    assert_eq!(numbers.motion_used, None);
    assert_eq!(numbers.helicity_0_to_3km, None);
    assert_eq!(numbers.critical_angle, None);
    close(
        numbers.mean_0_to_6km.unwrap(),
        Vector::from_wind(237.0, 13.7),
        1e-9,
    );
    // A motion that is set needs no shear.
    let set = WindNumbers::of(
        &winds,
        EffectiveLayer::default(),
        Motion::Set(vector(1.0, 2.0)),
    );
    near(set.helicity_0_to_3km.unwrap(), 0.0, 1e-9);
    assert_eq!(set.critical_angle, None);
}

#[test]
fn the_lowest_wind_serves_down_to_the_ground() {
    let from = |lowest: f64| {
        WindProfile::new([
            level(lowest, vector(2.0, 5.0)),
            level(1000.0, vector(12.0, 9.0)),
            level(7000.0, vector(30.0, 2.0)),
        ])
        .unwrap()
    };
    let winds = from(50.0);
    assert_eq!(winds.at_ground(), Some(vector(2.0, 5.0)));
    assert_eq!(winds.at(20.0), Some(vector(2.0, 5.0)));
    assert_eq!(winds.at(-0.1), None);
    // 50 m of the lowest wind, 950 m of the mean of both.
    let mean = (vector(2.0, 5.0) * 50.0 + vector(7.0, 7.0) * 950.0) * 1e-3;
    close(winds.mean_by_height(0.0, 1000.0).unwrap(), mean, 1e-12);
    near(winds.pressure_at(0.0).unwrap().pa(), GROUND, 1e-6);
    let numbers = WindNumbers::of(&winds, EffectiveLayer::default(), Motion::Right);
    assert!(numbers.mean_0_to_6km_by_pressure.is_some() && numbers.critical_angle.is_some());

    // Too high: nothing that starts at the ground.
    let numbers = WindNumbers::of(&from(50.1), layer(100.0, 900.0, 8000.0), Motion::Right);
    assert_eq!(
        numbers,
        WindNumbers {
            difference_effective: numbers.difference_effective,
            motion_effective: numbers.motion_effective,
            ..WindNumbers::default()
        }
    );
    assert!(numbers.difference_effective.is_some() && numbers.motion_effective.is_some());

    // From below the ground on it is interpolated.
    let winds = from(-1000.0);
    close(winds.at_ground().unwrap(), vector(7.0, 7.0), 1e-12);
}

#[test]
fn levels_without_pressure_take_it_from_their_neighbours() {
    let wind = |height: f64| vector(height / 500.0, (height / 900.0).cos());
    let full = profile(8000.0, 250.0, wind);
    let thin = |keep: &dyn Fn(usize) -> bool| {
        let levels = full.levels().iter().enumerate();
        WindProfile::new(levels.map(|(at, &level)| WindLevel {
            pressure: level.pressure.filter(|_| keep(at)),
            ..level
        }))
        .unwrap()
    };
    let mean = full.mean_by_pressure(0.0, 6000.0).unwrap();
    let gaps = thin(&|at| at % 8 == 0);
    close(gaps.mean_by_pressure(0.0, 6000.0).unwrap(), mean, 1e-9);
    // Not beyond the ends.
    assert_eq!(thin(&|at| at > 0).mean_by_pressure(0.0, 6000.0), None);
    assert_eq!(thin(&|at| at < 20).mean_by_pressure(0.0, 6000.0), None);
    assert_eq!(thin(&|_| false).mean_by_pressure(0.0, 6000.0), None);
    assert!(thin(&|_| false).mean_by_height(0.0, 6000.0).is_some());
    // A pressure that rises with height is none.
    let wrong = WindProfile::new(full.levels().iter().enumerate().map(|(at, &level)| {
        let wrong = (at == 10).then_some(Pressure::from_pa(GROUND));
        WindLevel {
            pressure: wrong.or(level.pressure),
            ..level
        }
    }))
    .unwrap();
    close(wrong.mean_by_pressure(0.0, 6000.0).unwrap(), mean, 1e-9);
}
