//! What a person has chosen about the window, kept from one start to the next: a few lines of text beside the drafts.

use crate::args::{ThemeName, ZOOM_RANGE};
use crate::view::View;
use dewbound_session::Config;
use dewbound_session::chart::{SpeedUnit, TemperatureUnit, Units};
use std::path::{Path, PathBuf};

/// Everything that is kept.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Preferences {
    /// Colours.
    pub theme: ThemeName,
    /// Size of everything.
    pub zoom: f32,
    /// Units shown.
    pub units: Units,
}

impl Default for Preferences {
    fn default() -> Self {
        Self {
            theme: ThemeName::default(),
            zoom: 1.0,
            units: Units::default(),
        }
    }
}

impl From<&View> for Preferences {
    fn from(view: &View) -> Self {
        Self {
            theme: view.theme,
            zoom: view.zoom,
            units: view.units,
        }
    }
}

/// Where they are kept: with this desk's drafts, not in an office folder that others share.
pub(crate) fn file(config: &Config) -> PathBuf {
    config
        .drafts
        .parent()
        .unwrap_or(&config.drafts)
        .join("window.txt")
}

impl Preferences {
    /// Those kept before. A line that says nothing known is passed over: the person sees the window and sets it anew.
    pub fn read(file: &Path) -> Self {
        std::fs::read_to_string(file)
            .map(|text| Self::parse(&text))
            .unwrap_or_default()
    }

    fn parse(text: &str) -> Self {
        let mut found = Self::default();
        for (name, value) in text.lines().filter_map(|line| line.split_once('=')) {
            match (name.trim(), value.trim()) {
                ("theme", "light") => found.theme = ThemeName::Light,
                ("theme", "dark") => found.theme = ThemeName::Dark,
                ("temperature", "degC") => found.units.temperature = TemperatureUnit::Celsius,
                ("temperature", "degF") => found.units.temperature = TemperatureUnit::Fahrenheit,
                ("wind", "kt") => found.units.speed = SpeedUnit::Knots,
                ("wind", "m/s") => found.units.speed = SpeedUnit::MetresPerSecond,
                ("zoom", number) => {
                    if let Some(zoom) = number.parse().ok().filter(|z| ZOOM_RANGE.contains(z)) {
                        found.zoom = zoom;
                    }
                }
                _ => {}
            }
        }
        found
    }

    fn text(&self) -> String {
        format!(
            "theme={}\nzoom={}\ntemperature={}\nwind={}\n",
            match self.theme {
                ThemeName::Light => "light",
                ThemeName::Dark => "dark",
            },
            self.zoom,
            match self.units.temperature {
                TemperatureUnit::Celsius => "degC",
                TemperatureUnit::Fahrenheit => "degF",
            },
            match self.units.speed {
                SpeedUnit::Knots => "kt",
                SpeedUnit::MetresPerSecond => "m/s",
            },
        )
    }

    /// Keeps them, away from the frame.
    pub fn keep(self, file: PathBuf) {
        std::thread::spawn(move || {
            if let Err(error) = self.write(&file) {
                eprintln!(
                    "{}: {error}; theme, size and units are not remembered",
                    file.display()
                );
            }
        });
    }

    fn write(&self, file: &Path) -> std::io::Result<()> {
        if let Some(folder) = file.parent() {
            std::fs::create_dir_all(folder)?;
        }
        std::fs::write(file, self.text())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_written_is_read() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("deep/window.txt");
        assert_eq!(Preferences::read(&file), Preferences::default());
        let chosen = Preferences {
            theme: ThemeName::Dark,
            zoom: 1.5,
            units: Units {
                temperature: TemperatureUnit::Fahrenheit,
                speed: SpeedUnit::MetresPerSecond,
                ..Units::default()
            },
        };
        chosen.write(&file).unwrap();
        assert_eq!(Preferences::read(&file), chosen);
    }

    #[test]
    fn nonsense_is_passed_over() {
        let found = Preferences::parse("theme=plaid\nzoom=900\nwind\n\ntemperature=degF\n");
        assert_eq!(found.theme, ThemeName::Light);
        assert_eq!(found.zoom, 1.0);
        assert_eq!(found.units.temperature, TemperatureUnit::Fahrenheit);
    }
}
