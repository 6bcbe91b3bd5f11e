//! Moisture that changes with height where the air is well mixed.

use super::{repair, surface_mismatch::dewpoint_refuted};
use crate::mixed::{Line, MIXED_THRESHOLDS, MixedLayer};
use crate::words::{layer, number};
use crate::{Column, Evidence, Finding, Grade, Rule, Thresholds, View};
use dewbound_sounding::Daylight;
use dewbound_sounding::thermo::{
    Pressure, Temperature, dewpoint_from_mixing_ratio, dewpoint_from_vapour_pressure,
    saturation_vapour_pressure,
};

/// w changes through a mixed layer that reaches the ground.
pub struct MoistureSlope;

/// Share of the mixed layer that the fitted levels must span for the line to be carried on to its ends.
const KNOWN_SHARE: f64 = 0.5;

/// With fewer levels than this a line through them has no scatter to speak of, and its slope is that of two levels.
const ENOUGH_TO_FIT: usize = 4;

/// Where the change sits.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Shape {
    /// Even through the layer.
    Even,
    /// Between the surface and the levels above it.
    Jump,
    /// A little of each, which add up.
    Both,
    /// Too few levels to tell.
    Unresolved,
}

/// What was seen.
pub(super) struct Seen {
    mixed: MixedLayer,
    shape: Shape,
    surface_w: f64,
    /// w the layer leads to at the surface, kg/kg.
    at_surface: f64,
    /// Fitted w at the bottom and the top of the layer (or of the levels fitted, when they span too little), kg/kg.
    fitted: (f64, f64),
    /// Root mean square scatter about the line, kg/kg.
    residual: f64,
    /// Change of the dew point through the fit (bottom minus top), and at the surface (surface minus layer), both
    /// brought to surface pressure, K.
    slope_k: f64,
    jump_k: f64,
    /// The same from the surface value to the top of the fit, K.
    total_k: f64,
    /// Levels enough that the line says something.
    fits: bool,
}

impl Rule for MoistureSlope {
    fn id(&self) -> &'static str {
        "moisture-slope"
    }

    fn title(&self) -> &'static str {
        "Moisture slopes in a mixed layer"
    }

    fn source(&self) -> &'static str {
        "Mahrt 1976, MWR 104; common practice"
    }

    fn about(&self) -> &'static str {
        "The mixing ratio changes through a layer of constant theta (within 1 K) at least 30 hPa deep that reaches the \
         ground, the contact layer left out, while the sun is more than 10 degrees up or was within the last hour. An \
         even slope may be entrainment; a jump at the lowest levels points to the surface instrument. Not judged at night."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        const NAMES: [&str; 9] = [
            "fine.average_hpa",
            MIXED_THRESHOLDS[0],
            MIXED_THRESHOLDS[1],
            MIXED_THRESHOLDS[2],
            MIXED_THRESHOLDS[3],
            "moisture-slope.slope_k",
            "moisture-slope.jump_k",
            "moisture-slope.total_k",
            "moisture-slope.rh_uncertainty_pct",
        ];
        &NAMES
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        seen(view)
            .filter(|seen| seen.shape == Shape::Even || !dewpoint_refuted(view))
            .map(|seen| self.finding(view, &seen))
            .into_iter()
            .collect()
    }
}

