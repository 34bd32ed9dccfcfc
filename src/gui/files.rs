//! Files and dialogs, kept off the frame: every read, write and dialog runs on a thread of its own.

mod understand;

use super::autosave::{self, Slot};
use super::log_files::{log_set, scan_of_logs};
use super::preferences::Preferences;
use super::product::Product;
use super::reading::{Logs, Looked, Remembered, Searched};
use super::samples::SAMPLES;
use super::saving::SavedStudy;
use super::session::{Opened, Work, sha256_of};
use super::state::{Leftover, LoadedScan, PathPurpose, Problem};
use crate::figure::drawing::{Paper, Subject, drawing};
use crate::files::{Replace, WriteError};
use crate::findings::Findings;
use crate::scan::read::ReadSettings;
use crate::settings::Settings;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicU64;
use std::sync::{Arc, mpsc};
use std::time::{Duration, Instant};
pub use understand::understand;
use understand::{read_as_before, read_file};

/// A dialog that comes back without a choice sooner than this was never shown.
const NO_DIALOG: Duration = Duration::from_millis(300);
/// Sharp on a slide, and small enough for every clipboard.
const CLIPBOARD_DOTS_PER_INCH: f64 = 220.0;
/// No more files of a folder are read.
pub(super) const MOST_FILES: usize = 1000;
/// Larger files are refused before they are read.
pub(super) const MOST_BYTES: u64 = 64 << 20;

/// Something that was finished beside the window.
#[derive(Debug)]
pub enum Done {
    /// A scan was read.
    Scan(LoadedScan),
    /// A scan was read again; its key says which.
    Reread(LoadedScan),
    /// A scan was read as another one with its header was before.
    ScanAsBefore(LoadedScan),
    /// A look at the file of a scan.
    Looked(Looked),
    /// Text logs to be searched, or why there are none.
    Logs(Result<Logs, String>),
    /// What patterns catch.
    Searched(ReadSettings, Searched),
    /// Text logs were refused as a scan.
    LogsRefused(String),
    /// The files of a folder that could be read, those that could not, and how many were not looked at.
    Folder(Vec<LoadedScan>, Vec<Problem>, usize),
    /// A file was refused.
    Problem(Problem),
    /// Files were chosen in a dialog.
    Chosen(PathPurpose, Vec<PathBuf>),
    /// The desktop offers no dialog.
    NoDialog(PathPurpose, String, Vec<String>),
    /// A folder was listed.
    Entries(Vec<String>),
    /// A file was written, or why not.
    Written(Result<String, String>),
    /// A picture for the clipboard was painted, or why not.
    Painted(Result<eframe::egui::ColorImage, String>),
    /// A study file was read.
    Study(Box<Opened>),
    /// Unsaved work of an earlier window was read, or why not.
    Restored(u64, Result<Box<Opened>, String>),
    /// Unsaved work of earlier windows was looked for.
    Leftovers(Vec<(Slot, Leftover)>),
    /// What the program remembers was changed, or why not.
    Remembered(Result<(), String>),
    /// A study was saved, or why not and which file is in the way.
    Saved(Result<SavedStudy, (String, Option<PathBuf>)>),
}

/// Does file work beside the window.
pub struct Files {
    sender: mpsc::Sender<Done>,
    receiver: mpsc::Receiver<Done>,
    wake: Arc<dyn Fn() + Send + Sync>,
    inline: bool,
    under_way: usize,
    /// Reads file after file, so that they come in the order in which they were given.
    reader: Option<mpsc::Sender<Job>>,
    /// How files were read before.
    pub remembered: Arc<Remembered>,
    /// How often patterns were to be tried: only the latest ones still matter.
    pub(super) searches: Arc<AtomicU64>,
}

type Job = Box<dyn FnOnce() -> Done + Send>;

/// What came of the work; a panic is told, for the window waits for every answer.
fn guarded(work: impl FnOnce() -> Done) -> Done {
    catch_unwind(AssertUnwindSafe(work)).unwrap_or_else(|panic| {
        let text = panic.downcast_ref::<&str>().map(|s| (*s).to_owned());
        let text = text.or_else(|| panic.downcast_ref::<String>().cloned()).unwrap_or_default();
        Done::Written(Err(format!(
            "Working on a file broke off ({text}). This is a fault of the program; the file was left as it is."
        )))
    })
}

