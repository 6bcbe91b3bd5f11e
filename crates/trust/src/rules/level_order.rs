//! Levels out of order, twice over, or with heights that run backwards.

use super::repair;
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::thermo::Pressure;
use dewbound_sounding::{Amendment, Level, LevelKind, Sampling};

/// The received order doesn't make sense.
pub struct LevelOrder;

impl Rule for LevelOrder {
    fn id(&self) -> &'static str {
        "level-order"
    }

    fn title(&self) -> &'static str {
        "Levels out of order"
    }

    fn source(&self) -> &'static str {
        "Federal Meteorological Handbook No. 3, ch. 4; common practice"
    }

    fn about(&self) -> &'static str {
        "Pressure rises against the order received, one pressure carries two different values, or height falls while \
         pressure falls. The jitter before launch, rounding, and the order of parts in a coded message are allowed for."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "level-order.fine_reversal_hpa",
            "level-order.prelaunch_hpa",
            "level-order.conflict_k",
            "level-order.conflict_dewpoint_k",
            "level-order.height_m",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let mut findings = Vec::new();
        findings.extend(self.reversal(view));
        findings.extend(self.conflicts(view));
        findings.extend(self.heights(view));
        findings
    }
}

/// An episode in which pressure rose against the order.
struct Reversal {
    /// Pressure from which it turned back and to which it rose, Pa.
    from: f64,
    to: f64,
    line: Option<usize>,
}

/// Kinds of level that a coded message lists each in its own falling order.
fn order_group(kind: LevelKind) -> Option<u8> {
    match kind {
        LevelKind::Standard => Some(1),
        LevelKind::SignificantThermal => Some(2),
        LevelKind::SignificantWind => Some(3),
        LevelKind::Other => Some(4),
        // One or a few a message, wherever its code puts them.
        LevelKind::Surface | LevelKind::Tropopause | LevelKind::MaximumWind => None,
    }
}

impl LevelOrder {
    fn blank(&self, grade: Grade, bottom: f64, top: f64) -> Finding {
        Finding {
            rule: self.id(),
            title: self.title(),
            grade,
            bottom: Some(Pressure::from_pa(bottom)),
            top: Some(Pressure::from_pa(top)),
            heights: None,
            summary: String::new(),
            evidence: Vec::new(),
            guilty: String::new(),
            innocent: String::new(),
            caveat: String::new(),
            repairs: Vec::new(),
            wind_only: false,
        }
    }

    fn reversal(&self, view: &View) -> Option<Finding> {
        let reversals = reversals(view);
        let worst = reversals
            .iter()
            .max_by(|a, b| (a.to - a.from).total_cmp(&(b.to - b.from)))?;
        let rise = (worst.to - worst.from) / 100.0;
        let lowest = reversals
            .iter()
            .map(|r| r.to)
            .fold(f64::NEG_INFINITY, f64::max);
        let highest = reversals
            .iter()
            .map(|r| r.from)
            .fold(f64::INFINITY, f64::min);
        let (bottom, top) = (Pressure::from_pa(lowest), Pressure::from_pa(highest));
        let line = worst
            .line
            .map_or_else(String::new, |line| format!(" (line {line})"));
        let times = match reversals.len() {
            1 => "once".to_owned(),
            n => format!("{n} times"),
        };
        Some(Finding {
            heights: view.heights(bottom, top),
            summary: format!(
                "Pressure rises against the order received {times}, by up to {} hPa at {}{line}.",
                number(rise, 1),
                repair::at(worst.from)
            ),
            evidence: vec![
                Evidence::new("reversals", "times pressure turns back", reversals.len() as f64, "", 0),
                Evidence::new("largest_rise_hpa", "largest rise", rise, "hPa", 1),
            ],
            guilty: "Lines were shuffled or garbled, or a pressure was miscoded; sorted by pressure, the values may stand at \
                     the wrong place."
                .into(),
            innocent: "The balloon really sank for a while (ice, a downdraft), or two ascents were joined; the levels are \
                       sorted by pressure before use."
                .into(),
            ..self.blank(Grade::Doubtful, lowest, highest)
        })
    }

