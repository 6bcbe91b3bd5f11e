//! Making an environment from columns, and making it again when only its lower part has changed.

use super::{Environment, EnvironmentError, HumidityKnown, coordinate};
use crate::Pressure;
use crate::column::{Column, Levels};
use crate::elementary::at_most;
use crate::saturation::{self, NO_VAPOUR};

/// Usable pressures, Pa.
const PRESSURES: std::ops::RangeInclusive<f64> = 0.1..=200_000.0;
/// Usable temperatures, K.
const TEMPERATURES: std::ops::RangeInclusive<f64> = 100.0..=400.0;
/// Usable dew points, K.
const DEWPOINTS: std::ops::RangeInclusive<f64> = NO_VAPOUR..=400.0;

/// The level's dew point was given.
pub(super) const KNOWN: u8 = 1;
/// It was above the temperature.
const ABOVE_SATURATION: u8 = 2;

impl Environment {
    /// The same as [`Environment::new`], in the memory of this environment and with what is still true of it: when
    /// only the lower levels of the columns differ, only they are computed. For a profile whose surface is dragged.
    ///
    /// This environment is gone afterwards, also when the columns turn out not to be usable.
    pub fn refilled(
        mut self,
        pressure: &[f64],
        temperature: &[f64],
        dewpoint: &[Option<f64>],
    ) -> Result<Self, EnvironmentError> {
        let n = pressure.len();
        if temperature.len() != n || dewpoint.len() != n {
            return Err(EnvironmentError::Lengths {
                pressures: n,
                temperatures: temperature.len(),
                dewpoints: dewpoint.len(),
            });
        }
        if n < 2 {
            return Err(EnvironmentError::TooFewLevels(n));
        }
        let kept = self.kept_levels(pressure, temperature, dewpoint);
        let changed = n - kept;
        if changed == 0 && n == self.p.len() {
            return Ok(self);
        }
        // The kept levels were found usable before; the lowest of them bounds the changed ones.
        let bound = n.min(changed + 1);
        // While values are dragged, pressures stay; their logarithms too, then.
        let same_pressures = n == self.p.len() && self.p[..bound] == pressure[..bound];
        if !((same_pressures || pressures_usable(&pressure[..bound]))
            && temperatures_usable(&temperature[..bound]))
        {
            return Err(first_unusable(pressure, temperature));
        }
        if dewpoint.first().copied().flatten().is_none() {
            return Err(EnvironmentError::BottomWithoutHumidity {
                pressure: pressure[0],
            });
        }

        let old_changed = self.p.len() - kept;
        // The node of the lowest kept level, found while its z is still at hand.
        let kept_node = match self.z.get(old_changed) {
            Some(&z) if kept > 0 => self.column.z.partition_point(|&node| node < z),
            _ => self.column.z.len(),
        };
        replace_front(&mut self.t, old_changed, &temperature[..changed]);
        replace_front(&mut self.td, old_changed, &dewpoint[..changed]);
        self.flags
            .splice(..old_changed, std::iter::repeat_n(0, changed));
        if !same_pressures {
            replace_front(&mut self.p, old_changed, &pressure[..changed]);
            replace_front(&mut self.z, old_changed, &pressure[..changed]);
            for z in &mut self.z[..changed] {
                *z = coordinate(*z);
            }
            if let Some(level) = (1..bound).find(|&i| self.z[i] <= self.z[i - 1]) {
                // Different in the last bit only: no layer between them.
                return Err(EnvironmentError::Order {
                    level,
                    pressure: pressure[level],
                    previous: pressure[level - 1],
                });
            }
        }
        self.take_dewpoints(changed)?;
        self.fill_gaps(bound);

        let levels = Levels {
            z: &self.z,
            t: &self.t,
            td: &self.td,
        };
        self.column
            .refill(&mut self.scratch, &levels, self.humid, changed, kept_node);
        Ok(self)
    }

