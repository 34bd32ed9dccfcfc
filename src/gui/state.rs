//! What the window knows: the document (undoable), the view (not), and results (derived).

use super::command::Command;
use super::densities::DensityView;
pub use super::extras::{Resampling, Rotation, Windows};
use super::history::History;
use super::meaning::Meaning;
use super::preferences::Preferences;
use super::product::Product;
use super::reading::{LogSet, Reading, ReadingCommand};
pub use super::view::{
    AxisView, Comparison, FitsPart, LevelsPart, Page, Preset, Reference, Strip, ThermalView, Zoom,
};
use crate::export::compare::Quantity;
use crate::export::parameters::ParameterUnits;
use crate::figure::geometry::Bounds;
use crate::figure::{GaugeMeasure, Ladders, LevelPicture, Pictures, PlotPoint, RotationPicture};
use crate::findings::Findings;
use crate::fit::Window;
use crate::scan::Scan;
use crate::scan::read::Preview;
use crate::settings::Settings;
use crate::study::RotatingLevels;
use std::collections::{BTreeMap, BTreeSet};
use std::path::PathBuf;
use std::sync::Arc;
use std::time::SystemTime;

/// One curve: a scan by its serial number and an energy column of it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct CurveKey {
    /// Serial number of the scan in this window.
    pub scan: u64,
    /// Index of the energy column.
    pub column: usize,
}

/// A file that was read.
#[derive(Clone, Debug)]
pub struct LoadedScan {
    /// Serial number in this window.
    pub key: u64,
    /// The scan.
    pub scan: Arc<Scan>,
    /// Where it came from; none for samples.
    pub path: Option<PathBuf>,
    /// What was read.
    pub bytes: Arc<[u8]>,
    /// In the place of `bytes`: the text logs that were read, a point each.
    pub logs: Option<Arc<LogSet>>,
    /// When the file was last changed as it was read.
    pub modified: Option<SystemTime>,
    /// Whether it came with the program.
    pub is_sample: bool,
    /// The settings that its studies start from; how it was read is among them.
    pub start: Settings,
}

/// What is undone and redone: the scans, the curve in focus, the settings of every curve.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Document {
    /// The scans, in order of loading.
    pub scans: Vec<LoadedScan>,
    /// The curve in focus.
    pub focus: Option<CurveKey>,
    /// Settings of every curve.
    pub settings: BTreeMap<CurveKey, Settings>,
    /// Published constants to compare with, in the order of [`Quantity::ALL`] and in its units.
    pub published: [Option<f64>; Quantity::ALL.len()],
    /// Which study this is, counted in this window: 0 until a study file was opened.
    pub origin: u64,
}

impl PartialEq for LoadedScan {
    fn eq(&self, other: &Self) -> bool {
        (self.key, self.modified, self.is_sample) == (other.key, other.modified, other.is_sample)
            && self.path == other.path
            && self.scan.sha256 == other.scan.sha256
            && self.start == other.start
    }
}

impl Document {
    /// Whether scans and settings are the same; the curve in focus does not matter.
    pub fn holds_the_same(&self, other: &Self) -> bool {
        self.settings == other.settings && self.scans == other.scans && self.published == other.published
    }

    /// The scan with this serial number.
    pub fn scan(&self, key: u64) -> Option<&LoadedScan> {
        self.scans.iter().find(|s| s.key == key)
    }

    /// The name of a curve, after its file where `with_file`.
    pub fn curve_name(&self, key: CurveKey, with_file: bool) -> String {
        let Some(scan) = self.scan(key.scan) else { return String::new() };
        let label = scan.scan.energies.get(key.column).map_or("", |e| e.label.as_str());
        if with_file { format!("{} · {label}", scan.scan.file_name) } else { label.to_owned() }
    }

    /// The scan, settings and key of the curve in focus.
    pub fn focused(&self) -> Option<(CurveKey, &LoadedScan, &Settings)> {
        let key = self.focus?;
        Some((key, self.scan(key.scan)?, self.settings.get(&key)?))
    }
}

