//! A surface value that doesn't continue into the first levels of the sonde.

use super::moisture_slope::{self, humidity_uncertainty};
use super::{repair, superadiabatic_contact::SuperadiabaticContact, unsettled};
use crate::mixed::Line;
use crate::words::{celsius, number};
use crate::{Column, Evidence, Finding, Grade, Repair, Rule, Thresholds, View};
use dewbound_sounding::thermo::{
    KAPPA, Pressure, REFERENCE_PRESSURE, Temperature, dewpoint_from_mixing_ratio,
};
use dewbound_sounding::{Daylight, Profile};

/// Theta of the first sonde levels may vary by this much for the air to count as well mixed, K.
const MIXED_K: f64 = 1.0;

/// Surface T or Td doesn't continue into the sonde.
pub struct SurfaceMismatch;

/// A surface quantity against what the sonde leads one to expect.
#[derive(Clone, Copy)]
struct Gap {
    /// Surface minus expected, K, after giving the benefit of the doubt.
    difference: f64,
    /// The value of the surface quantity that the sonde implies, K.
    expected: f64,
    /// More than any pool of other air at the ground explains.
    erroneous: bool,
}

/// A surface value the sonde contradicts beyond reasonable doubt.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Refuted {
    /// Surface minus sonde, K: of the dew point at surface pressure, or of theta.
    pub difference: f64,
    /// The value the first levels of the sonde lead to.
    pub expected: Temperature,
}

/// What of the surface level the sonde contradicts beyond reasonable doubt.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct RefutedSurface {
    /// The dew point.
    pub dewpoint: Option<Refuted>,
    /// The temperature.
    pub temperature: Option<Refuted>,
}

impl RefutedSurface {
    /// Looks at a received profile as the surface-mismatch rule does.
    pub fn of(received: &Profile, daylight: Daylight, thresholds: &Thresholds) -> Self {
        Self::in_sonde(&Sonde {
            column: &Column::of(received, thresholds),
            daylight,
            thresholds,
        })
    }

    fn in_sonde(sonde: &Sonde) -> Self {
        let Some(surface) = sonde.column.surface_pressure() else {
            return Self::default();
        };
        let levels = first_levels(sonde, surface);
        let refuted = |gap: Option<Gap>| {
            gap.filter(|gap| gap.erroneous).map(|gap| Refuted {
                difference: gap.difference,
                expected: Temperature::from_k(gap.expected),
            })
        };
        Self {
            dewpoint: refuted(dewpoint_gap(sonde, surface, &levels)),
            temperature: refuted(temperature_gap(sonde, surface, &levels)),
        }
    }
}

/// Whether the surface dew point is contradicted beyond reasonable doubt; the moisture-slope rule leaves it to this one.
pub(super) fn dewpoint_refuted(view: &View) -> bool {
    RefutedSurface::in_sonde(&Sonde::of(view))
        .dewpoint
        .is_some()
}

/// The same of the temperature, for the rule about the layer at the ground.
pub(super) fn temperature_refuted(view: &View) -> bool {
    RefutedSurface::in_sonde(&Sonde::of(view))
        .temperature
        .is_some()
}

/// What the comparison rests on.
#[derive(Clone, Copy)]
struct Sonde<'a> {
    column: &'a Column,
    daylight: Daylight,
    thresholds: &'a Thresholds,
}

impl<'a> Sonde<'a> {
    fn of(view: &'a View) -> Self {
        Self {
            column: &view.column,
            daylight: view.context.daylight,
            thresholds: view.context.thresholds,
        }
    }

