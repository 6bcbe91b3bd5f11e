//! The rows of the table of numbers: one declaration each, from which the table, its tooltips and the copied text come.

use crate::units;
use dewbound_session::chart::Units;
use dewbound_session::sounding::{Numbers, Parcel};
use dewbound_session::thermo::Ascent;
use dewbound_session::wording::number;
use dewbound_session::{Extremes, ParcelRange};

/// What stands in a cell: a value, or why there is none.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) enum Cell {
    /// A value in the unit of the row; ≥ already in front where it is a lower limit.
    Value(String),
    /// Nothing, and why.
    Absent(String),
}

impl Cell {
    /// As shown.
    pub fn text(&self) -> &str {
        match self {
            Self::Value(text) => text,
            Self::Absent(_) => "–",
        }
    }
}

/// Range over the interval, where there is one, and whether the quantity is absent somewhere in it.
type RangeOf = fn(&ParcelRange) -> (Option<Extremes>, bool);

/// One row.
pub(crate) struct Quantity {
    /// Name.
    pub name: &'static str,
    /// Unit; empty where the value carries its own.
    pub unit: fn(Units) -> &'static str,
    /// What it is.
    pub definition: &'static str,
    /// How it is computed here.
    pub method: &'static str,
    /// Where that comes from.
    pub source: &'static str,
    /// Its value for an ascent.
    pub value: fn(&Ascent, Units) -> Cell,
    /// Its range over the interval; `None` for rows shown without one.
    pub range: Option<RangeOf>,
}

const NO_FREE_CONVECTION: &str = "No free convection: nowhere above its condensation level is the parcel lighter than its surroundings.";

fn energy(_: Units) -> &'static str {
    "J/kg"
}

fn pressure(_: Units) -> &'static str {
    "hPa"
}

fn hpa(value: Option<dewbound_session::thermo::Pressure>, why: &str) -> Cell {
    value.map_or_else(
        || Cell::Absent(why.to_owned()),
        |value| Cell::Value(number(value.hpa(), 0)),
    )
}

const PSEUDO: &str = "The parcel follows constant potential temperature to its condensation level and constant equivalent \
     potential temperature above; virtual temperature on both sides.";

/// All rows, CAPE first.
pub(crate) const QUANTITIES: &[Quantity] = &[
    Quantity {
        name: "CAPE",
        unit: energy,
        definition: "Convective available potential energy: all positive area above the condensation level, up to the \
                     equilibrium level.",
        method: PSEUDO,
        source: "Bolton 1980 (MWR 108), eq. 10, 15 and 39; Doswell and Rasmussen 1994 (WAF 9)",
        value: |ascent, _| {
            let sign = if ascent.at_least { "≥ " } else { "" };
            Cell::Value(format!("{sign}{}", number(ascent.cape, 0)))
        },
        range: Some(|range| (range.cape, false)),
    },
    Quantity {
        name: "CIN",
        unit: energy,
        definition: "Convective inhibition: all negative area from the start to the level of free convection, as a \
                     number of at most 0. In the range, the strongest cap comes first.",
        method: PSEUDO,
        source: "as for CAPE",
        value: |ascent, _| {
            ascent.cin.map_or_else(
                || Cell::Absent(NO_FREE_CONVECTION.to_owned()),
                |cin| Cell::Value(number(cin, 0)),
            )
        },
        range: Some(|range| (range.cin, range.sometimes_no_free_convection)),
    },
    Quantity {
        name: "LCL",
        unit: pressure,
        definition: "Lifting condensation level: where the rising parcel is first saturated.",
        method: "Temperature by eq. 15; pressure along the potential temperature of moist air.",
        source: "Bolton 1980 (MWR 108), eq. 15",
        value: |ascent, _| hpa(Some(ascent.lcl.pressure), ""),
        range: None,
    },
    Quantity {
        name: "LFC",
        unit: pressure,
        definition: "Level of free convection: base of the buoyant layer with the largest area.",
        method: "Exact zero crossing of the difference of virtual temperatures.",
        source: "conventions of this program",
        value: |ascent, _| hpa(ascent.lfc, NO_FREE_CONVECTION),
        range: None,
    },
    Quantity {
        name: "EL",
        unit: pressure,
        definition: "Equilibrium level: top of the highest buoyant layer.",
        method: "Exact zero crossing of the difference of virtual temperatures.",
        source: "conventions of this program",
        value: |ascent, _| {
            hpa(
                ascent.el,
                if ascent.buoyant.is_empty() {
                    NO_FREE_CONVECTION
                } else {
                    "The parcel is still lighter than its surroundings where the profile ends."
                },
            )
        },
        range: None,
    },
    Quantity {
        name: "θe",
        unit: |_| "K",
        definition: "Equivalent potential temperature of the parcel at its start.",
        method: "From temperature, pressure and mixing ratio at the start.",
        source: "Bolton 1980 (MWR 108), eq. 39",
        value: |ascent, _| Cell::Value(number(ascent.theta_e.k(), 1)),
        range: None,
    },
    Quantity {
        name: "Start p",
        unit: pressure,
        definition: "Pressure where the parcel starts.",
        method: "Surface level; surface level with the means of the lowest 100 hPa; received level of largest \
                 equivalent potential temperature in the lowest 300 hPa.",
        source: "conventions of this program",
        value: |ascent, _| Cell::Value(number(ascent.start.pressure.hpa(), 0)),
        range: None,
    },
    Quantity {
        name: "Start T",
        unit: |units| units::sign(units.temperature),
        definition: "Temperature of the parcel at its start.",
        method: "For the mixed parcel from the mean potential temperature.",
        source: "conventions of this program",
        value: |ascent, units| {
            Cell::Value(number(
                units::shown(ascent.start.temperature, units.temperature),
                1,
            ))
        },
        range: None,
    },
    Quantity {
        name: "Start Td",
        unit: |units| units::sign(units.temperature),
        definition: "Dew point of the parcel at its start.",
        method: "For the mixed parcel from the mean mixing ratio.",
        source: "conventions of this program",
        value: |ascent, units| {
            Cell::Value(number(
                units::shown(ascent.start.dewpoint, units.temperature),
                1,
            ))
        },
        range: None,
    },
];

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

/// Value of a quantity for a parcel, or why there is none.
pub(crate) fn cell(quantity: &Quantity, numbers: &Numbers, parcel: Parcel, units: Units) -> Cell {
    match numbers.parcel(parcel) {
        Some(ascent) => (quantity.value)(ascent, units),
        None => Cell::Absent(match (&numbers.problem, parcel) {
            (Some(problem), _) => format!("No parcel: {problem}."),
            (None, Parcel::Surface) => {
                "No parcel: the surface has no temperature or no dew point. Set it with the handle."
                    .to_owned()
            }
            (None, _) => "No parcel can be formed from this profile.".to_owned(),
        }),
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
    fn every_row_says_what_it_is() {
        for quantity in QUANTITIES {
            for text in [
                quantity.name,
                quantity.definition,
                quantity.method,
                quantity.source,
            ] {
                assert!(!text.is_empty(), "{}", quantity.name);
            }
        }
    }
}
