//! A desk without a window, in a folder of its own.

use crate::wire;
use dewbound_session::sounding::thermo::{Ascent, Temperature};
use dewbound_session::sounding::{Numbers, Parcel};
use dewbound_session::{Analysed, Config, Item, Message, Office, ReadFailure, Session, read_file};
use jiff::civil::date;
use std::io;
use std::path::{Path, PathBuf};
use tempfile::TempDir;

/// A desk whose folders are gone after the test.
#[derive(Debug)]
pub struct Desk {
    /// Where everything lies.
    pub folder: TempDir,
    /// What is at work.
    pub session: Session,
}

/// Folders inside one folder, initials given, messages nearest in the past to the day after [`wire::TIME`].
pub fn config(folder: &Path) -> Config {
    Config {
        initials: Some("KM".to_owned()),
        as_of: Some(date(2031, 6, 15)),
        ..Config::within(folder)
    }
}

impl Desk {
    /// Nothing open; the station of [`wire`] is in the office's table.
    ///
    /// # Errors
    ///
    /// When the folders can't be made.
    pub fn new() -> io::Result<Self> {
        let folder = tempfile::tempdir()?;
        let office = folder.path().join("office");
        std::fs::create_dir_all(&office)?;
        std::fs::write(office.join("stations.csv"), wire::station_table())?;
        let session = Session::new(config(folder.path()));
        Ok(Self { folder, session })
    }

    /// With the built-in demo tray open.
    ///
    /// # Errors
    ///
    /// When the folders can't be made.
    pub fn demo() -> io::Result<Self> {
        let mut desk = Self::new()?;
        desk.session.open_demo();
        desk.session.wait();
        Ok(desk)
    }

    /// Closes the desk and opens another on the same folders.
    pub fn restart(self) -> Self {
        let Self { folder, session } = self;
        drop(session);
        let session = Session::new(config(folder.path()));
        Self { folder, session }
    }

    /// Puts a message into a file, as a receiving system does, and opens the file.
    ///
    /// # Errors
    ///
    /// When the file can't be written.
    pub fn receive(&mut self, name: &str, text: &str) -> io::Result<PathBuf> {
        let inbox = self.folder.path().join("inbox");
        std::fs::create_dir_all(&inbox)?;
        let path = inbox.join(name);
        std::fs::write(&path, text)?;
        self.session.open_paths(vec![path.clone()]);
        self.session.wait();
        Ok(path)
    }

    /// What has been told, a line each.
    pub fn told(&self) -> Vec<String> {
        self.session.messages().iter().map(Message::line).collect()
    }
}

/// Every sounding of a file, analysed as `weigh` does without an office.
///
/// # Errors
///
/// When the file can't be read or holds no sounding.
pub fn soundings_of(path: &Path) -> Result<Vec<Analysed>, ReadFailure> {
    let office = Office::default();
    let file = read_file(path, &office, None)?;
    let soundings = file.soundings.into_iter();
    Ok(soundings
        .map(|sounding| Analysed::of(sounding, &office.thresholds))
        .collect())
}

/// Degrees Celsius.
pub fn c(celsius: f64) -> Temperature {
    Temperature::from_c(celsius)
}

/// CAPE and CIN of the three parcels, in the order of [`Parcel::ALL`].
pub fn cape_and_cin(numbers: &Numbers) -> [(Option<f64>, Option<f64>); 3] {
    Parcel::ALL.map(|parcel| {
        let ascent: Option<&Ascent> = numbers.parcel(parcel);
        (
            ascent.map(|ascent| ascent.cape),
            ascent.and_then(|ascent| ascent.cin),
        )
    })
}

/// Rule of the card that is shown first.
pub fn first_rule(item: &Item) -> Option<&'static str> {
    let first = *item.results().order.first()?;
    Some(item.findings().get(first)?.rule)
}
