//! Sentences made of numbers.

use crate::sounding::{Numbers, Parcel, Profile};
use crate::thermo::Ascent;
use crate::wording::{
    CAUTION, INVENTED, cape, energy, number, parcel, pressure, range, time, valid_time,
};
use crate::{Doubt, Item, Standing};

/// CIN from which a surface parcel is called inhibited, J/kg. Common practice, no source.
const INHIBITED: f64 = -50.0;

/// A range narrower than this is not moved by the doubt, J/kg: it would not show in whole numbers.
const UNMOVED: f64 = 1.0;

/// Which parcel matters, and whether the surface doubt reaches it.
pub(crate) fn which_parcel(working: &Profile, numbers: &Numbers, doubt: &Doubt) -> String {
    let said = parcel_that_matters(working, numbers, doubt);
    match (working.surface_air(), &doubt.interval) {
        (Some(air), Some(interval)) if !interval.contains(air.dewpoint) => {
            format!("{said}; the dew point now set lies outside the interval")
        }
        _ => said,
    }
}

fn parcel_that_matters(working: &Profile, numbers: &Numbers, doubt: &Doubt) -> String {
    if let Some(problem) = &numbers.problem {
        return format!("no parcel can be lifted: {problem}");
    }
    let Some(unstable) = &numbers.most_unstable else {
        return "no parcel can be lifted: no level of the lowest 300 hPa has temperature and humidity".to_owned();
    };
    let surface = surface_clause(numbers);
    if numbers.most_unstable_is_surface {
        return format!(
            "{surface}; it is the most unstable parcel; {}",
            reach_clause(doubt, Parcel::Surface)
        );
    }
    if unstable.cape <= 0.0
        && doubt
            .range(Parcel::MostUnstable)
            .cape
            .is_none_or(|cape| cape.most <= 0.0)
    {
        return format!("{surface}; no parcel has CAPE");
    }
    let start = numbers
        .most_unstable_row
        .and_then(|row| working.pressure.get(row))
        .map_or(unstable.start.pressure, |&pa| {
            crate::thermo::Pressure::from_pa(pa)
        });
    format!(
        "{surface}; most unstable starts at {}; {}",
        pressure(start),
        reach_clause(doubt, Parcel::MostUnstable)
    )
}

fn surface_clause(numbers: &Numbers) -> String {
    let Some(surface) = &numbers.surface else {
        return "no surface parcel until a surface value is set".to_owned();
    };
    match surface.cin {
        None => "surface without free convection".to_owned(),
        Some(cin) if cin <= INHIBITED => {
            format!("surface inhibited (CIN {})", energy(Some(cin), false))
        }
        Some(_) => format!("surface CAPE {}", cape(Some(surface))),
    }
}

fn reach_clause(doubt: &Doubt, which: Parcel) -> String {
    match doubt.range(which).cape {
        None => "how far the surface doubt moves it is not known".to_owned(),
        Some(extremes) if extremes.most - extremes.least < UNMOVED => {
            "the surface doubt doesn't reach it".to_owned()
        }
        Some(extremes) => format!(
            "the surface doubt moves its CAPE: {} J/kg",
            range(&extremes)
        ),
    }
}

/// One line for the chat or the log.
pub(crate) fn copy_line(item: &Item) -> String {
    let sounding = item.sounding();
    let mut parts = Vec::new();
    let station = sounding.station.label();
    let identifier = sounding
        .station
        .canonical_id()
        .filter(|id| !id.ends_with(&format!(":{station}")))
        .map_or_else(String::new, |id| format!(" ({})", id.replacen(':', " ", 1)));
    let mark = if item.demo() {
        format!("{INVENTED} ")
    } else {
        String::new()
    };
    parts.push(format!(
        "{mark}{station}{identifier}, {}: {}",
        valid_time(sounding),
        verdict(item)
    ));
    let capes: Vec<String> = Parcel::ALL
        .into_iter()
        .map(|which| format!("{} {}", parcel(which), cape_and_range(item, which)))
        .collect();
    parts.push(format!("CAPE {}", capes.join(", ")));
    parts.extend(surface_edit(item));
    let reasons = reasons(item);
    if !reasons.is_empty() {
        parts.push(format!("reason: {reasons}"));
    }
    format!("{}. {CAUTION}.", parts.join("; "))
}

fn verdict(item: &Item) -> String {
    match item.standing() {
        Standing::Decided(decision) => {
            format!(
                "{} ({}, {})",
                decision.verdict.words(),
                decision.initials,
                time(Some(decision.decided_at))
            )
        }
        Standing::Keeping => "being kept".to_owned(),
        standing => match item.document().verdict {
            Some(verdict) => format!("draft, not decided: {}", verdict.words()),
            None => standing.words(),
        },
    }
}

fn reasons(item: &Item) -> String {
    let text = match item.standing() {
        Standing::Decided(decision) => decision.reasons.as_str(),
        _ => item.document().reasons.as_str(),
    };
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn cape_and_range(item: &Item, which: Parcel) -> String {
    let results = item.results();
    let ascent: Option<&Ascent> = results.numbers.parcel(which);
    match (ascent, results.doubt.range(which).cape) {
        (Some(_), Some(extremes)) => format!("{} (range {})", cape(ascent), range(&extremes)),
        _ => cape(ascent),
    }
}

fn surface_edit(item: &Item) -> Option<String> {
    let edits: Vec<String> = [
        crate::SurfaceQuantity::Dewpoint,
        crate::SurfaceQuantity::Temperature,
    ]
    .into_iter()
    .filter_map(|quantity| {
        item.document().surface(quantity)?;
        let working = item.working_surface(quantity)?;
        let received = item
            .received_surface(quantity)
            .map_or_else(|| "none".to_owned(), |received| number(received.c(), 1));
        Some(format!(
            "{} {} °C (received {received})",
            quantity.words(),
            number(working.c(), 1)
        ))
    })
    .collect();
    (!edits.is_empty()).then(|| edits.join(", "))
}