    fn conflicts(&self, view: &View) -> Vec<Finding> {
        let sounding = view.context.sounding;
        // In fine data several samples share one rounded pressure while the balloon climbs on: nothing to say of them.
        if view.context.profile.sampling == Sampling::Fine {
            return Vec::new();
        }
        let limit = view.threshold("level-order.conflict_k") + sounding.temperature_step;
        let limit_dewpoint = view.threshold("level-order.conflict_dewpoint_k");
        let mut by_pressure: Vec<&Level> = sounding
            .levels
            .iter()
            .filter(|level| level.pressure.is_some_and(|p| p.is_finite() && p > 0.0))
            .collect();
        let pa = |level: &Level| level.pressure.unwrap_or(f64::NAN);
        by_pressure.sort_by(|a, b| pa(b).total_cmp(&pa(a)));
        let spread = |levels: &[&Level], field: fn(&Level) -> Option<f64>| {
            let values = levels
                .iter()
                .filter_map(|level| field(level))
                .filter(|v| v.is_finite());
            let (low, high) = values.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), v| {
                (low.min(v), high.max(v))
            });
            (high - low).max(0.0)
        };
        by_pressure
            .chunk_by(|a, b| pa(a) == pa(b))
            .filter(|levels| levels.len() > 1)
            .filter_map(|levels| {
                let p = pa(levels.first()?);
                let temperature = spread(levels, |level| level.temperature);
                let dewpoint = spread(levels, |level| level.dewpoint);
                (temperature > limit || dewpoint > limit_dewpoint)
                    .then(|| self.conflict(view, p, levels, temperature, dewpoint))
            })
            .collect()
    }

    fn conflict(
        &self,
        view: &View,
        p: f64,
        levels: &[&Level],
        temperature: f64,
        dewpoint: f64,
    ) -> Finding {
        let pressure = Pressure::from_pa(p);
        let lines: Vec<String> = levels
            .iter()
            .filter_map(|level| level.line)
            .map(|line| line.to_string())
            .collect();
        let lines = if lines.is_empty() {
            String::new()
        } else {
            format!(" (lines {})", lines.join(", "))
        };
        let surface = view.context.profile.surface_pressure() == Some(pressure);
        Finding {
            heights: view.heights(pressure, pressure),
            summary: format!(
                "{} is reported {} times with temperatures {} K and dew points {} K apart{lines}; the first is used.",
                repair::at(p),
                levels.len(),
                number(temperature, 1),
                number(dewpoint, 1)
            ),
            evidence: vec![
                Evidence::new("temperature_spread_k", "temperatures differ by", temperature, "K", 1),
                Evidence::new("dewpoint_spread_k", "dew points differ by", dewpoint, "K", 1),
            ],
            guilty: "One of the values was miscoded or belongs to another level or another message.".into(),
            innocent: "A corrected message repeats a level with its better value; which one is the correction can't be seen."
                .into(),
            repairs: if surface {
                Vec::new()
            } else {
                vec![Repair {
                    id: "drop-levels",
                    what: format!("Drop the level at {}", repair::at(p)),
                    amendments: vec![Amendment::DropLevels {
                        bottom_pa: p,
                        top_pa: p,
                    }],
                }]
            },
            ..self.blank(Grade::Doubtful, p, p)
        }
    }

    fn heights(&self, view: &View) -> Option<Finding> {
        let profile = view.context.profile;
        let limit = view.threshold("level-order.height_m");
        let from = profile.surface.unwrap_or(0);
        let mut highest: Option<(f64, usize)> = None;
        // Row of the level above which height falls, row of the lower one, by how much.
        let mut falls: Vec<(usize, usize, f64)> = Vec::new();
        for (row, &height) in profile.height.iter().enumerate().skip(from) {
            let Some(z) = height else { continue };
            match highest {
                Some((below, row_below)) if below - z > limit => {
                    falls.push((row_below, row, below - z))
                }
                Some((below, _)) if below >= z => {}
                _ => highest = Some((z, row)),
            }
        }
        let &(first, _, _) = falls.first()?;
        let &(_, last, _) = falls.last()?;
        let worst = falls.iter().map(|fall| fall.2).fold(0.0, f64::max);
        let pressure = |row: usize| profile.pressure.get(row).copied();
        let (bottom, top) = (pressure(first)?, pressure(last)?);
        // Which of them is wrong can't be told from heights alone: the levels with them all out of the way.
        let believed = first
            .checked_sub(1)
            .filter(|&row| row >= from)
            .and_then(pressure);
        let repairs = match (believed, pressure(last + 1)) {
            (Some(below), Some(above)) => vec![Repair {
                id: "drop-levels",
                what: format!(
                    "Drop the levels between {} and {}",
                    repair::at(below),
                    repair::at(above)
                ),
                amendments: vec![Amendment::DropLevels {
                    bottom_pa: below,
                    top_pa: above,
                }],
            }],
            _ => Vec::new(),
        };
        let (bottom_p, top_p) = (Pressure::from_pa(bottom), Pressure::from_pa(top));
        Some(Finding {
            heights: view.heights(bottom_p, top_p),
            summary: format!(
                "Height falls by up to {} m while pressure falls, {}.",
                number(worst, 0),
                layer(bottom_p, top_p)
            ),
            evidence: vec![
                Evidence::new("height_fall_m", "height falls by up to", worst, "m", 0),
                Evidence::new("levels", "levels lower than one beneath them", falls.len() as f64, "", 0),
            ],
            guilty: "A height or a pressure was miscoded. A wrong height alone doesn't touch temperature, humidity or CAPE; a \
                     wrong pressure puts them at the wrong place."
                .into(),
            innocent: "A single height was miscoded and everything else stands, or the height and pressure sensors \
                       disagree by more than usual."
                .into(),
            repairs,
            ..self.blank(Grade::Erroneous, bottom, top)
        })
    }
}

