//! `--dry-run`: what was understood of each file, and nothing computed.

use super::args::StudyChoices;
use super::input::Input;
use super::run_study::{DONE, NOT_READ};
use crate::scan::{Scan, UnitOrigin};
use crate::settings::Settings;
use std::fmt::Write as _;
use std::path::PathBuf;

/// Prints what each file holds; the status is that of reading.
pub fn run(files: &[PathBuf], choices: &StudyChoices, settings: &Settings) -> u8 {
    let mut status = DONE;
    for group in Input::groups(files, &settings.read) {
        let path = &group[0];
        let read = Input::read(&group, &settings.read).and_then(|input| input.scan(&settings.read)).and_then(
            |scan| {
                let mut settings = settings.clone();
                choices.set_rows_aside(&scan, &mut settings)?;
                settings.checked().map_err(|e| e.to_string())?;
                understood(&scan, &settings)
            },
        );
        match read {
            Ok(text) => {
                super::print(&text);
            }
            Err(message) => {
                eprintln!("parabound: {}: {message}", path.display());
                status = NOT_READ;
            }
        }
    }
    status
}

/// The lines on one scan.
fn understood(scan: &Scan, settings: &Settings) -> Result<String, String> {
    let mut text = format!("{}\n", scan.file_name);
    let _ = writeln!(text, "  layout         {}{}", scan.layout.word(), scan.format_words());
    let rows = scan.bond_lengths.len();
    let (low, high) =
        scan.bond_lengths.iter().fold((f64::INFINITY, 0.0_f64), |(l, h), &r| (l.min(r), h.max(r)));
    let unit = scan.length_unit.name();
    let _ = writeln!(text, "  rows           {rows}, {low} to {high} {unit}");
    let length_origin = origin(scan.length_unit_origin);
    let _ = writeln!(text, "  bond length    {}, in {unit} ({length_origin})", scan.length_column);
    let all = settings.curve.as_deref() == Some("all");
    let chosen =
        if all { 0 } else { scan.curve_index(settings.curve.as_deref()).map_err(|e| e.to_string())? };
    for (i, column) in scan.energies.iter().enumerate() {
        let mark = if all || i == chosen { "*" } else { " " };
        let values = column.values.iter().flatten().count();
        let said = match &column.made {
            Some(recipe) => format!("made: {recipe}"),
            None => origin(scan.energy_unit_origins.get(i).copied().unwrap_or_default()).to_owned(),
        };
        let _ = writeln!(
            text,
            "  energy {:>2}    {mark} {}, in {} ({said}); {values} values",
            i + 1,
            column.name,
            column.unit.name()
        );
    }
    for column in &scan.properties {
        let unit = column.unit.as_ref().map_or_else(String::new, |u| format!(", in {u}"));
        let _ = writeln!(text, "  property       {}{unit}", column.name);
    }
    let atoms = settings.masses.atoms.as_ref().map(|a| (a, "given"));
    match atoms.or_else(|| scan.atoms.as_ref().map(|a| (a, "named in the file"))) {
        Some(([a, b], who)) => {
            let charge = settings.masses.charge.or(scan.charge);
            let charge = charge.map_or_else(String::new, |q| format!(", charge {q:+}"));
            let _ = writeln!(text, "  atoms          {a},{b} ({who}){charge}");
        }
        None => {
            let _ = writeln!(text, "  atoms          not named; levels need --atoms or --reduced-mass");
        }
    }
    if !settings.set_aside.is_empty() {
        let lines: Vec<String> = settings.set_aside.iter().map(|s| scan.line(s.row).to_string()).collect();
        let _ = writeln!(text, "  set aside      the rows in line {}", lines.join(", "));
    }
    for notice in &scan.notices {
        let _ = writeln!(text, "  {}: {}", notice.severity.word(), notice.text);
    }
    if settings.curve.is_none() && scan.energies.len() > 1 {
        let _ = writeln!(text, "  * is the curve that would be studied; --curve chooses another, or all");
    }
    text.push('\n');
    Ok(text)
}

const fn origin(origin: UnitOrigin) -> &'static str {
    match origin {
        UnitOrigin::Stated => "as the header says",
        UnitOrigin::Comment => "as a comment says",
        UnitOrigin::Format => "as the format has it",
        UnitOrigin::Chosen => "as chosen",
    }
}
