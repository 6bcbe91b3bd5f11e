//! How far the numbers move inside the credible surface moisture, as it is shown.

use crate::bounds::{self, NoInterval, Origin, Plan, Response, Sample};
use crate::sounding::{Amendment, Amendments, Numbers, Parcel};
use crate::thermo::Temperature;
use crate::{Analysed, Document, IntervalEnd, Pins};

/// Where a candidate for the true surface dew point comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum CandidateKind {
    /// As reported.
    Reported,
    /// Implied by the mixed layer.
    MixedLayer,
    /// Continued from the first levels of the sonde, where these refute the reported value.
    FirstLevels,
    /// Pinned by the user, drier end.
    PinnedLow,
    /// Pinned by the user, moister end.
    PinnedHigh,
}

/// A candidate for the true surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub struct Candidate {
    /// Where it comes from.
    pub kind: CandidateKind,
    /// Its dew point; `None`: there is none, and `note` says why.
    pub dewpoint: Option<Temperature>,
    /// CAPE of the three parcels there (order of [`Parcel::ALL`]), J/kg.
    pub cape: [Option<f64>; 3],
    /// One line for people.
    pub note: String,
    /// Takes part in the interval; set aside otherwise, and `note` says why.
    pub trusted: bool,
}

/// The credible interval of the surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub struct Interval {
    /// Drier end.
    pub low: Temperature,
    /// Moister end.
    pub high: Temperature,
    /// Where the drier end comes from.
    pub why_low: String,
    /// Where the moister end comes from.
    pub why_high: String,
    /// An end rests on a provisional allowance for the sensor.
    pub provisional: bool,
    /// Both ends in one line, for people ("provisional: ...").
    pub why: String,
}

impl Interval {
    fn of(interval: &bounds::Interval) -> Self {
        let mark = if interval.provisional {
            "provisional: "
        } else {
            ""
        };
        Self {
            low: interval.low,
            high: interval.high,
            why_low: interval.why_low.clone(),
            why_high: interval.why_high.clone(),
            provisional: interval.provisional,
            why: format!("{mark}{} to {}", interval.why_low, interval.why_high),
        }
    }

    /// A dew point lies inside, ends included.
    pub fn contains(&self, dewpoint: Temperature) -> bool {
        (self.low.k()..=self.high.k()).contains(&dewpoint.k())
    }
}

/// The numbers of one parcel at one surface dew point.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelPoint {
    /// CAPE, J/kg.
    pub cape: Option<f64>,
    /// CIN, J/kg.
    pub cin: Option<f64>,
    /// CAPE is a lower limit there.
    pub at_least: bool,
}

/// One point of the response curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ResponsePoint {
    /// Surface dew point.
    pub dewpoint: Temperature,
    /// The three parcels, in the order of [`Parcel::ALL`].
    pub parcels: [ParcelPoint; 3],
}

/// Smallest and largest value of a number anywhere inside the interval, with the dew points where they are taken.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Extremes {
    /// Smallest value (for CIN the strongest cap), J/kg.
    pub least: f64,
    /// Dew point there.
    pub least_at: Temperature,
    /// Largest value (for CIN the weakest cap), J/kg.
    pub most: f64,
    /// Dew point there.
    pub most_at: Temperature,
    /// Some value inside the interval is a lower limit only.
    pub at_least: bool,
}

/// Ranges of one parcel over the interval.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct ParcelRange {
    /// CAPE; `None`: no parcel or no interval.
    pub cape: Option<Extremes>,
    /// CIN; `None`: no parcel, no interval, or no free convection anywhere inside it.
    pub cin: Option<Extremes>,
    /// Somewhere inside the interval there is no free convection.
    pub sometimes_no_free_convection: bool,
}

/// Everything that depends on all of the document except the dragged surface dew point.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Doubt {
    /// Candidates side by side.
    pub candidates: Vec<Candidate>,
    /// The credible interval; `None` when the surface has no usable air.
    pub interval: Option<Interval>,
    /// Numbers against surface dew point, by rising dew point; reaches beyond the interval on both sides.
    pub response: Vec<ResponsePoint>,
    /// Ranges in the order of [`Parcel::ALL`].
    pub ranges: [ParcelRange; 3],
    /// Why there is no interval or response; empty when there is one.
    pub problem: String,
    /// Sampled at fewer dew points, because a drag is under way that moves the whole response; done in full when it ends.
    pub coarse: bool,
}

/// Never fewer dew points than these: the ends of the interval, the candidates, and a few between.
const FEWEST_SAMPLES: usize = 7;

impl Doubt {
    /// Range of one parcel.
    pub fn range(&self, parcel: Parcel) -> &ParcelRange {
        let [surface, mixed, most_unstable] = &self.ranges;
        match parcel {
            Parcel::Surface => surface,
            Parcel::Mixed => mixed,
            Parcel::MostUnstable => most_unstable,
        }
    }
}

/// What the doubt depends on: all of the document but the surface dew point.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct DoubtKey {
    amendments: Amendments,
    pins: Pins,
}

impl DoubtKey {
    pub(crate) fn of(document: &Document) -> Self {
        let mut amendments = document.amendments.clone();
        amendments.entries.retain(|entry| {
            entry.enabled && !matches!(entry.amendment, Amendment::SurfaceDewpoint { .. })
        });
        Self {
            amendments,
            pins: document.pins,
        }
    }
}

