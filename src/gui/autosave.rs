//! Saves the running work beside the window, less than a second behind it, into a file of this process alone;
//! finds what processes that ended otherwise have left.
//!
//! Every process has a pair of files, `work-*.parabound` and `work-*.lock`, and holds the lock as long as it
//! lives: the system takes it back however the process ends. Who can take the lock of a pair owns it.

use super::saving::is_worth_keeping;
use super::session::{Opened, Work};
use super::state::{Leftover, State};
use crate::files::{Replace, write};
use crate::study_file::{EXTENSION, StudyFile};
use std::fs::{File, TryLockError};
use std::path::{Path, PathBuf};
use std::sync::mpsc;
use std::thread::JoinHandle;
use std::time::{Duration, Instant, SystemTime};

/// From the first change to writing it.
const DELAY: Duration = Duration::from_millis(400);
/// Parts of files that a killed process left are swept after this time.
const OLD: Duration = Duration::from_secs(3600);
const LOCK: &str = "lock";

/// A pair of files that this process owns.
#[derive(Debug)]
pub struct Slot {
    work: PathBuf,
    lock: PathBuf,
    _held: File,
}

impl Slot {
    /// A new pair in this folder, which is made where it is not there.
    ///
    /// # Errors
    /// What the system says.
    pub fn claim(folder: &Path) -> std::io::Result<Self> {
        std::fs::create_dir_all(folder)?;
        let since = SystemTime::now().duration_since(SystemTime::UNIX_EPOCH).unwrap_or_default();
        let stem = format!("work-{}-{}", std::process::id(), since.as_nanos());
        // Locked before it has its name: nobody can find it free and sweep it away.
        let (early, lock) = (folder.join(format!("{stem}.new")), folder.join(format!("{stem}.{LOCK}")));
        let held = File::create_new(&early)?;
        held.try_lock().map_err(std::io::Error::from)?;
        std::fs::rename(&early, &lock)?;
        Ok(Self { work: folder.join(format!("{stem}.{EXTENSION}")), lock, _held: held })
    }

    /// The pair of a process that is gone, if this is one and nobody else has taken it.
    fn adopt(work: PathBuf) -> Option<Self> {
        let lock = work.with_extension(LOCK);
        let held = File::options().create(true).append(true).open(&lock).ok()?;
        match held.try_lock() {
            Ok(()) if work.is_file() => Some(Self { work, lock, _held: held }),
            Ok(()) => {
                std::fs::remove_file(&lock).ok();
                None
            }
            Err(TryLockError::WouldBlock | TryLockError::Error(_)) => None,
        }
    }

    /// Where the work is.
    pub fn path(&self) -> &Path {
        &self.work
    }

    /// Deletes the pair.
    pub fn remove(self) {
        std::fs::remove_file(&self.work).ok();
    }
}

impl Drop for Slot {
    fn drop(&mut self) {
        // A lock without work is of no use; it goes while it is still held.
        if !self.work.exists() {
            std::fs::remove_file(&self.lock).ok();
        }
    }
}

/// What processes that are gone have left in a folder, the newest first.
pub fn leftovers(folder: &Path) -> Vec<(Slot, Leftover)> {
    let Ok(entries) = std::fs::read_dir(folder) else { return Vec::new() };
    let mut found = Vec::new();
    for path in entries.filter_map(Result::ok).map(|e| e.path()) {
        let name = path.file_name().map_or_else(String::new, |n| n.to_string_lossy().into_owned());
        let age = std::fs::metadata(&path).and_then(|d| d.modified()).ok().and_then(|m| m.elapsed().ok());
        let age = age.unwrap_or_default();
        let is = |start: &str, end: &str| name.starts_with(start) && name.ends_with(end);
        if (is(".parabound-", ".part") || is("work-", ".new")) && age > OLD {
            std::fs::remove_file(&path).ok();
        } else if is("work-", &format!(".{LOCK}")) && !path.with_extension(EXTENSION).exists() {
            // A lock whose process is gone and left no work; adopting sweeps it away.
            if age > OLD {
                Slot::adopt(path.with_extension(EXTENSION));
            }
        } else if is("work-", &format!(".{EXTENSION}"))
            && let Some(slot) = Slot::adopt(path)
        {
            found.push((age, slot));
        }
    }
    found.sort_by_key(|(age, _)| *age);
    let told = |(id, (age, slot)): (usize, (Duration, Slot))| {
        let text = describe(slot.path(), age)?;
        Some((slot, Leftover { id: id as u64, text }))
    };
    found.into_iter().enumerate().filter_map(told).collect()
}

