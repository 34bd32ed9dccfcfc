//! Commands without a window: what they change, what they refuse, what undo restores.

use parabound::export::compare::Form;
use parabound::fit::Window;
use parabound::gui::apply::{Effect, apply, take_outcome, take_scan, wanted};
use parabound::gui::command::Command;
use parabound::gui::files::{Done, understand};
use parabound::gui::product::Product;
use parabound::gui::samples::SAMPLES;
use parabound::gui::state::{CurveKey, Preset, State, Study, Zoom};
use parabound::settings::Settings;
use parabound::units::LengthUnit;
use std::sync::Arc;

fn with_sample() -> State {
    let mut state = State::default();
    let sample = &SAMPLES[0];
    let read = understand(sample.file_name, Arc::from(sample.bytes), None, Settings::default());
    let Done::Scan(loaded) = read else { panic!("the first sample is a scan: {read:?}") };
    take_scan(loaded, &mut state);
    state
}

fn compute(state: &mut State) {
    let Some((key, scan, settings)) = wanted(state) else { return };
    let findings = parabound::study::study(&scan, &settings).expect("the settings fit the scan");
    let pictures = Arc::new(parabound::figure::Pictures::of(&findings));
    take_outcome(key, settings, Ok(Study { findings: Arc::new(findings), pictures }), state);
}

fn window(from: f64, to: f64) -> Window {
    Window { from, to, unit: LengthUnit::Angstrom }
}

#[test]
fn a_gesture_is_one_step_back() {
    let mut state = with_sample();
    let before = state.document.settings.clone();
    for i in 0..10 {
        let window = window(1.2, 1.8 + 0.01 * f64::from(i));
        assert!(apply(Command::SetWindow { window, resting: false }, &mut state).is_empty());
    }
    apply(Command::Settle, &mut state);
    let after = state.document.settings.clone();
    assert_ne!(before, after);
    apply(Command::Undo, &mut state);
    assert_eq!(state.document.settings, before);
    apply(Command::Redo, &mut state);
    assert_eq!(state.document.settings, after);
}

#[test]
fn two_gestures_are_two_steps() {
    let mut state = with_sample();
    for to in [1.9, 2.0] {
        apply(Command::SetWindow { window: window(1.2, to), resting: false }, &mut state);
        apply(Command::Settle, &mut state);
    }
    apply(Command::Undo, &mut state);
    let key = state.document.focus.expect("a curve");
    assert_eq!(state.document.settings[&key].fits.window, Some(window(1.2, 1.9)));
}

#[test]
fn the_view_of_the_fit_window_holds_still_while_an_edge_is_dragged() {
    let mut state = with_sample();
    compute(&mut state);
    apply(Command::Zoom(Preset::FitWindow), &mut state);
    let before = state.bounds();
    for to in [1.9, 2.0, 2.1] {
        apply(Command::SetWindow { window: window(1.3, to), resting: false }, &mut state);
        compute(&mut state);
        assert_eq!(state.bounds(), before);
    }
}

#[test]
fn what_the_window_starts_with_is_no_step_to_take_back() {
    let mut state = with_sample();
    assert_eq!(state.history.undo_name(), None);
    let sample = &SAMPLES[1];
    let read = understand(sample.file_name, Arc::from(sample.bytes), None, Settings::default());
    let Done::Scan(loaded) = read else { panic!("a scan: {read:?}") };
    take_scan(loaded, &mut state);
    assert_eq!(state.history.undo_name(), Some("open a scan"));
    apply(Command::Undo, &mut state);
    assert_eq!(state.document.scans.len(), 1);
}

#[test]
fn values_that_make_no_sense_change_nothing() {
    let mut state = with_sample();
    let before = state.document.settings.clone();
    for command in [
        Command::SetWindow { window: window(2.0, 1.0), resting: true },
        Command::SetWindow { window: window(f64::NAN, 1.0), resting: true },
        Command::SetTolerance { tolerance: -1.0, resting: true },
        Command::SetTolerance { tolerance: f64::NAN, resting: true },
        Command::SetReducedMass(Some(0.0)),
        Command::SetReducedMass(Some(f64::INFINITY)),
        Command::Focus(CurveKey { scan: 99, column: 0 }),
    ] {
        apply(command, &mut state);
        assert_eq!(state.document.settings, before);
    }
}

#[test]
fn setting_aside_and_restoring_are_inverse() {
    let mut state = with_sample();
    let key = state.document.focus.expect("a curve");
    let before = state.document.settings[&key].clone();
    apply(Command::SetAside(5), &mut state);
    assert_eq!(state.document.settings[&key].set_aside.len(), 1);
    apply(Command::Restore(5), &mut state);
    assert_eq!(state.document.settings[&key], before);
}

#[test]
fn a_disabled_command_does_nothing_and_says_why() {
    let mut state = State::default();
    for command in [
        Command::Undo,
        Command::Export(Product::Findings),
        Command::Zoom(Preset::WholeWell),
        Command::CopyPage(Form::Text),
    ] {
        let reason = command.is_enabled(&state).expect_err("nothing is open");
        assert!(reason.ends_with('.'), "{reason}");
        assert!(apply(command, &mut state).is_empty());
    }
}

#[test]
fn results_of_older_settings_are_marked_until_new_ones_come() {
    let mut state = with_sample();
    assert!(state.is_stale());
    compute(&mut state);
    assert!(!state.is_stale());
    apply(Command::SetWindow { window: window(1.1, 2.2), resting: true }, &mut state);
    assert!(state.is_stale() && state.study().is_some(), "the old study stays in sight");
    assert!(
        apply(Command::Export(Product::Findings), &mut state).is_empty(),
        "what is not up to date is not exported"
    );
    compute(&mut state);
    assert!(!state.is_stale());
}

#[test]
fn a_failed_computation_keeps_the_older_study() {
    let mut state = with_sample();
    compute(&mut state);
    apply(Command::SetTolerance { tolerance: 0.1, resting: true }, &mut state);
    let (key, _, settings) = wanted(&state).expect("something to compute");
    take_outcome(key, settings, Err("broke off".into()), &mut state);
    assert_eq!(state.failure(), Some("broke off"));
    assert!(state.study().is_some());
    assert!(wanted(&state).is_none(), "a failure is not tried again for ever");
}

#[test]
fn closing_a_scan_can_be_undone() {
    let mut state = with_sample();
    apply(Command::CloseScan, &mut state);
    assert!(state.document.scans.is_empty() && state.document.focus.is_none());
    apply(Command::Undo, &mut state);
    assert_eq!(state.document.scans.len(), 1);
    assert!(state.document.focused().is_some());
}

#[test]
fn pointing_beyond_the_view_widens_it() {
    let mut state = with_sample();
    compute(&mut state);
    apply(Command::PointAt(6.0), &mut state);
    let Zoom::Free(bounds) = state.zoom() else { panic!("the view follows") };
    assert!(bounds.x.0 < 1.6 && bounds.x.1 > 6.0);
}

#[test]
fn opening_and_exporting_are_left_to_the_world_outside() {
    let mut state = with_sample();
    assert!(matches!(apply(Command::Open, &mut state)[..], [Effect::AskOpen]));
    compute(&mut state);
    let effects = apply(Command::Export(Product::Findings), &mut state);
    let [Effect::AskSave { name, .. }] = &effects[..] else { panic!("{effects:?}") };
    assert_eq!(name, "lih_X_A_E_X.findings.json");
}
