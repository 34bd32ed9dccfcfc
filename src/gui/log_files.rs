//! File work for how files are read: text logs, what patterns catch in them, what units would mean.

use super::files::{Done, Files, file_name_of};
use super::meaning::all_meanings;
use super::reading::{LogSet, Logs, Looked, Searched};
use super::state::LoadedScan;
use super::watch::last_change;
use crate::scan::Layout;
use crate::scan::read::{Preview, ReadSettings, preview, read_logs, try_patterns};
use crate::settings::Settings;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::Ordering;

/// Most logs, and most bytes of all of them, that are looked at.
const MOST_LOGS: usize = 10_000;
const MOST_BYTES: u64 = 256 << 20;

impl Files {
    /// Works out what each unit would mean for a scan.
    pub fn meanings(&mut self, loaded: LoadedScan) {
        self.run_in_order(move || {
            let meanings = all_meanings(&loaded.scan.file_name, &loaded.bytes, &loaded.start);
            let read = loaded.start.read;
            let seen = if loaded.scan.layout == Layout::Delimited {
                preview(&loaded.bytes, &read)
            } else {
                Preview::default()
            };
            Done::Looked(Looked { scan: loaded.key, read, meanings, preview: seen })
        });
    }

    /// Reads logs to be searched: files, or a folder that stands for the files in it.
    pub fn open_logs(&mut self, paths: Vec<PathBuf>, patterns: Option<ReadSettings>) {
        self.run_in_order(move || {
            let read = patterns.unwrap_or_default();
            Done::Logs(log_set(&paths).map(|set| Logs::new(Arc::new(set), read)))
        });
    }

    /// Reads logs as a scan at once; where that fails they are there to be searched.
    pub fn read_log_paths(&mut self, paths: Vec<PathBuf>, start: Settings) {
        self.run_in_order(move || {
            let read = start.read.clone();
            let set = match log_set(&paths) {
                Ok(set) => Arc::new(set),
                Err(text) => return Done::Logs(Err(text)),
            };
            match scan_of_logs(&set, start) {
                Ok(loaded) => Done::Scan(loaded),
                Err(text) => Done::Logs(Ok(Logs { refused: Some(text), ..Logs::new(set, read) })),
            }
        });
    }

    /// Tries patterns, unless others have been typed meanwhile.
    pub fn try_logs(&mut self, logs: Logs) {
        let number = self.searches.fetch_add(1, Ordering::Relaxed) + 1;
        let latest = Arc::clone(&self.searches);
        self.run_in_order(move || {
            let is_latest = latest.load(Ordering::Relaxed) == number;
            let found = if is_latest { searched(&logs) } else { Searched::default() };
            Done::Searched(logs.read, found)
        });
    }

    /// Reads logs as a scan.
    pub fn read_logs(&mut self, logs: Logs) {
        self.run_in_order(move || {
            let start = Settings { read: logs.read, ..Settings::default() };
            scan_of_logs(&logs.set, start).map_or_else(Done::LogsRefused, Done::Scan)
        });
    }
}

/// What the patterns catch, the logs that give no point first.
fn searched(logs: &Logs) -> Searched {
    let patterns = logs.read.lines.clone().unwrap_or_default();
    let tried = try_patterns(&patterns, logs.set.by_name());
    let mut order: Vec<usize> = (0..logs.set.files.len()).collect();
    if tried.points() > 0 {
        order.sort_by_key(|&i| tried.logs[i].iter().all(|c| c.as_ref().is_some_and(Result::is_ok)));
    }
    let lines = order.first().map_or_else(Vec::new, |&first| {
        let caught: Vec<usize> = tried.logs[first].iter().flatten().flatten().map(|c| c.line).collect();
        excerpt(&String::from_utf8_lossy(&logs.set.files[first].1), &caught)
    });
    Searched { tried, order, lines }
}

/// Texts of no more lines are shown as a whole.
const WHOLE: usize = 400;
/// Lines shown at the beginning and at the end of others, and on either side of a line in which something is caught.
const ENDS: usize = 20;
const AROUND: usize = 6;
/// Letters shown of a line.
const LETTERS: usize = 160;

