//! A few small pictures. They need a software renderer (mesa-vulkan-drivers on Debian).

use crate::support::*;
use dewbound_desk::ThemeName;
use eframe::egui::vec2;
use egui_kittest::SnapshotOptions;
use egui_kittest::kittest::Queryable as _;
use std::sync::OnceLock;

/// Whether anything here can draw a picture.
fn can_draw() -> bool {
    static CAN: OnceLock<bool> = OnceLock::new();
    *CAN.get_or_init(|| {
        std::panic::catch_unwind(|| {
            egui_kittest::wgpu::create_render_state(
                egui_kittest::wgpu::default_wgpu_setup(),
                eframe::egui_wgpu::RendererOptions::PREDICTABLE,
            )
        })
        .is_ok()
    })
}

fn options() -> SnapshotOptions {
    // Versions of the software renderer differ in single pixels along edges and glyphs: one in a hundred may.
    SnapshotOptions::new()
        .threshold(2.0)
        .max_failed_pixels(5_000)
        .output_path(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/snapshots"))
}

fn picture(name: &str, theme: ThemeName, act: impl FnOnce(&mut Window)) {
    if !can_draw() {
        skipped(name, "no software renderer on this machine");
        return;
    }
    let folder = tempfile::tempdir().unwrap();
    let mut args = plain();
    args.theme = Some(theme);
    let mut window = desk(
        builder(vec2(1120.0, 660.0))
            .with_render_cursor(false)
            .wgpu(),
        folder.path(),
        args,
    );
    act(&mut window);
    window.run();
    window.snapshot_options(name, &options());
}

#[test]
fn light() {
    picture("light", ThemeName::Light, |_| {});
}

#[test]
fn dark() {
    picture("dark", ThemeName::Dark, |_| {});
}

#[test]
fn a_finding_opened() {
    picture("finding", ThemeName::Light, |window| {
        window
            .get_all_by_label_contains("on the chart: ")
            .next()
            .expect("the worst story has a finding")
            .click();
    });
}

fn winds(window: &mut Window) {
    window.key_press_modifiers(eframe::egui::Modifiers::COMMAND, eframe::egui::Key::Num2);
}

#[test]
fn winds_light() {
    picture("winds-light", ThemeName::Light, winds);
}

#[test]
fn winds_dark() {
    picture("winds-dark", ThemeName::Dark, winds);
}
