//! Numbers as people read them: one precision a quantity, a real minus sign, the unit always there.

use crate::sounding::{Note, Parcel, Place, Sounding, Times, missing_for_daylight};
use crate::thermo::{Ascent, Pressure, Temperature};
use crate::trust::{Change, Cost};
use crate::{Extremes, ParcelRange};
use jiff::{Timestamp, tz::TimeZone};

/// The sentence that goes wherever the numbers go.
pub const CAUTION: &str =
    "Supports an authorised forecaster; official warnings and local procedures rule";

/// Why nothing can be decided when only the initials are wanting: the window then asks for them.
pub const INITIALS_FIRST: &str = "give your initials first";

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

/// "1 level", "3 levels".
pub fn counted(count: usize, one: &str, many: &str) -> String {
    format!("{count} {}", if count == 1 { one } else { many })
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

/// Name of a parcel.
pub fn parcel(parcel: Parcel) -> &'static str {
    match parcel {
        Parcel::Surface => "surface",
        Parcel::Mixed => "mixed",
        Parcel::MostUnstable => "most unstable",
    }
}

/// "1200 to 2400"; one number when both ends read the same. Limits from below keep their mark.
pub fn range(extremes: &Extremes) -> String {
    let (least, most) = (number(extremes.least, 0), number(extremes.most, 0));
    let mark = if extremes.at_least { "≥ " } else { "" };
    if least == most {
        format!("{mark}{least}")
    } else {
        format!("{mark}{least} to {mark}{most}")
    }
}

/// Range of CIN: "−30 to 0"; "−30 to 0, or none" where there is no free convection somewhere inside; "none" when that is
/// so throughout.
pub fn cin_range(of: &ParcelRange) -> String {
    match &of.cin {
        None => "none".to_owned(),
        Some(extremes) if of.sometimes_no_free_convection => {
            format!("{}, or none", range(extremes))
        }
        Some(extremes) => range(extremes),
    }
}

/// "2031-06-14 12:00 UTC"; "time unknown" without one.
pub fn time(time: Option<Timestamp>) -> String {
    time.map_or_else(
        || "time unknown".to_owned(),
        |time| {
            time.to_zoned(TimeZone::UTC)
                .strftime("%Y-%m-%d %H:%M UTC")
                .to_string()
        },
    )
}

/// What of the time was not in the message: "month and year assumed", "day assumed"; `None` when all of it was.
pub fn assumed(times: &Times) -> Option<&'static str> {
    if times.assumed {
        Some("month and year assumed")
    } else if times.day_assumed {
        Some("day assumed")
    } else {
        None
    }
}

/// Valid time of a sounding; says so when part of it was assumed.
pub fn valid_time(sounding: &Sounding) -> String {
    let text = time(sounding.times.valid());
    match assumed(&sounding.times) {
        Some(assumed) => format!("{text} ({assumed})"),
        None => text,
    }
}

/// What a sounding lacks for day or night to be known, and what to do about it.
pub fn daylight_lacks(sounding: &Sounding) -> String {
    let station = &sounding.station;
    let known = station.wmo.is_some() || station.wigos.is_some() || station.icao.is_some();
    // A table can say itself what its station and name don't.
    let table = sounding.source.format == "columns";
    let mut remedies = Vec::new();
    if sounding.times.valid().is_none() && table {
        remedies.push("add a line `# time:` with date and time in UTC");
    }
    if station.position.is_none() {
        if known {
            remedies.push("add the station to stations.csv");
        } else if table {
            remedies.push("add a line `# position: latitude, longitude, elevation`");
        }
    }
    let missing = missing_for_daylight(sounding);
    if remedies.is_empty() {
        missing.to_owned()
    } else {
        format!("{missing} ({})", remedies.join("; "))
    }
}

/// The change of a cost that counts most: "CAPE −850 J/kg (mixed)"; "no change in CAPE" where all of it reads as zero;
/// "cost unknown" without one.
pub fn cost(cost: Option<&Cost>) -> String {
    let Some((which, change)) = cost.and_then(worst_change) else {
        return "cost unknown".to_owned();
    };
    let shows = |value: &f64| value.abs() >= 0.5;
    let cin = change.cin.filter(shows).map(energy_change);
    match (change.cape.filter(shows), cin) {
        (Some(cape), None) => format!("CAPE {} ({})", energy_change(cape), parcel(which)),
        (Some(cape), Some(cin)) => {
            format!(
                "CAPE {} ({}), CIN {cin}",
                energy_change(cape),
                parcel(which)
            )
        }
        (None, None) => "no change in CAPE".to_owned(),
        (None, Some(cin)) => format!("no change in CAPE; CIN {cin} ({})", parcel(which)),
    }
}

