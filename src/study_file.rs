//! Study files: the work of a window as one JSON text. Scans with their source and, where there is room, the
//! table itself; the settings of every curve, rows set aside with their reasons among them; what was looked
//! at. No results: they follow from the rest.

use crate::settings::Settings;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use thiserror::Error;

/// The word that says what the file is.
pub const FORMAT: &str = "parabound.study";
/// The version written; older ones are read, newer ones refused.
pub const VERSION: u64 = 1;
/// The ending of a study file's name.
pub const EXTENSION: &str = "parabound";
/// A table that can be found again by its path is carried only up to this size.
const CARRIED_BYTES: usize = 8 << 20;

/// Why a text is no study file.
#[derive(Debug, Error)]
pub enum StudyFileError {
    /// No JSON.
    #[error("this is not JSON ({reason}); a study file is written by 'Save study'")]
    NotJson {
        /// What the reader of JSON said.
        reason: String,
    },
    /// JSON of another kind.
    #[error("this is not a study file: its format is {found}; accepted: \"{FORMAT}\"")]
    NotAStudy {
        /// The format found.
        found: String,
    },
    /// Written by a later program.
    #[error("this study file has version {found}; this program reads up to {VERSION}: use a newer program")]
    Newer {
        /// The version found.
        found: u64,
    },
    /// A key that does not fit.
    #[error("this study file does not fit: {reason}")]
    Misfit {
        /// What does not fit, and where.
        reason: String,
    },
}

/// The work of a window.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StudyFile {
    /// [`FORMAT`].
    pub format: String,
    /// [`VERSION`].
    pub version: u64,
    /// The program that wrote it.
    #[serde(default)]
    pub program: String,
    /// Where the user keeps this study; only in work saved by the program itself.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub kept: Option<Kept>,
    /// The scans in order.
    pub scans: Vec<StudyScan>,
    /// The curve in focus.
    #[serde(default)]
    pub focus: Option<Focus>,
    /// Published constants entered to compare with, each by its symbol and unit, as in `rₑ / Å`.
    #[serde(default, skip_serializing_if = "BTreeMap::is_empty")]
    pub published: BTreeMap<String, f64>,
    /// What was looked at.
    #[serde(default)]
    pub view: View,
}

/// A file that the user saved to, and what it then held.
#[derive(Clone, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Kept {
    /// Where it is.
    pub path: String,
    /// Check sum of what was last read from or written to it, if it is known.
    pub sha256: Option<String>,
}

/// A scan.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StudyScan {
    /// File name without folder.
    pub file_name: String,
    /// Where it is; a relative path counts from the folder of the study file.
    #[serde(default)]
    pub path: Option<String>,
    /// Check sum of the table.
    pub sha256: String,
    /// Whether it came with the program.
    #[serde(default)]
    pub sample: bool,
    /// The table itself, where it is text.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub text: Option<String>,
    /// The table itself in hexadecimal digits, where it is not UTF-8 text.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub hex: Option<String>,
    /// In the place of a table: text logs, a point each.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub logs: Option<StudyLogs>,
    /// How it is read, and what new curves of it start from.
    pub start: Settings,
    /// Its curves.
    #[serde(default)]
    pub curves: Vec<StudyCurve>,
}

/// Text logs of one scan.
#[derive(Clone, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StudyLogs {
    /// Where they are: files, or a folder that stands for the files in it. Relative paths as those of a table.
    pub paths: Vec<String>,
    /// The logs themselves, where there is room.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub files: Vec<StudyLog>,
}

/// A text log.
#[derive(Clone, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StudyLog {
    /// File name without folder.
    pub file_name: String,
    /// What stands in it, where it is text.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub text: Option<String>,
    /// The same in hexadecimal digits, where it is not UTF-8 text.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub hex: Option<String>,
}

/// A curve.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct StudyCurve {
    /// Name of the energy column.
    pub name: String,
    /// Its settings.
    pub settings: Settings,
}

/// The curve in focus.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Focus {
    /// Number of the scan, counted from 0.
    pub scan: usize,
    /// Name of the energy column.
    pub curve: String,
}

/// What was looked at. A word that a program does not know is passed over.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct View {
    /// The page of results.
    pub page: Option<String>,
    /// The strip.
    pub strip: Option<String>,
    /// What the gauge measures, by its name on the command line.
    pub gauge: Option<String>,
    /// The level kept shown.
    pub level: Option<usize>,
    /// Levels kept shown beside it.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub levels: Vec<usize>,
    /// The region of the plot by its name,
    pub region: Option<String>,
    /// or its bounds: bond length from and to (angstrom), energy from and to (cm⁻¹ above the minimum).
    pub bounds: Option<[f64; 4]>,
    /// The J whose levels are shown; none: without rotation.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub j: Option<u32>,
    /// The part of the page of levels.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub levels_part: Option<String>,
    /// What the axes show; none: bond lengths in angstrom, energies in cm⁻¹.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub axes: Option<Axes>,
    /// The densities drawn over that of the level shown; none: no other.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub densities: Option<DrawnDensities>,
    /// Curves side by side; none: the picture.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub comparison: Option<Compared>,
    /// The temperature looked at in K.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub kelvin: Option<f64>,
}

