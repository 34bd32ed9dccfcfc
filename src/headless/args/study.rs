//! Options of `parabound study`.

use super::UsageError;
use super::choices::StudyChoices;
use super::value::value;
use crate::export::parameters::ParameterUnits;
use crate::export::table::Table;
use crate::scan::read::{parse_energy_unit, parse_length_unit};
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit};
use lexopt::Parser;
use std::path::PathBuf;

/// Arguments of the headless study.
#[derive(Clone, Debug, Default)]
pub struct StudyArgs {
    /// Files to study.
    pub files: Vec<PathBuf>,
    /// Choices about the study.
    pub choices: StudyChoices,
    /// Findings file; `-` is standard output.
    pub out: Option<PathBuf>,
    /// Folder for one findings file per study.
    pub out_dir: Option<PathBuf>,
    /// Tables to write.
    pub tables: Vec<(Table, PathBuf)>,
    /// File for the report of all studies.
    pub report: Option<PathBuf>,
    /// Files for the parameters of the fits, as text or, where the name ends in `.tex`, LaTeX.
    pub parameters: Option<PathBuf>,
    /// Units of parameters and force constants, in the summary and in that file.
    pub units: ParameterUnits,
    /// Replace existing files.
    pub overwrite: bool,
    /// Print timings.
    pub timings: bool,
    /// Only say what was understood.
    pub dry_run: bool,
    /// Repeat each study for the timings.
    pub repeat: usize,
}

pub(super) fn study_option(
    name: &str,
    parser: &mut Parser,
    study: &mut StudyArgs,
) -> Result<bool, UsageError> {
    match name {
        "out" => study.out = Some(parser.value()?.into()),
        "out-dir" => study.out_dir = Some(parser.value()?.into()),
        "timings" => study.timings = true,
        "report" => {
            let html = |t: &str| t.to_lowercase().ends_with(".html").then(|| PathBuf::from(t));
            study.report = Some(value(parser, "report", "a file name that ends in .html", html)?);
        }
        "parameters" => study.parameters = Some(parser.value()?.into()),
        "parameter-energy-unit" => {
            let names = EnergyUnit::ALL.map(EnergyUnit::name).join(", ");
            study.units.energy = value(parser, "parameter-energy-unit", &names, parse_energy_unit)?;
        }
        "parameter-length-unit" => {
            let names = LengthUnit::ALL.map(LengthUnit::name).join(", ");
            study.units.length = value(parser, "parameter-length-unit", &names, parse_length_unit)?;
        }
        "force-constant-unit" => {
            let names = ForceConstantUnit::ALL.map(ForceConstantUnit::name).join(", ");
            let unit = |t: &str| ForceConstantUnit::ALL.into_iter().find(|u| u.name() == t);
            study.units.force_constant = value(parser, "force-constant-unit", &names, unit)?;
        }
        "convention" => {
            let all = [ForceConstantConvention::Half, ForceConstantConvention::Full];
            let accepted = "half (V = 1/2 k x^2) or full (V = k x^2)";
            let convention = |t: &str| all.into_iter().find(|c| c.word() == t);
            study.units.convention = value(parser, "convention", accepted, convention)?;
        }
        "dry-run" => study.dry_run = true,
        "repeat" => {
            let count = |t: &str| t.parse().ok().filter(|k| (1..=100_000).contains(k));
            study.repeat = value(parser, "repeat", "a whole number from 1 to 100000", count)?;
        }
        "table" => {
            let text = parser.value()?;
            let names = Table::ALL.map(|(name, _)| name);
            let entry = text.to_str().and_then(|t| t.split_once('=')).filter(|(_, file)| !file.is_empty());
            let table = entry.and_then(|(what, file)| {
                let (_, table) = Table::ALL.into_iter().find(|(name, _)| *name == what)?;
                Some((table, PathBuf::from(file)))
            });
            let (table, file) = table.ok_or_else(|| UsageError::Value {
                option: "table",
                found: text.to_string_lossy().into_owned(),
                accepted: format!("WHAT=FILE.csv with WHAT one of {}", names.join(", ")),
            })?;
            study.tables.push((table, file));
        }
        _ => return Ok(false),
    }
    Ok(true)
}
