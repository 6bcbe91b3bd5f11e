//! The session's declared numbers as they stand in the table: cells, ranges, and the text for the clipboard.

use crate::app::Paint;
use dewbound_session::chart::Units;
use dewbound_session::quantity::{Group, Quantity, Readings, Value, at_a_glance};
use dewbound_session::sounding::Parcel;
use dewbound_session::wording::{self, number};
use dewbound_session::{Extremes, Item};
use std::collections::BTreeSet;
use std::fmt::Write as _;

/// What stands in a cell: a value, or why there is none.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Cell {
    /// A value as text in the unit of the row; ≥ already in front where it is a lower limit.
    Value {
        /// As shown.
        text: String,
        /// A lower limit only.
        at_least: bool,
        /// Terms of a composite index, a line each.
        terms: Vec<String>,
    },
    /// Nothing, and why, in a sentence.
    Absent(String),
}

impl Cell {
    /// Of a quantity of a parcel, or of the whole profile.
    pub fn of(quantity: &Quantity, readings: &Readings, parcel: Parcel, units: Units) -> Self {
        match quantity.value(readings, parcel) {
            Some(value) => Self::Value {
                text: quantity.text(&value, units),
                at_least: value.is_at_least(),
                terms: Quantity::terms(&value),
            },
            None => {
                let why = sentence(&quantity.why_absent(readings, parcel));
                let remedy = match parcel {
                    Parcel::Surface
                        if quantity.is_per_parcel()
                            && readings.numbers.problem.is_none()
                            && readings.numbers.surface.is_none() =>
                    {
                        " Set it with the handle."
                    }
                    _ => "",
                };
                Self::Absent(format!("{why}{remedy}"))
            }
        }
    }

    /// As shown.
    pub fn text(&self) -> &str {
        match self {
            Self::Value { text, .. } => text,
            Self::Absent(_) => "–",
        }
    }

    /// Shows the same; reasons may differ.
    pub fn looks_like(&self, other: &Self) -> bool {
        self.text() == other.text()
    }
}

/// Everything the cells of one frame are read from.
pub(crate) struct Sight<'a> {
    pub working: Readings<'a>,
    pub received: Readings<'a>,
    /// With the repair that is being looked at.
    pub preview: Option<Readings<'a>>,
    /// The other kinds of ascent are those of an earlier revision.
    pub stale: bool,
}

impl<'a> Sight<'a> {
    /// Of an item; without a preview.
    pub fn of(item: &'a Item) -> Self {
        let other = item.other_ascents();
        Self {
            working: item.results().readings(other.working),
            received: item.analysed().readings(other.received),
            preview: None,
            stale: other.stale,
        }
    }

    /// The same, with the repair whose button is under the pointer.
    pub fn painted(paint: &'a Paint, item: &'a Item) -> Self {
        let preview = paint
            .view
            .previewed
            .as_ref()
            .filter(|previewed| previewed.item == item.id())
            .and_then(|previewed| previewed.preview.as_ref());
        Self {
            preview: preview.map(|preview| Readings {
                numbers: &preview.numbers,
                further: &preview.further,
                other: None,
            }),
            ..Self::of(item)
        }
    }

    /// What the preview would make of a cell, where it can be told.
    pub fn previewed(&self, quantity: &Quantity, parcel: Parcel, units: Units) -> Option<Cell> {
        if quantity.group == Group::OtherAscents {
            return None;
        }
        let preview = self.preview.as_ref()?;
        Some(Cell::of(quantity, preview, parcel, units))
    }
}

/// In a sentence.
pub(crate) fn parcel_name(parcel: Parcel) -> &'static str {
    match parcel {
        Parcel::Surface => "surface parcel",
        Parcel::Mixed => "mixed parcel",
        Parcel::MostUnstable => "most unstable parcel",
    }
}

/// Over a column.
pub(crate) fn parcel_heading(parcel: Parcel) -> &'static str {
    match parcel {
        Parcel::Surface => "Surface",
        Parcel::Mixed => "Mixed",
        Parcel::MostUnstable => "Most unstable",
    }
}

/// "1480 to 3120", the same value once; "−52 to 0, or none" where the quantity is absent somewhere in the interval.
pub(crate) fn range_text(range: &Extremes, or_none: bool) -> String {
    let (least, most) = (number(range.least, 0), number(range.most, 0));
    let sign = if range.at_least { "≥ " } else { "" };
    let to = if least == most {
        String::new()
    } else {
        format!(" to {most}")
    };
    let or_none = if or_none { ", or none" } else { "" };
    format!("{sign}{least}{to}{or_none}")
}

/// With a capital and a full stop.
pub(crate) fn sentence(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |first| {
        let first: String = first.to_uppercase().collect();
        format!("{first}{}.", chars.as_str())
    })
}

