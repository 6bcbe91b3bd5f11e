//! Every real file through what `weigh --json` prints: it loads, and every number is one.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::sounding::Parcel;
use dewbound_session::sounding::thermo::Ascent;
use dewbound_session::{Analysed, Document, Results, report};
use dewbound_tests::desk::{Desk, soundings_of};
use dewbound_tests::open_data;
use serde_json::Value;

/// The keys of an object are these and no others.
fn check_keys(place: &str, value: &Value, expected: &str) {
    let object = value.as_object();
    let object = object.unwrap_or_else(|| panic!("{place}: no object but {value}"));
    let mut found: Vec<&str> = object.keys().map(String::as_str).collect();
    let mut expected: Vec<&str> = expected.split_whitespace().collect();
    found.sort_unstable();
    expected.sort_unstable();
    assert_eq!(found, expected, "{place}");
}

fn number(value: &Value) -> f64 {
    let number = value
        .as_f64()
        .unwrap_or_else(|| panic!("no number but {value}"));
    assert!(number.is_finite());
    number
}

fn optional(value: &Value) -> Option<f64> {
    (!value.is_null()).then(|| number(value))
}

fn array(value: &Value) -> &[Value] {
    value
        .as_array()
        .unwrap_or_else(|| panic!("no list but {value}"))
}

fn check_cost(place: &str, cost: &Value) {
    if cost.is_null() {
        return;
    }
    check_keys(place, cost, "surface mixed most_unstable");
    for parcel in ["surface", "mixed", "most_unstable"] {
        check_keys(place, &cost[parcel], "cape_jkg cin_jkg");
        optional(&cost[parcel]["cape_jkg"]);
        optional(&cost[parcel]["cin_jkg"]);
    }
}

fn check_parcel(place: &str, parcel: &Value) {
    check_keys(
        place,
        parcel,
        "cape_jkg cin_jkg at_least lcl_hpa lcl_c lfc_hpa el_hpa theta_e_k start range",
    );
    let cape = number(&parcel["cape_jkg"]);
    assert!(cape >= 0.0, "{place}: CAPE {cape}");
    let cin = optional(&parcel["cin_jkg"]);
    assert!(cin.is_none_or(|cin| cin <= 0.0), "{place}: CIN {cin:?}");
    let (lfc, el) = (optional(&parcel["lfc_hpa"]), optional(&parcel["el_hpa"]));
    let at_least = parcel["at_least"].as_bool().unwrap();
    assert_eq!(
        cin.is_some(),
        lfc.is_some(),
        "{place}: CIN is counted to the LFC"
    );
    assert!(
        cape == 0.0 || lfc.is_some(),
        "{place}: CAPE {cape} without LFC"
    );
    assert!(
        el.is_some() == lfc.is_some() || at_least,
        "{place}: no EL, so CAPE is a lower limit"
    );
    check_keys(
        place,
        &parcel["start"],
        "pressure_hpa temperature_c dewpoint_c",
    );
    let start = &parcel["start"];
    let pressure = number(&start["pressure_hpa"]);
    assert!(
        number(&start["dewpoint_c"]) <= number(&start["temperature_c"]),
        "{place}"
    );
    let lcl = number(&parcel["lcl_hpa"]);
    number(&parcel["lcl_c"]);
    number(&parcel["theta_e_k"]);
    assert!(
        lcl <= pressure + 0.01,
        "{place}: LCL {lcl}, start {pressure}"
    );
    assert!(
        lfc.is_none_or(|lfc| lfc <= lcl + 0.01),
        "{place}: LFC {lfc:?}, LCL {lcl}"
    );
    assert!(
        lfc.zip(el).is_none_or(|(lfc, el)| el < lfc),
        "{place}: EL {el:?}, LFC {lfc:?}"
    );
    let range = &parcel["range"];
    if !range.is_null() {
        check_keys(place, range, "cape_jkg cin_jkg cin_absent_somewhere");
        let absent = range["cin_absent_somewhere"].as_bool();
        let absent = absent.unwrap_or_else(|| panic!("{place}: absent somewhere or not? {range}"));
        assert!(
            absent || !(range["cin_jkg"].is_null() || parcel["cin_jkg"].is_null()),
            "{place}: CIN absent unsaid"
        );
        for key in ["cape_jkg", "cin_jkg"] {
            if !range[key].is_null() {
                let ends: Vec<f64> = array(&range[key]).iter().map(number).collect();
                assert!(
                    ends.len() == 2 && ends[0] <= ends[1],
                    "{place}: {key} {ends:?}"
                );
                assert!(if key == "cape_jkg" {
                    ends[0] >= 0.0
                } else {
                    ends[1] <= 0.0
                });
            }
        }
    }
}

