//! Nominal hour and release of a header record.

use super::Notes;
use super::fields::Fields;
use crate::tally::Tally;
use crate::when;
use dewbound_sounding::Times;
use jiff::{SignedDuration, Timestamp, civil::Date};

/// Nominal hour and release.
pub(super) fn times(header: &Fields, notes: &mut Notes, tally: &mut Tally) -> Times {
    let mut number = |name, columns| header.number(name, columns, tally);
    let date = (|| {
        let year = i16::try_from(number("YEAR", 13..17)?).ok()?;
        let month = i8::try_from(number("MONTH", 18..20)?).ok()?;
        let day = i8::try_from(number("DAY", 21..23)?).ok()?;
        Date::new(year, month, day).ok()
    })();
    let hour = number("HOUR", 24..26);
    let release = number("RELTIME", 27..31);
    let Some(date) = date else {
        notes.add(
            "the header's date cannot be read; the time is unknown".into(),
            "",
        );
        return Times::default();
    };
    let at = |hour: i64, minute: i64| {
        let hour = i8::try_from(hour).ok()?;
        let minute = i8::try_from(minute).ok()?;
        let time = jiff::civil::Time::new(hour, minute, 0, 0).ok()?;
        when::utc(date.to_datetime(time))
    };
    let nominal = hour.filter(|hour| *hour != 99).and_then(|hour| at(hour, 0));
    if hour.is_some_and(|hour| hour != 99) && nominal.is_none() {
        notes.add(
            "the header's hour is impossible; it counts as missing".into(),
            "",
        );
    }
    let mut times = Times {
        nominal,
        ..Times::default()
    };
    let Some(release) = release.filter(|release| *release != 9999) else {
        if nominal.is_none() {
            notes.add("the header gives neither hour nor release time".into(), "");
        }
        return times;
    };
    let (hour, minute) = (release / 100, release % 100);
    let minute_known = minute != 99;
    let Some(release) = at(hour, if minute_known { minute } else { 0 }) else {
        notes.add(
            format!("release time {release:04} is impossible; it counts as missing"),
            "",
        );
        return times;
    };
    if !minute_known {
        notes.add(
            format!("the minute of the release is not known; {hour:02}:00 is taken"),
            "",
        );
    }
    times.launch = match nominal {
        Some(nominal) => Some(nearest_day(release, nominal)),
        None => {
            times.day_assumed = true;
            notes.add(
                format!(
                    "the hour is missing; the release at {hour:02}:{:02} is taken to be on {date}",
                    if minute_known { minute } else { 0 }
                ),
                "the date is that of the hour: a release late in the evening may belong to the day before",
            );
            Some(release)
        }
    };
    times
}

/// The date belongs to the nominal hour: a release at 23:03 for 00 UTC was the day before.
fn nearest_day(release: Timestamp, nominal: Timestamp) -> Timestamp {
    let half = SignedDuration::from_hours(12);
    let day = SignedDuration::from_hours(24);
    let ahead = release.duration_since(nominal);
    let shifted = if ahead > half {
        release.checked_sub(day)
    } else if ahead < -half {
        release.checked_add(day)
    } else {
        Ok(release)
    };
    shifted.unwrap_or(release)
}
