//! A surface value that doesn't continue into the first levels of the sonde.

use super::{moisture_slope, repair, superadiabatic_contact::SuperadiabaticContact};
use crate::mixed::Line;
use crate::words::{celsius, number};
use crate::{Evidence, Finding, Grade, Repair, Rule, View};
use dewbound_sounding::Daylight;
use dewbound_sounding::thermo::{
    KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, dewpoint_from_mixing_ratio,
};

/// Theta of the first sonde levels may vary by this much for the air to count as well mixed, K.
const MIXED_K: f64 = 1.0;

/// Surface T or Td doesn't continue into the sonde.
pub struct SurfaceMismatch;

/// A surface quantity against what the sonde leads one to expect.
struct Gap {
    /// Surface minus expected, K, after giving the benefit of the doubt.
    difference: f64,
    /// The value of the surface quantity that the sonde implies, K.
    expected: f64,
}

impl Rule for SurfaceMismatch {
    fn id(&self) -> &'static str {
        "surface-mismatch"
    }

    fn title(&self) -> &'static str {
        "Surface and sonde disagree"
    }

    fn source(&self) -> &'static str {
        "common practice, no source"
    }

    fn about(&self) -> &'static str {
        "The surface dew point or temperature doesn't continue into the first levels of the sonde. Moisture is compared \
         as mixing ratio brought to one pressure, never as dew points at two; temperature as theta, and only by day. \
         The sonde may be carried down as constant or along its own slope, whichever is nearer the surface value."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "surface-mismatch.dewpoint_day_k",
            "surface-mismatch.dewpoint_night_k",
            "surface-mismatch.warm_day_k",
            "surface-mismatch.cold_day_k",
            "surface-mismatch.near_hpa",
            "surface-mismatch.far_hpa",
            "surface-mismatch.coded_far_hpa",
        ]
    }

    fn look(&self, view: &View) -> Vec<Finding> {
        let Some(surface) = view.column.surface_pressure() else {
            return Vec::new();
        };
        let levels = first_levels(view, surface);
        let (Some(_), Some(&highest)) = (levels.first(), levels.last()) else {
            return Vec::new();
        };
        // One cause is one finding: a rule that names it goes first.
        let dewpoint = if moisture_slope::seen(view).is_some() {
            None
        } else {
            dewpoint_gap(view, surface, &levels)
        };
        let temperature = temperature_gap(view, surface, &levels)
            .filter(|gap| gap.difference < 0.0 || SuperadiabaticContact.look(view).is_empty());
        if dewpoint.is_none() && temperature.is_none() {
            return Vec::new();
        }
        vec![self.finding(
            view,
            surface,
            highest,
            dewpoint.as_ref(),
            temperature.as_ref(),
        )]
    }
}

/// Levels of the sonde next above the surface that are judged.
fn first_levels(view: &View, surface: f64) -> Vec<usize> {
    let column = &view.column;
    if column.fine {
        let from =
            column.first_at_or_above(surface - 100.0 * view.threshold("surface-mismatch.near_hpa"));
        let to =
            column.first_at_or_above(surface - 100.0 * view.threshold("surface-mismatch.far_hpa"));
        (from.max(1)..to).collect()
    } else {
        let far = surface - 100.0 * view.threshold("surface-mismatch.coded_far_hpa");
        match column.pressure.get(1) {
            Some(&first) if first >= far => (1..column.len().min(3)).collect(),
            _ => Vec::new(),
        }
    }
}

/// A value carried down to the surface as it is at the lowest levels, and along the line through all of them.
fn carried_down(points: &[(f64, f64)], surface: f64) -> Option<(f64, f64)> {
    let line = Line::fit(points.iter().copied())?;
    let (&(low, lowest), &(high, _)) = (points.first()?, points.last()?);
    // The line is carried no farther than it is long.
    let reach = (surface - low).min(low - high);
    let along = line.at(low + reach);
    let constant = if points.len() > 2 {
        line.at(low)
    } else {
        lowest
    };
    Some((constant, along))
}

/// How far `value` lies outside the range between two expectations.
fn outside(value: f64, (a, b): (f64, f64)) -> f64 {
    value - value.clamp(a.min(b), a.max(b))
}

