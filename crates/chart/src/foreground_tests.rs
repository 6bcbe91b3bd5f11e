use super::*;
use crate::{
    Bracket, BracketGrade, CandidateMark, Handle, HeightScale, Item, ParcelDrawing, SurfaceMark,
    SurfaceMarks, View, background, text_box,
};
use dewbound_sounding::Numbers;
use dewbound_sounding::thermo::{Air, Method, Pressure, Temperature};
use proptest::prelude::*;

#[path = "../testing/invented.rs"]
mod invented;

/// A picture with everything in it, handed to `look`.
fn with_everything<R>(
    levels: usize,
    brackets: &[Bracket],
    cursor: Option<Point>,
    look: impl FnOnce(&Picture<'_>) -> R,
) -> R {
    let received = invented::invented(levels);
    let mut working = received.clone();
    for td in working.dewpoint.iter_mut().take(levels / 8 + 1).flatten() {
        *td -= 2.0;
    }
    let mut preview = received.clone();
    for t in preview
        .temperature
        .iter_mut()
        .skip(levels / 3)
        .take(levels / 9)
        .flatten()
    {
        *t += 1.5;
    }
    let numbers = Numbers::of(&working);
    let start = working.surface_air().unwrap();
    let shifted = |k: f64| Temperature::from_k(start.dewpoint.k() + k);
    let ends = [shifted(-2.0), shifted(2.0)];
    let candidate = |label: &str, k: f64, trusted| CandidateMark {
        value: shifted(k),
        label: label.to_owned(),
        trusted,
    };
    let marks = SurfaceMarks {
        pressure: start.pressure,
        temperature: Some(SurfaceMark {
            focused: true,
            ..SurfaceMark::new(start.temperature)
        }),
        dewpoint: Some(SurfaceMark {
            interval: Some(ends),
            candidates: vec![
                candidate("reported", 2.0, true),
                candidate("mixed layer", 1.0, false),
            ],
            ..SurfaceMark::new(start.dewpoint)
        }),
    };
    let heights = HeightScale::of(&received);
    let picture = Picture {
        received: Some(&received),
        preview: Some(&preview),
        parcel: numbers.surface.as_ref().map(|ascent| ParcelDrawing {
            ascent,
            method: Method::default(),
            environment: None,
            interval: Some(ends.map(|dewpoint| Air { dewpoint, ..start })),
            name: "surface parcel",
        }),
        brackets,
        surface: Some(&marks),
        heights: Some(&heights),
        cursor,
        stamp: Some("INVENTED DATA"),
        ..Picture::new(&working)
    };
    look(&picture)
}

fn geometry(width: f64, height: f64) -> Geometry {
    let view = View::fit(&invented::invented(50));
    Geometry::new(Rect::new(0.0, 0.0, width, height), view)
}

fn bracket(number: usize, bottom: f64, top: f64) -> Bracket {
    let grades = [
        BracketGrade::Informative,
        BracketGrade::Doubtful,
        BracketGrade::Erroneous,
        BracketGrade::Repaired,
        BracketGrade::FromEdit,
    ];
    Bracket {
        number,
        grade: grades[number % 5],
        bottom: Pressure::from_hpa(bottom),
        top: Pressure::from_hpa(top),
        selected: number == 1,
    }
}

fn texts(scene: &Scene) -> Vec<(String, Rect)> {
    let level = |item: &Item| match item {
        Item::Text {
            at,
            anchor,
            text,
            size,
            angle,
            ..
        } if *angle == 0.0 => Some((text.clone(), text_box(*at, *anchor, text, *size))),
        _ => None,
    };
    scene.items.iter().filter_map(level).collect()
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 80, failure_persistence: None, ..ProptestConfig::default() })]

    /// Whatever the frame, view and cursor: everything finite and inside the frame.
    #[test]
    fn everything_stays_finite_and_inside(
        width in 0.0..2000.0f64, height in 0.0..1400.0f64,
        bottom in 50.0..1150.0f64, depth in 0.02..3.0f64, left in -80.0..40.0f64, span in 1.0..150.0f64,
        across in 0.0..1.0f64, down in 0.0..1.0f64,
        count in 2..400usize,
    ) {
        let view = View { bottom_hpa: bottom, top_hpa: bottom / depth.exp(), left_c: left, span_k: span, ..View::default() };
        let geometry = Geometry::new(Rect::new(3.0, 5.0, width, height), view);
        let brackets = [bracket(1, 900.0, 850.0), bracket(2, 700.0, 700.0), bracket(3, 1010.0, 90.0)];
        let cursor = Some(Point::new(3.0 + across * width, 5.0 + down * height));
        prop_assert!(background(&geometry).is_sound(&geometry));
        with_everything(count, &brackets, cursor, |picture| {
            let front = foreground(&geometry, picture);
            assert!(front.scene.is_sound(&geometry));
        });
    }

    /// Numbers of findings never cover each other, every finding in sight has one, and each lies over its layer's height where there is room.
    #[test]
    fn brackets_keep_apart(
        layers in proptest::collection::vec((150.0..960.0f64, 0.0..0.4f64), 1..13),
        size in prop_oneof![Just((600.0, 500.0)), Just((1000.0, 800.0)), Just((1600.0, 1100.0))],
    ) {
        let brackets: Vec<Bracket> = layers.iter().enumerate()
            .map(|(i, &(bottom, depth))| bracket(i + 1, bottom, bottom * (-depth).exp())).collect();
        let geometry = geometry(size.0, size.1);
        let discs = with_everything(500, &brackets, None, |picture| foreground(&geometry, picture).touch.brackets);
        prop_assert_eq!(discs.len(), brackets.len());
        for (i, (_, a)) in discs.iter().enumerate() {
            prop_assert!(geometry.plot().holds(a));
            for (_, b) in &discs[i + 1..] {
                prop_assert!(!a.overlaps(b), "{:?} {:?}", a, b);
            }
        }
    }
}

