//! One object a sounding, schema 1. Absent values are `null`; every key carries its unit.

use crate::ledger::digests;
use crate::quantity::{self, Readings};
use crate::sounding::{Note, OtherAscents, Parcel, Place};
use crate::thermo::Ascent;
use crate::trust::{Change, Cost, Finding, Grade};
use crate::{Analysed, Card, Extremes, Identity, ParcelRange, Results};
use serde::{Serialize, Serializer};
use serde_json::{Map, Value, json};

/// Version of the object; a change of meaning makes a new one.
pub const SCHEMA: u32 = 1;

/// The object on one line, without the line's end.
pub fn json_line(analysed: &Analysed, results: &Results) -> Result<String, serde_json::Error> {
    serde_json::to_string(&Weighed::of(analysed, results))
}

/// The same with one member more, `numbers`: every declared number, of each parcel and of the whole profile.
pub fn json_line_with_all(
    analysed: &Analysed,
    results: &Results,
    other: &OtherAscents,
) -> Result<String, serde_json::Error> {
    let mut weighed = Weighed::of(analysed, results);
    weighed.numbers = Some(Everything::of(&results.readings(Some(other))));
    serde_json::to_string(&weighed)
}

/// A number rounded as it is written; `null` when it is none.
pub(crate) fn rounded(value: f64, decimals: i32) -> Value {
    json!(Rounded(value, decimals))
}

/// A number as written: rounded well below what the method is good for, so that the digits of the machine don't show.
/// Not a number: `null`.
#[derive(Debug, Clone, Copy)]
struct Rounded(f64, i32);

impl Serialize for Rounded {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let scale = 10_f64.powi(self.1);
        // Adding zero turns -0 into 0.
        let value = (self.0 * scale).round() / scale + 0.0;
        if value.is_finite() {
            serializer.serialize_f64(value)
        } else {
            serializer.serialize_none()
        }
    }
}

fn jkg(value: f64) -> Rounded {
    Rounded(value, 2)
}

fn hpa(pressure: crate::thermo::Pressure) -> Rounded {
    Rounded(pressure.hpa(), 2)
}

#[derive(Serialize)]
struct Weighed<'a> {
    schema: u32,
    source: Source<'a>,
    demo: bool,
    sounding: About,
    parcels: Parcels,
    findings: Vec<FindingOut<'a>>,
    notes: Vec<NoteOut<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    numbers: Option<Everything>,
}

/// Every declared number under its key; absent is `null`.
#[derive(Serialize)]
struct Everything {
    surface: Map<String, Value>,
    mixed: Map<String, Value>,
    most_unstable: Map<String, Value>,
    profile: Map<String, Value>,
}

impl Everything {
    fn of(readings: &Readings) -> Self {
        let of = |per_parcel: bool, parcel: Parcel| {
            quantity::all()
                .filter(|quantity| quantity.is_per_parcel() == per_parcel)
                .map(|quantity| {
                    let value = quantity.value(readings, parcel);
                    let value = value.map_or(Value::Null, |value| quantity.json(&value));
                    (quantity.key.to_owned(), value)
                })
                .collect()
        };
        Self {
            surface: of(true, Parcel::Surface),
            mixed: of(true, Parcel::Mixed),
            most_unstable: of(true, Parcel::MostUnstable),
            profile: of(false, Parcel::Surface),
        }
    }
}

#[derive(Serialize)]
struct Source<'a> {
    file: &'a str,
    index: usize,
    sha256: Option<String>,
    parts: Vec<String>,
}

#[derive(Serialize)]
struct About {
    station: Option<String>,
    valid: Option<String>,
    levels: usize,
    humidity_missing: usize,
    top_hpa: Option<Rounded>,
}

#[derive(Serialize)]
struct Parcels {
    surface: Option<ParcelOut>,
    mixed: Option<ParcelOut>,
    most_unstable: Option<ParcelOut>,
}

#[derive(Serialize)]
struct ParcelOut {
    cape_jkg: Rounded,
    cin_jkg: Option<Rounded>,
    at_least: bool,
    lcl_hpa: Rounded,
    lcl_c: Rounded,
    lfc_hpa: Option<Rounded>,
    el_hpa: Option<Rounded>,
    theta_e_k: Rounded,
    start: Start,
    range: Option<RangeOut>,
}

#[derive(Serialize)]
struct Start {
    pressure_hpa: Rounded,
    temperature_c: Rounded,
    dewpoint_c: Rounded,
}

#[derive(Serialize)]
struct RangeOut {
    cape_jkg: Option<[Rounded; 2]>,
    /// From the strongest cap to the weakest, where there is free convection.
    cin_jkg: Option<[Rounded; 2]>,
    cin_absent_somewhere: bool,
}

#[derive(Serialize)]
struct FindingOut<'a> {
    rule: &'a str,
    grade: Grade,
    bottom_hpa: Option<Rounded>,
    top_hpa: Option<Rounded>,
    evidence: Map<String, Value>,
    explains: Explains<'a>,
    repairs: Vec<RepairOut<'a>>,
    cost: Option<CostOut>,
}

#[derive(Serialize)]
struct Explains<'a> {
    guilty: &'a str,
    innocent: &'a str,
}

#[derive(Serialize)]
struct RepairOut<'a> {
    id: &'a str,
    what: &'a str,
    cost: Option<CostOut>,
}

