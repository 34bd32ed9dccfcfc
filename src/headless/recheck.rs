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
        Ok((text, same)) => {
            super::print(&text);
            if same { 0 } else { DIFFERS }
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

fn compare(arguments: &RecheckArgs) -> Result<(String, bool), String> {
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
    let (mut text, mut same) = (String::new(), true);
    for study in &studies {
        let source = source_path(arguments, study)?;
        let scan = |settings: &ReadSettings| {
            let input = Input::read(std::slice::from_ref(&source), settings)?;
            input.scan(settings)
        };
        let verdict = recheck(study, scan).map_err(|e| format!("{}: {e}", path.display()))?;
        same &= verdict.differences.is_empty();
        text.push_str(&words(study, &verdict));
    }
    Ok((text, same))
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
    let basis = match &verdict.other_version {
        None => "this version, every digit".to_owned(),
        Some(version) => format!("made by version {version}, compared to 1e-9"),
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
