//! Superadiabatic layers away from the ground.

use super::repair;
use crate::layers::{Falling, falling_layers, steepest};
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
        let layers = falling_layers(&column.smooth_theta, start..column.len(), least);
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
            Evidence::new("depth_hpa", "depth", bottom_p.hpa() - top_p.hpa(), "hPa", 0),
            Evidence::new("depth_m", "depth", depth_m, "m", 0),
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
    let short = |&(bottom, top): &(usize, usize)| column.pressure[bottom] - column.pressure[top] <= LONGEST_BRIDGE;
    let cold = recovered.map(|level| (base, level)).filter(short);
    let warm = as_low.map(|level| (level, top)).filter(short);
    let share = |(bottom, top): (usize, usize)| (column.pressure[bottom] / column.pressure[top]).ln();
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
