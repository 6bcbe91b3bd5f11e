//! The parcels against the surface dew point.

use crate::{Candidates, Interval, Origin};
use dewbound_trust::sounding::thermo::{Ascent, Temperature};
use dewbound_trust::sounding::{
    Amendments, Daylight, Numbers, Parcel, Profile, Reach, ReachApplied,
};

/// How a response is sampled.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Plan {
    /// Dew points outside the interval that are sampled as well, K on each side.
    pub margin: f64,
    /// Most dew points that are computed.
    pub most_samples: usize,
}

impl Default for Plan {
    /// 2 K on each side, 25 dew points.
    fn default() -> Self {
        Self {
            margin: 2.0,
            most_samples: 25,
        }
    }
}

/// One surface dew point and what follows from it.
#[derive(Debug, Clone, PartialEq)]
pub struct Sample {
    /// Surface dew point.
    pub dewpoint: Temperature,
    /// The three parcels.
    pub numbers: Numbers,
    /// Reach as applied.
    pub reach: ReachApplied,
}

/// The numbers across the interval and somewhat beyond.
#[derive(Debug, Clone, PartialEq)]
pub struct Response {
    /// The interval it was made for.
    pub interval: Interval,
    /// From the driest to the moistest; both ends of the interval and the candidates within reach are among them.
    pub samples: Vec<Sample>,
    /// The profile without a surface edit, where that is not what the curve tends to: with the reach *mixed* the least edit of the
    /// surface already gives its mixing ratio to the whole layer, but no edit does not. It counts in the ranges.
    pub as_received: Option<Sample>,
    /// Dew point as reported.
    reported: Option<Temperature>,
    /// Dew point implied by the mixed layer.
    implied: Option<Temperature>,
    /// Dew point continued from the first levels of the sonde.
    continued: Option<Temperature>,
}

/// Steps the interval is divided into to begin with.
const STEPS: usize = 8;
/// Samples closer than this (K) are one.
const SAME: f64 = 1e-3;
/// No step is divided below this, K.
const FINEST: f64 = 0.05;
/// A step across which nothing differs by more than this (J/kg) is fine enough.
const FINE_ENOUGH: f64 = 25.0;

/// Samples the working profile over surface dew points, other amendments and reach as in force.
///
/// The interval is divided into eight equal steps, and the margin on each side (no higher than the surface temperature) into two. Then the step
/// across which the numbers differ most is halved again and again: CAPE counts once, CIN four times, the coming or going of free convection like
/// 400 J/kg; steps beside a local extreme of CAPE count double, steps outside the interval a third. This ends when no step differs by
/// more than 25 J/kg (or is as short as 0.05 K), or when `plan.most_samples` are computed. What lies between samples is
/// not seen: a range may miss at most what happens within a step.
pub fn response(
    received: &Profile,
    amendments: &Amendments,
    daylight: Daylight,
    candidates: &Candidates,
    interval: &Interval,
    plan: Plan,
) -> Response {
    let reported = candidates.reported.dewpoint;
    let implied = candidates.mixed_layer.dewpoint;
    let continued = candidates.first_levels.as_ref().and_then(|c| c.dewpoint);
    let temperature = amendments
        .surface_temperature()
        .or(candidates.surface_temperature);
    // At exactly the reported values an edit is none: see `Response::as_received`.
    let unedited = temperature == candidates.surface_temperature;
    let exact = |dewpoint: Temperature| {
        let working = amendments
            .with_surface_dewpoint(dewpoint)
            .apply(received, daylight);
        Sample {
            dewpoint,
            numbers: Numbers::of(&working.profile),
            reach: working.reach,
        }
    };
    let sample = |k: f64| {
        let dewpoint = Temperature::from_k(k);
        if unedited && reported == Some(dewpoint) {
            // The limit of the curve, from the side that is possible.
            let side = if temperature.is_some_and(|t| t.k() <= k) {
                -1e-6
            } else {
                1e-6
            };
            return Sample {
                dewpoint,
                ..exact(Temperature::from_k(k + side))
            };
        }
        exact(dewpoint)
    };

    let mut samples: Vec<Sample> =
        starting_points(interval, [reported, implied, continued], temperature, plan)
            .into_iter()
            .take(plan.most_samples.max(2))
            .map(sample)
            .collect();
    while samples.len() < plan.most_samples {
        let Some(at) = widest(&samples, interval) else {
            break;
        };
        let (Some(a), Some(b)) = (samples.get(at), samples.get(at + 1)) else {
            break;
        };
        let middle = 0.5 * (a.dewpoint.k() + b.dewpoint.k());
        samples.insert(at + 1, sample(middle));
    }

    let mixed = |sample: &Sample| sample.reach.reach == Reach::Mixed;
    let as_received = reported
        .filter(|_| unedited && samples.iter().any(mixed))
        .map(exact);
    Response {
        interval: interval.clone(),
        samples,
        as_received,
        reported,
        implied,
        continued,
    }
}

