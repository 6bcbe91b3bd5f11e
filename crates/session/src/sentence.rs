//! Sentences made of numbers.

use crate::sounding::{Numbers, Parcel, Profile};
use crate::thermo::{Ascent, Pressure};
use crate::wording::{
    CAUTION, INVENTED, cape, energy, number, parcel, pressure, range, time, valid_time,
};
use crate::{Doubt, Item, Standing};

/// CIN from which a surface parcel is called inhibited, J/kg. Common practice, no source.
const INHIBITED: f64 = -50.0;

/// A range narrower than this is not moved by the doubt, J/kg: it would not show in whole numbers.
const UNMOVED: f64 = 1.0;

/// Less CAPE than this reads as zero in whole numbers, J/kg.
const SHOWN: f64 = 0.5;

const NO_SURFACE: &str = "no surface parcel until a surface value is set";

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
    // What each parcel may come to, the doubt included.
    let reachable = |which| {
        let cape = numbers.parcel(which).map_or(0.0, |ascent| ascent.cape);
        let range = doubt.range(which).cape;
        cape.max(range.map_or(0.0, |range| range.most))
    };
    let has_cape = |which| reachable(which) >= SHOWN;
    if !Parcel::ALL.into_iter().any(has_cape) {
        return no_cape(working, numbers);
    }
    let surface = surface_clause(working, numbers);
    let start = numbers
        .most_unstable_row
        .and_then(|row| working.pressure.get(row))
        .map_or(unstable.start.pressure, |&pa| Pressure::from_pa(pa));
    let start = pressure(start);
    if has_cape(Parcel::MostUnstable) {
        if numbers.most_unstable_is_surface {
            let reach = reach_clause(doubt, Parcel::Surface, "its CAPE");
            return format!("{surface}; it is the most unstable parcel; {reach}");
        }
        let so_far = if unstable.cape < SHOWN {
            format!(" with {}", little(working, unstable))
        } else {
            String::new()
        };
        let reach = reach_clause(doubt, Parcel::MostUnstable, "its CAPE");
        return format!("{surface}; most unstable starts at {start}{so_far}; {reach}");
    }
    // The parcel of largest theta-e has the least of it: what there is belongs to another one.
    let unstable = little(working, unstable);
    if reachable(Parcel::Surface) >= reachable(Parcel::Mixed) {
        let reach = reach_clause(doubt, Parcel::Surface, "the surface CAPE");
        return format!("{surface}; most unstable starts at {start} with {unstable}; {reach}");
    }
    let reach = reach_clause(doubt, Parcel::Mixed, "the mixed CAPE");
    format!(
        "{surface}; mixed CAPE {}; most unstable starts at {start} with {unstable}; {reach}",
        cape(numbers.mixed.as_ref())
    )
}

/// No parcel has CAPE, wherever in the interval the dew point lies.
fn no_cape(working: &Profile, numbers: &Numbers) -> String {
    let lifted: Vec<&Ascent> = Parcel::ALL
        .into_iter()
        .filter_map(|which| numbers.parcel(which))
        .collect();
    let seen = if lifted.iter().any(|ascent| ascent.at_least) {
        where_it_ends(working)
    } else {
        String::new()
    };
    let said = if lifted.iter().all(|ascent| ascent.cape <= 0.0) {
        "parcel has CAPE"
    } else {
        "parcel's CAPE reaches 1 J/kg"
    };
    if numbers.surface.is_none() {
        format!("{NO_SURFACE}; no other {said}{seen}")
    } else {
        format!("no {said}{seen}")
    }
}

/// " below 628 hPa, where the sounding ends".
fn where_it_ends(working: &Profile) -> String {
    working.top().map_or_else(String::new, |top| {
        format!(" below {}, where the sounding ends", pressure(top))
    })
}

/// CAPE that reads as zero in whole numbers.
fn little(working: &Profile, ascent: &Ascent) -> String {
    let said = if ascent.cape > 0.0 {
        "CAPE below 1 J/kg"
    } else {
        "no CAPE"
    };
    match working.top().filter(|_| ascent.at_least) {
        Some(top) => format!("{said} below {}", pressure(top)),
        None => said.to_owned(),
    }
}

fn surface_clause(working: &Profile, numbers: &Numbers) -> String {
    let Some(surface) = &numbers.surface else {
        return NO_SURFACE.to_owned();
    };
    match surface.cin {
        None => match working.top().filter(|_| surface.at_least) {
            Some(top) => format!("surface without free convection below {}", pressure(top)),
            None => "surface without free convection".to_owned(),
        },
        Some(cin) if cin <= INHIBITED && surface.cape >= SHOWN => {
            format!("surface inhibited (CIN {})", energy(Some(cin), false))
        }
        Some(_) => format!("surface CAPE {}", cape(Some(surface))),
    }
}

fn reach_clause(doubt: &Doubt, which: Parcel, whose: &str) -> String {
    match doubt.range(which).cape {
        None => "how far the surface doubt moves it is not known".to_owned(),
        Some(extremes) if extremes.most - extremes.least < UNMOVED => match which {
            Parcel::Surface => format!("the surface doubt moves {whose} by less than 1 J/kg"),
            _ => "the surface doubt doesn't reach it".to_owned(),
        },
        Some(extremes) => format!("the surface doubt moves {whose}: {} J/kg", range(&extremes)),
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