    /// Memory for an environment. **Not** an environment: it has no levels.
    pub(super) fn empty() -> Self {
        Self {
            z: Vec::new(),
            p: Vec::new(),
            t: Vec::new(),
            td: Vec::new(),
            flags: Vec::new(),
            humid: 0,
            humidity: HumidityKnown {
                interpolated: 0,
                dry: 0,
                dry_above: None,
                above_saturation: 0,
            },
            column: Column::default(),
            scratch: Column::default(),
        }
    }

    /// How many levels, counted from the top, are the same in the new columns and start at a known dew point (a gap
    /// that reaches below them would have to be filled again).
    fn kept_levels(
        &self,
        pressure: &[f64],
        temperature: &[f64],
        dewpoint: &[Option<f64>],
    ) -> usize {
        let (n, old) = (pressure.len(), self.p.len());
        let most = n.min(old);
        let (p, t, td) = (
            &pressure[n - most..],
            &temperature[n - most..],
            &dewpoint[n - most..],
        );
        let shift = old - most;
        let (old_p, old_t, old_td) = (&self.p[shift..], &self.t[shift..], &self.td[shift..]);
        let flags = &self.flags[shift..];
        let same_dewpoint = |i: usize| {
            let known = flags[i] & KNOWN != 0;
            let (new, old) = (
                td[i].map_or(0.0, |value| value.min(t[i])),
                old_td[i].unwrap_or(0.0),
            );
            (td[i].is_some() == known) & (!known | (new == old))
        };
        let mut kept = same_above(most, |i| p[i] == old_p[i]);
        kept = same_above(most, |i| t[i] == old_t[i]).min(kept);
        kept = same_above(most, same_dewpoint).min(kept);
        while kept > 0 && td[most - kept].is_none() {
            kept -= 1;
        }
        kept
    }

    /// Checks the dew points of the lowest `changed` levels and brings them down to saturation.
    fn take_dewpoints(&mut self, changed: usize) -> Result<(), EnvironmentError> {
        // Vapour at half the pressure or more isn't air; ln(e/p) = exponent + ln 611.2 - ln p.
        let too_moist = (0.5 / saturation::E0).ln();
        if self.plainly_usable(changed) {
            for (flags, td) in self.flags[..changed].iter_mut().zip(&self.td) {
                *flags = if td.is_some() { KNOWN } else { 0 };
            }
            return Ok(());
        }
        let columns = self
            .td
            .iter_mut()
            .zip(&mut self.flags)
            .zip(&self.t)
            .zip(&self.z);
        for (level, (((td, flags), t), z)) in columns.enumerate().take(changed) {
            let Some(value) = *td else { continue };
            let held = value.min(*t);
            let usable = DEWPOINTS.contains(&value) && saturation::exponent(held) + z < too_moist;
            if !usable {
                return Err(EnvironmentError::Value {
                    level,
                    quantity: "dew point",
                    value,
                    unit: "K",
                });
            }
            *flags = if value > *t {
                KNOWN | ABOVE_SATURATION
            } else {
                KNOWN
            };
            *td = Some(held);
        }
        Ok(())
    }

    /// Whether the dew points of the lowest `changed` levels are seen at a glance to be usable as they are: within reason, not above
    /// the temperature, and not so moist that it must be looked at more closely. No early end, no division.
    fn plainly_usable(&self, changed: usize) -> bool {
        // 17,200 Pa of vapour at 330 K, 611 Pa at 273 K, 38 Pa at 240 K: below half of 40,000, 1,300 and 100 Pa.
        let below = |z: f64| self.z[..changed].partition_point(|&level| level < z);
        let ends = [below(-10.6), below(-7.2), below(-4.61)];
        let mut begin = 0;
        let usable = ends
            .into_iter()
            .zip([330.0, 273.0, 240.0])
            .all(|(end, limit)| {
                let levels = self.td[begin..end].iter().zip(&self.t[begin..end]);
                begin = end;
                levels.fold(true, |all, (td, t)| {
                    // A missing one is as good as any other.
                    let value = td.unwrap_or(NO_VAPOUR);
                    all & (value >= NO_VAPOUR) & (value <= at_most(*t, limit))
                })
            });
        usable && begin == changed
    }

