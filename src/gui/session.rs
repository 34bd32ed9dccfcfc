//! The work of a window as a study file, and back.

use super::files::{Done, file_name_of, understand};
use super::log_files::{log_set, scan_of_logs};
use super::reading::LogSet;
use super::samples::SAMPLES;
use super::seen::{symbol, view_of};
use super::state::{Document, LoadedScan, State};
use crate::export::compare::Quantity;
use crate::study_file::{FORMAT, Focus, Kept, StudyCurve, StudyFile, StudyLogs, StudyScan, VERSION, View};
use sha2::{Digest as _, Sha256};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::SystemTime;

/// What is saved: the document, what is looked at, and where the user keeps it.
#[derive(Clone, Debug, PartialEq)]
pub struct Work {
    /// The document.
    pub document: Document,
    /// What is looked at.
    pub view: View,
    /// Where the user keeps it.
    pub kept: Option<Kept>,
}

/// A study file that was read.
#[derive(Clone, Debug)]
pub struct Opened {
    /// Its scans, each with its curves; the keys are given later.
    pub scans: Vec<(LoadedScan, Vec<StudyCurve>)>,
    /// Numbers of the scans whose files are not what they were.
    pub changed: Vec<usize>,
    /// What could not be read, in words.
    pub lost: Vec<String>,
    /// The curve in focus.
    pub focus: Option<Focus>,
    /// Published constants to compare with.
    pub published: [Option<f64>; Quantity::ALL.len()],
    /// What was looked at.
    pub view: View,
    /// Where the user keeps it.
    pub kept: Option<(PathBuf, Option<String>)>,
    /// When the file was last changed.
    pub modified: Option<SystemTime>,
    /// Whether it is work that was saved by the program itself.
    pub restored: bool,
}

/// Check sum of bytes as 64 hexadecimal digits.
pub fn sha256_of(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|b| format!("{b:02x}")).collect()
}

impl Work {
    /// The work in a window.
    pub fn of(state: &State) -> Self {
        Self { document: state.document.clone(), view: view_of(state), kept: kept_of(state) }
    }

    /// Whether this is still the work in the window.
    pub fn is_of(&self, state: &State) -> bool {
        self.document == state.document && self.view == view_of(state) && self.kept == kept_of(state)
    }

    /// As a study file in this folder, if the user saves it; without one, as the program saves it for itself.
    pub fn to_file(&self, folder: Option<&Path>) -> StudyFile {
        let document = &self.document;
        let scan = |loaded: &LoadedScan| {
            let curve = |column: usize| {
                let settings = document.settings.get(&super::state::CurveKey { scan: loaded.key, column })?;
                let name = loaded.scan.energies.get(column)?.name.clone();
                Some(StudyCurve { name, settings: settings.clone() })
            };
            let mut scan = StudyScan {
                file_name: loaded.scan.file_name.clone(),
                path: loaded.path.as_deref().map(|path| written_path(path, folder)),
                logs: loaded.logs.as_ref().map(|set| {
                    let paths = set.paths.iter().map(|path| written_path(path, folder)).collect();
                    let mut logs = StudyLogs { paths, files: Vec::new() };
                    logs.carry(set.by_name());
                    logs
                }),
                sha256: loaded.scan.sha256.clone(),
                sample: loaded.is_sample,
                text: None,
                hex: None,
                start: loaded.start.clone(),
                curves: (0..loaded.scan.energies.len()).filter_map(curve).collect(),
            };
            if !loaded.is_sample && loaded.logs.is_none() {
                scan.carry(&loaded.bytes);
            }
            scan
        };
        let focus = document.focused().and_then(|(key, loaded, _)| {
            let number = document.scans.iter().position(|s| s.key == key.scan)?;
            Some(Focus { scan: number, curve: loaded.scan.energies.get(key.column)?.name.clone() })
        });
        StudyFile {
            format: FORMAT.to_owned(),
            version: VERSION,
            program: concat!("parabound ", env!("CARGO_PKG_VERSION")).to_owned(),
            kept: if folder.is_none() { self.kept.clone() } else { None },
            scans: document.scans.iter().map(scan).collect(),
            focus,
            published: published_of(document),
            view: self.view.clone(),
        }
    }
}

fn published_of(document: &Document) -> BTreeMap<String, f64> {
    let all = Quantity::ALL.into_iter().zip(document.published);
    all.filter_map(|(q, v)| Some((symbol(q), v?))).collect()
}

fn kept_of(state: &State) -> Option<Kept> {
    let kept = state.kept.get(&state.document.origin)?;
    Some(Kept { path: kept.path.display().to_string(), sha256: kept.sha256.clone() })
}

/// A path as it is written into a study file: relative where the scan lies in the folder of the study file or
/// below, so that both can be moved together.
fn written_path(path: &Path, folder: Option<&Path>) -> String {
    let whole = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
    let inside = folder.and_then(|folder| {
        let folder = std::path::absolute(folder).ok()?;
        let parts: Vec<_> =
            whole.strip_prefix(folder).ok()?.components().map(|c| c.as_os_str().to_string_lossy()).collect();
        Some(parts.join("/"))
    });
    inside.unwrap_or_else(|| whole.display().to_string())
}

