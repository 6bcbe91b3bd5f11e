//! Which rows belong to the ascent: time since launch, the wait on the ground before it, the fall after it.
//!
//! Ground stations often record from the moment the sonde is switched on until it lands. Rows before the launch and
//! after the balloon burst are another profile in the same table; mixed in by pressure they would spoil this one.

use super::names::Quantity;
use super::rows::Row;
use dewbound_sounding::{Note, Place};
use jiff::{
    SignedDuration, Timestamp,
    civil::{Date, Time},
    tz::TimeZone,
};

const DAY: f64 = 86_400.0;

/// Gives every row with a time its seconds since launch, and returns the launch.
pub(crate) fn count_from_launch(
    rows: &mut [Row],
    launch: Option<Timestamp>,
    date: Option<Date>,
    notes: &mut Vec<Note>,
) -> Option<Timestamp> {
    let elapsed_given = rows.iter().any(|row| row.get(Quantity::Elapsed).is_some());
    let Some((first_clock, dated)) = rows
        .iter()
        .find_map(|row| row.get(Quantity::Clock).map(|clock| (clock, row.dated)))
    else {
        return launch;
    };
    if elapsed_given {
        return launch.or_else(|| launch_from_both(rows, notes));
    }
    let zero = match launch {
        Some(launch) if dated => seconds(launch),
        Some(launch) => seconds(launch).rem_euclid(DAY),
        None => first_clock,
    };
    for row in rows.iter_mut() {
        let since = row
            .get(Quantity::Clock)
            .filter(|_| row.dated == dated)
            .map(|clock| {
                let since = clock - zero;
                // A bare time of day: the nearest such time to the launch, so midnight is no obstacle.
                if dated {
                    since
                } else {
                    since - DAY * (since / DAY).round()
                }
            });
        row.set(Quantity::Elapsed, since);
    }
    if launch.is_some() {
        return launch;
    }
    let first = if dated {
        timestamp(first_clock)
    } else {
        date.and_then(|date| on_date(date, first_clock))
    };
    if first.is_some() {
        notes.push(Note {
            place: Place::File,
            what: "the time of the first row is taken as the launch".into(),
            why: "the file doesn't give one; add a line `# time: 2031-05-17T17:31:05Z`".into(),
        });
    }
    first
}

/// The launch from a row that has both kinds of time.
fn launch_from_both(rows: &[Row], notes: &mut Vec<Note>) -> Option<Timestamp> {
    let launch = rows
        .iter()
        .filter(|row| row.dated)
        .find_map(|row| timestamp(row.get(Quantity::Clock)? - row.get(Quantity::Elapsed)?));
    if launch.is_some() {
        notes.push(Note {
            place: Place::File,
            what: "the launch is the clock of the first row less its seconds since launch".into(),
            why: String::new(),
        });
    }
    launch
}

fn seconds(timestamp: Timestamp) -> f64 {
    timestamp.as_millisecond() as f64 / 1000.0
}

fn timestamp(seconds: f64) -> Option<Timestamp> {
    let since = SignedDuration::try_from_secs_f64(seconds).ok()?;
    Timestamp::UNIX_EPOCH.checked_add(since).ok()
}

fn on_date(date: Date, seconds_of_day: f64) -> Option<Timestamp> {
    let since = SignedDuration::try_from_secs_f64(seconds_of_day).ok()?;
    let midnight = TimeZone::UTC
        .to_timestamp(date.to_datetime(Time::midnight()))
        .ok()?;
    midnight.checked_add(since).ok()
}

/// How the sensors moved through the air.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Course {
    /// Carried up.
    Ascent,
    /// Dropped.
    Descent,
}

/// Fewer rows with time and pressure than this don't show a course.
const FEWEST: usize = 5;

/// Finds the course and takes out the rows that don't belong to it.
pub(crate) fn keep_one_course(
    rows: &mut Vec<Row>,
    dropsonde: bool,
    notes: &mut Vec<Note>,
) -> Course {
    let track = Track::of(rows);
    let Some(top) = track.top().filter(|_| track.0.len() >= FEWEST) else {
        return if dropsonde {
            Course::Descent
        } else {
            Course::Ascent
        };
    };
    // Highest at the very start: it came down.
    if dropsonde || top * 10 < track.0.len() {
        count_from_release(rows, notes);
        return Course::Descent;
    }
    if let Some(burst) = track.burst(top) {
        take_out(
            rows,
            |elapsed| elapsed > burst,
            "after the highest point, on the way down: not part of the ascent",
            notes,
        );
    }
    if track.waits_before_launch() {
        take_out(
            rows,
            |elapsed| elapsed < 0.0,
            "before the launch: not part of the ascent",
            notes,
        );
    }
    Course::Ascent
}