/// Episodes in which pressure rose against the received order by more than jitter and rounding.
fn reversals(view: &View) -> Vec<Reversal> {
    let sounding = view.context.sounding;
    let fine = view.context.profile.sampling == Sampling::Fine;
    // Fine data also hold the wait before launch and the way down after the burst, which the profile leaves out.
    let flight = if fine {
        flight(view)
    } else {
        0..sounding.levels.len()
    };
    let with_pressure = || {
        let levels = sounding.levels.get(flight.clone()).unwrap_or_default();
        levels.iter().filter_map(|level| {
            Some((level, level.pressure.filter(|p| p.is_finite() && *p > 0.0)?))
        })
    };
    let surface = view
        .context
        .profile
        .surface_pressure()
        .map_or(f64::INFINITY, Pressure::pa);
    let waiting = surface - 100.0 * view.threshold("level-order.prelaunch_hpa");
    // One level in a group of coded levels may be rounded to its neighbour's pressure, not beyond it.
    let tolerance = if fine {
        100.0 * view.threshold("level-order.fine_reversal_hpa")
    } else {
        0.0
    };
    let groups: &[Option<u8>] = if fine {
        &[None]
    } else {
        &[Some(1), Some(2), Some(3), Some(4)]
    };
    let mut reversals = Vec::new();
    for &group in groups {
        let mut sequence: Vec<(f64, Option<usize>)> = with_pressure()
            .filter(|(level, _)| group.is_none() || order_group(level.kind) == group)
            .map(|(level, p)| (p, level.line))
            .collect();
        if falling_sonde(&sequence) {
            sequence.reverse();
        }
        reversals.extend(episodes(&sequence, waiting, tolerance));
    }
    reversals
}

/// The received levels from the surface of the profile to its top, in whichever order they came.
fn flight(view: &View) -> std::ops::Range<usize> {
    let profile = view.context.profile;
    let received = |row: usize| profile.received.get(row).copied().flatten();
    let surface = received(profile.surface.unwrap_or(0));
    let top = (0..profile.len()).rev().find_map(received);
    match (surface, top) {
        (Some(surface), Some(top)) => surface.min(top)..surface.max(top) + 1,
        _ => 0..view.context.sounding.levels.len(),
    }
}

/// Most steps go up in pressure: a sonde dropped from an aircraft.
fn falling_sonde(sequence: &[(f64, Option<usize>)]) -> bool {
    let up = sequence
        .windows(2)
        .filter(|pair| pair[1].0 > pair[0].0)
        .count();
    sequence.len() > 2 && 2 * up > sequence.len()
}

