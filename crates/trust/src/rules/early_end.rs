//! An ascent that ends before it has told the whole story.

use crate::words::{celsius, number};
use crate::{Evidence, Finding, Grade, Rule, View};
use dewbound_sounding::thermo::{Ascent, Method, Pressure, Temperature, parcel_path};
use dewbound_sounding::{Completeness, Parcel};

/// Depth below the top over which humidity is averaged, Pa.
const NEAR_THE_TOP: f64 = 3_000.0;
/// Time over which the ascent rate near the top is taken, s.
const LAST_SECONDS: f64 = 120.0;
/// The lapse-rate tropopause of the WMO: 2 K/km ...
const TROPOPAUSE_LAPSE: f64 = 0.002;
/// ... on average to every level within 2 km above.
const TROPOPAUSE_DEPTH_M: f64 = 2000.0;
/// Not looked for below this pressure (stable layers there are not the tropopause).
const TROPOPAUSE_BELOW: f64 = 50_000.0;

/// The equilibrium level of less CAPE than this is not worth telling.
const WORTH_TELLING_JKG: f64 = 10.0;

/// The ascent ends below 100 hPa.
pub struct EarlyEnd;

impl Rule for EarlyEnd {
    fn id(&self) -> &'static str {
        "early-end"
    }

    fn title(&self) -> &'static str {
        "Ascent ends early"
    }

    fn source(&self) -> &'static str {
        "Federal Meteorological Handbook No. 3 (success criterion 400 hPa, from memory); tropopause as defined by the WMO \
         (2 K/km over 2 km, from memory)"
    }

    fn about(&self) -> &'static str {
        "The highest temperature lies at a pressure above 100 hPa. Parts of a message not yet received are told apart \
         from an ascent that ended. Doubtful when the top is below the equilibrium level or no tropopause was reached; \
         otherwise, and for a sonde released aloft, it only informs. Never erroneous: what was measured below stands."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "early-end.top_hpa",
            "early-end.success_hpa",
            "early-end.saturated_pct",
            "early-end.slow_share",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let column = &view.column;
        let Some(last) = column.len().checked_sub(1) else {
            return Vec::new();
        };
        let top = Pressure::from_pa(column.pressure[last]);
        // Rounded as it is shown: an ascent that ends at 100.1 hPa has reached 100 hPa.
        if top.hpa().round() <= view.threshold("early-end.top_hpa") {
            return Vec::new();
        }
        vec![self.finding(view, top, last)]
    }
}

/// What a story of the end is pieced together from.
struct Clues {
    /// Mean saturation (over water, or ice below freezing) near the top, 0..1.
    saturation: Option<f64>,
    /// Ascent rate near the top and before, m/s.
    rates: Option<(f64, f64)>,
    tropopause: Option<Pressure>,
    descending: bool,
}

