//! Superadiabatic layers away from the ground.

use super::repair;
use crate::layers::{Falling, falling_layers, sharpened, steepest};
use crate::words::{layer, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::Amendment;
use dewbound_sounding::thermo::Pressure;

/// The farthest a bridge may reach, Pa: beyond this it would invent a profile instead of mending one.
const LONGEST_BRIDGE: f64 = 15_000.0;

/// Theta falls with height away from the ground.
pub struct SuperadiabaticAloft;

impl Rule for SuperadiabaticAloft {
    fn id(&self) -> &'static str {
        "superadiabatic-aloft"
    }

    fn title(&self) -> &'static str {
        "Superadiabatic layer aloft"
    }

    fn source(&self) -> &'static str {
        "Slonaker, Schwartz, Emery 1996, WAF 11, 350-359"
    }

    fn about(&self) -> &'static str {
        "Theta at the top of a layer is more than 1 K below theta at its bottom, the base at least 50 hPa above the \
         surface. Coded levels are judged as they are, fine data after averaging over 5 hPa. A lapse rate beyond g/Rd \
         (34 K/km) over at least 50 m is erroneous."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "fine.average_hpa",
            "fine.sharp_average_hpa",
            "superadiabatic-aloft.on_average_share",
            "superadiabatic-aloft.theta_drop_k",
            "superadiabatic-aloft.above_surface_hpa",
            "superadiabatic-aloft.autoconvective_m",
            "superadiabatic-aloft.neighbour_m",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let column = &view.column;
        let Some(&lowest) = column.pressure.first() else {
            return Vec::new();
        };
        let least = view.threshold("superadiabatic-aloft.theta_drop_k");
        let above = 100.0 * view.threshold("superadiabatic-aloft.above_surface_hpa");
        let start = column.first_at_or_above(lowest - above);
        let on_average = if column.fine {
            view.threshold("superadiabatic-aloft.on_average_share")
        } else {
            1.0
        };
        let layers: Vec<Falling> = falling_layers(
            &column.smooth_theta,
            start..column.len(),
            on_average * least,
        )
        .into_iter()
        .map(|layer| sharpened(column, layer))
        .filter(|layer| layer.drop >= least)
        .filter(|layer| !view.passes_mixed(column.pressure[layer.base], column.pressure[layer.top]))
        .collect();
        neighbours(view, &layers)
            .into_iter()
            .map(|group| self.finding(view, group))
            .collect()
    }
}

impl SuperadiabaticAloft {
    fn finding(&self, view: &View, group: &[Falling]) -> Finding {
        let column = &view.column;
        let (base, top) = ends(group);
        let worst = group.iter().map(|layer| layer.drop).fold(0.0, f64::max);
        let (bottom_p, top_p) = (
            Pressure::from_pa(column.pressure[base]),
            Pressure::from_pa(column.pressure[top]),
        );
        let depth_m = column.thickness[top] - column.thickness[base];
        let (lapse, autoconvective) = autoconvective(view, group);
        let mut evidence = vec![
            Evidence::new("theta_drop_k", "theta falls by", worst, "K", 1),
            Evidence::new(
                "depth_hpa",
                "depth in pressure",
                bottom_p.hpa() - top_p.hpa(),
                "hPa",
                0,
            ),
            Evidence::new("depth_m", "depth in height", depth_m, "m", 0),
        ];
        if let Some(lapse) = lapse {
            evidence.push(Evidence::new(
                "steepest_k_per_km",
                "steepest lapse rate over 50 m or more",
                1000.0 * lapse,
                "K/km",
                1,
            ));
        }
        let span = layer(bottom_p, top_p);
        let mut summary = if group.len() == 1 {
            format!("Theta falls by {} K in {span}", number(worst, 1))
        } else {
            evidence.push(Evidence::new("layers", "layers", group.len() as f64, "", 0));
            format!(
                "Theta falls {} times in {span}, by up to {} K",
                group.len(),
                number(worst, 1)
            )
        };
        if let (true, Some(lapse)) = (autoconvective, lapse) {
            summary.push_str(&format!(
                ", as steep as {} K/km: air can't stay so",
                number(1000.0 * lapse, 0)
            ));
        }
        summary.push('.');
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: if autoconvective { Grade::Erroneous } else { Grade::Doubtful },
            bottom: Some(bottom_p),
            top: Some(top_p),
            heights: view.heights(bottom_p, top_p),
            summary,
            evidence,
            guilty: "The thermometer reads too cold at the top of the layer or too warm at its foot (wetting, icing, \
                     a bad contact, radiation), or a value was miscoded. A cold kink adds buoyancy and makes CAPE too \
                     high; a warm one adds inhibition."
                .into(),
            innocent: "Brief overturning in strong turbulence, at the edge of a cloud or behind a passing wave can make \
                       a shallow superadiabatic layer; it is usually well under 1 K and gone in minutes."
                .into(),
            caveat: if column.from_surface {
                String::new()
            } else {
                "The surface level has no temperature: heights above the ground are counted from the lowest level that has one."
                    .into()
            },
            repairs: repairs(view, base, top),
            wind_only: false,
        }
    }
}

