//! The whole window as pictures, painted by the program's own painter: the same on every machine.
//!
//! `UPDATE_SNAPSHOTS=1` writes them anew; look at them before they are kept.

use crate::harness::{Window, open};
use eframe::egui::Theme;
use egui_kittest::SnapshotOptions;
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::state::{Page, Preset};

fn compare(window: &mut Window, name: &str) {
    // Numbers may differ in their last digits between platforms, and with them a few pixels.
    let options = SnapshotOptions::new()
        .output_path(concat!(env!("CARGO_MANIFEST_DIR"), "/pictures"))
        .max_failed_pixels(400);
    window.run();
    window.snapshot_options(name, &options);
}

#[test]
fn the_sample_at_first_glance() {
    let mut window = open([1400.0, 900.0], Theme::Dark, Start::default());
    compare(&mut window, "window_dark");
}

#[test]
fn the_whole_well_in_the_light_with_its_levels() {
    let start = Start { page: Page::Levels, ..Start::default() };
    let mut window = open([1400.0, 900.0], Theme::Light, start);
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::Zoom(Preset::WholeWell), &ctx);
    compare(&mut window, "whole_well_light");
}

#[test]
fn a_narrow_window_folds_its_panel() {
    let mut window = open([1000.0, 700.0], Theme::Dark, Start::default());
    compare(&mut window, "narrow_dark");
}