#[test]
fn odd_frames_and_profiles_are_drawn_without_complaint() {
    let odd = [
        (0.0, 0.0),
        (1.0, 1.0),
        (10_000.0, 3.0),
        (3.0, 10_000.0),
        (f64::NAN, 400.0),
        (-5.0, 400.0),
        (60.0, 60.0),
    ];
    for (width, height) in odd {
        let geometry = geometry(width, height);
        assert!(
            background(&geometry).is_sound(&geometry),
            "{width} x {height}"
        );
        with_everything(300, &[bracket(1, 900.0, 800.0)], None, |picture| {
            let front = foreground(&geometry, picture);
            assert!(front.scene.is_sound(&geometry), "{width} x {height}");
        });
    }
    let geometry = geometry(800.0, 600.0);
    let mut broken = invented::invented(40);
    broken.temperature[3] = Some(f64::NAN);
    broken.dewpoint[5] = Some(f64::INFINITY);
    broken.pressure[7] = f64::NAN;
    broken.height[9] = Some(f64::NAN);
    broken.wind[11] = Some(dewbound_sounding::Wind {
        direction: f64::NAN,
        speed: f64::INFINITY,
    });
    broken.wind.truncate(20);
    for profile in [Profile::default(), broken] {
        let heights = HeightScale::of(&profile);
        let picture = Picture {
            heights: Some(&heights),
            cursor: Some(Point::new(300.0, 300.0)),
            ..Picture::new(&profile)
        };
        assert!(foreground(&geometry, &picture).scene.is_sound(&geometry));
    }
}

#[test]
fn labels_do_not_overlap() {
    for (width, height) in [
        (420.0, 380.0),
        (600.0, 500.0),
        (1000.0, 800.0),
        (1600.0, 1100.0),
    ] {
        let geometry = geometry(width, height);
        let brackets = [
            bracket(1, 650.0, 590.0),
            bracket(2, 968.0, 872.0),
            bracket(3, 640.0, 632.0),
            bracket(4, 300.0, 250.0),
            bracket(5, 880.0, 860.0),
        ];
        let background = texts(&background(&geometry));
        let front = with_everything(600, &brackets, None, |p| {
            texts(&foreground(&geometry, p).scene)
        });
        for labels in [background, front] {
            assert!(labels.len() > 8);
            for (i, (a, box_a)) in labels.iter().enumerate() {
                for (b, box_b) in &labels[i + 1..] {
                    // Estimated boxes are generous: a point of contact is none.
                    let touch = box_a.grown(-1.0).overlaps(&box_b.grown(-1.0));
                    assert!(!touch, "{a:?} and {b:?} at {width} x {height}");
                }
            }
        }
    }
}

