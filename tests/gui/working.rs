//! Work beside the window: newest wins, late results marked, progress and stop, a fault that is survived.

use crate::harness::{Window, press, state};
use eframe::egui::{self, Theme};
use egui_kittest::Harness;
use egui_kittest::kittest::Queryable as _;
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::compute::Ticket;
use parabound::gui::job::{StudyJob, compute};
use parabound::gui::state::Study;
use parabound::scan::Scan;
use parabound::settings::Settings;
use parabound_gui_tests::{CpuRenderer, Shown};
use std::time::{Duration, Instant};

/// A window that works beside, as the real one does.
fn open(job: StudyJob) -> Window {
    let start = Start { job: Some(job), ..Start::default() };
    let mut window = Harness::builder()
        .with_size(egui::vec2(1400.0, 900.0))
        .with_theme(Theme::Dark)
        .with_max_steps(24)
        .with_render_cursor(false)
        .renderer(CpuRenderer::default())
        .build_eframe(|cc| Shown(App::new(&cc.egui_ctx, start)));
    until(&mut window, |w| state(w).study().is_some() || state(w).failure().is_some());
    window
}

/// Frames until something is so; real time has to pass.
fn until(window: &mut Window, so: impl Fn(&Window) -> bool) {
    let start = Instant::now();
    while !so(window) {
        assert!(start.elapsed() < Duration::from_secs(60), "it does not come");
        std::thread::sleep(Duration::from_millis(2));
        window.step();
    }
}

fn tolerate(window: &mut Window, tolerance: f64, resting: bool) {
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::SetTolerance { tolerance, resting }, &ctx);
    window.step();
}

fn shown_tolerance(window: &Window) -> f64 {
    state(window).study().expect("a study").findings.settings.reach.tolerance
}

/// Slow only while the tolerance is between 0.2 and 0.3, so that what the window starts with comes at once.
fn slow(scan: &Scan, settings: &Settings, ticket: &Ticket) -> Result<Study, String> {
    if (0.2..0.3).contains(&settings.reach.tolerance) {
        for _ in 0..40 {
            ticket.step("thinking");
            std::thread::sleep(Duration::from_millis(10));
        }
    }
    compute(scan, settings, ticket)
}

fn endless(scan: &Scan, settings: &Settings, ticket: &Ticket) -> Result<Study, String> {
    while (0.2..0.3).contains(&settings.reach.tolerance) {
        ticket.step("thinking");
        std::thread::sleep(Duration::from_millis(5));
    }
    compute(scan, settings, ticket)
}

fn faulty(scan: &Scan, settings: &Settings, ticket: &Ticket) -> Result<Study, String> {
    assert!(!(0.2..0.3).contains(&settings.reach.tolerance), "a fault put in for the test");
    compute(scan, settings, ticket)
}

fn always_faulty(_: &Scan, _: &Settings, _: &Ticket) -> Result<Study, String> {
    panic!("a fault put in for the test")
}

#[test]
fn results_come_while_the_hand_still_moves_and_the_newest_comes_last() {
    let mut window = open(slow);
    let mut seen = vec![shown_tolerance(&window)];
    // Every movement comes long before the work on the one before is done.
    for i in 0..150 {
        tolerate(&mut window, 0.21 + 1e-4 * f64::from(i), false);
        std::thread::sleep(Duration::from_millis(10));
        if seen.last() != Some(&shown_tolerance(&window)) {
            seen.push(shown_tolerance(&window));
        }
    }
    assert!(seen.len() >= 3, "results on the way: {seen:?}");
    assert!(seen.windows(2).all(|w| w[1] > w[0]), "each is newer than the one before: {seen:?}");
    until(&mut window, |w| !state(w).is_stale());
    assert!((shown_tolerance(&window) - (0.21 + 1e-4 * 149.0)).abs() < 1e-12);
    assert!(!state(&window).looks_old());
}

