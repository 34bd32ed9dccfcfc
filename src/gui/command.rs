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

    /// What a button or menu entry says.
    pub fn label(&self) -> String {
        match self {
            Self::Open => "Open …".into(),
            Self::Export(product) => product.label().into(),
            Self::SaveStudy => "Save study".into(),
            Self::SaveStudyAs => "Save study as …".into(),
            Self::SaveStudyTo { .. } => "Replace it".into(),
            Self::ReopenStudy => "Open it again".into(),
            Self::ForgetRecent => "Forget these".into(),
            Self::RestoreWork => "Restore".into(),
            Self::DiscardWork => "Discard".into(),
            Self::LeaveWork => "Not now".into(),
            Self::ResetSettings => "Default settings".into(),
            Self::StopComputing => "Stop".into(),
            Self::ComputeAgain => "Compute".into(),
            Self::CopyPicture => "Copy picture".into(),
            Self::CopyReport => "Copy report".into(),
            Self::OpenPath(path) => super::files::file_name_of(path),
            Self::Undo => "Undo".into(),
            Self::Redo => "Redo".into(),
            Self::OpenSample(i) => {
                super::samples::SAMPLES.get(*i).map_or_else(String::new, |s| s.title.into())
            }
            Self::Zoom(preset) => preset.name().into(),
            Self::ShowPage(page) => page.name().into(),
            Self::ShowStrip(strip) => strip.name().into(),
            Self::ShowGauge(GaugeMeasure::EnergyPercent) => "energy in percent".into(),
            Self::ShowGauge(GaugeMeasure::EnergyPerCm) => "energy in its unit".into(),
            Self::ShowGauge(GaugeMeasure::ForcePercent) => "force in percent".into(),
            Self::ShowGauge(GaugeMeasure::ForcePerCmAngstrom) => "force in its unit".into(),
            Self::ShowComparison(true) => "Compare …".into(),
            Self::ShowComparison(false) => "Picture".into(),
            Self::CopyComparison(form) | Self::CopyPage(form) => {
                let name = Form::ALL.iter().find(|(_, f)| f == form).map_or("", |(name, _)| name);
                format!("Copy as {name}")
            }
            Self::ShowFitsPart(part) => part.name().into(),
            Self::Resample => "Resample residuals".into(),
            Self::StopResampling => "Stop".into(),
            Self::CopyParameters => "Copy parameters as text".into(),
            Self::CopyParametersLatex => "Copy parameters as LaTeX".into(),
            Self::CloseScan => "Close scan".into(),
            Self::ResetWindow => "default".into(),
            Self::SetDark(true) => "Dark".into(),
            Self::SetDark(false) => "Light".into(),
            Self::ToggleWhy => "why?".into(),
            Self::SetAside(_) => "Set aside".into(),
            Self::Restore(_) => "Use again".into(),
            Self::PointAt(_) => "Show on plot".into(),
            Self::NameAtoms => "Name the atoms".into(),
            Self::ShowColumns(Some(_)) => "Columns …".into(),
            Self::Reload(_) => "Read again".into(),
            Self::SetAsymptote { energy: None, .. } => "assume it".into(),
            Self::DismissMessage => "Dismiss".into(),
            Self::ShowAllNotices(true) => "show all".into(),
            Self::ShowAllNotices(false) => "show fewer".into(),
            Self::StepCurve(step) if *step > 0 => "Next curve".into(),
            Self::StepCurve(_) => "Previous curve".into(),
            Self::StepLevel(step) if *step > 0 => "Level up".into(),
            Self::StepLevel(_) => "Level down".into(),
            Self::PinLevel(None) => "Let go of the level".into(),
            Self::KeepLevel(v, true) => format!("Keep v = {v} shown"),
            Self::KeepLevel(v, false) => format!("Let go of v = {v}"),
            Self::ShowJ(0) => "without rotation".into(),
            Self::StepJ(step) if *step > 0 => "Next J".into(),
            Self::StepJ(_) => "Previous J".into(),
            Self::SetTailSensitivity(true) => "Move the tail".into(),
            Self::SetTailSensitivity(false) => "Leave the tail".into(),
            Self::ShowLevelsPart(part) => part.name().into(),
            Self::ShowLeft(true) => "Open the left panel".into(),
            Self::ShowLeft(false) => "Fold the left panel".into(),
            Self::ShowRight(true) => "Open the right panel".into(),
            Self::ShowRight(false) => "Fold the right panel".into(),
            Self::SizeInterface(InterfaceSize::Larger) => "Larger interface".into(),
            Self::SizeInterface(InterfaceSize::Smaller) => "Smaller interface".into(),
            Self::SizeInterface(InterfaceSize::Usual) => "Usual size".into(),
            Self::SetStill(true) => "Reduce motion".into(),
            Self::SetStill(false) => "Allow motion".into(),
            Self::ShowHints(true) => "Show hints".into(),
            Self::ShowHints(false) => "Put hints away".into(),
            Self::ShowSearch(_) => "Commands …".into(),
            Self::ShowKeys(_) => "Keys and mouse".into(),
            Self::ShowGuide(_) => "User guide".into(),
            Self::Reading(command) => command.label().into(),
            Self::DropProblem => "Put away".into(),
            _ => String::new(),
        }
    }

    /// What it is called away from its place: in the search and on the sheet of shortcuts.
    pub fn name(&self) -> String {
        match self {
            Self::Zoom(preset) => format!("Look at {}", preset.name()),
            Self::ShowPage(page) => format!("Page {}", page.name()),
            Self::ShowStrip(strip) => format!("Strip {}", strip.name()),
            Self::ShowGauge(_) => format!("Gauge of the {}", self.label()),
            Self::ShowJ(0) => "Levels without rotation (J = 0)".into(),
            Self::ShowLevelsPart(part) => format!("Levels: {}", part.name()),
            Self::SetTailSensitivity(true) => "Levels with moved tails (tail sensitivity)".into(),
            Self::SetTailSensitivity(false) => "No levels with moved tails".into(),
            Self::SetDark(true) => "Dark theme".into(),
            Self::SetDark(false) => "Light theme".into(),
            Self::ResetWindow => "Default fit window".into(),
            Self::ToggleWhy => "Why: the reasons of the sentence".into(),
            Self::CopyPage(form) => {
                let name = Form::ALL.iter().find(|(_, f)| f == form).map_or("", |(name, _)| name);
                format!("Copy the page as {name}")
            }
            Self::ForgetRecent => "Forget the files used last".into(),
            Self::OpenSample(_) => format!("Sample {}", self.label()),
            Self::OpenPath(_) => format!("Open {}", self.label()),
            Self::Export(product) => format!("Export {}", product.label()),
            Self::ShowComparison(true) => "Compare curves …".into(),
            Self::ReopenStudy => "Open the study file again".into(),
            Self::DismissMessage => "Dismiss the message".into(),
            Self::ReadAgain(read) => {
                let length = read.length_unit.map_or("?", crate::units::LengthUnit::name);
                let energy = read.energy_unit.map_or("?", crate::units::EnergyUnit::name);
                format!("Read lengths in {length}, energies in {energy}")
            }
            Self::ShowAllNotices(true) => "Show all notices".into(),
            Self::ShowAllNotices(false) => "Show fewer notices".into(),
            Self::RestoreWork => "Restore unsaved work".into(),
            Self::DiscardWork => "Discard unsaved work".into(),
            Self::LeaveWork => "Leave unsaved work for later".into(),
            Self::StopComputing => "Stop computing".into(),
            Self::Reading(command) => command.name().into(),
            Self::DropProblem => "Put the refused file away".into(),
            _ => self.label(),
        }
    }

    /// What it does, for a tooltip.
    pub fn tooltip(&self) -> &'static str {
        match self {
            Self::Open => "Read a scan from a file. Files can also be dropped on the window.",
            Self::Export(product) => product.about(),
            Self::Undo => "Take the latest change back.",
            Self::Redo => "Do the change again that was taken back.",
            Self::SaveStudy => "Save scans, settings and view, to go on another time.",
            Self::SaveStudyAs => "Save scans, settings and view to another file.",
            Self::SaveStudyTo { .. } => "Save over the file that is there.",
            Self::ReopenStudy => "Read the study file as it is now; this can be undone.",
            Self::ForgetRecent => "Empty the list of files used last; the files stay.",
            Self::RestoreWork => "Take this work up again; this can be undone.",
            Self::DiscardWork => "Delete this work for good.",
            Self::LeaveWork => "It will be offered again when the program starts the next time.",
            Self::ResetSettings => {
                "Window, atoms, points set aside and all else of this curve as when it was opened."
            }
            Self::StopComputing => "Give up this computation; what is shown stays.",
            Self::ComputeAgain => "Compute with the settings as they are now.",
            Self::CopyReport => {
                "What broke off, with the settings, as text to send to the makers of the program."
            }
            Self::StepCurve(_) => "Look at another curve of the list.",
            Self::StepLevel(_) => "Walk the levels; the picture shows the one reached.",
            Self::PinLevel(_) => "Show no level.",
            Self::KeepLevel(_, true) => {
                "Its density stays on the plot while others are looked at. Shift and a click do the same."
            }
            Self::KeepLevel(_, false) => "Its density no longer stays on the plot.",
            Self::ShowJ(_) => "Show curve and levels of J = 0 again.",
            Self::StepJ(_) => "Effective potential V(r) + ℏ²[J(J + 1) − Λ²]/(2μr²) and levels of another J.",
            Self::SetTailSensitivity(true) => {
                "Solve again with C_n and the limit moved, and see how many levels stay."
            }
            Self::SetTailSensitivity(false) => "No longer solve with moved tails.",
            Self::ShowLevelsPart(LevelsPart::Table) => "The levels of the J shown, quasi-bound ones too.",
            Self::ShowLevelsPart(LevelsPart::Rotation) => {
                "E(v, J) of several J and the Dunham coefficients Y_kl fitted to them."
            }
            Self::ShowLevelsPart(LevelsPart::Limit) => {
                "Spacings up to dissociation (Birge and Sponer), how the levels end, what leans on the tail."
            }
            Self::ShowLevelsPart(LevelsPart::Isotopes) => "Levels of other isotopes on the same curve.",
            Self::ShowLeft(_) => "Curves, masses, fit window, tolerance.",
            Self::ShowRight(_) => "The pages of results.",
            Self::SizeInterface(_) => "Text, lines and controls together.",
            Self::SetStill(true) => "Nothing moves by itself: no fading, no blinking.",
            Self::SetStill(false) => "Fading and blinking as usual.",
            Self::ShowHints(_) => "Short hints on the picture: what can be taken hold of.",
            Self::ShowSearch(_) => "Every command by name.",
            Self::ShowGuide(_) => "What everything is and how it is used, with pictures.",
            Self::ShowKeys(_) => "Every shortcut, and what the mouse does on the picture.",
            Self::SetDark(_) => "How the window is coloured.",
            Self::OpenPath(_) => "Open this file.",
            Self::DismissMessage => "Put the message away.",
            Self::ReadAgain(_) => "Read the file that does not state its units with these.",
            Self::ShowAllNotices(_) => "How many notices are listed at once.",
            Self::Zoom(Preset::NearMinimum) => "The lowest six levels.",
            Self::Zoom(Preset::WholeWell) => "Everything up to the limit of the bound levels.",
            Self::Zoom(Preset::FitWindow) => "The window of the fits.",
            Self::Zoom(Preset::AllPoints) => "Every point of the scan.",
            Self::ShowPage(Page::Constants) => "Spectroscopic constants and energies.",
            Self::ShowPage(Page::Scan) => "Every point of the scan, as read.",
            Self::ShowPage(Page::Levels) => "Every level with its rotational constant and densities.",
            Self::ShowPage(Page::Fits) => "Parameters of the fits with their errors.",
            Self::ShowPage(Page::Reach) => "Where the parabola may be used, by every criterion.",
            Self::ShowStrip(Strip::Gauge) => "How far the curve departs from its parabola.",
            Self::ShowStrip(Strip::Residuals) => "Fitted minus scanned energies.",
            Self::ShowGauge(GaugeMeasure::EnergyPercent) => {
                "(V − Vₑ − ½ k x²)/(½ k x²), with k = V″(rₑ): what the energy reach is measured by."
            }
            Self::ShowGauge(GaugeMeasure::EnergyPerCm) => {
                "V − Vₑ − ½ k x² in the unit of the energy axis, against the absolute tolerance."
            }
            Self::ShowGauge(GaugeMeasure::ForcePercent) => {
                "(V′ − k x)/(k x): what the reach by force is measured by."
            }
            Self::ShowGauge(GaugeMeasure::ForcePerCmAngstrom) => {
                "V′ − k x in the units of the axes; the tolerance τ |k x| opens to both sides."
            }
            Self::ShowPage(Page::Thermal) => {
                "Partition function, heat capacity and displacements over temperature."
            }
            Self::ShowComparison(true) => {
                "All curves in one table, with differences to one of them or to published constants."
            }
            Self::ShowComparison(false) => "Show the picture of the curve in focus again.",
            Self::CopyComparison(_) => "Copy the table as it is shown.",
            Self::CopyPicture => {
                "Put the plot as it is seen on the clipboard, on white, for a text or a slide."
            }
            Self::CopyPage(Form::Text) => "Copy the tables of this page, tab-separated, with their units.",
            Self::CopyPage(Form::Csv) => "Copy the tables of this page as CSV, numbers with all digits.",
            Self::CopyPage(Form::Latex) => "Copy the tables of this page as LaTeX.",
            Self::ShowFitsPart(FitsPart::Parameters) => "Parameters of the fits with their errors.",
            Self::ShowFitsPart(FitsPart::Windows) => {
                "The fits over all windows: where their results stay the same."
            }
            Self::ShowFitsPart(FitsPart::Compare) => "Which of the fits the points support.",
            Self::Resample => "Standard errors by resampling the residuals of every fit and fitting anew.",
            Self::StopResampling => "End the resampling; nothing is kept of it.",
            Self::CopyParameters | Self::CopyParametersLatex => {
                "Copy the parameters of all fits to the clipboard, in the units chosen here."
            }
            Self::CloseScan => "Take this scan out of the window; the file stays.",
            Self::ResetWindow => "Take the default window again: within 15 % of rₑ, at least seven points.",
            Self::ToggleWhy => "What each part of the sentence rests on.",
            Self::SetAside(_) => "Leave this point out of curve and fits.",
            Self::Restore(_) => "Use this point again.",
            Self::ShowColumns(Some(_)) => "Which column is what, and in which unit.",
            Self::Reload(_) => "The file has changed on disk: read it again, with all settings kept.",
            Self::Reading(command) => command.tooltip(),
            Self::DropProblem => "Leave this file; the file stays as it is.",
            Self::NameAtoms => "Show where the atoms are named.",
            Self::SetAsymptote { energy: None, .. } => {
                "Let the program assume the energy of the separated atoms."
            }
            _ => "",
        }
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
