//! A file of one-second rows as a flight: waiting on the ground, one leg that counts, the other leg.

use crate::Level;

/// What of a series of rows belongs to the leg that counts.
pub(crate) struct Flight {
    /// Indices of the rows that count, in order of time.
    pub leg: Vec<usize>,
    /// The surface, when the leg goes up from it.
    pub surface: Option<usize>,
    /// Rows of the wait before launch: left out.
    pub waiting: Vec<usize>,
    /// Rows at pressures above the surface's after launch: left out.
    pub below_surface: Vec<usize>,
    /// Rows of the other leg: left out.
    pub other_leg: Vec<usize>,
    /// The leg goes up.
    pub ascending: bool,
}

/// Share of the steps in a leg that must go its way; a random order has one half.
const STEADY: f64 = 0.75;
/// The leg is followed back to the launch from where it has left this many Pa behind.
const UNDER_WAY: f64 = 6_000.0;
/// A step between rows longer than this many times the usual one is no ascent.
const LONGEST_STEP: f64 = 5.0;
/// A first row this far (Pa) above the start of the steady ascent isn't the surface.
const FIRST_ROW_TOLERANCE: f64 = 1_500.0;

/// Reads rows (all with pressure, named by index into `levels`, as received) as a flight; `None` when their order is not one.
///
/// `marked`: the row the format calls the surface.
pub(crate) fn flight(levels: &[Level], rows: &[usize], marked: Option<usize>) -> Option<Flight> {
    let pressure_of = |row: usize| {
        levels
            .get(row)
            .and_then(|level| level.pressure)
            .unwrap_or(f64::NAN)
    };
    let mut series: Vec<usize> = rows.to_vec();
    if let Some(mut timed) = series
        .iter()
        .map(|&row| Some((levels.get(row)?.elapsed.filter(|t| t.is_finite())?, row)))
        .collect::<Option<Vec<_>>>()
    {
        // A stable sort: rows of one time stay as received.
        timed.sort_by(|a, b| a.0.total_cmp(&b.0));
        series = timed.into_iter().map(|(_, row)| row).collect();
    }
    let pressures: Vec<f64> = series.iter().map(|&row| pressure_of(row)).collect();
    let lowest = pressures.iter().copied().min_by(f64::total_cmp)?;
    // Several rows may share the least pressure; all of them belong to the leg.
    let first_at_top = pressures.iter().position(|&p| p == lowest)?;
    let last_at_top = pressures.iter().rposition(|&p| p == lowest)?;
    let (up, down) = (
        pressures.get(..=last_at_top)?,
        pressures.get(first_at_top..)?,
    );
    let ascending = span(up) >= 0.5 * span(&pressures);
    let leg_pressures = if ascending { up } else { down };
    if steadiness(leg_pressures, ascending) < STEADY {
        return None;
    }
    let (leg, other_leg) = if ascending {
        (series.get(..=last_at_top)?, series.get(last_at_top + 1..)?)
    } else {
        (series.get(first_at_top..)?, series.get(..first_at_top)?)
    };
    if other_leg.len() > 1 && steadiness(if ascending { down } else { up }, !ascending) < STEADY {
        return None;
    }
    let mut flight = Flight {
        leg: leg.to_vec(),
        surface: None,
        waiting: Vec::new(),
        below_surface: Vec::new(),
        other_leg: other_leg.to_vec(),
        ascending,
    };
    if ascending {
        flight.leave_the_ground(levels, up, marked);
    }
    Some(flight)
}

impl Flight {
    /// Finds the surface and parts the wait from the ascent.
    fn leave_the_ground(&mut self, levels: &[Level], pressures: &[f64], marked: Option<usize>) {
        let reports = |row: &usize| {
            levels
                .get(*row)
                .is_some_and(|level| level.temperature.is_some() || level.wind.is_some())
        };
        let marked_at = marked.and_then(|row| self.leg.iter().position(|&r| r == row));
        let Some(mut first) = marked_at.or_else(|| self.leg.iter().position(reports)) else {
            return;
        };
        let Some(launch) = launch(pressures, first) else {
            // Too short to tell: everything counts and the lowest row is found as in any other data.
            self.surface = marked;
            return;
        };
        let (Some(&p_first), Some(&p_launch)) = (pressures.get(first), pressures.get(launch))
        else {
            return;
        };
        let mut p_surface = p_first;
        if marked_at.is_none() && p_launch - p_first > FIRST_ROW_TOLERANCE {
            first = launch;
            p_surface = p_launch;
        }
        // A slow start or a pause low down is part of the ascent; a wander up and down is not.
        let travelled: f64 = pressures
            .get(first..=launch)
            .unwrap_or_default()
            .windows(2)
            .map(|w| if let [a, b] = w { (a - b).abs() } else { 0.0 })
            .sum();
        let waited = first < launch && travelled > 2.0 * (p_surface - p_launch).abs() + 100.0;
        self.surface = self.leg.get(first).copied();
        let mut kept = Vec::with_capacity(self.leg.len());
        for (at, (&row, &pressure)) in self.leg.iter().zip(pressures).enumerate() {
            let same = (pressure - p_surface).abs() <= crate::profile::SAME_PRESSURE;
            if at == first || (same && at < launch) {
                kept.push(row);
            } else if at < first || (waited && at < launch) {
                self.waiting.push(row);
            } else if pressure > p_surface {
                self.below_surface.push(row);
            } else {
                kept.push(row);
            }
        }
        self.leg = kept;
    }
}

