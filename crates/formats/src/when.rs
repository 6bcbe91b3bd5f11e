//! Dates and times as files write them. Everything is UTC unless the text carries an offset.

use jiff::{
    SignedDuration, Timestamp,
    civil::{Date, DateTime, Time},
    tz::TimeZone,
};

/// Words that may stand beside the numbers without changing them.
const HARMLESS: [&str; 6] = ["t", "z", "utc", "gmt", "nominal", "h"];

/// A civil date and time in UTC as an instant.
pub(crate) fn utc(datetime: DateTime) -> Option<Timestamp> {
    TimeZone::UTC.to_timestamp(datetime).ok()
}

/// Full date and time: RFC 3339, `2031, 05, 17, 18:00:00`, `2031/05/17 18:00`, `203105171800 UTC`, `2031051718`.
/// A date without an hour is not a time. Words other than UTC and the like make it unreadable: a local time must not
/// pass for UTC.
pub(crate) fn timestamp(text: &str) -> Option<Timestamp> {
    let text = text.trim();
    if let Ok(timestamp) = text.parse::<Timestamp>() {
        return Some(timestamp);
    }
    let (date, rest) = leading_date(text)?;
    let time = match rest.as_slice() {
        [hour] => clock_from(*hour, 0, 0.0),
        [hour, minute] => clock_from(*hour, *minute, 0.0),
        [hour, minute, second] => clock_from(*hour, *minute, f64::from(*second)),
        _ => None,
    }?;
    utc(date.to_datetime(time))
}

/// A date alone: `2031-05-17`, `2031/05/17`, `20310517`.
pub(crate) fn date(text: &str) -> Option<Date> {
    match leading_date(text)? {
        (date, rest) if rest.is_empty() => Some(date),
        _ => None,
    }
}

/// Date and the numbers after it.
fn leading_date(text: &str) -> Option<(Date, Vec<u32>)> {
    if text.len() > 80 || !words_are_harmless(text) {
        return None;
    }
    // A fraction of a second is below what any of this is used for.
    let text = match text.rsplit_once('.') {
        Some((whole, _)) if whole.contains(':') => whole,
        _ => text,
    };
    let groups: Vec<&str> = text
        .split(|character: char| !character.is_ascii_digit())
        .filter(|group| !group.is_empty())
        .collect();
    let digits = |group: &str| group.parse::<u32>().ok();
    let (year, month, day, rest) = match groups.as_slice() {
        [compact, rest @ ..] if compact.len() >= 8 && compact.len() % 2 == 0 => {
            let (day_part, time_part) = compact.split_at_checked(8)?;
            let mut numbers = Vec::new();
            let mut left = time_part;
            while let Some((pair, after)) = left.split_at_checked(2).filter(|(p, _)| !p.is_empty())
            {
                numbers.push(digits(pair)?);
                left = after;
            }
            for group in rest {
                // `20310517 1800`
                match group.split_at_checked(2) {
                    Some((hour, minute)) if minute.len() == 2 && numbers.is_empty() => {
                        numbers.extend([digits(hour)?, digits(minute)?]);
                    }
                    _ => numbers.push(digits(group)?),
                }
            }
            let (year, month_day) = day_part.split_at_checked(4)?;
            let (month, day) = month_day.split_at_checked(2)?;
            (digits(year)?, digits(month)?, digits(day)?, numbers)
        }
        [year, month, day, rest @ ..] if year.len() == 4 => {
            let numbers = rest
                .iter()
                .map(|group| digits(group))
                .collect::<Option<_>>()?;
            (digits(year)?, digits(month)?, digits(day)?, numbers)
        }
        _ => return None,
    };
    let date = Date::new(
        i16::try_from(year).ok()?,
        i8::try_from(month).ok()?,
        i8::try_from(day).ok()?,
    );
    Some((date.ok()?, rest))
}

fn words_are_harmless(text: &str) -> bool {
    text.split(|character: char| !character.is_alphabetic())
        .filter(|word| !word.is_empty())
        .all(|word| HARMLESS.contains(&word.to_ascii_lowercase().as_str()))
}

fn clock_from(hour: u32, minute: u32, second: f64) -> Option<Time> {
    Time::new(
        i8::try_from(hour).ok()?,
        i8::try_from(minute).ok()?,
        second as i8,
        0,
    )
    .ok()
}

/// A time of day: `18:00`, `18:00:07`, `18:00:07.5Z`.
pub(crate) fn time_of_day(text: &str) -> Option<Time> {
    let text = text.trim().trim_end_matches(['Z', 'z']);
    let seconds = seconds_of_day(text)?;
    Time::midnight()
        .checked_add(SignedDuration::try_from_secs_f64(seconds).ok()?)
        .ok()
}

/// Seconds since midnight of `18:00` or `18:00:07.5`.
pub(crate) fn seconds_of_day(text: &str) -> Option<f64> {
    let mut parts = text.split(':');
    let whole = |part: &str, limit: u32| -> Option<f64> {
        let digits = (1..=2).contains(&part.len()) && part.bytes().all(|b| b.is_ascii_digit());
        let number: u32 = digits.then(|| part.parse().ok())??;
        (number < limit).then_some(f64::from(number))
    };
    let hour = whole(parts.next()?, 24)?;
    let minute = whole(parts.next()?, 60)?;
    let second = match parts.next() {
        None => 0.0,
        Some(part) if part.bytes().all(|b| b.is_ascii_digit() || b == b'.') => {
            part.parse::<f64>().ok().filter(|second| *second < 61.0)?
        }
        Some(_) => return None,
    };
    parts
        .next()
        .is_none()
        .then_some(hour * 3600.0 + minute * 60.0 + second)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(text: &str, expect: &str) {
        assert_eq!(timestamp(text), Some(expect.parse().unwrap()), "{text}");
    }

    #[test]
    fn every_form_of_one_instant() {
        for text in [
            "2031-05-17T18:00Z",
            "2031-05-17T18:00:00Z",
            "2031-05-17T20:00:00+02:00",
            "2031-05-17 18:00 UTC",
            "2031, 05, 17, 18:00:00",
            "2031/05/17 18:00:00.4",
            "203105171800 UTC (nominal)",
            "20310517T180000Z",
            "20310517 1800",
            "2031051718",
        ] {
            check(text, "2031-05-17T18:00:00Z");
        }
    }

    #[test]
    fn what_is_no_instant_is_none() {
        for text in [
            "",
            "2031-05-17",
            "2031-05-17 18:00 local",
            "2031-05-17 18:00 CEST",
            "2031-13-17T18:00Z",
            "2031-05-17 25:00",
            "17 May 2031 18:00",
            "99999999999999999999",
        ] {
            assert_eq!(timestamp(text), None, "{text}");
        }
    }

    #[test]
    fn dates_and_times_of_day() {
        assert_eq!(date("2031/05/17"), Some(jiff::civil::date(2031, 5, 17)));
        assert_eq!(date("2031-05-17 18"), None);
        assert_eq!(seconds_of_day("01:02:03.5"), Some(3723.5));
        assert_eq!(seconds_of_day("24:00"), None);
        assert_eq!(seconds_of_day("1:2:3:4"), None);
        assert_eq!(
            time_of_day("20:44:13Z"),
            Some(jiff::civil::time(20, 44, 13, 0))
        );
    }
}
