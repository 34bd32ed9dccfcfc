//! How files are read, as the window has it: files refused one after the other, what was chosen for a header
//! before, and text logs searched by patterns.

use super::meaning::Meaning;
use super::state::{LoadedScan, Message, Problem, State};
use crate::scan::Layout;
use crate::scan::read::{Preview, ReadSettings, Tried, preview};
use serde::{Deserialize, Serialize};
use std::path::PathBuf;
use std::sync::Arc;
use std::time::SystemTime;

/// Headers remembered.
const MOST_HEADERS: usize = 200;

/// What is seen of it, not undoable.
#[derive(Clone, Debug, Default)]
pub struct Reading {
    /// Refused files that wait behind the one shown.
    pub waiting: Vec<Problem>,
    /// Refused files of a folder, told when they are asked for.
    pub aside: Vec<Problem>,
    /// Whether the columns of the refused file are being looked at.
    pub problem_columns: bool,
    /// What is known of the scan whose columns are being looked at.
    pub looked: Option<Looked>,
    /// The recipe of a curve being written.
    pub recipe: String,
    /// Text logs being searched.
    pub logs: Option<Logs>,
    /// How files were read before.
    pub remembered: Arc<Remembered>,
}

impl Reading {
    /// Whether the columns of this refused file are in sight.
    pub fn looks_at_columns_of(&self, problem: &Problem) -> bool {
        self.problem_columns && problem.preview.is_some()
    }
}

/// A look at the file of a scan.
#[derive(Clone, Debug)]
pub struct Looked {
    /// The scan.
    pub scan: u64,
    /// How it was read.
    pub read: ReadSettings,
    /// What each unit would mean.
    pub meanings: Vec<Meaning>,
    /// Its columns, those that are ignored too.
    pub preview: Preview,
}

/// How files were read before, for the next ones.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub struct Remembered {
    /// Tables by their header, the latest first.
    pub headers: Vec<(String, ReadSettings)>,
    /// Patterns and units of text logs.
    pub patterns: Option<ReadSettings>,
}

impl Remembered {
    /// How a table with this header was read.
    pub fn of(&self, header: &str) -> Option<&ReadSettings> {
        self.headers.iter().find(|(known, _)| known == header).map(|(_, read)| read)
    }

    /// What is remembered when another window may have changed it since it was `before` here.
    pub fn merged(self, before: &Self, theirs: Self) -> Self {
        let ours = |all: &Self, header: &str| all.headers.iter().any(|(known, _)| known == header);
        let patterns = if self.patterns == before.patterns { theirs.patterns } else { self.patterns.clone() };
        let others: Vec<_> =
            theirs.headers.into_iter().filter(|(h, _)| !ours(&self, h) && !ours(before, h)).collect();
        let headers = self.headers.into_iter().chain(others).take(MOST_HEADERS).collect();
        Self { headers, patterns }
    }
}

/// Text logs as they were read.
#[derive(Clone, Debug, PartialEq)]
pub struct LogSet {
    /// Where they are; a folder stands for the files in it.
    pub paths: Vec<PathBuf>,
    /// The folder they are in.
    pub folder: PathBuf,
    /// Name and bytes of each.
    pub files: Vec<(String, Arc<[u8]>)>,
    /// When one of them was last changed.
    pub modified: Option<SystemTime>,
}

impl LogSet {
    /// Each log by name and bytes.
    pub fn by_name(&self) -> impl Iterator<Item = (&str, &[u8])> + Clone {
        self.files.iter().map(|(name, bytes)| (name.as_str(), &**bytes))
    }
}

/// What patterns catch, and what of it is shown.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Searched {
    /// What they catch in each log.
    pub tried: Tried,
    /// The logs in the order in which they are listed: where some give a point, those that do not stand first.
    pub order: Vec<usize>,
    /// The lines shown of the first one, each with its number; 0 where lines are left out.
    pub lines: Vec<(usize, String)>,
}

