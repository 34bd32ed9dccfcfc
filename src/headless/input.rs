//! What a study reads: one file, or with line patterns all files together as the logs of one scan.

use crate::scan::Scan;
use crate::scan::read::{ReadSettings, read_logs, read_scan};
use std::path::{Path, PathBuf};

/// The files of one scan, read into memory.
pub struct Input {
    name: String,
    files: Vec<(String, Vec<u8>)>,
}

impl Input {
    /// The paths of each scan: every file its own, or with line patterns all of them together.
    pub fn groups(files: &[PathBuf], settings: &ReadSettings) -> Vec<Vec<PathBuf>> {
        match settings.lines {
            Some(_) => vec![files.to_vec()],
            None => files.iter().map(|f| vec![f.clone()]).collect(),
        }
    }

    /// Reads the bytes of a group. A folder among logs stands for the files in it, by name.
    pub fn read(group: &[PathBuf], settings: &ReadSettings) -> Result<Self, String> {
        let path = group.first().cloned().unwrap_or_default();
        if settings.lines.is_none() {
            let (name, bytes) = read_bytes(&path)?;
            return Ok(Self { name: name.clone(), files: vec![(name, bytes)] });
        }
        let mut files = Vec::new();
        for path in group {
            let inside = if path.is_dir() { listed(path)? } else { vec![path.clone()] };
            for file in inside {
                files.push(read_bytes(&file).map_err(|e| format!("{}: {e}", file.display()))?);
            }
        }
        let folder = if path.is_dir() { Some(path.as_path()) } else { path.parent() };
        let name = folder.and_then(Path::file_name).map_or_else(|| "logs".into(), |n| n.to_string_lossy());
        Ok(Self { name: name.into_owned(), files })
    }

    /// The scan in them.
    pub fn scan(&self, settings: &ReadSettings) -> Result<Scan, String> {
        let logs = || self.files.iter().map(|(name, bytes)| (name.as_str(), bytes.as_slice()));
        let read = match (&settings.lines, self.files.as_slice()) {
            (None, [(name, bytes)]) => read_scan(name, bytes, settings),
            _ => read_logs(&self.name, logs(), settings),
        };
        read.map_err(|e| e.to_string())
    }
}

/// The files of a folder by name, hidden ones and folders left out.
fn listed(folder: &Path) -> Result<Vec<PathBuf>, String> {
    let problem = |e: std::io::Error| format!("{}: could not be listed ({e})", folder.display());
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).map_err(problem)? {
        let path = entry.map_err(problem)?.path();
        let hidden = path.file_name().is_some_and(|n| n.to_string_lossy().starts_with('.'));
        if path.is_file() && !hidden {
            found.push(path);
        }
    }
    found.sort();
    Ok(found)
}

/// File name without folder, and content.
fn read_bytes(path: &Path) -> Result<(String, Vec<u8>), String> {
    let bytes = std::fs::read(path).map_err(|e| format!("could not be read ({e})"))?;
    let name = path.file_name().map_or_else(String::new, |n| n.to_string_lossy().into_owned());
    Ok((name, bytes))
}