/// Whether and what the rule sees; the surface-mismatch rule asks too, so that one cause is one finding.
pub(super) fn seen(view: &View) -> Option<Seen> {
    if view.context.daylight == Daylight::Night {
        return None;
    }
    let column = &view.column;
    let mixed = MixedLayer::in_column(column, view.context.thresholds)?;
    let surface_w = column.mixing_ratio.first().copied().flatten()?;
    let point = |&level: &usize| Some((column.pressure[level], column.mixing_ratio[level]?));
    let line = Line::fit(mixed.interior.iter().filter_map(point))?;
    let (&lowest, &highest) = (mixed.interior.first()?, mixed.interior.last()?);
    let (p_low, p_high) = (column.pressure[lowest], column.pressure[highest]);
    let surface = mixed.bottom;
    let dewpoint = |w: f64| dewpoint_from_mixing_ratio(surface, w.max(1e-6)).k();
    // The line is carried on to both ends of the layer only if it is known over most of it.
    let known = p_low - p_high;
    let fitted = if known >= KNOWN_SHARE * (surface.pa() - mixed.top.pa()) {
        (line.at(surface.pa()), line.at(mixed.top.pa()))
    } else {
        (line.at(p_low), line.at(p_high))
    };
    let at_surface = if known >= surface.pa() - p_low {
        line.at(surface.pa())
    } else {
        line.at(p_low)
    };
    let slope_k = dewpoint(fitted.0) - dewpoint(fitted.1);
    let jump_k = dewpoint(surface_w) - dewpoint(at_surface);
    // In dry air a small error of relative humidity is a large one of the dew point.
    let uncertain = mixed
        .interior
        .iter()
        .filter_map(|&level| humidity_uncertainty(column, view.context.thresholds, level))
        .sum::<f64>()
        / mixed.interior.len() as f64;
    let total_k = dewpoint(surface_w) - dewpoint(fitted.1);
    let limit = |name| f64::hypot(view.threshold(name), uncertain);
    let slopes = slope_k.abs() >= limit("moisture-slope.slope_k");
    let jumps = jump_k.abs() >= limit("moisture-slope.jump_k");
    let shape = match (slopes, jumps) {
        // One level, perhaps far up: some fall of moisture on the way there is ordinary.
        _ if mixed.interior.len() == 1 => {
            if jump_k.abs() < limit("moisture-slope.total_k") {
                return None;
            }
            Shape::Unresolved
        }
        (true, false) => Shape::Even,
        (false, true) => Shape::Jump,
        (true, true) if jump_k.abs() >= slope_k.abs() => Shape::Jump,
        (true, true) => Shape::Even,
        // Neither is much by itself, but they add up.
        (false, false) if total_k.abs() < limit("moisture-slope.total_k") => {
            return None;
        }
        (false, false) => Shape::Both,
    };
    Some(Seen {
        shape,
        surface_w,
        at_surface,
        fitted,
        residual: line.residual,
        slope_k,
        jump_k,
        total_k,
        fits: column.fine || mixed.interior.len() >= ENOUGH_TO_FIT,
        mixed,
    })
}

/// What the uncertainty of relative humidity makes of the dew point at a level, K.
pub(super) fn humidity_uncertainty(
    column: &Column,
    thresholds: &Thresholds,
    level: usize,
) -> Option<f64> {
    let dewpoint = Temperature::from_k(column.dewpoint.get(level).copied().flatten()?);
    let share = thresholds.get("moisture-slope.rh_uncertainty_pct")
        / 100.0
        / column.relative_humidity(level)?;
    let e = saturation_vapour_pressure(dewpoint).pa();
    let moister = dewpoint_from_vapour_pressure(Pressure::from_pa(e * (1.0 + share)));
    Some(moister.k() - dewpoint.k())
}

