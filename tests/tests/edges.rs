//! The permitted edges between the crates of the house, all of them. Dependencies point downward only.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use std::collections::{BTreeMap, BTreeSet};

/// `(crate, crates it is built on)`; an edge also permits what those are built on.
const EDGES: &[(&str, &[&str])] = &[
    ("desk", &["session"]),
    ("cli", &["session"]),
    (
        "session",
        &["chart", "ledger", "bounds", "trust", "formats"],
    ),
    ("chart", &["sounding"]),
    ("ledger", &["sounding"]),
    ("bounds", &["trust"]),
    ("trust", &["sounding"]),
    ("formats", &["sounding"]),
    ("sounding", &["thermo"]),
    ("thermo", &[]),
];

/// Checks the house; may depend on any room of it.
const FREE: &str = "tests";

/// Crates that must never see the window's libraries.
const WINDOW: &[&str] = &["eframe", "egui", "egui_plot", "rfd", "winit", "wgpu"];

fn permitted(name: &str) -> BTreeSet<&'static str> {
    let direct: BTreeMap<_, _> = EDGES.iter().copied().collect();
    let mut reached = BTreeSet::new();
    let mut queue: Vec<&'static str> = direct.get(name).unwrap().to_vec();
    while let Some(next) = queue.pop() {
        if reached.insert(next) {
            queue.extend(direct.get(next).unwrap().iter());
        }
    }
    reached
}

#[test]
fn dependencies_point_downward_only() {
    let metadata = cargo_metadata::MetadataCommand::new()
        .manifest_path(concat!(env!("CARGO_MANIFEST_DIR"), "/../Cargo.toml"))
        .no_deps()
        .other_options(vec!["--offline".to_owned()])
        .exec()
        .expect("cargo metadata");
    let short = |name: &str| name.strip_prefix("dewbound-").map(str::to_owned);
    let mut seen = BTreeSet::new();
    for package in &metadata.packages {
        let name = short(&package.name).expect("every member is called dewbound-...");
        if name == FREE {
            continue;
        }
        assert!(
            EDGES.iter().any(|(known, _)| *known == name),
            "crate {name} has no row in the table of edges"
        );
        let allowed = permitted(&name);
        for dependency in &package.dependencies {
            if let Some(target) = short(&dependency.name) {
                assert!(
                    allowed.contains(target.as_str()),
                    "{name} -> {target} is not a permitted edge"
                );
            }
            assert!(
                name == "desk" || !WINDOW.contains(&dependency.name.as_str()),
                "{name} must not see the window library {}",
                dependency.name
            );
        }
        seen.insert(name);
    }
    let listed: BTreeSet<_> = EDGES.iter().map(|(name, _)| (*name).to_owned()).collect();
    assert_eq!(seen, listed, "the table lists the crates there are");
}
