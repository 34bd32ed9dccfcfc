//! Saving and opening the work: what commands about study files change, and what they ask of the world outside.

use super::apply::{Effect, forget_level};
use super::command::Command;
use super::seen::look_at;
use super::session::{Opened, Work};
use super::state::{CurveKey, Document, KeptStudy, Leftover, Message, State};
use crate::settings::Settings;
use crate::study_file::EXTENSION;
use std::path::PathBuf;

/// Files remembered.
const MOST_RECENT: usize = 12;

/// Carries out a command about study files; none when the command is about something else.
pub(super) fn apply_saving(command: &Command, state: &mut State) -> Option<Vec<Effect>> {
    let kept = state.kept.get(&state.document.origin);
    Some(match command {
        Command::SaveStudy => match kept.map(|k| k.path.clone()) {
            Some(path) => vec![write(state, path, false)],
            None => vec![Effect::AskSaveStudy(study_name(state))],
        },
        Command::SaveStudyAs => vec![Effect::AskSaveStudy(study_name(state))],
        Command::SaveStudyTo { path, overwrite } => {
            let named = path.extension().is_some();
            let path = if named { path.clone() } else { path.with_extension(EXTENSION) };
            // Leave to replace one name is no leave to replace another.
            vec![write(state, path, *overwrite && named)]
        }
        Command::ReopenStudy => kept.map(|k| Effect::Read(k.path.clone())).into_iter().collect(),
        Command::ForgetRecent => {
            state.recent.clear();
            vec![Effect::ForgetRecent]
        }
        Command::RestoreWork => state.leftovers.first().map(|l| Effect::Restore(l.id)).into_iter().collect(),
        Command::DiscardWork => {
            let id = (!state.leftovers.is_empty()).then(|| state.leftovers.remove(0).id);
            id.map(Effect::Discard).into_iter().collect()
        }
        Command::LeaveWork => {
            state.leftovers.clear();
            vec![Effect::Leave]
        }
        _ => return None,
    })
}

fn write(state: &State, path: PathBuf, overwrite: bool) -> Effect {
    let known = state.kept.get(&state.document.origin).filter(|k| k.path == path);
    let known = known.and_then(|k| k.sha256.clone());
    Effect::WriteStudy { path, overwrite, known, work: Box::new(Work::of(state)) }
}

/// Name offered for a study file.
fn study_name(state: &State) -> String {
    let kept = state.kept.get(&state.document.origin);
    let name = kept.and_then(|k| k.path.file_name()).map(|n| n.to_string_lossy().into_owned());
    let scan = state.document.focused().map(|(_, loaded, _)| loaded).or(state.document.scans.first());
    let stem = |name: &str| name.rsplit_once('.').map_or(name, |(stem, _)| stem).to_owned();
    name.unwrap_or_else(|| {
        let stem = scan.map_or_else(|| "study".into(), |s| stem(&s.scan.file_name));
        format!("{stem}.{EXTENSION}")
    })
}

/// Settings of a curve to which nothing was changed.
pub(super) fn fresh(start: &Settings, curve: &str) -> Settings {
    Settings { curve: Some(curve.to_owned()), ..start.clone() }
}

/// Whether closing the window now would lose something that the user made.
pub fn has_work(state: &State) -> bool {
    let document = &state.document;
    if let Some(kept) = state.kept.get(&document.origin) {
        return kept.saved.as_ref().is_none_or(|saved| !saved.holds_the_same(document));
    }
    let changed = |(key, settings): (&CurveKey, &Settings)| {
        let loaded = document.scan(key.scan)?;
        let name = &loaded.scan.energies.get(key.column)?.name;
        Some(*settings != fresh(&loaded.start, name))
    };
    document.published.iter().any(Option::is_some)
        || document.scans.iter().any(|s| s.path.is_none() && !s.is_sample)
        || document.settings.iter().any(|pair| changed(pair) == Some(true))
}

/// Whether there is anything to keep against a crash: work, or files that were opened together.
pub fn is_worth_keeping(state: &State) -> bool {
    state.document.scans.len() > 1 || has_work(state)
}

/// Remembers a file as used last.
pub fn remember(path: PathBuf, state: &mut State) {
    let path = std::path::absolute(&path).unwrap_or(path);
    state.recent.retain(|p| *p != path);
    state.recent.insert(0, path);
    state.recent.truncate(MOST_RECENT);
}

