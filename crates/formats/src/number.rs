//! Numbers as people and programs write them, and the many spellings of "missing".

/// What a field holds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Cell {
    /// Nothing, or one of the spellings of it.
    Missing,
    /// A finite number.
    Value(f64),
    /// Something else.
    Garbage,
}

/// Words and signs that mean "missing"; compared without regard to case.
const MISSING: [&str; 12] = [
    "", "nan", "na", "n/a", "null", "none", "nil", "missing", "m", "-", "--", "---",
];

/// Reads a field. `decimal_comma` allows `12,5`.
pub(crate) fn cell(field: &str, decimal_comma: bool) -> Cell {
    let field = field.trim_ascii();
    if field.is_empty() {
        return Cell::Missing;
    }
    match field.parse::<f64>() {
        Ok(value) if value.is_finite() => Cell::Value(value),
        _ => unusual(field, decimal_comma),
    }
}

#[cold]
fn unusual(field: &str, decimal_comma: bool) -> Cell {
    let field = field.trim();
    // Runs of slashes are the code's own way of writing an absent group.
    let slashes = field.bytes().all(|byte| byte == b'/');
    if slashes || MISSING.iter().any(|word| field.eq_ignore_ascii_case(word)) {
        return Cell::Missing;
    }
    // A typeset minus sign (U+2212) or dash (U+2013) in front.
    let mut plain = match field.strip_prefix(['\u{2212}', '\u{2013}']) {
        Some(rest) => format!("-{rest}"),
        None => field.to_owned(),
    };
    if decimal_comma && !plain.contains('.') && plain.matches(',').count() == 1 {
        plain = plain.replace(',', ".");
    }
    // Rust also parses "inf" and "infinity": a number has a digit.
    let digit = plain.bytes().any(|byte| byte.is_ascii_digit());
    match plain.parse::<f64>() {
        Ok(value) if digit && value.is_finite() => Cell::Value(value),
        _ => Cell::Garbage,
    }
}

/// Whether a number is a code for "missing": a row of nines (-999, -9999.0, 99999.9) on the negative side, or above
/// what the quantity can be on the positive; and the fill values of common binary formats. `lowest` and `largest` bound
/// what is plausible, in the column's own unit, so that 999 hPa, 9999 m and 99999 Pa stay numbers.
pub(crate) fn is_missing_code(value: f64, lowest: f64, largest: f64) -> bool {
    if (lowest..=largest).contains(&value) {
        return false;
    }
    if value.abs() >= 1e15 || value == -32_768.0 {
        return true;
    }
    const NINES: [f64; 5] = [999.0, 9_999.0, 99_999.0, 999_999.0, 9_999_999.0];
    let size = value.abs();
    let whole = size.floor();
    // Up to three decimals, all nines or all zeros.
    let rest = ((size - whole) * 1000.0).round();
    NINES.contains(&whole) && [0.0, 900.0, 990.0, 999.0].contains(&rest)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(field: &str, expect: Cell) {
        assert_eq!(cell(field, true), expect, "{field:?}");
    }

    #[test]
    fn numbers() {
        check("12.5", Cell::Value(12.5));
        check(" -3 ", Cell::Value(-3.0));
        check("+7.0", Cell::Value(7.0));
        check("\u{2212}4.5", Cell::Value(-4.5));
        check("12,5", Cell::Value(12.5));
        check("1.2e3", Cell::Value(1200.0));
        assert_eq!(cell("12,5", false), Cell::Garbage);
    }

    #[test]
    fn missing() {
        for field in [
            "", "  ", "NaN", "nan", "NA", "n/a", "/", "/////", "-", "NULL", "M",
        ] {
            check(field, Cell::Missing);
        }
    }

    #[test]
    fn garbage() {
        for field in [
            "12.x",
            "inf",
            "-Infinity",
            "1e999",
            "1.013,2",
            "1,013,2",
            "°",
            "#",
        ] {
            check(field, Cell::Garbage);
        }
    }

    #[test]
    fn rows_of_nines_are_missing_only_where_they_cannot_be_values() {
        let pressure_hpa = |value| is_missing_code(value, 0.0, 1200.0);
        assert!(!pressure_hpa(999.0));
        assert!(pressure_hpa(9999.0));
        assert!(pressure_hpa(-999.0));
        let height_m = |value| is_missing_code(value, -500.0, 60_000.0);
        assert!(!height_m(9999.0));
        assert!(height_m(99999.0));
        assert!(height_m(-9999.9));
        let temperature_c = |value| is_missing_code(value, -150.0, 100.0);
        assert!(temperature_c(999.9));
        assert!(temperature_c(-999.99));
        assert!(temperature_c(9.969e36));
        // Wrong, but not a code: handed on for the checks to find.
        assert!(!temperature_c(998.0));
        assert!(!temperature_c(-273.5));
    }
}
