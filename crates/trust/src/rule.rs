//! The list of rules; help, docs, thresholds and tests all derive from it.

use crate::turns::{Mixed, Turn, mixed_passes, turns};
use crate::words::layer;
use crate::{Column, Finding, Grade, Thresholds, rules};
use dewbound_sounding::thermo::Pressure;
use dewbound_sounding::{Daylight, Numbers, Profile, Sounding, missing_for_daylight};

/// Everything a rule may look at. Read only.
#[derive(Debug, Clone, Copy)]
pub struct Context<'a> {
    /// The sounding as received.
    pub sounding: &'a Sounding,
    /// Its ordered, merged levels.
    pub profile: &'a Profile,
    /// Numbers of the received profile (the early-end rule needs the EL).
    pub numbers: &'a Numbers,
    /// Whether the sun has been heating the ground.
    pub daylight: Daylight,
    /// Thresholds in force.
    pub thresholds: &'a Thresholds,
}

/// A context with what all rules derive from it, computed once.
#[derive(Debug, Clone)]
pub struct View<'a> {
    /// The context.
    pub context: Context<'a>,
    /// The levels judged.
    pub column: Column,
    /// Where the flight turned back.
    pub(crate) turns: Vec<Turn>,
    /// Layers in which that has mixed two passes.
    pub(crate) mixed: Vec<Mixed>,
}

impl<'a> View<'a> {
    /// Derives the column.
    pub fn of(context: &Context<'a>) -> Self {
        let turns = turns(context);
        Self {
            context: *context,
            column: Column::of(context.profile, context.thresholds),
            mixed: mixed_passes(context, &turns),
            turns,
        }
    }

    /// A layer (Pa) lies in one in which passes are mixed, or so near that the averaging of fine data reaches into it:
    /// what is seen there is made by the sorting, and the level-order rule names it.
    pub(crate) fn passes_mixed(&self, bottom: f64, top: f64) -> bool {
        let near = 50.0 * self.threshold("fine.average_hpa");
        self.mixed
            .iter()
            .any(|mixed| bottom + near > mixed.top && mixed.bottom + near > top)
    }

    pub(crate) fn threshold(&self, name: &str) -> f64 {
        self.context.thresholds.get(name)
    }

    /// What is missing to tell day from night, for a sentence that says so.
    pub(crate) fn missing_for_daylight(&self) -> &'static str {
        missing_for_daylight(self.context.sounding)
    }

    /// Heights above mean sea level of the two ends of a layer, m, when something anchors them.
    pub(crate) fn heights(&self, bottom: Pressure, top: Pressure) -> Option<(f64, f64)> {
        Some((
            self.context.profile.height_at(bottom)?,
            self.context.profile.height_at(top)?,
        ))
    }
}

/// One rule. Each is a unit struct; [`RULES`] is the list.
pub trait Rule: Sync {
    /// Id, kebab case.
    fn id(&self) -> &'static str;
    /// Title for people.
    fn title(&self) -> &'static str;
    /// Published anchor, or "common practice, no source".
    fn source(&self) -> &'static str;
    /// What it sees, in a sentence or two.
    fn about(&self) -> &'static str;
    /// Names of the thresholds it reads.
    fn thresholds(&self) -> &'static [&'static str];
    /// Looks at what has been derived already.
    fn look(&self, view: &View) -> Vec<Finding>;
    /// Looks, on its own.
    fn check(&self, context: &Context) -> Vec<Finding> {
        self.look(&View::of(context))
    }
}

/// All rules, in the order checked.
pub static RULES: &[&dyn Rule] = &[
    &rules::SuperadiabaticAloft,
    &rules::WetThermometer,
    &rules::SuperadiabaticContact,
    &rules::MoistureSlope,
    &rules::SurfaceMismatch,
    &rules::EarlyEnd,
    &rules::ImpossibleValue,
    &rules::LevelOrder,
];

