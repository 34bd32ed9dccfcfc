//! Everything the user can do, in one enum. Menu, buttons, shortcuts, drags and tests all speak it.

use super::densities::DensityView;
use super::product::Product;
use super::state::{AxisView, CurveKey, Page, Preset, Reference, State, Strip};
use crate::export::compare::{Form, Quantity};
use crate::figure::geometry::Bounds;
use crate::fit::Window;
use crate::scan::read::ReadSettings;
use crate::species::AtomChoice;
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
    /// Name the two atoms.
    SetAtoms([AtomChoice; 2]),
    /// Set the molecule's charge.
    SetCharge(i32),
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
    /// Degree of the polynomial fits.
    SetDegree(u32),
    /// Leave a row out.
    SetAside(usize),
    /// Use a row again.
    Restore(usize),
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
    /// Walk up (+1) or down (-1) the levels.
    StepLevel(i32),
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
    /// Show a strip.
    ShowStrip(Strip),
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
    /// Copy the constants as text.
    CopyConstants,
    /// Change the text of the path window.
    TypePath(String),
    /// Close the path window.
    ClosePathWindow,
    /// Put the message away.
    DismissMessage,
}

/// Control on most systems, Command on a Mac.
const fn with_command(key: Key) -> KeyboardShortcut {
    KeyboardShortcut::new(Modifiers::COMMAND, key)
}

impl Command {
    /// The commands that have a shortcut.
    pub fn with_shortcut() -> Vec<Self> {
        let mut commands = vec![
            Self::Open,
            Self::Export(Product::Findings),
            Self::Export(Product::Report),
            Self::Redo,
            Self::Undo,
        ];
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
            Self::Undo => "Undo".into(),
            Self::Redo => "Redo".into(),
            Self::OpenSample(i) => {
                super::samples::SAMPLES.get(*i).map_or_else(String::new, |s| s.title.into())
            }
            Self::Zoom(preset) => preset.name().into(),
            Self::ShowPage(page) => page.name().into(),
            Self::ShowStrip(strip) => strip.name().into(),
            Self::CopyConstants => "Copy as text".into(),
            Self::ShowComparison(true) => "Compare …".into(),
            Self::ShowComparison(false) => "Picture".into(),
            Self::CopyComparison(form) => {
                let name = Form::ALL.iter().find(|(_, f)| f == form).map_or("", |(name, _)| name);
                format!("Copy as {name}")
            }
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
            _ => String::new(),
        }
    }

    /// What it does, for a tooltip.
    pub fn tooltip(&self) -> &'static str {
        match self {
            Self::Open => "Read a scan from a file. Files can also be dropped on the window.",
            Self::Export(product) => product.about(),
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
            Self::ShowPage(Page::Thermal) => {
                "Partition function, heat capacity and displacements over temperature."
            }
            Self::ShowComparison(true) => {
                "All curves in one table, with differences to one of them or to published constants."
            }
            Self::ShowComparison(false) => "Show the picture of the curve in focus again.",
            Self::CopyComparison(_) => "Copy the table as it is shown.",
            Self::CopyConstants => "Copy constants, energies and masses to the clipboard.",
            Self::CloseScan => "Take this scan out of the window; the file stays.",
            Self::ResetWindow => "Take the default window again: within 15 % of rₑ, at least seven points.",
            Self::ToggleWhy => "What each part of the sentence rests on.",
            Self::SetAside(_) => "Leave this point out of curve and fits.",
            Self::Restore(_) => "Use this point again.",
            Self::ShowColumns(Some(_)) => "Which column is what, and in which unit.",
            Self::Reload(_) => "The file has changed on disk: read it again, with all settings kept.",
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
            Self::Export(_) | Self::ExportTo { .. } => {
                need(study.is_some(), "No findings yet.")?;
                need(!state.is_stale(), "The findings are being computed.")
            }
            Self::CopyConstants => need(study.is_some(), "No constants yet."),
            Self::Zoom(preset) => need(
                study.is_some_and(|s| preset.bounds(&s.pictures).is_some()),
                "This study has no such region.",
            ),
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
            _ => Ok(()),
        }
    }
}
