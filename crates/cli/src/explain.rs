//! `explain`: what a number is.

use crate::arguments::Explain;
use crate::output::{Output, say};
use anyhow::Result;
use dewbound_session::quantity::{Group, Quantity, Unit, all, find, markdown};
use serde_json::json;
use std::fmt::Write as _;

/// Explains the numbers asked for, or lists all. False when one is unknown.
pub fn run(options: &Explain, output: &mut Output) -> Result<bool> {
    if options.markdown {
        output.write(&markdown())?;
        return Ok(true);
    }
    if options.names.is_empty() {
        if options.json {
            for quantity in all() {
                output.write(&object(quantity))?;
            }
        } else {
            output.write(&list())?;
        }
        return Ok(true);
    }
    let mut known = true;
    let mut first = true;
    for name in &options.names {
        match find(name) {
            Ok(quantity) if options.json => output.write(&object(quantity))?,
            Ok(quantity) => {
                if !first {
                    output.write("\n")?;
                }
                output.write(&explanation(quantity))?;
            }
            Err(error) => {
                say(&format!("{error}"));
                known = false;
            }
        }
        first = false;
    }
    Ok(known)
}

/// Names and labels, group by group.
fn list() -> String {
    let widest = all()
        .map(|quantity| quantity.key.len())
        .max()
        .unwrap_or_default();
    let mut text = String::new();
    for group in Group::ALL {
        let _ = writeln!(text, "{}", group.title());
        for quantity in group.quantities() {
            let heading = quantity.heading(Unit::of_reports());
            let _ = writeln!(text, "  {:<widest$}  {heading}", quantity.key);
        }
    }
    text
}

fn explanation(quantity: &Quantity) -> String {
    let mut text = format!(
        "{} ({}), {}\n  {}\n",
        quantity.heading(Unit::of_reports()),
        quantity.key,
        of(quantity),
        quantity.definition
    );
    for (name, content) in quantity.particulars() {
        let _ = writeln!(text, "  {name}: {content}");
    }
    text
}

fn of(quantity: &Quantity) -> &'static str {
    if quantity.is_per_parcel() {
        "of each parcel"
    } else {
        "of the whole profile"
    }
}

fn object(quantity: &Quantity) -> String {
    let object = json!({
        "name": quantity.key,
        "label": quantity.label,
        "unit": quantity.sign(Unit::of_reports()),
        "decimals": quantity.decimals,
        "group": quantity.group.title(),
        "per_parcel": quantity.is_per_parcel(),
        "definition": quantity.definition,
        "method": quantity.method,
        "source": quantity.source,
        "computed_from": quantity.inputs,
        "absent_when": quantity.absent,
    });
    format!("{object}\n")
}