    fn threshold(&self, name: &str) -> f64 {
        self.thresholds.get(name)
    }
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
         as mixing ratio brought to one pressure, never as dew points at two; temperature as theta, by day or when no \
         ground inversion explains it. The sonde may be carried down as constant or along its own slope, whichever is \
         nearer the surface value. Also first rows of the sonde moister than the surface, when the most unstable parcel \
         starts from them and that costs much."
    }

    fn thresholds(&self) -> &'static [&'static str] {
        &[
            "surface-mismatch.dewpoint_day_k",
            "surface-mismatch.dewpoint_night_k",
            "surface-mismatch.erroneous_dewpoint_k",
            "surface-mismatch.erroneous_theta_k",
            "surface-mismatch.unsettled_k",
            "surface-mismatch.unsettled_jkg",
            "moisture-slope.rh_uncertainty_pct",
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
        let sonde = Sonde::of(view);
        let levels = first_levels(&sonde, surface);
        let (Some(_), Some(&highest)) = (levels.first(), levels.last()) else {
            return Vec::new();
        };
        // One cause is one finding: a rule that names it goes first, unless the surface value is proven wrong.
        let dewpoint = dewpoint_gap(&sonde, surface, &levels)
            .filter(|gap| gap.erroneous || moisture_slope::seen(view).is_none());
        let temperature = temperature_gap(&sonde, surface, &levels).filter(|gap| {
            gap.erroneous || gap.difference < 0.0 || SuperadiabaticContact.look(view).is_empty()
        });
        if dewpoint.is_none() && temperature.is_none() {
            return unsettled::look(view, surface, &levels)
                .into_iter()
                .collect();
        }
        let continued = temperature_against_sonde(&sonde, surface, &levels);
        vec![self.finding(
            view,
            surface,
            highest,
            [dewpoint.as_ref(), temperature.as_ref(), continued.as_ref()],
        )]
    }
}

/// Levels of the sonde next above the surface that are judged.
fn first_levels(sonde: &Sonde, surface: f64) -> Vec<usize> {
    let column = sonde.column;
    if column.fine {
        let from = column
            .first_at_or_above(surface - 100.0 * sonde.threshold("surface-mismatch.near_hpa"));
        let to =
            column.first_at_or_above(surface - 100.0 * sonde.threshold("surface-mismatch.far_hpa"));
        (from.max(1)..to).collect()
    } else {
        let far = surface - 100.0 * sonde.threshold("surface-mismatch.coded_far_hpa");
        match column.pressure.get(1) {
            Some(&first) if first >= far => (1..column.len().min(3)).collect(),
            _ => Vec::new(),
        }
    }
}

