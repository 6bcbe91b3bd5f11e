//! Columns whose numbers cannot be in the unit their name says.
//!
//! Only what is beyond doubt: the whole column is set aside and the note names the unit it looks like. A single wild
//! value is not a wrong unit; it is handed on as received.

use super::header::TableHeader;
use super::names::Quantity;
use super::rows::Row;
use dewbound_sounding::{Note, Place};

/// Fewer values than this prove nothing.
const FEWEST: usize = 3;

/// Sets aside columns in an impossible unit; the notes say so.
pub(crate) fn set_aside_impossible(
    header: &TableHeader,
    header_line: usize,
    rows: &mut [Row],
) -> Vec<Note> {
    let mut notes = Vec::new();
    for column in header.columns.iter().flatten() {
        let quantity = column.quantity;
        let judged = matches!(
            quantity,
            Quantity::Pressure
                | Quantity::Temperature
                | Quantity::Dewpoint
                | Quantity::RelativeHumidity
                | Quantity::MixingRatio
        );
        if !judged {
            continue;
        }
        let values: Vec<f64> = rows.iter().filter_map(|row| row.get(quantity)).collect();
        if values.len() < FEWEST {
            continue;
        }
        let low = rows
            .iter()
            .filter(|row| row.get(Quantity::Pressure).is_some_and(|p| p > 85_000.0))
            .filter_map(|row| row.get(quantity))
            .collect();
        let Some(instead) = better_name(column.name, &Spread::of(values), Spread::of(low)) else {
            continue;
        };
        for row in rows.iter_mut() {
            row.set(quantity, None);
        }
        notes.push(Note {
            place: Place::Line(header_line),
            what: format!(
                "the values of `{}` cannot be in that unit and were set aside; if they are in the other, name the \
                 column {instead}",
                header.name_of(quantity)
            ),
            why: String::new(),
        });
    }
    notes
}

struct Spread {
    least: f64,
    median: f64,
    most: f64,
    count: usize,
}

impl Spread {
    fn of(mut values: Vec<f64>) -> Self {
        let count = values.len();
        let least = values.iter().copied().fold(f64::INFINITY, f64::min);
        let most = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let median = match values.is_empty() {
            true => f64::NAN,
            false => *values.select_nth_unstable_by(count / 2, f64::total_cmp).1,
        };
        Self {
            least,
            median,
            most,
            count,
        }
    }
}

/// The name the column should have had. Values are in the SI of the unit claimed; `low` are those below 850 hPa.
/// The limits are common practice, no source: no air is at 150 degC, none at -123 degC in any ascent, none below
/// 850 hPa at 60 degC in the middle.
fn better_name(name: &str, all: &Spread, low: Spread) -> Option<&'static str> {
    let warm_below = low.count >= FEWEST && low.median > 333.15;
    match name {
        "temperature_c" if all.least > 423.15 => Some("temperature_k"),
        "temperature_c" if warm_below => Some("temperature_f"),
        "temperature_k" if all.most < 150.0 => Some("temperature_c or temperature_f"),
        "temperature_f" if all.least > 338.15 => Some("temperature_k"),
        "dewpoint_c" if all.least > 423.15 => Some("dewpoint_k"),
        "dewpoint_k" if all.most < 100.0 => Some("dewpoint_c or dewpoint_f"),
        "dewpoint_f" if all.least > 338.15 => Some("dewpoint_k"),
        "pressure_hpa" if all.most > 200_000.0 && all.median > 120_000.0 => Some("pressure_pa"),
        "pressure_pa" if all.most < 1_200.0 => Some("pressure_hpa"),
        "rh_pct" if all.most <= 0.01 && all.most > 0.0 => Some("rh_1"),
        "rh_1" if all.median > 1.5 => Some("rh_pct"),
        "mixing_ratio_kgkg" if all.most > 0.1 => Some("mixing_ratio_gkg"),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tally::Tally;

    #[track_caller]
    fn check(header: &str, text: &str, expect: Option<&str>) {
        let header = TableHeader::read(header).unwrap();
        let lines: Vec<_> = crate::text::lines(text).collect();
        let mut rows = super::super::rows::read(&header, &lines, false, &mut Tally::default());
        let notes = set_aside_impossible(&header, 1, &mut rows);
        match expect {
            Some(name) => {
                assert_eq!(notes.len(), 1, "{notes:?}");
                assert!(notes[0].what.ends_with(name), "{}", notes[0].what);
            }
            None => assert_eq!(notes, []),
        }
    }

    #[test]
    fn blatant_mistakes() {
        let rows = "1000,293,0.4\n900,285,0.5\n500,253,0.2\n";
        check("pressure_hpa,temperature_c,x", rows, Some("temperature_k"));
        check("pressure_hpa,temperature_k,rh_pct", rows, Some("rh_1"));
        let rows = "100000,20,90\n90000,12,80\n50000,-20,20\n";
        check(
            "pressure_hpa,temperature_c,rh_pct",
            rows,
            Some("pressure_pa"),
        );
        check(
            "pressure_pa,temperature_k,rh_pct",
            rows,
            Some("temperature_c or temperature_f"),
        );
        check("pressure_pa,temperature_c,rh_1", rows, Some("rh_pct"));
        let rows = "1000,88,70\n950,80,68\n900,71,60\n500,10,0\n";
        check(
            "pressure_hpa,temperature_c,dewpoint_f",
            rows,
            Some("temperature_f"),
        );
        check(
            "pressure_pa,temperature_f,dewpoint_f",
            rows,
            Some("pressure_hpa"),
        );
    }

    #[test]
    fn right_units_and_single_wild_values_stay() {
        check(
            "pressure_hpa,temperature_c,rh_pct",
            "1000,20,90\n900,400,80\n500,-20,1\n7,-40,1\n",
            None,
        );
        // Two values prove nothing.
        check(
            "pressure_hpa,temperature_c,x",
            "1000,293,\n900,285,\n",
            None,
        );
    }
}
