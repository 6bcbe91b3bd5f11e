//! The built program, from its outside.
#![allow(clippy::unwrap_used, clippy::expect_used)]

use serde_json::Value;
use std::fs;
use std::io::{Read, Write};
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use tempfile::TempDir;

/// A dry-adiabatic layer with a moist-reading surface under a cap, by day.
const VALE: &str = "\
# station: Upper Vale
# wmo: 99001
# time: 2031-06-14T22:00:00Z
# position: 41.0, -146.0, 400
pressure_hpa,temperature_c,dewpoint_c
965,31.2,20.0
950,28.9,15.9
925,26.6,15.5
900,24.2,15.1
875,21.8,14.7
850,19.4,14.2
830,17.3,13.9
800,22.4,2.0
700,12.6,-6.0
500,-8.9,-28.0
400,-22.5,-38.0
300,-39.2,-52.0
200,-58.0,-70.0
100,-64.0,-88.0
";

fn program() -> Command {
    Command::new(env!("CARGO_BIN_EXE_dewbound-cli"))
}

fn run(arguments: &[&str]) -> Output {
    program().args(arguments).output().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn file(folder: &TempDir, name: &str, text: &str) -> String {
    let path = folder.path().join(name);
    fs::write(&path, text).unwrap();
    path.display().to_string()
}

fn demo(name: &str) -> String {
    let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../demo-soundings");
    folder.join(name).display().to_string()
}

fn objects(output: &Output) -> Vec<Value> {
    out(output)
        .lines()
        .map(|line| serde_json::from_str(line).unwrap())
        .collect()
}

fn one(arguments: &[&str]) -> Value {
    let output = run(arguments);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    let mut objects = objects(&output);
    assert_eq!(objects.len(), 1);
    objects.remove(0)
}

/// The keys of an object, in alphabetical order.
fn keys(value: &Value) -> Vec<&str> {
    let mut keys: Vec<&str> = value
        .as_object()
        .unwrap()
        .keys()
        .map(String::as_str)
        .collect();
    keys.sort_unstable();
    keys
}

fn number(value: &Value, pointer: &str) -> f64 {
    value
        .pointer(pointer)
        .and_then(Value::as_f64)
        .unwrap_or_else(|| panic!("no number at {pointer} in {value}"))
}

#[test]
fn the_object_has_the_keys_of_schema_1_and_no_others() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(&folder, "vale.csv", VALE);
    let object = one(&["weigh", "--json", &path]);
    assert_eq!(
        keys(&object),
        [
            "demo", "findings", "notes", "parcels", "schema", "sounding", "source"
        ]
    );
    assert_eq!(object["schema"], 1);
    assert_eq!(object["demo"], false);
    assert_eq!(
        keys(&object["source"]),
        ["file", "index", "parts", "sha256"]
    );
    assert_eq!(object["source"]["index"], 0);
    assert_eq!(object["source"]["file"], Value::String(path));
    let digest = object["source"]["sha256"].as_str().unwrap();
    assert_eq!(digest.len(), 64);
    assert_eq!(object["source"]["parts"], serde_json::json!([digest]));
    let sounding = &object["sounding"];
    assert_eq!(
        keys(sounding),
        ["humidity_missing", "levels", "station", "top_hpa", "valid"]
    );
    assert_eq!(sounding["station"], "wmo:99001");
    assert_eq!(sounding["valid"], "2031-06-14T22:00:00Z");
    assert_eq!(
        (&sounding["levels"], &sounding["humidity_missing"]),
        (&14.into(), &0.into())
    );
    assert_eq!(number(sounding, "/top_hpa"), 100.0);
    assert_eq!(
        keys(&object["parcels"]),
        ["mixed", "most_unstable", "surface"]
    );
    for name in ["surface", "mixed", "most_unstable"] {
        let parcel = &object["parcels"][name];
        assert_eq!(
            keys(parcel),
            [
                "at_least",
                "cape_jkg",
                "cin_jkg",
                "el_hpa",
                "lcl_c",
                "lcl_hpa",
                "lfc_hpa",
                "range",
                "start",
                "theta_e_k"
            ]
        );
        assert_eq!(
            keys(&parcel["start"]),
            ["dewpoint_c", "pressure_hpa", "temperature_c"]
        );
        assert_eq!(
            keys(&parcel["range"]),
            ["cape_jkg", "cin_absent_somewhere", "cin_jkg"]
        );
        assert!(parcel["range"]["cin_absent_somewhere"].is_boolean());
        let (cape, least, most) = (
            number(parcel, "/cape_jkg"),
            number(parcel, "/range/cape_jkg/0"),
            number(parcel, "/range/cape_jkg/1"),
        );
        assert!(
            0.0 <= least && least <= cape && cape <= most,
            "{name}: {least} {cape} {most}"
        );
        let (strongest, weakest) = (
            number(parcel, "/range/cin_jkg/0"),
            number(parcel, "/range/cin_jkg/1"),
        );
        assert!(
            strongest <= weakest && weakest <= 0.0,
            "{name}: {strongest} {weakest}"
        );
        assert_eq!(parcel["at_least"], false);
    }
    assert_eq!(number(&object, "/parcels/surface/start/dewpoint_c"), 20.0);
    let finding = object["findings"]
        .as_array()
        .unwrap()
        .iter()
        .find(|f| f["rule"] == "moisture-slope")
        .unwrap();
    assert_eq!(
        keys(finding),
        [
            "bottom_hpa",
            "cost",
            "evidence",
            "explains",
            "grade",
            "repairs",
            "rule",
            "top_hpa"
        ]
    );
    assert_eq!(keys(&finding["explains"]), ["guilty", "innocent"]);
    assert!(
        finding["evidence"]
            .as_object()
            .unwrap()
            .values()
            .all(Value::is_number)
    );
    let repairs = finding["repairs"].as_array().unwrap();
    assert_eq!(repairs.len(), 2);
    for repair in repairs {
        assert_eq!(keys(repair), ["cost", "id", "what"]);
        assert_eq!(keys(&repair["cost"]), ["mixed", "most_unstable", "surface"]);
        assert_eq!(keys(&repair["cost"]["mixed"]), ["cape_jkg", "cin_jkg"]);
    }
    // The headline is the repair with the largest change.
    let size = |cost: &Value| {
        ["surface", "mixed", "most_unstable"]
            .map(|name| cost[name]["cape_jkg"].as_f64().unwrap().abs())
            .into_iter()
            .fold(0.0, f64::max)
    };
    let largest = repairs
        .iter()
        .map(|repair| size(&repair["cost"]))
        .fold(0.0, f64::max);
    assert_eq!(size(&finding["cost"]), largest);
}