/// Index where the steady ascent starts, found by following it back from well above the ground.
fn launch(pressures: &[f64], first: usize) -> Option<usize> {
    let p_first = *pressures.get(first)?;
    // Well above the ground: left for good, not by one stray value.
    let gone = |at: usize| {
        pressures
            .get(at..(at + 30).min(pressures.len()))
            .is_some_and(|next| next.iter().all(|&p| p < p_first - 0.8 * UNDER_WAY))
    };
    let under_way = (first..pressures.len())
        .find(|&at| pressures.get(at).is_some_and(|&p| p < p_first - UNDER_WAY) && gone(at))?;
    let p_under_way = *pressures.get(under_way)?;
    let further = (under_way..pressures.len()).find(|&at| {
        pressures
            .get(at)
            .is_some_and(|&p| p < p_under_way - UNDER_WAY)
    })?;
    // Fall of pressure per row in the ascent proper: the scale of everything below.
    let per_row = UNDER_WAY / (further - under_way).max(1) as f64;
    let reach = ((500.0 / per_row).ceil() as usize).clamp(1, 50);
    let mut at = under_way;
    while at > 0 {
        let back = at.saturating_sub(reach);
        let (Some(&before), Some(&here)) = (pressures.get(back), pressures.get(at)) else {
            break;
        };
        if before - here <= 0.2 * per_row * (at - back) as f64 {
            break;
        }
        at -= 1;
    }
    // That is good to a few rows; the steps between single rows tell the rest.
    at = (at + reach).min(under_way);
    while let Some(back) = at.checked_sub(1)
        && let (Some(&before), Some(&here)) = (pressures.get(back), pressures.get(at))
        && before > here
        && before - here <= LONGEST_STEP * per_row
    {
        at = back;
    }
    Some(at)
}

/// Largest less smallest.
fn span(pressures: &[f64]) -> f64 {
    let (low, high) = pressures
        .iter()
        .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), &p| {
            (low.min(p), high.max(p))
        });
    (high - low).max(0.0)
}

/// Share of the steps with a change that go the expected way; 1 when nothing changes.
fn steadiness(pressures: &[f64], falling: bool) -> f64 {
    let (mut with, mut against) = (0_usize, 0_usize);
    for pair in pressures.windows(2) {
        if let [a, b] = pair {
            if (b < a) == falling && a != b {
                with += 1;
            } else if a != b {
                against += 1;
            }
        }
    }
    if with + against == 0 {
        1.0
    } else {
        with as f64 / (with + against) as f64
    }
}

#[cfg(test)]
mod tests {
    use crate::testing::{level, received, strictly_falling};
    use crate::{Level, Sampling};

    /// A row a second, pressure in tenths of hPa: `wait` seconds on the ground with derived pressure wandering, then the ascent at about
    /// 0.6 hPa/s to 50 hPa, then the fall. The wait is at 40 °C and the fall at 45 °C, so that the legs can be told apart.
    fn flight_rows(wait: usize, descent: bool) -> Vec<Level> {
        let tenth = |p: f64| (p * 10.0).round() / 10.0;
        let mut rows = vec![level(1008.0, 25.0, 20.0)];
        let mut noise = 0x2545_f491_u32;
        for _ in 0..wait {
            // A small congruential generator: the wander only has to be irregular.
            noise = noise.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            let wander = f64::from(noise >> 16) / 65_536.0 * 30.0 - 12.0;
            rows.push(level(tenth(1008.0 + wander), 40.0, 20.0));
        }
        let mut p = 1007.6;
        while p > 50.0 {
            rows.push(level(
                tenth(p),
                -65.0 + 90.0 * (p / 1008.0),
                -75.0 + 95.0 * (p / 1008.0),
            ));
            p *= 1.0 - 0.6 / 1008.0 * if p > 300.0 { 1.0 } else { 1.7 };
        }
        while descent && p < 700.0 {
            p *= 1.004;
            rows.push(level(tenth(p), 45.0, -75.0));
        }
        rows
    }

