//! Parts of one ascent put together.

use super::{
    date::{self, Reference},
    framing::Part,
    report::Report,
};
use dewbound_sounding::{
    Completeness, HumidityReported, LevelKind, Note, Place, Sounding, Source, Station, Times,
};

/// Approximate tenths stand for two neighbouring tenths (code table 3931).
const TEMPERATURE_STEP: f64 = 0.2;

/// One ascent: its parts in the order received, never two of one kind.
#[derive(Debug, Default)]
struct Ascent {
    reports: Vec<Report>,
    /// Parts reported as NIL.
    nil: Vec<Part>,
    notes: Vec<Note>,
}

/// Groups parts into soundings, in the order of their first parts. The second value holds notes that belong to none.
pub(super) fn assemble(
    file: &str,
    reports: Vec<Report>,
    reference: Option<&Reference>,
) -> (Vec<Sounding>, Vec<Note>) {
    let mut ascents: Vec<Ascent> = Vec::new();
    let mut loose = Vec::new();
    let (nil, reports): (Vec<_>, Vec<_>) =
        reports.into_iter().partition(|report| report.header.nil);
    let (dated, undated): (Vec<_>, Vec<_>) = reports
        .into_iter()
        .partition(|report| report.header.when.is_some());
    for report in dated {
        place(&mut ascents, report);
    }
    for report in undated {
        place_undated(&mut ascents, report);
    }
    for report in nil {
        place_nil(&mut ascents, report, &mut loose);
    }
    ascents.sort_by_key(|ascent| ascent.reports.iter().map(|report| report.line).min());
    let mut soundings = Vec::new();
    for ascent in ascents {
        if ascent.reports.iter().all(|report| report.levels.is_empty()) {
            loose.extend(ascent.without_levels());
        } else {
            soundings.push(ascent.sounding(file, soundings.len(), reference));
        }
    }
    loose.sort_by_key(|note| note.place);
    (soundings, loose)
}

fn place(ascents: &mut Vec<Ascent>, report: Report) {
    let same = |ascent: &Ascent| {
        ascent.reports.iter().all(|other| {
            other.station_key() == report.station_key()
                && other.header.when == report.header.when
                && !report.other_drop(other)
        })
    };
    let mut twin = None;
    let mut lacking = None;
    for (index, ascent) in ascents.iter_mut().enumerate() {
        if !same(ascent) {
            continue;
        }
        match ascent
            .reports
            .iter_mut()
            .find(|other| other.same_part(&report))
        {
            Some(other) if other.digest == report.digest => {
                let text = format!("{}: repeats the part of line {}", report.name, other.line);
                // Said once, however often a circuit sends it.
                if !ascent.notes.iter().any(|note| note.what == text) {
                    ascent.notes.push(note(report.line, text, "read once"));
                }
                return;
            }
            Some(other) if report.correction => {
                ascent.notes.push(note(
                    report.line,
                    format!("{}: replaces the part of line {}", report.name, other.line),
                    "its bulletin is marked as a correction",
                ));
                *other = report;
                return;
            }
            Some(other) => twin = Some(other.line),
            None => lacking = Some(index),
        }
    }
    if let Some(ascent) = lacking.and_then(|index| ascents.get_mut(index)) {
        ascent.reports.push(report);
        return;
    }
    let mut ascent = Ascent::default();
    if let Some(line) = twin {
        ascent.notes.push(note(
            report.line,
            format!(
                "{}: differs from the one of line {line} for the same station and hour; kept as a sounding of its own",
                report.name
            ),
            "neither is marked as a correction of the other",
        ));
    }
    ascent.reports.push(report);
    ascents.push(ascent);
}

/// A part whose day and hour are unreadable joins the station's ascent when there is just one that lacks it.
fn place_undated(ascents: &mut Vec<Ascent>, mut report: Report) {
    let key = report.station_key().to_string();
    let mut fitting = ascents.iter_mut().filter(|ascent| {
        !key.is_empty()
            && ascent
                .reports
                .iter()
                .all(|other| other.station_key() == key && !other.same_part(&report))
    });
    if let (Some(ascent), None) = (fitting.next(), fitting.next()) {
        ascent.notes.push(note(
            report.line,
            format!("{}: taken to belong to this ascent", report.name),
            "its day and hour are unreadable, and the file holds one ascent of this station that lacks it",
        ));
        report.header.when = ascent.reports.first().and_then(|other| other.header.when);
        ascent.reports.push(report);
        return;
    }
    ascents.push(Ascent {
        reports: vec![report],
        ..Ascent::default()
    });
}

