//! All commands in one list, with where each lives: for the search, for the sheet of shortcuts, and for tests.

use super::command::{Command, InterfaceSize};
use super::plot::GAUGE_MENU;
use super::product::Product;
use super::reading::ReadingCommand;
use super::samples::SAMPLES;
use super::state::{LevelsPart, Page, Preset, Problem, State, Strip};
use crate::export::compare::Form;
use crate::figure::GaugeMeasure;

/// Where a command is found.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// The bar on top.
    Bar,
    /// The menu of files.
    File,
    /// Its list of samples.
    Samples,
    /// Its list of files used last.
    Recent,
    /// The menu of what can be written.
    Export,
    /// The menu of what is seen.
    View,
    /// The menu of help.
    Help,
    /// The panel on the left.
    Left,
    /// The picture and what stands above it.
    Plot,
    /// The menu of what the gauge under the picture measures.
    Gauge,
    /// The tabs on the right.
    Pages,
    /// A page on the right.
    Page(Page),
    /// The notices under the picture.
    Notices,
    /// Shown when it is needed.
    Now,
}

impl Place {
    /// Its name.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Bar => "bar on top",
            Self::File => "File",
            Self::Samples => "File, Samples",
            Self::Recent => "File, Recent files",
            Self::Export => "Export",
            Self::View => "View",
            Self::Help => "Help",
            Self::Left => "panel on the left",
            Self::Plot => "picture",
            Self::Gauge => "gauge under the picture",
            Self::Pages => "pages on the right",
            Self::Page(page) => match page {
                Page::Scan => "page Scan",
                Page::Constants => "page Constants",
                Page::Levels => "page Levels",
                Page::Fits => "page Fits",
                Page::Reach => "page Reach",
                Page::Thermal => "page Thermal",
            },
            Self::Notices => "notices",
            Self::Now => "shown when needed",
        }
    }

    /// The menus to open on the way, by label.
    pub const fn menus(self) -> &'static [&'static str] {
        match self {
            Self::File => &["File"],
            Self::Samples => &["File", "Samples"],
            Self::Recent => &["File", "Recent files"],
            Self::Export => &["Export"],
            Self::View => &["View"],
            Self::Help => &["Help"],
            Self::Gauge => &[GAUGE_MENU],
            _ => &[],
        }
    }
}

/// A command and where it lives.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// The command.
    pub command: Command,
    /// Where it lives.
    pub place: Place,
}

/// The menu of files, without its lists.
pub const FILE_MENU: [Command; 7] = [
    Command::Reading(ReadingCommand::AskLogs),
    Command::Reading(ReadingCommand::AskPaste),
    Command::SaveStudy,
    Command::SaveStudyAs,
    Command::ReopenStudy,
    Command::ResetSettings,
    Command::CloseScan,
];

/// The menu of what is seen.
pub fn view_menu(state: &State) -> Vec<Command> {
    let panels = state.view.panels;
    let keep = state.view.pinned_level.map(|v| Command::KeepLevel(v, !state.view.kept_levels.contains(&v)));
    let mut menu = vec![
        Command::StepCurve(-1),
        Command::StepCurve(1),
        Command::StepLevel(1),
        Command::StepLevel(-1),
        Command::PinLevel(None),
        Command::StepJ(1),
        Command::StepJ(-1),
        Command::ShowJ(0),
        Command::ShowLeft(panels.left == Some(false)),
        Command::ShowRight(panels.right == Some(false)),
        Command::SizeInterface(InterfaceSize::Larger),
        Command::SizeInterface(InterfaceSize::Smaller),
        Command::SizeInterface(InterfaceSize::Usual),
        Command::SetStill(!state.preferences.still),
    ];
    // Beside the other commands of levels.
    menu.splice(5..5, keep);
    menu
}

/// The menu of help.
pub fn help_menu(state: &State) -> Vec<Command> {
    vec![
        Command::ShowGuide(true),
        Command::ShowSearch(true),
        Command::ShowKeys(true),
        Command::ShowHints(!state.view.hints),
    ]
}

