//! Notices when a file that was read changes on disk: a thread that looks at the time of the last change every two
//! seconds, only while the window is in front, and wakes the window only when there is something to say.

use std::path::PathBuf;
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

/// A file as it was when it was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Watched {
    /// What was read from it.
    pub what: Watching,
    /// Where it is.
    pub path: PathBuf,
    /// When it was last changed.
    pub modified: SystemTime,
}

impl Watched {
    /// Whether the file is there and is not what it was.
    pub fn has_changed(&self) -> bool {
        let now = std::fs::metadata(&self.path).and_then(|data| data.modified());
        now.is_ok_and(|now| now != self.modified)
    }
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
        watch.set(vec![Watched { what: Watching::Scan(3), path, modified: old }], true);
        wakes.recv_timeout(Duration::from_secs(20)).expect("the change is told");
        assert_eq!(watch.poll().map(|w| w.what), Some(Watching::Scan(3)));
        assert_eq!(watch.poll(), None);
    }
}
