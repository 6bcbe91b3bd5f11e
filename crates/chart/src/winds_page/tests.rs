//! Properties of the page's geometry and scenes.

use super::*;
use crate::{Item, Point, Rect, SpeedUnit, text_box};
use dewbound_sounding::thermo::{StormMotion, WindLevel};
use proptest::prelude::*;

/// Height, direction, speed.
fn winds_at(winds: &[(f64, f64, f64)]) -> WindProfile {
    WindProfile::new(winds.iter().map(|&(height, direction, speed)| WindLevel {
        height,
        pressure: None,
        wind: Vector::from_wind(direction, speed),
    }))
    .unwrap()
}

/// Veering and strengthening.
fn veering() -> WindProfile {
    winds_at(&[
        (0.0, 150.0, 6.0),
        (480.0, 165.0, 11.0),
        (1100.0, 190.0, 15.0),
        (2900.0, 220.0, 20.0),
        (6100.0, 240.0, 28.0),
        (9300.0, 250.0, 38.0),
        (14_000.0, 255.0, 44.0),
    ])
}

fn numbers() -> WindNumbers {
    let motion = StormMotion {
        right: Vector::from_wind(245.0, 12.0),
        left: Vector::from_wind(195.0, 19.0),
        mean: Vector::from_wind(215.0, 17.0),
    };
    WindNumbers {
        motion: Some(motion),
        motion_used: Some(motion.right),
        ..WindNumbers::default()
    }
}

fn winds() -> impl Strategy<Value = Vec<(f64, f64, f64)>> {
    proptest::collection::vec((10.0..1500.0f64, 0.0..360.0f64, 0.0..90.0f64), 2..40).prop_map(
        |steps| {
            let mut height = -40.0;
            steps
                .into_iter()
                .map(|(by, direction, speed)| {
                    height += by;
                    (height, direction, speed)
                })
                .collect()
        },
    )
}

fn frames() -> impl Strategy<Value = Rect> {
    (
        0.0..300.0f64,
        0.0..300.0f64,
        120.0..1400.0f64,
        150.0..1000.0f64,
    )
        .prop_map(|(left, top, width, height)| Rect::new(left, top, width, height))
}

fn texts(scene: &Scene) -> Vec<&str> {
    scene
        .items
        .iter()
        .filter_map(|item| match item {
            Item::Text { text, .. } => Some(text.as_str()),
            _ => None,
        })
        .collect()
}

use crate::Scene;