impl Opened {
    /// What a study file holds, with the tables of its scans; `folder` is where its relative paths begin.
    pub fn of(file: StudyFile, folder: &Path) -> Self {
        let mut opened = Self {
            scans: Vec::new(),
            changed: Vec::new(),
            lost: Vec::new(),
            focus: None,
            published: Quantity::ALL
                .map(|q| file.published.get(&symbol(q)).copied().filter(|v| v.is_finite())),
            view: file.view,
            kept: file.kept.map(|k| (PathBuf::from(k.path), k.sha256)),
            modified: None,
            restored: false,
        };
        for (number, scan) in file.scans.into_iter().enumerate() {
            let focus = file.focus.as_ref().filter(|f| f.scan == number);
            match read_scan_of(&scan, folder) {
                Ok((loaded, is_current)) => {
                    if !is_current {
                        opened.changed.push(opened.scans.len());
                    }
                    // Scans that are lost shift the numbers of those after them.
                    let reference = opened.view.comparison.as_mut().and_then(|c| c.reference.as_mut());
                    if let Some(reference) = reference.filter(|r| r.scan == number) {
                        reference.scan = opened.scans.len();
                    }
                    if let Some(focus) = focus {
                        opened.focus = Some(Focus { scan: opened.scans.len(), curve: focus.curve.clone() });
                    }
                    opened.scans.push((loaded, scan.curves));
                }
                Err(reason) => {
                    if let Some(compared) = &mut opened.view.comparison {
                        compared.reference = compared.reference.take().filter(|r| r.scan != number);
                    }
                    opened.lost.push(format!("{}: {reason}", scan.file_name));
                }
            }
        }
        opened
    }
}

/// The scan with its table, from its file where that is what it was, else as carried; false when the file
/// is there and has changed.
fn read_scan_of(scan: &StudyScan, folder: &Path) -> Result<(LoadedScan, bool), String> {
    if let Some(logs) = &scan.logs {
        return read_logs_of(scan, logs, folder);
    }
    let path = scan.path.as_ref().map(|p| folder.join(p));
    let on_disk = path.as_deref().and_then(|path| {
        let data =
            std::fs::metadata(path).ok().filter(|d| d.is_file() && d.len() <= super::files::MOST_BYTES)?;
        Some((std::fs::read(path).ok()?, data.modified().ok()))
    });
    let is_it = |bytes: &[u8]| sha256_of(bytes) == scan.sha256;
    let sample = SAMPLES.iter().find(|s| scan.sample && s.file_name == scan.file_name && is_it(s.bytes));
    let (bytes, modified, is_current) = match (on_disk, scan.carried(), sample) {
        (Some((bytes, modified)), ..) if is_it(&bytes) => (bytes, modified, true),
        (on_disk, Some(carried), _) => (carried, None, on_disk.is_none()),
        (_, None, Some(sample)) => (sample.bytes.to_vec(), None, true),
        (Some((bytes, modified)), None, None) => (bytes, modified, false),
        (None, None, None) => {
            let place = path.map_or_else(|| "nowhere".into(), |p| p.display().to_string());
            return Err(format!("the table is not at {place}, and the study file does not carry it"));
        }
    };
    match understand(&scan.file_name, Arc::from(bytes), path, scan.start.clone()) {
        Done::Scan(loaded) => Ok((LoadedScan { modified, is_sample: scan.sample, ..loaded }, is_current)),
        Done::Problem(problem) => Err(problem.text),
        _ => Err("the table could not be read".into()),
    }
}

/// The same for a scan made of text logs.
fn read_logs_of(scan: &StudyScan, logs: &StudyLogs, folder: &Path) -> Result<(LoadedScan, bool), String> {
    let paths: Vec<PathBuf> = logs.paths.iter().map(|path| folder.join(path)).collect();
    let read = |set: LogSet| scan_of_logs(&Arc::new(set), scan.start.clone());
    let on_disk = log_set(&paths).and_then(read);
    if let Ok(loaded) = &on_disk
        && loaded.scan.sha256 == scan.sha256
    {
        return Ok((loaded.clone(), true));
    }
    let Some(carried) = logs.carried() else {
        let why = |text| format!("the study file does not carry its logs, and on disk: {text}");
        return on_disk.map(|loaded| (loaded, false)).map_err(why);
    };
    let files = carried.into_iter().map(|(name, bytes)| (name, Arc::from(bytes))).collect();
    let is_gone = !paths.iter().any(|path| path.exists());
    let place = folder.join(scan.path.as_deref().unwrap_or(&scan.file_name));
    let loaded = read(LogSet { paths, folder: place, files, modified: None })?;
    Ok((loaded, is_gone))
}

/// Reads a study file.
///
/// # Errors
/// What is wrong with it, in words.
pub fn open(path: &Path, bytes: &[u8]) -> Result<Opened, String> {
    let file = StudyFile::from_bytes(bytes).map_err(|e| format!("{}: {e}.", file_name_of(path)))?;
    let folder = path.parent().unwrap_or(Path::new(""));
    let mut opened = Opened::of(file, folder);
    opened.kept = Some((path.to_owned(), Some(sha256_of(bytes))));
    opened.modified = std::fs::metadata(path).and_then(|d| d.modified()).ok();
    Ok(opened)
}