/// Times of a dropsonde that run below zero are counted from its release instead.
fn count_from_release(rows: &mut [Row], notes: &mut Vec<Note>) {
    let first = rows
        .iter()
        .filter_map(|row| row.get(Quantity::Elapsed))
        .fold(f64::INFINITY, f64::min);
    if first.is_finite() && first < 0.0 {
        for row in rows.iter_mut() {
            let elapsed = row.get(Quantity::Elapsed).map(|elapsed| elapsed - first);
            row.set(Quantity::Elapsed, elapsed);
        }
        notes.push(Note {
            place: Place::File,
            what: format!("times start at {first} s; they are counted from there"),
            why: "the profile was measured on the way down, so its earliest row is the release"
                .into(),
        });
    }
}

fn take_out(rows: &mut Vec<Row>, out: impl Fn(f64) -> bool, why_not: &str, notes: &mut Vec<Note>) {
    let mut taken: Vec<usize> = Vec::new();
    rows.retain(|row| {
        let out = row.get(Quantity::Elapsed).is_some_and(&out);
        if out {
            taken.push(row.line);
        }
        !out
    });
    if let (Some(first), Some(last)) = (taken.iter().min(), taken.iter().max()) {
        notes.push(Note {
            place: Place::Line(*first),
            what: match taken.len() {
                1 => format!("1 row {why_not}"),
                rows => format!("{rows} rows (lines {first} to {last}) {why_not}"),
            },
            why: String::new(),
        });
    }
}

/// Time and smoothed pressure of the rows that have both, in order of time.
struct Track(Vec<(f64, f64)>);

impl Track {
    fn of(rows: &[Row]) -> Self {
        let mut track: Vec<(f64, f64)> = rows
            .iter()
            .filter_map(|row| Some((row.get(Quantity::Elapsed)?, row.get(Quantity::Pressure)?)))
            .filter(|(_, pressure)| *pressure > 0.0)
            .collect();
        track.sort_by(|a, b| a.0.total_cmp(&b.0));
        let pressure: Vec<f64> = track.iter().map(|(_, pressure)| *pressure).collect();
        for (index, (_, smoothed)) in track.iter_mut().enumerate() {
            *smoothed = median_around(&pressure, index);
        }
        Self(track)
    }

    /// Place of the last row at the lowest pressure.
    fn top(&self) -> Option<usize> {
        self.0
            .iter()
            .enumerate()
            .min_by(|(i, a), (j, b)| a.1.total_cmp(&b.1).then(j.cmp(i)))
            .map(|(index, _)| index)
    }

    /// Time of the burst, when rows after it clearly fall: by more than 1 hPa and 5 %, which no jitter at the top does.
    fn burst(&self, top: usize) -> Option<f64> {
        let (time, least) = *self.0.get(top)?;
        let after = self.0.get(top + 1..)?;
        let falls = after
            .iter()
            .any(|(_, pressure)| *pressure > least * 1.05 && *pressure > least + 100.0);
        falls.then_some(time)
    }

    /// Whether the rows of negative time only wait on the ground: without them nearly all of the depth remains.
    fn waits_before_launch(&self) -> bool {
        let depth = |flying: bool| {
            let (least, most) = self
                .0
                .iter()
                .filter(|(time, _)| !flying || *time >= 0.0)
                .fold((f64::INFINITY, 0.0_f64), |(least, most), (_, pressure)| {
                    (least.min(*pressure), most.max(*pressure))
                });
            (most / least).ln()
        };
        self.0.iter().any(|(time, _)| *time < 0.0) && depth(true) >= 0.9 * depth(false)
    }
}

/// Median of up to five neighbours: one or two wild values don't make a top.
fn median_around(values: &[f64], index: usize) -> f64 {
    let from = index.saturating_sub(2);
    let near = values
        .get(from..values.len().min(index + 3))
        .unwrap_or_default();
    let mut room = [f64::INFINITY; 5];
    for (slot, value) in room.iter_mut().zip(near) {
        *slot = *value;
    }
    room.sort_unstable_by(f64::total_cmp);
    room.get(near.len() / 2).copied().unwrap_or(f64::NAN)
}

#[cfg(test)]
mod tests {
    use super::super::header::TableHeader;
    use super::*;
    use crate::tally::Tally;

    fn rows(header: &str, text: &str) -> Vec<Row> {
        let header = TableHeader::read(header).unwrap();
        let lines: Vec<_> = crate::text::lines(text).collect();
        super::super::rows::read(&header, &lines, false, &mut Tally::default())
    }

    fn flight(times_and_pressures: &[(f64, f64)]) -> Vec<Row> {
        let text: String = times_and_pressures
            .iter()
            .map(|(time, pressure)| format!("{time},{pressure},20\n"))
            .collect();
        rows("time_s,pressure_hpa,temperature_c", &text)
    }