/// Units of the axes.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Axes {
    /// Unit of the bond lengths.
    pub length: String,
    /// Displacements instead of bond lengths.
    pub displacement: bool,
    /// Unit of the energies.
    pub energy: String,
}

/// Densities drawn over that of the level shown.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct DrawnDensities {
    /// Which: harmonic, morse, classical, averaged.
    pub drawn: Vec<String>,
    /// The averaging width in angstrom; none: the zero-point amplitude.
    pub width_angstrom: Option<f64>,
    /// Their height against the usual one.
    pub height: f64,
}

/// Curves side by side.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Compared {
    /// Whether the table is in the place of the picture.
    pub open: bool,
    /// The curve that differences are taken to,
    pub reference: Option<Focus>,
    /// or the published constants.
    pub published: bool,
    /// The quantity rows are sorted by, as its symbol and unit.
    pub sort: Option<String>,
    /// Whether the largest is on top.
    pub largest_first: bool,
}

impl StudyScan {
    /// Puts the table in, where it is small or could not be found again.
    pub fn carry(&mut self, bytes: &[u8]) {
        if bytes.len() > CARRIED_BYTES && self.path.is_some() {
            return;
        }
        (self.text, self.hex) = written(bytes);
    }

    /// The table that was put in.
    pub fn carried(&self) -> Option<Vec<u8>> {
        written_bytes(self.text.as_deref(), self.hex.as_deref())
    }
}

impl StudyLogs {
    /// Puts the logs in, where they are small or could not be found again.
    pub fn carry<'a>(&mut self, files: impl Iterator<Item = (&'a str, &'a [u8])> + Clone) {
        let size: usize = files.clone().map(|(_, bytes)| bytes.len()).sum();
        if size > CARRIED_BYTES && !self.paths.is_empty() {
            return;
        }
        let put = |(name, bytes): (&str, &[u8])| {
            let (text, hex) = written(bytes);
            StudyLog { file_name: name.to_owned(), text, hex }
        };
        self.files = files.map(put).collect();
    }

    /// The logs that were put in, by name; none where there are none or one is damaged.
    pub fn carried(&self) -> Option<Vec<(String, Vec<u8>)>> {
        let one = |log: &StudyLog| {
            let bytes = written_bytes(log.text.as_deref(), log.hex.as_deref())?;
            Some((log.file_name.clone(), bytes))
        };
        let all: Option<Vec<_>> = self.files.iter().map(one).collect();
        all.filter(|files| !files.is_empty())
    }
}

/// Bytes as text, or in hexadecimal digits where they are none.
fn written(bytes: &[u8]) -> (Option<String>, Option<String>) {
    match std::str::from_utf8(bytes) {
        Ok(text) => (Some(text.to_owned()), None),
        Err(_) => (None, Some(bytes.iter().map(|b| format!("{b:02x}")).collect())),
    }
}

fn written_bytes(text: Option<&str>, hex: Option<&str>) -> Option<Vec<u8>> {
    if let Some(text) = text {
        return Some(text.as_bytes().to_vec());
    }
    let digits = hex?.as_bytes();
    let pair = |p: &[u8]| u8::from_str_radix(std::str::from_utf8(p).ok()?, 16).ok();
    if !digits.len().is_multiple_of(2) {
        return None;
    }
    digits.chunks(2).map(pair).collect()
}

impl StudyFile {
    /// The file as text, with a line break at the end.
    pub fn to_text(&self) -> String {
        // Keys are strings and numbers finite, so this cannot fail; an empty text would be refused on reading.
        let mut text = serde_json::to_string_pretty(self).unwrap_or_default();
        text.push('\n');
        text
    }

    /// Reads a study file.
    ///
    /// # Errors
    /// [`StudyFileError`], with what is accepted.
    pub fn from_bytes(bytes: &[u8]) -> Result<Self, StudyFileError> {
        let value: serde_json::Value =
            serde_json::from_slice(bytes).map_err(|e| StudyFileError::NotJson { reason: e.to_string() })?;
        Self::from_value(value)
    }

    /// The same from JSON that was read already.
    ///
    /// # Errors
    /// [`StudyFileError`], with what is accepted.
    pub fn from_value(value: serde_json::Value) -> Result<Self, StudyFileError> {
        let format = value.get("format");
        if format.and_then(|f| f.as_str()) != Some(FORMAT) {
            let found = format.map_or_else(|| "not named".to_owned(), ToString::to_string);
            return Err(StudyFileError::NotAStudy { found });
        }
        match value.get("version").and_then(serde_json::Value::as_u64) {
            Some(found) if found > VERSION => return Err(StudyFileError::Newer { found }),
            _ => {}
        }
        let file: Self =
            serde_json::from_value(value).map_err(|e| StudyFileError::Misfit { reason: e.to_string() })?;
        for curve in file.scans.iter().flat_map(|s| &s.curves) {
            curve.settings.checked().map_err(|e| StudyFileError::Misfit { reason: e.to_string() })?;
        }
        Ok(file)
    }