proptest! {
    #![proptest_config(ProptestConfig { cases: 120, failure_persistence: None, ..ProptestConfig::default() })]

    /// Value to point to value, on all three scales.
    #[test]
    fn there_and_back(
        frame in frames(), levels in winds(), u in -80.0..80.0f64, v in -80.0..80.0f64,
        height in 0.0..12_000.0f64, direction in 0.5..359.5f64, knots in any::<bool>(),
    ) {
        let profile = winds_at(&levels);
        let wind = Vector { u, v };
        let geometry = HodographGeometry::new(frame, HodographView::fit(&profile, &numbers(), Some(wind), WINDS_TOP));
        let back = geometry.at(geometry.point(wind));
        prop_assert!((back - wind).speed() < 1e-9);
        // As far to the east as to the north.
        let east = geometry.point(Vector { u: 1.0, v: 0.0 }).distance(geometry.point(Vector::default()));
        let north = geometry.point(Vector { u: 0.0, v: 1.0 }).distance(geometry.point(Vector::default()));
        prop_assert!((east - north).abs() < 1e-9 * east.max(1.0));
        // What is fitted is in sight.
        prop_assert!(geometry.plot().contains(geometry.point(wind)));
        prop_assert!(geometry.plot().contains(geometry.point(Vector::default())));

        let unit = if knots { SpeedUnit::Knots } else { SpeedUnit::MetresPerSecond };
        let strips = WindStrips::new(frame, StripsView::fit(&profile, unit, WINDS_TOP));
        prop_assert!((strips.height_at(strips.y(height)) - height).abs() < 1e-6);
        let at = strips.speed_point(height, wind.speed());
        prop_assert!((strips.speed_at(at.x) - wind.speed()).abs() < 1e-6);
        let at = strips.direction_point(height, direction);
        prop_assert!((strips.direction_at(at.x) - direction).abs() < 1e-6);
        prop_assert!(at.x >= strips.direction().left && at.x <= strips.direction().right);
    }

    /// Whatever the winds and the frame: nothing outside it, nothing that is not a number, texts wholly inside.
    #[test]
    fn nothing_leaves_the_frame(
        frame in frames(), levels in winds(), u in -80.0..80.0f64, v in -80.0..80.0f64, set in any::<bool>(),
        cursor in proptest::option::of(-100.0..13_000.0f64), factor in 0.3..6.0f64,
        top in prop_oneof![Just(3_000.0), Just(6_000.0), Just(WINDS_TOP)],
    ) {
        let profile = winds_at(&levels);
        let numbers = numbers();
        let picture = WindsPicture {
            set: set.then_some(Vector { u, v }),
            focused: true,
            cursor,
            stamp: Some("INVENTED DATA"),
            ..WindsPicture::new(&profile, &numbers)
        };
        let fit = HodographGeometry::new(frame, HodographView::fit(&profile, &numbers, picture.set, top));
        let zoomed = HodographGeometry::new(frame, fit.zoomed(fit.plot().centre(), factor));
        let strips = WindStrips::new(frame, StripsView::fit(&profile, SpeedUnit::Knots, top));
        for scene in [
            hodograph(&fit, &picture).scene,
            hodograph(&zoomed, &picture).scene,
            wind_strips(&strips, &picture),
        ] {
            prop_assert!(scene.lies_within(frame));
            for item in &scene.items {
                if let Item::Text { at, anchor, text, size, .. } = item {
                    prop_assert!(frame.grown(0.5).holds(&text_box(*at, *anchor, text, *size)), "{text}");
                }
            }
        }
    }

    /// Every tick lies on the curve, at the wind of its height, also between levels.
    #[test]
    fn ticks_lie_on_the_curve(frame in frames(), levels in winds()) {
        let profile = winds_at(&levels);
        let numbers = numbers();
        let geometry = HodographGeometry::new(frame, HodographView::fit(&profile, &numbers, None, WINDS_TOP));
        let drawn = hodograph(&geometry, &WindsPicture::new(&profile, &numbers));
        let curve: Vec<[Point; 2]> = drawn.scene.items.iter().flat_map(|item| match item {
            Item::Polyline { points, ink: crate::Ink::Wind, stroke } if stroke.width != 1.6 =>
                points.windows(2).map(|pair| [pair[0], pair[1]]).collect(),
            _ => Vec::new(),
        }).collect();
        let top = levels.last().unwrap().0.min(WINDS_TOP);
        let whole = (top / 1000.0).floor() as usize;
        prop_assert!(drawn.ticks.iter().filter(|(height, _)| *height >= 1000.0).count() <= whole);
        for (height, at) in drawn.ticks {
            prop_assert!((geometry.at(at) - profile.at(height).unwrap()).speed() < 1e-9);
            let nearest = curve.iter().map(|&[a, b]| {
                let (dx, dy) = (b.x - a.x, b.y - a.y);
                let along = ((at.x - a.x) * dx + (at.y - a.y) * dy) / (dx * dx + dy * dy).max(1e-12);
                let s = along.clamp(0.0, 1.0);
                at.distance(Point::new(a.x + s * dx, a.y + s * dy))
            }).fold(f64::INFINITY, f64::min);
            prop_assert!(nearest < 1e-6, "{height} m is {nearest} points off");
        }
    }

    /// No two labels of the hodograph lie on each other.
    #[test]
    fn labels_keep_apart(levels in winds(), width in 240.0..900.0f64) {
        let profile = winds_at(&levels);
        let numbers = numbers();
        let frame = Rect::new(0.0, 0.0, width, width);
        let geometry = HodographGeometry::new(frame, HodographView::fit(&profile, &numbers, None, WINDS_TOP));
        let drawn = hodograph(&geometry, &WindsPicture::new(&profile, &numbers));
        let boxes: Vec<(Rect, &str)> = drawn.scene.items.iter().filter_map(|item| match item {
            Item::Text { at, anchor, text, size, .. } => Some((text_box(*at, *anchor, text, *size), text.as_str())),
            _ => None,
        }).collect();
        for (i, (a, name)) in boxes.iter().enumerate() {
            for (b, other) in &boxes[i + 1..] {
                prop_assert!(!a.grown(-0.5).overlaps(&b.grown(-0.5)), "{name} and {other}");
            }
        }
    }
}

