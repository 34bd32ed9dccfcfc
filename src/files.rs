//! Writing files without ever damaging one: whole or not at all, and nothing replaced unasked.

use crate::export::json::FORMAT;
use std::io::Write as _;
use std::path::{Path, PathBuf};
use thiserror::Error;

/// Why a file was not written.
#[derive(Debug, Error)]
pub enum WriteError {
    /// There is a file of that name, and it may not be replaced.
    #[error("{path}: this file exists and is not replaced; choose another name, or give --overwrite")]
    Exists {
        /// The file.
        path: PathBuf,
    },
    /// The system refused.
    #[error("{path}: could not be written ({reason}); check the folder and its permissions")]
    Io {
        /// The file.
        path: PathBuf,
        /// What the system said.
        reason: String,
    },
}

/// What may be replaced.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Replace {
    /// Nothing.
    Nothing,
    /// A findings file.
    Findings,
    /// Any file.
    Anything,
}

/// Writes `bytes` to `path`: first beside it, then moved into place, so that a reader or a crash sees
/// the old file or the new one and nothing between.
///
/// # Errors
/// [`WriteError::Exists`] when a file is there that `replace` does not cover, else what the system says.
pub fn write(path: &Path, bytes: &[u8], replace: Replace) -> Result<(), WriteError> {
    let io = |reason: std::io::Error| WriteError::Io { path: path.to_owned(), reason: reason.to_string() };
    if std::fs::metadata(path).is_ok_and(|m| !m.is_file() && !m.is_dir()) {
        // A device or a pipe holds nothing that could be lost: it is written to, not replaced.
        let mut device = std::fs::OpenOptions::new().write(true).open(path).map_err(io)?;
        return device.write_all(bytes).map_err(io);
    }
    // A symbolic link stays one: what it points to is replaced.
    let target = std::fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    let path = target.as_path();
    let may_replace = match replace {
        Replace::Nothing => false,
        Replace::Findings => is_findings_file(path),
        Replace::Anything => true,
    };
    if path.exists() && !may_replace {
        return Err(WriteError::Exists { path: path.to_owned() });
    }
    let folder = path.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or(Path::new("."));
    let mut builder = tempfile::Builder::new();
    builder.prefix(".parabound-").suffix(".part");
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut file = builder.tempfile_in(folder).map_err(io)?;
    file.write_all(bytes).map_err(io)?;
    file.as_file().sync_all().map_err(io)?;
    if may_replace {
        file.persist(path).map_err(|e| io(e.error))?;
        return Ok(());
    }
    // Nobody may have created the name since it was looked at.
    match file.persist_noclobber(path) {
        Ok(_) => Ok(()),
        Err(e) if e.error.kind() == std::io::ErrorKind::AlreadyExists => {
            Err(WriteError::Exists { path: path.to_owned() })
        }
        Err(e) => Err(io(e.error)),
    }
}

/// No findings file is larger than this; more is not even read.
const LARGEST_FINDINGS_BYTES: u64 = 1 << 30;

/// Whether the file is a findings file (one study or an array of them).
pub fn is_findings_file(path: &Path) -> bool {
    let readable = |m: std::fs::Metadata| m.is_file() && m.len() <= LARGEST_FINDINGS_BYTES;
    if !std::fs::metadata(path).is_ok_and(readable) {
        return false;
    }
    let Ok(bytes) = std::fs::read(path) else { return false };
    let Ok(value) = serde_json::from_slice::<serde_json::Value>(&bytes) else { return false };
    let is_one = |v: &serde_json::Value| v.get("format").and_then(|f| f.as_str()) == Some(FORMAT);
    match value.as_array() {
        Some(list) => !list.is_empty() && list.iter().all(is_one),
        None => is_one(&value),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_is_replaced_unasked() {
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("a.json");
        write(&path, b"first", Replace::Findings).expect("new file");
        let refused = write(&path, b"second", Replace::Findings);
        assert!(matches!(refused, Err(WriteError::Exists { .. })), "{refused:?}");
        assert_eq!(std::fs::read(&path).expect("read"), b"first");
        write(&path, b"{\"format\": \"parabound.findings\"}", Replace::Anything).expect("asked");
        write(&path, b"[]", Replace::Findings).expect("a findings file may be replaced");
        assert!(matches!(write(&path, b"x", Replace::Findings), Err(WriteError::Exists { .. })));
        let left: Vec<_> = std::fs::read_dir(folder.path()).expect("list").collect();
        assert_eq!(left.len(), 1, "no part files are left: {left:?}");
    }

    #[test]
    fn a_missing_folder_is_an_error_with_its_name() {
        let error =
            write(Path::new("/no-such-folder-of-ours/a.json"), b"x", Replace::Nothing).expect_err("refused");
        assert!(error.to_string().contains("no-such-folder-of-ours"), "{error}");
    }

    #[cfg(unix)]
    #[test]
    fn devices_are_written_to_and_links_stay_links() {
        write(Path::new("/dev/null"), b"x", Replace::Findings).expect("written");
        assert!(!is_findings_file(Path::new("/dev/zero")), "and not read without end");
        let folder = tempfile::tempdir().expect("a folder");
        let (real, link) = (folder.path().join("real"), folder.path().join("link"));
        std::fs::write(&real, "old").expect("written");
        std::os::unix::fs::symlink(&real, &link).expect("linked");
        write(&link, b"new", Replace::Anything).expect("asked");
        assert!(std::fs::symlink_metadata(&link).expect("there").is_symlink());
        assert_eq!(std::fs::read(&real).expect("read"), b"new");
    }
}