/// Takes a study file that was read in the place of what there is, as one step that can be taken back.
pub fn take_opened(opened: Opened, state: &mut State) {
    if opened.scans.is_empty() && !opened.lost.is_empty() {
        let text = format!("Nothing of this study could be read. {}", opened.lost.join("; "));
        state.view.message = Some(Message { failure: true, ..Message::told(text) });
        return;
    }
    if state.next_scan > 0 {
        let name = if opened.restored { "restore unsaved work" } else { "open a study file" };
        state.history.note(name, &state.document, false);
    }
    state.next_origin += 1;
    let mut document =
        Document { origin: state.next_origin, published: opened.published, ..Document::default() };
    let mut changed = Vec::new();
    for (number, (mut loaded, curves)) in opened.scans.into_iter().enumerate() {
        loaded.key = state.next_scan;
        state.next_scan += 1;
        for (column, energy) in loaded.scan.energies.iter().enumerate() {
            let saved = curves.iter().find(|c| c.name == energy.name).map(|c| c.settings.clone());
            let settings = saved.unwrap_or_else(|| fresh(&loaded.start, &energy.name));
            document.settings.insert(CurveKey { scan: loaded.key, column }, settings);
        }
        if let Some(focus) = opened.focus.as_ref().filter(|f| f.scan == number) {
            let column = loaded.scan.energies.iter().position(|e| e.name == focus.curve);
            document.focus = column.map(|column| CurveKey { scan: loaded.key, column });
        }
        if opened.changed.contains(&number) {
            changed.push(loaded.key);
        }
        document.scans.push(loaded);
    }
    document.focus = document.focus.or_else(|| document.settings.keys().next().copied());
    state.document = document;
    forget_level(state);
    look_at(&opened.view, state);
    state.view.problem = None;
    state.view.changed.extend(changed.iter().copied());
    if let Some((path, sha256)) = opened.kept {
        let saved = (!opened.restored).then(|| state.document.clone());
        let kept = KeptStudy { path: path.clone(), sha256, saved, modified: opened.modified };
        state.kept.insert(state.document.origin, kept);
        remember(path, state);
    }
    let mut text = String::new();
    if !opened.lost.is_empty() {
        text = format!("Not all could be read. {}", opened.lost.join("; "));
    } else if !changed.is_empty() {
        text = "Files of this study have changed since it was saved; it shows them as they were.".to_owned();
    } else if opened.restored {
        text = "Unsaved work restored.".to_owned();
    }
    let action = changed.first().map(|key| Command::Reload(*key));
    state.view.message = (!text.is_empty()).then(|| Message {
        failure: !opened.lost.is_empty(),
        action,
        ..Message::told(text)
    });
}

/// A study file that was written.
#[derive(Clone, Debug)]
pub struct SavedStudy {
    /// Where.
    pub path: PathBuf,
    /// Check sum of what was written.
    pub sha256: String,
    /// When.
    pub modified: Option<std::time::SystemTime>,
    /// What was saved.
    pub document: Document,
}

/// Takes what came of saving a study.
pub fn take_saved(result: Result<SavedStudy, (String, Option<PathBuf>)>, state: &mut State) {
    state.view.message = Some(match result {
        Ok(SavedStudy { path, sha256, modified, document }) => {
            let text = format!("Study saved to {}.", path.display());
            remember(path.clone(), state);
            let origin = document.origin;
            let kept = KeptStudy { path, sha256: Some(sha256), saved: Some(document), modified };
            state.kept.insert(origin, kept);
            Message::told(text)
        }
        Err((text, in_the_way)) => Message {
            failure: true,
            action: in_the_way.map(|path| Command::SaveStudyTo { path, overwrite: true }),
            ..Message::told(text)
        },
    });
}

/// Takes word of a study file that has changed on disk.
pub fn take_study_changed(origin: u64, state: &mut State) {
    let Some(kept) = state.kept.get_mut(&origin) else { return };
    kept.modified = None;
    if state.document.origin == origin {
        let text = format!("{} has changed on disk.", super::files::file_name_of(&kept.path));
        state.view.message = Some(Message { action: Some(Command::ReopenStudy), ..Message::told(text) });
    }
}

/// Takes the work that earlier windows left, the newest first.
pub fn take_leftovers(leftovers: Vec<Leftover>, state: &mut State) {
    state.leftovers = leftovers;
}

/// Takes word that work which was offered is in this window now, or is given up.
pub fn take_leftover_gone(id: u64, state: &mut State) {
    state.leftovers.retain(|l| l.id != id);
}