fn drawn(unit: SpeedUnit, picture: impl Fn(WindsPicture) -> WindsPicture) -> Hodograph {
    let (profile, numbers) = (veering(), numbers());
    let mut given = WindsPicture::new(&profile, &numbers);
    given.units.speed = unit;
    let given = picture(given);
    let geometry = HodographGeometry::new(
        Rect::new(0.0, 0.0, 500.0, 460.0),
        HodographView::fit(&profile, &numbers, given.set, WINDS_TOP),
    );
    hodograph(&geometry, &given)
}

#[test]
fn half_a_kilometre_and_every_whole_one_up_to_the_top() {
    let drawn = drawn(SpeedUnit::Knots, |picture| picture);
    let heights: Vec<f64> = drawn.ticks.iter().map(|&(height, _)| height).collect();
    assert_eq!(heights.len(), 14);
    assert_eq!(heights[..3], [0.0, 500.0, 1000.0]);
    assert_eq!(heights.last(), Some(&12_000.0));
    let texts = texts(&drawn.scene);
    for wanted in ["0.5", "1", "3", "6", "left", "mean"] {
        assert!(texts.contains(&wanted), "{wanted}: {texts:?}");
    }
}

#[test]
fn rings_carry_the_unit_once_each() {
    for (unit, sign) in [
        (SpeedUnit::Knots, " kt"),
        (SpeedUnit::MetresPerSecond, " m/s"),
    ] {
        let drawn = drawn(unit, |picture| picture);
        let mut rings: Vec<f64> = texts(&drawn.scene)
            .iter()
            .filter_map(|text| text.strip_suffix(sign)?.parse().ok())
            .collect();
        rings.sort_by(f64::total_cmp);
        assert!(rings.len() >= 3, "{rings:?}");
        for (i, ring) in rings.iter().enumerate() {
            let before = if i == 0 { 0.0 } else { rings[i - 1] };
            assert!((ring - before - drawn.ring_step).abs() < 1e-9, "{rings:?}");
        }
    }
}

#[test]
fn the_ring_is_at_the_motion_in_use_and_hit_beside_it() {
    let at_estimate = drawn(SpeedUnit::Knots, |picture| picture);
    let ring = at_estimate.handle.unwrap();
    let right = at_estimate
        .marks
        .iter()
        .find(|(mark, ..)| *mark == MotionMark::Right);
    assert_eq!(right.map(|&(_, _, at)| at), Some(ring));
    // 28 points across at least (design, handles).
    for (dx, dy) in [(14.0, 0.0), (0.0, -14.0), (9.5, 9.5)] {
        assert!(at_estimate.is_on_handle(Point::new(ring.x + dx, ring.y + dy)));
    }
    assert!(!at_estimate.is_on_handle(Point::new(ring.x + 17.0, ring.y)));

    let own = Vector::from_wind(270.0, 15.0);
    let set = drawn(SpeedUnit::Knots, |picture| WindsPicture {
        set: Some(own),
        ..picture
    });
    let mark = set.marks.iter().find(|(mark, ..)| *mark == MotionMark::Set);
    assert_eq!(
        mark.map(|&(_, motion, at)| (motion, Some(at))),
        Some((own, set.handle))
    );
    // 15 m/s are 29.16 kt: 1852 m to the nautical mile.
    let texts = texts(&set.scene);
    assert!(texts.contains(&"set by you 270° 29 kt"), "{texts:?}");
    assert!(texts.contains(&"right"), "the estimate stays in sight");
}

