//! What a rule saw.

use dewbound_sounding::{Amendment, thermo::Pressure};

/// How sure a rule is, in the trade's words (Federal Meteorological Handbook No. 3, ch. 4).
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Grade {
    /// For information only.
    Informative,
    /// Suspected, not proven.
    Doubtful,
    /// Wrong beyond reasonable doubt.
    Erroneous,
}

/// One number of evidence; the key carries the unit (`theta_drop_k`).
#[derive(Debug, Clone, PartialEq)]
pub struct Evidence {
    /// Key with unit, for JSON.
    pub key: &'static str,
    /// What a person reads, e.g. "theta falls by".
    pub label: &'static str,
    /// Value in `unit`.
    pub value: f64,
    /// Unit as shown; empty when there is none.
    pub unit: &'static str,
    /// Decimals shown.
    pub decimals: usize,
}

impl Evidence {
    pub(crate) fn new(
        key: &'static str,
        label: &'static str,
        value: f64,
        unit: &'static str,
        decimals: usize,
    ) -> Self {
        Self {
            key,
            label,
            value,
            unit,
            decimals,
        }
    }
}

/// A repair: amendments that would undo the suspected fault.
#[derive(Debug, Clone, PartialEq)]
pub struct Repair {
    /// Short id, unique within the finding, e.g. `bridge-rh-kept`.
    pub id: &'static str,
    /// What it does, in a phrase for a button.
    pub what: String,
    /// The amendments, in order. Empty: nothing in the profile changes.
    pub amendments: Vec<Amendment>,
}

/// What one rule saw in one layer of the received profile, with both explanations and the ways to repair it.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// Id of the rule.
    pub rule: &'static str,
    /// Title of the rule, for people.
    pub title: &'static str,
    /// Grade.
    pub grade: Grade,
    /// Bottom of the layer; `None` when the finding is about the whole ascent.
    pub bottom: Option<Pressure>,
    /// Top of the layer.
    pub top: Option<Pressure>,
    /// Heights of the two ends above mean sea level, m.
    pub heights: Option<(f64, f64)>,
    /// One sentence: what is seen, with its most telling number.
    pub summary: String,
    /// Evidence in numbers.
    pub evidence: Vec<Evidence>,
    /// What is wrong if the sonde is guilty.
    pub guilty: String,
    /// What the air could be doing if it is innocent.
    pub innocent: String,
    /// What could not be judged for want of something (e.g. position unknown), empty when nothing.
    pub caveat: String,
    /// Repairs; the first is the default one.
    pub repairs: Vec<Repair>,
    /// Concerns wind only: no cost in CAPE.
    pub wind_only: bool,
}

impl Finding {
    /// Stable identity within one sounding: rule and layer, e.g. `wet-thermometer@652-601`.
    pub fn key(&self) -> String {
        let hpa =
            |p: Option<Pressure>| p.map_or_else(|| "-".to_owned(), |p| format!("{:.0}", p.hpa()));
        format!("{}@{}-{}", self.rule, hpa(self.bottom), hpa(self.top))
    }

    /// Value of one piece of evidence.
    pub fn evidence(&self, key: &str) -> Option<f64> {
        self.evidence.iter().find(|e| e.key == key).map(|e| e.value)
    }

    /// Takes in another finding on the same layer.
    pub(crate) fn absorb(&mut self, other: Self) {
        self.grade = self.grade.max(other.grade);
        self.wind_only &= other.wind_only;
        for (mine, theirs) in [
            (&mut self.summary, other.summary),
            (&mut self.guilty, other.guilty),
            (&mut self.innocent, other.innocent),
            (&mut self.caveat, other.caveat),
        ] {
            if !theirs.is_empty() && !mine.contains(&theirs) {
                if !mine.is_empty() {
                    mine.push(' ');
                }
                mine.push_str(&theirs);
            }
        }
        for evidence in other.evidence {
            if self.evidence.iter().all(|mine| mine.key != evidence.key) {
                self.evidence.push(evidence);
            }
        }
        for repair in other.repairs {
            if self.repairs.iter().all(|mine| mine.id != repair.id) {
                self.repairs.push(repair);
            }
        }
    }
}
