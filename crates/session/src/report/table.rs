//! One sounding for people.

use super::all::all_numbers;
use super::columns::aligned;
use crate::sounding::{Numbers, OtherAscents, Parcel, Profile};
use crate::thermo::{Ascent, Pressure};
use crate::trust::{Evidence, Finding, Grade};
use crate::wording::{
    self, CAUTION, INVENTED, celsius, number, parcel, pressure, range, valid_time,
};
use crate::{Analysed, Card, Extremes, ParcelRange, Results};

/// The table of `weigh` for one sounding.
pub fn table(analysed: &Analysed, results: &Results) -> String {
    let text = without_caution(analysed, results);
    format!("{text}\n{CAUTION}.\n")
}

/// The same with every declared number.
pub fn table_with_all(analysed: &Analysed, results: &Results, other: &OtherAscents) -> String {
    let text = without_caution(analysed, results);
    let all = all_numbers(results, other);
    format!("{text}{all}\n{CAUTION}.\n")
}

fn without_caution(analysed: &Analysed, results: &Results) -> String {
    let mut text = heading(analysed);
    if is_wind_only(analysed) {
        text.push_str(&wind_only(analysed, results));
    } else {
        text.push_str(&condition(analysed, results));
        if Parcel::ALL
            .into_iter()
            .any(|which| results.numbers.parcel(which).is_some())
        {
            text.push('\n');
            text.push_str(&numbers(results));
        }
        text.push_str(&remarks(analysed, results));
    }
    text.push_str(&findings(analysed, results));
    text.push_str(&notes(analysed));
    text
}

fn heading(analysed: &Analysed) -> String {
    let sounding = &analysed.sounding;
    let label = sounding.station.label();
    let mut text = String::new();
    if sounding.demo {
        text.push_str(&format!("{INVENTED}\n"));
    }
    text.push_str(label);
    if let Some(id) = sounding.station.canonical_id()
        && !id.ends_with(&format!(":{label}"))
    {
        text.push_str(&format!(" ({})", id.replacen(':', " ", 1)));
    }
    text.push_str(&format!(", {}", valid_time(sounding)));
    if sounding.times.nominal.is_some() && sounding.times.launch.is_some() {
        text.push_str(&format!(
            ", launched {}",
            wording::time(sounding.times.launch)
        ));
    }
    text.push_str(&format!("\n{}", sounding.source.file));
    if sounding.source.index > 0 {
        text.push_str(&format!(", sounding {}", sounding.source.index + 1));
    }
    text.push('\n');
    text
}

fn is_wind_only(analysed: &Analysed) -> bool {
    let profile = &analysed.profile;
    profile.temperature.iter().all(Option::is_none) && profile.wind.iter().any(Option::is_some)
}

fn wind_only(analysed: &Analysed, results: &Results) -> String {
    let winds = analysed.profile.wind.iter().flatten().count();
    let mut text = format!(
        "wind only, {}: no temperature, so no parcels\n",
        wording::counted(winds, "level", "levels")
    );
    for note in &results.working.notes {
        text.push_str(&format!("{}\n", wording::note(note)));
    }
    text
}

/// What the profile holds and what has been set.
fn condition(analysed: &Analysed, results: &Results) -> String {
    let profile = &analysed.profile;
    let dry = analysed.humidity_missing();
    let mut text = wording::counted(analysed.usable_rows().len(), "level", "levels");
    if let Some(top) = profile.top() {
        text.push_str(&format!(" up to {}", pressure(top)));
    }
    if dry > 0 {
        text.push_str(&format!(", {dry} without humidity"));
    }
    text.push('\n');
    let working = &results.working;
    let surface = working.profile.surface_air();
    if surface != profile.surface_air()
        && let Some(air) = surface
    {
        text.push_str(&format!(
            "surface set to {}, dew point {}; {}\n",
            celsius(air.temperature),
            celsius(air.dewpoint),
            working.reach.why
        ));
    }
    text
}