impl Files {
    /// `inline` does the work at once, for tests and pictures.
    pub fn new(wake: impl Fn() + Send + Sync + 'static, inline: bool) -> Self {
        let (sender, receiver) = mpsc::channel();
        Self {
            sender,
            receiver,
            wake: Arc::new(wake),
            inline,
            under_way: 0,
            reader: None,
            remembered: Arc::default(),
            searches: Arc::default(),
        }
    }

    /// The next thing finished.
    pub fn poll(&mut self) -> Option<Done> {
        let done = self.receiver.try_recv().ok()?;
        self.under_way = self.under_way.saturating_sub(1);
        Some(done)
    }

    /// Whether something is under way.
    pub fn is_busy(&self) -> bool {
        self.under_way > 0
    }

    /// On a thread of its own: for dialogs, which stay open, and whatever needs no order.
    fn run(&mut self, work: impl FnOnce() -> Done + Send + 'static) {
        self.under_way += 1;
        let (sender, wake) = (self.sender.clone(), Arc::clone(&self.wake));
        let all = move || {
            let done = guarded(work);
            if sender.send(done).is_ok() {
                wake();
            }
        };
        if self.inline {
            all();
        } else if std::thread::Builder::new().name("files".into()).spawn(all).is_err() {
            self.under_way -= 1;
        }
    }

    /// After what was asked for before.
    pub(super) fn run_in_order(&mut self, work: impl FnOnce() -> Done + Send + 'static) {
        if self.inline {
            self.run(work);
            return;
        }
        if self.reader.is_none() {
            let (jobs, inbox) = mpsc::channel::<Job>();
            let (sender, wake) = (self.sender.clone(), Arc::clone(&self.wake));
            let all = move || {
                while let Ok(job) = inbox.recv() {
                    if sender.send(guarded(job)).is_err() {
                        return;
                    }
                    wake();
                }
            };
            let thread = std::thread::Builder::new().name("reader".into()).spawn(all);
            self.reader = thread.is_ok().then_some(jobs);
        }
        match &self.reader {
            Some(reader) if reader.send(Box::new(work)).is_ok() => self.under_way += 1,
            _ => {}
        }
    }

    /// Reads a scan from a file; its studies start from these settings.
    pub fn read(&mut self, path: PathBuf, start: Settings) {
        let remembered = Arc::clone(&self.remembered);
        self.run_in_order(move || read_as_before(&path, start, &remembered));
    }

    /// Reads a bundled sample.
    pub fn read_sample(&mut self, index: usize, start: Settings) {
        if let Some(sample) = SAMPLES.get(index) {
            self.run_in_order(move || {
                match understand(sample.file_name, Arc::from(sample.bytes), None, start) {
                    Done::Scan(loaded) => Done::Scan(LoadedScan { is_sample: true, ..loaded }),
                    other => other,
                }
            });
        }
    }

    /// Reads a table that was copied elsewhere.
    pub fn read_text(&mut self, text: String, start: Settings) {
        self.run_in_order(move || understand("pasted table", Arc::from(text.into_bytes()), None, start));
    }

    /// Reads a scan again, from its file or from the bytes that were read before.
    pub fn reread(&mut self, loaded: LoadedScan, from_disk: bool) {
        self.run_in_order(move || {
            let LoadedScan { key, scan, path, bytes, logs, modified, is_sample, start } = loaded;
            let read = match (logs, path) {
                (Some(set), _) => {
                    let set = if from_disk { log_set(&set.paths).map(Arc::new) } else { Ok(set) };
                    let read = set.and_then(|set| scan_of_logs(&set, start));
                    read.map_or_else(Done::LogsRefused, Done::Scan)
                }
                (None, Some(path)) if from_disk => read_file(&path, start),
                (None, path) => understand(&scan.file_name, bytes, path, start),
            };
            match read {
                Done::Scan(new) => {
                    let modified = if from_disk { new.modified } else { modified };
                    Done::Reread(LoadedScan { key, modified, is_sample, ..new })
                }
                Done::Problem(problem) => Done::Problem(Problem { of: Some(key), ..problem }),
                other => other,
            }
        });
    }

    /// Reads the bytes of a refused file with other settings.
    pub fn read_again(&mut self, problem: Problem) {
        let Problem { file_name, path, bytes: Some(bytes), start, modified, of, .. } = problem else {
            return;
        };
        self.run_in_order(move || match (understand(&file_name, bytes, path, start), of) {
            (Done::Scan(loaded), None) => Done::Scan(LoadedScan { modified, ..loaded }),
            // It was refused in the place of a scan, which it is again.
            (Done::Scan(loaded), Some(key)) => Done::Reread(LoadedScan { key, modified, ..loaded }),
            (Done::Problem(problem), of) => Done::Problem(Problem { of, modified, ..problem }),
            (other, _) => other,
        });
    }