#[test]
fn a_set_surface_moves_the_numbers_and_not_the_findings() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(&folder, "vale.csv", VALE);
    let received = one(&["weigh", "--json", &path]);
    let set = one(&[
        "weigh",
        "--json",
        "--dewpoint-c",
        "16.0",
        "--temperature-c=30.5",
        "--reach",
        "level",
        &path,
    ]);
    assert_eq!(number(&set, "/parcels/surface/start/dewpoint_c"), 16.0);
    assert_eq!(number(&set, "/parcels/surface/start/temperature_c"), 30.5);
    assert!(
        number(&set, "/parcels/surface/cape_jkg")
            < number(&received, "/parcels/surface/cape_jkg") - 500.0
    );
    let seen = |object: &Value| -> Vec<Value> {
        let findings = object["findings"].as_array().unwrap();
        findings
            .iter()
            .map(|f| serde_json::json!([f["rule"], f["grade"], f["bottom_hpa"], f["evidence"]]))
            .collect()
    };
    assert_eq!(seen(&set), seen(&received));
    assert_eq!(set["sounding"], received["sounding"]);
    // The reach is what says how much of the mixed layer follows.
    let mixed = |reach: &str| {
        let object = one(&[
            "weigh",
            "--json",
            "--dewpoint-c",
            "18",
            "--reach",
            reach,
            &path,
        ]);
        number(&object, "/parcels/mixed/start/dewpoint_c")
    };
    let (level, tapered, whole) = (mixed("level"), mixed("tapered"), mixed("mixed"));
    // 2 K less at the ground: near it only, fading out through the layer (so the layer dries), or 18 °C's mixing ratio, which
    // is more than the layer had, throughout.
    assert!(
        tapered < level && level < whole,
        "{level} {tapered} {whole}"
    );
    // Not a value above the temperature, and not silently.
    let output = run(&["weigh", "--json", "--dewpoint-c", "40", &path]);
    assert!(!err(&output).is_empty());
    let start = number(&objects(&output)[0], "/parcels/surface/start/dewpoint_c");
    assert!(start <= 31.2, "{start}");
}