/// The parcel whose CAPE changes most, and by how much; of changes that read alike, that with the largest change of CIN.
pub fn worst_change(cost: &Cost) -> Option<(Parcel, Change)> {
    let mut worst: Option<(Parcel, Change, (f64, f64))> = None;
    for which in Parcel::ALL {
        let change = cost.parcel(which);
        let Some(cape) = change.cape else { continue };
        let size = (
            cape.abs().round(),
            change.cin.unwrap_or_default().abs().round(),
        );
        if worst.is_none_or(|(.., largest)| size > largest) {
            worst = Some((which, change, size));
        }
    }
    worst.map(|(which, change, _)| (which, change))
}

/// "line 12", "byte 100"; empty for the file as a whole, and for a level of the merged profile, whose number means nothing
/// to people: such notes name the surface or the pressure.
pub fn place(place: Place) -> String {
    match place {
        Place::File | Place::Level(_) => String::new(),
        Place::Line(line) => format!("line {line}"),
        Place::Byte(byte) => format!("byte {byte}"),
    }
}

/// A note on one line.
pub fn note(note: &Note) -> String {
    let mut text = place(note.place);
    if !text.is_empty() {
        text.push_str(": ");
    }
    text.push_str(&note.what);
    if !note.why.is_empty() {
        text.push_str(" (");
        text.push_str(&note.why);
        text.push(')');
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_have_a_real_minus_and_no_minus_zero() {
        for (value, decimals, expected) in [
            (-3.26, 1, "\u{2212}3.3"),
            (-0.04, 1, "0.0"),
            (-0.4, 0, "0"),
            (12.0, 0, "12"),
            (-10.0, 0, "\u{2212}10"),
        ] {
            assert_eq!(number(value, decimals), expected);
        }
        assert_eq!(energy_change(-0.2), "±0 J/kg");
        assert_eq!(energy_change(0.6), "+1 J/kg");
        assert_eq!(energy(Some(1850.4), true), "≥ 1850 J/kg");
        assert_eq!(energy(None, false), "none");
    }

    #[test]
    fn what_day_and_night_lack_is_named_with_the_remedy() {
        let mut sounding = Sounding::default();
        assert_eq!(daylight_lacks(&sounding), "no time and no position");
        sounding.station.wmo = Some("99001".to_owned());
        sounding.times.nominal = "2031-06-14T12:00:00Z".parse().ok();
        assert_eq!(
            daylight_lacks(&sounding),
            "no position (add the station to stations.csv)"
        );
    }

    #[test]
    fn a_cost_names_what_changes() {
        let change = |cape, cin| Change {
            cape: Some(cape),
            cin: Some(cin),
        };
        let cost = |surface, mixed| {
            super::cost(Some(&Cost {
                surface,
                mixed,
                most_unstable: change(0.0, 0.0),
            }))
        };
        let none = change(-0.2, 0.1);
        assert_eq!(cost(none, change(0.3, 0.0)), "no change in CAPE");
        assert_eq!(
            cost(none, change(0.0, 12.0)),
            "no change in CAPE; CIN +12 J/kg (mixed)"
        );
        assert_eq!(
            cost(change(850.0, 0.0), change(-850.4, -5.0)),
            "CAPE \u{2212}850 J/kg (mixed), CIN \u{2212}5 J/kg"
        );
        assert_eq!(super::cost(None), "cost unknown");
        assert_eq!(counted(1, "level", "levels"), "1 level");
        assert_eq!(counted(0, "level", "levels"), "0 levels");
    }

    #[test]
    fn a_time_says_what_of_it_was_assumed() {
        let mut sounding = Sounding::default();
        sounding.times.launch = "2031-06-14T23:30:00Z".parse().ok();
        assert_eq!(valid_time(&sounding), "2031-06-14 23:30 UTC");
        sounding.times.day_assumed = true;
        assert_eq!(valid_time(&sounding), "2031-06-14 23:30 UTC (day assumed)");
        sounding.times = crate::sounding::Times {
            assumed: true,
            day_assumed: false,
            ..sounding.times
        };
        assert_eq!(
            valid_time(&sounding),
            "2031-06-14 23:30 UTC (month and year assumed)"
        );
    }

    #[test]
    fn a_range_of_one_value_reads_as_one() {
        let at = Temperature::from_c(10.0);
        let mut extremes = Extremes {
            least: 99.6,
            least_at: at,
            most: 100.4,
            most_at: at,
            at_least: false,
        };
        assert_eq!(range(&extremes), "100");
        extremes.most = 250.0;
        extremes.at_least = true;
        assert_eq!(range(&extremes), "≥ 100 to ≥ 250");
    }

    #[test]
    fn a_range_of_cin_says_where_there_is_none() {
        let at = Temperature::from_c(10.0);
        let mut of = ParcelRange {
            cin: Some(Extremes {
                least: -30.0,
                least_at: at,
                most: -0.2,
                most_at: at,
                at_least: false,
            }),
            ..ParcelRange::default()
        };
        assert_eq!(cin_range(&of), "\u{2212}30 to 0");
        of.sometimes_no_free_convection = true;
        assert_eq!(cin_range(&of), "\u{2212}30 to 0, or none");
        of.cin = None;
        assert_eq!(cin_range(&of), "none");
    }
}