    /// The settings of the curve in focus, else of the only curve there is.
    pub fn focused_settings(&self) -> Option<&Settings> {
        let focus = self.focus.as_ref();
        let found = focus.and_then(|f| self.scans.get(f.scan)?.curves.iter().find(|c| c.name == f.curve));
        let mut all = self.scans.iter().flat_map(|s| &s.curves);
        let only = || all.next().filter(|_| all.next().is_none());
        found.or_else(only).map(|c| &c.settings)
    }
}

/// Whether bytes claim to be a study file; they may still be refused as one.
pub fn is_study_file(bytes: &[u8]) -> bool {
    // Tables do not begin with a brace, so few files are parsed in vain.
    let begins = bytes.iter().find(|b| !b.is_ascii_whitespace()) == Some(&b'{');
    let head = &bytes[..bytes.len().min(4096)];
    begins && head.windows(FORMAT.len()).any(|w| w == FORMAT.as_bytes())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::settings::SetAside;

    fn example() -> StudyFile {
        let mut settings = Settings { curve: Some("E_X".into()), ..Settings::default() };
        settings.set_aside.push(SetAside { row: 3, reason: "a jump, \"odd\"".into() });
        settings.reach.tolerance = 0.1 + 0.2;
        let mut scan = StudyScan { file_name: "a.csv".into(), sha256: "00".into(), ..Default::default() };
        scan.carry("R,E\n1,2 µ\n".as_bytes());
        scan.curves.push(StudyCurve { name: "E_X".into(), settings });
        StudyFile {
            format: FORMAT.into(),
            version: VERSION,
            scans: vec![scan],
            focus: Some(Focus { scan: 0, curve: "E_X".into() }),
            ..Default::default()
        }
    }

    #[test]
    fn what_is_written_is_read_back_to_the_last_digit() {
        let file = example();
        let text = file.to_text();
        assert!(is_study_file(text.as_bytes()) && text.ends_with("}\n"));
        let read = StudyFile::from_bytes(text.as_bytes()).expect("ours");
        assert_eq!(read, file);
        assert_eq!(read.focused_settings().map(|s| s.reach.tolerance), Some(0.1 + 0.2));
        assert_eq!(read.scans[0].carried().as_deref(), Some("R,E\n1,2 µ\n".as_bytes()));
    }

    #[test]
    fn bytes_that_are_no_text_are_carried_too() {
        let mut scan = StudyScan::default();
        let bytes = [0xe5, b'a', 0x00, 0xff];
        scan.carry(&bytes);
        assert_eq!(scan.carried().as_deref(), Some(&bytes[..]));
        scan.hex = Some("0g".into());
        assert_eq!(scan.carried(), None);
    }

    #[test]
    fn logs_are_carried_with_their_names() {
        let mut logs = StudyLogs::default();
        let files: [(&str, &[u8]); 2] = [("a.log", b"r = 1\n"), ("b.log", b"\xff")];
        logs.carry(files.into_iter());
        let text = serde_json::to_string(&logs).expect("written");
        let read: StudyLogs = serde_json::from_str(&text).expect("read");
        assert_eq!(read.carried(), Some(files.map(|(n, b)| (n.to_owned(), b.to_vec())).to_vec()));
        assert_eq!(StudyLogs::default().carried(), None);
        logs.files[1].hex = Some("f".into());
        assert_eq!(logs.carried(), None);
    }

    #[test]
    fn others_are_refused_by_what_is_wrong() {
        let told = |text: &str| StudyFile::from_bytes(text.as_bytes()).expect_err("refused").to_string();
        assert!(told("R,E\n1,2").contains("not JSON"));
        assert!(told("{\"format\": \"parabound.findings\"}").contains("parabound.findings"));
        assert!(told("{}").contains("not named"));
        let newer = example().to_text().replace("\"version\": 1", "\"version\": 9");
        assert!(told(&newer).contains("version 9"));
        let odd = example().to_text().replace("\"focus\"", "\"fokus\"");
        assert!(told(&odd).contains("fokus"));
        let senseless = example().to_text().replace("0.30000000000000004", "-1.0");
        assert!(told(&senseless).contains("reach.tolerance"));
        let text = example().to_text();
        for end in 0..text.len() - 2 {
            if text.is_char_boundary(end) {
                assert!(StudyFile::from_bytes(&text.as_bytes()[..end]).is_err(), "cut at {end}");
            }
        }
    }
}
