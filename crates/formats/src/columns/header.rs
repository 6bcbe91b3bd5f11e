//! The header line of a table: which column holds what.

use super::names::{Column, Quantity, column_named, names_with_unit};
use crate::delimited::{Delimiter, plain_name};

/// A line read as a header under one delimiter.
#[derive(Debug, Clone)]
pub(crate) struct TableHeader {
    pub delimiter: Delimiter,
    /// Names as they stand in the file.
    pub names: Vec<String>,
    /// The column each name stands for; a second column of the same quantity is not used.
    pub columns: Vec<Option<&'static Column>>,
    /// Names of a quantity that another column already gives.
    pub repeated: Vec<String>,
    /// Names not understood at all.
    pub unknown: Vec<String>,
    /// Names that lack their unit, with what they could be.
    pub without_unit: Vec<(String, Vec<&'static str>)>,
}

impl TableHeader {
    /// Reads a line under the delimiter that makes most sense of it.
    pub fn read(line: &str) -> Option<Self> {
        let mut best: Option<Self> = None;
        for delimiter in Delimiter::ALL {
            if !line.contains(delimiter.char()) {
                continue;
            }
            let header = Self::with_delimiter(line, delimiter);
            if best
                .as_ref()
                .is_none_or(|best| header.score() > best.score())
            {
                best = Some(header);
            }
        }
        best
    }

    fn with_delimiter(line: &str, delimiter: Delimiter) -> Self {
        let mut header = Self {
            delimiter,
            names: Vec::new(),
            columns: Vec::new(),
            repeated: Vec::new(),
            unknown: Vec::new(),
            without_unit: Vec::new(),
        };
        let mut taken = [false; Quantity::COUNT];
        for field in delimiter.fields(line) {
            let name = field.trim().to_owned();
            let plain = plain_name(&name);
            let mut column = column_named(&plain);
            if let Some(found) = column {
                let slot = taken.get_mut(found.quantity.index());
                if slot.is_some_and(|taken| std::mem::replace(taken, true)) {
                    header.repeated.push(name.clone());
                    column = None;
                }
            } else if let Some(names) = names_with_unit(&plain) {
                header.without_unit.push((name.clone(), names));
            } else if !name.is_empty() {
                header.unknown.push(name.clone());
            }
            header.names.push(name);
            header.columns.push(column);
        }
        header
    }

    /// Understood names count, then names that would be with a unit, then the number of names.
    fn score(&self) -> (usize, usize, usize) {
        let understood = self.columns.iter().flatten().count();
        (understood, self.without_unit.len(), self.names.len())
    }

    /// Whether a column of this quantity is there.
    pub fn has(&self, quantity: Quantity) -> bool {
        self.columns
            .iter()
            .flatten()
            .any(|column| column.quantity == quantity)
    }

    /// Pressure, and something measured at it.
    pub fn is_enough(&self) -> bool {
        self.has(Quantity::Pressure)
            && (self.has(Quantity::Temperature)
                || (self.has(Quantity::WindDirection) && self.has(Quantity::WindSpeed)))
    }

    /// Whether any name means anything here: a table for this reader, if perhaps a faulty one.
    pub fn means_something(&self) -> bool {
        let (understood, without_unit, _) = self.score();
        understood + without_unit > 0
    }

    /// Whether the line is more numbers than names: a row, not a header.
    pub fn is_numbers(&self) -> bool {
        let number = |name: &&String| {
            !name.is_empty()
                && matches!(
                    crate::number::cell(name, self.delimiter.allows_decimal_comma()),
                    crate::number::Cell::Value(_)
                )
        };
        let filled = self.names.iter().filter(|name| !name.is_empty()).count();
        filled > 0 && self.names.iter().filter(number).count() * 2 > filled
    }

    /// What keeps this header from being enough, and what to do.
    pub fn complaint(&self) -> String {
        let mut what = Vec::new();
        for (name, names) in &self.without_unit {
            what.push(format!(
                "`{name}` doesn't say its unit: write {}",
                names.join(" or ")
            ));
        }
        if what.is_empty() {
            if !self.has(Quantity::Pressure) {
                what.push("no column of pressure: name one pressure_hpa or pressure_pa".into());
            }
            if !self.has(Quantity::Temperature) {
                what.push("no column of temperature: name one temperature_c, temperature_k or temperature_f".into());
            }
        }
        what.join("; ")
    }

    /// The name in the file of a quantity's column.
    pub fn name_of(&self, quantity: Quantity) -> &str {
        self.columns
            .iter()
            .position(|column| column.is_some_and(|column| column.quantity == quantity))
            .and_then(|index| self.names.get(index))
            .map_or("", String::as_str)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn any_delimiter_and_order() {
        for line in [
            "temperature_c,pressure_hpa,rh_pct",
            "temperature_c;pressure_hpa;rh_pct",
            "temperature_c\tpressure_hpa\trh_pct",
            "\"Temperature [°C]\",\"Pressure (hPa)\",\"RH (%)\"",
        ] {
            let header = TableHeader::read(line).unwrap();
            let quantities: Vec<_> = header
                .columns
                .iter()
                .map(|column| column.unwrap().quantity)
                .collect();
            assert_eq!(
                quantities,
                [
                    Quantity::Temperature,
                    Quantity::Pressure,
                    Quantity::RelativeHumidity
                ],
                "{line}"
            );
            assert!(header.is_enough());
        }
    }

    #[test]
    fn repeated_unknown_and_unitless_names_are_told_apart() {
        let header =
            TableHeader::read("pressure_hpa,temperature_c,temperature_k,flag,temp,").unwrap();
        assert_eq!(header.repeated, ["temperature_k"]);
        assert_eq!(header.unknown, ["flag"]);
        assert_eq!(header.without_unit.len(), 1);
        assert_eq!(header.name_of(Quantity::Temperature), "temperature_c");
    }

    #[test]
    fn numbers_are_no_header() {
        assert!(TableHeader::read("1000.0,20.1,15.2").unwrap().is_numbers());
        assert!(!TableHeader::read("pressure,temp").unwrap().is_numbers());
    }

    #[test]
    fn says_what_is_missing() {
        let complaint = TableHeader::read("pressure,temperature_c")
            .unwrap()
            .complaint();
        assert!(
            complaint.contains("pressure_hpa or pressure_pa"),
            "{complaint}"
        );
        let complaint = TableHeader::read("a,b").unwrap().complaint();
        assert!(complaint.contains("temperature_k"), "{complaint}");
    }
}