fn numbers(results: &Results) -> String {
    let numbers = &results.numbers;
    let mut rows = vec![{
        let mut row = vec![String::new()];
        row.extend(Parcel::ALL.map(|which| parcel(which).to_owned()));
        row
    }];
    let mut add = |label: &str, cell: &dyn Fn(&Ascent, &ParcelRange) -> String| {
        let mut row = vec![label.to_owned()];
        row.extend(Parcel::ALL.map(|which| {
            let ascent = numbers.parcel(which);
            ascent.map_or_else(
                || "–".to_owned(),
                |ascent| cell(ascent, results.doubt.range(which)),
            )
        }));
        rows.push(row);
    };
    let level = |level: Option<Pressure>| {
        level.map_or_else(|| "none".to_owned(), |level| number(level.hpa(), 0))
    };
    let ends =
        |extremes: &Option<Extremes>| extremes.as_ref().map_or_else(|| "none".to_owned(), range);
    add("CAPE, J/kg", &|ascent, _| {
        let mark = if ascent.at_least { "≥ " } else { "" };
        format!("{mark}{}", number(ascent.cape, 0))
    });
    add("  in range", &|_, range| ends(&range.cape));
    add("CIN, J/kg", &|ascent, _| {
        ascent
            .cin
            .map_or_else(|| "none".to_owned(), |cin| number(cin, 0))
    });
    add("  in range", &|_, range| wording::cin_range(range));
    add("starts at, hPa", &|ascent, _| {
        level(Some(ascent.start.pressure))
    });
    add("  temperature, °C", &|ascent, _| {
        number(ascent.start.temperature.c(), 1)
    });
    add("  dew point, °C", &|ascent, _| {
        number(ascent.start.dewpoint.c(), 1)
    });
    add("condensation level (LCL), hPa", &|ascent, _| {
        level(Some(ascent.lcl.pressure))
    });
    add("free convection (LFC), hPa", &|ascent, _| level(ascent.lfc));
    let top = results.working.profile.top();
    add("equilibrium level (EL), hPa", &|ascent, _| {
        match (ascent.el, ascent.lfc, top) {
            // Still buoyant where the sounding ends.
            (None, Some(_), Some(top)) => format!("above {}", number(top.hpa(), 0)),
            (el, ..) => level(el),
        }
    });
    add("theta-e, K", &|ascent, _| number(ascent.theta_e.k(), 1));
    aligned(&rows)
}

/// What limits the numbers.
fn remarks(analysed: &Analysed, results: &Results) -> String {
    let mut lines = Vec::new();
    if let Some(interval) = &results.doubt.interval {
        lines.push(format!(
            "range: surface dew point from {} to {} ({})",
            celsius(interval.low),
            celsius(interval.high),
            interval.why
        ));
    } else if !results.doubt.problem.is_empty() {
        let why = results.doubt.problem.as_str();
        let why = why.strip_prefix("no credible interval: ").unwrap_or(why);
        lines.push(format!("no range: {why}"));
    }
    lines.push(results.which_parcel.clone());
    lines.extend(limits(&results.working.profile, &results.numbers));
    lines.extend(results.working.notes.iter().map(wording::note));
    if analysed.daylight == crate::sounding::Daylight::Unknown {
        lines.push(format!(
            "day or night not known, so some rules stay at doubtful: {}",
            wording::daylight_lacks(&analysed.sounding)
        ));
    }
    let mut text = String::from("\n");
    for line in lines {
        text.push_str(&line);
        text.push('\n');
    }
    text
}