    /// Writes something made of a study; refuses to replace a file unless told to.
    pub fn write(
        &mut self,
        product: Product,
        path: PathBuf,
        findings: Arc<Findings>,
        paper: Paper,
        overwrite: bool,
    ) {
        self.run(move || Done::Written(product.write(&findings, &path, &paper, overwrite)));
    }

    /// Paints the picture for the clipboard.
    pub fn paint(&mut self, findings: Arc<Findings>, paper: Paper) {
        self.run(move || {
            let drawing = drawing(&findings, Subject::Curve, &paper).map_err(|e| e.to_string());
            Done::Painted(drawing.and_then(|d| super::paper::drawing_to_image(&d, CLIPBOARD_DOTS_PER_INCH)))
        });
    }

    /// Saves a study; replaces only the file whose check sum is known, unless told otherwise.
    pub fn write_study(&mut self, path: PathBuf, work: Box<Work>, known: Option<String>, overwrite: bool) {
        self.run(move || Done::Saved(save_study(path, *work, known.as_deref(), overwrite)));
    }

    /// Looks for unsaved work of earlier windows.
    pub fn look_for_leftovers(&mut self, folder: PathBuf) {
        self.run(move || Done::Leftovers(autosave::leftovers(&folder)));
    }

    /// Reads unsaved work of an earlier window.
    pub fn restore(&mut self, id: u64, path: PathBuf) {
        self.run(move || Done::Restored(id, autosave::restore(&path).map(Box::new)));
    }

    /// Changes what the program remembers.
    pub fn remember(&mut self, folder: PathBuf, change: impl FnOnce(&mut Preferences) + Send + 'static) {
        self.run(move || Done::Remembered(Preferences::update(&folder, change)));
    }

    /// Lists the folder that a typed path names.
    pub fn list(&mut self, text: String) {
        self.run(move || Done::Entries(entries_of(&text)));
    }

    /// Asks for files to open.
    pub fn ask_open(&mut self) {
        if self.inline {
            self.run(|| no_dialog(PathPurpose::Open, String::new()));
            return;
        }
        self.run(|| {
            let start = Instant::now();
            let dialog = rfd::FileDialog::new().set_title("Open a bond scan");
            match dialog.pick_files() {
                Some(paths) => Done::Chosen(PathPurpose::Open, paths),
                None if start.elapsed() < NO_DIALOG => no_dialog(PathPurpose::Open, String::new()),
                None => Done::Chosen(PathPurpose::Open, Vec::new()),
            }
        });
    }

    /// Asks for a folder of text logs.
    pub fn ask_logs(&mut self) {
        if self.inline {
            self.run(|| no_dialog(PathPurpose::Logs, String::new()));
            return;
        }
        self.run(|| {
            let start = Instant::now();
            let dialog = rfd::FileDialog::new().set_title("Text logs: the folder they are in");
            match dialog.pick_folder() {
                Some(path) => Done::Chosen(PathPurpose::Logs, vec![path]),
                None if start.elapsed() < NO_DIALOG => no_dialog(PathPurpose::Logs, String::new()),
                None => Done::Chosen(PathPurpose::Logs, Vec::new()),
            }
        });
    }

    /// Asks where to write something under this name.
    pub fn ask_save(&mut self, purpose: PathPurpose, name: String) {
        if self.inline {
            self.run(move || no_dialog(purpose, name));
            return;
        }
        self.run(move || {
            let start = Instant::now();
            let title = match purpose {
                PathPurpose::Write(product) => format!("Write {}", product.name().to_lowercase()),
                _ => "Save study".to_owned(),
            };
            let dialog = rfd::FileDialog::new().set_title(title).set_file_name(&name);
            match dialog.save_file() {
                Some(path) => Done::Chosen(purpose, vec![path]),
                None if start.elapsed() < NO_DIALOG => no_dialog(purpose, name),
                None => Done::Chosen(purpose, Vec::new()),
            }
        });
    }
}

fn no_dialog(purpose: PathPurpose, name: String) -> Done {
    let folder = std::env::current_dir().unwrap_or_else(|_| PathBuf::from("/"));
    let text = folder.join(name).display().to_string();
    let entries = entries_of(&text);
    Done::NoDialog(purpose, text, entries)
}