#[test]
fn what_takes_long_is_marked_tells_how_far_it_is_and_can_be_stopped() {
    let mut window = open(endless);
    tolerate(&mut window, 0.25, true);
    until(&mut window, |w| state(w).view.progress.is_some());
    assert!(
        state(&window).looks_old() && state(&window).study().is_some(),
        "the older result stays in sight"
    );
    assert_eq!(state(&window).view.progress.as_ref().map(|p| p.step.as_str()), Some("thinking"));
    window.get_by_label("Stop").click();
    until(&mut window, |w| state(w).is_stopped());
    window.run();
    assert!(state(&window).view.progress.is_none() && state(&window).looks_old());
    // Nothing is begun again by itself; other settings are.
    for _ in 0..20 {
        window.step();
        assert!(state(&window).is_stopped());
    }
    tolerate(&mut window, 0.1, true);
    until(&mut window, |w| !state(w).is_stale());
    assert_eq!(shown_tolerance(&window), 0.1);
    press(&mut window, "Undo");
    assert!(state(&window).is_stopped(), "what was stopped is not begun again by undo either");
    window.get_by_label("Compute").click();
    until(&mut window, |w| state(w).view.progress.is_some());
}

#[test]
fn a_fault_in_the_work_is_shown_with_a_report_and_the_window_lives_on() {
    let mut window = open(faulty);
    tolerate(&mut window, 0.25, true);
    until(&mut window, |w| state(w).failure().is_some());
    window.run();
    assert!(state(&window).study().is_some() && state(&window).looks_old());
    window.get_by_label("Copy report").click();
    window.step();
    let copied = window.output().platform_output.commands.iter().find_map(|c| match c {
        egui::OutputCommand::CopyText(text) => Some(text.clone()),
        _ => None,
    });
    let report = copied.expect("something was copied");
    for needle in ["a fault put in for the test", "working.rs, line", "lih_X_A.csv", "\"tolerance\":0.25"] {
        assert!(report.contains(needle), "no {needle} in {report}");
    }
    press(&mut window, "Undo");
    until(&mut window, |w| state(w).failure().is_none() && !state(w).is_stale());
    assert_eq!(shown_tolerance(&window), 0.05);
}

#[test]
fn a_fault_at_the_very_start_leaves_a_window_that_can_be_used() {
    let mut window = open(always_faulty);
    window.run();
    assert!(window.query_by_label("This curve could not be computed").is_some());
    assert!(window.query_by_label("Copy report").is_some());
    press(&mut window, "File");
    assert!(window.query_by_label("Samples").is_some());
}

/// A frame is drawn only when somebody asks for one: nobody does while nothing changes, with the files watched, the
/// work saved and the workers at rest. With levels of a J shown too.
#[test]
fn a_window_at_rest_draws_no_frame_in_five_seconds() {
    use std::sync::Arc;
    use std::sync::atomic::{AtomicUsize, Ordering};
    let folder = tempfile::tempdir().expect("a folder");
    let scan = folder.path().join("h2.csv");
    let from = concat!(env!("CARGO_MANIFEST_DIR"), "/../../sample-scans/h2_fci.csv");
    std::fs::copy(from, &scan).expect("copied");
    let start =
        Start { files: vec![scan], state_folder: Some(folder.path().join("state")), ..Start::default() };
    let mut window = Harness::builder()
        .with_size(egui::vec2(1400.0, 900.0))
        .with_max_steps(24)
        .renderer(CpuRenderer::default())
        .build_eframe(|cc| Shown(App::new(&cc.egui_ctx, start)));
    until(&mut window, |w| state(w).study().is_some());
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::ShowJ(10), &ctx);
    until(&mut window, |w| state(w).rotation().is_some());
    // What was begun comes to its end: notes of the work, fading.
    let quiet = Instant::now();
    while quiet.elapsed() < Duration::from_secs(3) {
        window.step();
        std::thread::sleep(Duration::from_millis(20));
    }
    let asked = Arc::new(AtomicUsize::new(0));
    let count = Arc::clone(&asked);
    // Every wish for a frame, at once or later than now within the five seconds, is heard here.
    window.ctx.set_request_repaint_callback(move |info| {
        if info.delay < Duration::from_secs(5) {
            count.fetch_add(1, Ordering::Relaxed);
        }
    });
    window.step();
    let delay = window.output().viewport_output[&egui::ViewportId::ROOT].repaint_delay;
    assert!(delay > Duration::from_secs(5), "the last frame asks for another in {delay:?}");
    asked.store(0, Ordering::Relaxed);
    std::thread::sleep(Duration::from_secs(5));
    assert_eq!(asked.load(Ordering::Relaxed), 0, "frames asked for in five seconds of rest");
}
