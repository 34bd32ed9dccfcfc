//! `parabound study`: files in, summary, findings and tables out.

use super::args::{StudyArgs, StudyChoices};
use super::dry_run;
use super::input::Input;
use super::summary;
use crate::export::json::all_to_string;
use crate::export::parameters::{self, ParameterUnits};
use crate::files::{self, Replace};
use crate::findings::Findings;
use crate::scan::Scan;
use crate::settings::Settings;
use crate::study::{Mark, Stage, study_observed};
use crate::study_file::{self, StudyFile};
use std::collections::{BTreeMap, BTreeSet};
use std::path::{Path, PathBuf};
use std::sync::{Mutex, PoisonError};
use std::time::Instant;

pub(super) const DONE: u8 = 0;
pub(super) const NOT_READ: u8 = 3;
const IMPOSSIBLE: u8 = 4;

/// Runs the command; returns the exit status.
pub fn run(arguments: &StudyArgs) -> u8 {
    let settings = match starting_settings(&arguments.choices) {
        Ok(settings) => settings,
        Err(message) => {
            eprintln!("parabound: {message}");
            return NOT_READ;
        }
    };
    if arguments.dry_run {
        return dry_run::run(&arguments.files, &arguments.choices, &settings);
    }
    let mut status = DONE;
    let mut studies: Vec<(PathBuf, Findings)> = Vec::new();
    let mut seconds = Timings::default();
    for group in Input::groups(&arguments.files, &settings.read) {
        let path = &group[0];
        for result in study_file(&group, &settings, arguments, &mut seconds) {
            match result {
                Ok(findings) => studies.push((path.clone(), findings)),
                Err(message) => {
                    eprintln!("parabound: {}: {message}", path.display());
                    status = status.max(NOT_READ);
                }
            }
        }
    }
    if studies.iter().any(|(_, f)| f.impossible()) {
        status = status.max(IMPOSSIBLE);
    }
    match write_results(arguments, &studies) {
        Ok(written) => status = status.max(written),
        Err(message) => {
            eprintln!("parabound: {message}");
            status = status.max(NOT_READ);
        }
    }
    if arguments.timings {
        eprintln!("{}", seconds.to_json());
    }
    status
}

/// The settings file, if there is one, with the options laid over it.
pub(super) fn starting_settings(choices: &StudyChoices) -> Result<Settings, String> {
    let mut settings = match &choices.settings_file {
        Some(path) => read_settings(path)?,
        None => Settings::default(),
    };
    choices.apply(&mut settings);
    Ok(settings)
}

/// Settings from a findings file of one study, from a study file (those of the curve in focus), or from a
/// file that holds settings alone.
///
/// # Errors
/// A sentence with the file, what is wrong and what is accepted.
pub fn read_settings(path: &Path) -> Result<Settings, String> {
    let bytes = std::fs::read(path).map_err(|e| format!("{}: could not be read ({e})", path.display()))?;
    let value: serde_json::Value = serde_json::from_slice(&bytes)
        .map_err(|e| format!("{}: not JSON ({e}); give a findings file or its settings", path.display()))?;
    let value = match value {
        serde_json::Value::Array(mut list) if list.len() == 1 => list.remove(0),
        serde_json::Value::Array(list) => {
            return Err(format!("{}: holds {} studies; give a file with one", path.display(), list.len()));
        }
        other => other,
    };
    if value.get("format").and_then(|f| f.as_str()) == Some(study_file::FORMAT) {
        let file = StudyFile::from_value(value).map_err(|e| format!("{}: {e}", path.display()))?;
        let none = || format!("{}: no curve of this study file is in focus", path.display());
        return file.focused_settings().cloned().ok_or_else(none);
    }
    let settings = value.get("settings").cloned().unwrap_or(value);
    serde_json::from_value(settings)
        .map_err(|e| format!("{}: these settings do not fit: {e}", path.display()))
}

/// All studies of one scan: one result a curve, or the one reason why there is none.
fn study_file(
    group: &[PathBuf],
    settings: &Settings,
    arguments: &StudyArgs,
    seconds: &mut Timings,
) -> Vec<Result<Findings, String>> {
    let input = match Input::read(group, &settings.read) {
        Ok(input) => input,
        Err(message) => return vec![Err(message)],
    };
    let mut results = Vec::new();
    for pass in 0..arguments.repeat.max(1) {
        let start = Instant::now();
        let scan = match input.scan(&settings.read) {
            Ok(scan) => scan,
            Err(message) => return vec![Err(message)],
        };
        seconds.add("read", start.elapsed().as_secs_f64());
        let mut settings = settings.clone();
        if let Err(message) = arguments.choices.set_rows_aside(&scan, &mut settings) {
            return vec![Err(message)];
        }
        for curve in chosen_curves(&scan, &settings) {
            let settings = Settings { curve, ..settings.clone() };
            let found = guarded_study(&scan, &settings, seconds);
            if pass == 0 {
                results.push(found);
            }
        }
        seconds.end_pass();
    }
    results
}