fn place_nil(ascents: &mut [Ascent], report: Report, loose: &mut Vec<Note>) {
    let text = format!("{}: NIL, nothing to report", report.name);
    let ascent = ascents.iter_mut().find(|ascent| {
        ascent.reports.first().is_some_and(|other| {
            other.station_key() == report.station_key() && other.header.when == report.header.when
        })
    });
    match ascent {
        Some(ascent) => {
            ascent.nil.push(report.letters.part);
            ascent.notes.push(note(report.line, text, ""));
        }
        None => loose.push(note(
            report.line,
            format!("{text} (station {})", report.station_key()),
            "",
        )),
    }
}

fn note(line: usize, what: String, why: &str) -> Note {
    Note {
        place: Place::Line(line),
        what,
        why: why.into(),
    }
}

impl Ascent {
    fn without_levels(self) -> Vec<Note> {
        let mut notes = self.notes;
        for report in self.reports {
            notes.extend(report.notes);
            notes.push(note(
                report.line,
                format!(
                    "{}: no level in this part of station {}",
                    report.name,
                    report.header.station.label()
                ),
                "no other part of this ascent holds one either: there is no sounding",
            ));
        }
        notes
    }

    fn sounding(self, file: &str, index: usize, reference: Option<&Reference>) -> Sounding {
        let mut notes = Vec::new();
        let times = self.times(reference, &mut notes);
        self.conflicts(&mut notes);
        self.missing_parts(&mut notes);
        self.set_aside(&mut notes);
        let completeness = self.completeness();
        let released_aloft = self.reports.iter().any(Report::released_aloft);
        let station = self.station();
        let parts = self.reports.iter().map(|report| report.digest).collect();
        let surface = self
            .surface_pressures()
            .next()
            .map(|(_, pressure)| pressure);
        let mut levels = Vec::new();
        notes.extend(self.notes);
        for report in self.reports {
            notes.extend(report.notes);
            levels.extend(report.levels);
        }
        // The ground is one level whichever part names it: a wind part gives it no pressure.
        for level in &mut levels {
            if level.kind == LevelKind::Surface && level.pressure.is_none() {
                level.pressure = surface;
            }
        }
        notes.sort_by_key(|note| note.place);
        Sounding {
            station,
            times,
            levels,
            humidity_reported: HumidityReported::DewPoint,
            temperature_step: TEMPERATURE_STEP,
            completeness,
            released_aloft,
            heights_derived: Some(true),
            source: Source {
                file: file.into(),
                index,
                format: "TEMP",
                parts,
            },
            notes,
            demo: false,
        }
    }

    fn times(&self, reference: Option<&Reference>, notes: &mut Vec<Note>) -> Times {
        let Some(first) = self.reports.first() else {
            return Times::default();
        };
        let Some(when) = first.header.when else {
            notes.push(note(
                first.line,
                "no time: the day and hour are unreadable".into(),
                "nothing else in the message tells them",
            ));
            return Times::default();
        };
        let coded = format!("day {:02}, {:02} UTC", when.day, when.hour);
        let launch = self.reports.iter().find_map(|report| report.launch);
        let Some(reference) = reference else {
            notes.push(note(
                first.line,
                format!("no time: {coded} without month and year; give a date with --as-of"),
                "the message codes only day and hour, the file's name holds no date, and the file's own date is unknown",
            ));
            return Times::default();
        };
        let Some((times, found)) = date::times(when, launch, reference) else {
            notes.push(note(
                first.line,
                format!(
                    "no time: {coded} matches no date before {}",
                    reference.describe()
                ),
                "give another date with --as-of",
            ));
            return Times::default();
        };
        let apart = reference.days_before(found);
        let distance = if apart > 3 {
            format!(", {apart} days before it")
        } else {
            String::new()
        };
        notes.push(note(
            first.line,
            format!("{coded} taken as {found}{distance}"),
            &format!(
                "the message codes only day and hour; month and year are from {}",
                reference.describe()
            ),
        ));
        times
    }

    /// Pressures of the surface level with the part that gives them.
    fn surface_pressures(&self) -> impl Iterator<Item = (&Report, f64)> {
        self.reports.iter().flat_map(|report| {
            report
                .levels
                .iter()
                .filter(|level| level.kind == LevelKind::Surface)
                .filter_map(move |level| Some((report, level.pressure?)))
        })
    }