impl MoistureSlope {
    fn finding(&self, view: &View, seen: &Seen) -> Finding {
        let mixed = &seen.mixed;
        let grams = |w: f64| 1000.0 * w;
        let (from, to, at_one_pressure) = match seen.shape {
            Shape::Even => (seen.fitted.0, seen.fitted.1, seen.slope_k),
            Shape::Both => (seen.surface_w, seen.fitted.1, seen.total_k),
            Shape::Jump | Shape::Unresolved => (seen.surface_w, seen.at_surface, seen.jump_k),
        };
        let change = grams(from - to);
        let direction = if change >= 0.0 { "falls" } else { "rises" };
        let span = layer(mixed.bottom, mixed.top);
        let head = match seen.shape {
            Shape::Even if seen.fits => format!("Mixing ratio {direction} evenly"),
            Shape::Even => format!("Mixing ratio {direction} from level to level"),
            Shape::Both => format!("Mixing ratio {direction} from the surface to the top"),
            Shape::Jump => format!("Mixing ratio {direction} at the lowest levels"),
            Shape::Unresolved => {
                format!("Mixing ratio {direction} from the surface to the one level above it")
            }
        };
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: Grade::Doubtful,
            bottom: Some(mixed.bottom),
            top: Some(mixed.top),
            heights: view.heights(mixed.bottom, mixed.top),
            summary: format!(
                "{head} by {} g/kg ({} K as dew point at surface pressure) in the mixed layer {span}.",
                number(change.abs(), 1),
                number(at_one_pressure.abs(), 1)
            ),
            evidence: self.evidence(seen),
            guilty: guilty(seen),
            innocent: innocent(seen),
            caveat: caveat(view, seen),
            repairs: self.repairs(view, seen),
            wind_only: false,
        }
    }

    fn evidence(&self, seen: &Seen) -> Vec<Evidence> {
        let grams = |w: f64| 1000.0 * w;
        let mixed = &seen.mixed;
        let mut evidence = Vec::new();
        if seen.fits {
            evidence.extend([
                Evidence::new(
                    "slope_gkg",
                    "fitted mixing ratio, bottom minus top",
                    grams(seen.fitted.0 - seen.fitted.1),
                    "g/kg",
                    1,
                ),
                Evidence::new(
                    "slope_k",
                    "the fitted change as dew point at surface pressure",
                    seen.slope_k,
                    "K",
                    1,
                ),
                Evidence::new(
                    "scatter_gkg",
                    "scatter about the fitted line",
                    grams(seen.residual),
                    "g/kg",
                    2,
                ),
            ]);
        }
        evidence.extend([
            Evidence::new(
                "jump_gkg",
                "mixing ratio, surface minus mixed layer",
                grams(seen.surface_w - seen.at_surface),
                "g/kg",
                1,
            ),
            Evidence::new(
                "jump_k",
                "surface minus mixed layer as dew point at surface pressure",
                seen.jump_k,
                "K",
                1,
            ),
            Evidence::new(
                "depth_hpa",
                "depth of the mixed layer",
                mixed.bottom.hpa() - mixed.top.hpa(),
                "hPa",
                0,
            ),
            Evidence::new(
                "theta_tolerance_k",
                "theta constant within",
                mixed.tolerance,
                "K",
                1,
            ),
            Evidence::new(
                "levels",
                "levels of the sonde judged in it",
                mixed.interior.len() as f64,
                "",
                0,
            ),
        ]);
        if let Some(implied) = mixed.implied_dewpoint() {
            evidence.push(Evidence::new(
                "implied_dewpoint_c",
                "surface dew point the mixed layer implies",
                implied.c(),
                "\u{b0}C",
                1,
            ));
        }
        evidence
    }

    fn repairs(&self, view: &View, seen: &Seen) -> Vec<crate::Repair> {
        let mixed = &seen.mixed;
        // One above the surface temperature would be cut off there: not offered.
        let believe_sonde = mixed
            .implied_dewpoint()
            .filter(|implied| {
                view.column
                    .temperature
                    .first()
                    .is_none_or(|&t| implied.k() <= t)
            })
            .map(|implied| {
                repair::surface_dewpoint("believe-sonde", implied, "believing the sonde")
            });
        let believe_surface = repair::mixed_moisture(
            "believe-surface",
            mixed.bottom,
            mixed.top,
            seen.surface_w.max(0.0),
        );
        believe_sonde.into_iter().chain([believe_surface]).collect()
    }
}