/// Text logs, each a point of one scan, and how they are searched.
#[derive(Clone, Debug, PartialEq)]
pub struct Logs {
    /// The logs.
    pub set: Arc<LogSet>,
    /// The scan that was made of them; none: it is to be made.
    pub of: Option<u64>,
    /// Patterns and units chosen so far.
    pub read: ReadSettings,
    /// What the patterns catch, with the settings that were tried.
    pub searched: Option<(ReadSettings, Searched)>,
    /// Why they were refused as a scan.
    pub refused: Option<String>,
}

impl Logs {
    /// Logs not yet searched.
    pub const fn new(set: Arc<LogSet>, read: ReadSettings) -> Self {
        Self { set, of: None, read, searched: None, refused: None }
    }

    /// What the patterns in force catch, where they were tried.
    pub fn caught(&self) -> Option<&Searched> {
        self.searched.as_ref().filter(|(with, _)| *with == self.read).map(|(_, searched)| searched)
    }

    /// Whether every log gives a point and both units are chosen.
    pub fn are_ready(&self) -> bool {
        self.caught().map_or(0, |s| s.tried.points()) == self.set.files.len()
            && self.read.length_unit.is_some()
            && self.read.energy_unit.is_some()
    }
}

/// Something the user does about reading.
#[derive(Clone, Debug, PartialEq)]
pub enum ReadingCommand {
    /// Look at the columns of the refused file, or no longer.
    ProblemColumns(bool),
    /// Tell about the files of a folder that were refused.
    ShowRefused,
    /// Choose a folder of text logs.
    AskLogs,
    /// Search text logs: files, or a folder that stands for the files in it.
    OpenLogs(Vec<PathBuf>),
    /// Try other patterns or units on them.
    TryLogs(ReadSettings),
    /// Read them as a scan.
    ReadLogs,
    /// Put them away.
    CloseLogs,
    /// Take the table that was copied elsewhere.
    AskPaste,
    /// Change the recipe of a curve to be made.
    TypeRecipe(String),
}

impl ReadingCommand {
    /// What a button or menu entry says.
    pub const fn label(&self) -> &'static str {
        match self {
            Self::ProblemColumns(true) => "Columns …",
            Self::ProblemColumns(false) => "Done",
            Self::ShowRefused => "Show why",
            Self::AskLogs => "Text logs …",
            Self::OpenLogs(_) => "Its folder as text logs …",
            Self::ReadLogs => "Read as a scan",
            Self::CloseLogs => "Cancel",
            Self::AskPaste => "Paste a table",
            Self::TryLogs(_) | Self::TypeRecipe(_) => "",
        }
    }

    /// What it is called away from its place.
    pub const fn name(&self) -> &'static str {
        match self {
            Self::ProblemColumns(true) => "Columns of the refused file …",
            Self::ProblemColumns(false) => "Put the columns of the refused file away",
            Self::ShowRefused => "Show why files of the folder were not read",
            Self::AskLogs => "Text logs: a folder, each file a point …",
            Self::OpenLogs(_) => "The folder of the refused file as text logs …",
            Self::ReadLogs => "Read the text logs as a scan",
            Self::CloseLogs => "Put the text logs away",
            _ => self.label(),
        }
    }

    /// What it does, for a tooltip.
    pub const fn tooltip(&self) -> &'static str {
        match self {
            Self::ProblemColumns(_) => "Which column is what, in which unit, and what separates them.",
            Self::ShowRefused => "What is wrong with each of them, one after the other.",
            Self::AskLogs | Self::OpenLogs(_) => {
                "Each file gives a point: one pattern finds the bond length in it, one the energy."
            }
            Self::ReadLogs => "Make a scan of what the patterns catch.",
            Self::CloseLogs => "Put the text logs away; no file is changed.",
            Self::AskPaste => {
                "A table copied elsewhere, as from a spreadsheet. Pasting with the keyboard does the same."
            }
            Self::TryLogs(_) | Self::TypeRecipe(_) => "",
        }
    }

    /// Whether it can be given now.
    ///
    /// # Errors
    /// Why not.
    pub fn is_enabled(&self, state: &State) -> Result<(), &'static str> {
        let reading = &state.view.reading;
        let need = |there: bool, reason: &'static str| if there { Ok(()) } else { Err(reason) };
        match self {
            Self::ProblemColumns(true) => {
                let seen = state.view.problem.as_ref().and_then(|p| p.preview.as_ref());
                need(seen.is_some_and(|p| !p.lines.is_empty()), "There is no refused table.")
            }
            Self::ShowRefused => need(!reading.aside.is_empty(), "No file of a folder was refused."),
            Self::ReadLogs => need(
                reading.logs.as_ref().is_some_and(Logs::are_ready),
                "Both patterns must catch a number in every file, and both units must be chosen.",
            ),
            Self::CloseLogs => need(reading.logs.is_some(), "There are no text logs."),
            _ => Ok(()),
        }
    }
}