/// A panic is a fault of ours; it must not take the other files with it.
fn guarded_study(scan: &Scan, settings: &Settings, seconds: &mut Timings) -> Result<Findings, String> {
    let call = std::panic::AssertUnwindSafe(|| timed_study(scan, settings, seconds));
    std::panic::catch_unwind(call).unwrap_or_else(|_| {
        Err("the study stopped because of a fault in the program; please report it with this file".to_owned())
    })
}

fn timed_study(scan: &Scan, settings: &Settings, seconds: &mut Timings) -> Result<Findings, String> {
    let start = Instant::now();
    // Stages of other threads end while this one is inside another.
    let stages = Mutex::new(StageClock::default());
    let findings = study_observed(scan, settings, &|stage, mark| {
        let now = Instant::now();
        if let Ok(mut stages) = stages.lock() {
            stages.mark(stage, mark, now);
        }
    });
    seconds.add("total", start.elapsed().as_secs_f64());
    let stages = stages.into_inner().unwrap_or_else(PoisonError::into_inner);
    for (stage, elapsed) in stages.ended {
        seconds.add(stage.name(), elapsed);
    }
    findings.map_err(|e| e.to_string())
}

/// When the stages of one study began, and how long the ended ones took, in seconds.
#[derive(Default)]
struct StageClock {
    begun: Vec<(Stage, Instant)>,
    ended: Vec<(Stage, f64)>,
}

impl StageClock {
    fn mark(&mut self, stage: Stage, mark: Mark, now: Instant) {
        match mark {
            Mark::Begins => self.begun.push((stage, now)),
            Mark::Ended => {
                if let Some(at) = self.begun.iter().rposition(|(s, _)| *s == stage) {
                    let (_, begun) = self.begun.swap_remove(at);
                    self.ended.push((stage, now.duration_since(begun).as_secs_f64()));
                }
            }
        }
    }
}

/// The columns that `--curve` means: one choice, or each column for `all`. A name that does not lead
/// back to its column (headers may repeat) gives way to the number.
fn chosen_curves(scan: &Scan, settings: &Settings) -> Vec<Option<String>> {
    match settings.curve.as_deref() {
        Some("all") => scan
            .energies
            .iter()
            .enumerate()
            .map(|(i, column)| match scan.curve_index(Some(&column.name)) {
                Ok(found) if found == i => Some(column.name.clone()),
                _ => Some((i + 1).to_string()),
            })
            .collect(),
        other => vec![other.map(str::to_owned)],
    }
}

fn write_results(arguments: &StudyArgs, studies: &[(PathBuf, Findings)]) -> Result<u8, String> {
    let mut status = DONE;
    let replace = if arguments.overwrite { Replace::Anything } else { Replace::Findings };
    let all: Vec<&Findings> = studies.iter().map(|(_, f)| f).collect();
    let to_standard_output = arguments.out.as_deref() == Some(Path::new("-"));
    if to_standard_output {
        status = status.max(super::print(&all_to_string(&all)));
    } else {
        let texts: Vec<String> = all.iter().map(|f| summary(f, &arguments.units)).collect();
        status = status.max(super::print(&texts.join("\n")));
    }
    if all.is_empty() {
        return Ok(status);
    }
    let mut failures = Vec::new();
    let mut keep = |result: Result<(), files::WriteError>| {
        if let Err(error) = result {
            failures.push(error.to_string());
        }
    };
    if let Some(path) = arguments.out.as_deref().filter(|_| !to_standard_output) {
        keep(files::write(path, all_to_string(&all).as_bytes(), replace));
    }
    if let Some(folder) = &arguments.out_dir {
        if let Err(error) = std::fs::create_dir_all(folder) {
            return Err(format!("{}: could not be made ({error})", folder.display()));
        }
        let mut taken = BTreeSet::new();
        for (path, findings) in studies {
            let file = folder.join(findings_file_name(path, findings, &mut taken));
            keep(files::write(&file, all_to_string(&[findings]).as_bytes(), replace));
        }
    }
    let table_replace = if arguments.overwrite { Replace::Anything } else { Replace::Nothing };
    for (table, path) in &arguments.tables {
        let mut bytes = Vec::new();
        table.write(&all, &mut bytes).map_err(|e| format!("{}: {e}", path.display()))?;
        if path == Path::new("-") {
            status = status.max(super::print(&String::from_utf8_lossy(&bytes)));
            continue;
        }
        keep(files::write(path, &bytes, table_replace));
    }
    if let Some(path) = &arguments.report {
        keep(files::write(path, crate::report::report(&all).as_bytes(), table_replace));
    }
    if let Some(path) = &arguments.parameters {
        keep(files::write(path, all_parameters(&all, path, &arguments.units).as_bytes(), table_replace));
    }
    if failures.is_empty() { Ok(status) } else { Err(failures.join("\nparabound: ")) }
}