/// Fine data: layers closer together than the threshold are one group. Coded data: each on its own.
fn neighbours<'l>(view: &View, layers: &'l [Falling]) -> Vec<&'l [Falling]> {
    let column = &view.column;
    let near = view.threshold("superadiabatic-aloft.neighbour_m");
    layers
        .chunk_by(|below, above| {
            column.fine && column.thickness[above.base] - column.thickness[below.top] < near
        })
        .collect()
}

fn ends(group: &[Falling]) -> (usize, usize) {
    let base = group.first().map_or(0, |layer| layer.base);
    let top = group.last().map_or(0, |layer| layer.top);
    (base, top)
}

/// Steepest lapse rate of a group of layers, K/m, and whether it is beyond g/Rd over the depth required.
pub(super) fn autoconvective(view: &View, group: &[Falling]) -> (Option<f64>, bool) {
    let depth = view.threshold("superadiabatic-aloft.autoconvective_m");
    let step = view.context.sounding.temperature_step;
    let found = group
        .iter()
        .filter_map(|&layer| steepest(&view.column, layer, depth, step));
    found.fold((None, false), |(lapse, beyond), one| {
        let larger = lapse.map_or(one.lapse, |lapse: f64| lapse.max(one.lapse));
        (Some(larger), beyond || one.autoconvective)
    })
}

