//! Single five-figure groups: air, wind, pressure. Code tables of WMO-No. 306, Vol. I.1, from memory.

use dewbound_sounding::{Wind, thermo};

/// A coded quantity: given, coded as missing (`/`), or unreadable for the stated reason.
pub(super) type Field<T> = Result<Option<T>, &'static str>;

/// Knots to m/s: one international nautical mile is 1,852 m.
pub(super) const KNOT: f64 = 1852.0 / 3600.0;

/// The number in a run of digits; `None` for anything else.
pub(super) fn number(text: &str) -> Option<u32> {
    (!text.is_empty() && text.bytes().all(|byte| byte.is_ascii_digit()))
        .then(|| text.parse().ok())
        .flatten()
}

/// A piece of a group by byte positions; empty when the group is too short or not plain ASCII there.
pub(super) fn cut(group: &str, from: usize, to: usize) -> &str {
    group.get(from..to).unwrap_or("")
}

/// Whether every character of a non-empty text is a solidus.
pub(super) fn is_missing(text: &str) -> bool {
    !text.is_empty() && text.bytes().all(|byte| byte == b'/')
}

/// Temperature and dew point from one `TTTDD` group.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Air {
    /// Temperature, K.
    pub temperature: Field<f64>,
    /// Dew point, K; missing when the temperature it is subtracted from is.
    pub dewpoint: Field<f64>,
}

/// Decodes `TTTDD`.
///
/// `TTT` is tens and units of the degree and the approximate tenths (code table 3931): an even tenths figure is
/// positive, an odd one negative, so each figure stands for two neighbouring tenths (4 for 0.4 and 0.5, 5 for -0.4 and
/// -0.5). The figure itself is taken as the tenths, which puts the value within 0.1 K of the measured one; this is why
/// the step of coded temperatures is 0.2 K.
///
/// `DD` is the dew-point depression (code table 0777): 00 to 50 tenths of a degree, 56 to 99 whole degrees plus 50; 51
/// to 55 are not used.
pub(super) fn air(group: &str) -> Air {
    if group.len() != 5 || !group.is_ascii() {
        let reason = "a temperature group has five figures";
        return Air {
            temperature: Err(reason),
            dewpoint: Err(reason),
        };
    }
    let temperature = celsius(cut(group, 0, 3));
    let dewpoint = match (temperature, depression(cut(group, 3, 5))) {
        (_, Err(reason)) => Err(reason),
        (Ok(Some(celsius)), Ok(Some(depression))) => Ok(Some(kelvin(celsius - depression))),
        (Err(_), Ok(Some(_))) => Err("the temperature it is subtracted from is unreadable"),
        (Ok(None), Ok(Some(_))) => Err("a depression without the temperature it belongs to"),
        (_, Ok(None)) => Ok(None),
    };
    Air {
        temperature: temperature.map(|value| value.map(kelvin)),
        dewpoint,
    }
}

fn celsius(figures: &str) -> Field<f64> {
    if is_missing(figures) {
        return Ok(None);
    }
    let tenths = number(figures).ok_or("temperature has three figures or ///")?;
    let size = f64::from(tenths) / 10.0;
    Ok(Some(if tenths % 2 == 0 { size } else { -size }))
}

fn depression(figures: &str) -> Field<f64> {
    if is_missing(figures) {
        return Ok(None);
    }
    match number(figures).ok_or("dew-point depression has two figures or //")? {
        code @ 0..=50 => Ok(Some(f64::from(code) / 10.0)),
        51..=55 => Err("dew-point depressions 51 to 55 are not used"),
        code => Ok(Some(f64::from(code - 50))),
    }
}

fn kelvin(celsius: f64) -> f64 {
    celsius + thermo::ZERO_CELSIUS
}

/// Decodes `ddfff`: direction in tens of degrees, speed in the unit of the message (`unit`, in m/s); 500 added to the
/// speed stands for five degrees more.
pub(super) fn wind(group: &str, unit: f64) -> Field<Wind> {
    if group.len() != 5 || !group.is_ascii() {
        return Err("a wind group has five figures");
    }
    if is_missing(group) {
        return Ok(None);
    }
    let tens = number(cut(group, 0, 2)).ok_or("direction has two figures")?;
    let coded = number(cut(group, 2, 5)).ok_or("speed has three figures")?;
    if tens == 99 {
        return Err("direction 99 is variable");
    }
    if tens > 36 {
        return Err("direction is at most 36 tens of degrees");
    }
    let (five, speed) = if coded >= 500 {
        (5, coded - 500)
    } else {
        (0, coded)
    };
    let direction = match tens * 10 + five {
        // 000 without speed is calm; with one it can only mean north.
        0 if speed > 0 => 360,
        degrees if degrees > 360 => degrees - 360,
        degrees => degrees,
    };
    Ok(Some(Wind {
        direction: f64::from(direction),
        speed: f64::from(speed) * unit,
    }))
}

