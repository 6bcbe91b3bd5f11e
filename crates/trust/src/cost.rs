//! What a repair costs: numbers with it minus numbers without it, on the working profile.
//!
//! The cost shown is exactly the change seen when the repair is toggled with [`with_repair`] and [`without_repair`].

use crate::toggle::{append, without_alternatives};
use crate::{Finding, Repair, applied_repair, with_repair, without_repair};
use dewbound_sounding::thermo::Ascent;
use dewbound_sounding::{Amendments, Daylight, Numbers, Parcel, Profile};

/// Change of one parcel's numbers. `None` where a number is absent on either side.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Change {
    /// CAPE, J/kg.
    pub cape: Option<f64>,
    /// CIN, J/kg.
    pub cin: Option<f64>,
}

impl Change {
    fn between(with: Option<&Ascent>, without: Option<&Ascent>) -> Self {
        let difference = |number: fn(&Ascent) -> Option<f64>| {
            let (with, without) = (with.and_then(number)?, without.and_then(number)?);
            // Adding zero turns a negative zero into a plain one.
            Some(with - without + 0.0)
        };
        Self {
            cape: difference(|ascent| Some(ascent.cape)),
            cin: difference(|ascent| ascent.cin),
        }
    }
}

/// Cost of one repair for each parcel.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Cost {
    /// Surface parcel.
    pub surface: Change,
    /// Mixed parcel.
    pub mixed: Change,
    /// Most unstable parcel.
    pub most_unstable: Change,
}

impl Cost {
    /// Numbers with minus numbers without; `None` when no parcel has a CAPE on both sides.
    pub fn between(with: &Numbers, without: &Numbers) -> Option<Self> {
        let change = |parcel| Change::between(with.parcel(parcel), without.parcel(parcel));
        let cost = Self {
            surface: change(Parcel::Surface),
            mixed: change(Parcel::Mixed),
            most_unstable: change(Parcel::MostUnstable),
        };
        cost.cape_magnitude().map(|_| cost)
    }

    /// The change of one parcel.
    pub fn parcel(&self, parcel: Parcel) -> Change {
        match parcel {
            Parcel::Surface => self.surface,
            Parcel::Mixed => self.mixed,
            Parcel::MostUnstable => self.most_unstable,
        }
    }

    /// Largest absolute CAPE change over the parcels, J/kg; `None` when unknown for all.
    pub fn cape_magnitude(&self) -> Option<f64> {
        self.largest(|change| change.cape)
    }

    /// Largest absolute CIN change over the parcels, J/kg; `None` when unknown for all.
    pub fn cin_magnitude(&self) -> Option<f64> {
        self.largest(|change| change.cin)
    }

    fn largest(&self, number: impl Fn(Change) -> Option<f64>) -> Option<f64> {
        Parcel::ALL
            .into_iter()
            .filter_map(|parcel| number(self.parcel(parcel)))
            .map(f64::abs)
            .reduce(f64::max)
    }
}

/// State of a finding's repairs on the working profile.
#[derive(Debug, Clone, PartialEq)]
pub struct Priced<'a> {
    /// The finding.
    pub finding: &'a Finding,
    /// Cost of each repair, in the order of [`Finding::repairs`]; `None` = unknown (not zero).
    pub costs: Vec<Option<Cost>>,
    /// Index of the headline repair: the largest |CAPE change|, CIN change breaking ties.
    pub headline: Option<usize>,
    /// Index of a repair that is already among the enabled amendments (its cost is then what it has changed: with minus without).
    pub applied: Option<usize>,
}

impl Priced<'_> {
    /// Cost of the headline repair.
    pub fn headline_cost(&self) -> Option<&Cost> {
        self.costs.get(self.headline?)?.as_ref()
    }
}

fn numbers(received: &Profile, amendments: &Amendments, daylight: Daylight) -> Numbers {
    Numbers::of(&amendments.apply(received, daylight).profile)
}

/// Prices one repair on its own: numbers with it at the end of the amendments minus numbers without it.
///
/// `None` when there is nothing to price: the repair changes nothing, or no parcel has a CAPE on both sides.
/// A repair that is already taken belongs to a finding and is priced by [`price`].
pub fn cost(
    repair: &Repair,
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
) -> Option<Cost> {
    if repair.amendments.is_empty() {
        return None;
    }
    let mut with = amendments.clone();
    append(&mut with, repair, repair.id);
    Cost::between(
        &numbers(received, &with, daylight),
        &numbers(received, amendments, daylight),
    )
}