fn guilty(seen: &Seen) -> String {
    let wet = seen.jump_k > 0.0;
    match seen.shape {
        Shape::Jump | Shape::Unresolved if wet => {
            "The surface hygrometer reads too moist (wet or badly ventilated screen, a value from another place), or the \
             sonde too dry from the start. If the surface is wrong, surface CAPE is too high."
        }
        Shape::Jump | Shape::Unresolved => {
            "The surface hygrometer reads too dry, or the sonde too moist from the start. If the surface is wrong, \
             surface CAPE is too low."
        }
        Shape::Even | Shape::Both if seen.total_k > 0.0 => {
            "The sonde's humidity sensor drifts dry as it rises (lag, heating of the sensor), or surface and sonde differ \
             and smoothing has spread it. Air that is mixed in theta should be mixed in moisture."
        }
        Shape::Even | Shape::Both => {
            "The sonde's humidity sensor was too dry at first and caught up while rising, or the surface value is too \
             low. Air that is mixed in theta should be mixed in moisture."
        }
    }
    .into()
}

fn innocent(seen: &Seen) -> String {
    match seen.shape {
        Shape::Jump | Shape::Unresolved if seen.jump_k > 0.0 => {
            "Evaporation from wet ground or crops under weak mixing, or a shallow upslope, sea-breeze or outflow current, \
             leaves moister air at the ground."
        }
        Shape::Jump | Shape::Unresolved => {
            "Outflow or downslope air, or dry ground in a moist air mass carried in above it, leaves drier air at the ground."
        }
        Shape::Even | Shape::Both if seen.total_k > 0.0 => {
            "Entrainment of dry air at the top of a growing mixed layer, or advection that changes with height, makes w \
             fall evenly upward; it is common in heated layers."
        }
        Shape::Even | Shape::Both => "Moister air carried in above, or drying of the lowest air by advection.",
    }
    .into()
}

