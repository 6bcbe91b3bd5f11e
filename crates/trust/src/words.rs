//! Numbers as people read them: fixed precision, real minus sign, unit never far.

use dewbound_sounding::thermo::{Pressure, Temperature};

/// A number with a real minus sign; "−0.0" is written "0.0".
pub(crate) fn number(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(digits) if digits.chars().any(|c| ('1'..='9').contains(&c)) => {
            format!("\u{2212}{digits}")
        }
        Some(digits) => digits.to_owned(),
        None => text,
    }
}

/// `652–601 hPa`; one pressure when the ends read alike.
pub(crate) fn layer(bottom: Pressure, top: Pressure) -> String {
    let (b, t) = (number(bottom.hpa(), 0), number(top.hpa(), 0));
    // Where whole numbers can't tell the ends apart, tenths do.
    if b == t && (bottom.pa() - top.pa()).abs() >= 5.0 {
        return format!(
            "{}\u{2013}{} hPa",
            number(bottom.hpa(), 1),
            number(top.hpa(), 1)
        );
    }
    if b == t {
        format!("{b} hPa")
    } else {
        format!("{b}\u{2013}{t} hPa")
    }
}

/// `12.3 °C`.
pub(crate) fn celsius(temperature: Temperature) -> String {
    format!("{} \u{b0}C", number(temperature.c(), 1))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_well() {
        assert_eq!(number(-2.25, 1), "\u{2212}2.2");
        assert_eq!(number(-0.04, 1), "0.0");
        assert_eq!(number(3.0, 0), "3");
        let hpa = Pressure::from_hpa;
        assert_eq!(layer(hpa(652.0), hpa(601.0)), "652\u{2013}601 hPa");
        assert_eq!(layer(hpa(652.0), hpa(652.0)), "652 hPa");
        assert_eq!(layer(hpa(652.2), hpa(651.8)), "652.2\u{2013}651.8 hPa");
    }
}