/// Unsaved work in words; none where the file is not one of ours.
fn describe(path: &Path, age: Duration) -> Option<String> {
    let file = StudyFile::from_bytes(&std::fs::read(path).ok()?).ok()?;
    let names: Vec<&str> = file.scans.iter().map(|s| s.file_name.as_str()).collect();
    let what = match names[..] {
        [] => return None,
        [one] => one.to_owned(),
        [one, two] => format!("{one} and {two}"),
        [one, ..] => format!("{one} and {} more scans", names.len() - 1),
    };
    Some(format!("Unsaved work on {what}, from {}.", ago(age)))
}

/// How long ago, in words.
fn ago(age: Duration) -> String {
    let (minutes, hours, days) = (age.as_secs() / 60, age.as_secs() / 3600, age.as_secs() / 86400);
    let count = |n: u64, unit: &str| format!("{n} {unit}{} ago", if n == 1 { "" } else { "s" });
    match (days, hours, minutes) {
        (0, 0, 0) => "less than a minute ago".to_owned(),
        (0, 0, n) => count(n, "minute"),
        (0, n, _) => count(n, "hour"),
        (n, ..) => count(n, "day"),
    }
}

/// Reads unsaved work.
///
/// # Errors
/// What is wrong with it, in words.
pub fn restore(path: &Path) -> Result<Opened, String> {
    let bytes = std::fs::read(path).map_err(|e| format!("The unsaved work could not be read: {e}."))?;
    let file = StudyFile::from_bytes(&bytes).map_err(|e| format!("The unsaved work is damaged: {e}."))?;
    Ok(Opened { restored: true, ..Opened::of(file, Path::new("")) })
}

enum Note {
    /// The work as it is now; none when there is nothing worth keeping.
    Work(Option<Box<Work>>),
    /// Work of another process that is part of this one's work now: deleted after the next writing.
    Absorb(Slot),
}

/// Saves beside the window.
pub struct Autosave {
    notes: Option<mpsc::Sender<Note>>,
    problems: mpsc::Receiver<String>,
    noted: Option<Work>,
    thread: Option<JoinHandle<()>>,
}

impl Autosave {
    /// Saves into this folder; `wake` is called when that does not work.
    pub fn new(folder: &Path, wake: impl Fn() + Send + 'static) -> Result<Self, String> {
        let problem = |e: std::io::Error| {
            format!("Work is not saved by itself: {} cannot be used ({e}).", folder.display())
        };
        let slot = Slot::claim(folder).map_err(problem)?;
        let (notes, inbox) = mpsc::channel();
        let (outbox, problems) = mpsc::channel();
        let run = move || serve(&slot, &inbox, &outbox, &wake);
        let thread = std::thread::Builder::new().name("autosave".into()).spawn(run).map_err(problem)?;
        Ok(Self { notes: Some(notes), problems, noted: None, thread: Some(thread) })
    }

    /// Takes note of the work as it is, if it has changed; `always` even where closing would lose nothing.
    pub fn note(&mut self, state: &State, always: bool) {
        if !self.noted.as_ref().is_some_and(|noted| noted.is_of(state)) {
            let work = Work::of(state);
            let worth = always || is_worth_keeping(state);
            self.noted = Some(work.clone());
            self.send(Note::Work(worth.then(|| Box::new(work))));
        }
    }