impl EarlyEnd {
    fn finding(&self, view: &View, top: Pressure, last: usize) -> Finding {
        let column = &view.column;
        let descending = view.context.sounding.released_aloft || descending(view);
        let clues = Clues {
            saturation: saturation_near_top(view, last).filter(|_| !descending),
            rates: ascent_rates(view).filter(|_| !descending),
            tropopause: tropopause(view),
            descending,
        };
        let temperature = Temperature::from_k(column.temperature[last]);
        let mut evidence = vec![
            Evidence::new(
                "top_hpa",
                if clues.descending {
                    "first level after release"
                } else {
                    "top of the ascent"
                },
                top.hpa(),
                "hPa",
                0,
            ),
            Evidence::new("top_c", "temperature there", temperature.c(), "\u{b0}C", 1),
        ];
        let awaited = view.context.sounding.completeness == Completeness::LaterPartsNotReceived;
        let mut summary = if clues.descending {
            format!(
                "A sonde released aloft starts at {} hPa ({})",
                number(top.hpa(), 0),
                celsius(temperature)
            )
        } else if awaited {
            format!(
                "Nothing above {} hPa has been received; later parts may still come",
                number(top.hpa(), 0)
            )
        } else {
            format!(
                "Ends at {} hPa ({})",
                number(top.hpa(), 0),
                celsius(temperature)
            )
        };
        let below_el = against_el(view, top, last, &mut summary, &mut evidence);
        match clues.tropopause {
            Some(p) => evidence.push(Evidence::new(
                "tropopause_hpa",
                "tropopause",
                p.hpa(),
                "hPa",
                0,
            )),
            None if clues.descending => {}
            None => summary.push_str("; no tropopause was reached"),
        }
        summary.push('.');
        let saturated = clues
            .saturation
            .is_some_and(|s| 100.0 * s >= view.threshold("early-end.saturated_pct"));
        if let Some(saturation) = clues.saturation {
            evidence.push(Evidence::new(
                "saturation_top_pct",
                "mean relative humidity near the top (over ice below 0 \u{b0}C)",
                100.0 * saturation,
                "%",
                0,
            ));
        }
        let mut slow = false;
        if let Some((near_top, before)) = clues.rates {
            slow = near_top < view.threshold("early-end.slow_share") * before;
            evidence.push(Evidence::new(
                "ascent_rate_top_ms",
                "ascent rate near the top",
                near_top,
                "m/s",
                1,
            ));
            evidence.push(Evidence::new(
                "ascent_rate_ms",
                "ascent rate before",
                before,
                "m/s",
                1,
            ));
        }
        Finding {
            rule: self.id(),
            title: if clues.descending {
                "Sonde released aloft"
            } else {
                self.title()
            },
            grade: if (below_el || clues.tropopause.is_none()) && !clues.descending {
                Grade::Doubtful
            } else {
                Grade::Informative
            },
            bottom: Some(top),
            top: Some(top),
            heights: view.heights(top, top),
            summary,
            evidence,
            guilty: if clues.descending {
                let mut text =
                    String::from("Nothing is wrong with it; it begins where it was let go.");
                if below_el {
                    text.push_str(" CAPE above its first level isn't counted.");
                }
                text
            } else {
                guilty(awaited, saturated, slow, temperature, below_el)
            },
            innocent: if clues.descending {
                "A sonde dropped from an aircraft knows nothing of the air above it; everything measured below stands.".into()
            } else {
                "Balloons burst and signals fade in any weather; everything measured below the top stands.".into()
            },
            caveat: caveat(view, top, awaited, &clues),
            repairs: Vec::new(),
            wind_only: false,
        }
    }
}

/// Says where the top stands against the equilibrium level. True when a parcel is still buoyant at the top.
fn against_el(
    view: &View,
    top: Pressure,
    last: usize,
    summary: &mut String,
    evidence: &mut Vec<Evidence>,
) -> bool {
    let numbers = view.context.numbers;
    let ascents = || {
        Parcel::ALL
            .into_iter()
            .filter_map(|parcel| numbers.parcel(parcel))
    };
    let largest = |a: &&Ascent, b: &&Ascent| a.cape.total_cmp(&b.cape);
    let buoyant_at_top = ascents()
        .filter(|ascent| ascent.el.is_none() && !ascent.buoyant.is_empty())
        .max_by(largest);
    if let Some(ascent) = buoyant_at_top {
        summary.push_str(", below the equilibrium level: CAPE is a lower limit");
        if let Some(excess) = excess_at_top(view, ascent, top, last) {
            evidence.push(Evidence::new(
                "parcel_excess_k",
                "parcel still warmer (virtually) than its surroundings by",
                excess,
                "K",
                1,
            ));
        }
        return true;
    }
    let with_el = ascents()
        .filter(|ascent| ascent.cape >= WORTH_TELLING_JKG)
        .filter_map(|ascent| Some((ascent, ascent.el?)))
        .max_by(|a, b| largest(&a.0, &b.0));
    if let Some((_, el)) = with_el {
        let distance = el.hpa() - top.hpa();
        summary.push_str(&format!(
            ", {} hPa above the equilibrium level",
            number(distance, 0)
        ));
        evidence.push(Evidence::new(
            "el_hpa",
            "equilibrium level",
            el.hpa(),
            "hPa",
            0,
        ));
        evidence.push(Evidence::new(
            "above_el_hpa",
            "top above the equilibrium level by",
            distance,
            "hPa",
            0,
        ));
    }
    false
}

fn excess_at_top(view: &View, ascent: &Ascent, top: Pressure, last: usize) -> Option<f64> {
    let state = parcel_path(ascent.start, Method::default(), &[top])
        .into_iter()
        .next()?;
    let t = column_virtual_temperature(view, last);
    Some(state.virtual_temperature.k() - t)
}

