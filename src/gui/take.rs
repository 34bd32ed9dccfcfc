//! Takes what was finished beside the window into the state: scans, refusals, studies, files written.

use super::apply::forget_level;
use super::state::{
    CurveKey, Document, LoadedScan, Message, Outcome, PathPurpose, PathWindow, Problem, State, Study,
};
use crate::settings::Settings;

/// Takes a scan that was read into the document and looks at its first curve.
pub fn take_scan(mut loaded: LoadedScan, state: &mut State) {
    // What the window starts with is not a step that could be taken back.
    if state.next_scan > 0 {
        state.history.note("open a scan", &state.document, false);
    }
    loaded.key = state.next_scan;
    state.next_scan += 1;
    let document: &mut Document = &mut state.document;
    for (column, energy) in loaded.scan.energies.iter().enumerate() {
        let settings = Settings { curve: Some(energy.name.clone()), ..loaded.start.clone() };
        document.settings.insert(CurveKey { scan: loaded.key, column }, settings);
    }
    // A name that fits no column was refused when the file was read.
    let column = loaded.scan.curve_index(loaded.start.curve.as_deref()).unwrap_or(0);
    document.focus = Some(CurveKey { scan: loaded.key, column });
    // A bundled sample opens with the point of it all in sight: the first level that the parabola misses.
    let sample = loaded.path.is_none();
    document.scans.push(loaded);
    state.view.problem = None;
    state.view.message = None;
    forget_level(state);
    state.view.pinned_level = sample.then_some(1);
}

/// Takes a file that was refused.
pub fn take_problem(problem: Problem, state: &mut State) {
    state.view.problem = Some(problem);
}

/// Takes the answer of the worker about one curve.
pub fn take_outcome(key: CurveKey, settings: Settings, answer: Result<Study, String>, state: &mut State) {
    let before = state.results.remove(&key).and_then(|o| o.study);
    let outcome = match answer {
        Ok(study) => Outcome { settings, study: Some(study), failure: None },
        Err(text) => Outcome { settings, study: before, failure: Some(text) },
    };
    let levels = outcome.study.as_ref().map_or(0, |s| s.findings.levels.len());
    state.results.insert(key, outcome);
    if state.document.focus == Some(key) {
        let kept = |v: &usize| *v < levels;
        state.view.hovered_level = state.view.hovered_level.filter(kept);
        state.view.pinned_level = state.view.pinned_level.filter(kept);
    }
}

/// Opens the built-in path window, where the desktop has no dialog.
pub fn take_no_dialog(purpose: PathPurpose, text: String, entries: Vec<String>, state: &mut State) {
    state.view.path_window = Some(PathWindow { purpose, text, entries });
}

/// Takes the entries of the folder named in the path window.
pub fn take_entries(entries: Vec<String>, state: &mut State) {
    if let Some(window) = &mut state.view.path_window {
        window.entries = entries;
    }
}

/// Takes what came of writing a file.
pub fn take_written(result: Result<String, String>, state: &mut State) {
    let (text, failure) = match result {
        Ok(text) => (text, false),
        Err(text) => (text, true),
    };
    state.view.message = Some(Message { text, failure });
}
