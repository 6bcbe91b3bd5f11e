//! Reading reference tables and judging residuals against them; random profiles.
#![allow(dead_code, clippy::unwrap_used, clippy::expect_used)]

pub mod profiles;

use std::path::PathBuf;

/// A reference table: `#` lines of provenance, a header line of names with units, numbers.
pub struct Table {
    name: String,
    columns: Vec<String>,
    rows: Vec<Vec<f64>>,
}

impl Table {
    /// Reads `tests/reference/<name>.csv`. Panics on anything unexpected: a reference that can't be read is a failure.
    pub fn read(name: &str) -> Self {
        let path: PathBuf = [
            env!("CARGO_MANIFEST_DIR"),
            "..",
            "..",
            "tests",
            "reference",
            &format!("{name}.csv"),
        ]
        .iter()
        .collect();
        let text = std::fs::read_to_string(&path)
            .unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        let mut lines = text.lines().filter(|line| !line.starts_with('#'));
        let columns: Vec<String> = lines
            .next()
            .expect("a header")
            .split(',')
            .map(str::to_owned)
            .collect();
        let rows: Vec<Vec<f64>> = lines
            .map(|line| {
                line.split(',')
                    .map(|cell| cell.parse().expect("a number"))
                    .collect()
            })
            .inspect(|row: &Vec<f64>| {
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

    /// Rows with the named columns, in the order asked for.
    pub fn rows<const N: usize>(&self, names: [&str; N]) -> impl Iterator<Item = [f64; N]> + '_ {
        let places = names.map(|name| {
            let place = self.columns.iter().position(|column| column == name);
            place.unwrap_or_else(|| panic!("{}: no column {name}", self.name))
        });
        self.rows
            .iter()
            .map(move |row| places.map(|place| row[place]))
    }
}

/// Residuals of one quantity against one source.
pub struct Residuals {
    what: &'static str,
    unit: &'static str,
    errors: Vec<f64>,
}

impl Residuals {
    pub fn new(what: &'static str, unit: &'static str) -> Self {
        Self {
            what,
            unit,
            errors: Vec::new(),
        }
    }

    pub fn add(&mut self, error: f64) {
        self.errors.push(if error.is_nan() {
            f64::INFINITY
        } else {
            error.abs()
        });
    }

    /// Prints count, quantiles and largest residual; fails when there was nothing to judge or the largest is above
    /// `limit`.
    pub fn judge(mut self, limit: f64) {
        self.errors.sort_by(f64::total_cmp);
        let n = self.errors.len();
        assert!(n > 0, "{}: no cases ran", self.what);
        let quantile = |q: f64| self.errors[((n - 1) as f64 * q).round() as usize];
        println!(
            "{:<64} {n:>5} cases  q75 {:.2e}  q99 {:.2e}  max {:.2e} {}  (limit {limit:.0e})",
            self.what,
            quantile(0.75),
            quantile(0.99),
            self.errors[n - 1],
            self.unit,
        );
        assert!(
            self.errors[n - 1] <= limit,
            "{}: largest residual {:e} {}",
            self.what,
            self.errors[n - 1],
            self.unit
        );
    }
}