#[test]
fn absent_is_null() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(
        &folder,
        "dry.csv",
        "pressure_hpa,temperature_c,dewpoint_c\n1000,20,\n900,14,\n500,-12,\n",
    );
    let object = one(&["weigh", "--json", &path]);
    assert_eq!(
        object["parcels"],
        serde_json::json!({"surface": null, "mixed": null, "most_unstable": null})
    );
    assert_eq!(
        (&object["sounding"]["station"], &object["sounding"]["valid"]),
        (&Value::Null, &Value::Null)
    );
    assert_eq!(object["sounding"]["humidity_missing"], 3);
    // Stable and moist: parcels, but no free convection.
    let path = file(
        &folder,
        "stable.csv",
        "pressure_hpa,temperature_c,dewpoint_c\n1000,5,-5\n900,8,-10\n500,-5,-30\n100,-50,-80\n",
    );
    let object = one(&["weigh", "--json", &path]);
    let surface = &object["parcels"]["surface"];
    assert_eq!(number(surface, "/cape_jkg"), 0.0);
    for key in ["cin_jkg", "lfc_hpa", "el_hpa"] {
        assert_eq!(surface[key], Value::Null, "{key}");
    }
    assert_eq!(surface["range"]["cin_jkg"], Value::Null);
    assert_eq!(surface["range"]["cin_absent_somewhere"], true);
}

#[test]
fn exit_codes_and_streams() {
    let folder = tempfile::tempdir().unwrap();
    let good = file(&folder, "vale.csv", VALE);
    let bad = file(&folder, "list.csv", "colour,taste\nred,sweet\n");
    let absent = folder.path().join("absent.txt").display().to_string();

    let output = run(&["weigh", "--json", &good]);
    assert_eq!(
        (output.status.code(), err(&output)),
        (Some(0), String::new())
    );

    // What can be read is weighed all the same.
    let output = run(&["weigh", "--json", &bad, &good, &absent]);
    assert_eq!(output.status.code(), Some(1));
    assert_eq!(objects(&output).len(), 1);
    let told = err(&output);
    assert!(
        told.contains("list.csv") && told.contains("pressure_hpa") && told.contains("colour"),
        "{told}"
    );
    assert!(told.contains("absent.txt"), "{told}");
    assert_eq!(told.matches("list.csv").count(), 1, "named once: {told}");

    for wrong in [
        &["weigh"][..],
        &["weigh", "--reach", "far", &good],
        &["weigh", "--dewpoint-c", "moist", &good],
        &["weigh", "--dewpoint-c", "400", &good],
        &["weigh", "--as-of", "yesterday", &good],
        &["weigh", "--sideways", &good],
        &["bake"],
        &[],
    ] {
        let output = run(wrong);
        assert_eq!(output.status.code(), Some(2), "{wrong:?}");
        assert!(output.stdout.is_empty(), "{wrong:?}");
        assert!(!output.stderr.is_empty(), "{wrong:?}");
    }
    // A table that can't be used is no reason to answer with other numbers than those asked for.
    let output = run(&["weigh", "--thresholds", &bad, &good]);
    assert_eq!(
        (output.status.code(), out(&output)),
        (Some(1), String::new())
    );
    assert!(err(&output).contains("list.csv") && err(&output).contains("Nothing was weighed"));
    // Each line of what is wrong says in which file; rows that can be used are.
    let table = file(
        &folder,
        "table.csv",
        "wmo,name,lat,lon,elevation_m\n99002,A,95,10,1\n99003,B,40,500,1\n99001,Nether Vale,41,-146,400\n",
    );
    let output = run(&["weigh", "--stations", &table, &good]);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    assert!(out(&output).starts_with("Upper Vale"));
    let told = err(&output);
    assert!(
        told.lines().count() == 3 && told.lines().all(|line| line.starts_with(&table)),
        "{told}"
    );
    let empty = file(&folder, "empty.csv", "\n");
    let output = run(&["weigh", "--stations", &empty, &good]);
    assert_eq!(output.status.code(), Some(1));
    assert!(err(&output).contains("the station table is empty"));
}