    /// A minute of waiting, an ascent to 100 hPa with one wild value, a fall.
    fn whole_flight() -> Vec<(f64, f64)> {
        let wait = (-6..0).map(|i| (f64::from(i) * 10.0, 1000.0));
        let up = (0..91).map(|i| (f64::from(i) * 20.0, 1000.0 - 10.0 * f64::from(i)));
        let down = (1..20).map(|i| (1800.0 + f64::from(i), 100.0 + 40.0 * f64::from(i)));
        let mut flight: Vec<_> = wait.chain(up).chain(down).collect();
        flight[30].1 = 5.0;
        flight
    }

    fn elapsed(rows: &[Row]) -> Vec<Option<f64>> {
        rows.iter().map(|row| row.get(Quantity::Elapsed)).collect()
    }

    #[test]
    fn an_ascent_is_cut_out_of_the_whole_flight() {
        let mut rows = flight(&whole_flight());
        let mut notes = Vec::new();
        assert_eq!(
            keep_one_course(&mut rows, false, &mut notes),
            Course::Ascent
        );
        let times = elapsed(&rows);
        assert_eq!(times.first(), Some(&Some(0.0)));
        assert_eq!(times.last(), Some(&Some(1800.0)));
        assert_eq!(rows.len(), 91);
        assert_eq!(notes.len(), 2);
    }

    #[test]
    fn jitter_at_the_top_is_no_fall() {
        let mut flight_rows: Vec<_> = whole_flight().into_iter().skip(6).take(91).collect();
        flight_rows.extend([(1801.0, 100.4), (1802.0, 100.1)]);
        let mut rows = flight(&flight_rows);
        let mut notes = Vec::new();
        keep_one_course(&mut rows, false, &mut notes);
        assert_eq!((rows.len(), notes.len()), (93, 0));
    }

    #[test]
    fn a_dropsonde_is_a_descent_counted_from_its_release() {
        let mut drop: Vec<_> = (0..50)
            .map(|i| (f64::from(-i), 980.0 - f64::from(i)))
            .collect();
        let mut rows = flight(&drop);
        let mut notes = Vec::new();
        assert_eq!(
            keep_one_course(&mut rows, false, &mut notes),
            Course::Descent
        );
        assert_eq!(elapsed(&rows)[0], Some(49.0));
        assert_eq!(notes.len(), 1);
        drop.truncate(3);
        let mut rows = flight(&drop);
        assert_eq!(
            keep_one_course(&mut rows, true, &mut notes),
            Course::Descent
        );
    }

    #[test]
    fn a_wrong_launch_time_takes_nothing_out() {
        let late: Vec<_> = whole_flight()
            .iter()
            .skip(6)
            .take(91)
            .map(|(t, p)| (t - 900.0, *p))
            .collect();
        let mut rows = flight(&late);
        let mut notes = Vec::new();
        keep_one_course(&mut rows, false, &mut notes);
        assert_eq!((rows.len(), notes.len()), (91, 0));
    }

    #[test]
    fn clocks_across_midnight() {
        let launch = "2031-05-17T23:59:00Z".parse().ok();
        let text = "23:58:00,1000,20\n23:59:00,1000,20\n00:01:00,990,19\n";
        let mut rows = rows("time_utc,pressure_hpa,temperature_c", text);
        let found = count_from_launch(&mut rows, launch, None, &mut Vec::new());
        assert_eq!(found, launch);
        assert_eq!(elapsed(&rows), [Some(-60.0), Some(0.0), Some(120.0)]);
    }

    #[test]
    fn the_first_row_is_the_launch_when_nothing_else_is() {
        let header = "time_utc,pressure_hpa,temperature_c";
        let mut notes = Vec::new();
        let mut dated = rows(
            header,
            "2031-05-17T18:00:00Z,1000,20\n2031-05-17T18:00:10Z,990,19\n",
        );
        let launch = count_from_launch(&mut dated, None, None, &mut notes);
        assert_eq!(launch, "2031-05-17T18:00:00Z".parse().ok());
        assert_eq!(elapsed(&dated), [Some(0.0), Some(10.0)]);
        let mut bare = rows(header, "18:00:00,1000,20\n18:00:10,990,19\n");
        let date = Some(jiff::civil::date(2031, 5, 17));
        assert_eq!(count_from_launch(&mut bare, None, date, &mut notes), launch);
        assert_eq!(notes.len(), 2);
        let mut bare = rows(header, "18:00:00,1000,20\n");
        assert_eq!(count_from_launch(&mut bare, None, None, &mut notes), None);
        assert_eq!(elapsed(&bare), [Some(0.0)]);
    }
}