/// A short message to the user.
#[derive(Clone, Debug, PartialEq)]
pub struct Message {
    /// The text.
    pub text: String,
    /// Whether it tells of a failure.
    pub failure: bool,
    /// What can be done about it.
    pub action: Option<Command>,
}

impl Message {
    /// Words that tell of no failure.
    pub fn told(text: impl Into<String>) -> Self {
        Self { text: text.into(), failure: false, action: None }
    }
}

/// A study that the user keeps in a file.
#[derive(Clone, Debug)]
pub struct KeptStudy {
    /// Where.
    pub path: PathBuf,
    /// Check sum of what was last read from or written to it.
    pub sha256: Option<String>,
    /// What it holds, if that is known.
    pub saved: Option<Document>,
    /// When it was last changed as it was read or written.
    pub modified: Option<SystemTime>,
}

/// Work that an earlier window left unsaved.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Leftover {
    /// Its number in this window.
    pub id: u64,
    /// What it is about, in words.
    pub text: String,
}

/// What would settle a refusal.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub enum Asks {
    /// Another file.
    #[default]
    Nothing,
    /// Units.
    Units,
    /// Two of these atoms, between which the bond is; each with its number.
    Bond(Vec<String>),
}

/// A file that was refused, with all that is needed to try again.
#[derive(Clone, Debug)]
pub struct Problem {
    /// File name without folder.
    pub file_name: String,
    /// Where it is, where known.
    pub path: Option<PathBuf>,
    /// Its bytes, where they could be read.
    pub bytes: Option<Arc<[u8]>>,
    /// What is wrong and what to do.
    pub text: String,
    /// The settings it was read with, the units chosen so far among them.
    pub start: Settings,
    /// When the file was last changed.
    pub modified: Option<SystemTime>,
    /// The scan that it would be again, where one was read in another way.
    pub of: Option<u64>,
    /// What would settle it.
    pub asks: Asks,
    /// What it would mean in each unit, where that is what is missing.
    pub meanings: Vec<Meaning>,
    /// Its beginning; none where it could not be read at all.
    pub preview: Option<Preview>,
}

impl Problem {
    /// The command that searches its folder as text logs.
    pub fn as_logs(&self) -> Option<Command> {
        let folder = self.path.as_ref()?.parent().filter(|_| self.asks == Asks::Nothing)?;
        Some(Command::Reading(ReadingCommand::OpenLogs(vec![folder.to_owned()])))
    }
}

/// Which side panels are open; none: by the room there is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct SidePanels {
    /// The left panel.
    pub left: Option<bool>,
    /// The right panel.
    pub right: Option<bool>,
}

