//! Carries commands out: the only place where the window's state changes.

use super::command::Command;
use super::densities::DensityView;
use super::product::Product;
use super::reading::{self, ReadingCommand, ReadingEffect};
pub use super::saving::*;
use super::session::Work;
use super::state::{
    CurveKey, LoadedScan, Message, Page, Preset, Problem, Resampling, Search, State, Strip, Zoom,
};
pub use super::take::*;
use crate::export::compare::Quantity;
use crate::export::parameters;
use crate::figure::geometry::Bounds;
use crate::fit::{BootstrapSettings, Family, RowWeight, Weighting};
use crate::settings::{PointNote, SetAside, Settings};
use std::collections::BTreeSet;
use std::path::PathBuf;
use std::sync::Arc;

/// What a command wants of the world outside the state.
#[derive(Clone, Debug)]
pub enum Effect {
    /// Ask for files to open.
    AskOpen,
    /// Ask where to write something made of the focused curve's study.
    AskSave {
        /// What.
        product: Product,
        /// Name offered.
        name: String,
    },
    /// Read a file.
    Read(PathBuf),
    /// Read a bundled sample.
    ReadSample(usize),
    /// Read a table from text.
    ReadText(String),
    /// Read a scan again: its file, or, with other settings, the same bytes.
    Reread {
        /// The scan as it is.
        loaded: LoadedScan,
        /// Whether to look at the file anew.
        from_disk: bool,
    },
    /// Read these bytes again.
    ReadBytes(Problem),
    /// Write something made of the focused curve's study.
    Write {
        /// What.
        product: Product,
        /// Where.
        path: PathBuf,
        /// Whether a file there may be replaced.
        overwrite: bool,
    },
    /// Put text on the clipboard.
    Copy(String),
    /// Put the picture as it is seen on the clipboard.
    CopyPicture,
    /// What the program remembers has changed.
    Prefer,
    /// Resample the residuals of the fits shown.
    Resample,
    /// List the folder that the path window names.
    ListFolder(String),
    /// Ask where to save the study.
    AskSaveStudy(String),
    /// Write the study.
    WriteStudy {
        /// Where.
        path: PathBuf,
        /// Whether any file there may be replaced.
        overwrite: bool,
        /// Check sum of the file that may be replaced.
        known: Option<String>,
        /// What is saved.
        work: Box<Work>,
    },
    /// Give up the computation under way.
    Stop,
    /// Forget the files used last.
    ForgetRecent,
    /// Take unsaved work of an earlier window into this one.
    Restore(u64),
    /// Delete unsaved work of an earlier window.
    Discard(u64),
    /// Leave unsaved work of earlier windows for later.
    Leave,
    /// Something about how files are read.
    Reading(ReadingEffect),
}

