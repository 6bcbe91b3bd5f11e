//! The value of a declared number, as text and as JSON.

use super::{Quantity, Unit};
use crate::chart::{Units, bearing};
use crate::report::rounded;
use crate::thermo::{Composite, Vector};
use crate::wording::number;
use serde_json::json;

/// A value, SI.
#[derive(Debug, Clone, PartialEq)]
pub enum Value {
    /// A number.
    Number(f64),
    /// A number that is only a lower limit: the sounding ends too low.
    AtLeast(f64),
    /// A wind or a motion, m/s: where it comes from, then how fast.
    Wind(Vector),
    /// A difference of winds, m/s: its size first, for that is what is asked.
    Difference(Vector),
    /// An index with its terms.
    Composite(Composite),
    /// Yes or no.
    YesNo(bool),
}

impl Value {
    /// Everything in it is a finite number.
    pub fn is_finite(&self) -> bool {
        match self {
            Self::Number(value) | Self::AtLeast(value) => value.is_finite(),
            Self::Wind(wind) | Self::Difference(wind) => wind.u.is_finite() && wind.v.is_finite(),
            Self::Composite(composite) => {
                composite.value.is_finite()
                    && composite
                        .terms
                        .iter()
                        .all(|term| term.input.is_finite() && term.factor.is_finite())
            }
            Self::YesNo(_) => true,
        }
    }

    /// A lower limit only.
    pub fn is_at_least(&self) -> bool {
        matches!(self, Self::AtLeast(_))
    }

    /// A number, or a lower limit.
    pub(super) fn limit(value: f64, at_least: bool) -> Self {
        if at_least {
            Self::AtLeast(value)
        } else {
            Self::Number(value)
        }
    }
}

impl Quantity {
    /// Unit in the units a person has chosen; empty without one.
    pub fn sign(&self, units: Units) -> &'static str {
        self.unit.sign(units)
    }

    /// "CAPE, J/kg"; the name alone without a unit.
    pub fn heading(&self, units: Units) -> String {
        match self.sign(units) {
            "" => self.label.to_owned(),
            sign => format!("{}, {sign}", self.label),
        }
    }

    /// A value without its unit: "1850", "≥ 1850", "245° 42", "54 from 262°", "yes".
    pub fn text(&self, value: &Value, units: Units) -> String {
        let plain = |si: f64| {
            let (value, decimals) = self.unit.shown(si, self.decimals, units);
            number(value, decimals)
        };
        match value {
            Value::Number(value) => plain(*value),
            Value::AtLeast(value) => format!("≥ {}", plain(*value)),
            Value::Wind(wind) => {
                // Without speed it comes from nowhere: 0, not the 360 of a north wind.
                let from = if wind.speed() > 0.0 {
                    bearing(*wind)
                } else {
                    "0°".to_owned()
                };
                format!("{from} {}", plain(wind.speed()))
            }
            Value::Difference(wind) => match difference_from(*wind) {
                Some(from) => format!("{} {from}", plain(wind.speed())),
                None => plain(wind.speed()),
            },
            Value::Composite(composite) => plain(composite.value),
            Value::YesNo(true) => "yes".to_owned(),
            Value::YesNo(false) => "no".to_owned(),
        }
    }

    /// A value with its unit: "1850 J/kg", "245° 42 kt", "87°", "yes". Of a difference of winds the size alone, whose direction is
    /// told apart.
    pub fn text_with_unit(&self, value: &Value, units: Units) -> String {
        let text = match value {
            Value::Difference(wind) => self.text(&Value::Number(wind.speed()), units),
            _ => self.text(value, units),
        };
        match self.sign(units) {
            "" => text,
            // The sign of degrees stands close (SI brochure, 9th edition, 5.4.3).
            "°" => format!("{text}°"),
            sign => format!("{text} {sign}"),
        }
    }

    /// The terms of a composite index, one a line: "mixed CAPE: 2000 J/kg, factor 1.33". Empty for any other number.
    pub fn terms(value: &Value) -> Vec<String> {
        let Value::Composite(composite) = value else {
            return Vec::new();
        };
        composite
            .terms
            .iter()
            .map(|term| {
                let unit = if term.unit.is_empty() {
                    String::new()
                } else {
                    format!(" {}", term.unit)
                };
                format!(
                    "{}: {}{unit}, factor {}",
                    term.name,
                    number(term.input, input_decimals(term.input)),
                    number(term.factor, 2)
                )
            })
            .collect()
    }

    /// A value as JSON, in the unit of the key; two decimals more than a person is shown.
    pub fn json(&self, value: &Value) -> serde_json::Value {
        let decimals = i32::try_from(self.decimals).unwrap_or(0) + 2;
        let plain = |si: f64| rounded(self.unit.reported(si), decimals);
        match value {
            Value::Number(value) | Value::AtLeast(value) => plain(*value),
            Value::Wind(wind) | Value::Difference(wind) => json!({
                "from_deg": rounded(wind.direction_from(), 2),
                "speed_ms": rounded(Unit::Wind.reported(wind.speed()), decimals),
            }),
            Value::Composite(composite) => {
                let terms: Vec<serde_json::Value> = composite
                    .terms
                    .iter()
                    .map(|term| {
                        json!({
                            "name": term.name,
                            "input": rounded(term.input, 4),
                            "unit": term.unit,
                            "factor": rounded(term.factor, 4),
                        })
                    })
                    .collect();
                json!({ "value": plain(composite.value), "terms": terms })
            }
            Value::YesNo(value) => json!(value),
        }
    }
}

