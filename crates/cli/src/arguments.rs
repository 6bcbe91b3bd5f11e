//! What can be asked.

use clap::{Args, Parser, Subcommand, ValueEnum};
use dewbound_session::sounding::Reach;
use dewbound_session::wording::CAUTION;
use jiff::civil::Date;
use std::path::PathBuf;

/// Weighs soundings: which parts can be believed, and how far the answer moves if they can't.
#[derive(Debug, Parser)]
#[command(name = "dewbound-cli", version, after_help = format!("{CAUTION}."))]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub task: Task,
}

/// What `weigh --help` says of the objects.
const JSON: &str = "\
JSON (--json): one object a sounding, on one line, schema 1. Every key carries its unit; what is absent is null.

  source      file; index of the sounding in it, from 0; sha256 over its own text; parts: digest of each message part
  demo        true for invented demonstration data
  sounding    station (\"wmo:12345\" or the like), valid (UTC), levels, humidity_missing, top_hpa
  parcels     surface, mixed, most_unstable; null where none can be lifted
    cape_jkg, cin_jkg      cin_jkg is null when there is no free convection
    at_least               cape_jkg is a lower limit: the sounding ends too low
    range                  over the credible surface dew points; null without any
      cape_jkg             [smallest, largest]
      cin_jkg              [strongest cap, weakest cap], where there is free convection; null if nowhere
      cin_absent_somewhere true when somewhere in the range there is no free convection
  findings    rule, grade, bottom_hpa, top_hpa, evidence, explains, repairs with cost, cost of the headline repair;
              a cost is the change of CAPE and CIN for each parcel, null when unknown
  notes       what and why, and where: {\"line\":n} and {\"byte\":n} in the file, lines from 1, bytes from 0;
              {\"level\":n} of the merged profile, from 0 at the bottom; {\"file\":name} for the file as a whole
  numbers     with --all only: surface, mixed, most_unstable, profile, each with all its numbers by name;
              \"explain\" lists the names and tells what each is. A wind is an object: from_deg, speed_ms;
              a composite index too: value, and terms with name, input, unit, factor

Exit codes: 0 all weighed; 1 a file could not be read, or a sounding not weighed; 2 wrong usage.";

/// What to do.
#[derive(Debug, Subcommand)]
pub enum Task {
    /// Numbers with their range, and findings with their cost, for each sounding of the files.
    #[command(after_long_help = JSON)]
    Weigh(Weigh),
    /// Tells what a number is: definition, method, source, what it is computed from, when it is absent.
    Explain(Explain),
    /// Lists the rules, with source and thresholds.
    Rules {
        /// JSON lines, one object a rule.
        #[arg(long)]
        json: bool,
    },
}

/// Options of `weigh`.
#[derive(Debug, Args)]
pub struct Weigh {
    /// Files, folders, or "-" for standard input.
    #[arg(required = true, value_name = "FILE")]
    pub files: Vec<PathBuf>,
    /// JSON lines, one object a sounding.
    #[arg(long)]
    pub json: bool,
    /// Every number there is, not the chief ones alone; "explain" tells what each is.
    #[arg(long)]
    pub all: bool,
    /// Surface dew point to use instead of the received one, degrees Celsius.
    #[arg(long, value_name = "X", allow_negative_numbers = true, value_parser = celsius)]
    pub dewpoint_c: Option<f64>,
    /// Surface temperature to use instead of the received one, degrees Celsius.
    #[arg(long, value_name = "X", allow_negative_numbers = true, value_parser = celsius)]
    pub temperature_c: Option<f64>,
    /// How far up a changed surface value is carried [default: mixed by day with a mixed layer, else level].
    #[arg(long)]
    pub reach: Option<ReachArgument>,
    /// The date to which messages that code only day and hour are nearest in the past.
    #[arg(long, value_name = "YYYY-MM-DD", value_parser = date)]
    pub as_of: Option<Date>,
    /// Station table: a CSV file with columns wmo,wigos,icao,name,lat,lon,elevation_m.
    #[arg(long, value_name = "FILE")]
    pub stations: Option<PathBuf>,
    /// Thresholds to lay over the built-in ones, JSON.
    #[arg(long, value_name = "FILE")]
    pub thresholds: Option<PathBuf>,
}

/// Options of `explain`.
#[derive(Debug, Args)]
pub struct Explain {
    /// Name of a number, as in JSON or as shown; capitals don't matter. Without one, all are listed.
    #[arg(value_name = "NAME")]
    pub names: Vec<String>,
    /// JSON lines, one object a number.
    #[arg(long)]
    pub json: bool,
    /// The page of all numbers, as Markdown.
    #[arg(long, conflicts_with_all = ["json", "names"])]
    pub markdown: bool,
}

/// A reach, as written on the command line.
#[derive(Debug, Clone, Copy, ValueEnum)]
pub enum ReachArgument {
    /// The surface parcel and the lowest 10 hPa only.
    Level,
    /// Unchanged to the top of the mixed layer.
    Mixed,
    /// Fading out towards the top of the mixed layer.
    Tapered,
}

impl From<ReachArgument> for Reach {
    fn from(reach: ReachArgument) -> Self {
        match reach {
            ReachArgument::Level => Self::Level,
            ReachArgument::Mixed => Self::Mixed,
            ReachArgument::Tapered => Self::Tapered,
        }
    }
}

fn celsius(text: &str) -> Result<f64, String> {
    let value: f64 = text
        .parse()
        .map_err(|_| format!("\"{text}\" is not a number of degrees Celsius"))?;
    if (-100.0..=65.0).contains(&value) {
        Ok(value)
    } else {
        Err(format!("{text} is outside -100 to 65 degrees Celsius"))
    }
}

fn date(text: &str) -> Result<Date, String> {
    text.parse()
        .map_err(|_| format!("\"{text}\" is not a date; write YYYY-MM-DD"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_definition_is_sound() {
        use clap::CommandFactory;
        Arguments::command().debug_assert();
    }

    #[test]
    fn temperatures_are_numbers_in_a_usable_range() {
        assert_eq!(celsius("-12.5"), Ok(-12.5));
        for wrong in ["warm", "", "nan", "1e9", "-273"] {
            assert!(celsius(wrong).is_err(), "{wrong}");
        }
    }
}