/// Everything all rules see on the received profile, in order of falling pressure of their layers.
///
/// Findings that overlap and have one cause are one finding, under the rule that names the cause. Keys
/// ([`Finding::key`]) are unique.
pub fn findings(context: &Context) -> Vec<Finding> {
    let view = View::of(context);
    let all = RULES.iter().flat_map(|rule| rule.look(&view)).collect();
    let mut kept = unique_keys(one_per_cause(all));
    for finding in &mut kept {
        cast_doubt(&view, finding);
    }
    kept.sort_by(|a, b| {
        let bottom = |finding: &Finding| finding.bottom.map_or(f64::NEG_INFINITY, Pressure::pa);
        let top = |finding: &Finding| finding.top.map_or(f64::NEG_INFINITY, Pressure::pa);
        bottom(b)
            .total_cmp(&bottom(a))
            .then(top(b).total_cmp(&top(a)))
    });
    kept
}

/// What reaches into a layer in which passes are mixed is not proven, whatever it is.
fn cast_doubt(view: &View, finding: &mut Finding) {
    let (Some(bottom), Some(top)) = (finding.bottom, finding.top) else {
        return;
    };
    if finding.rule == rules::LevelOrder.id() {
        return;
    }
    let overlapped = view
        .mixed
        .iter()
        .find(|mixed| bottom.pa() > mixed.top && mixed.bottom > top.pa());
    if let Some(mixed) = overlapped {
        finding.grade = finding.grade.min(Grade::Doubtful);
        if !finding.caveat.is_empty() {
            finding.caveat.push(' ');
        }
        finding.caveat.push_str(&format!(
            "It reaches into {}, where passes are mixed: see there first.",
            layer(
                Pressure::from_pa(mixed.bottom),
                Pressure::from_pa(mixed.top)
            )
        ));
    }
}

/// The rule in the first column names the cause of what the second one sees in the same layer.
const NAMES_THE_CAUSE: [(&str, &str); 3] = [
    ("wet-thermometer", "superadiabatic-aloft"),
    ("wet-thermometer", "superadiabatic-contact"),
    ("superadiabatic-contact", "superadiabatic-aloft"),
];

fn one_per_cause(all: Vec<Finding>) -> Vec<Finding> {
    let explained: Vec<bool> = all
        .iter()
        .map(|finding| {
            all.iter().any(|other| {
                NAMES_THE_CAUSE.contains(&(other.rule, finding.rule))
                    && other.grade >= finding.grade
                    && overlap(other, finding)
            })
        })
        .collect();
    all.into_iter()
        .zip(explained)
        .filter_map(|(finding, explained)| (!explained).then_some(finding))
        .collect()
}

fn overlap(a: &Finding, b: &Finding) -> bool {
    match (a.bottom, a.top, b.bottom, b.top) {
        (Some(a_bottom), Some(a_top), Some(b_bottom), Some(b_top)) => {
            a_bottom > b_top && b_bottom > a_top
        }
        _ => false,
    }
}

