//! Writes pictures of an invented sounding as SVG, light and dark, in several sizes, for looking at.
//!
//! `cargo run -p dewbound-chart --example picture -- DIRECTORY`

use dewbound_chart::{
    Bracket, BracketGrade, CandidateMark, Geometry, HeightScale, HodographGeometry, HodographView,
    Palette, ParcelDrawing, Picture, Point, Rect, StripsView, SurfaceMark, SurfaceMarks, View,
    WINDS_TOP, WindStrips, WindsPicture, background, foreground, hodograph, svg, wind_strips,
};
use dewbound_sounding::{
    Amendments, Daylight, Numbers, Reach,
    thermo::{
        Air, Method, Pressure, StormMotion, Temperature, Vector, WindLevel, WindNumbers,
        WindProfile,
    },
};

#[path = "../testing/invented.rs"]
mod invented;

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let directory = std::env::args().nth(1).unwrap_or_else(|| ".".to_owned());
    let received = invented::invented(3000);
    let reported = received
        .surface_air()
        .ok_or("the invented sounding has a surface")?;
    let drier = |k: f64| Temperature::from_k(reported.dewpoint.k() - k);
    let mut amendments = Amendments::default().with_surface_dewpoint(drier(1.2));
    amendments.reach = Some(Reach::Mixed);
    let working = amendments.apply(&received, Daylight::Day).profile;
    let preview = Amendments::default()
        .with_surface_dewpoint(drier(4.0))
        .apply(&received, Daylight::Day)
        .profile;
    let numbers = Numbers::of(&working);
    let environment = working.environment()?;
    let ends = [drier(2.8), drier(-0.5)];
    let marks = SurfaceMarks {
        pressure: reported.pressure,
        temperature: Some(SurfaceMark::new(reported.temperature)),
        dewpoint: Some(SurfaceMark {
            interval: Some(ends),
            candidates: [
                ("reported", 0.0, true),
                ("mixed layer", 2.3, true),
                ("neighbours", 1.8, false),
            ]
            .map(|(label, below, trusted)| CandidateMark {
                value: drier(below),
                label: label.to_owned(),
                trusted,
            })
            .to_vec(),
            focused: true,
            ..SurfaceMark::new(drier(1.2))
        }),
    };
    let bracket = |number, grade, bottom, top| Bracket {
        number,
        grade,
        bottom: Pressure::from_hpa(bottom),
        top: Pressure::from_hpa(top),
        selected: number == 2,
    };
    let brackets = [
        bracket(1, BracketGrade::Erroneous, 650.0, 590.0),
        bracket(2, BracketGrade::Doubtful, 968.0, 872.0),
        bracket(3, BracketGrade::Informative, 640.0, 632.0),
        bracket(4, BracketGrade::Repaired, 300.0, 250.0),
        bracket(5, BracketGrade::FromEdit, 880.0, 860.0),
        bracket(6, BracketGrade::Doubtful, 968.0, 962.0),
    ];
    let heights = HeightScale::of(&received);
    for (width, height) in [
        (420.0, 380.0),
        (600.0, 500.0),
        (1000.0, 800.0),
        (1600.0, 1100.0),
    ] {
        let frame = Rect::new(0.0, 0.0, width, height);
        let geometry = Geometry::new(frame, View::fit(&received));
        let picture = Picture {
            received: Some(&received),
            preview: Some(&preview).filter(|_| width > 1200.0),
            parcel: numbers.surface.as_ref().map(|ascent| ParcelDrawing {
                ascent,
                method: Method::default(),
                environment: Some(&environment),
                interval: Some(ends.map(|dewpoint| Air {
                    dewpoint,
                    ..reported
                })),
                name: "surface parcel",
            }),
            brackets: &brackets,
            surface: Some(&marks),
            heights: Some(&heights),
            cursor: (width < 1200.0).then(|| Point::new(0.5 * width, 0.55 * height)),
            stamp: Some("INVENTED DATA"),
            ..Picture::new(&working)
        };
        let scenes = [
            &background(&geometry),
            &foreground(&geometry, &picture).scene,
        ];
        for (name, palette) in [("light", Palette::Light), ("dark", Palette::Dark)] {
            let path = format!("{directory}/{width}x{height}-{name}.svg");
            std::fs::write(path, svg(frame, &scenes, palette))?;
        }
    }
    winds(&directory)?;
    Ok(())
}

/// The page of the winds, both drawings in one file.
fn winds(directory: &str) -> Result<(), Box<dyn std::error::Error>> {
    let levels = [
        (0.0, 150.0, 6.0),
        (300.0, 160.0, 11.0),
        (700.0, 180.0, 14.0),
        (1_200.0, 200.0, 15.0),
        (2_000.0, 215.0, 17.0),
        (3_200.0, 228.0, 20.0),
        (5_000.0, 238.0, 26.0),
        (7_000.0, 246.0, 33.0),
        (9_500.0, 252.0, 40.0),
        (12_500.0, 255.0, 46.0),
    ];
    let profile = WindProfile::new(levels.map(|(height, direction, speed)| WindLevel {
        height,
        pressure: None,
        wind: Vector::from_wind(direction, speed),
    }))
    .ok_or("two levels make a profile")?;
    let motion = StormMotion {
        right: Vector::from_wind(254.0, 13.5),
        left: Vector::from_wind(211.0, 21.0),
        mean: Vector::from_wind(228.0, 18.0),
    };
    let numbers = WindNumbers {
        motion: Some(motion),
        motion_used: Some(motion.right),
        ..WindNumbers::default()
    };
    for (left, right, height) in [
        (140.0, 290.0, 260.0),
        (230.0, 420.0, 420.0),
        (320.0, 700.0, 640.0),
    ] {
        let picture = WindsPicture {
            stamp: Some("INVENTED DATA"),
            cursor: (right > 500.0).then_some(4_300.0),
            ..WindsPicture::new(&profile, &numbers)
        };
        let strips = WindStrips::new(
            Rect::new(0.0, 0.0, left, height),
            StripsView::fit(&profile, picture.units.speed, WINDS_TOP),
        );
        let plane = HodographGeometry::new(
            Rect::new(left, 0.0, right, height),
            HodographView::fit(&profile, &numbers, None, WINDS_TOP),
        );
        let scenes = [
            &wind_strips(&strips, &picture),
            &hodograph(&plane, &picture).scene,
        ];
        let frame = Rect::new(0.0, 0.0, left + right, height);
        for (name, palette) in [("light", Palette::Light), ("dark", Palette::Dark)] {
            let path = format!("{directory}/winds-{}-{name}.svg", left + right);
            std::fs::write(path, svg(frame, &scenes, palette))?;
        }
    }
    Ok(())
}