/// What that wants of the world outside the state.
#[derive(Clone, Debug)]
pub enum ReadingEffect {
    /// What each unit would mean for a scan.
    Meanings(Box<LoadedScan>),
    /// Ask for a folder of text logs.
    AskLogs,
    /// Read logs, with the patterns used last.
    OpenLogs(Vec<PathBuf>, Option<ReadSettings>),
    /// Try the patterns.
    TryLogs(Box<Logs>),
    /// Read the logs as a scan.
    ReadLogs(Box<Logs>),
    /// Ask the desktop for what was copied.
    AskPaste,
}

/// Carries a command out.
pub fn apply(command: ReadingCommand, state: &mut State) -> Option<ReadingEffect> {
    let reading = &mut state.view.reading;
    match command {
        ReadingCommand::ProblemColumns(shown) => reading.problem_columns = shown,
        ReadingCommand::ShowRefused => {
            state.view.message = None;
            for problem in std::mem::take(&mut state.view.reading.aside) {
                take_problem(problem, state);
            }
        }
        ReadingCommand::AskLogs => return Some(ReadingEffect::AskLogs),
        ReadingCommand::OpenLogs(paths) => {
            return Some(ReadingEffect::OpenLogs(paths, reading.remembered.patterns.clone()));
        }
        ReadingCommand::TryLogs(read) => {
            let logs = reading.logs.as_mut()?;
            if logs.read != read {
                logs.read = read;
                logs.refused = None;
            }
            return Some(ReadingEffect::TryLogs(Box::new(logs.clone())));
        }
        ReadingCommand::ReadLogs => return reading.logs.clone().map(Box::new).map(ReadingEffect::ReadLogs),
        ReadingCommand::CloseLogs => reading.logs = None,
        ReadingCommand::AskPaste => return Some(ReadingEffect::AskPaste),
        ReadingCommand::TypeRecipe(text) => reading.recipe = text,
    }
    None
}

/// Looks at the columns of a scan, or at the patterns of one that was made of text logs.
pub fn show_columns(key: u64, state: &mut State) -> Option<ReadingEffect> {
    let loaded = state.document.scan(key)?.clone();
    if let Some(set) = loaded.logs {
        let logs = Logs { of: Some(key), ..Logs::new(set, loaded.start.read) };
        state.view.reading.logs = Some(logs.clone());
        return Some(ReadingEffect::TryLogs(Box::new(logs)));
    }
    if state.view.columns_of != Some(key) {
        state.view.reading.recipe.clear();
    }
    state.view.columns_of = Some(key);
    Some(ReadingEffect::Meanings(Box::new(loaded)))
}

/// A file was refused: it is shown, or waits behind another one that is.
pub fn take_problem(problem: Problem, state: &mut State) {
    let same = |p: &Problem| p.file_name == problem.file_name && p.path == problem.path;
    match &state.view.problem {
        Some(shown) if !same(shown) => {
            let waiting = &mut state.view.reading.waiting;
            waiting.retain(|p| !same(p));
            waiting.push(problem);
        }
        _ => state.view.problem = Some(problem),
    }
}