/// Pressure of three figures, Pa: whole hectopascals without the thousands in parts A and B, tenths of a hectopascal in
/// parts C and D.
pub(super) fn pressure(figures: &str, upper: bool) -> Field<f64> {
    if is_missing(figures) {
        return Ok(None);
    }
    if figures.len() != 3 {
        return Err("pressure has three figures");
    }
    let figures = number(figures).ok_or("pressure has three figures")?;
    if upper {
        if figures == 0 {
            return Err("a pressure of zero");
        }
        return Ok(Some(f64::from(figures) * 10.0));
    }
    let hectopascals = if figures < 100 {
        figures + 1000
    } else {
        figures
    };
    Ok(Some(f64::from(hectopascals) * 100.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Decoded by hand: 22.8 with a depression of 18; -5.7 with 2.1; sign by the tenths figure at zero.
    #[test]
    fn air_groups() {
        let check = |group: &str, temperature: Option<f64>, dewpoint: Option<f64>| {
            let found = air(group);
            let close = |found: Field<f64>, expect: Option<f64>| match (found, expect) {
                (Ok(Some(found)), Some(expect)) => (found - 273.15 - expect).abs() < 1e-9,
                (Ok(None), None) => true,
                _ => false,
            };
            assert!(close(found.temperature, temperature), "{group}: {found:?}");
            assert!(close(found.dewpoint, dewpoint), "{group}: {found:?}");
        };
        check("22868", Some(22.8), Some(4.8));
        check("05721", Some(-5.7), Some(-7.8));
        check("00000", Some(0.0), Some(0.0));
        check("00150", Some(-0.1), Some(-5.1));
        check("56356", Some(-56.3), Some(-62.3));
        check("10499", Some(10.4), Some(-38.6));
        check("565//", Some(-56.5), None);
        check("/////", None, None);
    }

    #[test]
    fn unreadable_air_groups() {
        for group in ["16///", "1x456", "123", "1234567", "°°456"] {
            assert!(air(group).temperature.is_err(), "{group}");
        }
        for group in ["10451", "10455", "104x1", "1040/", "///12"] {
            assert!(air(group).dewpoint.is_err(), "{group}");
        }
        assert!(air("10453").temperature.is_ok());
    }

    /// Decoded by hand: 270 degrees 65 kt; 315 degrees 93 kt; 265 degrees 122 kt.
    #[test]
    fn wind_groups() {
        let check = |group: &str, direction: f64, speed: f64| {
            let found = wind(group, 1.0).unwrap().unwrap();
            assert_eq!(
                (found.direction, found.speed),
                (direction, speed),
                "{group}"
            );
        };
        check("27065", 270.0, 65.0);
        check("31593", 315.0, 93.0);
        check("26622", 265.0, 122.0);
        check("00000", 0.0, 0.0);
        check("00503", 5.0, 3.0);
        check("36003", 360.0, 3.0);
        check("36503", 5.0, 3.0);
        check("00003", 360.0, 3.0);
        assert_eq!(wind("/////", 1.0), Ok(None));
        for group in ["37010", "99010", "27///", "//012", "2701", "7x8//"] {
            assert!(wind(group, 1.0).is_err(), "{group}");
        }
        let knots = wind("18036", KNOT).unwrap().unwrap();
        assert!((knots.speed - 18.52).abs() < 1e-9, "36 kt are 18.52 m/s");
    }

    #[test]
    fn pressures() {
        assert_eq!(pressure("009", false), Ok(Some(100_900.0)));
        assert_eq!(pressure("834", false), Ok(Some(83_400.0)));
        assert_eq!(pressure("704", true), Ok(Some(7_040.0)));
        assert_eq!(pressure("050", true), Ok(Some(500.0)));
        assert_eq!(pressure("///", true), Ok(None));
        assert!(pressure("000", true).is_err());
        assert!(pressure("8x4", false).is_err());
        assert!(pressure("84", false).is_err());
    }
}