fn caveat(view: &View, seen: &Seen) -> String {
    let mut caveats = Vec::new();
    if view.context.daylight == Daylight::Unknown {
        caveats.push(format!(
            "Day or night isn't known ({}): without the sun on the ground nothing need mix moisture.",
            view.missing_for_daylight()
        ));
    }
    if seen.shape == Shape::Unresolved {
        caveats.push(
            "One level only above the surface: an even slope can't be told from a jump.".to_owned(),
        );
    } else if !seen.fits {
        caveats.push(format!(
            "Only {} levels: how evenly moisture changes can't be told.",
            seen.mixed.interior.len()
        ));
    }
    caveats.join(" ")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, BOTH, Dice, Scene};
    use dewbound_sounding::{Amendment, Sampling};

    /// w falling evenly through the mixed layer so that the dew point at one pressure changes by `k`.
    fn sloping(seed: u64, k: f64, sampling: Sampling) -> Vec<Finding> {
        let mut dice = Dice::new(seed);
        let air = Air0::random(&mut dice);
        let mut ascent = air.ascent();
        let surface = Pressure::from_pa(ascent.p[0]);
        let sign = if dice.uniform() < 0.8 { 1.0 } else { -1.0 };
        let top = ascent.at_height(air.mixed_m);
        let base = dewpoint_from_mixing_ratio(surface, air.w).k();
        for i in 0..top {
            let share = (ascent.p[0] - ascent.p[i]) / (ascent.p[0] - ascent.p[top]);
            let dewpoint = Temperature::from_k(base - sign * k * share);
            let w = Air {
                pressure: surface,
                temperature: dewpoint,
                dewpoint,
            }
            .mixing_ratio();
            ascent.set_w(i, w);
        }
        // The air above joins on where the slope has led.
        let w_top = ascent.w(top - 1);
        for i in top..ascent.at_height(air.mixed_m + air.inversion_m) {
            let w = ascent.w(i).min(w_top);
            ascent.set_w(i, w);
        }
        Scene::day(ascent.noisy(&mut dice, 0.1, 0.01).sampled(sampling)).check(&MoistureSlope)
    }
    use dewbound_sounding::thermo::Air;

    /// A surface hygrometer off by `k` of dew point.
    fn biased(seed: u64, k: f64, sampling: Sampling, daylight: Daylight) -> (Scene, f64) {
        let mut dice = Dice::new(seed);
        let air = Air0::random(&mut dice);
        let mut ascent = air.ascent().noisy(&mut dice, 0.1, 0.01);
        let surface = Pressure::from_pa(ascent.p[0]);
        let true_dewpoint = dewpoint_from_mixing_ratio(surface, air.w).k();
        let dewpoint = Temperature::from_k(true_dewpoint + k);
        ascent.set_w(
            0,
            Air {
                pressure: surface,
                temperature: dewpoint,
                dewpoint,
            }
            .mixing_ratio(),
        );
        (
            Scene::new(ascent.sampled(sampling), daylight),
            true_dewpoint,
        )
    }

    #[test]
    fn an_even_slope_is_told_as_one() {
        for sampling in BOTH {
            let found = (0..40)
                .filter(|&seed| !sloping(seed, 4.0, sampling).is_empty())
                .count();
            assert!(found >= 36, "{sampling:?}: {found} of 40");
        }
        let fine = sloping(3, 4.0, Sampling::Fine);
        assert!(fine[0].summary.contains("evenly"), "{}", fine[0].summary);
        assert!(
            fine[0].innocent.contains("ntrainment")
                || fine[0].innocent.contains("carried in above")
        );
    }

    #[test]
    fn a_jump_points_to_the_surface_and_the_sonde_implies_the_truth() {
        for sampling in BOTH {
            for (k, seeds) in [(3.0, 0..30), (-3.0, 30..60)] {
                let mut hits = 0;
                for seed in seeds {
                    let (scene, truth) = biased(seed, k, sampling, Daylight::Day);
                    let found = scene.check(&MoistureSlope);
                    let Some(finding) = found.first() else {
                        continue;
                    };
                    hits += usize::from(!finding.summary.contains("evenly"));
                    let Amendment::SurfaceDewpoint { dewpoint_k } =
                        finding.repairs[0].amendments[0]
                    else {
                        panic!("not a surface dew point")
                    };
                    assert!(
                        (dewpoint_k - truth).abs() < 1.3,
                        "{sampling:?} {seed}: {dewpoint_k} {truth}"
                    );
                    assert_eq!(finding.repairs[1].id, "believe-surface");
                }
                assert!(hits >= 26, "{sampling:?} {k}: {hits} of 30");
            }
        }
    }

    #[test]
    fn night_is_not_judged_and_unknown_says_so() {
        let (scene, _) = biased(1, 4.0, Sampling::Fine, Daylight::Night);
        assert!(scene.check(&MoistureSlope).is_empty());
        let (scene, _) = biased(1, 4.0, Sampling::Fine, Daylight::Unknown);
        let found = scene.check(&MoistureSlope);
        assert_eq!(found[0].grade, Grade::Doubtful);
        assert!(found[0].caveat.contains("isn't known"));
    }

    #[test]
    fn a_jump_is_one_finding_not_two() {
        let (scene, _) = biased(4, 5.0, Sampling::Fine, Daylight::Day);
        let rules: Vec<_> = scene
            .findings()
            .iter()
            .map(|finding| finding.rule)
            .collect();
        assert_eq!(rules, ["moisture-slope"]);
    }

    #[test]
    fn a_ground_inversion_is_no_mixed_layer() {
        let air = Air0 {
            contact_k: -4.0,
            ..Air0::default()
        };
        let scene = Scene::day(air.ascent().fine());
        assert!(MixedLayer::of(&scene.profile, &scene.thresholds).is_none());
        let mixed = Scene::day(Air0::default().ascent().fine());
        let layer = MixedLayer::of(&mixed.profile, &mixed.thresholds).unwrap();
        assert!(
            (layer.bottom.hpa() - layer.top.hpa() - 158.0).abs() < 8.0,
            "{layer:?}"
        );
    }
}