/// Two readings: the top is too cold (bridge from the foot up to where theta has recovered) or the foot is too warm
/// (bridge from where theta was as low, up to the top). The one that alters less of the profile comes first.
pub(super) fn repairs(view: &View, base: usize, top: usize) -> Vec<Repair> {
    let column = &view.column;
    let theta = &column.smooth_theta;
    let recovered = (top + 1..column.len()).find(|&level| theta[level] >= theta[base]);
    let as_low = (0..base).rev().find(|&level| theta[level] <= theta[top]);
    let short = |&(bottom, top): &(usize, usize)| {
        column.pressure[bottom] - column.pressure[top] <= LONGEST_BRIDGE
    };
    let cold = recovered.map(|level| (base, level)).filter(short);
    let warm = as_low.map(|level| (level, top)).filter(short);
    let share =
        |(bottom, top): (usize, usize)| (column.pressure[bottom] / column.pressure[top]).ln();
    let (first, second) = match (cold, warm) {
        (Some(cold), Some(warm)) if share(warm) < share(cold) => (Some(warm), Some(cold)),
        (Some(cold), warm) => (Some(cold), warm),
        (None, warm) => (warm, None),
    };
    let mut repairs = Vec::new();
    if let Some((bottom, top)) = first {
        repairs.extend(repair::bridges(view, bottom, top));
        repairs.extend(repair::drop_between(view, bottom, top));
    }
    if let Some((bottom, top)) = second
        && let Some(mut other) = repair::bridges(view, bottom, top).into_iter().next()
    {
        other.id = if Some((bottom, top)) == warm {
            "bridge-warm-foot"
        } else {
            "bridge-cold-top"
        };
        repairs.push(other);
    }
    if recovered.is_none() {
        // Nothing above vouches for the layer: the last believed level is its foot.
        let pressure_pa = column.pressure[base];
        repairs.push(Repair {
            id: "disregard-above",
            what: format!("Disregard everything above {}", repair::at(pressure_pa)),
            amendments: vec![Amendment::DisregardAbove { pressure_pa }],
        });
    }
    repairs
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, Ascent, Dice, Scene, levels, theta_of};
    use approx::assert_relative_eq;
    use dewbound_sounding::Sounding;

    const COLD_TOP: [(f64, f64, f64); 8] = [
        (1000.0, 25.0, 15.0),
        (850.0, 14.0, 5.0),
        (700.0, 5.0, -8.0),
        (655.0, -3.0, -12.0),
        (600.0, -3.6, -20.0),
        (500.0, -12.0, -30.0),
        (300.0, -38.0, -55.0),
        (200.0, -55.0, -70.0),
    ];

    #[test]
    fn a_coded_level_too_cold_is_seen_and_measured() {
        let scene = Scene::day(levels(&COLD_TOP));
        let found = scene.check(&SuperadiabaticAloft);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert_eq!(found[0].key(), "superadiabatic-aloft@700-655");
        let drop = theta_of(70_000.0, 278.15) - theta_of(65_500.0, 270.15);
        assert_relative_eq!(
            found[0].evidence("theta_drop_k").unwrap(),
            drop,
            epsilon = 1e-6
        );
        assert_eq!(found[0].grade, Grade::Doubtful);
        // Theta is back at its value of 700 hPa at 600 hPa, so only the level at 655 hPa is suspect.
        assert!(
            found[0]
                .repairs
                .iter()
                .any(|repair| repair.what == "Drop the level at 655 hPa")
        );
        assert!(
            found[0].repairs[0]
                .what
                .starts_with("Bridge 700\u{2013}600 hPa, humidity kept as mixing ratio")
        );
    }

    #[test]
    fn beyond_autoconvection_is_erroneous_only_when_rounding_cant_explain_it() {
        // 5.0 K over 7 hPa (about 80 m): 60 K/km.
        let mut rows = COLD_TOP;
        rows[3] = (693.0, 0.0, -12.0);
        assert_eq!(
            Scene::day(levels(&rows)).check(&SuperadiabaticAloft)[0].grade,
            Grade::Erroneous
        );
        // 1.8 K over 4 hPa (46 m): too thin to be proof.
        rows[3] = (696.0, 3.2, -12.0);
        assert_eq!(
            Scene::day(levels(&rows)).check(&SuperadiabaticAloft)[0].grade,
            Grade::Doubtful
        );
    }

    #[test]
    fn a_falling_theta_below_the_limit_or_near_the_ground_is_silent() {
        let mut rows = COLD_TOP;
        // Theta falls by about 0.8 K.
        rows[3] = (655.0, -1.0, -12.0);
        assert!(
            Scene::day(levels(&rows))
                .check(&SuperadiabaticAloft)
                .is_empty()
        );
        let near = [
            (1000.0, 25.0, 15.0),
            (960.0, 25.0, 15.0),
            (930.0, 19.0, 14.0),
            (700.0, 5.0, -8.0),
        ];
        assert!(
            Scene::day(levels(&near))
                .check(&SuperadiabaticAloft)
                .is_empty()
        );
    }

    #[test]
    fn a_cold_top_without_recovery_offers_to_disregard_what_is_above() {
        let rows = [
            (1000.0, 25.0, 15.0),
            (850.0, 14.0, 5.0),
            (700.0, 5.0, -8.0),
            (655.0, -6.0, -12.0),
        ];
        let found = Scene::day(levels(&rows)).check(&SuperadiabaticAloft);
        assert!(
            found[0]
                .repairs
                .iter()
                .any(|repair| repair.id == "disregard-above"),
            "{found:#?}"
        );
    }

    /// Share of faulty ascents in which the rule sees the fault: a thermometer that goes cold over 30 to 120 m so that theta
    /// falls by `drop`, and comes back after some hundred metres.
    fn detection(drop: f64, sampled: impl Fn(&Ascent) -> Sounding) -> f64 {
        let cases = 100;
        let mut hits = 0;
        for seed in 0..cases {
            let mut dice = Dice::new(seed);
            let air = Air0::random(&mut dice);
            let from = dice.between(3500.0, 7000.0);
            let over = dice.between(30.0, 120.0);
            let depth = 2.0 * over + dice.between(100.0, 800.0);
            let clean = air.ascent();
            let (a, b) = (clean.at_height(from), clean.at_height(from + over));
            let natural = theta_of(clean.p[b], clean.t[b]) - theta_of(clean.p[a], clean.t[a]);
            let bias = (drop + natural) * clean.t[b] / theta_of(clean.p[b], clean.t[b]);
            let ascent = clean
                .cold(from, over, depth, bias)
                .noisy(&mut dice, 0.1, 0.02);
            let scene = Scene::day(sampled(&ascent));
            let p = ascent.p[a];
            hits += usize::from(scene.check(&SuperadiabaticAloft).iter().any(|finding| {
                finding
                    .bottom
                    .is_some_and(|bottom| (bottom.pa() - p).abs() < 3_000.0)
            }));
        }
        hits as f64 / cases as f64
    }

    #[test]
    fn detects_most_faults_of_half_again_the_threshold() {
        let fine = detection(1.5, Ascent::fine);
        assert!(fine >= 0.95, "fine: {fine}");
        // With significant levels to half a kelvin the message carries the fault; to a whole kelvin it often doesn't.
        let coded = detection(1.5, |ascent| ascent.coded_within(0.5));
        assert!(coded >= 0.95, "coded: {coded}");
        let loosely_coded = detection(3.0, Ascent::coded);
        assert!(loosely_coded >= 0.95, "coded to 1 K: {loosely_coded}");
    }

    #[test]
    fn at_the_threshold_about_half_are_seen_and_well_below_it_few() {
        for (name, sampled) in [
            ("fine", Ascent::fine as fn(&Ascent) -> Sounding),
            ("coded", |ascent| ascent.coded_within(0.5)),
        ] {
            let at = detection(1.0, sampled);
            assert!((0.4..=0.85).contains(&at), "{name}: {at}");
            let below = detection(0.4, sampled);
            assert!(below <= 0.05, "{name}: {below}");
        }
    }
}
