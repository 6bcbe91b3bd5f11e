//! The order in which findings are shown.

use crate::rules::PASSES_APART;
use crate::{Grade, Priced};
use std::cmp::Ordering;

/// A cost from which a doubt matters more than one whose cost isn't known, J/kg.
const WEIGHTY_JKG: f64 = 100.0;

/// Where a finding stands before costs are compared, from the top.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Standing {
    /// Two passes are mixed, at no small or an unknown cost: what else is seen rests on the order of the levels.
    PassesMixed,
    /// Cost unknown, and either proven wrong or the result itself is only a lower limit.
    UnknownAndGrave,
    /// At least [`WEIGHTY_JKG`].
    Weighty,
    /// Cost unknown.
    Unknown,
    /// Less than [`WEIGHTY_JKG`].
    Light,
    /// For information, without a cost.
    InformsOnly,
    /// Wind only: no cost in CAPE.
    Wind,
}

/// Order in which cards are shown, worst first: indices into `priced` (design: unknown costs stand above all priced
/// ones when erroneous or when the result is "at least", else after the last one of >= 100 J/kg).
///
/// Findings for information only whose cost is unknown stand after the priced ones, wind-only findings last. Ties:
/// larger CIN change, then the graver grade, then the lower layer. Mixed passes that cost much stand above everything.
pub fn rank(priced: &[Priced], at_least: bool) -> Vec<usize> {
    let mut order: Vec<usize> = (0..priced.len()).collect();
    order.sort_by(|&a, &b| match (priced.get(a), priced.get(b)) {
        (Some(a), Some(b)) => compare(a, b, at_least),
        _ => Ordering::Equal,
    });
    order
}

fn compare(a: &Priced, b: &Priced, at_least: bool) -> Ordering {
    let cape = |state: &Priced| {
        state
            .headline_cost()
            .and_then(|cost| cost.cape_magnitude())
            .unwrap_or(0.0)
    };
    let cin = |state: &Priced| {
        state
            .headline_cost()
            .and_then(|cost| cost.cin_magnitude())
            .unwrap_or(0.0)
    };
    standing(a, at_least)
        .cmp(&standing(b, at_least))
        .then(cape(b).total_cmp(&cape(a)))
        .then(cin(b).total_cmp(&cin(a)))
        .then(b.finding.grade.cmp(&a.finding.grade))
}

fn standing(state: &Priced, at_least: bool) -> Standing {
    let grade = state.finding.grade;
    if state.finding.wind_only {
        return Standing::Wind;
    }
    let cape = state.headline_cost().and_then(|cost| cost.cape_magnitude());
    if state.finding.evidence(PASSES_APART).is_some() && cape.is_none_or(|cape| cape >= WEIGHTY_JKG)
    {
        return Standing::PassesMixed;
    }
    match cape {
        Some(cape) if cape >= WEIGHTY_JKG => Standing::Weighty,
        Some(_) => Standing::Light,
        None if grade == Grade::Erroneous => Standing::UnknownAndGrave,
        None if grade == Grade::Informative => Standing::InformsOnly,
        None if at_least => Standing::UnknownAndGrave,
        None => Standing::Unknown,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{Change, Cost, Finding};

    fn finding(grade: Grade, wind_only: bool) -> Finding {
        Finding {
            rule: "level-order",
            title: "",
            grade,
            bottom: None,
            top: None,
            heights: None,
            summary: String::new(),
            evidence: Vec::new(),
            guilty: String::new(),
            innocent: String::new(),
            caveat: String::new(),
            repairs: Vec::new(),
            wind_only,
        }
    }

    fn priced(finding: &Finding, cape: Option<f64>) -> Priced<'_> {
        Priced {
            finding,
            costs: vec![cape.map(|cape| Cost {
                mixed: Change {
                    cape: Some(cape),
                    cin: None,
                },
                ..Cost::default()
            })],
            headline: cape.map(|_| 0),
            applied: None,
        }
    }

    #[test]
    fn unknown_costs_stand_where_the_design_puts_them() {
        use Grade::{Doubtful, Erroneous, Informative};
        let (doubtful, erroneous) = (finding(Doubtful, false), finding(Erroneous, false));
        let (wind, informs) = (finding(Erroneous, true), finding(Informative, false));
        let states = [
            priced(&wind, None),             // 0
            priced(&doubtful, Some(40.0)),   // 1
            priced(&doubtful, None),         // 2
            priced(&doubtful, Some(-900.0)), // 3
            priced(&erroneous, None),        // 4
            priced(&informs, None),          // 5
            priced(&doubtful, Some(100.0)),  // 6
        ];
        assert_eq!(rank(&states, false), [4, 3, 6, 2, 1, 5, 0]);
        // Both unknown ones are at the top now, the graver first.
        assert_eq!(rank(&states, true), [4, 2, 3, 6, 1, 5, 0]);
    }
}
