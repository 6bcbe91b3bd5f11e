//! The page of all numbers, as Markdown.

use super::{Group, Quantity, Unit};
use std::fmt::Write as _;

/// The page, as kept in `crates/session/numbers.md`.
pub fn markdown() -> String {
    let mut text = String::from(
        "# The numbers\n\n\
         Made from the declarations by `dewbound-cli explain --markdown`; don't edit. Names are those of `weigh --json --all`.\n\
         Heights are above the lowest usable level, which is the surface unless that lacks temperature or humidity.\n",
    );
    for group in Group::ALL {
        let _ = write!(text, "\n## {}\n", group.title());
        for quantity in group.quantities() {
            entry(&mut text, quantity);
        }
    }
    text
}

fn entry(text: &mut String, quantity: &Quantity) {
    let unit = match quantity.sign(Unit::of_reports()) {
        "" => "no unit",
        sign => sign,
    };
    let of = if quantity.is_per_parcel() {
        "of each parcel"
    } else {
        "of the whole profile"
    };
    let _ = write!(
        text,
        "\n### `{}`\n\n**{}**, {unit}, {of}. {}\n\n",
        quantity.key, quantity.label, quantity.definition
    );
    for (name, content) in quantity.particulars() {
        let _ = writeln!(text, "- {name}: {}", quoted(content));
    }
}

/// Signs that Markdown would take for its own.
fn quoted(text: &str) -> String {
    text.replace('<', "\\<").replace('[', "\\[")
}

impl Quantity {
    /// Everything said about a number beside its definition, each with its name.
    pub fn particulars(&self) -> [(&'static str, &'static str); 4] {
        [
            ("method", self.method),
            ("source", self.source),
            ("computed from", self.inputs),
            ("absent when", self.absent),
        ]
    }
}
