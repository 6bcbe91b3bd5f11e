//! Lines of a table to rows of values.

use super::comments::shortened;
use super::header::TableHeader;
use super::names::{Column, Quantity};
use crate::number::{self, Cell};
use crate::tally::Tally;
use crate::when;
use std::borrow::Cow;

/// One line of a table, values in SI by quantity.
#[derive(Debug, Clone)]
pub(crate) struct Row {
    pub line: usize,
    values: [f64; Quantity::COUNT],
    /// One bit a quantity: whether its value is there. Half the room of as many options, for files of many rows.
    present: u16,
    /// The clock carries its date: seconds since 1970, not of the day.
    pub dated: bool,
}

impl Row {
    /// A value.
    pub fn get(&self, quantity: Quantity) -> Option<f64> {
        let present = self.present & quantity.bit() != 0;
        self.values
            .get(quantity.index())
            .copied()
            .filter(|_| present)
    }

    /// Sets or clears a value.
    pub fn set(&mut self, quantity: Quantity, value: Option<f64>) {
        self.present &= !quantity.bit();
        if let (Some(slot), Some(value)) = (self.values.get_mut(quantity.index()), value) {
            *slot = value;
            self.present |= quantity.bit();
        }
    }

    /// Whether nothing was measured here: time and place alone make no level.
    pub fn is_empty(&self) -> bool {
        const MEASURED: u16 = {
            use Quantity::*;
            Pressure.bit()
                | Temperature.bit()
                | Dewpoint.bit()
                | RelativeHumidity.bit()
                | MixingRatio.bit()
                | Height.bit()
                | HeightAboveGround.bit()
                | WindDirection.bit()
                | WindSpeed.bit()
        };
        self.present & MEASURED == 0
    }
}

/// Reads the lines under a header. `cut_short`: the file ends without a line end, so its last field may be half a one.
pub(crate) fn read(
    header: &TableHeader,
    lines: &[(usize, &str)],
    cut_short: bool,
    tally: &mut Tally,
) -> Vec<Row> {
    let last = lines.last().map(|(line, _)| *line);
    let mut rows = Vec::with_capacity(lines.len());
    for &(line, text) in lines {
        let unfinished = cut_short && Some(line) == last;
        if let Some(row) = read_line(header, line, text, unfinished, tally) {
            rows.push(row);
        }
    }
    rows
}

fn read_line(
    header: &TableHeader,
    line: usize,
    text: &str,
    unfinished: bool,
    tally: &mut Tally,
) -> Option<Row> {
    let mut row = Row {
        line,
        values: [0.0; Quantity::COUNT],
        present: 0,
        dated: false,
    };
    let expected = header.columns.len();
    let decimal_comma = header.delimiter.allows_decimal_comma();
    let mut count = 0;
    let mut surplus = false;
    let mut last_read = None;
    header.delimiter.split(text, |index, field: Cow<'_, str>| {
        count = index + 1;
        let Some(column) = header.columns.get(index) else {
            surplus |= !field.trim().is_empty();
            return;
        };
        let Some(column) = column else { return };
        last_read = Some((index, column.quantity));
        let value = match value(column, &field, decimal_comma, &mut row.dated) {
            Ok(value) => value,
            Err(()) => {
                tally.add(
                    "garbage",
                    index,
                    line,
                    || {
                        format!(
                            "`{}` in column {} ({}) is not a {} and was set aside",
                            shortened(field.trim()),
                            index + 1,
                            header.names.get(index).map_or("", String::as_str),
                            if column.quantity == Quantity::Clock {
                                "time"
                            } else {
                                "number"
                            },
                        )
                    },
                    "",
                );
                None
            }
        };
        row.set(column.quantity, value);
    });
    if surplus {
        tally.add(
            "surplus",
            0,
            line,
            || format!("the row has {count} fields under {expected} names and was set aside"),
            "its values may stand under the wrong names; with decimal commas, separate fields by semicolons",
        );
        return None;
    }
    if count < expected {
        tally.add(
            "short",
            0,
            line,
            || {
                format!(
                    "the row has {count} fields under {expected} names; the rest counts as missing"
                )
            },
            "",
        );
        if unfinished
            && let Some((index, quantity)) = last_read
            && index + 1 == count
        {
            tally.add(
                "cut",
                0,
                line,
                || {
                    format!(
                        "the file ends in the middle of this row; its last field ({}) was set aside",
                        header.names.get(index).map_or("", String::as_str)
                    )
                },
                "the number may be cut off; fetch the file again",
            );
            row.set(quantity, None);
        }
    }
    Some(row)
}

