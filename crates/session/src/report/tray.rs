//! The tray as text, for a machine without a display.

use super::columns::aligned;
use super::table::{grade, layer};
use crate::sounding::Parcel;
use crate::wording::{self, CAUTION, INVENTED, number, parcel, range, time};
use crate::{Item, Session};

/// Station, time, CAPE of the three parcels with range, findings with cost; worst first, like the tray of the desk.
pub fn tray(session: &Session) -> String {
    let items: Vec<&Item> = session
        .tray()
        .iter()
        .filter_map(|row| session.item(row.item))
        .collect();
    if items.is_empty() {
        return "no soundings\n".to_owned();
    }
    let mut rows = vec![{
        let mut row = vec!["station".to_owned(), "time".to_owned()];
        row.extend(Parcel::ALL.map(|which| format!("CAPE {}, J/kg", parcel(which))));
        row.push("findings".to_owned());
        row
    }];
    // One line says it when all are; among real ones each invented one says it itself.
    let all_demo = items.iter().all(|item| item.demo());
    rows.extend(items.iter().map(|item| row(item, !all_demo)));
    let mut text = String::new();
    if all_demo {
        text.push_str(&format!("{INVENTED}\n"));
    }
    text.push_str(&aligned(&rows));
    for item in items {
        text.push_str(&findings(item));
    }
    text.push_str(&format!("\n{CAUTION}.\n"));
    text
}

fn row(item: &Item, mark_demo: bool) -> Vec<String> {
    let results = item.results();
    let mark = if item.demo() && mark_demo {
        format!(" ({INVENTED})")
    } else {
        String::new()
    };
    let mut row = vec![
        format!("{}{mark}", item.sounding().station.label()),
        time(item.sounding().times.valid()),
    ];
    row.extend(Parcel::ALL.map(|which| {
        let Some(ascent) = results.numbers.parcel(which) else {
            return "–".to_owned();
        };
        let least = if ascent.at_least { "≥ " } else { "" };
        let cape = format!("{least}{}", number(ascent.cape, 0));
        match &results.doubt.range(which).cape {
            Some(extremes) => format!("{cape} ({})", range(extremes)),
            None => cape,
        }
    }));
    row.push(item.findings().len().to_string());
    row
}

fn findings(item: &Item) -> String {
    let mut text = String::new();
    for &index in &item.results().order {
        let (Some(finding), Some(card)) =
            (item.findings().get(index), item.results().cards.get(index))
        else {
            continue;
        };
        let layer = layer(finding).map_or_else(String::new, |layer| format!(", {layer}"));
        let cost = if finding.wind_only {
            "no cost in CAPE".to_owned()
        } else {
            wording::cost(card.headline_cost())
        };
        text.push_str(&format!(
            "  {}: {}{layer}: {cost}\n",
            grade(finding.grade),
            finding.title
        ));
    }
    if text.is_empty() {
        return text;
    }
    let mark = if item.demo() {
        format!(" ({INVENTED})")
    } else {
        String::new()
    };
    format!("\n{}{mark}\n{text}", item.sounding().station.label())
}