#[derive(Serialize)]
struct CostOut {
    surface: ChangeOut,
    mixed: ChangeOut,
    most_unstable: ChangeOut,
}

#[derive(Serialize)]
struct ChangeOut {
    cape_jkg: Option<Rounded>,
    cin_jkg: Option<Rounded>,
}

#[derive(Serialize)]
struct NoteOut<'a> {
    #[serde(rename = "where")]
    place: Value,
    what: &'a str,
    why: &'a str,
}

impl<'a> Weighed<'a> {
    fn of(analysed: &'a Analysed, results: &Results) -> Self {
        let sounding = &analysed.sounding;
        let profile = &analysed.profile;
        let parcel = |which| {
            let ascent = results.numbers.parcel(which)?;
            Some(ParcelOut::of(ascent, results.doubt.range(which)))
        };
        Self {
            schema: SCHEMA,
            source: Source {
                file: &sounding.source.file,
                index: sounding.source.index,
                sha256: Identity::sha256(sounding),
                parts: digests(&sounding.source.parts),
            },
            demo: sounding.demo,
            sounding: About {
                station: sounding.station.canonical_id(),
                valid: sounding.times.valid().map(|time| time.to_string()),
                levels: analysed.usable_rows().len(),
                humidity_missing: analysed.humidity_missing(),
                top_hpa: profile.top().map(hpa),
            },
            parcels: Parcels {
                surface: parcel(Parcel::Surface),
                mixed: parcel(Parcel::Mixed),
                most_unstable: parcel(Parcel::MostUnstable),
            },
            findings: analysed
                .findings
                .iter()
                .zip(&results.cards)
                .map(|(finding, card)| FindingOut::of(finding, card))
                .collect(),
            notes: analysed
                .notes
                .iter()
                .map(|note| NoteOut::of(note, &sounding.source.file))
                .collect(),
            numbers: None,
        }
    }
}

impl ParcelOut {
    fn of(ascent: &Ascent, range: &ParcelRange) -> Self {
        let ends = |extremes: &Extremes| [jkg(extremes.least), jkg(extremes.most)];
        Self {
            cape_jkg: jkg(ascent.cape),
            cin_jkg: ascent.cin.map(jkg),
            at_least: ascent.at_least,
            lcl_hpa: hpa(ascent.lcl.pressure),
            lcl_c: Rounded(ascent.lcl.temperature.c(), 3),
            lfc_hpa: ascent.lfc.map(hpa),
            el_hpa: ascent.el.map(hpa),
            theta_e_k: Rounded(ascent.theta_e.k(), 3),
            start: Start {
                pressure_hpa: hpa(ascent.start.pressure),
                temperature_c: Rounded(ascent.start.temperature.c(), 3),
                dewpoint_c: Rounded(ascent.start.dewpoint.c(), 3),
            },
            range: (range.cape.is_some() || range.cin.is_some()).then(|| RangeOut {
                cape_jkg: range.cape.as_ref().map(ends),
                cin_jkg: range.cin.as_ref().map(ends),
                cin_absent_somewhere: range.sometimes_no_free_convection,
            }),
        }
    }
}

impl<'a> FindingOut<'a> {
    fn of(finding: &'a Finding, card: &Card) -> Self {
        let repairs = finding.repairs.iter().enumerate();
        Self {
            rule: finding.rule,
            grade: finding.grade,
            bottom_hpa: finding.bottom.map(hpa),
            top_hpa: finding.top.map(hpa),
            evidence: finding
                .evidence
                .iter()
                .map(|evidence| {
                    let decimals = i32::try_from(evidence.decimals).unwrap_or(0) + 2;
                    (
                        evidence.key.to_owned(),
                        json!(Rounded(evidence.value, decimals)),
                    )
                })
                .collect(),
            explains: Explains {
                guilty: &finding.guilty,
                innocent: &finding.innocent,
            },
            repairs: repairs
                .map(|(index, repair)| RepairOut {
                    id: repair.id,
                    what: &repair.what,
                    cost: card
                        .costs
                        .get(index)
                        .and_then(Option::as_ref)
                        .map(CostOut::of),
                })
                .collect(),
            cost: card.headline_cost().map(CostOut::of),
        }
    }
}

impl CostOut {
    fn of(cost: &Cost) -> Self {
        let change = |change: Change| ChangeOut {
            cape_jkg: change.cape.map(jkg),
            cin_jkg: change.cin.map(jkg),
        };
        Self {
            surface: change(cost.surface),
            mixed: change(cost.mixed),
            most_unstable: change(cost.most_unstable),
        }
    }
}

impl<'a> NoteOut<'a> {
    fn of(note: &'a Note, file: &str) -> Self {
        Self {
            place: match note.place {
                Place::File => json!({ "file": file }),
                Place::Line(line) => json!({ "line": line }),
                Place::Byte(byte) => json!({ "byte": byte }),
                Place::Level(level) => json!({ "level": level }),
            },
            what: &note.what,
            why: &note.why,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_rounded_and_what_is_no_number_is_null() {
        for (value, decimals, expected) in [
            (1850.3486, 2, "1850.35"),
            (-0.001, 2, "0.0"),
            (f64::NAN, 2, "null"),
            (f64::INFINITY, 2, "null"),
            (-42.5, 2, "-42.5"),
        ] {
            assert_eq!(
                serde_json::to_string(&Rounded(value, decimals)).unwrap(),
                expected
            );
        }
    }
}
