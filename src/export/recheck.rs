//! A findings file computed again from its source and its own settings, and compared value by value.

use super::json::{FORMAT, FORMAT_VERSION, findings_to_string};
use crate::scan::Scan;
use crate::scan::read::ReadSettings;
use crate::settings::Settings;
use crate::study::study;
use serde_json::Value;
use std::fmt;
use thiserror::Error;

/// Relative difference allowed between versions and platforms.
const RELATIVE: f64 = 1e-9;

/// One difference.
#[derive(Clone, Debug, PartialEq)]
pub struct Difference {
    /// Where in the file, e.g. `/levels/0/energy/value`.
    pub path: String,
    /// What the file has; none where it has nothing there.
    pub stored: Option<String>,
    /// What was computed; none where there is nothing.
    pub computed: Option<String>,
}

impl fmt::Display for Difference {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        let word = |v: &Option<String>| v.clone().unwrap_or_else(|| "nothing".to_owned());
        write!(f, "{}: {} in the file, {} computed", self.path, word(&self.stored), word(&self.computed))
    }
}

/// What a recheck found.
#[derive(Clone, Debug, PartialEq)]
pub struct Verdict {
    /// Values compared.
    pub compared: usize,
    /// Those that differ, in the order of the file.
    pub differences: Vec<Difference>,
    /// What made the file, where it was another version or another kind of machine.
    pub other_maker: Option<String>,
}

/// Why nothing could be compared.
#[derive(Debug, Error)]
pub enum RecheckError {
    /// It is something else, or a later format.
    #[error("no findings file of format version {FORMAT_VERSION}")]
    NotFindings,
    /// Its settings are not understood.
    #[error("its settings are not understood: {0}")]
    Settings(String),
    /// The source cannot be read any more.
    #[error("its source could not be understood: {0}")]
    Source(String),
}

/// Computes one study of a findings file again from its source, which `source` reads with the settings stored.
///
/// The same version on the same kind of machine must give every bit; any other 1e-9 relative. A source with another SHA-256 is a
/// difference of its own, and the rest is compared all the same.
///
/// # Errors
/// [`RecheckError`]
pub fn recheck(
    stored: &Value,
    source: impl FnOnce(&ReadSettings) -> Result<Scan, String>,
) -> Result<Verdict, RecheckError> {
    if stored["format"] != FORMAT || stored["format_version"] != FORMAT_VERSION {
        return Err(RecheckError::NotFindings);
    }
    let settings: Settings = serde_json::from_value(stored["settings"].clone())
        .map_err(|e| RecheckError::Settings(e.to_string()))?;
    let source_error = |e: &dyn fmt::Display| RecheckError::Source(e.to_string());
    let mut scan = source(&settings.read).map_err(RecheckError::Source)?;
    // A source that was renamed is told from a changed one by its sum.
    if let Some(name) = stored["source"]["file_name"].as_str() {
        scan.file_name = name.to_owned();
    }
    let findings = study(&scan, &settings).map_err(|e| source_error(&e))?;
    // Through the text, as the stored values have been.
    let computed: Value =
        serde_json::from_str(&findings_to_string(&findings)).map_err(|e| source_error(&e))?;
    let maker = |v: &Value| {
        let word = |key: &str| v["made_by"][key].as_str().unwrap_or("unknown").to_owned();
        format!("version {} on {}", word("version"), word("platform"))
    };
    let other_maker = Some(maker(stored)).filter(|m| *m != maker(&computed));
    let mut verdict = Verdict { compared: 0, differences: Vec::new(), other_maker };
    let exact = verdict.other_maker.is_none();
    verdict.walk(stored, &computed, "", exact);
    Ok(verdict)
}

fn shown(value: &Value) -> String {
    let text = value.to_string();
    if text.chars().count() > 60 { text.chars().take(57).chain("...".chars()).collect() } else { text }
}

impl Verdict {
    fn differ(&mut self, path: &str, stored: Option<&Value>, computed: Option<&Value>) {
        let path = if path.is_empty() { "/" } else { path }.to_owned();
        self.differences.push(Difference { path, stored: stored.map(shown), computed: computed.map(shown) });
    }

    fn walk(&mut self, stored: &Value, computed: &Value, path: &str, exact: bool) {
        match (stored, computed) {
            (Value::Object(a), Value::Object(b)) => {
                for (key, value) in a {
                    let path = format!("{path}/{key}");
                    match b.get(key) {
                        // What made a file is said apart.
                        _ if path == "/made_by/version" || path == "/made_by/platform" => {}
                        Some(other) => self.walk(value, other, &path, exact),
                        None => self.differ(&path, Some(value), None),
                    }
                }
                // A later version may add keys; the same one may not.
                for (key, value) in b.iter().filter(|(key, _)| exact && !a.contains_key(*key)) {
                    self.differ(&format!("{path}/{key}"), None, Some(value));
                }
            }
            (Value::Array(a), Value::Array(b)) => {
                for i in 0..a.len().max(b.len()) {
                    let path = format!("{path}/{i}");
                    match (a.get(i), b.get(i)) {
                        (Some(one), Some(other)) => self.walk(one, other, &path, exact),
                        (one, other) => self.differ(&path, one, other),
                    }
                }
            }
            _ => {
                self.compared += 1;
                let same = match (stored.as_f64(), computed.as_f64()) {
                    (Some(a), Some(b)) if exact => a.to_bits() == b.to_bits(),
                    (Some(a), Some(b)) => (a - b).abs() <= RELATIVE * a.abs().max(b.abs()),
                    _ => stored == computed,
                };
                if !same {
                    self.differ(path, Some(stored), Some(computed));
                }
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    fn compared(a: &Value, b: &Value, exact: bool) -> Vec<String> {
        let mut verdict = Verdict { compared: 0, differences: Vec::new(), other_maker: None };
        verdict.walk(a, b, "", exact);
        verdict.differences.into_iter().map(|d| d.path).collect()
    }

    #[test]
    fn differences_are_named_by_their_path() {
        let a = json!({"x": [1.0, 2.0], "text": "one", "gone": 1});
        let b = json!({"x": [1.0, 2.000_000_000_1], "text": "two", "new": 1});
        assert_eq!(compared(&a, &b, true), ["/x/1", "/text", "/gone", "/new"]);
        assert_eq!(compared(&a, &b, false), ["/text", "/gone"]);
        assert_eq!(compared(&json!([1.0]), &json!([1.0, 2.0]), false), ["/1"]);
        assert_eq!(compared(&json!(1.0), &json!(null), false), ["/"]);
        assert!(compared(&a, &a, true).is_empty());
    }

    #[test]
    fn other_files_are_refused() {
        assert!(matches!(
            recheck(&json!({"a": 1}), |_| unreachable!("not read")),
            Err(RecheckError::NotFindings)
        ));
    }
}
