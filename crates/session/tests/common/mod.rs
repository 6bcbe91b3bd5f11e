//! Invented soundings and a desk in a folder of its own.
#![allow(dead_code)]

use dewbound_session::sounding::thermo::{
    KAPPA, Pressure, Temperature, dewpoint_from_mixing_ratio, temperature_on_dry_adiabat,
};
use dewbound_session::{Config, Session, TrayRow};
use std::fmt::Write;
use tempfile::TempDir;

/// A layer of one theta and 12 g/kg from 965 to 830 hPa under a surface whose hygrometer reads `surface_dewpoint_c`, at noon in
/// June; a level every 5 hPa in the layer, as columns.
pub fn moist_surface(wmo: &str, surface_dewpoint_c: f64) -> String {
    let mut text = format!(
        "# station: Upper Vale\n# wmo: {wmo}\n# time: 2031-06-14T22:00:00Z\n# position: 41.0, -146.0, 400\n\
         pressure_hpa,temperature_c,dewpoint_c\n"
    );
    let adiabat = |hpa: f64, theta: f64| {
        temperature_on_dry_adiabat(Temperature::from_k(theta), Pressure::from_hpa(hpa)).c()
    };
    let mut level = |hpa: f64, t: f64, td: f64| {
        writeln!(text, "{hpa:.1},{t:.3},{td:.3}").unwrap();
    };
    level(965.0, adiabat(965.0, 307.0), surface_dewpoint_c);
    for step in 1..=27 {
        let hpa = 965.0 - 5.0 * f64::from(step);
        let td = dewpoint_from_mixing_ratio(Pressure::from_hpa(hpa), 0.012).c();
        let t = adiabat(hpa, 306.0);
        level(hpa, t, td.min(t));
    }
    for (hpa, theta, td) in [
        (800.0, 315.0, 2.0),
        (700.0, 316.5, -6.0),
        (500.0, 322.0, -28.0),
        (400.0, 325.5, -38.0),
        (300.0, 330.0, -52.0),
    ] {
        level(hpa, theta * (hpa / 1000.0_f64).powf(KAPPA) - 273.15, td);
    }
    level(200.0, -58.0, -70.0);
    level(100.0, -64.0, -88.0);
    text
}

/// A desk whose folders are gone after the test.
pub struct Desk {
    pub folder: TempDir,
    pub session: Session,
}

impl Desk {
    /// Empty, with initials.
    pub fn new() -> Self {
        let folder = tempfile::tempdir().unwrap();
        let session = Session::new(config(&folder));
        Self { folder, session }
    }

    /// With one sounding open: surface dew point 20 °C over a layer that implies about 16 °C.
    pub fn open() -> Self {
        let mut desk = Self::new();
        desk.add("vale.csv", &moist_surface("99001", 20.0));
        desk
    }

    /// Opens one more file.
    pub fn add(&mut self, name: &str, text: &str) {
        self.session
            .open_bytes(name.to_owned(), text.as_bytes().to_vec());
        self.session.wait();
    }

    /// Closes the desk and opens another on the same folders.
    pub fn restart(self) -> Self {
        let Self { folder, session } = self;
        drop(session);
        let session = Session::new(config(&folder));
        Self { folder, session }
    }

    /// The only line of the tray.
    pub fn row(&self) -> &TrayRow {
        assert_eq!(self.session.tray().len(), 1);
        &self.session.tray()[0]
    }

    /// Messages on one line each.
    pub fn told(&self) -> Vec<String> {
        self.session
            .messages()
            .iter()
            .map(dewbound_session::Message::line)
            .collect()
    }
}

pub fn config(folder: &TempDir) -> Config {
    Config {
        initials: Some("AB".to_owned()),
        ..Config::within(folder.path())
    }
}