    #[test]
    fn wait_and_descent_are_left_out() {
        let (profile, notes) = received(flight_rows(400, true));
        assert_eq!(profile.sampling, Sampling::Fine);
        assert_eq!(profile.surface, Some(0));
        let surface = profile.surface_air().unwrap();
        assert_eq!(
            (surface.pressure.hpa(), surface.temperature.c()),
            (1008.0, 25.0)
        );
        assert!(strictly_falling(&profile));
        // Nothing of the wait (40 °C) nor of the descent (45 °C).
        assert!(
            profile
                .temperature
                .iter()
                .flatten()
                .all(|&t| t < 30.0 + 273.15),
            "{:?}",
            &profile.temperature[..20]
        );
        // All of the ascent: one row a tenth of hPa or better.
        let (alone, _) = received(flight_rows(0, false));
        assert_eq!(profile.pressure, alone.pressure);
        assert_eq!(profile.temperature, alone.temperature);
        let whats: Vec<&str> = notes.iter().map(|note| note.what.as_str()).collect();
        // Those at exactly the surface pressure are merged into the surface row instead.
        let waited = flight_rows(400, true)[1..=400]
            .iter()
            .filter(|row| row.pressure != Some(100_800.0))
            .count();
        let expect = format!("{waited} rows of the wait before launch left out");
        assert!(whats[0].starts_with(&expect), "{whats:?}");
        assert!(
            whats[1].contains("rows of the descent after the top left out"),
            "{whats:?}"
        );
        assert!(notes.len() <= 3, "{whats:?}");
    }

    #[test]
    fn waiting_at_one_pressure_keeps_the_first_row() {
        let mut rows: Vec<Level> = (0..300)
            .map(|n| level(1008.0, 25.0 + 0.01 * f64::from(n), 20.0))
            .collect();
        rows.extend(flight_rows(0, false).into_iter().skip(1));
        let count = rows.len();
        let (profile, notes) = received(rows);
        assert_eq!(profile.surface_air().unwrap().temperature.c(), 25.0);
        assert_eq!(profile.pressure[1], 100_760.0);
        assert_eq!(notes.len(), 1, "{notes:?}");
        // One row a pressure is left of all that were received, in tenths of hPa.
        let expect = format!(
            "{} rows share a pressure with an earlier row (0.1 hPa steps); the first value of each is used",
            count - profile.len()
        );
        assert_eq!(notes[0].what, expect);
        assert_eq!(notes[0].place, crate::Place::File);
    }

    #[test]
    fn a_pause_low_down_is_part_of_the_ascent() {
        // The balloon stops 20 hPa up for two minutes, as at a sharp inversion.
        let mut rows = flight_rows(0, false);
        let at = rows
            .iter()
            .position(|l| l.pressure.unwrap() < 98_800.0)
            .unwrap();
        let stopped = rows[at];
        for _ in 0..120 {
            rows.insert(at, stopped);
        }
        let (profile, _) = received(rows);
        assert_eq!(profile, {
            let mut plain = received(flight_rows(0, false)).0;
            plain.received = profile.received.clone();
            plain
        });
    }

    #[test]
    fn a_first_row_far_up_is_not_the_surface() {
        let mut rows = flight_rows(0, false);
        rows.insert(0, level(500.3, -10.0, -20.0));
        let (profile, _) = received(rows);
        assert_eq!(profile.surface_pressure().unwrap().hpa(), 1008.0);
    }

    #[test]
    fn descending_sonde_in_order_of_time() {
        let mut falling = flight_rows(0, false);
        falling.reverse();
        let (down, notes) = received(falling.clone());
        let (up, _) = received(flight_rows(0, false));
        assert_eq!(down.pressure, up.pressure);
        assert_eq!(down.surface, Some(0));
        assert_eq!(down.temperature[0], up.temperature[0]);
        assert!(notes.len() <= 1, "{notes:?}");
        // Times decide over the order of the rows.
        let count = falling.len();
        for (n, row) in falling.iter_mut().enumerate() {
            row.elapsed = Some(n as f64);
        }
        falling.rotate_left(count / 3);
        let (timed, _) = received(falling);
        assert_eq!(timed.pressure, down.pressure);
    }
}
