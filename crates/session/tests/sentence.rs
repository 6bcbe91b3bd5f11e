//! Which parcel matters, and whether the surface doubt reaches it.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::Desk;
use dewbound_session::sounding::thermo::Temperature;
use dewbound_session::{Command, SurfaceQuantity};

/// Columns under a heading.
fn columns(levels: &[(f64, f64, f64)]) -> String {
    let mut text = "# station: Vale\n# time: 2031-06-14T10:00:00Z\n# position: 41.0, -146.0, 400\npressure_hpa,temperature_c,dewpoint_c\n".to_owned();
    for (pressure, temperature, dewpoint) in levels {
        text.push_str(&format!("{pressure},{temperature},{dewpoint}\n"));
    }
    text
}

fn sentence(levels: &[(f64, f64, f64)]) -> String {
    let mut desk = Desk::new();
    desk.add("vale.csv", &columns(levels));
    desk.session
        .current()
        .unwrap()
        .results()
        .which_parcel
        .clone()
}

#[test]
fn an_elevated_parcel_above_a_cold_surface_is_not_reached() {
    let said = sentence(&[
        (985.0, 12.0, 10.5),
        (960.0, 11.0, 9.5),
        (920.0, 15.0, 11.0),
        (870.0, 17.5, 15.5),
        (840.0, 15.6, 13.2),
        (700.0, 5.0, -4.0),
        (500.0, -14.0, -28.0),
        (300.0, -42.0, -55.0),
        (200.0, -58.0, -70.0),
        (100.0, -60.0, -80.0),
    ]);
    assert!(said.starts_with("surface "), "{said}");
    assert!(
        said.ends_with("most unstable starts at 870 hPa; the surface doubt doesn't reach it"),
        "{said}"
    );
}

#[test]
fn a_surface_parcel_is_said_to_hang_on_the_doubt() {
    let mut desk = Desk::open();
    let results = desk.session.current().unwrap().results();
    let said = &results.which_parcel;
    assert!(said.contains("it is the most unstable parcel"), "{said}");
    let range = results.doubt.ranges[0].cape.unwrap();
    let tail = format!(
        "the surface doubt moves its CAPE: {:.0} to {:.0} J/kg",
        range.least, range.most
    );
    assert!(said.ends_with(&tail), "{said}, not {tail}");
    // A value beyond what is credible is said to be so, since its numbers lie outside the ranges.
    desk.session.apply(Command::SetSurface(
        SurfaceQuantity::Dewpoint,
        Temperature::from_c(25.0),
    ));
    let said = &desk.session.current().unwrap().results().which_parcel;
    assert!(
        said.ends_with("the dew point now set lies outside the interval"),
        "{said}"
    );
}

#[test]
fn stable_air_has_no_parcel_with_cape() {
    let said = sentence(&[
        (1000.0, 5.0, -5.0),
        (900.0, 8.0, -10.0),
        (500.0, -5.0, -30.0),
        (100.0, -50.0, -80.0),
    ]);
    assert_eq!(said, "no parcel has CAPE");
}

#[test]
fn an_ascent_that_ends_low_knows_of_no_cape_below_its_end_only() {
    let said = sentence(&[
        (1000.0, 5.0, -5.0),
        (900.0, 8.0, -10.0),
        (628.0, -5.0, -30.0),
    ]);
    assert_eq!(
        said,
        "no parcel has CAPE below 628 hPa, where the sounding ends"
    );
}

#[test]
fn cape_of_the_surface_alone_is_not_denied() {
    // Warm wet ground under a cold layer, and dry-topped air of larger theta-e above an inversion, from where nothing rises.
    let levels = [
        (1000.0, 10.0, 9.5),
        (980.0, 7.0, 2.0),
        (950.0, 4.5, 0.0),
        (930.0, 9.0, -2.0),
        (780.0, 10.0, 3.0),
        (700.0, 8.0, -20.0),
        (500.0, -6.0, -40.0),
        (300.0, -30.0, -60.0),
        (100.0, -50.0, -80.0),
    ];
    let mut desk = Desk::new();
    desk.add("vale.csv", &columns(&levels));
    let results = desk.session.current().unwrap().results();
    let numbers = &results.numbers;
    assert!(!numbers.most_unstable_is_surface);
    assert_eq!(numbers.most_unstable.as_ref().unwrap().cape, 0.0);
    let cape = numbers.surface.as_ref().unwrap().cape;
    assert!(cape > 1.0, "{cape}");
    let said = &results.which_parcel;
    let begins = format!(
        "surface CAPE {cape:.0} J/kg; most unstable starts at 780 hPa with no CAPE; the surface doubt moves the surface CAPE: "
    );
    assert!(said.starts_with(&begins), "{said}, not {begins}");
}

#[test]
fn without_humidity_there_is_a_reason_instead() {
    let mut desk = Desk::new();
    desk.add(
        "dry.csv",
        "pressure_hpa,temperature_c,dewpoint_c\n1000,20,\n900,14,\n500,-12,\n",
    );
    let results = desk.session.current().unwrap().results();
    assert!(
        results.which_parcel.starts_with("no parcel can be lifted"),
        "{}",
        results.which_parcel
    );
    assert!(!results.doubt.problem.is_empty());
}