/// Two findings of one rule on one layer become one that says both.
fn unique_keys(all: Vec<Finding>) -> Vec<Finding> {
    let mut kept: Vec<Finding> = Vec::with_capacity(all.len());
    for finding in all {
        match kept.iter_mut().find(|other| other.key() == finding.key()) {
            Some(other) => other.absorb(finding),
            None => kept.push(finding),
        }
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rules_describe_themselves() {
        let mut ids = std::collections::BTreeSet::new();
        for rule in RULES {
            assert!(ids.insert(rule.id()), "{} twice", rule.id());
            assert!(
                rule.id()
                    .chars()
                    .all(|c| c.is_ascii_lowercase() || c == '-')
            );
            for text in [rule.title(), rule.source(), rule.about()] {
                assert!(!text.is_empty(), "{}", rule.id());
            }
        }
    }

    /// Ascents without a fault: noise, rounding, inversions, drying layers, clouds, shallow contact layers by day and ground
    /// inversions at night.
    #[test]
    fn clean_ascents_stay_silent() {
        use crate::synthetic::{Air0, BOTH, Dice, Scene};
        use std::collections::BTreeMap;
        let mut false_alarms: BTreeMap<&str, Vec<String>> = BTreeMap::new();
        let mut clean = 0;
        for seed in 0..150 {
            for sampling in BOTH {
                let mut dice = Dice::new(5000 + seed);
                let mut air = Air0::random(&mut dice);
                let daylight = if dice.uniform() < 0.5 {
                    Daylight::Day
                } else {
                    Daylight::Night
                };
                if daylight == Daylight::Night {
                    air.contact_k = dice.between(-5.0, -0.5);
                }
                if dice.uniform() < 0.4 {
                    let base = dice.between(air.mixed_m + 600.0, 6000.0);
                    air.cloud = Some((base, base + dice.between(200.0, 2000.0)));
                }
                let ascent = air.ascent().noisy(&mut dice, 0.12, 0.015);
                let scene = Scene::new(ascent.sampled(sampling), daylight);
                clean += 1;
                for rule in RULES {
                    if let Some(finding) = scene.check(*rule).first() {
                        let told = format!("{seed} {sampling:?} {daylight:?}: {}", finding.summary);
                        false_alarms.entry(rule.id()).or_default().push(told);
                    }
                }
            }
        }
        for (rule, told) in &false_alarms {
            assert!(
                told.len() * 100 <= 2 * clean,
                "{rule}: {} of {clean}\n{}",
                told.len(),
                told.join("\n")
            );
        }
    }

    fn rubbish() -> impl proptest::strategy::Strategy<Value = f64> {
        use proptest::prelude::*;
        prop_oneof![
            Just(f64::NAN),
            Just(f64::INFINITY),
            Just(-1.0),
            Just(0.0),
            100.0..350.0f64,
            -1e6..1e6f64,
        ]
    }

    proptest::proptest! {
        #![proptest_config(proptest::prelude::ProptestConfig::with_cases(300))]

        /// Whatever a reader lets through: no panic, unique keys, no number in the evidence that isn't one.
        #[test]
        fn rubbish_never_panics(
            levels in proptest::collection::vec(
                (500.0..105_000.0f64, 180.0..320.0f64, proptest::option::of(rubbish()), 150.0..320.0f64, 0usize..40),
                0..60,
            ),
            sorted: bool,
            day in 0usize..3,
        ) {
            use crate::synthetic::Scene;
            use dewbound_sounding::{Level, LevelKind, Wind};
            let mut levels: Vec<Level> = levels
                .into_iter()
                .map(|(p, t, odd, td, pick)| Level {
                    pressure: if pick == 1 { odd } else { Some(p.round()) },
                    temperature: if pick == 2 { odd } else { Some(t) },
                    dewpoint: if pick == 3 { odd } else { Some(td.min(t)) },
                    height: if pick == 4 { odd } else { None },
                    relative_humidity: if pick == 5 { odd } else { None },
                    elapsed: if pick == 6 { odd } else { None },
                    wind: if pick == 7 { odd.map(|speed| Wind { direction: speed, speed }) } else { None },
                    kind: if pick == 8 { LevelKind::Surface } else { LevelKind::Other },
                    ..Level::default()
                })
                .collect();
            if sorted {
                levels.sort_by(|a, b| b.pressure.unwrap_or(0.0).total_cmp(&a.pressure.unwrap_or(0.0)));
            }
            let daylight = [Daylight::Day, Daylight::Night, Daylight::Unknown][day];
            let scene = Scene::new(Sounding { levels, ..Sounding::default() }, daylight);
            let found = scene.findings();
            let keys: std::collections::BTreeSet<_> = found.iter().map(Finding::key).collect();
            proptest::prop_assert_eq!(keys.len(), found.len());
            for finding in &found {
                for evidence in &finding.evidence {
                    proptest::prop_assert!(evidence.value.is_finite(), "{} {}", finding.key(), evidence.key);
                }
                let ids: std::collections::BTreeSet<_> = finding.repairs.iter().map(|repair| repair.id).collect();
                proptest::prop_assert_eq!(ids.len(), finding.repairs.len());
            }
            let none = dewbound_sounding::Amendments::default();
            let priced = crate::price(&found, &scene.profile, &none, daylight, &scene.numbers);
            proptest::prop_assert_eq!(crate::rank(&priced, false).len(), found.len());
        }
    }

    #[test]
    fn a_failing_thermometer_is_a_handful_of_findings() {
        use crate::synthetic::{Air0, Dice, Scene};
        let mut ascent = Air0::default().ascent().noisy(&mut Dice::new(4), 0.1, 0.02);
        for i in 600..2600 {
            ascent.t[i] += 6.0 * (i as f64 / 9.0).sin();
        }
        let found = Scene::day(ascent.fine()).findings();
        assert!(
            (1..=6).contains(&found.len()),
            "{}: {:?}",
            found.len(),
            found.iter().map(Finding::key).collect::<Vec<_>>()
        );
    }
}
