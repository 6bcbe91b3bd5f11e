//! Levels out of order, twice over, or with heights that run backwards.

use super::repair;
use crate::turns::{Mixed, Turn};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::thermo::Pressure;
use dewbound_sounding::{Amendment, Level, Sampling};

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
        "Pressure rises against the order received (erroneous where a fine flight passes a layer twice with different \
         temperatures), one pressure carries two different values, or height falls while \
         pressure falls. The jitter before launch, rounding, and the order of parts in a coded message are allowed for."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "level-order.fine_reversal_hpa",
            "level-order.prelaunch_hpa",
            "level-order.passes_k",
            "level-order.conflict_k",
            "level-order.conflict_dewpoint_k",
            "level-order.height_m",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let mut findings = Vec::new();
        findings.extend(
            view.mixed
                .iter()
                .map(|mixed| self.mixed_passes(view, mixed)),
        );
        findings.extend(self.reversal(view));
        findings.extend(self.conflicts(view));
        findings.extend(self.heights(view));
        findings
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

    /// Two passes through one layer, interleaved by the sorting: what stands there is no profile.
    fn mixed_passes(&self, view: &View, mixed: &Mixed) -> Finding {
        let (bottom, top) = (
            Pressure::from_pa(mixed.bottom),
            Pressure::from_pa(mixed.top),
        );
        let lines = match (mixed.line, mixed.until) {
            (Some(first), Some(last)) => format!(" (lines {first} to {last})"),
            _ => String::new(),
        };
        let rise = bottom.hpa() - top.hpa();
        Finding {
            heights: view.heights(bottom, top),
            summary: format!(
                "Pressure turns back by {} hPa at {}{lines}; in {} passes are mixed whose temperatures differ by up to {} K at \
                 one pressure.",
                number(rise, 1),
                repair::at(mixed.top),
                layer(bottom, top),
                number(mixed.apart, 1)
            ),
            evidence: vec![
                Evidence::new("largest_rise_hpa", "pressure turns back by", rise, "hPa", 1),
                Evidence::new(
                    PASSES_APART,
                    "temperature between passes differs by up to",
                    mixed.apart,
                    "K",
                    1,
                ),
            ],
            guilty: "Pressure (or the height it was derived from) was wrong for a while: the sonde went on rising, and values \
                     of several heights stand sorted into one layer. Lapse rates, clouds and parcels in it are made by the \
                     sorting."
                .into(),
            innocent: "The balloon really sank and rose again through air that had changed meanwhile (ice, a downdraft). Each \
                       pass was then measured right, but the two don't make one profile."
                .into(),
            repairs: drop_mixed(view, mixed).into_iter().collect(),
            ..self.blank(Grade::Erroneous, mixed.bottom, mixed.top)
        }
    }

    fn reversal(&self, view: &View) -> Option<Finding> {
        let told = |turn: &&Turn| {
            view.mixed
                .iter()
                .any(|mixed| mixed.bottom >= turn.to && mixed.top <= turn.from)
        };
        let reversals: Vec<&Turn> = view.turns.iter().filter(|turn| !told(turn)).collect();
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
                    let p = |row: usize| profile.pressure.get(row).copied().unwrap_or(f64::NAN);
                    if !view.passes_mixed(p(row_below), p(row)) {
                        falls.push((row_below, row, below - z));
                    }
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
                what: match (first..=last).count() {
                    2 => format!("Drop the levels at {}", repair::both(bottom, top)),
                    n => format!("Drop the {n} levels from {}", repair::from_to(bottom, top)),
                },
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
                Evidence::new("levels", "levels reported lower than one beneath", falls.len() as f64, "", 0),
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

/// Evidence that two passes are mixed, by which the order of findings knows such a finding.
pub(crate) const PASSES_APART: &str = "passes_apart_k";

/// The levels of the layer left out; without a level above it, everything from there on.
fn drop_mixed(view: &View, mixed: &Mixed) -> Option<Repair> {
    let pressure = &view.column.pressure;
    let above = pressure.partition_point(|&p| p >= mixed.top);
    let below = pressure
        .partition_point(|&p| p > mixed.bottom)
        .saturating_sub(1);
    let bottom_pa = *pressure.get(below)?;
    let Some(&top_pa) = pressure.get(above) else {
        return Some(Repair {
            id: "disregard-above",
            what: format!("Disregard everything above {}", repair::at(bottom_pa)),
            amendments: vec![Amendment::DisregardAbove {
                pressure_pa: bottom_pa,
            }],
        });
    };
    Some(Repair {
        id: "drop-levels",
        what: format!(
            "Drop the levels of {}, where passes are mixed, and bridge across",
            layer(
                Pressure::from_pa(mixed.bottom),
                Pressure::from_pa(mixed.top)
            )
        ),
        amendments: vec![Amendment::DropLevels { bottom_pa, top_pa }],
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, Dice, Scene, levels};
    use dewbound_sounding::LevelKind;

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

    /// From sample 600 on pressure runs back by 60 samples and forward again while the sonde rises on: about 30 hPa.
    fn turned_back(mut ascent: crate::synthetic::Ascent) -> crate::synthetic::Ascent {
        let p = ascent.p.clone();
        let n = 600;
        for k in 0..60 {
            ascent.p[n + k] = p[n - k];
            ascent.p[n + 60 + k] = p[n - 60 + k];
        }
        for k in n + 120..p.len() {
            ascent.p[k] = p[k - 120];
        }
        ascent
    }

    #[test]
    fn two_passes_that_disagree_are_erroneous_and_stand_alone() {
        let ascent = turned_back(Air0::default().ascent().noisy(&mut Dice::new(7), 0.1, 0.01));
        let p = ascent.p.clone();
        let scene = Scene::day(ascent.fine());
        let found = scene.findings();
        let finding = found
            .iter()
            .find(|finding| finding.rule == "level-order")
            .unwrap();
        assert_eq!(finding.grade, Grade::Erroneous);
        assert!((finding.bottom.unwrap().pa() - p[660]).abs() < 60.0);
        assert!((finding.top.unwrap().pa() - p[600]).abs() < 60.0);
        // 120 samples of 5 m at 6 to 7 K/km: about 4 K between leaving and coming back.
        let apart = finding.evidence(PASSES_APART).unwrap();
        assert!((3.0..5.5).contains(&apart), "{apart}");
        // One cause, one finding: nothing else speaks of that layer, and none of it is left after the repair.
        assert_eq!(
            found
                .iter()
                .filter(|other| overlaps(other, finding))
                .count(),
            1,
            "{found:#?}"
        );
        let Amendment::DropLevels { bottom_pa, top_pa } = finding.repairs[0].amendments[0] else {
            panic!("not a drop")
        };
        assert!(
            bottom_pa > p[660] && top_pa < p[600] + 1.0,
            "{bottom_pa} {top_pa}"
        );
    }

    fn overlaps(a: &Finding, b: &Finding) -> bool {
        a.bottom > b.top && a.top < b.bottom
    }

    #[test]
    fn a_balloon_that_really_sinks_is_doubtful_only() {
        let mut ascent = turned_back(Air0::default().ascent());
        // The same air on the way down and up again.
        let (t, rh) = (ascent.t.clone(), ascent.rh.clone());
        let n = 600;
        for k in 0..60 {
            (ascent.t[n + k], ascent.rh[n + k]) = (t[n - k], rh[n - k]);
            (ascent.t[n + 60 + k], ascent.rh[n + 60 + k]) = (t[n - 60 + k], rh[n - 60 + k]);
        }
        for k in n + 120..t.len() {
            (ascent.t[k], ascent.rh[k]) = (t[k - 120], rh[k - 120]);
        }
        let found = Scene::day(ascent.fine()).check(&LevelOrder);
        assert!(
            found.iter().all(|finding| finding.grade == Grade::Doubtful
                || !finding.summary.contains("passes are mixed")),
            "{found:#?}"
        );
        assert_eq!(
            found
                .iter()
                .filter(|finding| finding.summary.contains("Pressure rises"))
                .count(),
            1,
            "{found:#?}"
        );
    }

    #[test]
    fn a_single_low_height_is_named_by_its_levels() {
        let mut sounding = levels(&[
            (1000.0, 25.0, 15.0),
            (700.0, 5.0, -8.0),
            (500.0, -12.0, -30.0),
            (499.0, -12.2, -30.0),
            (300.0, -40.0, -55.0),
        ]);
        for (level, z) in sounding
            .levels
            .iter_mut()
            .zip([100.0, 3050.0, 5700.0, 5200.0, 9300.0])
        {
            level.height = Some(z);
        }
        let found = Scene::day(sounding).check(&LevelOrder);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert_eq!(
            found[0].repairs[0].what,
            "Drop the levels at 500 and 499 hPa"
        );
    }
}