/// Entries of the folder that a text names (itself, or the folder of the file it names): folders
/// first, each with a slash at the end.
fn entries_of(text: &str) -> Vec<String> {
    let path = Path::new(text);
    let folder = if path.is_dir() { Some(path) } else { path.parent() };
    let Some(Ok(read)) = folder.map(std::fs::read_dir) else { return Vec::new() };
    let name = |entry: std::fs::DirEntry| {
        let name = entry.file_name().to_string_lossy().into_owned();
        let hidden = name.starts_with('.');
        let folder = entry.path().is_dir();
        (!hidden).then(|| if folder { format!("{name}/") } else { name })
    };
    let mut names: Vec<String> = read.filter_map(Result::ok).filter_map(name).take(2000).collect();
    names.sort_by_key(|n| (!n.ends_with('/'), n.to_lowercase()));
    names
}

/// The name of a file without its folder.
pub(super) fn file_name_of(path: &Path) -> String {
    path.file_name().map_or_else(|| path.display().to_string(), |n| n.to_string_lossy().into_owned())
}

fn save_study(
    path: PathBuf,
    work: Work,
    known: Option<&str>,
    overwrite: bool,
) -> Result<SavedStudy, (String, Option<PathBuf>)> {
    let folder = path.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or(Path::new("."));
    let text = work.to_file(Some(folder)).to_text();
    let there = std::fs::read(&path).ok().map(|bytes| sha256_of(&bytes));
    let is_ours = there.is_some() && there.as_deref() == known;
    let replace = if overwrite || is_ours { Replace::Anything } else { Replace::Nothing };
    match crate::files::write(&path, text.as_bytes(), replace) {
        Ok(()) => Ok(SavedStudy {
            sha256: sha256_of(text.as_bytes()),
            modified: std::fs::metadata(&path).and_then(|d| d.modified()).ok(),
            document: work.document,
            path,
        }),
        Err(WriteError::Exists { path: there }) if known.is_some() => Err((
            format!("{} was changed by another program and left as it is.", there.display()),
            Some(path),
        )),
        Err(WriteError::Exists { path: there }) => {
            Err((format!("{} exists and was left as it is.", there.display()), Some(path)))
        }
        Err(error) => Err((format!("{error}."), None)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn finished(files: &mut Files, count: usize) -> Vec<Done> {
        let start = Instant::now();
        let mut all = Vec::new();
        while all.len() < count {
            all.extend(files.poll());
            assert!(start.elapsed() < Duration::from_secs(60), "no answer");
            std::thread::sleep(Duration::from_millis(1));
        }
        all
    }

    /// A long file given first comes first.
    #[test]
    fn files_come_in_the_order_given() {
        let folder = tempfile::tempdir().expect("a folder");
        let mut files = Files::new(|| {}, false);
        for i in 0..12 {
            let rows: String =
                (0..(if i == 0 { 20_000 } else { 3 })).map(|r| format!("{}.5,-1\n", r + 1)).collect();
            let path = folder.path().join(format!("scan_{i}.csv"));
            std::fs::write(&path, format!("R_A,E_Eh\n{rows}")).expect("written");
            files.read(path, Settings::default());
        }
        let names: Vec<String> = finished(&mut files, 12)
            .into_iter()
            .map(|done| match done {
                Done::Scan(loaded) => loaded.scan.file_name.clone(),
                other => panic!("{other:?}"),
            })
            .collect();
        assert_eq!(names, (0..12).map(|i| format!("scan_{i}.csv")).collect::<Vec<_>>());
        assert!(!files.is_busy());
    }

    /// A panic while a file is worked on is told, and the next file is read.
    #[test]
    fn a_panic_does_not_leave_the_window_busy() {
        for inline in [false, true] {
            let mut files = Files::new(|| {}, inline);
            files.run_in_order(|| panic!("seven is bad"));
            files.run(|| panic!("eight is bad"));
            files.read_text("R_A,E_Eh\n1,2\n".to_owned(), Settings::default());
            let done = finished(&mut files, 3);
            assert!(!files.is_busy());
            let failures =
                done.iter().filter(|d| matches!(d, Done::Written(Err(text)) if text.contains("is bad")));
            assert_eq!(failures.count(), 2, "{done:?}");
            assert!(done.iter().any(|d| matches!(d, Done::Scan(_))), "{done:?}");
        }
    }
}