    /// Fills missing dew points among the lowest `bound` levels (the last of which is known, or the column's top), and
    /// counts what is known.
    fn fill_gaps(&mut self, bound: usize) {
        let n = self.flags.len();
        let last_known = self
            .flags
            .iter()
            .rposition(|flags| flags & KNOWN != 0)
            .unwrap_or(0);
        let known = self
            .flags
            .iter()
            .filter(|flags| **flags & KNOWN != 0)
            .count();
        let interpolated = last_known + 1 - known;
        if interpolated > 0 {
            fill_between(
                &self.z,
                &self.t,
                &mut self.td[..bound.min(last_known + 1)],
                &self.flags,
            );
        }
        self.humid = last_known + 1;
        self.humidity = HumidityKnown {
            interpolated,
            dry: n - last_known - 1,
            dry_above: (last_known + 1 < n).then(|| Pressure::from_pa(self.p[last_known])),
            above_saturation: self
                .flags
                .iter()
                .filter(|flags| **flags & ABOVE_SATURATION != 0)
                .count(),
        };
    }
}

/// How many of `count` places, from the last down, are `same`. Looked at in blocks without an early end, which
/// vectorise.
#[inline]
fn same_above(count: usize, same: impl Fn(usize) -> bool) -> usize {
    const BLOCK: usize = 32;
    let mut kept = 0;
    while kept + BLOCK <= count {
        let end = count - kept;
        if !(end - BLOCK..end).fold(true, |all, i| all & same(i)) {
            break;
        }
        kept += BLOCK;
    }
    kept + (0..count - kept).rev().take_while(|&i| same(i)).count()
}

/// Puts `new` in the place of the first `old` values.
fn replace_front<T: Copy>(values: &mut Vec<T>, old: usize, new: &[T]) {
    if old == new.len() {
        values[..old].copy_from_slice(new);
    } else {
        values.splice(..old, new.iter().copied());
    }
}

/// Whether pressures fall strictly and are within reason. No early end: this way it vectorises.
fn pressures_usable(pressure: &[f64]) -> bool {
    let falls = pressure
        .windows(2)
        .fold(true, |all, pair| all & matches!(pair, [a, b] if b < a));
    let ends = [pressure.first(), pressure.last()];
    falls && ends.into_iter().flatten().all(|p| PRESSURES.contains(p))
}

/// Whether temperatures are within reason, likewise.
fn temperatures_usable(temperature: &[f64]) -> bool {
    temperature
        .iter()
        .fold(true, |all, t| all & TEMPERATURES.contains(t))
}

/// The first thing wrong with columns that are not usable.
fn first_unusable(pressure: &[f64], temperature: &[f64]) -> EnvironmentError {
    let mut previous = f64::INFINITY;
    for (level, (&p, &t)) in pressure.iter().zip(temperature).enumerate() {
        if !PRESSURES.contains(&p) {
            return EnvironmentError::Value {
                level,
                quantity: "pressure",
                value: p,
                unit: "Pa",
            };
        }
        if p >= previous {
            return EnvironmentError::Order {
                level,
                pressure: p,
                previous,
            };
        }
        if !TEMPERATURES.contains(&t) {
            return EnvironmentError::Value {
                level,
                quantity: "temperature",
                value: t,
                unit: "K",
            };
        }
        previous = p;
    }
    EnvironmentError::TooFewLevels(pressure.len())
}

/// Fills gaps between known values, linear in z, but not above the temperature there. The first and last value must be
/// known.
fn fill_between(z: &[f64], t: &[f64], values: &mut [Option<f64>], flags: &[u8]) {
    let mut known = 0;
    for i in 1..values.len() {
        if flags[i] & KNOWN == 0 {
            continue;
        }
        if let (Some(a), Some(b)) = (values[known], values[i]) {
            let slope = (b - a) / (z[i] - z[known]);
            for k in known + 1..i {
                values[k] = Some((a + slope * (z[k] - z[known])).min(t[k]));
            }
        }
        known = i;
    }
}
