//! From a path or bytes to a scan, or to a problem that says what is asked of the user.

use super::{Done, MOST_BYTES, MOST_FILES, file_name_of};
use crate::gui::log_files::log_set;
use crate::gui::meaning::meanings;
use crate::gui::reading::{Logs, Remembered};
use crate::gui::session::{self};
use crate::gui::state::{Asks, LoadedScan, Problem};
use crate::scan::error::ScanError;
use crate::scan::read::{ReadSettings, preview, read_scan};
use crate::settings::Settings;
use crate::study_file::is_study_file;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// Reads a file; where nothing was chosen for it, as the last one with its header was read.
pub(super) fn read_as_before(path: &Path, start: Settings, remembered: &Remembered) -> Done {
    let as_it_says = ReadSettings::default();
    let before = || {
        let is_open = start.read == as_it_says && !remembered.headers.is_empty();
        let size = std::fs::metadata(path).ok().filter(|data| is_open && data.is_file())?.len();
        let bytes = if size <= MOST_BYTES { std::fs::read(path).ok()? } else { return None };
        remembered.of(&preview(&bytes, &as_it_says).header()?).cloned()
    };
    if path.is_dir() {
        return read_folder(path, &start, remembered);
    }
    if let Some(read) = before()
        && let Done::Scan(loaded) = read_file(path, Settings { read, ..start.clone() })
    {
        return Done::ScanAsBefore(loaded);
    }
    read_file(path, start)
}

/// A file that could not be read at all.
pub(super) fn unread(path: &Path, text: String) -> Problem {
    Problem {
        file_name: file_name_of(path),
        path: Some(path.to_owned()),
        bytes: None,
        text,
        start: Settings::default(),
        modified: None,
        of: None,
        asks: Asks::Nothing,
        meanings: Vec::new(),
        preview: None,
    }
}

pub(super) fn read_file(path: &Path, start: Settings) -> Done {
    let file_name = file_name_of(path);
    let refuse = |text: String| Done::Problem(unread(path, text));
    let modified = match std::fs::metadata(path) {
        Err(error) => return refuse(format!("{}: {error}. Check the path.", path.display())),
        Ok(data) if data.is_dir() => return refuse(format!("{} is a folder.", path.display())),
        Ok(data) if data.len() > MOST_BYTES => {
            return refuse(format!("{} has {} bytes: too large for a scan.", path.display(), data.len()));
        }
        Ok(data) => data.modified().ok(),
    };
    match std::fs::read(path) {
        Ok(bytes) if is_study_file(&bytes) => match session::open(path, &bytes) {
            Ok(opened) => Done::Study(Box::new(opened)),
            Err(text) => refuse(text),
        },
        Ok(bytes) => match understand(&file_name, Arc::from(bytes), Some(path.to_owned()), start) {
            Done::Scan(loaded) => Done::Scan(LoadedScan { modified, ..loaded }),
            Done::Problem(problem) => Done::Problem(Problem { modified, ..problem }),
            other => other,
        },
        Err(error) => refuse(format!("{} could not be read: {error}.", path.display())),
    }
}

/// Reads the files of a folder that are scans, by name; folders in it are left alone.
fn read_folder(path: &Path, start: &Settings, remembered: &Remembered) -> Done {
    let mut files: Vec<PathBuf> = match std::fs::read_dir(path) {
        Ok(entries) => entries.filter_map(Result::ok).map(|e| e.path()).filter(|p| p.is_file()).collect(),
        Err(error) => {
            return Done::Written(Err(format!("{} could not be listed: {error}.", path.display())));
        }
    };
    files.sort();
    files.retain(|p| !file_name_of(p).starts_with('.'));
    let left_out = files.len().saturating_sub(MOST_FILES);
    files.truncate(MOST_FILES);
    let (mut scans, mut refused) = (Vec::new(), Vec::new());
    for file in files {
        match read_as_before(&file, start.clone(), remembered) {
            Done::Scan(loaded) | Done::ScanAsBefore(loaded) => scans.push(loaded),
            Done::Problem(problem) => refused.push(problem),
            _ => refused.push(unread(&file, "This is a study file: open it by itself.".to_owned())),
        }
    }
    // A folder of files none of which is a scan may be a scan as a whole: text logs, a point each.
    let may_be_logs = |p: &Problem| p.preview.is_some() && matches!(p.asks, Asks::Nothing);
    if scans.is_empty() && refused.len() > 1 && refused.iter().all(may_be_logs) {
        let paths = [path.to_owned()];
        let read = remembered.patterns.clone().unwrap_or_default();
        return Done::Logs(log_set(&paths).map(|set| Logs::new(Arc::new(set), read)));
    }
    Done::Folder(scans, refused, left_out)
}

/// Reads bytes as a scan, or keeps them for another try.
pub fn understand(file_name: &str, bytes: Arc<[u8]>, path: Option<PathBuf>, start: Settings) -> Done {
    let read = read_scan(file_name, &bytes, &start.read)
        .and_then(|scan| scan.curve_index(start.curve.as_deref()).map(|_| scan));
    match read {
        Ok(scan) => Done::Scan(LoadedScan {
            key: 0,
            scan: Arc::new(scan),
            path,
            bytes,
            logs: None,
            modified: None,
            is_sample: false,
            start,
        }),
        Err(error) => Done::Problem(Problem {
            file_name: file_name.to_owned(),
            path,
            meanings: match asks(&error) {
                Asks::Units => meanings(file_name, &bytes, &start),
                _ => Vec::new(),
            },
            asks: asks(&error),
            modified: None,
            of: None,
            text: words(&error),
            preview: Some(preview(&bytes, &start.read)),
            bytes: Some(bytes),
            start,
        }),
    }
}

/// The refusal in words of the window, where the reader's own words name options of the command line.
fn words(error: &ScanError) -> String {
    let remedy = "Choose it here, or write it into the header of the file";
    // A column without a header is called by its number already: `column 1`.
    let plain = |column: &str| column.strip_prefix("column ").unwrap_or(column).to_owned();
    match error {
        ScanError::LengthUnitMissing { column, .. } => {
            let column = plain(column);
            format!(
                "The unit of the bond lengths (column {column}) is not stated. {remedy}, as in R_angstrom."
            )
        }
        ScanError::EnergyUnitMissing { column, .. } => {
            let column = plain(column);
            format!("The unit of the energies (column {column}) is not stated. {remedy}, as in E_hartree.")
        }
        ScanError::BondNotChosen { atoms, .. } => {
            let count = atoms.len();
            format!("The molecule has {count} atoms; choose the two whose distance is the bond length.")
        }
        other => {
            let text = other.to_string();
            let mut letters = text.chars();
            let first = letters.next().map(|c| c.to_uppercase().to_string()).unwrap_or_default();
            format!("{first}{}.", letters.as_str())
        }
    }
}

/// What would settle the refusal.
fn asks(error: &ScanError) -> Asks {
    match error {
        ScanError::LengthUnitMissing { .. } | ScanError::EnergyUnitMissing { .. } => Asks::Units,
        ScanError::BondNotChosen { atoms, .. } => Asks::Bond(atoms.clone()),
        _ => Asks::Nothing,
    }
}