#[test]
fn a_bad_bulletin_in_a_readable_file_is_a_note() {
    let text = fs::read_to_string(demo("brennick-flats-20240613-00z-temp.txt")).unwrap();
    let folder = tempfile::tempdir().unwrap();
    let path = file(
        &folder,
        "two-20240613.txt",
        &format!("TTAA 63001 xxxxx yyyyy zzzzz=\n{text}"),
    );
    let output = run(&["weigh", "--json", &path]);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    let objects = objects(&output);
    let good = objects
        .iter()
        .find(|object| object["sounding"]["station"] == "wmo:00101")
        .unwrap();
    assert!(number(good, "/parcels/surface/cape_jkg") > 0.0);
    let notes = objects
        .iter()
        .map(|object| object["notes"].as_array().unwrap().len())
        .sum::<usize>();
    assert!(notes > 0 || !err(&output).is_empty(), "the bad one is told");
    for note in good["notes"].as_array().unwrap() {
        assert_eq!(keys(note), ["what", "where", "why"]);
        let place = keys(&note["where"]);
        assert!(
            matches!(place[..], ["line" | "byte" | "level" | "file"]),
            "{note}"
        );
    }
}

#[test]
fn several_parts_have_one_digest_and_the_list() {
    let object = one(&[
        "weigh",
        "--json",
        &demo("brennick-flats-20240613-00z-temp.txt"),
    ]);
    let parts = object["source"]["parts"].as_array().unwrap();
    assert_eq!(parts.len(), 4, "A to D");
    assert!(!parts.contains(&object["source"]["sha256"]));
    assert_eq!(object["demo"], true, "known by its content");
    assert_eq!(object["sounding"]["valid"], "2024-06-13T00:00:00Z");
}

#[test]
fn folders_and_standard_input_are_weighed() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["b.csv", "a.csv"] {
        file(&folder, name, VALE);
    }
    file(&folder, "stations.csv", "wmo,name,lat,lon\n");
    let output = run(&["weigh", "--json", &folder.path().display().to_string()]);
    assert_eq!(output.status.code(), Some(0), "{}", err(&output));
    let files: Vec<String> = objects(&output)
        .iter()
        .map(|object| {
            Path::new(object["source"]["file"].as_str().unwrap())
                .file_name()
                .unwrap()
                .to_string_lossy()
                .into_owned()
        })
        .collect();
    assert_eq!(files, ["a.csv", "b.csv"]);
    assert!(err(&output).contains("station table"));

    let mut child = program()
        .args(["weigh", "--json", "-"])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .unwrap();
    child
        .stdin
        .take()
        .unwrap()
        .write_all(VALE.as_bytes())
        .unwrap();
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    assert_eq!(objects(&output)[0]["sounding"]["station"], "wmo:99001");
}

#[test]
fn the_station_table_fills_in_what_the_message_lacks() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(
        &folder,
        "vale.csv",
        &VALE.replace("# position: 41.0, -146.0, 400\n", ""),
    );
    let table = file(
        &folder,
        "table.csv",
        "wmo,name,lat,lon,elevation_m\n99001,Nether Vale,41,-146,400\n",
    );
    let without = out(&run(&["weigh", &path]));
    assert!(
        without.contains("day or night not known")
            && without.contains("no position (add the station to stations.csv)"),
        "{without}"
    );
    let with = out(&run(&["weigh", "--stations", &table, &path]));
    assert!(!with.contains("day or night not known"), "{with}");
}

#[test]
fn day_and_hour_are_nearest_in_the_past_to_the_date_given() {
    let text = fs::read_to_string(demo("hathwyn-20240613-00z-temp.txt")).unwrap();
    let folder = tempfile::tempdir().unwrap();
    // One more line, so that it is no longer the demo file, and a name without a date.
    let path = file(&folder, "bulletin.txt", &format!("\n{text}"));
    let object = one(&["weigh", "--json", "--as-of", "2022-03-05", &path]);
    assert_eq!(object["sounding"]["valid"], "2022-02-13T00:00:00Z");
    assert_eq!(object["demo"], false);
}