/// Prices every finding on the working profile. `working` are the numbers of `amendments` as they stand (not recomputed).
///
/// For a repair not taken: numbers after taking it minus the working numbers. For the one that is taken: the working
/// numbers minus the numbers after withdrawing it. Several repairs are priced side by side on the processor's cores.
pub fn price<'a>(
    findings: &'a [Finding],
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
    working: &Numbers,
) -> Vec<Priced<'a>> {
    let jobs = findings
        .iter()
        .enumerate()
        .flat_map(|(finding, f)| (0..f.repairs.len()).map(move |repair| (finding, repair)))
        .collect();
    let mut priced = price_jobs(findings, received, amendments, daylight, working, jobs);
    for state in &mut priced {
        state.headline = headline(&state.costs);
    }
    priced
}

/// The same for the headline repairs only, each held at the index given (in the order of `findings`); other costs are left
/// `None`. For the frames of a drag, in which the choice of headline is held like the order of the cards.
pub fn price_headlines<'a>(
    findings: &'a [Finding],
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
    working: &Numbers,
    held: &[Option<usize>],
) -> Vec<Priced<'a>> {
    let jobs = held
        .iter()
        .enumerate()
        .filter_map(|(finding, &repair)| Some((finding, repair?)))
        .filter(|&(finding, repair)| {
            findings
                .get(finding)
                .is_some_and(|f| repair < f.repairs.len())
        })
        .collect();
    let mut priced = price_jobs(findings, received, amendments, daylight, working, jobs);
    for (state, &held) in priced.iter_mut().zip(held) {
        state.headline = held.filter(|&index| matches!(state.costs.get(index), Some(Some(_))));
    }
    priced
}

/// Fewer repairs than this are priced in turn: starting threads would take as long.
const WORTH_SHARING: usize = 3;

fn price_jobs<'a>(
    findings: &'a [Finding],
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
    working: &Numbers,
    jobs: Vec<(usize, usize)>,
) -> Vec<Priced<'a>> {
    let mut priced: Vec<Priced<'a>> = findings
        .iter()
        .map(|finding| Priced {
            finding,
            costs: vec![None; finding.repairs.len()],
            headline: None,
            applied: applied_repair(amendments, finding),
        })
        .collect();
    let one = |&(finding, repair): &(usize, usize)| -> Option<Cost> {
        let state = priced.get(finding)?;
        let finding = state.finding;
        let wanted = finding.repairs.get(repair)?;
        if wanted.amendments.is_empty() || finding.wind_only {
            None
        } else if state.applied == Some(repair) {
            let without = without_repair(amendments, finding, wanted);
            Cost::between(working, &numbers(received, &without, daylight))
        } else {
            let with = with_repair(amendments, finding, wanted);
            Cost::between(&numbers(received, &with, daylight), working)
        }
    };
    let threads = std::thread::available_parallelism()
        .map_or(1, usize::from)
        .min(jobs.len());
    let costs: Vec<Option<Cost>> = if threads < 2 || jobs.len() < WORTH_SHARING {
        jobs.iter().map(one).collect()
    } else {
        let share = jobs.len().div_ceil(threads);
        let one = &one;
        std::thread::scope(|scope| {
            let workers: Vec<_> = jobs
                .chunks(share)
                .map(|chunk| scope.spawn(move || chunk.iter().map(one).collect::<Vec<_>>()))
                .collect();
            workers
                .into_iter()
                .zip(jobs.chunks(share))
                // A worker that failed leaves its costs unknown.
                .flat_map(|(worker, chunk)| {
                    worker.join().unwrap_or_else(|_| vec![None; chunk.len()])
                })
                .collect()
        })
    };
    for ((finding, repair), cost) in jobs.into_iter().zip(costs) {
        if let Some(slot) = priced
            .get_mut(finding)
            .and_then(|state| state.costs.get_mut(repair))
        {
            *slot = cost;
        }
    }
    priced
}

/// The repair with the largest |CAPE change|, CIN change breaking ties; the earlier one when both are alike.
fn headline(costs: &[Option<Cost>]) -> Option<usize> {
    let size = |cost: &Cost| {
        (
            cost.cape_magnitude().unwrap_or(0.0),
            cost.cin_magnitude().unwrap_or(0.0),
        )
    };
    let mut best: Option<(usize, (f64, f64))> = None;
    for (index, cost) in costs.iter().enumerate() {
        let Some(cost) = cost else { continue };
        let size = size(cost);
        if best.is_none_or(|(_, largest)| size > largest) {
            best = Some((index, size));
        }
    }
    best.map(|(index, _)| index)
}

