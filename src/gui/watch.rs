//! Notices when a file that was read changes on disk: a thread that looks at the time of the last change every two
//! seconds, only while the window is in front, and wakes the window only when there is something to say.

use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, mpsc};
use std::time::{Duration, SystemTime};

/// Time between two looks.
const PAUSE: Duration = Duration::from_secs(2);

/// What was read from a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Watching {
    /// The scan of this number.
    Scan(u64),
    /// The study of this number.
    Study(u64),
}

/// A file, or several of one scan, as they were when they were read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Watched {
    /// What was read from it.
    pub what: Watching,
    /// Where it is; a folder stands for the files in it.
    pub paths: Vec<PathBuf>,
    /// When it was last changed.
    pub modified: SystemTime,
}

impl Watched {
    /// Whether the files are there and are not what they were.
    pub fn has_changed(&self) -> bool {
        last_change(&self.paths).is_ok_and(|now| now != self.modified)
    }
}

/// The latest change of files; of a folder also that of the files in it, hidden ones left out.
///
/// # Errors
/// What the system says of a file that is not there.
pub fn last_change(paths: &[PathBuf]) -> std::io::Result<SystemTime> {
    let changed = |path: &Path| std::fs::metadata(path).and_then(|data| data.modified());
    let mut latest = SystemTime::UNIX_EPOCH;
    for path in paths {
        latest = latest.max(changed(path)?);
        if path.is_dir() {
            for entry in std::fs::read_dir(path)? {
                let entry = entry?;
                if !entry.file_name().to_string_lossy().starts_with('.') {
                    latest = latest.max(changed(&entry.path())?);
                }
            }
        }
    }
    Ok(latest)
}

/// Watches files.
pub struct Watch {
    files: Option<mpsc::Sender<Vec<Watched>>>,
    changes: mpsc::Receiver<Watched>,
    in_front: Arc<AtomicBool>,
    known: Vec<Watched>,
}

impl Watch {
    /// A watch that calls `wake` when a file has changed.
    pub fn new(wake: impl Fn() + Send + 'static) -> Self {
        let (files, inbox) = mpsc::channel();
        let (outbox, changes) = mpsc::channel();
        let in_front = Arc::new(AtomicBool::new(true));
        let front = Arc::clone(&in_front);
        let run = move || look(&inbox, &outbox, &front, &wake);
        let thread = std::thread::Builder::new().name("watch".into()).spawn(run);
        Self { files: thread.is_ok().then_some(files), changes, in_front, known: Vec::new() }
    }

    /// Says which files matter now, and whether the window is in front.
    pub fn set(&mut self, files: Vec<Watched>, in_front: bool) {
        self.in_front.store(in_front, Ordering::Relaxed);
        if files != self.known {
            self.known.clone_from(&files);
            if let Some(sender) = &self.files {
                sender.send(files).ok();
            }
        }
    }

    /// The next file that has changed.
    pub fn poll(&mut self) -> Option<Watched> {
        self.changes.try_recv().ok().filter(|changed| self.known.contains(changed))
    }
}

fn look(
    inbox: &mpsc::Receiver<Vec<Watched>>,
    outbox: &mpsc::Sender<Watched>,
    in_front: &AtomicBool,
    wake: &dyn Fn(),
) {
    let mut files: Vec<Watched> = Vec::new();
    loop {
        // With nothing to watch the thread sleeps until there is.
        let news = if files.is_empty() {
            inbox.recv().map_err(|_| mpsc::RecvTimeoutError::Disconnected)
        } else {
            inbox.recv_timeout(PAUSE)
        };
        match news {
            Ok(new) => files = new,
            Err(mpsc::RecvTimeoutError::Disconnected) => return,
            Err(mpsc::RecvTimeoutError::Timeout) if in_front.load(Ordering::Relaxed) => {
                let (changed, same): (Vec<_>, Vec<_>) = files.into_iter().partition(Watched::has_changed);
                files = same;
                let any = !changed.is_empty();
                for file in changed {
                    if outbox.send(file).is_err() {
                        return;
                    }
                }
                if any {
                    wake();
                }
            }
            Err(mpsc::RecvTimeoutError::Timeout) => {}
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_file_written_anew_is_told_once() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("scan.csv");
        std::fs::write(&path, "a").expect("written");
        let old = SystemTime::UNIX_EPOCH + Duration::from_secs(1_000_000);
        let (woken, wakes) = mpsc::channel();
        let mut watch = Watch::new(move || woken.send(()).expect("heard"));
        watch.set(vec![Watched { what: Watching::Scan(3), paths: vec![path], modified: old }], true);
        wakes.recv_timeout(Duration::from_secs(20)).expect("the change is told");
        assert_eq!(watch.poll().map(|w| w.what), Some(Watching::Scan(3)));
        assert_eq!(watch.poll(), None);
    }

    #[test]
    fn a_folder_changes_with_the_files_in_it() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("point.log");
        std::fs::write(&path, "a").expect("written");
        let paths = vec![folder.path().to_owned()];
        let modified = last_change(&paths).expect("there");
        let watched = Watched { what: Watching::Scan(0), paths: paths.clone(), modified };
        assert!(!watched.has_changed());
        let later = modified + Duration::from_secs(5);
        std::fs::File::options().write(true).open(&path).and_then(|f| f.set_modified(later)).expect("set");
        assert!(watched.has_changed());
        drop(folder);
        assert!(!watched.has_changed(), "what is gone has not changed");
        assert!(last_change(&paths).is_err());
    }
}