/// Where sampling starts, ascending. What must not be missed comes first when there are too many.
fn starting_points(
    interval: &Interval,
    candidates: [Option<Temperature>; 3],
    temperature: Option<Temperature>,
    plan: Plan,
) -> Vec<f64> {
    let (low, high) = (interval.low.k(), interval.high.k());
    let margin = if plan.margin.is_finite() {
        plan.margin.max(0.0)
    } else {
        0.0
    };
    let limit = temperature.map_or(f64::INFINITY, Temperature::k);
    let bottom = low - margin;
    let top = (high + margin).min(limit).max(high);
    let mut points = vec![low, high];
    let within = |k: &f64| (bottom..=top).contains(k);
    points.extend(
        candidates
            .into_iter()
            .flatten()
            .map(Temperature::k)
            .filter(within),
    );
    points.extend((1..STEPS).map(|n| low + (high - low) * n as f64 / STEPS as f64));
    points.extend([bottom, top, 0.5 * (bottom + low), 0.5 * (high + top)]);
    let mut kept: Vec<f64> = Vec::with_capacity(points.len());
    for point in points {
        if kept.len() < plan.most_samples.max(2) && kept.iter().all(|k| (k - point).abs() > SAME) {
            kept.push(point);
        }
    }
    kept.sort_by(f64::total_cmp);
    kept
}

/// Index of the step most worth halving.
fn widest(samples: &[Sample], interval: &Interval) -> Option<usize> {
    let mut best: Option<(f64, usize)> = None;
    for (at, pair) in samples.windows(2).enumerate() {
        let [a, b] = pair else { continue };
        if b.dewpoint.k() - a.dewpoint.k() < 2.0 * FINEST {
            continue;
        }
        let inside = interval.contains(a.dewpoint) && interval.contains(b.dewpoint);
        let mut score: f64 = 0.0;
        for parcel in Parcel::ALL {
            let change = change(a.numbers.parcel(parcel), b.numbers.parcel(parcel));
            let beside_extreme =
                is_extreme(samples, at, parcel) || is_extreme(samples, at + 1, parcel);
            score = score.max(change * if beside_extreme { 2.0 } else { 1.0 });
        }
        if !inside {
            score /= 3.0;
        }
        if score > FINE_ENOUGH && best.is_none_or(|(other, _)| score > other) {
            best = Some((score, at));
        }
    }
    best.map(|(_, at)| at)
}

/// How much two ascents of one parcel differ, J/kg.
fn change(a: Option<&Ascent>, b: Option<&Ascent>) -> f64 {
    const COMING_OR_GOING: f64 = 400.0;
    match (a, b) {
        (Some(a), Some(b)) => {
            let cin = match (a.cin, b.cin) {
                (Some(x), Some(y)) => 4.0 * (x - y).abs(),
                (None, None) => 0.0,
                _ => COMING_OR_GOING,
            };
            (a.cape - b.cape).abs().max(cin)
        }
        (None, None) => 0.0,
        _ => COMING_OR_GOING,
    }
}

/// CAPE at this sample is above or below both neighbours'.
fn is_extreme(samples: &[Sample], at: usize, parcel: Parcel) -> bool {
    let cape = |at: usize| Some(samples.get(at)?.numbers.parcel(parcel)?.cape);
    let (Some(before), Some(here), Some(after)) =
        (at.checked_sub(1).and_then(cape), cape(at), cape(at + 1))
    else {
        return false;
    };
    (here - before) * (after - here) < 0.0
}

impl Response {
    /// The sample of a candidate, for its CAPE side by side with the others'; the reported one without any edit.
    pub fn candidate(&self, origin: Origin) -> Option<&Sample> {
        match origin {
            Origin::Reported => self
                .as_received
                .as_ref()
                .or_else(|| self.at(self.reported?)),
            Origin::MixedLayer => self.at(self.implied?),
            Origin::FirstLevels => self.at(self.continued?),
        }
    }

