//! Month and year: the message codes only the day and the hour.

use super::{header::DayHour, sections::Launch};
use crate::ReadOptions;
use dewbound_sounding::Times;
use jiff::{
    Timestamp, ToSpan,
    civil::{Date, DateTime},
    tz::TimeZone,
};

/// The date that days are matched to, and where it is from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Reference {
    date: Date,
    origin: Origin,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Origin {
    Name,
    AsOf,
    Modified,
}

impl Reference {
    /// From the file's name, else the date given by the user, else the file's own date.
    pub fn of(name: &str, options: &ReadOptions) -> Option<Self> {
        let given = options.as_of.map(|date| (date, Origin::AsOf));
        let modified = || {
            let date = options.modified?.to_zoned(TimeZone::UTC).date();
            Some((date, Origin::Modified))
        };
        date_in_name(name)
            .map(|date| (date, Origin::Name))
            .or(given)
            .or_else(modified)
            .map(|(date, origin)| Self { date, origin })
    }

    /// Where the date is from, with the date.
    pub fn describe(&self) -> String {
        let date = self.date;
        match self.origin {
            Origin::Name => format!("the file's name ({date})"),
            Origin::AsOf => format!("the date given ({date})"),
            Origin::Modified => format!("the file's own date ({date})"),
        }
    }

    /// The last day of the past that has this number. An ascent is filed under an hour that may lie a little after the
    /// launch, and a name may carry the day of the launch or a local date: there the day after still counts as past. A
    /// date given by the user is taken at its word.
    fn latest(&self, day: i8) -> Option<Date> {
        let mut date = match self.origin {
            Origin::AsOf => self.date,
            Origin::Name | Origin::Modified => self.date.tomorrow().unwrap_or(self.date),
        };
        // No two months in a row lack a day 31.
        for _ in 0..=62 {
            if date.day() == day {
                return Some(date);
            }
            date = date.yesterday().ok()?;
        }
        None
    }

    /// Days from the date found back to the reference; negative when it lies after.
    pub fn days_before(&self, found: Date) -> i32 {
        found.until(self.date).map_or(0, |span| span.get_days())
    }
}

/// Nominal time and launch on the day that fits the reference.
pub(super) fn times(
    when: DayHour,
    launch: Option<Launch>,
    reference: &Reference,
) -> Option<(Times, Date)> {
    let date = reference.latest(when.day)?;
    let nominal = utc(date.at(when.hour, 0, 0, 0))?;
    Some((
        Times {
            launch: launch.and_then(|launch| launch_near(date, when.hour, launch)),
            nominal: Some(nominal),
            assumed: true,
            ..Times::default()
        },
        date,
    ))
}

/// The launch is coded without a day: of the day before, the same and the next, the one nearest to the nominal hour.
fn launch_near(date: Date, hour: i8, launch: Launch) -> Option<Timestamp> {
    let minutes = i32::from(launch.hour) * 60 + i32::from(launch.minute);
    let off = minutes - i32::from(hour) * 60;
    let shift = if off > 720 {
        -1
    } else if off < -720 {
        1
    } else {
        0
    };
    let date = date.checked_add(shift.days()).ok()?;
    utc(date.at(launch.hour, launch.minute, 0, 0))
}

fn utc(time: DateTime) -> Option<Timestamp> {
    Some(time.to_zoned(TimeZone::UTC).ok()?.timestamp())
}

/// The first date in a file's name: `20191105`, alone or followed by hours, minutes and seconds, or `2019-11-05` with any
/// of `-`, `_` and `.` between.
fn date_in_name(name: &str) -> Option<Date> {
    let name = name.rsplit(['/', '\\']).next().unwrap_or(name);
    let mut rest = name;
    loop {
        rest = rest.trim_start_matches(|character: char| !character.is_ascii_digit());
        if rest.is_empty() {
            return None;
        }
        let run = rest.len() - rest.trim_start_matches(|c: char| c.is_ascii_digit()).len();
        let found = match run {
            8 | 10 | 12 | 14 => date(rest.get(0..4)?, rest.get(4..6)?, rest.get(6..8)?),
            4 => separated(rest),
            _ => None,
        };
        if found.is_some() {
            return found;
        }
        rest = rest.get(run..)?;
    }
}

/// `2019-11-05` at the start of a text, and no further figure.
fn separated(text: &str) -> Option<Date> {
    let separator = text.get(4..5).filter(|it| matches!(*it, "-" | "_" | "."))?;
    if text.get(7..8) != Some(separator) {
        return None;
    }
    let ends = text
        .get(10..)
        .is_some_and(|after| !after.starts_with(|c: char| c.is_ascii_digit()));
    date(text.get(0..4)?, text.get(5..7)?, text.get(8..10)?).filter(|_| ends)
}

fn date(year: &str, month: &str, day: &str) -> Option<Date> {
    let year: i16 = year.parse().ok()?;
    // Radiosondes began in the 1930s; four figures outside are more likely a station or a counter.
    (1930..=2100).contains(&year).then_some(())?;
    Date::new(year, month.parse().ok()?, day.parse().ok()?).ok()
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date as civil;

    #[test]
    fn dates_in_names() {
        let check = |name: &str, expect: Option<Date>| {
            assert_eq!(date_in_name(name), expect, "{name}");
        };
        let fifth = Some(civil(2019, 11, 5));
        check("A_USXX01ABCD050000_C_ABCD_20191105012317_50.txt", fifth);
        check("vale_00963_20191105_12z.txt", fifth);
        check("x-2019-11-05T12.txt", fifth);
        check("2019_11_05.txt", fifth);
        check("20301231/vale_2019.11.05", fifth);
        check("2019110512", fifth);
        check("vale_00694_day06_00z.txt", None);
        check("usxx04_abcd_301800_00365_00451.txt", None);
        check("20191305", None);
        check("12345678", None);
        check("2019--11-05", None);
        check("2019-11_05", None);
        check("", None);
    }

    fn reference(date: Date, origin: Origin) -> Reference {
        Reference { date, origin }
    }

    #[test]
    fn nearest_day_in_the_past() {
        let check = |origin: Origin, day: i8, expect: Date| {
            let found = reference(civil(2024, 3, 5), origin).latest(day);
            assert_eq!(found, Some(expect), "{origin:?} {day}");
        };
        check(Origin::Name, 5, civil(2024, 3, 5));
        check(Origin::Name, 6, civil(2024, 3, 6));
        check(Origin::AsOf, 6, civil(2024, 2, 6));
        check(Origin::Modified, 7, civil(2024, 2, 7));
        check(Origin::AsOf, 29, civil(2024, 2, 29));
        check(Origin::AsOf, 31, civil(2024, 1, 31));
    }

    #[test]
    fn launches_belong_to_the_nearest_day() {
        let check = |hour: i8, launch: (i8, i8), expect: &str| {
            let when = DayHour { day: 5, hour };
            let launch = Launch {
                hour: launch.0,
                minute: launch.1,
            };
            let (times, _) = times(
                when,
                Some(launch),
                &reference(civil(2024, 3, 5), Origin::Name),
            )
            .unwrap();
            assert_eq!(times.launch.unwrap().to_string(), expect);
            assert!(times.assumed);
        };
        check(0, (23, 26), "2024-03-04T23:26:00Z");
        check(0, (0, 10), "2024-03-05T00:10:00Z");
        check(12, (11, 2), "2024-03-05T11:02:00Z");
        check(23, (0, 5), "2024-03-06T00:05:00Z");
    }
}
