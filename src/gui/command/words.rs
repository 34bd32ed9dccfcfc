//! What every command is called where it stands, away from its place, and in its tooltip.

use super::{Command, InterfaceSize};
use crate::export::compare::Form;
use crate::figure::GaugeMeasure;
use crate::gui::state::{FitsPart, LevelsPart, Page, Preset, Strip};

impl Command {
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
            Self::OpenPath(path) => crate::gui::files::file_name_of(path),
            Self::Undo => "Undo".into(),
            Self::Redo => "Redo".into(),
            Self::OpenSample(i) => {
                crate::gui::samples::SAMPLES.get(*i).map_or_else(String::new, |s| s.title.into())
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
}