    /// The sample at a dew point, when there is one within a thousandth of a kelvin.
    pub fn at(&self, dewpoint: Temperature) -> Option<&Sample> {
        self.samples
            .iter()
            .find(|sample| (sample.dewpoint.k() - dewpoint.k()).abs() <= SAME)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{level, mixed, night, received};
    use crate::{Pins, candidates, interval};
    use dewbound_trust::Thresholds;
    use dewbound_trust::sounding::{Amendment, Entry, Level};
    use proptest::prelude::*;

    fn amendments(reach: Reach) -> Amendments {
        Amendments {
            reach: Some(reach),
            ..Amendments::default()
        }
    }

    fn of(levels: Vec<Level>, amendments: &Amendments) -> (Profile, Response) {
        let profile = received(levels);
        let candidates = candidates(&profile, Daylight::Day, &Thresholds::default());
        let temperature = amendments
            .surface_temperature()
            .or(candidates.surface_temperature);
        let interval = interval(&candidates, temperature, Pins::default()).unwrap();
        let response = response(
            &profile,
            amendments,
            Daylight::Day,
            &candidates,
            &interval,
            Plan::default(),
        );
        (profile, response)
    }

    /// The moist-biased station over a layer of 12 g/kg (16.1 °C at the ground).
    fn doubtful(step: f64) -> Vec<Level> {
        mixed(step, 20.0, |_| 0.012)
    }

    #[test]
    fn samples_hold_what_must_be_there() {
        for reach in [Reach::Level, Reach::Mixed, Reach::Tapered] {
            let (_, response) = of(doubtful(5.0), &amendments(reach));
            assert!(response.samples.len() <= 25);
            assert!(
                response
                    .samples
                    .windows(2)
                    .all(|pair| pair[0].dewpoint < pair[1].dewpoint)
            );
            let interval = &response.interval;
            assert!(response.at(interval.low).is_some() && response.at(interval.high).is_some());
            assert_eq!(
                response.at(Temperature::from_c(20.0)).unwrap().dewpoint,
                Temperature::from_c(20.0)
            );
            assert!(response.candidate(Origin::MixedLayer).is_some());
            let (first, last) = (
                &response.samples[0],
                &response.samples[response.samples.len() - 1],
            );
            assert!((first.dewpoint.k() - interval.low.k() + 2.0).abs() < 1e-9);
            assert!((last.dewpoint.k() - interval.high.k() - 2.0).abs() < 1e-9);
        }
    }

    #[test]
    fn moister_surface_never_has_less_cape() {
        // With the reach of a level the air above the condensation level stays as it is, and theta-e of the parcel rises with its dew point.
        let (_, response) = of(doubtful(5.0), &amendments(Reach::Level));
        let capes: Vec<f64> = response
            .samples
            .iter()
            .map(|sample| sample.numbers.surface.as_ref().unwrap().cape)
            .collect();
        assert!(
            capes.windows(2).all(|pair| pair[1] >= pair[0] - 1e-6),
            "{capes:?}"
        );
        assert!(capes[capes.len() - 1] > capes[0] + 1000.0);
        let range = response.range(Parcel::Surface).unwrap();
        assert_eq!(range.cape.least.dewpoint, response.interval.low);
        assert_eq!(range.cape.most.dewpoint, response.interval.high);
    }

    #[test]
    fn ranges_hold_against_a_fine_scan() {
        for reach in [Reach::Level, Reach::Mixed, Reach::Tapered] {
            let list = amendments(reach);
            let (profile, response) = of(doubtful(5.0), &list);
            let (low, high) = (response.interval.low.k(), response.interval.high.k());
            for parcel in Parcel::ALL {
                let range = response.range(parcel).unwrap();
                let (mut least, mut most) = (f64::INFINITY, 0.0_f64);
                let (mut strongest, mut weakest) = (0.0_f64, f64::NEG_INFINITY);
                for n in 0..=300 {
                    let dewpoint = Temperature::from_k(low + (high - low) * f64::from(n) / 300.0);
                    let working = list
                        .with_surface_dewpoint(dewpoint)
                        .apply(&profile, Daylight::Day);
                    let numbers = Numbers::of(&working.profile);
                    let ascent = numbers.parcel(parcel).unwrap();
                    least = least.min(ascent.cape);
                    most = most.max(ascent.cape);
                    if let Some(cin) = ascent.cin {
                        strongest = strongest.min(cin);
                        weakest = weakest.max(cin);
                    }
                }
                // Nothing seen by the scan lies outside the range by more than half of what ends the refinement.
                let cape = range.cape;
                assert!(
                    cape.least.value <= least + 13.0 && cape.most.value >= most - 13.0,
                    "{reach:?} {parcel:?} {cape:?} {least} {most}"
                );
                let cin = range.cin.unwrap();
                assert!(
                    cin.strongest.value <= strongest + 7.0 && cin.weakest.value >= weakest - 7.0,
                    "{reach:?} {parcel:?} {cin:?} {strongest} {weakest}"
                );
            }
        }
    }

    #[test]
    fn every_value_inside_is_within_the_range() {
        let (_, response) = of(doubtful(5.0), &amendments(Reach::Mixed));
        for parcel in Parcel::ALL {
            let range = response.range(parcel).unwrap();
            for sample in response.inside() {
                let cape = sample.numbers.parcel(parcel).unwrap().cape;
                assert!((range.cape.least.value..=range.cape.most.value).contains(&cape));
            }
        }
        let outside = response.samples.len() - response.inside().count();
        assert!(outside >= 2, "{outside}");
    }

    #[test]
    fn mixed_reach_keeps_the_profile_as_received_beside_the_curve() {
        let (profile, response) = of(doubtful(5.0), &amendments(Reach::Mixed));
        let as_received = response.as_received.as_ref().unwrap();
        assert_eq!(as_received.numbers, Numbers::of(&profile));
        assert_eq!(response.candidate(Origin::Reported), Some(as_received));
        // The curve passes without a jump: its sample at the reported value lies between its neighbours.
        let at = response
            .samples
            .iter()
            .position(|sample| sample.dewpoint == Temperature::from_c(20.0))
            .unwrap();
        let cape = |at: usize| response.samples[at].numbers.mixed.as_ref().unwrap().cape;
        assert!(cape(at - 1) < cape(at) && cape(at) < cape(at + 1));
        // 20 °C through the layer is far from what was received.
        assert!(cape(at) > as_received.numbers.mixed.as_ref().unwrap().cape + 500.0);
        // And it counts: about the reported value alone, the least CAPE is the received one.
        let found = candidates(&profile, Daylight::Day, &Thresholds::default());
        let pins = Pins {
            low: Some(Temperature::from_c(19.9)),
            high: Some(Temperature::from_c(20.1)),
        };
        let narrow = interval(&found, found.surface_temperature, pins).unwrap();
        let list = amendments(Reach::Mixed);
        let narrow = super::response(
            &profile,
            &list,
            Daylight::Day,
            &found,
            &narrow,
            Plan::default(),
        );
        let least = narrow.range(Parcel::Mixed).unwrap().cape.least;
        assert_eq!(least.value, Numbers::of(&profile).mixed.unwrap().cape);
        assert_eq!(least.dewpoint, Temperature::from_c(20.0));
        // The other reaches tend to the received profile.
        let (profile, response) = of(doubtful(5.0), &amendments(Reach::Tapered));
        assert_eq!(response.as_received, None);
        let sample = response.candidate(Origin::Reported).unwrap();
        let (a, b) = (
            sample.numbers.surface.as_ref().unwrap().cape,
            Numbers::of(&profile).surface.unwrap().cape,
        );
        assert!((a - b).abs() < 0.01, "{a} {b}");
    }

    /// Warm air over a shallow moist layer: dry enough at the ground, nothing rises freely.
    fn capped() -> Vec<Level> {
        vec![
            level(965.0, 29.0, 15.0),
            level(930.0, 25.6, 14.0),
            level(900.0, 24.0, 12.0),
            level(850.0, 25.0, 5.0),
            level(700.0, 12.6, -6.0),
            level(500.0, -7.3, -25.0),
            level(400.0, -19.0, -38.0),
            level(300.0, -35.0, -52.0),
            level(200.0, -53.0, -70.0),
            level(100.0, -64.0, -88.0),
        ]
    }

    #[test]
    fn free_convection_lost_inside_is_told() {
        let profile = received(capped());
        let candidates = candidates(&profile, Daylight::Night, &Thresholds::default());
        let pins = Pins {
            low: Some(Temperature::from_c(8.0)),
            high: Some(Temperature::from_c(22.0)),
        };
        let interval = interval(&candidates, candidates.surface_temperature, pins).unwrap();
        let found = response(
            &profile,
            &amendments(Reach::Level),
            Daylight::Night,
            &candidates,
            &interval,
            Plan::default(),
        );
        let range = found.range(Parcel::Surface).unwrap();
        assert!(range.cin_absent_somewhere);
        assert_eq!(
            (range.cape.least.value, range.cape.least.dewpoint),
            (0.0, Temperature::from_c(8.0))
        );
        assert!(range.cape.most.value > 500.0);
        let cin = range.cin.unwrap();
        assert!(cin.strongest.value < cin.weakest.value && cin.weakest.value <= 0.0);
        // The edge of free convection is pinned down to a tenth of a kelvin or so.
        let edge = found
            .samples
            .windows(2)
            .find(|pair| {
                let free = |sample: &Sample| sample.numbers.surface.as_ref().unwrap().cin.is_some();
                !free(&pair[0]) && free(&pair[1])
            })
            .unwrap();
        assert!(edge[1].dewpoint.k() - edge[0].dewpoint.k() < 0.15);
    }

    #[test]
    fn a_doubt_at_the_ground_does_not_reach_an_elevated_parcel() {
        let (_, response) = of(night(), &amendments(Reach::Level));
        let range = response.range(Parcel::MostUnstable).unwrap();
        // Sums over the column are taken from its foot: the last digits may differ.
        assert!(range.cape.most.value > 100.0);
        assert!(range.cape.most.value - range.cape.least.value < 1e-6);
        let surface = response.range(Parcel::Surface).unwrap();
        assert!(surface.cape.most.value >= surface.cape.least.value);
    }

    #[test]
    fn other_amendments_are_in_force() {
        let mut list = amendments(Reach::Level);
        list.entries.push(Entry {
            amendment: Amendment::DisregardAbove {
                pressure_pa: 40_000.0,
            },
            enabled: true,
            from_repair: None,
        });
        let (_, cut) = of(doubtful(5.0), &list);
        let (_, whole) = of(doubtful(5.0), &amendments(Reach::Level));
        let (cut, whole) = (
            cut.range(Parcel::Surface).unwrap(),
            whole.range(Parcel::Surface).unwrap(),
        );
        assert!(cut.at_least_somewhere && !whole.at_least_somewhere);
        assert!(cut.cape.most.value < whole.cape.most.value);
    }

    #[test]
    fn no_sample_above_the_temperature_in_force() {
        let list = amendments(Reach::Level).with_surface_temperature(Temperature::from_c(20.2));
        let (_, response) = of(doubtful(5.0), &list);
        let last = &response.samples[response.samples.len() - 1];
        assert_eq!(last.dewpoint, Temperature::from_c(20.2));
        assert_eq!(response.interval.high, Temperature::from_c(20.2));
    }

    #[test]
    fn a_parcel_that_is_absent_throughout_has_no_range() {
        let mut levels = doubtful(25.0);
        levels[0].temperature = None;
        levels[0].dewpoint = None;
        levels[0].wind = Some(dewbound_trust::sounding::Wind {
            direction: 180.0,
            speed: 5.0,
        });
        let profile = received(levels);
        let candidates = candidates(&profile, Daylight::Day, &Thresholds::default());
        let pins = Pins {
            low: Some(Temperature::from_c(15.0)),
            high: Some(Temperature::from_c(18.0)),
        };
        let interval = interval(&candidates, None, pins).unwrap();
        let found = response(
            &profile,
            &Amendments::default(),
            Daylight::Day,
            &candidates,
            &interval,
            Plan::default(),
        );
        assert_eq!(found.range(Parcel::Surface), None);
        assert!(found.range(Parcel::Mixed).is_some());
    }

    proptest! {
        #![proptest_config(ProptestConfig { cases: 64, failure_persistence: None, ..ProptestConfig::default() })]

        #[test]
        fn any_plan_and_interval_give_a_response(
            low in 250.0..305.0_f64, width in 0.0..20.0_f64, most_samples in 0..40_usize,
            margin in prop_oneof![4 => -1.0..6.0_f64, 1 => Just(f64::NAN), 1 => Just(f64::INFINITY)],
            reach in prop_oneof![Just(Reach::Level), Just(Reach::Mixed), Just(Reach::Tapered)],
        ) {
            let profile = received(doubtful(25.0));
            let candidates = candidates(&profile, Daylight::Day, &Thresholds::default());
            let pins = Pins { low: Some(Temperature::from_k(low)), high: Some(Temperature::from_k(low + width)) };
            let interval = interval(&candidates, None, pins).unwrap();
            let plan = Plan { margin, most_samples };
            let found = response(&profile, &amendments(reach), Daylight::Day, &candidates, &interval, plan);
            prop_assert!(found.samples.len() <= most_samples.max(2));
            prop_assert!(found.samples.windows(2).all(|pair| pair[0].dewpoint < pair[1].dewpoint));
            let range = found.range(Parcel::Surface).unwrap();
            prop_assert!(range.cape.least.value <= range.cape.most.value);
        }
    }
}