/// Every command that can be named without more words, with those that are shown only now and then where they are
/// shown now.
pub fn entries(state: &State) -> Vec<Entry> {
    let mut all = Vec::new();
    let mut put = |place: Place, commands: Vec<Command>| {
        all.extend(commands.into_iter().map(|command| Entry { command, place }));
    };
    put(Place::Bar, vec![Command::Open, Command::Undo, Command::Redo]);
    put(Place::Export, Product::ALL.map(Command::Export).to_vec());
    put(Place::Export, vec![Command::CopyPicture]);
    put(Place::Bar, vec![Command::SetDark(true), Command::SetDark(false)]);
    put(Place::File, FILE_MENU.to_vec());
    put(Place::Samples, (0..SAMPLES.len()).map(Command::OpenSample).collect());
    put(Place::Recent, state.recent.iter().cloned().map(Command::OpenPath).collect());
    put(Place::Recent, vec![Command::ForgetRecent]);
    put(Place::View, view_menu(state));
    put(Place::Help, help_menu(state));
    put(Place::Plot, Preset::ALL.map(Command::Zoom).to_vec());
    put(Place::Plot, Strip::ALL.map(Command::ShowStrip).to_vec());
    put(Place::Gauge, GaugeMeasure::ALL.map(|(_, measure)| Command::ShowGauge(measure)).to_vec());
    put(Place::Plot, vec![Command::ToggleWhy]);
    put(Place::Left, vec![Command::ShowComparison(true)]);
    put(Place::Pages, Page::ALL.map(Command::ShowPage).to_vec());
    put(Place::Pages, Form::ALL.map(|(_, form)| Command::CopyPage(form)).to_vec());
    put(Place::Page(Page::Levels), LevelsPart::ALL.map(Command::ShowLevelsPart).to_vec());
    put(Place::Left, vec![Command::ResetWindow]);
    if let Some((key, ..)) = state.document.focused() {
        put(Place::Left, vec![Command::ShowColumns(Some(key.scan))]);
        if state.view.changed.contains(&key.scan) {
            put(Place::Left, vec![Command::Reload(key.scan)]);
        }
    }
    put(Place::Notices, vec![Command::ShowAllNotices(!state.view.all_notices)]);
    if state.view.message.is_some() {
        put(Place::Notices, vec![Command::DismissMessage]);
    }
    let meanings = state.view.problem.iter().flat_map(|p| p.meanings.iter().map(move |m| (p, m)));
    put(Place::Now, meanings.map(|(p, m)| m.command(&p.start.read)).collect());
    put(Place::Now, state.view.problem.iter().filter_map(Problem::as_logs).collect());
    let now = [
        Command::Reading(ReadingCommand::ProblemColumns(true)),
        Command::DropProblem,
        Command::Reading(ReadingCommand::ShowRefused),
        Command::Reading(ReadingCommand::ReadLogs),
        Command::Reading(ReadingCommand::CloseLogs),
        Command::StopComputing,
        Command::ComputeAgain,
        Command::CopyReport,
        Command::RestoreWork,
        Command::DiscardWork,
        Command::LeaveWork,
    ];
    put(Place::Now, now.into_iter().filter(|c| c.is_enabled(state).is_ok()).collect());
    all
}

/// How well a name answers to what was typed: higher is better, none when it does not. The letters have to come in
/// order; those that begin words and those that follow each other count more.
pub fn score(typed: &str, name: &str) -> Option<i32> {
    let name: Vec<char> = name.to_lowercase().chars().map(plain_figure).collect();
    let mut at = 0;
    let mut last = None;
    let mut total = 0;
    for letter in typed.to_lowercase().chars().map(plain_figure).filter(|c| !c.is_whitespace()) {
        let begins = |i: usize| i == 0 || !name[i - 1].is_alphanumeric();
        let rest = at..name.len();
        let fits: Vec<usize> = rest.filter(|&i| name[i] == letter).collect();
        let next = last.map(|l: usize| l + 1);
        // The letter after the one before, else the beginning of a word, else the first there is.
        let found = fits.iter().copied().find(|&i| Some(i) == next);
        let found = found.or_else(|| fits.iter().copied().find(|&i| begins(i))).or(fits.first().copied())?;
        total += if Some(found) == next { 8 } else { 0 } + if begins(found) { 6 } else { 0 } + 1;
        last = Some(found);
        at = found + 1;
    }
    // Of two that answer as well the shorter is meant.
    Some(total * 100 - name.len() as i32)
}

/// A subscript figure as it is typed.
fn plain_figure(c: char) -> char {
    let figure = (c as u32).checked_sub('₀' as u32).filter(|d| *d < 10);
    figure.and_then(|d| char::from_digit(d, 10)).unwrap_or(c)
}

/// The entries that answer to what was typed, the best first; all in their order when nothing was.
pub fn search(typed: &str, state: &State) -> Vec<Entry> {
    let mut found: Vec<(i32, Entry)> = entries(state)
        .into_iter()
        .filter(|e| e.command != Command::ShowSearch(true))
        .filter_map(|e| {
            let name = format!("{} {}", e.command.name(), e.place.name());
            Some((if typed.trim().is_empty() { 0 } else { score(typed, &name)? }, e))
        })
        .collect();
    found.sort_by_key(|(score, _)| -score);
    found.into_iter().map(|(_, entry)| entry).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn letters_in_order_are_found_and_beginnings_of_words_count() {
        assert_eq!(score("xyz", "Undo"), None);
        assert!(score("od", "Undo").is_none(), "the order matters");
        assert!(score("ss", "Save study") > score("ss", "Close scan, less"));
        assert!(score("undo", "Undo bar") > score("undo", "fund other"));
        let first = |typed: &str| search(typed, &State::default())[0].command.clone();
        assert_eq!(first("und"), Command::Undo);
        assert_eq!(first("save as"), Command::SaveStudyAs);
        assert_eq!(first("whole"), Command::Zoom(Preset::WholeWell));
        assert_eq!(first("n2"), Command::OpenSample(3), "subscripts are typed as figures");
        assert_eq!(first("Sample H₂, full CI"), Command::OpenSample(1), "or as they are");
    }

    #[test]
    fn every_command_of_the_list_has_a_name_and_no_two_share_a_name_or_a_shortcut() {
        let all = entries(&State::default());
        for (i, a) in all.iter().enumerate() {
            assert!(!a.command.name().is_empty() && !a.command.label().is_empty(), "{:?}", a.command);
            assert!(!a.command.tooltip().is_empty() || a.place == Place::Samples, "{:?}", a.command);
            for b in &all[..i] {
                assert_ne!(a.command.name(), b.command.name());
                assert!(
                    a.command.shortcut().is_none() || a.command.shortcut() != b.command.shortcut(),
                    "{a:?} {b:?}"
                );
            }
        }
        for command in Command::with_shortcut() {
            assert!(
                all.iter().any(|e| e.command == command),
                "{command:?} has a shortcut and is not in the list"
            );
        }
    }
}