#[test]
fn a_reader_that_has_had_enough_is_no_error() {
    let demo = demo("");
    for arguments in [
        &["weigh", "--json", &demo][..],
        &["weigh", &demo],
        &["rules"],
    ] {
        let mut child = program()
            .args(arguments)
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        let mut stdout = child.stdout.take().unwrap();
        let mut first = [0_u8; 8];
        stdout.read_exact(&mut first).unwrap();
        drop(stdout);
        let output = child.wait_with_output().unwrap();
        assert_eq!(
            output.status.code(),
            Some(0),
            "{arguments:?}: {}",
            err(&output)
        );
        assert!(!err(&output).contains("pipe"), "{}", err(&output));
    }
}

#[test]
fn the_table_for_people_has_the_numbers_with_range_the_findings_with_cost_and_the_caution() {
    let text = out(&run(&[
        "weigh",
        &demo("vellmarsh-20240613-00z-columns.csv"),
    ]));
    assert!(
        text.starts_with("INVENTED DATA\nVellmarsh (wmo 00112), 2024-06-13 00:00 UTC"),
        "{text}"
    );
    let object = one(&[
        "weigh",
        "--json",
        &demo("vellmarsh-20240613-00z-columns.csv"),
    ]);
    let row = |label: &str| {
        text.lines()
            .find(|line| line.starts_with(label))
            .unwrap_or_else(|| panic!("no {label} in {text}"))
    };
    let rounded = |pointer: &str| format!("{:.0}", number(&object, pointer));
    for name in ["surface", "mixed", "most_unstable"] {
        assert!(
            row("CAPE").contains(&rounded(&format!("/parcels/{name}/cape_jkg"))),
            "{name}"
        );
        let range = format!(
            "{} to {}",
            rounded(&format!("/parcels/{name}/range/cape_jkg/0")),
            rounded(&format!("/parcels/{name}/range/cape_jkg/1"))
        );
        assert!(row("  in range").contains(&range), "{name}: {range}");
    }
    assert!(
        text.contains("[moisture-slope]")
            && text.contains("if wrong: ")
            && text.contains("if real: ")
    );
    assert!(text.contains("CAPE −"), "a real minus sign: {text}");
    assert!(
        text.trim_end()
            .ends_with("official warnings and local procedures rule.")
    );
    // A lower limit is shown as one.
    let text = out(&run(&[
        "weigh",
        &demo("tamsel-creek-20240613-00z-columns.csv"),
    ]));
    assert!(
        text.lines()
            .any(|line| line.starts_with("CAPE") && line.matches('≥').count() == 3),
        "{text}"
    );
}

#[test]
fn wind_only_takes_a_line_and_not_a_table() {
    let folder = tempfile::tempdir().unwrap();
    let path = file(
        &folder,
        "winds.csv",
        "# time: 2031-06-14T22:00:00Z\npressure_hpa,wind_dir_deg,wind_speed_kt\n1000,180,10\n850,200,20\n700,220,30\n",
    );
    let text = out(&run(&["weigh", &path]));
    assert!(
        text.contains("wind only, 3 levels: no temperature, so no parcels\n"),
        "{text}"
    );
    assert!(
        !text.contains("CAPE") && !text.contains("parcel until") && !text.contains("day or night"),
        "{text}"
    );
}

#[test]
fn the_long_help_says_what_the_object_holds() {
    let text = out(&run(&["weigh", "--help"]));
    let folder = tempfile::tempdir().unwrap();
    let object = one(&["weigh", "--json", &file(&folder, "vale.csv", VALE)]);
    for key in keys(&object).into_iter().filter(|key| *key != "schema") {
        assert!(
            text.lines()
                .any(|line| line.starts_with(&format!("  {key} "))),
            "{key}: {text}"
        );
    }
    for key in keys(&object["parcels"]["surface"]["range"]) {
        assert!(text.contains(key), "{key}: {text}");
    }
    for place in ["line", "byte", "level", "file"] {
        assert!(text.contains(&format!("{{\"{place}\":")), "{place}: {text}");
    }
}

#[test]
fn the_rules_are_listed_with_source_and_thresholds() {
    let text = out(&run(&["rules"]));
    let objects = objects(&run(&["rules", "--json"]));
    assert!(objects.len() >= 8);
    for object in objects {
        assert_eq!(
            keys(&object),
            ["about", "rule", "source", "thresholds", "title"]
        );
        assert!(text.contains(object["rule"].as_str().unwrap()));
        assert!(!object["source"].as_str().unwrap().is_empty());
    }
}