/// A value carried down to the surface as it is at the lowest levels, and along the line through all of them.
pub(super) fn carried_down(points: &[(f64, f64)], surface: f64) -> Option<(f64, f64)> {
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

fn dewpoint_gap(sonde: &Sonde, surface: f64, levels: &[usize]) -> Option<Gap> {
    let column = sonde.column;
    let points: Vec<(f64, f64)> = levels
        .iter()
        .filter_map(|&level| Some((column.pressure[level], column.mixing_ratio[level]?)))
        .collect();
    let (constant, along) = carried_down(&points, surface)?;
    let measured = at_pressure(surface, column.mixing_ratio.first().copied().flatten()?);
    let expected = (at_pressure(surface, constant), at_pressure(surface, along));
    let difference = outside(measured, expected);
    let limit = match sonde.daylight {
        Daylight::Day => sonde.threshold("surface-mismatch.dewpoint_day_k"),
        Daylight::Night | Daylight::Unknown => sonde.threshold("surface-mismatch.dewpoint_night_k"),
    };
    // In dry air a small error of relative humidity, the surface's or the sonde's, is a large one of the dew point.
    let uncertain = levels
        .iter()
        .chain([&0])
        .filter_map(|&level| humidity_uncertainty(column, sonde.thresholds, level))
        .fold(0.0, f64::max);
    let proven = f64::hypot(
        sonde.threshold("surface-mismatch.erroneous_dewpoint_k"),
        uncertain,
    );
    (difference.abs() >= limit).then_some(Gap {
        difference,
        expected: measured - difference,
        erroneous: difference.abs() >= proven,
    })
}

/// Dew point at a pressure (Pa) of air with a mixing ratio, K.
pub(super) fn at_pressure(pa: f64, w: f64) -> f64 {
    dewpoint_from_mixing_ratio(Pressure::from_pa(pa), w.max(1e-6)).k()
}

/// Surface theta against the sonde's, whether or not the difference is worth telling.
fn temperature_against_sonde(sonde: &Sonde, surface: f64, levels: &[usize]) -> Option<Gap> {
    let column = sonde.column;
    let points: Vec<(f64, f64)> = levels
        .iter()
        .map(|&level| (column.pressure[level], column.theta[level]))
        .collect();
    let difference = outside(*column.theta.first()?, carried_down(&points, surface)?);
    Some(Gap {
        difference,
        expected: (column.theta[0] - difference) * (surface / REFERENCE_PRESSURE).powf(KAPPA),
        erroneous: difference.abs() >= sonde.threshold("surface-mismatch.erroneous_theta_k"),
    })
}

fn temperature_gap(sonde: &Sonde, surface: f64, levels: &[usize]) -> Option<Gap> {
    let column = sonde.column;
    let gap = temperature_against_sonde(sonde, surface, levels)?;
    let difference = gap.difference;
    let judged = if gap.erroneous {
        true
    } else if sonde.daylight != Daylight::Day {
        false
    } else if difference > 0.0 {
        difference >= sonde.threshold("surface-mismatch.warm_day_k")
    } else {
        // Below an inversion the last metres may be colder than any line suggests: only mixed air is judged.
        let smooth = levels.iter().map(|&level| column.smooth_theta[level]);
        let range =
            smooth.clone().fold(f64::NEG_INFINITY, f64::max) - smooth.fold(f64::INFINITY, f64::min);
        range <= MIXED_K && difference <= -sonde.threshold("surface-mismatch.cold_day_k")
    };
    judged.then_some(gap)
}

impl SurfaceMismatch {
    fn finding(
        &self,
        view: &View,
        surface: f64,
        highest: usize,
        // What is wrong with the dew point and with the temperature, and the temperature as the sonde continues it.
        [dewpoint, temperature, continued]: [Option<&Gap>; 3],
    ) -> Finding {
        let column = &view.column;
        let (bottom, top) = (
            Pressure::from_pa(surface),
            Pressure::from_pa(column.pressure[highest]),
        );
        let mut said = Vec::new();
        let mut evidence = Vec::new();
        if let Some(gap) = dewpoint {
            let word = if gap.difference > 0.0 {
                "moister"
            } else {
                "drier"
            };
            let expected = Temperature::from_k(gap.expected);
            said.push(format!(
                "is {word} than the first sonde levels by {} K as dew point at surface pressure ({} expected)",
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
        }
        Finding {
            rule: self.id(),
            title: self.title(),
            grade: if [dewpoint, temperature].into_iter().flatten().any(|gap| gap.erroneous) {
                Grade::Erroneous
            } else {
                Grade::Doubtful
            },
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
                    format!(
                        "Day or night isn't known ({}): the wider limits of the night were used.",
                        view.missing_for_daylight()
                    )
                }
                Daylight::Day | Daylight::Night => String::new(),
            },
            repairs: repairs(column, [dewpoint, temperature, continued]),
            wind_only: false,
        }
    }
}

/// Dew points up to this far above the temperature are told as saturated air, K; farther up the temperature is wrong.
const AS_GOOD_AS_SATURATED_K: f64 = 1.0;

/// Values carried down from the sonde: both, the dew point, the temperature. None that the other value would cut off: a
/// dew point above the temperature takes the temperature the sonde leads to along, or isn't offered.
fn repairs(column: &Column, [dewpoint, temperature, continued]: [Option<&Gap>; 3]) -> Vec<Repair> {
    const BECAUSE: &str = "carried down from the sonde";
    let received_t = column.temperature.first().copied();
    let received_td = column.dewpoint.first().copied().flatten();
    let value = |gap: &Gap| Temperature::from_k(gap.expected);
    let mut repairs = Vec::new();
    if let (Some(dewpoint), Some(t)) = (dewpoint, temperature.or(continued)) {
        let cut_off = received_t.is_some_and(|received| dewpoint.expected > received);
        let td = dewpoint.expected.min(t.expected);
        if (temperature.is_some() || cut_off) && dewpoint.expected - td <= AS_GOOD_AS_SATURATED_K {
            repairs.push(repair::surface_air(
                "both-from-sonde",
                value(t),
                Temperature::from_k(td),
                BECAUSE,
            ));
        }
    }
    if let Some(gap) = dewpoint.filter(|gap| received_t.is_none_or(|t| gap.expected <= t)) {
        repairs.push(repair::surface_dewpoint(
            "dewpoint-from-sonde",
            value(gap),
            BECAUSE,
        ));
    }
    if let Some(gap) = temperature.filter(|gap| received_td.is_none_or(|td| td <= gap.expected)) {
        repairs.push(repair::surface_temperature(
            "temperature-from-sonde",
            value(gap),
            BECAUSE,
        ));
    }
    repairs
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

    /// One-second rows under a launch row of 2.5 °C, 91 %: a value of another level or another place.
    fn wrong_launch_row() -> Scene {
        let mut sounding = Air0::default()
            .ascent()
            .noisy(&mut Dice::new(8), 0.1, 0.01)
            .fine();
        let surface = &mut sounding.levels[0];
        surface.temperature = Some(275.65);
        surface.dewpoint = Some(274.3);
        surface.relative_humidity = Some(0.91);
        Scene::day(sounding)
    }

    #[test]
    fn a_launch_row_far_off_is_erroneous_and_no_repair_is_cut_off() {
        let scene = wrong_launch_row();
        let found = scene.findings();
        let finding = &found[0];
        assert_eq!(
            (finding.rule, finding.grade),
            ("surface-mismatch", Grade::Erroneous)
        );
        // The expected dew point lies above the wrong temperature: alone it would be cut off.
        let ids: Vec<_> = finding.repairs.iter().map(|repair| repair.id).collect();
        assert_eq!(ids, ["both-from-sonde", "temperature-from-sonde"]);
        for repair in &finding.repairs {
            let none = dewbound_sounding::Amendments::default();
            let amendments = crate::with_repair(&none, finding, repair);
            let working = amendments.apply(&scene.profile, scene.daylight);
            assert!(
                working
                    .notes
                    .iter()
                    .all(|note| !note.what.contains("lowered")),
                "{:?}",
                working.notes
            );
        }
        let refuted = RefutedSurface::of(&scene.profile, scene.daylight, &scene.thresholds);
        assert!(refuted.dewpoint.is_some() && refuted.temperature.is_some());
        let clean = Scene::day(Air0::default().ascent().fine());
        assert_eq!(
            RefutedSurface::of(&clean.profile, clean.daylight, &clean.thresholds),
            RefutedSurface::default()
        );
    }

    #[test]
    fn a_ground_inversion_refutes_nothing() {
        for seed in 0..40 {
            let air = Air0 {
                contact_k: -8.0,
                ..Air0::random(&mut Dice::new(seed))
            };
            let scene = Scene::new(
                air.ascent().noisy(&mut Dice::new(seed), 0.1, 0.015).fine(),
                Daylight::Night,
            );
            assert_eq!(
                RefutedSurface::of(&scene.profile, scene.daylight, &scene.thresholds),
                RefutedSurface::default(),
                "{seed}"
            );
        }
    }

    /// A hot moist day; the first rows (4 hPa) carry `excess` more moisture than the air.
    fn first_rows(excess: f64) -> Vec<Finding> {
        let air = Air0 {
            w: 0.017,
            lapse: 0.0072,
            inversion_k: 1.0,
            ..Air0::default()
        };
        let mut ascent = air.ascent().noisy(&mut Dice::new(5), 0.05, 0.003);
        for i in 1..7 {
            let w = ascent.w(i) * excess;
            ascent.set_w(i, w);
        }
        Scene::day(ascent.fine()).check(&SurfaceMismatch)
    }

    #[test]
    fn first_rows_a_costly_parcel_starts_from_are_seen() {
        assert!(first_rows(1.0).is_empty());
        let found = first_rows(1.12);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert_eq!(found[0].grade, Grade::Doubtful);
        assert_eq!(found[0].repairs[0].id, "drop-first-rows");
        // 12 % more mixing ratio is about 1.8 K of dew point (Clausius-Clapeyron: 6 to 7 % a kelvin).
        let excess = found[0].evidence("excess_dewpoint_k").unwrap();
        assert!((1.2..2.4).contains(&excess), "{excess}");
    }
}
