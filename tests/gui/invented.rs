//! Invented scans: a Morse function like that of HCl.

use std::path::{Path, PathBuf};

/// Energy in hartree at a bond length in angstrom.
pub fn morse(r: f64) -> f64 {
    0.17 * (1.0 - (-1.87 * (r - 1.27)).exp()).powi(2)
}

/// Bond lengths in angstrom.
pub fn grid() -> impl Iterator<Item = f64> {
    (0..40).map(|i| 0.95 + 0.04 * f64::from(i))
}

/// A table of them under a header.
pub fn table(header: &str, energy: impl Fn(f64) -> f64) -> String {
    let rows: Vec<String> = grid().map(|r| format!("{r:.2},{:.10}", energy(r))).collect();
    format!("{header}\n{}\n", rows.join("\n"))
}

/// Writes a file.
pub fn write(folder: &Path, name: &str, text: &str) -> PathBuf {
    let path = folder.join(name);
    std::fs::write(&path, text).expect("written");
    path
}