    /// Takes note of the work as the window leaves it, or that nothing is left.
    pub fn note_last(&mut self, work: Option<Work>) {
        self.send(Note::Work(work.map(Box::new)));
    }

    /// Deletes work of another process once it is saved as part of this one's.
    pub fn absorb(&mut self, slot: Slot) {
        self.send(Note::Absorb(slot));
    }

    fn send(&self, note: Note) {
        if let Some(notes) = &self.notes {
            notes.send(note).ok();
        }
    }

    /// Why saving does not work, once.
    pub fn problem(&mut self) -> Option<String> {
        self.problems.try_iter().last()
    }
}

impl Drop for Autosave {
    fn drop(&mut self) {
        self.notes = None;
        if let Some(thread) = self.thread.take() {
            // What was noted last is written before the process ends.
            thread.join().ok();
        }
    }
}

fn serve(slot: &Slot, inbox: &mpsc::Receiver<Note>, outbox: &mpsc::Sender<String>, wake: &dyn Fn()) {
    let mut absorbed = Vec::new();
    let mut told = false;
    let mut open = true;
    while open {
        let Ok(first) = inbox.recv() else { return };
        let due = Instant::now() + DELAY;
        let mut newest = None;
        let mut note = Some(first);
        while let Some(now) = note {
            match now {
                Note::Work(work) => newest = Some(work),
                Note::Absorb(slot) => absorbed.push(slot),
            }
            note = match inbox.recv_timeout(due.saturating_duration_since(Instant::now())) {
                Ok(next) => Some(next),
                Err(mpsc::RecvTimeoutError::Timeout) => None,
                Err(mpsc::RecvTimeoutError::Disconnected) => {
                    open = false;
                    None
                }
            };
        }
        let result = match newest {
            None => continue,
            Some(None) => {
                std::fs::remove_file(slot.path()).ok();
                Ok(())
            }
            Some(Some(work)) => {
                write(slot.path(), work.to_file(None).to_text().as_bytes(), Replace::Anything)
            }
        };
        match result {
            Ok(()) => {
                absorbed.drain(..).for_each(Slot::remove);
                told = false;
            }
            Err(error) if !told => {
                told = true;
                outbox.send(format!("The running work could not be saved: {error}.")).ok();
                wake();
            }
            Err(_) => {}
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_pair_belongs_to_one_owner_and_is_found_when_the_owner_is_gone() {
        let folder = tempfile::tempdir().expect("a folder");
        let slot = Slot::claim(folder.path()).expect("claimed");
        let work = crate::study_file::StudyFile {
            format: crate::study_file::FORMAT.into(),
            version: 1,
            scans: vec![crate::study_file::StudyScan { file_name: "a.csv".into(), ..Default::default() }],
            ..Default::default()
        };
        std::fs::write(slot.path(), work.to_text()).expect("written");
        assert!(leftovers(folder.path()).is_empty(), "its owner lives");
        drop(slot);
        let found = leftovers(folder.path());
        let [(_, leftover)] = &found[..] else { panic!("one: {found:?}") };
        assert!(
            leftover.text.contains("a.csv") && leftover.text.contains("less than a minute"),
            "{leftover:?}"
        );
        assert!(leftovers(folder.path()).is_empty(), "taken by us");
        for (slot, _) in found {
            slot.remove();
        }
        assert_eq!(std::fs::read_dir(folder.path()).expect("listed").count(), 0, "nothing is left behind");
    }

    #[test]
    fn damaged_work_is_neither_offered_nor_deleted() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("work-1-1.parabound");
        std::fs::write(&path, "{\"format\": \"parabound.st").expect("written");
        assert!(leftovers(folder.path()).is_empty());
        assert!(path.exists() && restore(&path).is_err_and(|e| e.contains("damaged")));
    }

    #[test]
    fn ages_in_words() {
        let words = |s| ago(Duration::from_secs(s));
        assert_eq!(
            [words(5), words(60), words(7300)],
            ["less than a minute ago", "1 minute ago", "2 hours ago"]
        );
        assert_eq!(words(200_000), "2 days ago");
    }
}
