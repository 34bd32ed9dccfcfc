//! `parabound recheck`: a findings file computed again from its source.

use super::args::RecheckArgs;
use super::input::Input;
use crate::export::recheck::{Verdict, recheck};
use crate::scan::read::ReadSettings;
use std::path::{Path, PathBuf};

const NOT_READ: u8 = 3;
const DIFFERS: u8 = 5;
/// Differences listed; all are counted.
const LISTED: usize = 20;

/// Runs the command; returns the exit status: 0 the same, 5 something differs, 3 not to be read.
pub fn run(arguments: &RecheckArgs) -> u8 {
    match compare(arguments) {
        Ok(outcome) => {
            super::print(&outcome.text);
            outcome.not_read.iter().for_each(|message| eprintln!("parabound: {message}"));
            match outcome {
                Outcome { differs: true, .. } => DIFFERS,
                Outcome { not_read, .. } if not_read.is_empty() => 0,
                _ => NOT_READ,
            }
        }
        Err(message) => {
            eprintln!("parabound: {message}");
            NOT_READ
        }
    }
}

fn read(path: &Path) -> Result<Vec<u8>, String> {
    std::fs::read(path).map_err(|e| format!("{}: could not be read ({e})", path.display()))
}

fn compare(arguments: &RecheckArgs) -> Result<Outcome, String> {
    let path = &arguments.findings;
    let bytes = read(path)?;
    let value: serde_json::Value =
        serde_json::from_slice(&bytes).map_err(|e| format!("{}: not JSON ({e})", path.display()))?;
    let studies = match value {
        serde_json::Value::Array(list) => list,
        one => vec![one],
    };
    if studies.is_empty() {
        return Err(format!("{}: holds no study", path.display()));
    }
    let mut outcome = Outcome::default();
    for study in &studies {
        let compared = source_path(arguments, study).and_then(|source| {
            let scan = |settings: &ReadSettings| {
                let input = Input::read(std::slice::from_ref(&source), settings)?;
                input.scan(settings)
            };
            recheck(study, scan).map_err(|e| format!("{}: {e}", path.display()))
        });
        match compared {
            Ok(verdict) => {
                outcome.differs |= !verdict.differences.is_empty();
                outcome.text.push_str(&words(study, &verdict));
            }
            // The other studies of the file are compared all the same.
            Err(message) => outcome.not_read.push(message),
        }
    }
    Ok(outcome)
}

/// What became of the studies of a file.
#[derive(Default)]
struct Outcome {
    text: String,
    differs: bool,
    /// Why studies could not be compared.
    not_read: Vec<String>,
}

/// The scan: the one given, else the file of the findings' name beside them.
fn source_path(arguments: &RecheckArgs, study: &serde_json::Value) -> Result<PathBuf, String> {
    if let Some(path) = &arguments.source {
        return Ok(path.clone());
    }
    let path = &arguments.findings;
    let name = study["source"]["file_name"].as_str();
    // The name is data: a path in it would lead anywhere.
    let name = name.filter(|n| Path::new(n).file_name().is_some_and(|f| f == Path::new(n).as_os_str()));
    let name = name.ok_or_else(|| format!("{}: no findings file: it names no source", path.display()))?;
    let beside = path.parent().unwrap_or(Path::new("")).join(name);
    // Text logs are studied as a folder.
    if beside.exists() {
        return Ok(beside);
    }
    Err(format!("{}: the source {name} is not beside it; say where it is with --source", path.display()))
}

fn words(study: &serde_json::Value, verdict: &Verdict) -> String {
    let word = |key: &str| study["source"][key].as_str().unwrap_or("?").to_owned();
    let name = format!("{}, {}", word("file_name"), word("curve"));
    let basis = match &verdict.other_maker {
        None => "this version, every digit".to_owned(),
        Some(maker) => format!("made by {maker}, compared to 1e-9"),
    };
    let count = verdict.differences.len();
    if count == 0 {
        return format!("{name}: the same ({} values; {basis})\n", verdict.compared);
    }
    let mut text = format!("{name}: {count} of {} values differ ({basis})\n", verdict.compared);
    for difference in verdict.differences.iter().take(LISTED) {
        text.push_str(&format!("  {difference}\n"));
    }
    if count > LISTED {
        text.push_str(&format!("  ... and {} more\n", count - LISTED));
    }
    text
}