fn column_virtual_temperature(view: &View, level: usize) -> f64 {
    let t = view.column.temperature[level];
    view.column.mixing_ratio[level].map_or(t, |w| {
        t * (1.0 + w / dewbound_sounding::thermo::EPSILON) / (1.0 + w)
    })
}

fn saturation_near_top(view: &View, last: usize) -> Option<f64> {
    let column = &view.column;
    let limit = column.pressure[last] + NEAR_THE_TOP;
    let near: Vec<f64> = (0..=last)
        .rev()
        .take_while(|&level| column.pressure[level] <= limit)
        .filter_map(|level| column.saturation(level))
        .collect();
    (!near.is_empty()).then(|| near.iter().sum::<f64>() / near.len() as f64)
}

/// Seconds since launch and height of the levels that have both, in order of falling pressure.
fn timed_heights(view: &View) -> Vec<(f64, f64)> {
    let context = &view.context;
    (0..context.profile.len())
        .filter_map(|row| {
            let index = context.profile.received.get(row).copied().flatten()?;
            let level = context.sounding.levels.get(index)?;
            Some((level.elapsed?, level.height?))
        })
        .collect()
}

fn descending(view: &View) -> bool {
    let timed = timed_heights(view);
    match (timed.first(), timed.last()) {
        (Some(&(bottom, z_bottom)), Some(&(top, z_top))) => {
            top < bottom && z_top > z_bottom + 500.0
        }
        _ => false,
    }
}

/// Ascent rate over the last two minutes and before, m/s; needs five minutes of flight.
fn ascent_rates(view: &View) -> Option<(f64, f64)> {
    let timed = timed_heights(view);
    let &(first_time, first_height) = timed.first()?;
    let &(last_time, last_height) = timed.last()?;
    let &(split_time, split_height) = timed
        .iter()
        .rev()
        .find(|(time, _)| *time <= last_time - LAST_SECONDS)?;
    if split_time - first_time < 300.0 - LAST_SECONDS {
        return None;
    }
    Some((
        (last_height - split_height) / (last_time - split_time),
        (split_height - first_height) / (split_time - first_time),
    ))
}

/// The lapse-rate tropopause: the lowest level above 500 hPa from which the lapse rate to the next level, and on average
/// to every level within 2 km above, is 2 K/km or less. `None` when none is found or less than 2 km lie above it.
fn tropopause(view: &View) -> Option<Pressure> {
    let column = &view.column;
    let z = &column.thickness;
    let lapse = |from: usize, to: usize| {
        (column.smooth_temperature(from) - column.smooth_temperature(to))
            / (z[to] - z[from]).max(1.0)
    };
    let start = column.first_at_or_above(TROPOPAUSE_BELOW);
    (start..column.len())
        .find(|&level| {
            // In fine data the step to the next level is noise: the lapse rate is taken over 100 m at least.
            let step = if column.fine { 100.0 } else { 0.0 };
            let near = z
                .partition_point(|&other| other < z[level] + step)
                .max(level + 1);
            let end = z.partition_point(|&other| other <= z[level] + TROPOPAUSE_DEPTH_M);
            z.last()
                .is_some_and(|&top| top >= z[level] + TROPOPAUSE_DEPTH_M)
                && near < column.len()
                && (near..end.max(near + 1)).all(|above| lapse(level, above) <= TROPOPAUSE_LAPSE)
        })
        .map(|level| Pressure::from_pa(column.pressure[level]))
}

fn guilty(
    awaited: bool,
    saturated: bool,
    slow: bool,
    temperature: Temperature,
    below_el: bool,
) -> String {
    let mut text = String::new();
    if awaited {
        text.push_str("The message is incomplete: the rest may arrive.");
    } else {
        text.push_str("The balloon burst, iced up or was lost before the ascent was complete.");
    }
    if saturated && temperature.c() < 0.0 {
        text.push_str(" The air at the top was saturated and below freezing, so ice on the balloon or an anvil is likely");
        text.push_str(if slow {
            ", and the ascent had slowed."
        } else {
            "."
        });
    } else if slow {
        text.push_str(" The ascent had slowed before the end.");
    }
    if below_el {
        text.push_str(" CAPE above the top isn't counted.");
    }
    text
}

