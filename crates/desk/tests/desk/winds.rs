//! The page of the winds.

use crate::support::*;
use dewbound_session::thermo::{Vector, WindNumbers};
use dewbound_session::{Session, wording};
use eframe::egui::{Event, Key, Modifiers, PointerButton, Pos2, Rect, Role, vec2};
use egui_kittest::kittest::{NodeT as _, Queryable as _};

/// Knots in one m/s: 1852 m to the nautical mile.
const KNOTS: f64 = 3600.0 / 1852.0;

fn open_page(window: &mut Window) {
    window.key_press_modifiers(Modifiers::COMMAND, Key::Num2);
    window.run();
}

/// Where a drawing lies.
fn document(window: &Window, label: &str) -> Option<Rect> {
    window
        .query_all_by_label_contains(label)
        .find(|node| node.accesskit_node().role() == Role::GraphicsDocument)
        .map(|node| node.rect())
}

fn winds(window: &Window) -> WindNumbers {
    item(window).results().further.winds
}

fn set_motion(window: &Window) -> Option<Vector> {
    item(window).document().storm_motion()
}

/// Both helicities as painted are the session's.
fn check_painted(window: &Window) {
    let numbers = winds(window);
    for helicity in [numbers.helicity_0_to_1km, numbers.helicity_0_to_3km] {
        let value = format!("{} m²/s²", wording::number(helicity.unwrap(), 0));
        assert!(has_text(window, &value), "{value} is not in the window");
    }
}

#[test]
fn the_motion_is_moved_by_keys_alone_and_helicity_follows() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    assert!(document(&window, "Skew-T chart of").is_none());
    tab_to(&mut window, "Storm motion");
    let start = winds(&window);
    let estimate = start
        .motion_used
        .expect("the worst story has winds up to 6 km");
    check_painted(&window);
    let mut expect = estimate;
    for (modifiers, key, u, v) in [
        (Modifiers::NONE, Key::ArrowRight, 0.1, 0.0),
        (Modifiers::NONE, Key::ArrowDown, 0.0, -0.1),
        (Modifiers::SHIFT, Key::ArrowLeft, -0.5, 0.0),
        (Modifiers::COMMAND, Key::ArrowDown, 0.0, -1.0),
        (Modifiers::COMMAND, Key::ArrowDown, 0.0, -1.0),
        (Modifiers::SHIFT, Key::ArrowUp, 0.0, 0.5),
    ] {
        window.key_press_modifiers(modifiers, key);
        window.run();
        expect = expect + Vector { u, v } * (1.0 / KNOTS);
        let now = set_motion(&window).expect("moved");
        assert!(
            (now - expect).speed() < 1e-6,
            "{modifiers:?} {key:?}: {now:?}"
        );
        check_painted(&window);
    }
    assert_ne!(winds(&window).helicity_0_to_3km, start.helicity_0_to_3km);
    assert!(
        has_text(&window, "set by you · helicity 0–1 km"),
        "the status line says it"
    );
    window.key_press(Key::Home);
    window.run();
    assert_eq!(set_motion(&window), None);
    assert_eq!(winds(&window), start);
    assert_eq!(focused(&window).as_deref(), Some("Storm motion"));
    // Esc does the same, and Undo brings the own motion back.
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowLeft);
    window.run();
    let own = set_motion(&window);
    assert!(own.is_some());
    window.key_press(Key::Escape);
    window.run();
    assert_eq!(set_motion(&window), None);
    window.key_press_modifiers(Modifiers::COMMAND, Key::Z);
    window.run();
    assert_eq!(set_motion(&window), own);
    window.key_press_modifiers(Modifiers::COMMAND, Key::Num1);
    window.run();
    assert!(document(&window, "Skew-T chart of").is_some());
}

#[test]
fn a_motion_is_typed_as_direction_and_speed() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    tab_to(&mut window, "Storm motion");
    for text in ["2", "4", "0", "/", "3", "5"] {
        window.event(Event::Text(text.to_owned()));
    }
    window.run();
    assert_eq!(set_motion(&window), None, "nothing is set while typing");
    window.key_press(Key::Enter);
    window.run();
    let set = set_motion(&window).expect("set");
    assert!(
        (set.direction_from() - 240.0).abs() < 1e-9 && (set.speed() * KNOTS - 35.0).abs() < 1e-9
    );
    assert!(has_text(&window, "240° 35 kt"));
}

fn button(window: &Window, pos: Pos2, pressed: bool) {
    window.event(Event::PointerButton {
        pos,
        button: PointerButton::Primary,
        pressed,
        modifiers: Default::default(),
    });
}