#[test]
fn winds_in_words() {
    let wind = |direction, speed| wind_text(Vector::from_wind(direction, speed), SpeedUnit::Knots);
    assert_eq!(wind(5.0, 10.0), "005° 19 kt");
    assert_eq!(wind(359.8, 10.0), "360° 19 kt");
    assert_eq!(wind(120.0, 0.1), "calm");
    assert_eq!(
        wind_line(&veering(), 2900.0, SpeedUnit::MetresPerSecond),
        "2.9 km: 220° 20.0 m/s"
    );
    assert_eq!(
        wind_line(&veering(), 20_000.0, SpeedUnit::Knots),
        "20.0 km: no wind known"
    );
}

#[test]
fn the_strip_of_directions_is_cut_where_the_wind_does_not_blow_from() {
    // North-westerly to north-easterly winds: not cut at north.
    let northerly = winds_at(&[
        (0.0, 330.0, 8.0),
        (2000.0, 355.0, 9.0),
        (5000.0, 30.0, 12.0),
    ]);
    let view = StripsView::fit(&northerly, SpeedUnit::Knots, WINDS_TOP);
    assert_eq!(view.first_direction, 180.0);
    assert_eq!(
        StripsView::fit(&veering(), SpeedUnit::Knots, WINDS_TOP).first_direction,
        0.0
    );
}

#[test]
fn a_profile_without_anything_below_the_top_is_not_drawn() {
    assert_eq!(
        drawn_heights(&winds_at(&[
            (13_000.0, 250.0, 30.0),
            (14_000.0, 250.0, 30.0)
        ])),
        None
    );
    assert_eq!(
        drawn_heights(&winds_at(&[(-300.0, 250.0, 3.0), (-10.0, 250.0, 4.0)])),
        None
    );
    assert_eq!(drawn_heights(&veering()), Some([0.0, WINDS_TOP]));
}

#[test]
fn the_lowest_kilometres_alone_are_drawn_larger() {
    let (profile, numbers) = (veering(), numbers());
    let frame = Rect::new(0.0, 0.0, 600.0, 500.0);
    let scale = |top| {
        let view = HodographView::fit(&profile, &numbers, None, top);
        HodographGeometry::new(frame, view).scale()
    };
    assert!(scale(3_000.0) > scale(6_000.0) && scale(6_000.0) > scale(WINDS_TOP));
    let strips = StripsView::fit(&profile, SpeedUnit::Knots, 3_000.0);
    assert_eq!(strips.top, 3_000.0);
    // Winds that begin above are shown all the same.
    let aloft = winds_at(&[(4_000.0, 250.0, 30.0), (9_000.0, 260.0, 40.0)]);
    assert_eq!(heights_up_to(&aloft, 3_000.0), Some([4_000.0, 9_000.0]));
    assert_eq!(heights_up_to(&veering(), 3_000.0), Some([0.0, 3_000.0]));
}

/// One-second data.
#[test]
fn six_thousand_levels_are_drawn() {
    let levels: Vec<(f64, f64, f64)> = (0..6_000)
        .map(|i| {
            let z = 5.0 * f64::from(i);
            let wobble = (f64::from(i) * 0.9).sin();
            (
                z,
                180.0 + z / 300.0 + 4.0 * wobble,
                8.0 + z / 600.0 + wobble,
            )
        })
        .collect();
    let (profile, numbers) = (winds_at(&levels), numbers());
    let frame = Rect::new(0.0, 0.0, 600.0, 500.0);
    let picture = WindsPicture::new(&profile, &numbers);
    let view = HodographView::fit(&profile, &numbers, None, WINDS_TOP);
    let drawn = hodograph(&HodographGeometry::new(frame, view), &picture);
    let strips = WindStrips::new(
        frame,
        StripsView::fit(&profile, SpeedUnit::Knots, WINDS_TOP),
    );
    let scene = wind_strips(&strips, &picture);
    assert_eq!(drawn.ticks.len(), 14);
    assert!(drawn.scene.lies_within(frame) && scene.lies_within(frame));
}