    /// What parts of one ascent should agree on. Differing values at one pressure are seen when levels are merged.
    fn conflicts(&self, notes: &mut Vec<Note>) {
        let mut differ = |a: &Report, b: &Report, what: &str, kept: String| {
            notes.push(note(
                b.line,
                format!("{} and {} differ in {what}; {kept}", a.name, b.name),
                "they may be parts of different ascents",
            ));
        };
        let mut surfaces = self.surface_pressures();
        if let Some((first, pressure)) = surfaces.next()
            && let Some((other, found)) = surfaces.find(|(_, found)| *found != pressure)
        {
            let what = format!(
                "surface pressure ({:.0} and {:.0} hPa)",
                pressure / 100.0,
                found / 100.0
            );
            differ(first, other, &what, "both levels are kept".into());
        }
        let mut launches = self
            .reports
            .iter()
            .filter_map(|report| Some((report, report.launch?)));
        if let Some((first, launch)) = launches.next()
            && let Some((other, found)) = launches.find(|(_, found)| *found != launch)
        {
            let what = format!(
                "launch time ({:02}:{:02} and {:02}:{:02} UTC)",
                launch.hour, launch.minute, found.hour, found.minute
            );
            differ(first, other, &what, "the first is kept".into());
        }
        let Some(first) = self.reports.first() else {
            return;
        };
        let unit = |report: &Report| report.header.unit;
        if let Some(other) = self.reports.iter().find(|other| {
            unit(other).is_some() && unit(first).is_some() && unit(other) != unit(first)
        }) {
            let kept = "each part is read in its own".into();
            differ(first, other, "unit of wind (m/s and knots)", kept);
        }
        if let Some(other) = self
            .reports
            .iter()
            .find(|other| other.header.station.position != first.header.station.position)
        {
            differ(first, other, "position", "the first is kept".into());
        }
    }

    fn has(&self, wanted: Part) -> bool {
        self.reports
            .iter()
            .any(|report| report.letters.part == wanted)
    }

    /// Whether the message shows that the ascent ended below 100 hPa, so that parts C and D will never come: part A
    /// has no 100 hPa level, and nothing else stands that high; or part C is reported as NIL.
    fn closed(&self) -> bool {
        let reaches = |report: &Report| {
            report.unread_top
                || report
                    .levels
                    .iter()
                    .any(|level| level.pressure.is_some_and(|pressure| pressure <= 10_000.0))
        };
        let part_a_ends = self.has(Part::A) && !self.reports.iter().any(reaches);
        part_a_ends || self.nil.iter().any(|part| part.upper())
    }

    fn completeness(&self) -> Completeness {
        if self.has(Part::C) || self.has(Part::D) || self.closed() {
            Completeness::AllParts
        } else {
            Completeness::LaterPartsNotReceived
        }
    }

    fn missing_parts(&self, notes: &mut Vec<Note>) {
        let Some(first) = self.reports.first() else {
            return;
        };
        let expected: &[(Part, &str)] = if self.closed() {
            &[(Part::A, "A"), (Part::B, "B")]
        } else {
            &[
                (Part::A, "A"),
                (Part::B, "B"),
                (Part::C, "C"),
                (Part::D, "D"),
            ]
        };
        let missing: Vec<_> = expected
            .iter()
            .filter(|(part, _)| {
                !self.nil.contains(part)
                    && !self
                        .reports
                        .iter()
                        .any(|report| report.letters.part == *part && !report.letters.pilot)
            })
            .map(|(_, name)| *name)
            .collect();
        if missing.is_empty() || self.reports.iter().all(|report| report.letters.pilot) {
            return;
        }
        let plural = if missing.len() == 1 { "part" } else { "parts" };
        notes.push(note(
            first.line,
            format!("{plural} {} not received", missing.join(", ")),
            "A and C hold standard levels, B and D significant ones; C and D lie above 100 hPa",
        ));
    }

    /// One note for all groups that hold no level.
    fn set_aside(&self, notes: &mut Vec<Note>) {
        let mut shown: Vec<String> = Vec::new();
        let mut line = None;
        for aside in self.reports.iter().flat_map(|report| &report.aside) {
            let text = format!("{} ({})", aside.text, aside.what);
            line = line.or(Some(aside.line));
            if !shown.contains(&text) {
                shown.push(text);
            }
        }
        if let Some(line) = line {
            notes.push(note(
                line,
                format!("groups set aside: {}", shown.join("; ")),
                "they hold no levels",
            ));
        }
    }

    fn station(&self) -> Station {
        let mut stations = self.reports.iter().map(|report| &report.header.station);
        let mut station = stations.next().cloned().unwrap_or_default();
        for other in stations {
            station.position = station.position.or(other.position);
            station.elevation = station.elevation.or(other.elevation);
        }
        station
    }
}
