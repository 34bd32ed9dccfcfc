//! Everything the user can do, in one enum. Menu, buttons, shortcuts, drags and tests all speak it.

use super::densities::DensityView;
use super::product::Product;
use super::reading::ReadingCommand;
use super::state::{
    AxisView, CurveKey, FitsPart, LevelsPart, Page, Preset, Reference, Resampling, State, Strip, ThermalView,
};
use crate::export::compare::{Form, Quantity};
use crate::export::parameters::ParameterUnits;
use crate::figure::GaugeMeasure;
use crate::figure::geometry::Bounds;
use crate::fit::{FitRequest, Weighting, Window};
use crate::reach::AbsoluteTolerance;
use crate::scan::read::ReadSettings;
use crate::settings::Settings;
use crate::species::AtomChoice;
use crate::thermal::ThermalSettings;
use eframe::egui;
use egui::{Key, KeyboardShortcut, Modifiers};
use std::path::PathBuf;

mod words;

/// Something the user does.
#[derive(Clone, Debug, PartialEq)]
pub enum Command {
    /// Choose files to open.
    Open,
    /// Open this file.
    OpenPath(PathBuf),
    /// Open a bundled sample by its number.
    OpenSample(usize),
    /// Read the refused file again with these units.
    ReadAgain(ReadSettings),
    /// Read a table that was copied elsewhere.
    PasteTable(String),
    /// Read a scan's file again.
    Reload(u64),
    /// Look at the columns of a scan, or at none.
    ShowColumns(Option<u64>),
    /// Read a scan again with other columns or units.
    ReadWith {
        /// The scan.
        scan: u64,
        /// How it is read.
        read: ReadSettings,
    },
    /// Something about how files are read.
    Reading(ReadingCommand),
    /// Put the refused file away.
    DropProblem,
    /// Take the focused curve's scan out of the window.
    CloseScan,
    /// Look at another curve.
    Focus(CurveKey),
    /// Set the fit window; `resting` is false while an edge is being dragged.
    SetWindow {
        /// The window.
        window: Window,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// Take the default window again.
    ResetWindow,
    /// Set the tolerance of the reach (a fraction).
    SetTolerance {
        /// The tolerance.
        tolerance: f64,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// Set the absolute tolerance of the reach.
    SetAbsoluteTolerance {
        /// The tolerance.
        tolerance: AbsoluteTolerance,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// Set the tolerance of the reach by level in cm⁻¹; none: τ ω_e.
    SetLevelTolerance {
        /// The tolerance.
        tolerance_per_cm: Option<f64>,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// Set the tolerance of the reach by spacing in cm⁻¹; none: τ ω_e.
    SetSpacingTolerance {
        /// The tolerance.
        tolerance_per_cm: Option<f64>,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// How thermal averages are made.
    SetThermal(ThermalSettings),
    /// Name the two atoms.
    SetAtoms([AtomChoice; 2]),
    /// Set the molecule's charge, or take that of the file again.
    SetCharge(Option<i32>),
    /// Give the reduced mass directly (u), or take the atoms again.
    SetReducedMass(Option<f64>),
    /// Look at the buttons of the atoms.
    NameAtoms,
    /// Energy of the separated atoms in the unit and scale of the file, or the program's assumption again.
    SetAsymptote {
        /// The energy.
        energy: Option<f64>,
        /// Whether the hand has let go.
        resting: bool,
    },
    /// Which fits are made.
    SetFits(Vec<FitRequest>),
    /// How the points are weighted in fits.
    SetWeighting(Weighting),
    /// Show a part of the page of fits.
    ShowFitsPart(FitsPart),
    /// How often residuals are resampled.
    SetRepeats(usize),
    /// Errors of the fits by resampled residuals.
    Resample,
    /// No longer.
    StopResampling,
    /// In which units parameters are copied.
    SetParameterUnits(ParameterUnits),
    /// Copy the parameters of the fits as text.
    CopyParameters,
    /// Copy them as LaTeX.
    CopyParametersLatex,
    /// Degree of the polynomial fits.
    SetDegree(u32),
    /// Leave a row out.
    SetAside(usize),
    /// Use a row again.
    Restore(usize),
    /// Leave several rows out for one reason.
    SetRowsAside {
        /// The rows.
        rows: Vec<usize>,
        /// Why.
        reason: String,
    },
    /// Use several rows again.
    RestoreRows(Vec<usize>),
    /// Write a note on a row.
    SetNote {
        /// The row.
        row: usize,
        /// The note.
        text: String,
    },
    /// Say why a row is left out.
    SetReason {
        /// The row.
        row: usize,
        /// Why.
        reason: String,
    },
    /// Give a row a weight in the fits.
    SetWeight {
        /// The row.
        row: usize,
        /// Its weight.
        weight: f64,
    },
    /// Look at a row of the scan, or at none.
    SelectPoint(Option<usize>),
    /// A gesture has ended.
    Settle,
    /// Show a named region.
    Zoom(Preset),
    /// Show this region.
    SetBounds(Bounds),
    /// The pointer is over a level, or over none.
    HoverLevel(Option<usize>),
    /// Keep a level shown, or none.
    PinLevel(Option<usize>),
    /// Keep a level shown beside the others that are, or no longer.
    KeepLevel(usize, bool),
    /// Walk up (+1) or down (-1) the levels.
    StepLevel(i32),
    /// Show the effective potential and the levels of this J; 0: without rotation.
    ShowJ(u32),
    /// The next (+1) or the previous (-1) J.
    StepJ(i32),
    /// Λ of the electronic state.
    SetLambda(u32),
    /// The J whose levels the study lists.
    SetRotation(Vec<u32>),
    /// Whether the levels are computed again with moved tails.
    SetTailSensitivity(bool),
    /// The other isotopes solved on the same curve.
    SetIsotopologues(Vec<[AtomChoice; 2]>),
    /// Show a part of the page of levels.
    ShowLevelsPart(LevelsPart),
    /// Point at a bond length (angstrom) on the plot.
    PointAt(f64),
    /// Show a page of results.
    ShowPage(Page),
    /// Show curves side by side, or the picture again.
    ShowComparison(bool),
    /// Take differences to this, or to nothing.
    SetReference(Option<Reference>),
    /// Sort the curves side by side, the largest on top if true, or not at all.
    SortComparison(Option<(Quantity, bool)>),
    /// Enter a published constant, in the unit of the quantity, or take it away.
    SetPublished {
        /// Which.
        quantity: Quantity,
        /// Its value.
        value: Option<f64>,
    },
    /// Copy the curves side by side.
    CopyComparison(Form),
    /// Show other units, or displacements, on the axes of the plot.
    SetAxes(AxisView),
    /// Draw other densities over that of the level shown.
    SetDensities(DensityView),
    /// Look at another temperature, in K.
    SetKelvin(f64),
    /// What is shown of temperature.
    SetThermalView(ThermalView),
    /// Show a strip.
    ShowStrip(Strip),
    /// What the gauge measures.
    ShowGauge(GaugeMeasure),
    /// Show or hide the reasons of the sentence.
    ToggleWhy,
    /// Show a notice in full, or none.
    OpenNotice(Option<usize>),
    /// Show all notices, or the first few.
    ShowAllNotices(bool),
    /// Open or fold the left panel.
    ShowLeft(bool),
    /// Open or fold the right panel.
    ShowRight(bool),
    /// Change to the dark or light theme.
    SetDark(bool),
    /// Take the latest change back.
    Undo,
    /// Do it again.
    Redo,
    /// Write something made of the focused curve's study to a file that is asked for.
    Export(Product),
    /// Write it to this file.
    ExportTo {
        /// What.
        product: Product,
        /// Where.
        path: PathBuf,
        /// Whether a file there may be replaced.
        overwrite: bool,
    },
    /// Save the study to its file, which is asked for the first time.
    SaveStudy,
    /// Save the study to a file that is asked for.
    SaveStudyAs,
    /// Save the study to this file.
    SaveStudyTo {
        /// Where.
        path: PathBuf,
        /// Whether a file there may be replaced.
        overwrite: bool,
    },
    /// Open the study's file again as it is now.
    ReopenStudy,
    /// Forget the files used last.
    ForgetRecent,
    /// Take up the unsaved work of an earlier window.
    RestoreWork,
    /// Delete the unsaved work of an earlier window.
    DiscardWork,
    /// Decide about unsaved work another time.
    LeaveWork,
    /// Take the default settings for the focused curve again.
    ResetSettings,
    /// Give up the computation under way.
    StopComputing,
    /// Take up again what was stopped.
    ComputeAgain,
    /// Copy the report of a computation that broke off.
    CopyReport,
    /// Copy the picture as it is seen.
    CopyPicture,
    /// Copy the tables of the page in front.
    CopyPage(Form),
    /// Change the text of the path window.
    TypePath(String),
    /// Close the path window.
    ClosePathWindow,
    /// Put the message away.
    DismissMessage,
    /// Look at the next (+1) or the previous (-1) curve.
    StepCurve(i32),
    /// Show the interface larger or smaller.
    SizeInterface(InterfaceSize),
    /// Let nothing move by itself, or let it again.
    SetStill(bool),
    /// Show or put away the hints on the picture.
    ShowHints(bool),
    /// Open or close the search of commands.
    ShowSearch(bool),
    /// Change what is searched for.
    TypeSearch(String),
    /// Go to a line of what was found.
    ChooseFound(usize),
    /// Open or close the sheet of shortcuts.
    ShowKeys(bool),
    /// Open or close the user guide.
    ShowGuide(bool),
}

/// A step in the size of the interface.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum InterfaceSize {
    /// A tenth larger.
    Larger,
    /// A tenth smaller.
    Smaller,
    /// As the desktop has it.
    Usual,
}

/// Control on most systems, Command on a Mac.
const fn with_command(key: Key) -> KeyboardShortcut {
    KeyboardShortcut::new(Modifiers::COMMAND, key)
}

impl Command {
    /// The commands that have a shortcut.
    pub fn with_shortcut() -> Vec<Self> {
        // Of two shortcuts with the same key the one with more modifiers stands first: it would be taken for the other.
        let mut commands = vec![
            Self::Open,
            Self::Reading(ReadingCommand::AskLogs),
            Self::SaveStudyAs,
            Self::SaveStudy,
            Self::Export(Product::Findings),
            Self::Export(Product::Report),
            Self::CopyPicture,
            Self::Redo,
            Self::Undo,
            Self::ShowSearch(true),
            Self::ShowGuide(true),
            Self::ShowKeys(true),
            Self::StepCurve(1),
            Self::StepCurve(-1),
            Self::SizeInterface(InterfaceSize::Larger),
            Self::SizeInterface(InterfaceSize::Smaller),
            Self::SizeInterface(InterfaceSize::Usual),
        ];
        commands.extend([Self::StepJ(1), Self::StepJ(-1)]);
        commands.extend(Preset::ALL.map(Self::Zoom));
        commands.extend(Page::ALL.map(Self::ShowPage));
        commands.push(Self::ShowComparison(true));
        commands
    }

    /// The keys that give it.
    pub fn shortcut(&self) -> Option<KeyboardShortcut> {
        Some(match self {
            Self::Open => with_command(Key::O),
            Self::Export(Product::Findings) => with_command(Key::E),
            Self::Export(Product::Report) => with_command(Key::R),
            Self::Reading(ReadingCommand::AskLogs) => with_command(Key::L),
            Self::CopyPicture => KeyboardShortcut::new(Modifiers::COMMAND.plus(Modifiers::SHIFT), Key::C),
            Self::SaveStudy => with_command(Key::S),
            Self::SaveStudyAs => KeyboardShortcut::new(Modifiers::COMMAND.plus(Modifiers::SHIFT), Key::S),
            Self::ShowSearch(true) => with_command(Key::K),
            Self::ShowKeys(true) => KeyboardShortcut::new(Modifiers::NONE, Key::F1),
            Self::ShowGuide(true) => KeyboardShortcut::new(Modifiers::SHIFT, Key::F1),
            Self::StepCurve(step) => with_command(if *step > 0 { Key::PageDown } else { Key::PageUp }),
            Self::SizeInterface(InterfaceSize::Larger) => with_command(Key::Plus),
            Self::SizeInterface(InterfaceSize::Smaller) => with_command(Key::Minus),
            Self::SizeInterface(InterfaceSize::Usual) => with_command(Key::Num0),
            // These three only while nothing else has the keyboard.
            Self::StepLevel(1) => KeyboardShortcut::new(Modifiers::NONE, Key::ArrowUp),
            Self::StepLevel(-1) => KeyboardShortcut::new(Modifiers::NONE, Key::ArrowDown),
            Self::PinLevel(None) => KeyboardShortcut::new(Modifiers::NONE, Key::Escape),
            Self::StepJ(step) => {
                let key = if *step > 0 { Key::ArrowUp } else { Key::ArrowDown };
                KeyboardShortcut::new(Modifiers::ALT, key)
            }
            Self::Undo => with_command(Key::Z),
            Self::Redo => KeyboardShortcut::new(Modifiers::COMMAND.plus(Modifiers::SHIFT), Key::Z),
            Self::ShowComparison(true) => KeyboardShortcut::new(Modifiers::ALT, Key::Num7),
            Self::Zoom(preset) => {
                let key = match preset {
                    Preset::NearMinimum => Key::Num1,
                    Preset::WholeWell => Key::Num2,
                    Preset::FitWindow => Key::Num3,
                    Preset::AllPoints => Key::Num4,
                };
                with_command(key)
            }
            Self::ShowPage(page) => {
                let key = match page {
                    Page::Scan => Key::Num1,
                    Page::Constants => Key::Num2,
                    Page::Levels => Key::Num3,
                    Page::Fits => Key::Num4,
                    Page::Reach => Key::Num5,
                    Page::Thermal => Key::Num6,
                };
                KeyboardShortcut::new(Modifiers::ALT, key)
            }
            _ => return None,
        })
    }

    /// Whether it can be given now.
    ///
    /// # Errors
    /// Why not, as the disabled button says on hover.
    pub fn is_enabled(&self, state: &State) -> Result<(), &'static str> {
        let need = |there: bool, reason: &'static str| if there { Ok(()) } else { Err(reason) };
        let study = state.study();
        match self {
            Self::Undo => need(state.history.undo_name().is_some(), "Nothing to take back."),
            Self::Redo => need(state.history.redo_name().is_some(), "Nothing was taken back."),
            Self::Export(_) | Self::ExportTo { .. } | Self::CopyPicture => {
                need(study.is_some(), "No findings yet.")?;
                need(!state.is_stale(), "The findings are being computed.")
            }
            Self::SaveStudy | Self::SaveStudyAs | Self::SaveStudyTo { .. } => {
                need(!state.document.scans.is_empty(), "There is nothing to save.")
            }
            Self::ReopenStudy => {
                need(state.kept.contains_key(&state.document.origin), "This study is not kept in a file yet.")
            }
            Self::StepCurve(_) => need(state.document.settings.len() > 1, "There is no other curve."),
            Self::PinLevel(None) => need(
                state.view.pinned_level.is_some() || !state.view.kept_levels.is_empty(),
                "No level is kept.",
            ),
            Self::ToggleWhy => {
                need(study.is_some_and(|s| !s.pictures.sentence.why.is_empty()), "There is no sentence yet.")
            }
            Self::ShowHints(true) => need(study.is_some(), "There is no picture yet."),
            Self::Reading(command) => command.is_enabled(state),
            Self::DropProblem => need(state.view.problem.is_some(), "No file was refused."),
            Self::DismissMessage => need(state.view.message.is_some(), "There is no message."),
            Self::ForgetRecent => need(!state.recent.is_empty(), "The list is empty."),
            Self::RestoreWork | Self::DiscardWork | Self::LeaveWork => {
                need(!state.leftovers.is_empty(), "No unsaved work was found.")
            }
            Self::ResetSettings => need(
                state.document.focused().is_some_and(|(_, _, s)| {
                    let (read, curve) = (s.read.clone(), s.curve.clone());
                    *s != Settings { read, curve, ..Settings::default() }
                }),
                "These are the default settings.",
            ),
            Self::StopComputing => {
                need(state.is_stale() && !state.is_stopped(), "Nothing is being computed.")
            }
            Self::ComputeAgain => need(state.is_stopped(), "Nothing was stopped."),
            Self::CopyReport => need(state.report().is_some(), "Nothing broke off."),
            Self::CopyPage(_) => need(study.is_some(), "No results yet."),
            Self::CopyParameters | Self::CopyParametersLatex => need(
                study.is_some_and(|s| s.findings.fits.iter().any(|f| f.result.is_ok())),
                "No fit succeeded.",
            ),
            Self::Resample => {
                need(!matches!(state.resampling, Resampling::Running(_)), "Under way.")?;
                need(!state.is_stale(), "The fits are being computed.")?;
                need(
                    study.is_some_and(|s| s.findings.fits.iter().any(|f| f.result.is_ok())),
                    "No fit succeeded.",
                )
            }
            Self::StopResampling => need(matches!(state.resampling, Resampling::Running(_)), "Nothing runs."),
            Self::Zoom(preset) => need(state.region(*preset).is_some(), "This study has no such region."),
            Self::CloseScan => need(state.document.focus.is_some(), "No scan is open."),
            Self::ShowComparison(_) | Self::CopyComparison(_) => {
                need(!state.document.settings.is_empty(), "No curve is open.")
            }
            Self::ResetWindow => need(
                state.document.focused().is_some_and(|(_, _, s)| s.fits.window.is_some()),
                "This is the default window.",
            ),
            Self::StepLevel(_) => {
                need(study.is_some_and(|s| !s.findings.levels.is_empty()), "There are no levels.")
            }
            Self::ShowJ(0) => need(state.view.j > 0, "There is no rotation shown."),
            Self::StepJ(step) => {
                need(study.is_some_and(|s| !s.findings.levels.is_empty()), "There are no levels.")?;
                need(*step > 0 || state.view.j > 0, "This is the lowest J.")
            }
            Self::SetTailSensitivity(_) | Self::SetRotation(_) | Self::SetIsotopologues(_) => {
                need(state.document.focus.is_some(), "No scan is open.")
            }
            _ => Ok(()),
        }
    }
}
