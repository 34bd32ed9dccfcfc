//! Carries commands out: the only place where the window's state changes.

use super::command::Command;
use super::state::{
    CurveKey, Document, LoadedScan, Message, Outcome, PathPurpose, PathWindow, Preset, Problem, State, Study,
    Zoom,
};
use crate::figure::geometry::Bounds;
use crate::settings::{SetAside, Settings};
use std::path::PathBuf;
use std::sync::Arc;

/// What a command wants of the world outside the state.
#[derive(Clone, Debug)]
pub enum Effect {
    /// Ask for files to open.
    AskOpen,
    /// Ask where to write the findings of the focused curve.
    AskSave(String),
    /// Read a file.
    Read(PathBuf),
    /// Read a bundled sample.
    ReadSample(usize),
    /// Read these bytes again.
    ReadBytes(Problem),
    /// Write the findings of the focused curve.
    Write {
        /// Where.
        path: PathBuf,
        /// Whether a file there may be replaced.
        overwrite: bool,
    },
    /// Put text on the clipboard.
    Copy(String),
    /// Change the theme.
    Theme(bool),
    /// List the folder that the path window names.
    ListFolder(String),
}

/// Carries one command out and says what else has to happen.
pub fn apply(command: Command, state: &mut State) -> Vec<Effect> {
    if command.is_enabled(state).is_err() {
        return Vec::new();
    }
    match command {
        Command::Open => return vec![Effect::AskOpen],
        Command::OpenPath(path) => return vec![Effect::Read(path)],
        Command::OpenSample(index) => return vec![Effect::ReadSample(index)],
        Command::ReadAgain(read) => {
            if let Some(problem) = &mut state.view.problem {
                problem.start.read = read;
                return vec![Effect::ReadBytes(problem.clone())];
            }
        }
        Command::Export => return vec![Effect::AskSave(findings_name(state))],
        Command::ExportTo { path, overwrite } => return vec![Effect::Write { path, overwrite }],
        Command::CopyConstants => {
            if let Some(study) = state.study() {
                let text = super::panels::constants_text(&study.findings);
                state.view.message = Some(Message { text: "Constants copied.".into(), failure: false });
                return vec![Effect::Copy(text)];
            }
        }
        Command::SetDark(dark) => return vec![Effect::Theme(dark)],
        Command::TypePath(text) => {
            if let Some(window) = &mut state.view.path_window {
                window.text.clone_from(&text);
                return vec![Effect::ListFolder(text)];
            }
        }
        Command::Undo => undo(state, true),
        Command::Redo => undo(state, false),
        Command::Settle => state.history.settle(),
        command => {
            if !change_document(&command, state) {
                change_view(command, state);
            }
        }
    }
    Vec::new()
}

fn undo(state: &mut State, back: bool) {
    let name =
        if back { state.history.undo(&mut state.document) } else { state.history.redo(&mut state.document) };
    let verb = if back { "Undone" } else { "Redone" };
    state.view.message = name.map(|n| Message { text: format!("{verb}: {n}."), failure: false });
}

/// Changes of the document, each under its name in the history. False when the command is none.
fn change_document(command: &Command, state: &mut State) -> bool {
    match command {
        Command::Focus(key) => {
            if state.document.settings.contains_key(key) && state.document.focus != Some(*key) {
                state.document.focus = Some(*key);
                forget_level(state);
            }
        }
        Command::CloseScan => close_scan(state),
        Command::SetWindow { window, resting } => {
            if window.from.is_finite() && window.to.is_finite() && window.from < window.to {
                hold_view(state);
                edit(state, "move the fit window", !resting, |s| s.fits.window = Some(*window));
            }
        }
        Command::ResetWindow => edit(state, "default fit window", false, |s| s.fits.window = None),
        Command::SetTolerance { tolerance, resting } => {
            if *tolerance > 0.0 && *tolerance < 1.0 {
                edit(state, "change the tolerance", !resting, |s| s.reach.tolerance = *tolerance);
            }
        }
        Command::SetAtoms(atoms) => edit(state, "choose atoms", false, |s| {
            s.masses.atoms = Some(atoms.clone());
            s.masses.reduced_mass_u = None;
        }),
        Command::SetCharge(charge) => edit(state, "change the charge", true, |s| s.masses.charge = *charge),
        Command::SetReducedMass(mass) => {
            if mass.is_none_or(|m| m.is_finite() && m > 0.0) {
                edit(state, "give the reduced mass", true, |s| s.masses.reduced_mass_u = *mass);
            }
        }
        Command::SetDegree(degree) => edit(state, "change the degree", false, |s| {
            for request in s.fits.requests.iter_mut().filter(|r| r.degree.is_some()) {
                request.degree = Some(*degree);
            }
        }),
        Command::SetAside(row) => edit(state, "set a point aside", false, |s| {
            s.kept.retain(|r| r != row);
            s.set_aside.retain(|a| a.row != *row);
            s.set_aside.push(SetAside { row: *row, reason: "set aside by hand".into() });
            s.set_aside.sort_by_key(|a| a.row);
        }),
        Command::Restore(row) => edit(state, "use a point again", false, |s| {
            let by_hand = s.set_aside.iter().any(|a| a.row == *row);
            s.set_aside.retain(|a| a.row != *row);
            if !by_hand && !s.kept.contains(row) {
                s.kept.push(*row);
                s.kept.sort_unstable();
            }
        }),
        _ => return false,
    }
    true
}

