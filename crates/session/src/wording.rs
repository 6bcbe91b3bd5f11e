//! Numbers as people read them: one precision a quantity, a real minus sign, the unit always there.

use crate::thermo::{Ascent, Pressure, Temperature};

/// The sentence that goes wherever the numbers go.
pub const CAUTION: &str =
    "Supports an authorised forecaster; official warnings and local procedures rule";

/// The mark of demonstration soundings.
pub const INVENTED: &str = "INVENTED DATA";

/// A number with a real minus sign and no "−0".
pub fn number(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(digits) if digits.chars().all(|c| matches!(c, '0' | '.')) => digits.to_owned(),
        Some(digits) => format!("\u{2212}{digits}"),
        None => text,
    }
}

/// "1850 J/kg"; "≥ 1850 J/kg" when it is a lower limit; "none" without a value.
pub fn energy(value: Option<f64>, at_least: bool) -> String {
    match value {
        Some(value) if at_least => format!("≥ {} J/kg", number(value, 0)),
        Some(value) => format!("{} J/kg", number(value, 0)),
        None => "none".to_owned(),
    }
}

/// A change with its sign: "+320 J/kg", "−40 J/kg", "±0 J/kg".
pub fn energy_change(value: f64) -> String {
    let text = number(value, 0);
    if text == "0" {
        "±0 J/kg".to_owned()
    } else if value > 0.0 {
        format!("+{text} J/kg")
    } else {
        format!("{text} J/kg")
    }
}

/// CAPE of an ascent; "no parcel" without one.
pub fn cape(ascent: Option<&Ascent>) -> String {
    ascent.map_or_else(
        || "no parcel".to_owned(),
        |ascent| energy(Some(ascent.cape), ascent.at_least),
    )
}

/// "925 hPa"; tenths below 100 hPa.
pub fn pressure(pressure: Pressure) -> String {
    let decimals = usize::from(pressure.hpa() < 100.0);
    format!("{} hPa", number(pressure.hpa(), decimals))
}

/// "18.4 °C".
pub fn celsius(temperature: Temperature) -> String {
    format!("{} °C", number(temperature.c(), 1))
}
