//! Each demo sounding, opened as the program opens it, tells its story: first card and main numbers.
//!
//! Expected values are what the generator put into the atmosphere (`src/demo/stories.rs`), as inequalities.

#![allow(clippy::unwrap_used, clippy::expect_used)]

use dewbound_session::sounding::Parcel;
use dewbound_session::sounding::thermo::Ascent;
use dewbound_session::trust::{Cost, Finding, Grade};
use dewbound_session::{Card, Item, SurfaceQuantity, report};
use dewbound_tests::desk::{Desk, first_rule};

/// One demo sounding at a desk of its own.
struct Story(Desk, String);

fn story(station: &str) -> Story {
    Story(Desk::demo().unwrap(), station.to_owned())
}

impl Story {
    fn item(&self) -> &Item {
        let mut items = self.0.session.items().iter();
        items
            .find(|item| item.sounding().station.label() == self.1)
            .unwrap()
    }

    fn first(&self) -> (&Finding, &Card) {
        let index = self.item().results().order[0];
        (
            &self.item().findings()[index],
            &self.item().results().cards[index],
        )
    }

    fn ascent(&self, parcel: Parcel) -> &Ascent {
        self.item().results().numbers.parcel(parcel).unwrap()
    }

    fn no_doubts(&self) {
        let doubts: Vec<String> = self
            .item()
            .findings()
            .iter()
            .filter(|finding| finding.grade > Grade::Informative)
            .map(Finding::key)
            .collect();
        assert!(doubts.is_empty(), "{}: {doubts:?}", self.1);
    }
}

fn cost(card: &Card, repair: usize) -> &Cost {
    card.costs[repair].as_ref().unwrap()
}

fn cape_change(card: &Card, repair: usize, parcel: Parcel) -> f64 {
    cost(card, repair).parcel(parcel).cape.unwrap()
}

#[test]
fn all_are_marked_as_invented_everywhere() {
    let desk = Desk::demo().unwrap();
    assert_eq!(desk.session.items().len(), 9);
    for item in desk.session.items() {
        assert!(item.demo());
        let line = report::json_line(item.analysed(), item.results()).unwrap();
        let object: serde_json::Value = serde_json::from_str(&line).unwrap();
        assert_eq!(object["demo"], true);
        let table = report::table(item.analysed(), item.results());
        assert!(table.starts_with("INVENTED DATA\n"), "{table}");
        assert!(item.copy_line().starts_with("INVENTED DATA "));
    }
    assert!(desk.session.tray().iter().all(|row| row.demo));
}

#[test]
fn vellmarsh_has_a_screen_that_reads_too_moist() {
    let story = story("Vellmarsh");
    let (finding, card) = story.first();
    assert_eq!(
        (finding.rule, finding.grade),
        ("moisture-slope", Grade::Doubtful)
    );
    // Made with a true dew point of 16.4 °C at the ground and a screen 3.8 K too moist.
    let implied = finding.evidence("implied_dewpoint_c");
    let candidates = &story.item().results().doubt.candidates;
    assert!(
        candidates.iter().any(|candidate| candidate
            .dewpoint
            .is_some_and(|td| (td.c() - 16.4).abs() < 1.0)),
        "{implied:?} {candidates:?}"
    );
    let reported = story
        .item()
        .received_surface(SurfaceQuantity::Dewpoint)
        .unwrap();
    assert!((reported.c() - 20.2).abs() < 0.3);
    // Common practice, no source: a few degrees can exceed 1,000 J/kg.
    assert!(cape_change(card, 0, Parcel::Surface) < -1000.0);
    // The two repairs are opposite: one brings the surface down, the other the layer up.
    assert!(cape_change(card, 1, Parcel::Mixed) > 1000.0);
    let surface = story.item().results().doubt.ranges[0].cape.unwrap();
    assert!(surface.most - surface.least > 1500.0);
}

#[test]
fn sandrel_has_a_wet_thermometer_above_its_cloud_deck() {
    let story = story("Sandrel");
    let (finding, card) = story.first();
    assert_eq!(finding.rule, "wet-thermometer");
    // The deck ends 3,050 m above sea level.
    let (bottom, top) = finding.heights.unwrap();
    assert!(
        (bottom - 3050.0).abs() < 100.0 && top > 3050.0,
        "{bottom} {top}"
    );
    // Air read too cold aloft makes too much CAPE: bridging the temperature takes some of it away.
    let headline = card.headline.unwrap();
    assert!(cape_change(card, headline, Parcel::MostUnstable) < 0.0);
    assert!(finding.repairs.len() >= 2, "RH kept and w kept");
}