/// Everything shown at the moment: the numbers at a glance and the open groups. Empty groups are left out.
pub(crate) fn shown(open: &BTreeSet<Group>) -> Vec<(&'static str, Vec<&'static Quantity>)> {
    let glance: Vec<&Quantity> = at_a_glance().collect();
    let groups = Group::ALL
        .into_iter()
        .filter(|group| open.contains(group))
        .map(|group| (group.title(), in_group(group).collect()));
    std::iter::once(("At a glance", glance))
        .chain(groups)
        .collect()
}

/// The numbers of a group that don't stand at a glance above it.
pub(crate) fn in_group(group: Group) -> impl Iterator<Item = &'static Quantity> {
    let above: Vec<&str> = at_a_glance().map(|quantity| quantity.key).collect();
    group
        .quantities()
        .iter()
        .filter(move |quantity| !above.contains(&quantity.key))
}

/// The table as text for the clipboard: all that is shown.
pub(crate) fn as_text(item: &Item, units: Units, open: &BTreeSet<Group>) -> String {
    let sight = Sight::of(item);
    let mut text = format!("{}\n", item.sounding().station.label());
    if item.demo() {
        text.push_str(wording::INVENTED);
        text.push('\n');
    }
    for (title, quantities) in shown(open) {
        let (of_parcels, of_profile): (Vec<&Quantity>, Vec<&Quantity>) = quantities
            .into_iter()
            .partition(|quantity| quantity.is_per_parcel());
        let _ = write!(text, "\n{title}\n");
        if !of_parcels.is_empty() {
            text.push_str("Quantity\tUnit");
            for parcel in Parcel::ALL {
                let _ = write!(text, "\t{}\treceived\trange", parcel_heading(parcel));
            }
            text.push('\n');
        }
        for quantity in of_parcels {
            let _ = write!(text, "{}\t{}", quantity.label, quantity.sign(units));
            for parcel in Parcel::ALL {
                let range = quantity
                    .range
                    .map(|range| range(item.results().doubt.range(parcel)));
                let range = match range {
                    Some((Some(range), or_none)) => range_text(&range, or_none),
                    _ => "–".to_owned(),
                };
                let _ = write!(text, "\t{}\t{range}", pair(quantity, &sight, parcel, units));
            }
            text.push('\n');
        }
        if !of_profile.is_empty() {
            text.push_str("Quantity\tUnit\tWhole profile\treceived\n");
        }
        for quantity in of_profile {
            let pair = pair(quantity, &sight, Parcel::Surface, units);
            let (name, sign) = (quantity.label, quantity.sign(units));
            let _ = writeln!(text, "{name}\t{sign}\t{pair}");
            let value = quantity.value(&sight.working, Parcel::Surface);
            for term in value.as_ref().map(Quantity::terms).unwrap_or_default() {
                let _ = writeln!(text, "  {term}");
            }
        }
    }
    if sight.stale && open.contains(&Group::OtherAscents) {
        let _ = writeln!(text, "{}: {STALE}", Group::OtherAscents.title());
    }
    text.push_str(wording::CAUTION);
    text.push('\n');
    text
}

/// Said of numbers of an earlier revision.
pub(crate) const STALE: &str = "as before the drag";

/// Working and received value.
fn pair(quantity: &Quantity, sight: &Sight, parcel: Parcel, units: Units) -> String {
    let text = |readings: &Readings| {
        let value: Option<Value> = quantity.value(readings, parcel);
        value.map_or_else(|| "–".to_owned(), |value| quantity.text(&value, units))
    };
    format!("{}\t{}", text(&sight.working), text(&sight.received))
}

#[cfg(test)]
mod tests {
    use super::*;
    use dewbound_session::thermo::Temperature;

    fn extremes(least: f64, most: f64, at_least: bool) -> Extremes {
        Extremes {
            least,
            least_at: Temperature::from_c(15.0),
            most,
            most_at: Temperature::from_c(20.0),
            at_least,
        }
    }

    #[test]
    fn ranges() {
        assert_eq!(
            range_text(&extremes(1480.2, 3119.7, false), false),
            "1480 to 3120"
        );
        assert_eq!(range_text(&extremes(0.0, 0.4, false), false), "0");
        assert_eq!(
            range_text(&extremes(-250.0, -12.0, false), true),
            "\u{2212}250 to \u{2212}12, or none"
        );
        assert_eq!(
            range_text(&extremes(800.0, 900.0, true), false),
            "≥ 800 to 900"
        );
    }

    #[test]
    fn reasons_are_sentences() {
        assert_eq!(sentence("no free convection"), "No free convection.");
        assert_eq!(sentence(""), "");
    }

    #[test]
    fn every_number_stands_in_one_place() {
        let everything: BTreeSet<Group> = Group::ALL.into_iter().collect();
        let mut seen = BTreeSet::new();
        for (_, quantities) in shown(&everything) {
            for quantity in quantities {
                assert!(seen.insert(quantity.key), "{} twice", quantity.key);
            }
        }
        assert_eq!(seen.len(), dewbound_session::quantity::all().count());
    }
}