/// What is seen, not undoable.
#[derive(Clone, Debug, Default)]
pub struct ViewState {
    /// The page on the right.
    pub page: Page,
    /// The part of the page of fits.
    pub fits_part: FitsPart,
    /// The part of the page of levels.
    pub levels_part: LevelsPart,
    /// The J whose effective potential and levels are shown; 0: without rotation.
    pub j: u32,
    /// How often residuals are resampled; none: as often as by default.
    pub repeats: Option<usize>,
    /// Units in which parameters are copied.
    pub parameter_units: ParameterUnits,
    /// The strip under the plot.
    pub strip: Strip,
    /// What the gauge measures.
    pub gauge: GaugeMeasure,
    /// Curves side by side.
    pub comparison: Comparison,
    /// Whether the user guide is open.
    pub guide: bool,
    /// What the axes of the plot show.
    pub axes: AxisView,
    /// What is drawn over the density of the level shown.
    pub densities: DensityView,
    /// The temperature looked at in K; none: 298.15 K.
    pub kelvin: Option<f64>,
    /// What is shown of temperature.
    pub thermal: ThermalView,
    /// Zoom of every curve looked at.
    pub zoom: BTreeMap<CurveKey, Zoom>,
    /// The level under the pointer.
    pub hovered_level: Option<usize>,
    /// The level kept by a click.
    pub pinned_level: Option<usize>,
    /// Levels kept shown beside it.
    pub kept_levels: BTreeSet<usize>,
    /// A bond length pointed at, in angstrom.
    pub pointed_angstrom: Option<f64>,
    /// The panels.
    pub panels: SidePanels,
    /// The row of the scan looked at.
    pub selected_row: Option<usize>,
    /// Whether the atoms are asked for, and how often they were.
    pub atoms_wanted: bool,
    /// Every request for the atoms moves the focus there once.
    pub atoms_asked: u32,
    /// Scans whose files have changed on disk since they were read.
    pub changed: BTreeSet<u64>,
    /// The scan whose columns are being looked at.
    pub columns_of: Option<u64>,
    /// How files are read.
    pub reading: Reading,
    /// The notice shown in full, counted from the top.
    pub open_notice: Option<usize>,
    /// Whether all notices are shown.
    pub all_notices: bool,
    /// Whether the reasons of the sentence are shown.
    pub why_open: bool,
    /// The latest message.
    pub message: Option<Message>,
    /// A file that was refused.
    pub problem: Option<Problem>,
    /// The path window, where the desktop offers no dialog.
    pub path_window: Option<PathWindow>,
    /// Whether the hints are shown.
    pub hints: bool,
    /// The search of commands, where it is open.
    pub search: Option<Search>,
    /// Whether the sheet of shortcuts is open.
    pub keys_open: bool,
    /// Whether new results are late, so that the older ones are marked.
    pub late: bool,
    /// Work that takes long.
    pub progress: Option<Progress>,
    /// What was stopped; it is not begun again by itself.
    pub stopped: Option<(CurveKey, Settings)>,
}

/// The search of commands.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Search {
    /// What was typed.
    pub text: String,
    /// The line that Enter takes.
    pub chosen: usize,
}

impl ViewState {
    /// The temperature looked at in K.
    pub fn kelvin(&self) -> f64 {
        self.kelvin.unwrap_or(298.15)
    }

    /// Whether the density at the temperature looked at is drawn on the plot.
    pub fn shows_thermal_density(&self) -> bool {
        self.page == Page::Thermal && self.thermal.density
    }

    /// Whether the fits over all windows are in sight.
    pub fn looks_at_windows(&self) -> bool {
        self.page == Page::Fits && self.fits_part == FitsPart::Windows
    }

    /// How often residuals are resampled.
    pub fn repeats(&self) -> usize {
        self.repeats.unwrap_or(crate::fit::BootstrapSettings::default().repeats)
    }
}

/// What a path is asked for.
#[derive(Clone, Debug, PartialEq)]
pub enum PathPurpose {
    /// A file to open.
    Open,
    /// Where something made of a study goes.
    Write(Product),
    /// Where a study goes.
    SaveStudy,
    /// A folder of text logs.
    Logs,
}

/// The built-in path window.
#[derive(Clone, Debug, PartialEq)]
pub struct PathWindow {
    /// What for.
    pub purpose: PathPurpose,
    /// The text typed so far.
    pub text: String,
    /// Entries of the folder named by the text, folders with a trailing slash.
    pub entries: Vec<String>,
}

/// A finished study with its pictures.
#[derive(Clone, Debug)]
pub struct Study {
    /// The findings.
    pub findings: Arc<Findings>,
    /// What is drawn of them.
    pub pictures: Arc<Pictures>,
}

/// What came of a curve's latest computation.
#[derive(Clone, Debug)]
pub struct Outcome {
    /// The settings it was computed with.
    pub settings: Settings,
    /// The latest study that succeeded.
    pub study: Option<Study>,
    /// Why the latest one failed.
    pub failure: Option<Failure>,
}

/// Why a computation failed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Failure {
    /// In words.
    pub text: String,
    /// What to send to those who can mend it, where it is a fault of the program.
    pub report: Option<String>,
}