#[test]
fn the_motion_is_dragged_as_one_step_and_every_frame_shows_its_own_helicity() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    let ring = |window: &Window| window.get_by_label("Storm motion").rect();
    let rect = ring(&window);
    assert!(rect.width() >= 28.0 && rect.height() >= 28.0, "{rect:?}");
    let start = rect.center() + vec2(-8.0, 9.0);
    window.hover_at(start);
    window.step();
    button(&window, start, true);
    window.step();
    assert_eq!(set_motion(&window), None, "taking hold changes nothing");
    let mut last = winds(&window).motion_used.unwrap();
    for i in 1..=5 {
        window.hover_at(start + vec2(9.0, 6.0) * i as f32);
        window.step();
        let now = set_motion(&window).expect("moved");
        assert!(now.u > last.u && now.v < last.v, "frame {i}");
        last = now;
        check_painted(&window);
        let moved = ring(&window).center() - rect.center() - vec2(9.0, 6.0) * i as f32;
        assert!(
            moved.length() < 1.0,
            "the ring stays under the pointer: {moved:?}"
        );
    }
    button(&window, start + vec2(45.0, 30.0), false);
    window.run();
    assert_eq!(set_motion(&window), Some(last));
    window.key_press_modifiers(Modifiers::COMMAND, Key::Z);
    window.run();
    assert_eq!(set_motion(&window), None, "a drag is one step to undo");

    // Esc during a drag restores.
    let at = ring(&window).center();
    window.hover_at(at);
    window.step();
    button(&window, at, true);
    window.step();
    window.hover_at(at + vec2(40.0, 0.0));
    window.step();
    assert!(set_motion(&window).is_some());
    window.key_press(Key::Escape);
    window.run();
    assert_eq!(set_motion(&window), None);
    button(&window, at + vec2(40.0, 0.0), false);
    window.run();
    assert_eq!(set_motion(&window), None);
}

#[test]
fn winds_are_read_up_the_profile() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    assert!(focused(&window).is_some_and(|label| label.starts_with("Wind against height")));
    for _ in 0..4 {
        window.key_press(Key::ArrowUp);
        window.run();
    }
    // The first key shows the ground, each further one 100 m more.
    assert!(
        has_text(&window, "Wind at 0.3 km: "),
        "{:?}",
        texts(&window)
    );
    window.key_press_modifiers(Modifiers::COMMAND, Key::ArrowUp);
    window.run();
    assert!(has_text(&window, "Wind at 1.0 km: "));
}

#[test]
fn everything_on_the_page_has_a_node() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    for wanted in [
        "Hodograph of ",
        "Wind at 0.5 km: ",
        "Wind at 1.0 km: ",
        "Wind at 6.0 km: ",
        "Estimated motion right of the mean wind: ",
        "Estimated motion left of the mean wind: ",
        "Mean wind the motions deviate from: ",
        "Rings of the hodograph: every 20 kt",
        "Hatched area 0–1 km: helicity ",
        "Wind difference, 0–6 km",
        "Critical angle",
        "Copy winds",
    ] {
        assert!(has_text(&window, wanted), "{wanted}: {:#?}", texts(&window));
    }
    let node = window.get_by_label("Storm motion");
    let value = node.accesskit_node().value().unwrap_or_default();
    assert!(value.ends_with(" kt") && value.contains('°'), "{value}");
}

#[test]
fn nothing_in_the_list_is_cut_off() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    let all = texts(&window);
    let start = all.iter().position(|text| text == "Storm motion used");
    let list = &all[start.expect("the list is there")..];
    let cut: Vec<&String> = list
        .iter()
        .take_while(|text| !text.starts_with("Findings"))
        .filter(|text| text.contains('…'))
        .collect();
    assert!(cut.is_empty(), "{cut:?}");
}

#[test]
fn the_lowest_kilometres_are_drawn_larger_and_paper_moved_by_hand_returns() {
    let (_folder, mut window) = usual();
    open_page(&mut window);
    let gap = |window: &Window| {
        let place = |km: &str| {
            let label = format!("Wind at {km} km: ");
            let mut nodes = window.query_all_by_label_contains(&label);
            nodes.next().map(|node| node.rect().center())
        };
        (place("1.0").unwrap() - place("3.0").unwrap()).length()
    };
    let all = gap(&window);
    window.get_by_label("3 km").click();
    window.run();
    let lowest = gap(&window);
    assert!(lowest > 1.3 * all, "{lowest} after {all}");
    tab_to(&mut window, "Hodograph of ");
    window.key_press(Key::Plus);
    window.run();
    assert!(gap(&window) > 1.1 * lowest);
    window.key_press(Key::Num0);
    window.run();
    assert!((gap(&window) - lowest).abs() < 0.5);
}

#[test]
fn without_wind_one_sentence() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = Session::new(dewbound_session::Config::within(folder.path()));
    session.open_bytes(
        "calm.csv".to_owned(),
        b"# time: 2024-06-13T00:00:00Z\npressure_hpa,temperature_c,dewpoint_c\n\
          1000,25,18\n850,14,8\n700,4,-6\n500,-14,-30\n300,-42,-60\n"
            .to_vec(),
    );
    session.wait();
    let mut window = builder(SIZE).build_eframe(move |creation| {
        dewbound_desk::Desk::with_session(&creation.egui_ctx, session, &plain(), now)
    });
    window.run();
    open_page(&mut window);
    assert!(has_text(
        &window,
        "This sounding has no winds, so there is no hodograph."
    ));
    assert!(window.query_by_label("Storm motion").is_none());
}

#[test]
fn the_page_fits_the_smallest_window() {
    let folder = tempfile::tempdir().unwrap();
    let mut window = desk(builder(vec2(720.0, 530.0)), folder.path(), plain());
    open_page(&mut window);
    let plane = document(&window, "Hodograph of").unwrap();
    let strips = document(&window, "Wind against height of").unwrap();
    assert!(
        plane.width() >= 270.0 && plane.height() >= 200.0,
        "{plane:?}"
    );
    assert!(strips.width() >= 130.0 && strips.right() <= plane.left());
    assert!(has_text(&window, "Helicity, 0–1 km"));
}