/// The value of a field in SI; `Err` for garbage.
fn value(
    column: &Column,
    field: &str,
    decimal_comma: bool,
    dated: &mut bool,
) -> Result<Option<f64>, ()> {
    if column.quantity == Quantity::Clock {
        return clock(field, dated);
    }
    match number::cell(field, decimal_comma) {
        Cell::Missing => Ok(None),
        Cell::Garbage => Err(()),
        Cell::Value(value) => {
            let unit = &column.unit;
            if number::is_missing_code(value, unit.lowest, unit.largest) {
                return Ok(None);
            }
            let si = (unit.to_si)(value);
            if si.is_finite() {
                Ok(Some(si))
            } else {
                Err(())
            }
        }
    }
}

fn clock(field: &str, dated: &mut bool) -> Result<Option<f64>, ()> {
    let field = field.trim();
    if let Some(seconds) = when::seconds_of_day(field.trim_end_matches(['Z', 'z'])) {
        return Ok(Some(seconds));
    }
    if let Some(time) = when::timestamp(field) {
        *dated = true;
        return Ok(Some(time.as_millisecond() as f64 / 1000.0));
    }
    match number::cell(field, false) {
        Cell::Missing => Ok(None),
        _ => Err(()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read_rows(header: &str, text: &str, cut_short: bool) -> (Vec<Row>, Vec<String>) {
        let header = TableHeader::read(header).unwrap();
        let lines: Vec<_> = crate::text::lines(text).collect();
        let mut tally = Tally::default();
        let rows = read(&header, &lines, cut_short, &mut tally);
        (rows, tally.notes().map(|note| note.what).collect())
    }

    #[test]
    fn garbage_costs_one_value() {
        let (rows, notes) = read_rows("pressure_hpa,temperature_c", "1000,2o.1\n990,19\n", false);
        assert_eq!(rows.len(), 2);
        assert_eq!(rows[0].get(Quantity::Pressure), Some(100_000.0));
        assert_eq!(rows[0].get(Quantity::Temperature), None);
        assert_eq!(
            notes,
            ["`2o.1` in column 2 (temperature_c) is not a number and was set aside"]
        );
    }

    #[test]
    fn short_long_and_empty_rows() {
        let (rows, notes) = read_rows(
            "pressure_hpa,temperature_c,rh_pct",
            "1000,20\n990,19,50,7\n980,18,50,,\n,,\n",
            false,
        );
        let lines: Vec<_> = rows.iter().map(|row| row.line).collect();
        assert_eq!(lines, [1, 3, 4]);
        assert_eq!(notes.len(), 2, "{notes:?}");
        assert!(rows[2].is_empty());
    }

    #[test]
    fn a_field_cut_off_by_the_end_of_the_file_is_not_a_number() {
        let (rows, notes) = read_rows(
            "pressure_hpa,temperature_c,rh_pct",
            "1000,20,50\n990,1",
            true,
        );
        assert_eq!(rows[1].get(Quantity::Temperature), None);
        assert_eq!(notes.len(), 2, "{notes:?}");
    }

    #[test]
    fn missing_values_are_silent() {
        let (rows, notes) = read_rows(
            "pressure_hpa;temperature_c;height_m;wind_dir_deg;wind_speed_ms",
            "999,0;-999,9;9999;999;/\n",
            false,
        );
        assert_eq!(notes, Vec::<String>::new());
        assert_eq!(rows[0].get(Quantity::Pressure), Some(99_900.0));
        assert_eq!(rows[0].get(Quantity::Height), Some(9999.0));
        for quantity in [
            Quantity::Temperature,
            Quantity::WindDirection,
            Quantity::WindSpeed,
        ] {
            assert_eq!(rows[0].get(quantity), None);
        }
    }
}