/// The view of the fit window follows the window, but not while its edges move under the hand.
fn hold_view(state: &mut State) {
    if state.zoom() == Zoom::Preset(Preset::FitWindow)
        && let (Some(key), Some(bounds)) = (state.document.focus, state.bounds())
    {
        state.view.zoom.insert(key, Zoom::Free(bounds));
    }
}

/// Changes the settings of the focused curve, noted in the history when they did change.
fn edit(state: &mut State, name: &str, gesture: bool, change: impl FnOnce(&mut Settings)) {
    let Some(key) = state.document.focus else { return };
    let Some(settings) = state.document.settings.get(&key) else { return };
    let mut changed = settings.clone();
    change(&mut changed);
    if changed == *settings {
        if !gesture {
            state.history.settle();
        }
        return;
    }
    state.history.note(name, &state.document, gesture);
    state.document.settings.insert(key, changed);
}

fn close_scan(state: &mut State) {
    let Some(key) = state.document.focus else { return };
    state.history.note("close a scan", &state.document, false);
    let document = &mut state.document;
    document.scans.retain(|s| s.key != key.scan);
    document.settings.retain(|k, _| k.scan != key.scan);
    document.focus = document.settings.keys().next().copied();
    forget_level(state);
}

fn forget_level(state: &mut State) {
    state.view.hovered_level = None;
    state.view.pinned_level = None;
    state.view.pointed_angstrom = None;
}

fn change_view(command: Command, state: &mut State) {
    let focus = state.document.focus;
    let view = &mut state.view;
    match command {
        Command::Zoom(preset) => {
            if let Some(key) = focus {
                view.zoom.insert(key, Zoom::Preset(preset));
            }
        }
        Command::SetBounds(bounds) => {
            if let Some(key) = focus.filter(|_| bounds.is_valid()) {
                view.zoom.insert(key, Zoom::Free(bounds));
            }
        }
        Command::HoverLevel(level) => view.hovered_level = level,
        Command::PinLevel(level) => view.pinned_level = level,
        Command::StepLevel(step) => step_level(step, state),
        Command::PointAt(r) => point_at(r, state),
        Command::ShowPage(page) => view.page = page,
        Command::ShowStrip(strip) => view.strip = strip,
        Command::ToggleWhy => view.why_open = !view.why_open,
        Command::ShowLeft(open) => view.panels.left = Some(open),
        Command::ShowRight(open) => view.panels.right = Some(open),
        Command::ClosePathWindow => view.path_window = None,
        Command::DropProblem => view.problem = None,
        Command::DismissMessage => view.message = None,
        _ => {}
    }
}

fn step_level(step: i32, state: &mut State) {
    let Some(count) = state.study().map(|s| s.findings.levels.len()).filter(|n| *n > 0) else { return };
    let next = match state.view.pinned_level {
        None => 0,
        Some(v) => v.saturating_add_signed(step as isize).min(count - 1),
    };
    state.view.pinned_level = Some(next);
    state.view.hovered_level = None;
}

/// Brings a bond length into view, keeping the scale where it is seen already.
fn point_at(r_angstrom: f64, state: &mut State) {
    state.view.pointed_angstrom = Some(r_angstrom);
    let (Some(key), Some(bounds)) = (state.document.focus, state.bounds()) else { return };
    let energy = state.study().and_then(|s| {
        let nearest = |p: &&crate::figure::PlotPoint| ordered((p.at[0] - r_angstrom).abs());
        s.pictures.points.iter().min_by_key(nearest).map(|p| p.at[1])
    });
    let inside = |(a, b): (f64, f64), v: f64| v >= a && v <= b;
    if inside(bounds.x, r_angstrom) && energy.is_none_or(|e| inside(bounds.y, e)) {
        return;
    }
    let reach = |(a, b): (f64, f64), v: f64| {
        let pad = 0.08 * (b - a);
        (a.min(v - pad), b.max(v + pad))
    };
    let y = energy.map_or(bounds.y, |e| reach(bounds.y, e));
    state.view.zoom.insert(key, Zoom::Free(Bounds { x: reach(bounds.x, r_angstrom), y }));
}

/// A number as an orderable key; only used on finite numbers.
fn ordered(value: f64) -> u64 {
    value.max(0.0).to_bits()
}

/// Name offered for the findings of the focused curve.
fn findings_name(state: &State) -> String {
    let Some(study) = state.study() else { return "findings.json".into() };
    let source = &study.findings.source;
    let stem = source.file_name.rsplit_once('.').map_or(source.file_name.as_str(), |(s, _)| s);
    let label: String =
        source.curve_label.chars().map(|c| if c.is_ascii_alphanumeric() { c } else { '_' }).collect();
    format!("{stem}_{label}.findings.json")
}

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

/// The scan and settings to be computed next, where what is shown is older than the settings.
pub fn wanted(state: &State) -> Option<(CurveKey, Arc<crate::scan::Scan>, Settings)> {
    if !state.is_stale() {
        return None;
    }
    let (key, loaded, settings) = state.document.focused()?;
    Some((key, Arc::clone(&loaded.scan), settings.clone()))
}
