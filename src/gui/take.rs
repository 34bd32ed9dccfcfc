//! Takes what was finished beside the window into the state: scans, refusals, studies, files written.

use super::apply::forget_level;
use super::command::Command;
use super::reading::{self, ReadingCommand};
use super::state::{
    CurveKey, Document, Failure, LoadedScan, Message, Outcome, PathPurpose, PathWindow, Problem, State, Study,
};
use crate::settings::Settings;

/// Takes a scan that was read into the document and looks at its first curve.
pub fn take_scan(loaded: LoadedScan, state: &mut State) {
    take_scans(vec![loaded], state);
}

/// Takes scans that were read together, as one step.
pub fn take_scans(scans: Vec<LoadedScan>, state: &mut State) {
    // What the window starts with is not a step that could be taken back.
    if state.next_scan > 0 && !scans.is_empty() {
        let name = if scans.len() == 1 { "open a scan" } else { "open scans" };
        state.history.note(name, &state.document, false);
    }
    for loaded in scans {
        add_scan(loaded, state);
    }
}

fn add_scan(mut loaded: LoadedScan, state: &mut State) {
    loaded.key = state.next_scan;
    state.next_scan += 1;
    let document: &mut Document = &mut state.document;
    for (column, energy) in loaded.scan.energies.iter().enumerate() {
        let settings = super::saving::fresh(&loaded.start, &energy.name);
        document.settings.insert(CurveKey { scan: loaded.key, column }, settings);
    }
    // A name that fits no column was refused when the file was read.
    let column = loaded.scan.curve_index(loaded.start.curve.as_deref()).unwrap_or(0);
    document.focus = Some(CurveKey { scan: loaded.key, column });
    // A bundled sample opens with the point of it all in sight: the first level that the parabola misses.
    let sample = loaded.is_sample;
    let path = loaded.path.clone();
    document.scans.push(loaded.clone());
    if let Some(path) = path {
        super::saving::remember(path, state);
    }
    state.view.message = None;
    reading::settle_problem(&loaded, state);
    reading::remember(&loaded, state);
    forget_level(state);
    state.view.pinned_level = sample.then_some(1);
}

/// Takes a scan that was read again; everything that was set for its curves stays.
pub fn take_reread(loaded: LoadedScan, state: &mut State) {
    let key = loaded.key;
    if state.document.scan(key).is_none() {
        take_scan(loaded, state);
        return;
    }
    state.history.note("read a scan again", &state.document, false);
    let document = &mut state.document;
    let focused = document.focused().filter(|f| f.0.scan == key).and_then(|f| f.2.curve.clone());
    let before: Vec<Settings> =
        document.settings.iter().filter(|(k, _)| k.scan == key).map(|(_, s)| s.clone()).collect();
    document.settings.retain(|k, _| k.scan != key);
    let rows = loaded.scan.bond_lengths.len();
    for (column, energy) in loaded.scan.energies.iter().enumerate() {
        let same = before.iter().find(|s| s.curve.as_ref() == Some(&energy.name));
        let mut settings = same.cloned().unwrap_or_else(|| loaded.start.clone());
        settings.curve = Some(energy.name.clone());
        settings.read = loaded.start.read.clone();
        settings.set_aside.retain(|s| s.row < rows);
        settings.kept.retain(|r| *r < rows);
        settings.notes.retain(|n| n.row < rows);
        document.settings.insert(CurveKey { scan: key, column }, settings);
    }
    if document.focus.is_some_and(|f| f.scan == key) {
        let energies = &loaded.scan.energies;
        let was_there = |name: &String| before.iter().any(|s| s.curve.as_ref() == Some(name));
        // Who makes a curve wants to see it.
        let made = energies.iter().position(|e| e.made.is_some() && !was_there(&e.name));
        let same = || energies.iter().position(|e| Some(&e.name) == focused.as_ref());
        let column = made.or_else(same).unwrap_or(0);
        document.focus = Some(CurveKey { scan: key, column });
    }
    if let Some(scan) = document.scans.iter_mut().find(|s| s.key == key) {
        *scan = loaded.clone();
    }
    state.results.retain(|k, _| k.scan != key);
    state.view.zoom.retain(|k, _| k.scan != key);
    state.view.changed.remove(&key);
    reading::settle_problem(&loaded, state);
    reading::remember(&loaded, state);
    forget_level(state);
}

/// Takes word of a file that has changed on disk.
pub fn take_changed(key: u64, state: &mut State) {
    let Some(name) = state.document.scan(key).map(|s| s.scan.file_name.clone()) else { return };
    state.view.changed.insert(key);
    let text = format!("{name} has changed on disk; what is shown is as it was.");
    state.view.message = Some(Message { action: Some(Command::Reload(key)), ..Message::told(text) });
}

/// Names of refused files in a message; all of them are told one by one on request.
const MOST_NAMES: usize = 4;

/// Takes what a folder held; `left_out` files of it were not looked at.
pub fn take_folder(scans: Vec<LoadedScan>, refused: Vec<Problem>, left_out: usize, state: &mut State) {
    let read = scans.len();
    take_scans(scans, state);
    let files = |n: usize| if n == 1 { "1 file".to_owned() } else { format!("{n} files") };
    let mut text = format!("{} read.", files(read));
    if left_out > 0 {
        let most = super::files::MOST_FILES;
        text.push_str(&format!(
            " {} of the folder not looked at: no more than {most} are read at once, by name.",
            files(left_out)
        ));
    }
    if !refused.is_empty() {
        let names: Vec<&str> = refused.iter().take(MOST_NAMES).map(|p| p.file_name.as_str()).collect();
        let more = refused.len().saturating_sub(MOST_NAMES);
        let more = if more == 0 { String::new() } else { format!(" and {more} more") };
        text.push_str(&format!(" Not read: {}{more}.", names.join(", ")));
    }
    let action = (!refused.is_empty()).then_some(Command::Reading(ReadingCommand::ShowRefused));
    state.view.reading.aside = refused;
    let failure = read == 0 || left_out > 0;
    state.view.message = Some(Message { failure, action, ..Message::told(text) });
}

pub use super::reading::take_problem;

/// Takes the answer of the worker about one curve.
pub fn take_outcome(key: CurveKey, settings: Settings, answer: Result<Study, Failure>, state: &mut State) {
    // Its scan may have been closed meanwhile.
    if state.document.scan(key.scan).is_none() {
        return;
    }
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
        state.view.kept_levels.retain(kept);
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
    state.view.message = Some(Message { failure, ..Message::told(text) });
}