/// The parameters of every fit of every study, as LaTeX where the file's name says so.
fn all_parameters(studies: &[&Findings], path: &Path, units: &ParameterUnits) -> String {
    let is_latex = path.extension().is_some_and(|e| e.eq_ignore_ascii_case("tex"));
    let mut texts = Vec::new();
    for study in studies {
        let mark = if is_latex { "% " } else { "" };
        texts.push(format!("{mark}{}  {}\n", study.source.file_name, study.source.curve));
        let write = if is_latex { parameters::latex } else { parameters::text };
        texts.extend(study.fits.iter().filter_map(|f| f.result.as_ref().ok()).map(|fit| write(fit, units)));
    }
    texts.join("\n")
}

/// `lih_X_A.E_X.json`; characters that file systems refuse become `_`, a name used twice gets a number.
fn findings_file_name(path: &Path, findings: &Findings, taken: &mut BTreeSet<String>) -> String {
    let stem = path.file_stem().map_or_else(|| "scan".into(), |s| s.to_string_lossy());
    let name: String = format!("{stem}.{}", findings.source.curve_label)
        .chars()
        .map(|c| if c.is_alphanumeric() || "._+-=()".contains(c) { c } else { '_' })
        .collect();
    let numbered =
        std::iter::once(format!("{name}.json")).chain((2_usize..).map(|n| format!("{name}.{n}.json")));
    // A number may make the name of another curve: the first name that is free.
    let free = numbered.into_iter().find(|name| !taken.contains(name)).unwrap_or(name);
    taken.insert(free.clone());
    free
}

/// Seconds per stage and pass; the median over passes is printed.
#[derive(Default)]
struct Timings {
    stages: BTreeMap<&'static str, Vec<f64>>,
    pass: BTreeMap<&'static str, f64>,
}

impl Timings {
    fn add(&mut self, stage: &'static str, seconds: f64) {
        *self.pass.entry(stage).or_insert(0.0) += seconds;
    }

    fn end_pass(&mut self) {
        for (stage, seconds) in std::mem::take(&mut self.pass) {
            self.stages.entry(stage).or_default().push(seconds);
        }
    }

    fn to_json(&self) -> serde_json::Value {
        let order = [
            "read",
            "points",
            "curve",
            "fits",
            "levels",
            "level_errors",
            "distortion",
            "constants",
            "reach",
            "densities",
            "thermal",
            "further",
            "total",
        ];
        let mut seconds = serde_json::Map::new();
        for stage in order {
            if let Some(values) = self.stages.get(stage) {
                seconds.insert(stage.to_owned(), median(values).into());
            }
        }
        serde_json::json!({ "seconds": seconds })
    }
}

fn median(values: &[f64]) -> f64 {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    match sorted.len() {
        0 => 0.0,
        n if n % 2 == 1 => sorted[n / 2],
        n => 0.5 * (sorted[n / 2 - 1] + sorted[n / 2]),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Invented numbers.
    #[test]
    fn no_findings_file_takes_the_name_of_another() {
        let text = "r_bohr,E (hartree),e2 (hartree)\n1.0,0.2,0.2\n1.2,0.1,0.1\n1.4,0.0,0.0\n1.6,0.1,0.1\n1.8,0.2,0.2\n";
        let scan =
            crate::scan::read::read_scan("a.csv", text.as_bytes(), &Default::default()).expect("a scan");
        let mut findings = crate::study::study(&scan, &Settings::default()).expect("a study");
        let mut taken = BTreeSet::new();
        let names: Vec<String> = ["E", "E", "E.2", "E.2"]
            .map(|label| {
                findings.source.curve_label = label.to_owned();
                findings_file_name(Path::new("a.csv"), &findings, &mut taken)
            })
            .to_vec();
        assert_eq!(names, ["a.E.json", "a.E.2.json", "a.E.2.2.json", "a.E.2.3.json"]);
    }
}
