//! Differences from references, judged by bounds and shown as a table.

/// Differences of one quantity from one reference.
#[derive(Debug)]
pub struct Residuals {
    what: String,
    unit: &'static str,
    bound: String,
    /// Size of the difference, and the bound that holds for it.
    cases: Vec<(f64, f64)>,
}

impl Residuals {
    /// `bound` says in words what is given as a number with each case.
    pub fn new(what: impl Into<String>, unit: &'static str, bound: impl Into<String>) -> Self {
        Self {
            what: what.into(),
            unit,
            bound: bound.into(),
            cases: Vec::new(),
        }
    }

    /// A difference and the bound that holds for it. What is no number is infinitely wrong.
    pub fn add(&mut self, difference: f64, bound: f64) {
        let size = if difference.is_nan() {
            f64::INFINITY
        } else {
            difference.abs()
        };
        self.cases.push((size, bound));
    }

    /// Many differences with one bound, which needs no words.
    pub fn all(
        what: impl Into<String>,
        unit: &'static str,
        bound: f64,
        differences: impl IntoIterator<Item = f64>,
    ) -> Self {
        let mut residuals = Self::new(what, unit, short(bound));
        for difference in differences {
            residuals.add(difference, bound);
        }
        residuals
    }

    fn line(&self) -> Line {
        let mut sizes: Vec<f64> = self.cases.iter().map(|case| case.0).collect();
        sizes.sort_by(f64::total_cmp);
        // The element at the share of the way; nothing of an empty list.
        let quantile = |share: f64| {
            let last = sizes.len().saturating_sub(1) as f64;
            sizes.get((last * share).round() as usize).copied()
        };
        let worst = self.cases.iter().map(|(size, bound)| size / bound);
        Line {
            what: self.what.clone(),
            cases: sizes.len(),
            numbers: [0.75, 0.99, 1.0].map(quantile),
            unit: self.unit,
            bound: self.bound.clone(),
            used: worst.fold(0.0, f64::max),
        }
    }
}

#[derive(Debug)]
struct Line {
    what: String,
    cases: usize,
    numbers: [Option<f64>; 3],
    unit: &'static str,
    bound: String,
    /// Largest share of its bound that a case takes.
    used: f64,
}

impl Line {
    fn holds(&self) -> bool {
        self.cases > 0 && self.used <= 1.0
    }

    fn text(&self) -> String {
        let [q75, q99, most] = self
            .numbers
            .map(|number| number.map_or("-".to_owned(), short));
        format!(
            "{:<66} {:>6} {q75:>9} {q99:>9} {most:>9} {:<5} {:>24} {:>6.1}{}",
            self.what,
            self.cases,
            self.unit,
            self.bound,
            100.0 * self.used,
            if self.holds() { "" } else { "  FAILED" },
        )
    }
}

/// The table: sections of lines, with what is to be said about them.
#[derive(Debug, Default)]
pub struct Report {
    text: Vec<String>,
    failures: Vec<String>,
}

impl Report {
    /// A new section: what it is about, and where references and bounds come from.
    pub fn section(&mut self, heading: &str, about: &[&str]) {
        self.text.push(String::new());
        self.text.push(heading.to_owned());
        self.remark(about);
    }

    /// What is to be known of the lines above or beneath.
    pub fn remark(&mut self, about: &[&str]) {
        self.text
            .extend(about.iter().map(|line| format!("  # {line}")));
    }

    /// Adds the line of these residuals; it fails when a bound is exceeded or there was nothing to judge.
    pub fn judge(&mut self, residuals: &Residuals) {
        let line = residuals.line();
        if line.cases == 0 {
            self.fail(format!("{}: no cases ran", line.what));
        } else if !line.holds() {
            let most = line.numbers[2].map_or_else(String::new, short);
            self.fail(format!(
                "{}: largest difference {most} {}, {} times the bound of {}",
                line.what,
                line.unit,
                short(line.used),
                line.bound
            ));
        }
        self.text.push(line.text());
    }

    /// A failure that has no line.
    pub fn fail(&mut self, why: String) {
        self.failures.push(why);
    }

    /// What failed, a line each.
    pub fn failures(&self) -> &[String] {
        &self.failures
    }

    /// The whole table.
    pub fn table(&self) -> String {
        let heads = format!(
            "{:<66} {:>6} {:>9} {:>9} {:>9} {:<5} {:>24} {:>6}",
            "what, against which reference",
            "cases",
            "q75",
            "q99",
            "max",
            "unit",
            "bound",
            "used %"
        );
        format!("{heads}\n{}", self.text.join("\n"))
    }
}

/// Three significant digits.
fn short(value: f64) -> String {
    let size = value.abs();
    if value == 0.0 {
        return "0".to_owned();
    }
    if !(1e-4..1e6).contains(&size) {
        return format!("{value:.1e}");
    }
    let digits = (2 - size.log10().floor() as i32).max(0) as usize;
    let text = format!("{value:.digits$}");
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_holds_only_with_cases_inside_their_bounds() {
        let verdict = |residuals: Residuals| {
            let mut report = Report::default();
            report.judge(&residuals);
            report.failures().len()
        };
        assert_eq!(verdict(Residuals::all("fine", "K", 0.2, [0.1, -0.2])), 0);
        assert_eq!(
            verdict(Residuals::all("too much", "K", 0.2, [0.1, -0.21])),
            1
        );
        assert_eq!(verdict(Residuals::all("nothing", "K", 0.2, [])), 1);
        assert_eq!(
            verdict(Residuals::all("no number", "K", 0.2, [f64::NAN])),
            1
        );
        let mut own = Residuals::new("bounds of their own", "K", "some");
        own.add(3.0, 4.0);
        own.add(-1.0, 0.5);
        assert_eq!(verdict(own), 1);
    }

    #[test]
    fn three_digits_are_shown() {
        let shown = [0.0, 0.002, 0.13449, 20.0, 1234.6, 5e-10, -0.05];
        let texts = ["0", "0.002", "0.134", "20", "1235", "5.0e-10", "-0.05"];
        for (value, text) in shown.into_iter().zip(texts) {
            assert_eq!(short(value), text);
        }
    }
}
