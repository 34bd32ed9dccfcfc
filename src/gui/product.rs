//! What the window writes: findings, report, picture, tables, each by the code that the headless commands use.

use crate::export::json::findings_to_string;
use crate::export::table::Table;
use crate::figure::drawing::{Paper, Subject, drawing};
use crate::figure::{pdf, svg};
use crate::files::{Replace, WriteError};
use crate::findings::Findings;
use crate::report::report;
use std::path::Path;

/// Resolution of PNG pictures.
const DOTS_PER_INCH: f64 = 300.0;

/// Something that is made of a study and written to a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Product {
    /// All findings.
    Findings,
    /// The report.
    Report,
    /// The plot as it is seen.
    Picture,
    /// The levels.
    Levels,
    /// The constants.
    Constants,
    /// The points as read.
    Points,
    /// The averages over temperature.
    Thermal,
}

impl Product {
    /// All of them, in the order of the menu.
    pub const ALL: [Self; 7] = [
        Self::Findings,
        Self::Report,
        Self::Picture,
        Self::Levels,
        Self::Constants,
        Self::Points,
        Self::Thermal,
    ];

    /// What the menu says.
    pub const fn label(self) -> &'static str {
        match self {
            Self::Findings => "Findings (JSON) …",
            Self::Report => "Report (HTML) …",
            Self::Picture => "Picture (SVG, PDF, PNG) …",
            Self::Levels => "Levels (CSV) …",
            Self::Constants => "Constants (CSV) …",
            Self::Points => "Points as read (CSV) …",
            Self::Thermal => "Thermal averages (CSV) …",
        }
    }

    /// What it is, for a tooltip.
    pub const fn about(self) -> &'static str {
        match self {
            Self::Findings => "All findings of this curve; the headless command writes the same.",
            Self::Report => "One page with picture, sentence, constants, fits, levels, notices and settings.",
            Self::Picture => "The plot as it is seen, for paper: the ending of the name chooses the format.",
            Self::Levels => {
                "Every level without rotation and of every J listed under All J, with constants and densities."
            }
            Self::Constants => "One row with all constants.",
            Self::Points => "Bond lengths and energies to the last digit.",
            Self::Thermal => "Averages at the temperatures of the settings.",
        }
    }

    /// What a message calls it.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Findings => "Findings",
            Self::Report => "Report",
            Self::Picture => "Picture",
            Self::Levels => "Levels",
            Self::Constants => "Constants",
            Self::Points => "Points",
            Self::Thermal => "Thermal averages",
        }
    }

    /// How names of its files end.
    pub const fn ending(self) -> &'static str {
        match self {
            Self::Findings => ".findings.json",
            Self::Report => ".report.html",
            Self::Picture => ".svg",
            Self::Levels => ".levels.csv",
            Self::Constants => ".constants.csv",
            Self::Points => ".points.csv",
            Self::Thermal => ".thermal.csv",
        }
    }

    /// The file's content.
    fn bytes(self, findings: &Findings, path: &Path, paper: &Paper) -> Result<Vec<u8>, String> {
        let table = |table: Table| {
            let mut bytes = Vec::new();
            table.write(&[findings], &mut bytes).map_err(|e| e.to_string())?;
            Ok(bytes)
        };
        match self {
            Self::Findings => Ok(findings_to_string(findings).into_bytes()),
            Self::Report => Ok(report(&[findings]).into_bytes()),
            Self::Picture => {
                let ending = path.extension().and_then(|e| e.to_str()).map(str::to_lowercase);
                let drawing = drawing(findings, Subject::Curve, paper).map_err(|e| e.to_string())?;
                match ending.as_deref() {
                    Some("svg") => Ok(svg::svg(&drawing).into_bytes()),
                    Some("pdf") => Ok(pdf::pdf(&drawing)),
                    Some("png") => super::drawing_to_png(&drawing, DOTS_PER_INCH),
                    _ => Err("a picture ends in .svg, .pdf or .png".to_owned()),
                }
            }
            Self::Levels => table(Table::Levels),
            Self::Constants => table(Table::Constants),
            Self::Points => table(Table::Curve),
            Self::Thermal => table(Table::Thermal),
        }
    }

    /// Writes the file; a file there is replaced if `overwrite`, or if both are findings.
    ///
    /// # Errors
    /// Why it was not written, in words of the window.
    pub fn write(
        self,
        findings: &Findings,
        path: &Path,
        paper: &Paper,
        overwrite: bool,
    ) -> Result<String, String> {
        let bytes = self
            .bytes(findings, path, paper)
            .map_err(|why| format!("{} not written: {why}.", path.display()))?;
        let replace = match (overwrite, self) {
            (true, _) => Replace::Anything,
            (false, Self::Findings) => Replace::Findings,
            (false, _) => Replace::Nothing,
        };
        match crate::files::write(path, &bytes, replace) {
            Ok(()) => Ok(format!("{} written to {}.", self.name(), path.display())),
            Err(WriteError::Exists { path }) => {
                Err(format!("{} exists and was left as it is. Choose another name.", path.display()))
            }
            Err(error) => Err(format!("{error}.")),
        }
    }
}