fn dewpoint_gap(view: &View, surface: f64, levels: &[usize]) -> Option<Gap> {
    let column = &view.column;
    let points: Vec<(f64, f64)> = levels
        .iter()
        .filter_map(|&level| Some((column.pressure[level], column.mixing_ratio[level]?)))
        .collect();
    let (constant, along) = carried_down(&points, surface)?;
    let at_surface =
        |w: f64| dewpoint_from_mixing_ratio(Pressure::from_pa(surface), w.max(1e-6)).k();
    let measured = at_surface(column.mixing_ratio.first().copied().flatten()?);
    let expected = (at_surface(constant), at_surface(along));
    let difference = outside(measured, expected);
    let limit = match view.context.daylight {
        Daylight::Day => view.threshold("surface-mismatch.dewpoint_day_k"),
        Daylight::Night | Daylight::Unknown => view.threshold("surface-mismatch.dewpoint_night_k"),
    };
    (difference.abs() >= limit).then_some(Gap {
        difference,
        expected: measured - difference,
    })
}

fn temperature_gap(view: &View, surface: f64, levels: &[usize]) -> Option<Gap> {
    if view.context.daylight != Daylight::Day {
        return None;
    }
    let column = &view.column;
    let points: Vec<(f64, f64)> = levels
        .iter()
        .map(|&level| (column.pressure[level], column.theta[level]))
        .collect();
    let expected = carried_down(&points, surface)?;
    let difference = outside(column.theta[0], expected);
    let judged = if difference > 0.0 {
        difference >= view.threshold("surface-mismatch.warm_day_k")
    } else {
        // Below an inversion the last metres may be colder than any line suggests: only mixed air is judged.
        let smooth = levels.iter().map(|&level| column.smooth_theta[level]);
        let range =
            smooth.clone().fold(f64::NEG_INFINITY, f64::max) - smooth.fold(f64::INFINITY, f64::min);
        range <= MIXED_K && difference <= -view.threshold("surface-mismatch.cold_day_k")
    };
    judged.then(|| Gap {
        difference,
        expected: (column.theta[0] - difference) * (surface / REFERENCE_PRESSURE).powf(KAPPA),
    })
}

impl SurfaceMismatch {
    fn finding(
        &self,
        view: &View,
        surface: f64,
        highest: usize,
        dewpoint: Option<&Gap>,
        temperature: Option<&Gap>,
    ) -> Finding {
        let column = &view.column;
        let (bottom, top) = (
            Pressure::from_pa(surface),
            Pressure::from_pa(column.pressure[highest]),
        );
        let mut said = Vec::new();
        let mut evidence = Vec::new();
        let mut repairs: Vec<Repair> = Vec::new();
        if let Some(gap) = dewpoint {
            let word = if gap.difference > 0.0 {
                "moister"
            } else {
                "drier"
            };
            let expected = Temperature::from_k(gap.expected);
            said.push(format!(
                "is {word} than the first sonde levels by {} K of dew point at one pressure ({} expected)",
                number(gap.difference.abs(), 1),
                celsius(expected)
            ));
            let w = |dewpoint: Temperature| {
                dewbound_sounding::thermo::Air {
                    pressure: bottom,
                    temperature: dewpoint,
                    dewpoint,
                }
                .mixing_ratio()
            };
            if let Some(measured) = column.mixing_ratio.first().copied().flatten() {
                evidence.push(Evidence::new(
                    "difference_gkg",
                    "mixing ratio, surface minus sonde",
                    1000.0 * (measured - w(expected)),
                    "g/kg",
                    1,
                ));
            }
            evidence.extend([
                Evidence::new(
                    "dewpoint_difference_k",
                    "dew point at surface pressure, surface minus sonde",
                    gap.difference,
                    "K",
                    1,
                ),
                Evidence::new(
                    "expected_dewpoint_c",
                    "surface dew point the sonde leads to",
                    expected.c(),
                    "\u{b0}C",
                    1,
                ),
            ]);
            repairs.push(repair::surface_dewpoint(
                "dewpoint-from-sonde",
                expected,
                "carried down from the sonde",
            ));
        }
        if let Some(gap) = temperature {
            let word = if gap.difference > 0.0 {
                "warmer"
            } else {
                "colder"
            };
            let expected = Temperature::from_k(gap.expected);
            said.push(format!(
                "is {word} than the first sonde levels by {} K of theta ({} expected)",
                number(gap.difference.abs(), 1),
                celsius(expected)
            ));
            evidence.extend([
                Evidence::new(
                    "theta_difference_k",
                    "theta, surface minus sonde",
                    gap.difference,
                    "K",
                    1,
                ),
                Evidence::new(
                    "expected_temperature_c",
                    "surface temperature the sonde leads to",
                    expected.c(),
                    "\u{b0}C",
                    1,
                ),
            ]);
            repairs.push(repair::surface_temperature(
                "temperature-from-sonde",
                expected,
                "carried down from the sonde",
            ));
        }
        if let [dewpoint, temperature] = repairs.as_slice() {
            let both = Repair {
                id: "both-from-sonde",
                what: "Set surface temperature and dew point as carried down from the sonde".into(),
                amendments: temperature
                    .amendments
                    .iter()
                    .chain(&dewpoint.amendments)
                    .copied()
                    .collect(),
            };
            repairs.insert(0, both);
        }
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: Grade::Doubtful,
            bottom: Some(bottom),
            top: Some(top),
            heights: view.heights(bottom, top),
            summary: format!("The surface {}.", said.join(" and ")),
            evidence,
            guilty: "The surface value is wrong or not of this place and time (another site, another hour, a faulty or \
                     badly ventilated instrument), or the sonde was released before its sensors had settled. Surface \
                     parcels start from the wrong air."
                .into(),
            innocent: "A shallow pool of different air at the ground: outflow, sea or lake air, fog, drainage flow, wet \
                       ground, or a strong inversion under the first sonde levels."
                .into(),
            caveat: match view.context.daylight {
                Daylight::Unknown => {
                    "Day or night isn't known (no position or no launch time): temperature wasn't compared, and the wider \
                     night-time limit was used for moisture."
                        .into()
                }
                Daylight::Day | Daylight::Night => String::new(),
            },
            repairs,
            wind_only: false,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, BOTH, Dice, Scene};
    use dewbound_sounding::Amendment;