fn limits(profile: &Profile, numbers: &Numbers) -> Vec<String> {
    let mut lines = Vec::new();
    if Parcel::ALL
        .into_iter()
        .filter_map(|which| numbers.parcel(which))
        .any(|ascent| ascent.at_least)
        && let Some(top) = profile.top()
    {
        lines.push(format!(
            "≥: a lower limit: the sounding ends at {}, and what a parcel would do above isn't counted",
            pressure(top)
        ));
    }
    if let Some(start) = numbers.starts_at {
        lines.push(format!(
            "no usable surface: the other parcels start at {}",
            pressure(start)
        ));
    }
    if let Some(humidity) = numbers.humidity {
        if humidity.interpolated > 0 {
            lines.push(format!(
                "{} with interpolated dew point",
                wording::counted(humidity.interpolated, "level", "levels")
            ));
        }
        if let Some(from) = humidity.dry_above {
            lines.push(format!(
                "{} above {} counted as dry",
                wording::counted(humidity.dry, "level", "levels"),
                pressure(from)
            ));
        }
    }
    if let Some(held) = &numbers.cape_humidity_held {
        let held: Vec<String> = Parcel::ALL
            .into_iter()
            .zip(held)
            .map(|(which, cape)| {
                let at_least = numbers.parcel(which).is_some_and(|ascent| ascent.at_least);
                format!("{} {}", parcel(which), wording::energy(*cape, at_least))
            })
            .collect();
        lines.push(format!(
            "CAPE with relative humidity held above that: {}",
            held.join(", ")
        ));
    }
    lines
}

fn findings(analysed: &Analysed, results: &Results) -> String {
    if analysed.findings.is_empty() {
        return "\nno findings\n".to_owned();
    }
    let mut text = String::from("\nfindings, worst first\n");
    for (place, &index) in results.order.iter().enumerate() {
        if let (Some(finding), Some(card)) =
            (analysed.findings.get(index), results.cards.get(index))
        {
            text.push_str(&finding_text(place + 1, finding, card));
        }
    }
    text
}

fn finding_text(place: usize, finding: &Finding, card: &Card) -> String {
    let mut text = format!("{place}. {}: {}", grade(finding.grade), finding.title);
    if let Some(layer) = layer(finding) {
        text.push_str(&format!(", {layer}"));
    }
    text.push_str(&format!(" [{}]\n   {}\n", finding.rule, finding.summary));
    let evidence: Vec<String> = finding.evidence.iter().map(evidence_text).collect();
    if !evidence.is_empty() {
        text.push_str(&format!("   {}\n", evidence.join("; ")));
    }
    text.push_str(&format!(
        "   if wrong: {}\n   if real: {}\n",
        finding.guilty, finding.innocent
    ));
    if !finding.caveat.is_empty() {
        text.push_str(&format!("   {}\n", finding.caveat));
    }
    if finding.wind_only {
        text.push_str("   no cost in CAPE\n");
    }
    for (index, repair) in finding.repairs.iter().enumerate() {
        let cost = card.costs.get(index).and_then(Option::as_ref);
        let mark = if card.applied == Some(index) {
            ", applied"
        } else {
            ""
        };
        text.push_str(&format!(
            "   - {}: {}{mark}\n",
            repair.what,
            wording::cost(cost)
        ));
    }
    text
}

pub(super) fn grade(grade: Grade) -> &'static str {
    match grade {
        Grade::Informative => "for information",
        Grade::Doubtful => "doubtful",
        Grade::Erroneous => "erroneous",
    }
}

/// "652 to 601 hPa".
pub(super) fn layer(finding: &Finding) -> Option<String> {
    match (finding.bottom, finding.top) {
        (Some(bottom), Some(top)) if bottom != top => {
            Some(format!("{} to {}", number(bottom.hpa(), 0), pressure(top)))
        }
        (Some(level), _) | (None, Some(level)) => Some(pressure(level)),
        (None, None) => None,
    }
}

fn evidence_text(evidence: &Evidence) -> String {
    let value = number(evidence.value, evidence.decimals);
    format!("{} {value} {}", evidence.label, evidence.unit)
        .trim_end()
        .to_owned()
}

fn notes(analysed: &Analysed) -> String {
    if analysed.notes.is_empty() {
        return String::new();
    }
    let mut text = String::from("\nnotes\n");
    for note in &analysed.notes {
        text.push_str(&format!("  {}\n", wording::note(note)));
    }
    text
}