/// A difference of winds below this has no direction worth telling, m/s: half of the last digit shown. Convention of this
/// program.
const LEAST_DIFFERENCE: f64 = 0.05;

/// "from 262°"; `None` for a difference that is next to nothing and comes from nowhere.
pub(crate) fn difference_from(wind: Vector) -> Option<String> {
    (wind.speed() >= LEAST_DIFFERENCE).then(|| format!("from {}", bearing(wind)))
}

/// Decimals of a term's input, whose unit says too little about its size.
fn input_decimals(input: f64) -> usize {
    match input.abs() {
        large if large >= 100.0 => 0,
        middle if middle >= 1.0 => 1,
        _ => 2,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::find;

    #[test]
    fn a_wind_is_direction_and_speed() {
        let quantity = find("mean_0_to_6km_ms").unwrap();
        let text = |wind| quantity.text(&Value::Wind(wind), Unit::of_reports());
        assert_eq!(text(Vector::from_wind(245.0, 21.6)), "245° 21.6");
        assert_eq!(text(Vector::from_wind(0.0, 5.0)), "360° 5.0");
        assert_eq!(text(Vector::from_wind(5.0, 5.0)), "005° 5.0");
        assert_eq!(text(Vector::default()), "0° 0.0");
        // 10 m/s = 10 * 3600 / 1852 kt = 19.4 kt.
        let knots = Units::default();
        let wind = Value::Wind(Vector::from_wind(270.0, 10.0));
        assert_eq!(quantity.text(&wind, knots), "270° 19");
        assert_eq!(quantity.text_with_unit(&wind, knots), "270° 19 kt");
        let difference = find("difference_0_to_6km_ms").unwrap();
        let size = Value::Difference(Vector::from_wind(262.0, 27.9));
        assert_eq!(difference.text(&size, Unit::of_reports()), "27.9 from 262°");
        assert_eq!(difference.text_with_unit(&size, knots), "54 kt");
        let nothing = Value::Difference(Vector::from_wind(262.0, 0.04));
        assert_eq!(difference.text(&nothing, Unit::of_reports()), "0.0");
        let angle = find("critical_angle_deg").unwrap();
        assert_eq!(angle.text_with_unit(&Value::Number(87.2), knots), "87°");
        let cape = find("cape_jkg").unwrap();
        assert_eq!(
            cape.text_with_unit(&Value::AtLeast(1850.4), knots),
            "≥ 1850 J/kg"
        );
        assert_eq!(
            quantity.json(&wind),
            json!({ "from_deg": 270.0, "speed_ms": 10.0 })
        );
    }

    #[test]
    fn a_lower_limit_keeps_its_mark() {
        let cape = find("cape_jkg").unwrap();
        let text = |value| cape.text(&value, Unit::of_reports());
        assert_eq!(text(Value::AtLeast(1850.4)), "≥ 1850");
        assert_eq!(text(Value::Number(1850.4)), "1850");
    }
}