    /// A night with a ground inversion and a surface dew point off by `k`.
    fn night(seed: u64, k: f64) -> crate::synthetic::Ascent {
        let mut dice = Dice::new(seed);
        // Dry enough that the surface can be moister without being wet.
        let air = Air0 {
            contact_k: dice.between(-5.0, -1.0),
            w: 0.004,
            ..Air0::random(&mut dice)
        };
        let mut ascent = air.ascent().noisy(&mut dice, 0.1, 0.01);
        let pressure = Pressure::from_pa(ascent.p[0]);
        let dewpoint = Temperature::from_k(dewpoint_from_mixing_ratio(pressure, air.w).k() + k);
        let air = dewbound_sounding::thermo::Air {
            pressure,
            temperature: dewpoint,
            dewpoint,
        };
        ascent.set_w(0, air.mixing_ratio());
        ascent
    }

    #[test]
    fn a_surface_dew_point_off_at_night_is_seen() {
        for sampling in BOTH {
            for k in [7.5, -7.5] {
                let mut seen = 0;
                let mut judged = 0;
                for seed in 0..40 {
                    let scene = Scene::new(night(seed, k).sampled(sampling), Daylight::Night);
                    // A coded message may have no level near enough to compare with, and says nothing then.
                    let near = scene
                        .profile
                        .pressure
                        .get(1)
                        .is_some_and(|&p| scene.profile.pressure[0] - p <= 6_000.0);
                    judged += usize::from(near);
                    seen += usize::from(near && !scene.check(&SurfaceMismatch).is_empty());
                }
                assert!(
                    judged >= 15 && seen * 100 >= judged * 95,
                    "{sampling:?} {k}: {seen} of {judged}"
                );
            }
        }
    }

    #[test]
    fn the_repair_restores_what_the_sonde_leads_to() {
        let scene = Scene::new(night(3, 8.0).fine(), Daylight::Night);
        let clean = Scene::new(night(3, 0.0).fine(), Daylight::Night);
        let found = scene.check(&SurfaceMismatch);
        let Amendment::SurfaceDewpoint { dewpoint_k } = found[0].repairs[0].amendments[0] else {
            panic!("not a surface dew point")
        };
        let truth = clean.profile.surface_air().unwrap().dewpoint.k();
        assert!((dewpoint_k - truth).abs() < 1.0, "{dewpoint_k} {truth}");
        assert!(clean.check(&SurfaceMismatch).is_empty());
    }

    #[test]
    fn a_surface_temperature_far_off_by_day_is_seen_and_a_contact_layer_is_not() {
        for (excess, expected) in [(9.0, 1), (3.0, 0), (-7.0, 1), (-2.0, 0)] {
            let mut ascent = Air0 {
                contact_k: 0.0,
                ..Air0::default()
            }
            .ascent()
            .noisy(&mut Dice::new(2), 0.05, 0.01);
            let w = ascent.w(0);
            ascent.t[0] += excess;
            ascent.set_w(0, w);
            let found = Scene::day(ascent.fine()).check(&SurfaceMismatch);
            assert_eq!(found.len(), expected, "{excess}: {found:#?}");
            if let Some(finding) = found.first() {
                assert!(finding.evidence("theta_difference_k").unwrap() * excess > 0.0);
            }
        }
    }
}