#[test]
fn orlo_ridge_has_moisture_that_slopes_evenly() {
    let story = story("Orlo Ridge");
    let (finding, card) = story.first();
    assert_eq!(finding.rule, "moisture-slope");
    assert!(finding.summary.contains("evenly"), "{}", finding.summary);
    assert!(finding.innocent.to_lowercase().contains("entrainment"));
    assert!(cape_change(card, 0, Parcel::Surface) < 0.0);
    assert!(cape_change(card, 1, Parcel::Mixed) > 0.0);
    assert!(
        story.ascent(Parcel::Surface).cape > story.ascent(Parcel::Mixed).cape + 500.0,
        "where moisture slopes, surface and mixed parcel part"
    );
}

#[test]
fn tamsel_creek_was_lost_in_an_anvil() {
    let story = story("Tamsel Creek");
    let (finding, card) = story.first();
    // Design: an early end is never erroneous.
    assert_eq!(
        (finding.rule, finding.grade),
        ("early-end", Grade::Doubtful)
    );
    assert!(
        card.headline_cost().is_none(),
        "what is missing has no price"
    );
    // The balloon is lost at 8,950 m.
    let top = story
        .item()
        .received()
        .height
        .iter()
        .rev()
        .find_map(|h| *h)
        .unwrap();
    assert!((top - 8950.0).abs() < 60.0, "{top}");
    for parcel in Parcel::ALL {
        let ascent = story.ascent(parcel);
        assert!(ascent.at_least && ascent.el.is_none() && ascent.cape > 1000.0);
    }
    assert!(story.item().copy_line().contains("≥ "));
}

#[test]
fn brennick_flats_is_clean_and_unstable() {
    let story = story("Brennick Flats");
    story.no_doubts();
    let surface = story.ascent(Parcel::Surface);
    assert!(surface.cape > 2000.0 && surface.cin.unwrap() > -50.0 && !surface.at_least);
}

#[test]
fn hathwyn_has_a_deep_dry_mixed_layer() {
    let story = story("Hathwyn");
    story.no_doubts();
    let surface = story.ascent(Parcel::Surface);
    // 3,450 m of mixed layer: the condensation level is near its top.
    assert!(surface.start.pressure.hpa() - surface.lcl.pressure.hpa() > 250.0);
    assert!(surface.start.temperature.k() - surface.start.dewpoint.k() > 25.0);
}

#[test]
fn corriden_field_is_capped() {
    let story = story("Corriden Field");
    story.no_doubts();
    let surface = story.ascent(Parcel::Surface);
    assert!(surface.cape > 2000.0 && surface.cin.unwrap() < -100.0);
    assert!(
        story
            .item()
            .results()
            .which_parcel
            .contains("surface inhibited")
    );
}

#[test]
fn lowmere_gap_is_unstable_aloft_only() {
    let story = story("Lowmere Gap");
    story.no_doubts();
    let results = story.item().results();
    assert!(
        results
            .numbers
            .surface
            .as_ref()
            .is_none_or(|surface| surface.cape < 50.0)
    );
    let unstable = story.ascent(Parcel::MostUnstable);
    // The moist layer lies above 800 m of stable air.
    let ground = story.item().received().surface_pressure().unwrap();
    assert!(ground.hpa() - unstable.start.pressure.hpa() > 70.0);
    assert!(unstable.cape > 1000.0);
    assert!(
        results
            .which_parcel
            .contains("the surface doubt doesn't reach it"),
        "{}",
        results.which_parcel
    );
}

#[test]
fn dunmerrow_has_sent_its_first_part_only() {
    let story = story("Dunmerrow");
    let notes: Vec<&str> = story
        .item()
        .notes()
        .iter()
        .map(|note| note.what.as_str())
        .collect();
    assert!(
        notes
            .iter()
            .any(|note| note.contains("B, C, D not received")),
        "{notes:?}"
    );
    // Not received is not lost: no doubt is cast on the ascent.
    story.no_doubts();
    assert_ne!(first_rule(story.item()), Some("wet-thermometer"));
}
