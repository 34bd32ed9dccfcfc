//! Keeps what must outlive the window: the running work, the preferences, and what earlier windows left.

use super::apply::{self, Effect};
use super::autosave::{Autosave, Slot};
use super::files::{Done, Files};
use super::preferences::Preferences;
use super::reading::Remembered;
use super::session::Work;
use super::state::{Message, State};
use eframe::egui;
use std::collections::BTreeMap;
use std::path::PathBuf;
use std::sync::Arc;

/// Keeps the state of one window in a folder.
pub(super) struct Keeper {
    folder: PathBuf,
    autosave: Option<Autosave>,
    leftovers: BTreeMap<u64, Slot>,
    recent: Vec<PathBuf>,
    reading: Arc<Remembered>,
}

impl Keeper {
    /// Begins to keep; what is remembered is put into the state, what was left is looked for.
    pub(super) fn new(folder: PathBuf, ctx: &egui::Context, state: &mut State, files: &mut Files) -> Self {
        let remembered = Preferences::load(&folder);
        let wake = ctx.clone();
        let autosave = match Autosave::new(&folder, move || wake.request_repaint()) {
            Ok(autosave) => Some(autosave),
            Err(problem) => {
                tell_problem(problem, state);
                None
            }
        };
        files.look_for_leftovers(folder.clone());
        state.recent.clone_from(&remembered.recent);
        state.view.hints = !remembered.hints_seen;
        let reading = Arc::new(remembered.reading.clone());
        state.view.reading.remembered = Arc::clone(&reading);
        state.preferences =
            Preferences { recent: Vec::new(), reading: Remembered::default(), ..remembered.clone() };
        Self { folder, autosave, leftovers: BTreeMap::new(), recent: remembered.recent, reading }
    }

    /// Takes note of the work as it is now.
    pub(super) fn note(&mut self, state: &mut State, files: &mut Files) {
        if let Some(autosave) = &mut self.autosave {
            autosave.note(state, false);
            if let Some(problem) = autosave.problem() {
                tell_problem(problem, state);
            }
        }
        if self.recent != state.recent {
            self.remember(state, files);
        }
        let now = &state.view.reading.remembered;
        if !Arc::ptr_eq(&self.reading, now) {
            let (before, now) = (std::mem::replace(&mut self.reading, Arc::clone(now)), Arc::clone(now));
            files.remember(self.folder.clone(), move |p| {
                let theirs = std::mem::take(&mut p.reading);
                p.reading = Remembered::clone(&now).merged(&before, theirs);
            });
        }
    }

    /// Other windows may have used other files since: the latest of this one go before theirs.
    fn remember(&mut self, state: &State, files: &mut Files) {
        let (before, now) = (std::mem::replace(&mut self.recent, state.recent.clone()), state.recent.clone());
        files.remember(self.folder.clone(), move |p| {
            let others: Vec<PathBuf> =
                p.recent.iter().filter(|r| !now.contains(r) && !before.contains(r)).cloned().collect();
            let most = now.len().max(12);
            p.recent = now.into_iter().chain(others).take(most).collect();
        });
    }

    /// Carries out what a command asks about kept things.
    pub(super) fn carry_out(&mut self, effect: &Effect, state: &State, files: &mut Files) {
        match effect {
            Effect::Prefer => {
                let now = state.preferences.clone();
                files.remember(self.folder.clone(), move |p| {
                    let (recent, reading) = (std::mem::take(&mut p.recent), std::mem::take(&mut p.reading));
                    *p = Preferences { recent, reading, ..now };
                });
            }
            Effect::ForgetRecent => {
                self.recent.clear();
                files.remember(self.folder.clone(), |p| p.recent.clear());
            }
            Effect::Restore(id) => {
                if let Some(slot) = self.leftovers.get(id) {
                    files.restore(*id, slot.path().to_owned());
                }
            }
            Effect::Discard(id) => {
                if let Some(slot) = self.leftovers.remove(id) {
                    slot.remove();
                }
            }
            // The locks go, so that the next window finds the work.
            Effect::Leave => self.leftovers.clear(),
            _ => {}
        }
    }

    /// Takes what was finished beside the window.
    pub(super) fn take(&mut self, done: Done, state: &mut State) {
        match done {
            Done::Leftovers(found) => {
                let (slots, told): (Vec<_>, Vec<_>) =
                    found.into_iter().map(|(slot, leftover)| ((leftover.id, slot), leftover)).unzip();
                self.leftovers = slots.into_iter().collect();
                apply::take_leftovers(told, state);
            }
            Done::Restored(id, Ok(opened)) => {
                let lost = !opened.lost.is_empty();
                apply::take_opened(*opened, state);
                apply::take_leftover_gone(id, state);
                // Where not all could be read, the file stays for another try.
                if let Some(slot) = self.leftovers.remove(&id).filter(|_| !lost)
                    && let Some(autosave) = &mut self.autosave
                {
                    autosave.absorb(slot);
                    autosave.note(state, true);
                }
            }
            Done::Restored(_, Err(problem)) | Done::Remembered(Err(problem)) => tell_problem(problem, state),
            _ => {}
        }
    }

    /// The window closes: unsaved work stays and is offered again, everything else is swept.
    pub(super) fn close(&mut self, state: &State) {
        if let Some(mut autosave) = self.autosave.take() {
            autosave.note_last(apply::has_work(state).then(|| Work::of(state)));
        }
        self.leftovers.clear();
    }
}

fn tell_problem(problem: String, state: &mut State) {
    state.view.message = Some(Message { failure: true, ..Message::told(problem) });
}