impl<T: Into<String>> From<T> for Failure {
    fn from(text: T) -> Self {
        Self { text: text.into(), report: None }
    }
}

/// Work that takes more than half a second.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Progress {
    /// Tenths of a second since it was asked for.
    pub tenths: u64,
    /// What is done now.
    pub step: String,
}

/// All that the window knows.
#[derive(Debug, Default)]
pub struct State {
    /// The document.
    pub document: Document,
    /// Its past and future.
    pub history: History,
    /// What is seen.
    pub view: ViewState,
    /// Results by curve.
    pub results: BTreeMap<CurveKey, Outcome>,
    /// The fits over all windows, as far as they were looked at.
    pub windows: Option<Windows>,
    /// The levels of the J looked at.
    pub rotation: Option<Rotation>,
    /// Errors by resampling.
    pub resampling: Resampling,
    /// The next serial number of a scan.
    pub next_scan: u64,
    /// Number of the study file opened last.
    pub next_origin: u64,
    /// Where the studies of this window are kept, by their number.
    pub kept: BTreeMap<u64, KeptStudy>,
    /// Files used last, the latest first.
    pub recent: Vec<PathBuf>,
    /// Unsaved work of earlier windows, the newest first.
    pub leftovers: Vec<Leftover>,
    /// What the program remembers; the list of files apart.
    pub preferences: Preferences,
}

impl State {
    /// The study shown: of the curve in focus, maybe computed with older settings.
    pub fn study(&self) -> Option<&Study> {
        self.results.get(&self.document.focus?)?.study.as_ref()
    }

    /// Whether what is shown was computed with other settings than those in force.
    pub fn is_stale(&self) -> bool {
        self.document.focus.is_some_and(|key| self.is_stale_of(key))
    }

    /// The same of any curve; false of one that is not there.
    pub fn is_stale_of(&self, key: CurveKey) -> bool {
        let (Some(loaded), Some(settings)) = (self.document.scan(key.scan), self.document.settings.get(&key))
        else {
            return false;
        };
        let of_this = |o: &Outcome| {
            o.settings == *settings
                && o.study.as_ref().is_none_or(|s| s.findings.source.sha256 == loaded.scan.sha256)
        };
        self.results.get(&key).is_none_or(|o| !of_this(o))
    }

    /// Why the latest computation of the focused curve failed, where it did.
    pub fn failure(&self) -> Option<&str> {
        Some(self.results.get(&self.document.focus?)?.failure.as_ref()?.text.as_str())
    }

    /// The report of that failure, where it is a fault of the program.
    pub fn report(&self) -> Option<&str> {
        self.results.get(&self.document.focus?)?.failure.as_ref()?.report.as_deref()
    }

    /// Whether the computation of what is in focus was stopped.
    pub fn is_stopped(&self) -> bool {
        let focused = self.document.focused();
        focused.is_some_and(|(key, _, s)| self.view.stopped.as_ref().is_some_and(|o| o.0 == key && o.1 == *s))
    }

    /// Whether what is shown has to be marked as older than the settings. A result that comes at once is not
    /// announced: the window would flicker under the hand.
    pub fn looks_old(&self) -> bool {
        self.failure().is_some() || self.is_stale() && (self.view.late || self.is_stopped())
    }

    /// The window in force in the unit of the scan.
    pub fn window(&self) -> Option<Window> {
        let (_, loaded, settings) = self.document.focused()?;
        let unit = loaded.scan.length_unit;
        // In the scan's own unit, in which points are compared and edges snap.
        settings
            .fits
            .window
            .map(|window| window.converted(unit))
            .or_else(|| Some(self.study()?.pictures.window?.converted(unit)))
    }

    /// Whether a point lies in the window in force, compared as the fits compare.
    pub fn in_window(&self, point: &PlotPoint) -> bool {
        let Some((_, loaded, settings)) = self.document.focused() else { return false };
        let of_study = || self.study().and_then(|s| s.pictures.window);
        let window = settings.fits.window.or_else(of_study);
        window.is_none_or(|w| w.contains(point.r_as_read, loaded.scan.length_unit))
    }

