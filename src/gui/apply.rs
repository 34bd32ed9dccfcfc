//! Carries commands out: the only place where the window's state changes.

mod document;
mod view;

use super::command::Command;
use super::product::Product;
use super::reading::{self, ReadingCommand, ReadingEffect};
pub use super::saving::*;
use super::session::Work;
use super::state::{CurveKey, LoadedScan, Message, Preset, Problem, Resampling, State, Zoom};
pub use super::take::*;
use crate::export::parameters;
use crate::settings::Settings;
use document::change_document;
use std::path::PathBuf;
use std::sync::Arc;
use view::change_view;
pub(super) use view::forget_level;

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

/// A region follows the results, but not while what it follows moves under the hand.
fn hold_view(state: &mut State, preset: Preset) {
    if state.zoom() == Zoom::Preset(preset)
        && let (Some(key), Some(bounds)) = (state.document.focus, state.bounds())
    {
        state.view.zoom.insert(key, Zoom::Free(bounds));
    }
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
