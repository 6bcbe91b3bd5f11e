//! Invented profiles for the tests of this crate.

use dewbound_trust::sounding::thermo::{
    KAPPA, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
};
use dewbound_trust::sounding::{Level, Profile, Sounding};

pub fn level(hpa: f64, t: f64, td: f64) -> Level {
    Level {
        pressure: Some(hpa * 100.0),
        temperature: Some(t + 273.15),
        dewpoint: Some(td + 273.15),
        ..Level::default()
    }
}

pub fn received(levels: Vec<Level>) -> Profile {
    let sounding = Sounding {
        levels,
        ..Sounding::default()
    };
    Profile::received(&sounding).0
}

/// A layer of one theta (306 K) from 965 hPa to 830 hPa with the mixing ratio given (by hPa), a row every `step` hPa; the surface a degree warmer,
/// its dew point given (°C). Stable, then unstable, above.
pub fn mixed(step: f64, surface_dewpoint: f64, mixing_ratio: impl Fn(f64) -> f64) -> Vec<Level> {
    let adiabat = |hpa: f64, theta: f64| {
        temperature_on_dry_adiabat(Temperature::from_k(theta), Pressure::from_hpa(hpa)).c()
    };
    let mut levels = vec![level(965.0, adiabat(965.0, 307.0), surface_dewpoint)];
    let mut hpa = 965.0 - step;
    while hpa > 829.9 {
        let t = adiabat(hpa, 306.0);
        let td = dewpoint_from_mixing_ratio(Pressure::from_hpa(hpa), mixing_ratio(hpa)).c();
        levels.push(level(hpa, t, td.min(t)));
        hpa -= step;
    }
    // Above: theta rises by 9 K in 30 hPa, then a profile a moist plains afternoon might have.
    let above: [(f64, f64, f64); 5] = [
        (800.0, 315.0, 2.0),
        (700.0, 316.5, -6.0),
        (500.0, 322.0, -28.0),
        (400.0, 325.5, -38.0),
        (300.0, 330.0, -52.0),
    ];
    for (hpa, theta, td) in above {
        let t = theta * (hpa / 1000.0_f64).powf(KAPPA) - 273.15;
        levels.push(level(hpa, t, td.min(t - 1.0)));
    }
    levels.extend([level(200.0, -58.0, -70.0), level(100.0, -64.0, -88.0)]);
    if step < 3.0 {
        fill(&mut levels, step);
    }
    levels
}

/// Rows every `step` hPa above the mixed layer too, so that the whole is fine data.
fn fill(levels: &mut Vec<Level>, step: f64) {
    let profile = received(levels.clone());
    let environment = profile.environment().unwrap();
    let mut hpa = 829.0;
    while hpa > 100.0 {
        if levels
            .iter()
            .all(|l| (l.pressure.unwrap() / 100.0 - hpa).abs() > 0.1)
            && let Some(air) = environment.at(Pressure::from_hpa(hpa))
        {
            levels.push(level(hpa, air.temperature.c(), air.dewpoint.c()));
        }
        hpa -= step;
    }
    levels.sort_by(|a, b| b.pressure.unwrap().total_cmp(&a.pressure.unwrap()));
}

/// An inversion from the ground.
pub fn night() -> Vec<Level> {
    vec![
        level(965.0, 18.0, 16.0),
        level(940.0, 23.0, 16.5),
        level(850.0, 20.0, 10.0),
        level(700.0, 8.6, -2.0),
        level(500.0, -12.3, -25.0),
        level(300.0, -40.5, -55.0),
        level(200.0, -57.7, -72.0),
        level(100.0, -63.0, -88.0),
    ]
}