    /// How many points in use the window in force holds.
    pub fn points_in_window(&self) -> usize {
        let points = self.study().map_or(&[][..], |s| &s.pictures.points);
        points.iter().filter(|p| p.set_aside.is_none() && self.in_window(p)).count()
    }

    /// The fits over all windows of the curve in focus, and whether they belong to the study shown.
    pub fn windows(&self) -> Option<(&Windows, bool)> {
        let study = self.study()?;
        let windows = self.windows.as_ref()?;
        let (ours, theirs) = (&study.findings.source, &windows.findings.source);
        let same_curve = ours.sha256 == theirs.sha256 && ours.curve == theirs.curve;
        same_curve.then(|| (windows, std::sync::Arc::ptr_eq(&study.findings, &windows.findings)))
    }

    /// The levels of the J looked at with what they look like: of the curve in focus, maybe of older settings or of
    /// the J before.
    pub fn rotation(&self) -> Option<&(RotatingLevels, RotationPicture)> {
        if self.view.j == 0 {
            return None;
        }
        let (ours, rotation) = (&self.study()?.findings.source, self.rotation.as_ref()?);
        let theirs = &rotation.findings.source;
        let same_curve = ours.sha256 == theirs.sha256 && ours.curve == theirs.curve;
        rotation.found.as_deref().filter(|_| same_curve)
    }

    /// The levels on the plot.
    pub fn levels_shown(&self) -> &[LevelPicture] {
        match (self.rotation(), self.study()) {
            (Some((_, picture)), _) => &picture.levels,
            (None, Some(study)) => &study.pictures.levels,
            (None, None) => &[],
        }
    }

    /// The ladders at the plot.
    pub fn ladders_shown(&self) -> Option<&Ladders> {
        self.rotation().map(|(_, picture)| &picture.ladders).or(self.study().map(|s| &s.pictures.ladders))
    }

    /// A named region, with rotation where that is shown.
    pub fn region(&self, preset: Preset) -> Option<Bounds> {
        let turning = self.rotation().and_then(|(_, picture)| match preset {
            Preset::NearMinimum => picture.near_minimum,
            Preset::WholeWell => picture.whole_well,
            Preset::FitWindow | Preset::AllPoints => None,
        });
        turning.or_else(|| preset.bounds(&self.study()?.pictures))
    }

    /// The level that the plot brings forward.
    pub fn shown_level(&self) -> Option<usize> {
        self.view.hovered_level.or(self.view.pinned_level)
    }

    /// Whether a level's density stands out: the one shown and those kept beside it.
    pub fn stands_out(&self, v: usize) -> bool {
        self.shown_level() == Some(v) || self.view.kept_levels.contains(&v)
    }

    /// The levels that stand out, the one shown first.
    pub fn outstanding(&self) -> Vec<usize> {
        let shown = self.shown_level();
        let kept = self.view.kept_levels.iter().copied().filter(|v| Some(*v) != shown);
        shown.into_iter().chain(kept).collect()
    }

    /// What part of the plot is seen.
    pub fn zoom(&self) -> Zoom {
        let key = self.document.focus;
        key.and_then(|k| self.view.zoom.get(&k)).copied().unwrap_or(Zoom::Preset(Preset::NearMinimum))
    }

    /// The bounds of the plot.
    pub fn bounds(&self) -> Option<Bounds> {
        let pictures = &self.study()?.pictures;
        match self.zoom() {
            Zoom::Free(bounds) => Some(bounds),
            Zoom::Preset(preset) => self.region(preset).or_else(|| pictures.views.first()),
        }
    }

    /// Whether a command can be given now; if not, why not.
    ///
    /// # Errors
    /// The reason, as shown on the disabled button.
    pub fn can(&self, command: &Command) -> Result<(), &'static str> {
        command.is_enabled(self)
    }
}