/// The lines of a text that are shown, each with its number; 0 where lines are left out.
fn excerpt(text: &str, caught: &[usize]) -> Vec<(usize, String)> {
    let total = text.lines().count();
    let is_shown = |number: usize| {
        total <= WHOLE
            || number <= ENDS
            || number + ENDS > total
            || caught.iter().any(|line| line.abs_diff(number) <= AROUND)
    };
    let mut shown: Vec<(usize, String)> = Vec::new();
    for (number, line) in (1..).zip(text.lines()).filter(|(number, _)| is_shown(*number)) {
        if shown.last().is_some_and(|(before, _)| before + 1 < number) {
            shown.push((0, String::new()));
        }
        shown.push((number, line.chars().take(LETTERS).collect()));
    }
    shown
}

/// Logs by their paths. Of a folder they are all its files by name, hidden files and folders left out.
///
/// # Errors
/// Why there are none, in words.
pub(super) fn log_set(paths: &[PathBuf]) -> Result<LogSet, String> {
    let mut found = Vec::new();
    for path in paths {
        if path.is_dir() {
            found.extend(listed(path)?);
        } else {
            found.push(path.clone());
        }
    }
    let folder = place_of(paths);
    let shown = folder.display();
    if found.len() > MOST_LOGS {
        return Err(format!("{shown} holds {} files; at most {MOST_LOGS} are searched.", found.len()));
    }
    // Looked up before the files are read: a change in between is then noticed.
    let modified = last_change(paths).ok();
    let (mut files, mut size) = (Vec::new(), 0);
    for path in found {
        size += std::fs::metadata(&path).map_or(0, |data| data.len());
        if size > MOST_BYTES {
            return Err(format!("The files in {shown} are larger than 256 MB together; that is too much."));
        }
        let bytes =
            std::fs::read(&path).map_err(|e| format!("{} could not be read: {e}.", path.display()))?;
        files.push((file_name_of(&path), Arc::from(bytes)));
    }
    if files.is_empty() {
        return Err(format!("There is no file in {shown}."));
    }
    Ok(LogSet { paths: paths.to_vec(), folder, files, modified })
}

/// The files of a folder by name, hidden ones and folders left out.
fn listed(folder: &Path) -> Result<Vec<PathBuf>, String> {
    let entries =
        std::fs::read_dir(folder).map_err(|e| format!("{} could not be listed: {e}.", folder.display()))?;
    let mut paths: Vec<PathBuf> =
        entries.filter_map(Result::ok).map(|e| e.path()).filter(|p| p.is_file()).collect();
    paths.retain(|p| !file_name_of(p).starts_with('.'));
    paths.sort();
    Ok(paths)
}

/// The folder that logs are in.
fn place_of(paths: &[PathBuf]) -> PathBuf {
    let first = paths.first().map_or(Path::new(""), PathBuf::as_path);
    let folder = if first.is_dir() { Some(first) } else { first.parent() };
    folder.unwrap_or(first).to_owned()
}

/// Reads logs as one scan, named after their folder.
///
/// # Errors
/// Why not, in words.
pub(super) fn scan_of_logs(set: &Arc<LogSet>, start: Settings) -> Result<LoadedScan, String> {
    let name = set.folder.file_name().map_or_else(|| "logs".into(), |n| n.to_string_lossy());
    let scan = read_logs(&name, set.by_name(), &start.read).map_err(|e| e.to_string())?;
    Ok(LoadedScan {
        key: 0,
        scan: Arc::new(scan),
        path: Some(set.folder.clone()),
        bytes: Arc::from([]),
        logs: Some(Arc::clone(set)),
        modified: set.modified,
        is_sample: false,
        start,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn of_a_long_log_the_ends_and_what_is_caught_are_shown() {
        let text: String = (1..=5000).map(|i| format!("line {i}\n")).collect();
        let shown = excerpt(&text, &[3000]);
        let numbers: Vec<usize> = shown.iter().map(|(number, _)| *number).collect();
        let expected: Vec<usize> =
            (1..=20).chain([0]).chain(2994..=3006).chain([0]).chain(4981..=5000).collect();
        assert_eq!(numbers, expected);
        assert_eq!(shown[25].1, "line 2998");
        assert_eq!(excerpt("a\nb\n", &[]), [(1, "a".to_owned()), (2, "b".to_owned())]);
    }
}