/// Carries one command out and says what else has to happen.
pub fn apply(command: Command, state: &mut State) -> Vec<Effect> {
    if command.is_enabled(state).is_err() {
        return Vec::new();
    }
    if let Some(effects) = super::saving::apply_saving(&command, state)
        .or_else(|| super::preferences::apply_preference(&command, state))
    {
        return effects;
    }
    match command {
        Command::Open => return vec![Effect::AskOpen],
        Command::OpenPath(path) => {
            // Who reads a refused file again wants to see what comes of it now.
            if state.view.problem.as_ref().is_some_and(|p| p.path.as_ref() == Some(&path)) {
                reading::next_problem(state);
            }
            return vec![Effect::Read(path)];
        }
        // Another way of reading logs that are a scan already.
        Command::Reading(ReadingCommand::ReadLogs)
            if let Some((scan, read)) =
                state.view.reading.logs.as_ref().and_then(|l| Some((l.of?, l.read.clone()))) =>
        {
            return apply(Command::ReadWith { scan, read }, state);
        }
        Command::Reading(command) => {
            return reading::apply(command, state).map(Effect::Reading).into_iter().collect();
        }
        Command::ShowColumns(Some(key)) => {
            return reading::show_columns(key, state).map(Effect::Reading).into_iter().collect();
        }
        Command::OpenSample(index) => return vec![Effect::ReadSample(index)],
        Command::ReadAgain(read) => {
            if let Some(problem) = &mut state.view.problem {
                problem.start.read = read;
                return vec![Effect::ReadBytes(problem.clone())];
            }
        }
        Command::PasteTable(text) => return vec![Effect::ReadText(text)],
        Command::Reload(key) => {
            state.view.changed.remove(&key);
            let loaded = state.document.scan(key).cloned();
            return loaded.map(|loaded| Effect::Reread { loaded, from_disk: true }).into_iter().collect();
        }
        Command::ReadWith { scan, read } => {
            let loaded = state.document.scan(scan).cloned();
            return loaded
                .map(|mut loaded| {
                    loaded.start.read = read;
                    Effect::Reread { loaded, from_disk: false }
                })
                .into_iter()
                .collect();
        }
        Command::Export(product) => {
            return vec![Effect::AskSave { product, name: file_name(state, product) }];
        }
        Command::ExportTo { product, path, overwrite } => {
            return vec![Effect::Write { product, path, overwrite }];
        }
        Command::StopComputing => {
            state.view.stopped = state.document.focused().map(|(key, _, s)| (key, s.clone()));
            state.view.progress = None;
            return vec![Effect::Stop];
        }
        Command::ComputeAgain => state.view.stopped = None,
        Command::CopyReport => {
            if let Some(report) = state.report().map(str::to_owned) {
                state.view.message = Some(Message::told("Report copied."));
                return vec![Effect::Copy(report)];
            }
        }
        Command::CopyPicture => return vec![Effect::CopyPicture],
        Command::CopyPage(form) => {
            let name = state.view.page.name();
            let text = super::sheets::page_text(state, form);
            let told =
                if text.is_some() { format!("{name} copied.") } else { format!("{name} has no table.") };
            state.view.message = Some(Message::told(told));
            return text.map(Effect::Copy).into_iter().collect();
        }
        Command::CopyComparison(form) => {
            let text = super::panels::comparison_text(state, form);
            state.view.message = Some(Message::told("Comparison copied."));
            return vec![Effect::Copy(text)];
        }
        Command::CopyParameters | Command::CopyParametersLatex => {
            let latex = command == Command::CopyParametersLatex;
            if let Some(text) = parameters_text(state, latex) {
                let kind = if latex { "LaTeX" } else { "text" };
                state.view.message = Some(Message::told(format!("Parameters copied as {kind}.")));
                return vec![Effect::Copy(text)];
            }
        }
        Command::Resample => return vec![Effect::Resample],
        Command::StopResampling => {
            if let Resampling::Running(progress) = &state.resampling {
                progress.stop();
            }
        }
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
    state.view.message = name.map(|n| Message::told(format!("{verb}: {n}.")));
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
        Command::StepCurve(step) => {
            let keys: Vec<CurveKey> = state.document.settings.keys().copied().collect();
            let here = keys.iter().position(|k| Some(*k) == state.document.focus).unwrap_or(0);
            let next = (here as i64 + i64::from(*step)).rem_euclid(keys.len().max(1) as i64) as usize;
            state.document.focus = keys.get(next).copied();
            forget_level(state);
        }
        Command::CloseScan => close_scan(state),
        Command::SetWindow { window, resting } => {
            if window.from.is_finite() && window.to.is_finite() && window.from < window.to {
                hold_view(state, Preset::FitWindow);
                edit(state, "move the fit window", !resting, |s| s.fits.window = Some(*window));
            }
        }
        Command::ResetSettings => edit(state, "default settings", false, |s| {
            *s = Settings { read: s.read.clone(), curve: s.curve.clone(), ..Settings::default() };
        }),
        Command::ResetWindow => edit(state, "default fit window", false, |s| s.fits.window = None),
        Command::SetTolerance { tolerance, resting } => {
            if *tolerance > 0.0 && *tolerance < 1.0 {
                edit(state, "change the tolerance", !resting, |s| s.reach.tolerance = *tolerance);
            }
        }
        Command::SetAbsoluteTolerance { tolerance, resting } => {
            if tolerance.value > 0.0 && tolerance.value.is_finite() {
                edit(state, "change the absolute tolerance", !resting, |s| s.reach.absolute = *tolerance);
            }
        }
        Command::SetLevelTolerance { tolerance_per_cm, resting } => {
            if tolerance_per_cm.is_none_or(|t| t.is_finite() && t > 0.0) {
                edit(state, "change the tolerance of levels", !resting, |s| {
                    s.reach.level_tolerance_per_cm = *tolerance_per_cm;
                });
            }
        }
        Command::SetSpacingTolerance { tolerance_per_cm, resting } => {
            if tolerance_per_cm.is_none_or(|t| t.is_finite() && t > 0.0) {
                edit(state, "change the tolerance of spacings", !resting, |s| {
                    s.reach.spacing_tolerance_per_cm = *tolerance_per_cm;
                });
            }
        }
        Command::SetThermal(thermal) => {
            let wanted = Settings { thermal: thermal.clone(), ..Settings::default() };
            if wanted.checked().is_ok() {
                edit(state, "change the thermal sums", false, |s| s.thermal.clone_from(thermal));
            }
        }
        Command::SetPublished { quantity, value } => {
            let Some(index) = Quantity::ALL.iter().position(|q| q == quantity) else { return true };
            if state.document.published[index] != *value {
                state.history.note("enter a published constant", &state.document, true);
                state.document.published[index] = *value;
            }
        }
        Command::SetAtoms(atoms) => {
            state.view.atoms_wanted = false;
            edit(state, "choose atoms", false, |s| {
                s.masses.atoms = Some(atoms.clone());
                s.masses.reduced_mass_u = None;
            });
        }
        Command::SetCharge(charge) => edit(state, "change the charge", true, |s| s.masses.charge = *charge),
        Command::SetReducedMass(mass) => {
            if mass.is_none_or(|m| m.is_finite() && m > 0.0) {
                edit(state, "give the reduced mass", true, |s| s.masses.reduced_mass_u = *mass);
            }
        }
        Command::SetAsymptote { energy, resting } => {
            if energy.is_none_or(f64::is_finite) {
                hold_view(state, Preset::WholeWell);
                edit(state, "energy of the separated atoms", !resting, |s| {
                    s.interpolation.asymptote = *energy
                });
            }
        }
        Command::SetLambda(lambda) => {
            let lambda = (*lambda).min(crate::settings::HIGHEST_LAMBDA);
            edit(state, "change Λ", true, |s| s.levels.lambda = lambda);
        }
        Command::SetRotation(all) => {
            if all.iter().all(|j| *j <= crate::settings::HIGHEST_J) {
                edit(state, "choose the J of the study", false, |s| s.levels.rotation.clone_from(all));
            }
        }
        Command::SetTailSensitivity(on) => {
            edit(state, "levels with moved tails", false, |s| s.levels.tail_sensitivity = *on);
        }
        Command::SetIsotopologues(pairs) => {
            edit(state, "choose isotopes", false, |s| s.isotopologues.clone_from(pairs));
        }
        Command::SetDegree(degree) => edit(state, "change the degree", false, |s| {
            for request in s.fits.requests.iter_mut().filter(|r| r.family == Family::Polynomial) {
                request.degree = Some(*degree);
            }
        }),
        Command::SetFits(requests) => {
            edit(state, "choose the fits", false, |s| s.fits.requests.clone_from(requests));
        }
        Command::SetWeighting(weights) => {
            edit(state, "weight the points", true, |s| s.fits.weights.clone_from(weights));
        }
        Command::SetAside(row) => edit(state, "set a point aside", false, |s| {
            s.kept.retain(|r| r != row);
            s.set_aside.retain(|a| a.row != *row);
            s.set_aside.push(SetAside { row: *row, reason: "set aside by hand".into() });
            s.set_aside.sort_by_key(|a| a.row);
        }),
        Command::SetRowsAside { rows, reason } => edit(state, "set points aside", false, |s| {
            s.kept.retain(|r| !rows.contains(r));
            let known: BTreeSet<usize> = s.set_aside.iter().map(|a| a.row).collect();
            let new = rows.iter().filter(|row| !known.contains(row));
            s.set_aside.extend(new.map(|&row| SetAside { row, reason: reason.clone() }));
            s.set_aside.sort_by_key(|a| a.row);
        }),
        Command::RestoreRows(rows) => edit(state, "use points again", false, |s| {
            s.set_aside.retain(|a| !rows.contains(&a.row));
        }),
        Command::SetNote { row, text } => edit(state, "write a note", true, |s| {
            s.notes.retain(|n| n.row != *row);
            if !text.is_empty() {
                s.notes.push(PointNote { row: *row, text: text.clone() });
                s.notes.sort_by_key(|n| n.row);
            }
        }),
        Command::SetReason { row, reason } => edit(state, "say why a point is set aside", true, |s| {
            if let Some(aside) = s.set_aside.iter_mut().find(|a| a.row == *row) {
                aside.reason.clone_from(reason);
            }
        }),
        Command::SetWeight { row, weight } => {
            if weight.is_finite() && *weight >= 0.0 {
                edit(state, "change a weight", true, |s| set_weight(&mut s.fits.weights, *row, *weight));
            }
        }
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

/// Gives one row a weight; weights that come from a rule are left to the rule.
fn set_weight(weights: &mut Weighting, row: usize, weight: f64) {
    if matches!(weights, Weighting::Equal {}) {
        *weights = Weighting::Point { rows: Vec::new(), others: 1.0, declared: false };
    }
    let Weighting::Point { rows, others, declared } = weights else { return };
    rows.retain(|r| r.row != row);
    if weight != *others {
        rows.push(RowWeight { row, weight });
        rows.sort_by_key(|r| r.row);
    }
    if rows.is_empty() && *others == 1.0 && !*declared {
        *weights = Weighting::Equal {};
    }
}

/// A region follows the results, but not while what it follows moves under the hand.
fn hold_view(state: &mut State, preset: Preset) {
    if state.zoom() == Zoom::Preset(preset)
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

pub(super) fn forget_level(state: &mut State) {
    state.view.hovered_level = None;
    state.view.pinned_level = None;
    state.view.kept_levels.clear();
    state.view.pointed_angstrom = None;
    state.view.selected_row = None;
    state.view.open_notice = None;
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
        Command::PinLevel(level) => {
            view.pinned_level = level;
            if level.is_none() {
                view.kept_levels.clear();
            }
        }
        Command::KeepLevel(v, keep) => keep_level(v, keep, state),
        Command::StepLevel(step) => step_level(step, state),
        Command::ShowJ(j) => show_j(j, state),
        Command::StepJ(step) => show_j(next_j(step, state), state),
        Command::ShowLevelsPart(part) => {
            view.page = Page::Levels;
            view.levels_part = part;
            view.comparison.open = false;
        }
        Command::PointAt(r) => point_at(r, state),
        Command::SelectPoint(row) => select_point(row, state),
        Command::NameAtoms => {
            view.panels.left = Some(true);
            view.atoms_wanted = true;
            view.atoms_asked += 1;
        }
        Command::ShowColumns(scan) => view.columns_of = scan,
        Command::OpenNotice(index) => view.open_notice = index,
        Command::ShowAllNotices(all) => view.all_notices = all,
        Command::ShowPage(page) => {
            view.page = page;
            view.comparison.open = false;
        }
        Command::ShowComparison(open) => view.comparison.open = open,
        Command::SetReference(reference) => view.comparison.reference = reference,
        Command::SortComparison(sort) => view.comparison.sort = sort,
        Command::SetAxes(axes) => view.axes = axes,
        Command::SetDensities(densities) => {
            let (low, high) = DensityView::HEIGHTS;
            let height = if densities.height.is_finite() { densities.height.clamp(low, high) } else { 1.0 };
            view.densities = DensityView { height, ..densities };
        }
        Command::SetKelvin(kelvin) => {
            let (low, high) = crate::thermal::TEMPERATURES_KELVIN;
            if kelvin.is_finite() {
                view.kelvin = Some(kelvin.clamp(low, high));
            }
        }
        Command::SetThermalView(thermal) => view.thermal = thermal,
        Command::ShowFitsPart(part) => view.fits_part = part,
        Command::SetRepeats(repeats) => {
            view.repeats = Some(repeats.clamp(2, BootstrapSettings::MOST_REPEATS));
        }
        Command::SetParameterUnits(units) => view.parameter_units = units,
        Command::ShowStrip(strip) => view.strip = strip,
        Command::ShowGauge(measure) => {
            view.strip = Strip::Gauge;
            view.gauge = measure;
        }
        Command::ToggleWhy => view.why_open = !view.why_open,
        Command::ShowLeft(open) => view.panels.left = Some(open),
        Command::ShowRight(open) => view.panels.right = Some(open),
        Command::ShowHints(shown) => view.hints = shown,
        Command::ShowSearch(open) => view.search = open.then(Search::default),
        Command::TypeSearch(text) => view.search = Some(Search { text, chosen: 0 }),
        Command::ChooseFound(line) => {
            if let Some(search) = &mut view.search {
                search.chosen = line;
            }
        }
        Command::ShowKeys(open) => view.keys_open = open,
        Command::ShowGuide(open) => view.guide = open,
        Command::ClosePathWindow => view.path_window = None,
        Command::DropProblem => reading::next_problem(state),
        Command::DismissMessage => view.message = None,
        _ => {}
    }
}

/// Only levels that are there are kept.
fn keep_level(v: usize, keep: bool, state: &mut State) {
    let is_there = state.study().is_some_and(|s| s.findings.levels.iter().any(|l| l.v == v));
    if keep && is_there {
        state.view.kept_levels.insert(v);
    } else {
        state.view.kept_levels.remove(&v);
    }
}

fn step_level(step: i32, state: &mut State) {
    let levels: Vec<usize> = state.levels_shown().iter().map(|l| l.v).collect();
    let here = state.view.pinned_level.map(|v| levels.partition_point(|l| *l < v));
    let next = here.map_or(0, |i| i.saturating_add_signed(step as isize)).min(levels.len().saturating_sub(1));
    if let Some(v) = levels.get(next) {
        state.view.pinned_level = Some(*v);
        state.view.hovered_level = None;
    }
}

/// Looks at another J. J below Λ does not exist; what is between is passed over.
fn show_j(j: u32, state: &mut State) {
    state.view.j = j.min(crate::settings::HIGHEST_J);
    state.view.hovered_level = None;
}

fn next_j(step: i32, state: &State) -> u32 {
    let lambda = state.document.focused().map_or(0, |(_, _, s)| s.levels.lambda);
    let next = state.view.j.saturating_add_signed(step);
    match (next > 0 && next < lambda, step > 0) {
        (false, _) => next,
        (true, true) => lambda,
        (true, false) => 0,
    }
}

/// Looks at a row of the scan, on its page and on the plot.
fn select_point(row: Option<usize>, state: &mut State) {
    state.view.selected_row = row;
    state.view.pointed_angstrom = None;
    let r = row.and_then(|row| {
        let points = &state.study()?.pictures.points;
        points.iter().find(|p| p.row == row).map(|p| p.at[0])
    });
    if let Some(r) = r {
        point_at(r, state);
    }
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

/// The parameters of all fits for the clipboard; none where no fit succeeded.
fn parameters_text(state: &State, latex: bool) -> Option<String> {
    let units = &state.view.parameter_units;
    let fits = state.study()?.findings.fits.iter().filter_map(|f| f.result.as_ref().ok());
    let one = |fit| if latex { parameters::latex(fit, units) } else { parameters::text(fit, units) };
    let texts: Vec<String> = fits.map(one).collect();
    (!texts.is_empty()).then(|| texts.join("\n"))
}

/// Name offered for something made of the focused curve's study.
fn file_name(state: &State, product: Product) -> String {
    let Some(study) = state.study() else { return format!("study{}", product.ending()) };
    let source = &study.findings.source;
    let stem = source.file_name.rsplit_once('.').map_or(source.file_name.as_str(), |(s, _)| s);
    let label: String =
        source.curve_label.chars().map(|c| if c.is_ascii_alphanumeric() { c } else { '_' }).collect();
    format!("{stem}_{label}{}", product.ending())
}

/// The scan and settings to be computed next, where what is shown is older than the settings: the curve in
/// focus first, then those compared with it.
pub fn wanted(state: &State) -> Option<(CurveKey, Arc<crate::scan::Scan>, Settings)> {
    let focus = state.document.focus.filter(|key| state.is_stale_of(*key) && !state.is_stopped());
    let compared = || {
        let keys = state.view.comparison.open.then(|| state.document.settings.keys())?;
        keys.copied().find(|key| state.is_stale_of(*key))
    };
    let key = focus.or_else(compared)?;
    let (loaded, settings) = (state.document.scan(key.scan)?, state.document.settings.get(&key)?);
    Some((key, Arc::clone(&loaded.scan), settings.clone()))
}