fn caveat(view: &View, top: Pressure, awaited: bool, clues: &Clues) -> String {
    let mut caveats = Vec::new();
    let success = view.threshold("early-end.success_hpa");
    if top.hpa() > success && !clues.descending && !awaited {
        caveats.push(format!(
            "It ends below {} hPa: short of what counts as a successful ascent.",
            number(success, 0)
        ));
    }
    if clues.rates.is_none() && !clues.descending {
        caveats.push("No times with heights: the ascent rate couldn't be looked at.".to_owned());
    }
    caveats.join(" ")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, BOTH, Dice, Scene};

    fn unstable() -> Air0 {
        Air0 {
            w: 0.0145,
            lapse: 0.0072,
            inversion_k: 1.5,
            ..Air0::default()
        }
    }

    #[test]
    fn lost_below_the_equilibrium_level_is_doubtful_and_says_at_least() {
        let mut ascent = unstable().ascent();
        ascent.end_at(8000.0);
        for sampling in BOTH {
            let found = Scene::day(ascent.sampled(sampling)).check(&EarlyEnd);
            assert_eq!(found.len(), 1);
            assert_eq!(found[0].grade, Grade::Doubtful);
            assert!(
                found[0].summary.contains("lower limit"),
                "{}",
                found[0].summary
            );
            assert!(found[0].evidence("parcel_excess_k").unwrap() > 0.0);
            assert!(found[0].repairs.is_empty());
        }
    }

    #[test]
    fn a_full_ascent_is_silent_and_one_past_el_and_tropopause_only_informs() {
        let ascent = unstable().ascent();
        for sampling in BOTH {
            assert!(
                Scene::day(ascent.sampled(sampling))
                    .check(&EarlyEnd)
                    .is_empty()
            );
        }
        // Dry and stable: no parcel rises freely; the isothermal layer starts near 12 km.
        let mut calm = Air0 {
            w: 0.003,
            lapse: 0.0074,
            inversion_k: 8.0,
            ..Air0::default()
        }
        .ascent();
        calm.end_at(15_500.0);
        let scene = Scene::day(calm.fine());
        let found = scene.check(&EarlyEnd);
        assert_eq!(found[0].grade, Grade::Informative, "{found:#?}");
        // The tropopause is where the invented air turns isothermal (213 K).
        let turns = calm.p[calm.t.iter().position(|&t| t <= 213.0).unwrap()] / 100.0;
        assert!((found[0].evidence("tropopause_hpa").unwrap() - turns).abs() < 3.0);
    }

    #[test]
    fn parts_awaited_are_told_apart_from_an_end() {
        let mut ascent = unstable().ascent();
        ascent.end_at(14_000.0);
        let mut sounding = ascent.coded();
        sounding.completeness = Completeness::LaterPartsNotReceived;
        let found = Scene::day(sounding).check(&EarlyEnd);
        assert!(
            found[0].summary.contains("later parts may still come"),
            "{}",
            found[0].summary
        );
    }

    #[test]
    fn icing_in_an_anvil_is_told() {
        let mut air = unstable();
        air.cloud = Some((6000.0, 12_000.0));
        let mut ascent = air.ascent().noisy(&mut Dice::new(3), 0.05, 0.005);
        ascent.end_at(9000.0);
        let mut sounding = ascent.fine();
        // The last 300 m take three times as long.
        let n = sounding.levels.len();
        for (extra, level) in sounding.levels.iter_mut().skip(n - 60).enumerate() {
            level.elapsed = level.elapsed.map(|s| s + 2.0 * extra as f64);
        }
        let found = Scene::day(sounding).check(&EarlyEnd);
        assert!(
            found[0].guilty.contains("ice on the balloon") && found[0].guilty.contains("slowed"),
            "{}",
            found[0].guilty
        );
        assert!(
            found[0].evidence("ascent_rate_top_ms").unwrap()
                < 0.6 * found[0].evidence("ascent_rate_ms").unwrap()
        );
    }

    #[test]
    fn a_sonde_released_aloft_has_no_balloon_to_burst() {
        let mut ascent = unstable().ascent();
        ascent.end_at(2400.0);
        for sampling in BOTH {
            let mut sounding = ascent.sampled(sampling);
            sounding.released_aloft = true;
            let found = Scene::day(sounding).check(&EarlyEnd);
            assert_eq!(found[0].grade, Grade::Informative);
            let told = format!("{:?}", found[0]);
            for word in ["alloon", "burst", "iced", "successful", "tropopause"] {
                assert!(!told.contains(word), "{word}: {told}");
            }
            assert!(found[0].summary.contains("released aloft"), "{told}");
        }
    }
}
