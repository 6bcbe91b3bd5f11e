//! `explain` and `weigh --all`, from outside.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use serde_json::Value;
use std::path::PathBuf;
use std::process::{Command, Output};

fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_dewbound-cli"))
        .args(arguments)
        .output()
        .unwrap()
}

fn out(arguments: &[&str]) -> String {
    let output = run(arguments);
    assert_eq!(output.status.code(), Some(0), "{output:?}");
    String::from_utf8(output.stdout).unwrap()
}

fn demo() -> String {
    let name = "vellmarsh-20240613-00z-columns.csv";
    let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../demo-soundings");
    folder.join(name).display().to_string()
}

/// All declarations as `explain --json` gives them.
fn declared() -> Vec<Value> {
    out(&["explain", "--json"])
        .lines()
        .map(|line| serde_json::from_str(line).unwrap())
        .collect()
}

#[test]
fn every_number_of_the_object_can_be_explained_and_the_other_way_round() {
    let line = out(&["weigh", "--json", "--all", &demo()]);
    let object: Value = serde_json::from_str(&line).unwrap();
    let numbers = object["numbers"].as_object().unwrap();
    let mut names: Vec<&str> = numbers.keys().map(String::as_str).collect();
    names.sort_unstable();
    assert_eq!(names, ["mixed", "most_unstable", "profile", "surface"]);
    let declared = declared();
    for (name, per_parcel) in [
        ("surface", true),
        ("mixed", true),
        ("most_unstable", true),
        ("profile", false),
    ] {
        let mut keys: Vec<&str> = declared
            .iter()
            .filter(|number| number["per_parcel"] == per_parcel)
            .map(|number| number["name"].as_str().unwrap())
            .collect();
        keys.sort_unstable();
        let mut found: Vec<&str> = numbers[name]
            .as_object()
            .unwrap()
            .keys()
            .map(String::as_str)
            .collect();
        found.sort_unstable();
        assert_eq!(found, keys, "{name}");
    }
    // The parcels' own object stays as it was.
    for name in ["surface", "mixed", "most_unstable"] {
        assert_eq!(
            object["parcels"][name]["cape_jkg"],
            numbers[name]["cape_jkg"]
        );
    }
}

#[test]
fn the_table_of_all_names_every_number_with_its_unit() {
    let text = out(&["weigh", "--all", &demo()]);
    for number in declared() {
        let label = number["label"].as_str().unwrap();
        let heading = match number["unit"].as_str().unwrap() {
            "" => label.to_owned(),
            unit => format!("{label}, {unit}"),
        };
        assert!(text.contains(&heading), "{heading}");
    }
    assert!(!out(&["weigh", &demo()]).contains("Composite indices"));
}

#[test]
fn a_number_is_explained_by_key_or_label() {
    let text = out(&["explain", "LCL_M"]);
    for part in [
        "LCL height, m (lcl_m)",
        "method: ",
        "source: ",
        "computed from: ",
        "absent when: ",
    ] {
        assert!(text.contains(part), "{part}: {text}");
    }
    assert_eq!(out(&["explain", "lcl height"]), text);
    let one: Value = serde_json::from_str(&out(&["explain", "--json", "cape"])).unwrap();
    assert_eq!(one["name"], "cape_jkg");
    assert_eq!(one["unit"], "J/kg");
    let list = out(&["explain"]);
    for number in declared() {
        assert!(list.contains(number["name"].as_str().unwrap()), "{list}");
    }
}

#[test]
fn a_slip_of_the_pen_is_met_with_what_comes_near() {
    let output = run(&["explain", "precipitabel water"]);
    assert_eq!(output.status.code(), Some(1));
    assert!(output.stdout.is_empty());
    let error = String::from_utf8(output.stderr).unwrap();
    assert!(error.contains("precipitable_water_mm"), "{error}");
}