fn check_finding(place: &str, finding: &Value) {
    check_keys(
        place,
        finding,
        "rule grade bottom_hpa top_hpa evidence explains repairs cost",
    );
    let place = &format!("{place}, {}", finding["rule"]);
    assert!(!finding["rule"].as_str().unwrap().is_empty());
    let grade = finding["grade"].as_str().unwrap();
    assert!(
        ["informative", "doubtful", "erroneous"].contains(&grade),
        "{place}: {grade}"
    );
    let (bottom, top) = (
        optional(&finding["bottom_hpa"]),
        optional(&finding["top_hpa"]),
    );
    assert!(
        bottom.zip(top).is_none_or(|(bottom, top)| bottom >= top),
        "{place}"
    );
    for (key, value) in finding["evidence"].as_object().unwrap() {
        assert!(optional(value).is_some(), "{place}: {key}");
    }
    check_keys(place, &finding["explains"], "guilty innocent");
    for side in ["guilty", "innocent"] {
        assert!(
            !finding["explains"][side].as_str().unwrap().is_empty(),
            "{place}"
        );
    }
    let repairs = array(&finding["repairs"]);
    for repair in repairs {
        check_keys(place, repair, "id what cost");
        check_cost(place, &repair["cost"]);
    }
    check_cost(place, &finding["cost"]);
    // The headline is one of the repairs.
    assert!(
        finding["cost"].is_null()
            || repairs
                .iter()
                .any(|repair| repair["cost"] == finding["cost"]),
        "{place}"
    );
}

fn check_note(place: &str, note: &Value) {
    // `why` stands beside what schema 1 asks for.
    check_keys(place, note, "where what why");
    assert!(!note["what"].as_str().unwrap().is_empty(), "{place}");
    let place_of = note["where"].as_object().unwrap();
    assert_eq!(place_of.len(), 1, "{place}: {note}");
    let (kind, at) = place_of.iter().next().unwrap();
    match kind.as_str() {
        "line" | "byte" | "level" => assert!(at.is_u64(), "{place}: {note}"),
        // About the file as a whole.
        "file" => assert!(at.is_string(), "{place}: {note}"),
        _ => panic!("{place}: {note}"),
    }
}

fn check_object(place: &str, object: &Value) {
    check_keys(
        place,
        object,
        "schema source demo sounding parcels findings notes",
    );
    assert_eq!(object["schema"], 1, "{place}");
    // `parts` stands beside what schema 1 asks for: the digests a decision names.
    check_keys(place, &object["source"], "file index sha256 parts");
    assert_eq!(
        object["source"]["sha256"].as_str().map(str::len),
        Some(64),
        "{place}"
    );
    assert!(object["demo"].is_boolean(), "{place}");
    let sounding = &object["sounding"];
    check_keys(
        place,
        sounding,
        "station valid levels humidity_missing top_hpa",
    );
    let (levels, missing) = (&sounding["levels"], &sounding["humidity_missing"]);
    assert!(
        levels.as_u64().unwrap() >= missing.as_u64().unwrap(),
        "{place}"
    );
    if let Some(valid) = sounding["valid"].as_str() {
        valid.parse::<jiff::Timestamp>().unwrap();
        assert!(valid.ends_with('Z'), "{place}: {valid}");
    }
    optional(&sounding["top_hpa"]);
    check_keys(place, &object["parcels"], "surface mixed most_unstable");
    for name in ["surface", "mixed", "most_unstable"] {
        let parcel = &object["parcels"][name];
        if !parcel.is_null() {
            check_parcel(&format!("{place}, {name}"), parcel);
        }
    }
    for finding in array(&object["findings"]) {
        check_finding(place, finding);
    }
    for note in array(&object["notes"]) {
        check_note(place, note);
    }
}