/// The refused file shown is dealt with; the next one takes its place.
pub fn next_problem(state: &mut State) {
    let reading = &mut state.view.reading;
    reading.problem_columns = false;
    state.view.problem = (!reading.waiting.is_empty()).then(|| reading.waiting.remove(0));
}

/// A file was read: if it had been refused before, that is settled.
pub fn settle_problem(loaded: &LoadedScan, state: &mut State) {
    let same = |p: &Problem| p.file_name == loaded.scan.file_name && p.path == loaded.path;
    state.view.reading.waiting.retain(|p| !same(p));
    if state.view.problem.as_ref().is_some_and(same) {
        next_problem(state);
    }
}

/// Keeps how a scan was read for the next one like it: a table with the same header, text logs.
pub fn remember(loaded: &LoadedScan, state: &mut State) {
    let remembered = &mut state.view.reading.remembered;
    // What was made of the columns belongs to one study.
    let read = ReadSettings { made: Vec::new(), ..loaded.start.read.clone() };
    if loaded.scan.layout == Layout::Lines {
        state.view.reading.logs = None;
        if remembered.patterns.as_ref() != Some(&read) {
            Arc::make_mut(remembered).patterns = Some(read);
        }
        return;
    }
    if loaded.scan.layout != Layout::Delimited {
        return;
    }
    let Some(header) = preview(&loaded.bytes, &ReadSettings::default()).header() else { return };
    let known = remembered.of(&header);
    if known.is_none() && read == ReadSettings::default() || known == Some(&read) {
        return;
    }
    let headers = &mut Arc::make_mut(remembered).headers;
    headers.retain(|(other, _)| *other != header);
    if read != ReadSettings::default() {
        headers.insert(0, (header, read));
        headers.truncate(MOST_HEADERS);
    }
}

/// Says that a file was read as another one with its header was.
pub fn tell_as_before(name: &str, state: &mut State) {
    let text = format!(
        "{name} was read with the columns and units chosen before for a file with the same header; \u{201c}Columns …\u{201d} changes them."
    );
    tell(text, false, state);
}

/// Takes logs to be searched, or why they cannot be.
pub fn take_logs(logs: Result<Logs, String>, state: &mut State) {
    match logs {
        Ok(logs) => {
            state.view.problem = None;
            state.view.reading.problem_columns = false;
            state.view.reading.logs = Some(logs);
        }
        Err(text) => tell(text, true, state),
    }
}

/// Takes what patterns catch, where they are still the ones in question.
pub fn take_searched(read: ReadSettings, searched: Searched, state: &mut State) {
    if let Some(logs) = state.view.reading.logs.as_mut().filter(|l| l.read == read) {
        logs.searched = Some((read, searched));
    }
}

/// The logs could not be read as a scan.
pub fn take_logs_refused(text: String, state: &mut State) {
    match &mut state.view.reading.logs {
        Some(logs) => logs.refused = Some(text),
        None => tell(text, true, state),
    }
}

fn tell(text: String, failure: bool, state: &mut State) {
    state.view.message = Some(Message { failure, ..Message::told(text) });
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn two_windows_remember_together() {
        let read =
            |column: &str| ReadSettings { length_column: Some(column.into()), ..ReadSettings::default() };
        let all = |headers: &[&str], patterns: Option<&str>| Remembered {
            headers: headers.iter().map(|h| ((*h).to_owned(), read(h))).collect(),
            patterns: patterns.map(read),
        };
        let before = all(&["a", "b"], None);
        let now = all(&["c", "a"], None);
        let theirs = all(&["d", "b", "a"], Some("p"));
        let merged = now.merged(&before, theirs);
        assert_eq!(merged, all(&["c", "a", "d"], Some("p")), "b was forgotten here, d is theirs");
        assert_eq!(merged.of("d"), Some(&read("d")));
        assert_eq!(merged.of("b"), None);
    }
}
