//! Rules of thumb of the trade, held against a stated profile. Common practice, no source.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_thermo::*;

/// Pressure hPa, temperature degC, dew point degC.
type Level = (f64, f64, f64);

/// A spring afternoon over the plains, 400 m above sea level, in round numbers: 27 degC at the ground, dry-adiabatic to
/// 850 hPa, 7.5 to 8 K/km between 700 and 500 hPa, tropopause at 225 hPa. The dew point of the lowest level is the one
/// in question.
const SPRING: [Level; 13] = [
    (960.0, 27.0, 15.0),
    (950.0, 26.0, 13.5),
    (850.0, 16.5, 11.0),
    (800.0, 14.0, 0.0),
    (700.0, 6.0, -8.0),
    (600.0, -4.0, -16.0),
    (500.0, -15.0, -30.0),
    (400.0, -27.5, -42.0),
    (300.0, -43.0, -58.0),
    (250.0, -51.5, -67.0),
    (225.0, -55.0, -71.0),
    (200.0, -55.0, -73.0),
    (100.0, -60.0, -82.0),
];

/// High summer there: 30 degC at the ground, tropopause near 150 hPa.
const SUMMER: [Level; 12] = [
    (960.0, 30.0, 20.0),
    (950.0, 29.0, 17.5),
    (850.0, 19.5, 15.5),
    (800.0, 17.0, 5.0),
    (700.0, 9.0, -3.0),
    (600.0, -0.5, -12.0),
    (500.0, -11.0, -28.0),
    (400.0, -23.5, -40.0),
    (300.0, -39.5, -55.0),
    (250.0, -49.0, -65.0),
    (200.0, -56.0, -72.0),
    (100.0, -62.0, -82.0),
];

fn environment(levels: &[Level], surface_dewpoint: Temperature) -> Environment {
    let column = |value: fn(&Level) -> f64| levels.iter().map(value).collect::<Vec<f64>>();
    let p = column(|level| level.0 * 100.0);
    let t = column(|level| level.1 + ZERO_CELSIUS);
    let mut td: Vec<Option<f64>> = column(|level| level.2 + ZERO_CELSIUS)
        .into_iter()
        .map(Some)
        .collect();
    td[0] = Some(surface_dewpoint.k());
    Environment::new(&p, &t, &td).unwrap()
}

fn cape(environment: &Environment, start: Air) -> f64 {
    lift(environment, start, Method::default()).unwrap().cape
}

/// Change of the surface parcel's CAPE from `low` degF of dew point to 10 degF more.
fn change_with_ten_degrees(levels: &[Level], low: f64) -> f64 {
    let [low, high] = [low, low + 10.0].map(|dewpoint| {
        let environment = environment(levels, Temperature::from_f(dewpoint));
        cape(&environment, environment.bottom())
    });
    println!("CAPE {low:.0} to {high:.0} J/kg: {:.0} more", high - low);
    high - low
}

/// The rule speaks of the usual day, on which the lower dew point gives some hundred J/kg and the higher one a couple of
/// thousand. It is no law: the deeper and moister the air, the more a degree is worth, as the summer profile shows.
#[test]
fn ten_degrees_fahrenheit_of_surface_dew_point_are_1500_to_2000_joules() {
    for low in [48.0, 49.0, 50.0, 51.0] {
        let change = change_with_ten_degrees(&SPRING, low);
        assert!(
            (1500.0..=2000.0).contains(&change),
            "from {low} degF: {change} J/kg"
        );
    }
    let change = change_with_ten_degrees(&SUMMER, 60.0);
    assert!((2000.0..=4000.0).contains(&change), "summer: {change} J/kg");
}

#[test]
fn a_few_degrees_between_surface_and_mean_dew_point_are_a_couple_of_grams_and_over_1000_joules() {
    let environment = environment(&SUMMER, Temperature::from_c(22.0));
    let surface = environment.bottom();
    let mixed = mixed_start(&environment, MIXED_DEPTH).unwrap();
    let degrees = surface.dewpoint.k() - mixed.dewpoint.k();
    let grams = 1000.0 * (surface.mixing_ratio() - mixed.mixing_ratio());
    let joules = cape(&environment, surface) - cape(&environment, mixed);
    println!("surface less mean: {degrees:.1} K, {grams:.1} g/kg, {joules:.0} J/kg");
    assert!((2.0..5.0).contains(&degrees), "{degrees} K");
    assert!((1.5..4.5).contains(&grams), "{grams} g/kg");
    assert!(joules > 1000.0, "{joules} J/kg");
}
