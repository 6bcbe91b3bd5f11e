//! The storm motion and the wind numbers in words.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::{Desk, moist_surface};
use dewbound_session::chart::SpeedUnit;
use dewbound_session::thermo::{Vector, WindNumbers};
use dewbound_session::{Action, Command, Item, Session, no_winds, wind_lines, winds_as_text};
use std::fmt::Write;

/// Veering winds from the ground up, a level a kilometre.
fn windy(top_km: u32) -> String {
    let mut text = "# station: Upper Vale\n# wmo: 99002\n# time: 2031-06-14T22:00:00Z\n\
                    # position: 41.0, -146.0, 400\n\
                    pressure_hpa,height_m,temperature_c,dewpoint_c,wind_dir_deg,wind_speed_ms\n"
        .to_owned();
    for km in 0..=top_km {
        let z = f64::from(km);
        let hpa = 960.0 * (-z / 8.2).exp();
        let (t, td) = (30.0 - 6.8 * z, 18.0 - 7.5 * z);
        let (direction, speed) = (150.0 + 100.0 * (z / 8.0).min(1.0), 6.0 + 3.0 * z);
        writeln!(
            text,
            "{hpa:.1},{:.0},{t:.1},{td:.1},{direction:.0},{speed:.1}",
            400.0 + 1000.0 * z
        )
        .unwrap();
    }
    text
}

fn desk(text: &str) -> Desk {
    let mut desk = Desk::new();
    desk.add("winds.csv", text);
    desk
}

fn item(session: &Session) -> &Item {
    session.current().unwrap()
}

fn winds(session: &Session) -> WindNumbers {
    item(session).results().further.winds
}

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() < 1e-6 * b.abs().max(1.0)
}

#[test]
fn helicity_follows_the_motion() {
    let mut desk = desk(&windy(10));
    let session = &mut desk.session;
    let estimate = winds(session);
    let before = estimate.motion_used.unwrap();
    assert_eq!(Some(before), estimate.motion.map(|motion| motion.right));
    for set in [
        Vector { u: 3.0, v: -4.0 },
        Vector { u: 20.0, v: 11.0 },
        Vector::default(),
    ] {
        session.apply(Command::SetStormMotion(Some(set)));
        let now = winds(session);
        assert_eq!(now.motion_used, Some(set));
        assert_eq!(now.motion, estimate.motion, "the estimate stays");
        // Storm-relative helicity is linear in the motion (Davies-Jones et al. 1990): moving the storm by c adds the
        // vector product of c and the wind difference of the layer.
        for (was, is, difference) in [
            (
                estimate.helicity_0_to_1km,
                now.helicity_0_to_1km,
                estimate.difference_0_to_1km,
            ),
            (
                estimate.helicity_0_to_3km,
                now.helicity_0_to_3km,
                estimate.difference_0_to_3km,
            ),
        ] {
            let change = (set - before).cross(difference.unwrap());
            assert!(
                close(is.unwrap(), was.unwrap() + change),
                "{is:?}, {was:?} + {change}"
            );
        }
        // From nothing it comes out the same.
        let afresh =
            dewbound_session::Results::of(item(session).analysed(), item(session).document());
        assert_eq!(afresh.further, item(session).results().further);
    }
    session.apply(Command::SetStormMotion(None));
    assert_eq!(winds(session), estimate);
    assert!(item(session).document().is_untouched());
}

#[test]
fn a_drag_of_the_motion_is_one_step_and_can_be_given_up() {
    let mut desk = desk(&windy(10));
    let session = &mut desk.session;
    let estimate = winds(session);
    session.apply(Command::BeginGesture);
    for u in [5.0, 6.0, 7.0] {
        session.apply(Command::SetStormMotion(Some(Vector { u, v: 1.0 })));
        assert_eq!(winds(session).motion_used, Some(Vector { u, v: 1.0 }));
    }
    session.apply(Command::EndGesture);
    let dragged = winds(session);
    session.apply(Command::Undo);
    assert_eq!(winds(session), estimate);
    session.apply(Command::Redo);
    assert_eq!(winds(session), dragged);
    session.apply(Command::BeginGesture);
    session.apply(Command::SetStormMotion(Some(Vector { u: 1.0, v: 1.0 })));
    session.apply(Command::CancelGesture);
    assert_eq!(winds(session), dragged);
}