impl Doubt {
    /// Of a document. `most_samples`: how many dew points a frame affords; `None`: as many as it is worth.
    pub(crate) fn of(
        analysed: &Analysed,
        document: &Document,
        most_samples: Option<usize>,
    ) -> Self {
        let amendments = &document.amendments;
        let temperature = amendments
            .surface_temperature()
            .or(analysed.candidates.surface_temperature);
        let pins = bounds::Pins {
            low: document.pins.end(IntervalEnd::Low),
            high: document.pins.end(IntervalEnd::High),
        };
        let interval = match bounds::interval(&analysed.candidates, temperature, pins) {
            Ok(interval) => interval,
            Err(problem) => return Self::without_interval(analysed, document, &problem),
        };
        let full = Plan::default();
        let plan = Plan {
            most_samples: most_samples
                .unwrap_or(full.most_samples)
                .clamp(FEWEST_SAMPLES, full.most_samples),
            ..full
        };
        let response = bounds::response(
            &analysed.profile,
            amendments,
            analysed.daylight,
            &analysed.candidates,
            &interval,
            plan,
        );
        Self {
            candidates: candidates(analysed, document, Some(&response)),
            interval: Some(Interval::of(&interval)),
            response: response.samples.iter().map(ResponsePoint::of).collect(),
            ranges: Parcel::ALL.map(|parcel| ParcelRange::of(&response, parcel)),
            problem: String::new(),
            coarse: plan.most_samples < full.most_samples,
        }
    }

    fn without_interval(analysed: &Analysed, document: &Document, problem: &NoInterval) -> Self {
        Self {
            candidates: candidates(analysed, document, None),
            problem: problem.to_string(),
            ..Self::default()
        }
    }

    /// The same with the working numbers counted in the ranges, when their dew point lies inside the interval and a
    /// value lies outside them: the response is sampled, and a number must not stand outside its own range.
    pub(crate) fn including(
        &self,
        dewpoint: Option<Temperature>,
        numbers: &Numbers,
    ) -> Option<Self> {
        let dewpoint = dewpoint
            .filter(|&dewpoint| self.interval.as_ref().is_some_and(|i| i.contains(dewpoint)))?;
        let mut ranges = self.ranges;
        for (range, parcel) in ranges.iter_mut().zip(Parcel::ALL) {
            let Some(ascent) = numbers.parcel(parcel) else {
                continue;
            };
            Extremes::include(&mut range.cape, ascent.cape, dewpoint);
            match ascent.cin {
                Some(cin) => Extremes::include(&mut range.cin, cin, dewpoint),
                None => range.sometimes_no_free_convection = true,
            }
            if let Some(cape) = &mut range.cape {
                cape.at_least |= ascent.at_least;
            }
        }
        (ranges != self.ranges).then(|| Self {
            ranges,
            ..self.clone()
        })
    }
}

impl Extremes {
    fn include(range: &mut Option<Self>, value: f64, dewpoint: Temperature) {
        let range = range.get_or_insert(Self {
            least: value,
            least_at: dewpoint,
            most: value,
            most_at: dewpoint,
            at_least: false,
        });
        if value < range.least {
            (range.least, range.least_at) = (value, dewpoint);
        }
        if value > range.most {
            (range.most, range.most_at) = (value, dewpoint);
        }
    }
}

impl ResponsePoint {
    fn of(sample: &Sample) -> Self {
        Self {
            dewpoint: sample.dewpoint,
            parcels: Parcel::ALL.map(|parcel| {
                sample
                    .numbers
                    .parcel(parcel)
                    .map_or_else(ParcelPoint::default, |ascent| ParcelPoint {
                        cape: Some(ascent.cape),
                        cin: ascent.cin,
                        at_least: ascent.at_least,
                    })
            }),
        }
    }
}

impl ParcelRange {
    fn of(response: &Response, parcel: Parcel) -> Self {
        let Some(range) = response.range(parcel) else {
            return Self::default();
        };
        let extremes = |least: bounds::Extreme, most: bounds::Extreme, at_least| Extremes {
            least: least.value,
            least_at: least.dewpoint,
            most: most.value,
            most_at: most.dewpoint,
            at_least,
        };
        Self {
            cape: Some(extremes(
                range.cape.least,
                range.cape.most,
                range.at_least_somewhere,
            )),
            cin: range
                .cin
                .map(|cin| extremes(cin.strongest, cin.weakest, false)),
            sometimes_no_free_convection: range.cin_absent_somewhere,
        }
    }
}

/// The candidates side by side with their CAPE, then the pinned ends.
fn candidates(
    analysed: &Analysed,
    document: &Document,
    response: Option<&Response>,
) -> Vec<Candidate> {
    let cape = |sample: Option<&Sample>| {
        Parcel::ALL.map(|parcel| Some(sample?.numbers.parcel(parcel)?.cape))
    };
    let of_origin = analysed.candidates.iter().map(|candidate| Candidate {
        kind: match candidate.origin {
            Origin::Reported => CandidateKind::Reported,
            Origin::MixedLayer => CandidateKind::MixedLayer,
            Origin::FirstLevels => CandidateKind::FirstLevels,
        },
        dewpoint: candidate.dewpoint,
        cape: cape(response.and_then(|response| response.candidate(candidate.origin))),
        note: candidate.why.clone(),
        trusted: !candidate.set_aside,
    });
    let pinned = [
        (CandidateKind::PinnedLow, IntervalEnd::Low),
        (CandidateKind::PinnedHigh, IntervalEnd::High),
    ];
    let of_pins = pinned.into_iter().filter_map(|(kind, end)| {
        let dewpoint = document.pins.end(end)?;
        Some(Candidate {
            kind,
            dewpoint: Some(dewpoint),
            cape: cape(response.and_then(|response| response.at(dewpoint))),
            note: "pinned by you".to_owned(),
            trusted: true,
        })
    });
    of_origin.chain(of_pins).collect()
}