#[test]
fn handles_lie_where_the_values_are() {
    let geometry = geometry(1000.0, 800.0);
    with_everything(200, &[], None, |picture| {
        let touch = foreground(&geometry, picture).touch;
        let marks = picture.surface.unwrap();
        for handle in [Handle::Temperature, Handle::Dewpoint] {
            let place = touch.handle(handle).unwrap();
            let expect = geometry.point(marks.pressure, marks.mark(handle).unwrap().value);
            assert!(place.centre.distance(expect) < 1e-9);
            assert_eq!(touch.handle_at(expect), Some(handle));
        }
        let [left, right] = touch.handle(Handle::Dewpoint).unwrap().whisker.unwrap();
        let width = 4.0 * geometry.points_per_kelvin();
        assert!((right.x - left.x - width).abs() < 1e-6);
    });
}

#[test]
fn the_readout_follows_the_cursor_and_says_what_the_profile_says() {
    let geometry = geometry(1000.0, 800.0);
    let y = geometry.y(Pressure::from_hpa(500.0));
    let front = with_everything(200, &[], Some(Point::new(400.0, y)), |p| {
        foreground(&geometry, p)
    });
    let line = front.readout.unwrap().line();
    assert!(
        line.starts_with("pressure 500 hPa, height above sea level "),
        "{line}"
    );
    let shown: Vec<String> = texts(&front.scene)
        .into_iter()
        .map(|(text, _)| text)
        .collect();
    assert!(
        shown.iter().any(|t| t == "500 hPa") && shown.iter().any(|t| t == "potential temperature")
    );
    let outside = with_everything(200, &[], Some(Point::new(1.0, y)), |p| {
        foreground(&geometry, p)
    });
    assert_eq!(outside.readout, None);
}

#[test]
fn nothing_is_drawn_twice_where_versions_agree() {
    let profile = invented::invented(300);
    let same = profile.clone();
    let geometry = geometry(1000.0, 800.0);
    let picture = Picture {
        received: Some(&same),
        preview: Some(&same),
        ..Picture::new(&profile)
    };
    let inks = |scene: &Scene| -> Vec<Ink> {
        let of = |item: &Item| match item {
            Item::Polyline { ink, .. } => Some(*ink),
            _ => None,
        };
        scene.items.iter().filter_map(of).collect()
    };
    let seen = inks(&foreground(&geometry, &picture).scene);
    assert!(seen.contains(&Ink::Temperature) && !seen.contains(&Ink::ReceivedTemperature));

    // A change in one layer is drawn there and nowhere else.
    let mut changed = profile.clone();
    for t in &mut changed.temperature[100..110] {
        *t = t.map(|k| k + 3.0);
    }
    let picture = Picture {
        received: Some(&changed),
        ..Picture::new(&profile)
    };
    let scene = foreground(&geometry, &picture).scene;
    let drawn = scene.items.iter().find_map(|item| match item {
        Item::Polyline {
            points,
            ink: Ink::ReceivedTemperature,
            ..
        } => Some(points.clone()),
        _ => None,
    });
    let (low, high) = (
        geometry.y_of_pa(profile.pressure[98]),
        geometry.y_of_pa(profile.pressure[111]),
    );
    assert!(drawn.unwrap().iter().all(|p| p.y < low && p.y > high));
}

/// The hatched area is CAPE: its size on the plot, in J/kg, is the number. Rd times the integral of the virtual temperature excess over
/// ln p; a point of height is so many e-folds, a point of width so many K.
#[test]
fn the_hatched_areas_are_the_numbers() {
    let profile = invented::invented(800);
    let numbers = Numbers::of(&profile);
    let environment = profile.environment().unwrap();
    let ascent = numbers.surface.as_ref().unwrap();
    let drawing = ParcelDrawing {
        ascent,
        method: Method::default(),
        environment: Some(&environment),
        interval: None,
        name: "surface parcel",
    };
    let geometry = geometry(1400.0, 1000.0);
    let picture = ParcelPicture::of(&geometry, &drawing, &environment);
    let joules = |areas: &[Vec<Row>]| {
        let strip = |w: &[Row]| (w[0].0 - w[1].0) * 0.5 * (w[0].2 - w[0].1 + w[1].2 - w[1].1);
        let points: f64 = areas.iter().flat_map(|a| a.windows(2)).map(strip).sum();
        287.05 * points / geometry.points_per_kelvin() / geometry.points_per_efold()
    };
    assert!(ascent.cape > 1000.0);
    let cape = joules(&picture.cape);
    assert!(
        (cape / ascent.cape - 1.0).abs() < 0.01,
        "{cape} {}",
        ascent.cape
    );
    let cin = -joules(&picture.cin);
    let expect = ascent.cin.unwrap();
    assert!(
        expect < -5.0 && (cin / expect - 1.0).abs() < 0.03,
        "{cin} {expect}"
    );
}
