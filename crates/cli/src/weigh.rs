//! `weigh`: numbers with their range and findings with their cost.

use crate::arguments::Weigh;
use crate::output::{Output, say};
use anyhow::Result;
use dewbound_session::sounding::OtherAscents;
use dewbound_session::sounding::thermo::Temperature;
use dewbound_session::{
    Analysed, Defect, Document, Office, ReadFailure, ReadFile, Results, STATION_TABLE, files_of,
    guarded, read_bytes, read_file, report, wording,
};
use jiff::{Timestamp, civil::Date};
use std::io::Read;
use std::path::{Path, PathBuf};

/// Weighs every sounding of every file. False when one could not be.
pub fn run(options: &Weigh, output: &mut Output) -> Result<bool> {
    let (office, problems) =
        Office::load(options.stations.as_deref(), options.thresholds.as_deref());
    for problem in &problems {
        for line in problem.what.lines() {
            say(&format!("{}: {line}", problem.about));
        }
        if !problem.unused {
            say(&format!("{}: {}", problem.about, problem.remedy));
        }
    }
    if problems.iter().any(|problem| problem.unused) {
        say("Nothing was weighed: correct the file, or leave its option out");
        return Ok(false);
    }
    let mut all = true;
    let mut first = true;
    for path in &options.files {
        for (name, read) in sources(path, &office, options.as_of) {
            let file = match read {
                Ok(Ok(file)) => file,
                Err(defect) => {
                    say(&defect.line(&name));
                    all = false;
                    continue;
                }
                Ok(Err(failure)) => {
                    say(&failure.line(&name));
                    all = false;
                    continue;
                }
            };
            for note in &file.notes {
                say(&format!("{name}: {}", wording::note(note)));
            }
            // One after the other, so that a reader of a long file gets each as soon as it is there.
            for sounding in file.soundings {
                let about = format!(
                    "{name}, sounding {} ({})",
                    sounding.source.index + 1,
                    sounding.station.label()
                );
                let weighed = guarded(|| {
                    let analysed = Analysed::of(sounding, &office.thresholds);
                    weighed(&analysed, options)
                });
                let text = match weighed {
                    Ok(text) => text?,
                    Err(defect) => {
                        say(&defect.line(&about));
                        all = false;
                        continue;
                    }
                };
                if !options.json && !first {
                    output.write("\n")?;
                }
                first = false;
                output.write(&text)?;
            }
        }
    }
    Ok(all)
}

type Named = (String, Result<Result<ReadFile, ReadFailure>, Defect>);

/// The files meant by a path, read one after the other as they are asked for.
fn sources<'a>(
    path: &'a Path,
    office: &'a Office,
    as_of: Option<Date>,
) -> Box<dyn Iterator<Item = Named> + 'a> {
    if path == Path::new("-") {
        return Box::new(std::iter::once_with(move || {
            let read = guarded(|| standard_input(office, as_of));
            ("standard input".to_owned(), read)
        }));
    }
    match files_of(path) {
        Ok(meant) => {
            for table in &meant.station_tables {
                say(&format!("{}: {STATION_TABLE}", table.display()));
            }
            Box::new(meant.files.into_iter().map(move |file: PathBuf| {
                let read = guarded(|| read_file(&file, office, as_of));
                (file.display().to_string(), read)
            }))
        }
        Err(error) => Box::new(std::iter::once((
            path.display().to_string(),
            Ok(Err(error.into())),
        ))),
    }
}

fn standard_input(office: &Office, as_of: Option<Date>) -> Result<ReadFile, ReadFailure> {
    let mut bytes = Vec::new();
    std::io::stdin().lock().read_to_end(&mut bytes)?;
    read_bytes(
        "standard input",
        &bytes,
        Some(Timestamp::now()),
        office,
        as_of,
    )
}

fn weighed(analysed: &Analysed, options: &Weigh) -> Result<String> {
    let mut document = Document::default();
    document.amendments.reach = options.reach.map(Into::into);
    if let Some(temperature) = options.temperature_c {
        document.amendments = document
            .amendments
            .with_surface_temperature(Temperature::from_c(temperature));
    }
    if let Some(dewpoint) = options.dewpoint_c {
        document.amendments = document
            .amendments
            .with_surface_dewpoint(Temperature::from_c(dewpoint));
    }
    let results = Results::of(analysed, &document);
    let other = options
        .all
        .then(|| OtherAscents::of(&results.working.profile, &results.numbers));
    if options.json {
        // The table has a place for these; the object is about the sounding, not about what was asked.
        for note in &results.working.notes {
            say(&format!(
                "{}: {}",
                analysed.sounding.source.file,
                wording::note(note)
            ));
        }
        let mut line = match &other {
            Some(other) => report::json_line_with_all(analysed, &results, other)?,
            None => report::json_line(analysed, &results)?,
        };
        line.push('\n');
        Ok(line)
    } else {
        Ok(match &other {
            Some(other) => report::table_with_all(analysed, &results, other),
            None => report::table(analysed, &results),
        })
    }
}