/// Cost of all headline repairs together: numbers with every one of them taken minus numbers with no repair of these
/// findings taken. `None` when no finding has a priced repair.
///
/// While none is taken this is the change seen when all are accepted; when all are, it is what they have changed.
pub fn combined_cost(
    priced: &[Priced],
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
    working: &Numbers,
) -> Option<Cost> {
    let mut without = amendments.clone();
    for state in priced {
        without = without_alternatives(&without, state.finding, None);
    }
    // A headline already taken stays where it stands in the list: then the working numbers are the answer.
    let mut with = amendments.clone();
    let mut any = false;
    for state in priced {
        let Some(headline) = state.headline else {
            continue;
        };
        let Some(repair) = state.finding.repairs.get(headline) else {
            continue;
        };
        any = true;
        with = if state.applied == Some(headline) {
            without_alternatives(&with, state.finding, Some(repair.id))
        } else {
            with_repair(&with, state.finding, repair)
        };
    }
    if !any {
        return None;
    }
    // Whichever side is the working state has its numbers already.
    let of = |side: &Amendments| (side != amendments).then(|| numbers(received, side, daylight));
    let (with, without) = (of(&with), of(&without));
    Cost::between(
        with.as_ref().unwrap_or(working),
        without.as_ref().unwrap_or(working),
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::synthetic::{Air0, Dice, Scene};
    use approx::assert_relative_eq;
    use dewbound_sounding::thermo::Temperature;

    /// A convective day whose surface hygrometer reads 3 g/kg too moist and whose thermometer was wet above a cloud.
    fn scene() -> Scene {
        let air = Air0 {
            w: 0.0135,
            lapse: 0.0072,
            cloud: Some((2600.0, 3400.0)),
            ..Air0::default()
        };
        let mut ascent = air
            .ascent()
            .wet(3400.0, 20.0, 12.0)
            .noisy(&mut Dice::new(7), 0.05, 0.01);
        for i in 0..2 {
            let w = ascent.w(i) + 0.003;
            ascent.set_w(i, w);
        }
        Scene::day(ascent.fine())
    }

    fn working(scene: &Scene, amendments: &Amendments) -> Numbers {
        numbers(&scene.profile, amendments, scene.daylight)
    }

    #[test]
    fn toggling_moves_the_numbers_by_exactly_the_cost_shown() {
        let scene = scene();
        let findings = scene.findings();
        assert!(findings.len() >= 2, "{findings:#?}");
        let mut amendments = Amendments::default().with_surface_dewpoint(Temperature::from_c(17.3));
        for round in 0..2 {
            for finding in &findings {
                for (index, repair) in finding.repairs.iter().enumerate() {
                    let before = working(&scene, &amendments);
                    let priced = price(
                        std::slice::from_ref(finding),
                        &scene.profile,
                        &amendments,
                        scene.daylight,
                        &before,
                    );
                    let off = applied_repair(&amendments, finding) == Some(index);
                    let toggled = if off {
                        without_repair(&amendments, finding, repair)
                    } else {
                        with_repair(&amendments, finding, repair)
                    };
                    let after = working(&scene, &toggled);
                    let seen = if off {
                        Cost::between(&before, &after)
                    } else {
                        Cost::between(&after, &before)
                    };
                    assert_eq!(
                        priced[0].costs[index],
                        seen,
                        "{} {} in round {round}",
                        finding.key(),
                        repair.id
                    );
                    amendments = toggled;
                }
            }
        }
    }

    #[test]
    fn a_taken_repair_says_what_it_has_changed() {
        let scene = scene();
        let findings = scene.findings();
        let received = working(&scene, &Amendments::default());
        let all = price(
            &findings,
            &scene.profile,
            &Amendments::default(),
            scene.daylight,
            &received,
        );
        let state = all
            .iter()
            .find(|state| state.finding.rule == "wet-thermometer")
            .unwrap();
        let repair = &state.finding.repairs[0];
        let taken = with_repair(&Amendments::default(), state.finding, repair);
        assert_eq!(applied_repair(&taken, state.finding), Some(0));
        let with = working(&scene, &taken);
        let again = price(&findings, &scene.profile, &taken, scene.daylight, &with);
        let after = again
            .iter()
            .find(|state| state.finding.rule == "wet-thermometer")
            .unwrap();
        assert_eq!(after.applied, Some(0));
        assert_eq!(after.costs[0], state.costs[0]);
        // The cold kink makes CAPE too high: bridging it takes CAPE away.
        assert!(after.costs[0].unwrap().most_unstable.cape.unwrap() < -1.0);
    }

    #[test]
    fn repairs_of_one_finding_exclude_each_other() {
        let scene = scene();
        let findings = scene.findings();
        let finding = findings
            .iter()
            .find(|finding| finding.repairs.len() >= 2)
            .unwrap();
        let one = with_repair(&Amendments::default(), finding, &finding.repairs[0]);
        let other = with_repair(&one, finding, &finding.repairs[1]);
        assert_eq!(applied_repair(&other, finding), Some(1));
        let back = with_repair(&other, finding, &finding.repairs[0]);
        assert_eq!(applied_repair(&back, finding), Some(0));
        assert_eq!(
            back.entries.iter().filter(|entry| entry.enabled).count(),
            one.entries.len()
        );
    }

    #[test]
    fn combined_cost_is_the_change_seen_when_all_are_accepted() {
        let scene = scene();
        let findings = scene.findings();
        let start = Amendments::default();
        let before = working(&scene, &start);
        let priced = price(&findings, &scene.profile, &start, scene.daylight, &before);
        let combined =
            combined_cost(&priced, &scene.profile, &start, scene.daylight, &before).unwrap();
        let mut accepted = start.clone();
        for state in &priced {
            if let Some(headline) = state.headline {
                accepted = with_repair(&accepted, state.finding, &state.finding.repairs[headline]);
            }
        }
        let after = working(&scene, &accepted);
        assert_eq!(Some(combined), Cost::between(&after, &before));
        // And once all are taken it still says so.
        let priced = price(&findings, &scene.profile, &accepted, scene.daylight, &after);
        let priced: Vec<Priced> = priced
            .into_iter()
            .map(|state| Priced {
                headline: state.applied.or(state.headline),
                ..state
            })
            .collect();
        let again =
            combined_cost(&priced, &scene.profile, &accepted, scene.daylight, &after).unwrap();
        assert_relative_eq!(
            again.most_unstable.cape.unwrap(),
            combined.most_unstable.cape.unwrap(),
            epsilon = 1e-9
        );
    }

    #[test]
    fn held_headlines_cost_the_same() {
        let scene = scene();
        let findings = scene.findings();
        let none = Amendments::default();
        let numbers = working(&scene, &none);
        let all = price(&findings, &scene.profile, &none, scene.daylight, &numbers);
        let held: Vec<_> = all.iter().map(|state| state.headline).collect();
        let again = price_headlines(
            &findings,
            &scene.profile,
            &none,
            scene.daylight,
            &numbers,
            &held,
        );
        for (all, again) in all.iter().zip(&again) {
            assert!(all.headline.is_some());
            assert_eq!(all.headline_cost(), again.headline_cost());
        }
    }

    #[test]
    fn nothing_to_change_has_no_cost_and_a_neutral_change_costs_zero() {
        let scene = scene();
        let nothing = Repair {
            id: "nothing",
            what: String::new(),
            amendments: Vec::new(),
        };
        let none = Amendments::default();
        assert_eq!(cost(&nothing, &scene.profile, &none, scene.daylight), None);
        let surface = scene.profile.surface_air().unwrap();
        let same = Repair {
            id: "same",
            what: String::new(),
            amendments: vec![dewbound_sounding::Amendment::SurfaceDewpoint {
                dewpoint_k: surface.dewpoint.k(),
            }],
        };
        let zero = cost(&same, &scene.profile, &none, scene.daylight).unwrap();
        assert_eq!(zero.cape_magnitude(), Some(0.0));
    }

    #[test]
    fn headline_is_the_largest_change_and_cin_breaks_ties() {
        let with = |cape, cin| {
            Some(Cost {
                surface: Change { cape, cin },
                ..Cost::default()
            })
        };
        assert_eq!(
            headline(&[None, with(Some(-50.0), None), with(Some(20.0), Some(90.0))]),
            Some(1)
        );
        assert_eq!(
            headline(&[with(Some(0.0), Some(3.0)), with(Some(0.0), Some(-8.0))]),
            Some(1)
        );
        assert_eq!(headline(&[None, None]), None);
    }
}