fn episodes(sequence: &[(f64, Option<usize>)], waiting: f64, tolerance: f64) -> Vec<Reversal> {
    let mut episodes: Vec<Reversal> = Vec::new();
    let mut lowest = f64::INFINITY;
    let mut open = false;
    for &(p, line) in sequence {
        if p <= lowest {
            lowest = p;
            open = false;
        } else if p > lowest + tolerance && lowest < waiting {
            match episodes.last_mut() {
                Some(last) if open => last.to = last.to.max(p),
                _ => episodes.push(Reversal {
                    from: lowest,
                    to: p,
                    line,
                }),
            }
            open = true;
        }
    }
    episodes
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, Scene, levels};

    #[test]
    fn clean_ascents_are_silent_and_so_are_the_parts_of_a_message() {
        for sounding in [
            Air0::default().ascent().fine(),
            Air0::default().ascent().coded(),
        ] {
            assert!(Scene::day(sounding).check(&LevelOrder).is_empty());
        }
        // Standard levels first, significant ones after: each list falls.
        let mut sounding = levels(&[
            (1000.0, 25.0, 15.0),
            (850.0, 14.0, 5.0),
            (700.0, 5.0, -8.0),
            (500.0, -12.0, -30.0),
            (1000.0, 25.0, 15.0),
            (920.0, 19.0, 12.0),
            (610.0, -2.0, -20.0),
        ]);
        for (i, level) in sounding.levels.iter_mut().enumerate() {
            level.kind = match i {
                0 | 4 => LevelKind::Surface,
                1..=3 => LevelKind::Standard,
                _ => LevelKind::SignificantThermal,
            };
        }
        assert!(Scene::day(sounding).check(&LevelOrder).is_empty());
    }

    #[test]
    fn a_shuffled_level_is_found() {
        let rows = [
            (1000.0, 25.0, 15.0),
            (700.0, 5.0, -8.0),
            (850.0, 14.0, 5.0),
            (500.0, -12.0, -30.0),
        ];
        let found = Scene::day(levels(&rows)).check(&LevelOrder);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert!(
            found[0]
                .summary
                .contains("once, by up to 150.0 hPa at 700 hPa (line 3)"),
            "{}",
            found[0].summary
        );
    }

    #[test]
    fn one_pressure_with_two_values_is_found() {
        let rows = [
            (1000.0, 25.0, 15.0),
            (850.0, 14.0, 5.0),
            (850.0, 11.0, 5.0),
            (500.0, -12.0, -30.0),
        ];
        let found = Scene::day(levels(&rows)).check(&LevelOrder);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert_eq!(
            found[0]
                .evidence("temperature_spread_k")
                .map(|k| (k * 10.0).round()),
            Some(30.0)
        );
        let mut alike = rows;
        alike[2] = (850.0, 14.2, 5.0);
        assert!(Scene::day(levels(&alike)).check(&LevelOrder).is_empty());
    }

    #[test]
    fn a_height_that_runs_backwards_is_found_once() {
        let mut sounding = Air0::default().ascent().fine();
        for level in sounding.levels.iter_mut().skip(800).take(100) {
            level.height = level.height.map(|z| z - 1000.0);
        }
        let found = Scene::day(sounding).check(&LevelOrder);
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].grade, Grade::Erroneous);
        assert!((found[0].evidence("height_fall_m").unwrap() - 995.0).abs() < 10.0);
    }

    #[test]
    fn a_balloon_that_sinks_for_a_while_is_one_finding() {
        let mut ascent = Air0::default().ascent();
        let p: Vec<f64> = ascent.p.clone();
        let n = 600;
        for k in 0..60 {
            // Down by 60 samples and up again, written as the received order has it.
            ascent.p[n + k] = p[n - k];
        }
        let found = Scene::day(ascent.fine()).check(&LevelOrder);
        assert_eq!(
            found
                .iter()
                .filter(|finding| finding.summary.contains("Pressure rises"))
                .count(),
            1,
            "{found:#?}"
        );
    }
}
