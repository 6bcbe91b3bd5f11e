//! What can be said on the command line.

use jiff::civil::Date;
use std::path::PathBuf;

/// Which drawing library the window uses.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, clap::ValueEnum)]
pub enum Graphics {
    /// wgpu when it finds an adapter, else glow.
    #[default]
    Auto,
    /// wgpu only.
    Wgpu,
    /// glow (OpenGL) only.
    Glow,
}

/// Colours of the window.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, clap::ValueEnum)]
pub enum ThemeName {
    /// Chart paper.
    #[default]
    Light,
    /// For a darkened room.
    Dark,
}

/// Dewbound: which parts of a sounding can be believed, and how far the answer moves if they can't.
///
/// The numbers support an authorised forecaster; official warnings and the office's own procedures rule.
#[derive(Debug, Clone, PartialEq, Default, clap::Parser)]
#[command(name = "dewbound", version)]
pub struct Args {
    /// Soundings to open: files or folders. None: the demonstration tray.
    pub paths: Vec<PathBuf>,
    /// Folder of decisions (default: the platform's data folder).
    #[arg(long, value_name = "DIR")]
    pub ledger: Option<PathBuf>,
    /// The office's folder: stations.csv, thresholds.json.
    #[arg(long, value_name = "DIR")]
    pub office: Option<PathBuf>,
    /// Date that day-and-hour groups of bulletins are nearest to, looking back.
    #[arg(long, value_name = "DATE")]
    pub as_of: Option<Date>,
    /// Colours; as left last time when not given.
    #[arg(long, value_enum)]
    pub theme: Option<ThemeName>,
    /// Size of everything, 1 = as the system has it; as left last time when not given.
    #[arg(long, value_name = "X", value_parser = zoom)]
    pub zoom: Option<f32>,
    /// Drawing library.
    #[arg(long, value_enum, default_value_t)]
    pub graphics: Graphics,
    /// Show the frame's computing time (also F12).
    #[arg(long)]
    pub debug_overlay: bool,
    /// Close after the first painted frames and say which graphics drew them: for checks of the start-up.
    #[arg(long, hide = true)]
    pub close_after_first_frame: bool,
}

/// Range in which the interface stays usable.
pub const ZOOM_RANGE: std::ops::RangeInclusive<f32> = 0.5..=3.0;

fn zoom(text: &str) -> Result<f32, String> {
    let value: f32 = text
        .parse()
        .map_err(|_| format!("{text} is not a number"))?;
    if ZOOM_RANGE.contains(&value) {
        Ok(value)
    } else {
        Err(format!(
            "{text} is outside {} to {}",
            ZOOM_RANGE.start(),
            ZOOM_RANGE.end()
        ))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::Parser as _;

    #[test]
    fn every_option_is_read() {
        let args = Args::try_parse_from([
            "dewbound",
            "a.txt",
            "folder",
            "--ledger",
            "l",
            "--office",
            "o",
            "--as-of",
            "2024-05-20",
            "--theme",
            "dark",
            "--zoom",
            "1.5",
            "--graphics",
            "glow",
            "--debug-overlay",
        ])
        .unwrap();
        assert_eq!(
            args.paths,
            [PathBuf::from("a.txt"), PathBuf::from("folder")]
        );
        assert_eq!(args.ledger, Some("l".into()));
        assert_eq!(args.office, Some("o".into()));
        assert_eq!(args.as_of, Some(jiff::civil::date(2024, 5, 20)));
        assert_eq!(args.theme, Some(ThemeName::Dark));
        assert_eq!(args.zoom, Some(1.5));
        assert_eq!(args.graphics, Graphics::Glow);
        assert!(args.debug_overlay);
    }

    #[test]
    fn nonsense_is_refused() {
        for bad in [
            ["dewbound", "--zoom", "0"],
            ["dewbound", "--zoom", "wide"],
            ["dewbound", "--as-of", "yesterday"],
            ["dewbound", "--graphics", "paper"],
        ] {
            assert!(Args::try_parse_from(bad).is_err(), "{bad:?}");
        }
    }
}