#[test]
fn nudges_start_from_the_estimate_and_a_key_held_down_is_one_step() {
    let mut desk = desk(&windy(10));
    let session = &mut desk.session;
    let start = winds(session).motion_used.unwrap();
    let by = Vector { u: 0.5, v: 0.0 };
    for repeat in [false, true, true] {
        session.apply(Command::NudgeStormMotion { by, repeat });
    }
    let set = item(session).document().storm_motion().unwrap();
    assert!((set - start - by * 3.0).speed() < 1e-9);
    session.apply(Command::NudgeStormMotion { by, repeat: false });
    session.apply(Command::Undo);
    assert_eq!(item(session).document().storm_motion(), Some(set));
    session.apply(Command::Undo);
    assert_eq!(item(session).document().storm_motion(), None);
    assert!(session.can(Action::ResetMotion).is_err());
}

#[test]
fn a_set_motion_is_drafted() {
    let mut desk = desk(&windy(10));
    let set = Vector { u: 12.5, v: -3.25 };
    desk.session.apply(Command::SetStormMotion(Some(set)));
    desk.session.wait();
    let mut desk = desk.restart();
    desk.add("winds.csv", &windy(10));
    assert_eq!(item(&desk.session).document().storm_motion(), Some(set));
    assert_eq!(winds(&desk.session).motion_used, Some(set));
    let command = desk.session.command_of(Action::ResetMotion).unwrap();
    desk.session.apply(command);
    assert_eq!(item(&desk.session).document().storm_motion(), None);
}

#[test]
fn what_no_storm_does_is_refused_and_told() {
    let mut desk = desk(&windy(10));
    let before = winds(&desk.session);
    for (u, v) in [(f64::NAN, 0.0), (f64::INFINITY, 0.0), (90.0, 90.0)] {
        desk.session
            .apply(Command::SetStormMotion(Some(Vector { u, v })));
        assert_eq!(winds(&desk.session), before);
        assert_eq!(item(&desk.session).document().storm_motion(), None);
    }
    assert!(
        desk.told()
            .iter()
            .any(|line| line.contains("no storm moves like this"))
    );
}

#[test]
fn every_line_has_a_unit_or_a_reason() {
    for top in [10, 4] {
        let mut desk = desk(&windy(top));
        for unit in [SpeedUnit::Knots, SpeedUnit::MetresPerSecond] {
            let lines = wind_lines(item(&desk.session), unit);
            assert_eq!(lines.len(), 14);
            for line in &lines {
                match &line.value {
                    Some(value) => {
                        let units = [" kt", " m/s", " m²/s²", "°"];
                        assert!(units.iter().any(|unit| value.ends_with(unit)), "{line:?}");
                    }
                    None => assert!(!line.note.is_empty(), "{line:?}"),
                }
            }
        }
        let line = |desk: &Desk, name: &str| {
            wind_lines(item(&desk.session), SpeedUnit::Knots)
                .into_iter()
                .find(|line| line.quantity.label == name)
                .unwrap()
        };
        let six = line(&desk, "Wind difference, 0–6 km");
        let helicity = line(&desk, "Helicity, 0–3 km");
        if top == 4 {
            assert_eq!(six.value, None);
            assert!(six.note.starts_with("the wind ends at 4.0 km"), "{six:?}");
            assert!(
                helicity
                    .note
                    .starts_with("no storm motion: the wind ends at 4.0 km"),
                "{helicity:?}"
            );
            // With a motion of one's own there is helicity all the same.
            desk.session
                .apply(Command::SetStormMotion(Some(Vector::from_wind(
                    240.0, 18.0,
                ))));
            let helicity = line(&desk, "Helicity, 0–3 km");
            assert!(helicity.value.is_some());
            // 18 m/s are 34.99 kt.
            assert_eq!(helicity.note, "against your own 240° 35 kt");
        } else {
            assert!(six.value.is_some());
            assert!(helicity.note.starts_with("against right "), "{helicity:?}");
        }
    }
}

#[test]
fn without_wind_a_sentence_says_so() {
    let mut desk = Desk::new();
    desk.add("vale.csv", &moist_surface("99001", 20.0));
    let why = no_winds(item(&desk.session)).unwrap();
    assert_eq!(why, "This sounding has no winds, so there is no hodograph.");
    assert!(wind_lines(item(&desk.session), SpeedUnit::Knots).is_empty());
    assert!(winds_as_text(item(&desk.session), SpeedUnit::Knots).contains(&why));
    desk.add("winds.csv", &windy(10));
    let windy = desk.session.items().last().unwrap();
    assert_eq!(no_winds(windy), None);
    let text = winds_as_text(windy, SpeedUnit::Knots);
    assert!(
        text.contains("Wind difference, 0–6 km\t") && text.contains("warnings"),
        "{text}"
    );
}
