//! Every declared number for people.

use super::columns::aligned;
use crate::Results;
use crate::chart::Units;
use crate::quantity::{Group, Quantity, Readings, Unit};
use crate::sounding::{OtherAscents, Parcel};
use crate::wording::parcel as parcel_name;

/// All numbers of one sounding, group by group, in the units of reports; "none", with the reason, where there is none.
pub(super) fn all_numbers(results: &Results, other: &OtherAscents) -> String {
    let readings = results.readings(Some(other));
    let units = Unit::of_reports();
    let mut text = String::from("\nall numbers; heights are above the lowest usable level\n");
    for group in Group::ALL {
        text.push_str(&format!("\n{}\n", group.title()));
        let (of_parcels, of_profile): (Vec<&Quantity>, Vec<&Quantity>) = group
            .quantities()
            .iter()
            .partition(|quantity| quantity.is_per_parcel());
        text.push_str(&parcels(&of_parcels, &readings, units));
        text.push_str(&profile(&of_profile, &readings, units));
    }
    text
}

fn parcels(quantities: &[&Quantity], readings: &Readings, units: Units) -> String {
    if quantities.is_empty() {
        return String::new();
    }
    let mut rows = vec![vec![String::new()]];
    if let Some(heading) = rows.first_mut() {
        heading.extend(Parcel::ALL.map(|which| parcel_name(which).to_owned()));
    }
    for quantity in quantities {
        let mut row = vec![format!("  {}", quantity.heading(units))];
        row.extend(Parcel::ALL.map(|which| cell(quantity, readings, which, units)));
        rows.push(row);
    }
    let mut text = aligned(&rows);
    for reason in absences(quantities, readings) {
        text.push_str(&format!("  {reason}\n"));
    }
    text
}

fn cell(quantity: &Quantity, readings: &Readings, parcel: Parcel, units: Units) -> String {
    quantity
        .value(readings, parcel)
        .map_or_else(|| "none".to_owned(), |value| quantity.text(&value, units))
}

/// Why numbers are absent, one line a reason and the parcels it holds for: "no LFC, EL (mixed): no free convection".
fn absences(quantities: &[&Quantity], readings: &Readings) -> Vec<String> {
    let mut reasons: Vec<(String, Vec<&str>, Vec<&str>)> = Vec::new();
    for quantity in quantities {
        let mut own: Vec<(String, Vec<&str>)> = Vec::new();
        for which in Parcel::ALL {
            if quantity.value(readings, which).is_some() {
                continue;
            }
            let why = quantity.why_absent(readings, which);
            match own.iter_mut().find(|(reason, _)| *reason == why) {
                Some((_, parcels)) => parcels.push(parcel_name(which)),
                None => own.push((why, vec![parcel_name(which)])),
            }
        }
        for (why, parcels) in own {
            let same = reasons
                .iter_mut()
                .find(|(reason, of, _)| *reason == why && *of == parcels);
            match same {
                Some((_, _, labels)) => labels.push(quantity.label),
                None => reasons.push((why, parcels, vec![quantity.label])),
            }
        }
    }
    reasons
        .into_iter()
        .map(|(why, parcels, labels)| {
            let labels = labels.join(", ");
            match parcels.len() {
                3 => format!("no {labels}: {why}"),
                _ => format!("no {labels} ({}): {why}", parcels.join(", ")),
            }
        })
        .collect()
}

fn profile(quantities: &[&Quantity], readings: &Readings, units: Units) -> String {
    let mut rows = Vec::new();
    // Terms and reasons would widen the column of values: they follow it.
    let mut after = Vec::new();
    for quantity in quantities {
        let name = format!("  {}", quantity.heading(units));
        match quantity.value(readings, Parcel::Surface) {
            Some(value) => {
                rows.push(vec![name, quantity.text(&value, units)]);
                after.push(Quantity::terms(&value));
            }
            None => {
                rows.push(vec![name, "none".to_owned()]);
                after.push(vec![quantity.why_absent(readings, Parcel::Surface)]);
            }
        }
    }
    let absent: Vec<bool> = rows
        .iter()
        .map(|row| row.last().is_some_and(|value| value == "none"))
        .collect();
    let mut text = String::new();
    for ((line, after), absent) in aligned(&rows).lines().zip(after).zip(absent) {
        text.push_str(line);
        match after.as_slice() {
            [why] if absent => text.push_str(&format!(": {why}")),
            terms => {
                for term in terms {
                    text.push_str(&format!("\n    {term}"));
                }
            }
        }
        text.push('\n');
    }
    text
}
