//! Tables of reference values, `tests/reference/*.csv`: the one reader of them.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use std::path::Path;

/// A reference table: `#` lines of provenance, a header line of names with units, numbers. An empty cell is absent.
#[derive(Debug)]
pub struct Table {
    name: String,
    columns: Vec<String>,
    rows: Vec<Vec<Option<f64>>>,
}

impl Table {
    /// Reads `tests/reference/<name>.csv`.
    ///
    /// # Panics
    ///
    /// On anything unexpected: a reference that can't be read is a failure.
    pub fn read(name: &str) -> Self {
        let folder = Path::new(concat!(env!("CARGO_MANIFEST_DIR"), "/reference"));
        let path = folder.join(format!("{name}.csv"));
        let text = std::fs::read_to_string(&path)
            .unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        let mut lines = text.lines().filter(|line| !line.starts_with('#'));
        let columns: Vec<String> = lines
            .next()
            .expect("a header")
            .split(',')
            .map(str::to_owned)
            .collect();
        let cell = |cell: &str| (!cell.is_empty()).then(|| cell.parse().expect("a number"));
        let rows: Vec<Vec<Option<f64>>> = lines
            .map(|line| line.split(',').map(cell).collect())
            .inspect(|row: &Vec<Option<f64>>| {
                assert_eq!(row.len(), columns.len(), "{name}: cells in a row")
            })
            .collect();
        assert!(!rows.is_empty(), "{name}: no rows");
        Self {
            name: name.to_owned(),
            columns,
            rows,
        }
    }

    /// Rows with the named columns, in the order asked for, absent cells included.
    ///
    /// # Panics
    ///
    /// When there is no such column.
    pub fn cells<const N: usize>(
        &self,
        names: [&str; N],
    ) -> impl Iterator<Item = [Option<f64>; N]> + '_ {
        let places = names.map(|name| {
            let place = self.columns.iter().position(|column| column == name);
            place.unwrap_or_else(|| panic!("{}: no column {name}", self.name))
        });
        self.rows
            .iter()
            .map(move |row| places.map(|place| row[place]))
    }

    /// Rows with the named columns, none of which may have absent cells.
    ///
    /// # Panics
    ///
    /// When there is no such column, or a cell is absent.
    pub fn rows<const N: usize>(&self, names: [&str; N]) -> impl Iterator<Item = [f64; N]> + '_ {
        self.cells(names).map(move |row| {
            row.map(|cell| cell.unwrap_or_else(|| panic!("{}: an absent cell", self.name)))
        })
    }
}