/// A working dew point inside the interval has its numbers inside their ranges.
fn check_ranges(place: &str, results: &Results) {
    let Some(interval) = &results.doubt.interval else {
        return;
    };
    let Some(air) = results.working.profile.surface_air() else {
        return;
    };
    if !interval.contains(air.dewpoint) {
        return;
    }
    for parcel in Parcel::ALL {
        let Some(ascent): Option<&Ascent> = results.numbers.parcel(parcel) else {
            continue;
        };
        let range = results.doubt.range(parcel);
        let cape = range.cape.unwrap_or_else(|| panic!("{place}: no range"));
        assert!(
            (cape.least..=cape.most).contains(&ascent.cape),
            "{place}: {cape:?} {}",
            ascent.cape
        );
        assert!(
            cape.at_least || !ascent.at_least,
            "{place}: a limit loses its mark"
        );
        match (ascent.cin, range.cin) {
            (Some(value), Some(cin)) => {
                assert!(
                    (cin.least..=cin.most).contains(&value),
                    "{place}: {cin:?} {value}"
                );
            }
            (Some(_), None) => panic!("{place}: CIN without its range"),
            (None, _) => assert!(range.sometimes_no_free_convection, "{place}"),
        }
    }
}

/// Checks one sounding; true when it has numbers.
fn check(place: &str, analysed: &Analysed) -> bool {
    let results = Results::of(analysed, &Document::default());
    let line = report::json_line(analysed, &results).unwrap();
    assert!(!line.contains('\n'), "{place}");
    let object: Value = serde_json::from_str(&line).unwrap();
    check_object(place, &object);
    check_ranges(place, &results);
    // The table is made of the same and says the same caution.
    let table = report::table(analysed, &results);
    assert!(
        table.contains("official warnings and local procedures rule"),
        "{place}"
    );
    assert!(
        !table.contains("NaN") && !table.contains("inf "),
        "{place}: {table}"
    );
    // There are numbers when a level has both, and another above it a temperature.
    let levels = &analysed.sounding.levels;
    let complete = levels
        .iter()
        .any(|level| level.temperature.is_some() && level.dewpoint.is_some());
    let has_numbers = results.numbers.problem.is_none();
    assert!(complete || !has_numbers, "{place}: numbers out of nothing");
    assert!(
        !complete || has_numbers,
        "{place}: {:?}",
        results.numbers.problem
    );
    has_numbers
}

#[test]
fn the_demo_tray_is_weighed_by_the_keys_of_schema_1() {
    let desk = Desk::demo().unwrap();
    for item in desk.session.items() {
        assert!(check(item.sounding().station.label(), item.analysed()));
    }
}

#[test]
fn every_real_file_loads_and_every_number_is_one() {
    let Some(folder) = open_data::folder("every real file weighed") else {
        return;
    };
    let (mut files, mut count, mut with_numbers) = (0, 0, 0);
    for path in open_data::files(&folder).unwrap() {
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let soundings =
            soundings_of(&path).unwrap_or_else(|failure| panic!("{}", failure.line(&name)));
        assert!(!soundings.is_empty(), "{name}");
        files += 1;
        for (index, analysed) in soundings.iter().enumerate() {
            assert!(!analysed.sounding.demo, "{name}");
            assert_eq!(analysed.sounding.source.index, index, "{name}");
            with_numbers += usize::from(check(&format!("{name}, {index}"), analysed));
            count += 1;
        }
    }
    println!("{files} files, {count} soundings, {with_numbers} with numbers");
    // One of the station files holds winds only, 130 ascents of them.
    assert!(files >= 37 && count >= 170 && with_numbers >= 47);
}
