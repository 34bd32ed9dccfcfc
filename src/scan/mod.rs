//! A scan: the table as imported. It keeps every row and every digit as read; what a study uses of it
//! is decided by the settings.

pub mod combine;
pub mod error;
pub mod inspect;
mod names;
pub mod read;

use self::error::ScanError;
use crate::notice::Notice;
use crate::species::AtomChoice;
use crate::units::{EnergyUnit, LengthUnit};

/// How the file was laid out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Layout {
    /// Columns of numbers.
    Delimited,
    /// Frames of Cartesian coordinates.
    Xyz,
    /// QCSchema JSON.
    Qcschema,
    /// Text logs caught by line patterns.
    Lines,
}

impl Layout {
    /// The word used in findings files.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Delimited => "delimited",
            Self::Xyz => "xyz",
            Self::Qcschema => "qcschema",
            Self::Lines => "lines",
        }
    }
}

/// Who says a unit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum UnitOrigin {
    /// The header, or the program that made the numbers.
    #[default]
    Stated,
    /// The words of a comment.
    Comment,
    /// The file format.
    Format,
    /// The user.
    Chosen,
}

/// One energy column, as read.
#[derive(Clone, Debug, PartialEq)]
pub struct EnergyColumn {
    /// Full header name, unit included, e.g. `E_MP2(hartree)`.
    pub name: String,
    /// The name without the unit, for display, e.g. `E_MP2`.
    pub label: String,
    /// The unit in force (stated, or chosen by the user).
    pub unit: EnergyUnit,
    /// One value a row, in `unit`; none where the cell is empty.
    pub values: Vec<Option<f64>>,
    /// The recipe, where the column was made from others.
    pub made: Option<String>,
}

/// A column that is neither bond length nor energy, kept for averages over levels.
#[derive(Clone, Debug, PartialEq)]
pub struct PropertyColumn {
    /// Full header name.
    pub name: String,
    /// Unit as written, where one is.
    pub unit: Option<String>,
    /// One value a row; none where the cell is empty.
    pub values: Vec<Option<f64>>,
}

/// A scan, valid by construction ([`Scan::checked`]): at least one row and one energy column, equal
/// lengths, finite numbers, positive bond lengths. Rows keep the file's order.
#[derive(Clone, Debug, PartialEq)]
pub struct Scan {
    /// File name without folder.
    pub file_name: String,
    /// SHA-256 of the bytes read, in hexadecimal.
    pub sha256: String,
    /// How the file was laid out.
    pub layout: Layout,
    /// Header name of the bond-length column.
    pub length_column: String,
    /// Unit of the bond lengths as read.
    pub length_unit: LengthUnit,
    /// Who says the unit of the bond lengths.
    pub length_unit_origin: UnitOrigin,
    /// Who says the unit of each energy column that was read; those made have none of their own.
    pub energy_unit_origins: Vec<UnitOrigin>,
    /// What separates the columns and what stands for decimals, in words, where the file is a table.
    pub separators: Option<[&'static str; 2]>,
    /// Bond lengths as read, one a row, in `length_unit`.
    pub bond_lengths: Vec<f64>,
    /// The energy columns, in file order.
    pub energies: Vec<EnergyColumn>,
    /// All other numeric columns.
    pub properties: Vec<PropertyColumn>,
    /// Line of the file each row stands on, from 1; empty when the scan comes from no text.
    pub row_lines: Vec<usize>,
    /// Remarks standing behind a row in the file, with the row counted from 0.
    pub row_remarks: Vec<(usize, String)>,
    /// The atoms, where the file names them.
    pub atoms: Option<[AtomChoice; 2]>,
    /// The molecule's charge, where the file names it.
    pub charge: Option<i32>,
    /// What reading remarked.
    pub notices: Vec<Notice>,
}

impl Scan {
    /// A scan of one curve from numbers made in a program; its columns are called `r` and `E`.
    ///
    /// # Errors
    /// As [`Scan::checked`].
    pub fn from_columns(
        file_name: &str,
        (length_unit, bond_lengths): (LengthUnit, Vec<f64>),
        (energy_unit, energies): (EnergyUnit, Vec<f64>),
    ) -> Result<Self, ScanError> {
        Self {
            file_name: file_name.to_owned(),
            sha256: read::sha256_hex(&[]),
            layout: Layout::Delimited,
            length_column: "r".to_owned(),
            length_unit,
            length_unit_origin: UnitOrigin::Stated,
            energy_unit_origins: vec![UnitOrigin::Stated],
            separators: None,
            bond_lengths,
            energies: vec![EnergyColumn {
                name: "E".to_owned(),
                label: "E".to_owned(),
                unit: energy_unit,
                values: energies.into_iter().map(Some).collect(),
                made: None,
            }],
            properties: Vec::new(),
            row_lines: Vec::new(),
            row_remarks: Vec::new(),
            atoms: None,
            charge: None,
            notices: Vec::new(),
        }
        .checked()
    }

    /// The one gate: gives the scan back if it is valid. Behind it nobody checks again.
    ///
    /// # Errors
    /// No rows, no energy column or none with a value, columns of unequal length, a number that is not
    /// finite, a bond length that is not positive.
    pub fn checked(self) -> Result<Self, ScanError> {
        let rows = self.bond_lengths.len();
        if rows == 0 {
            return Err(ScanError::Empty);
        }
        for (row, &r) in self.bond_lengths.iter().enumerate() {
            if !r.is_finite() {
                return Err(self.not_finite(row, 1, &self.length_column, r));
            }
            if r <= 0.0 {
                let (line, name) = (self.line(row), self.length_column.clone());
                return Err(ScanError::LengthNotPositive { line, name, found: r });
            }
        }
        let energies = self.energies.iter().map(|c| (&c.name, &c.values));
        let properties = self.properties.iter().map(|c| (&c.name, &c.values));
        for (column, (name, values)) in energies.chain(properties).enumerate() {
            if values.len() != rows {
                let (column, found) = (name.clone(), values.len());
                return Err(ScanError::UnequalColumns { column, found, expected: rows });
            }
            for (row, value) in values.iter().enumerate() {
                if let Some(v) = value.filter(|v| !v.is_finite()) {
                    return Err(self.not_finite(row, column + 2, name, v));
                }
            }
        }
        match self.energies.first() {
            None => Err(ScanError::NoEnergyColumn { columns: vec![self.length_column] }),
            Some(first) if self.energies.iter().all(|c| c.values.iter().all(Option::is_none)) => {
                Err(ScanError::NoEnergies { column: first.name.clone() })
            }
            Some(_) => Ok(self),
        }
    }

    fn not_finite(&self, row: usize, column: usize, name: &str, found: f64) -> ScanError {
        ScanError::NotFinite { line: self.line(row), column, name: name.to_owned(), found: found.to_string() }
    }

    /// The name of the bond-length column without its unit, for display.
    pub fn length_label(&self) -> String {
        read::label_of(&self.length_column)
    }

    /// `, columns separated by ..., decimal ...`; nothing where the file is no table.
    pub fn format_words(&self) -> String {
        self.separators.map_or_else(String::new, |[columns, decimals]| {
            format!(", columns separated by {columns}, decimal {decimals}")
        })
    }

    /// Line of the file a row stands on, from 1; the row's number from 1 when it comes from no text.
    pub fn line(&self, row: usize) -> usize {
        self.row_lines.get(row).copied().unwrap_or(row + 1)
    }

    /// The energy column that answers to a name: its full header name, the name without the unit, its
    /// number from 1, or an unambiguous part; none: the first.
    ///
    /// # Errors
    /// Unknown or ambiguous name, with the columns to choose from.
    pub fn curve_index(&self, wanted: Option<&str>) -> Result<usize, ScanError> {
        let Some(wanted) = wanted else { return Ok(0) };
        let names: Vec<(&str, &str)> =
            self.energies.iter().map(|c| (c.name.as_str(), c.label.as_str())).collect();
        names::find(&names, wanted)
    }

    /// The column beside bond length and energies that answers to a name, likewise.
    ///
    /// # Errors
    /// As [`Scan::curve_index`].
    pub fn property_index(&self, wanted: &str) -> Result<usize, ScanError> {
        let names: Vec<(&str, &str)> =
            self.properties.iter().map(|c| (c.name.as_str(), c.name.as_str())).collect();
        names::find(&names, wanted)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn scan(r: Vec<f64>, e: Vec<f64>) -> Result<Scan, ScanError> {
        Scan::from_columns("made.csv", (LengthUnit::Angstrom, r), (EnergyUnit::Hartree, e))
    }

    #[test]
    fn the_gate_lets_only_valid_scans_through() {
        assert!(scan(vec![1.0, 2.0], vec![0.0, 1.0]).is_ok());
        assert_eq!(scan(vec![], vec![]), Err(ScanError::Empty));
        assert!(matches!(
            scan(vec![1.0, 0.0], vec![0.0; 2]),
            Err(ScanError::LengthNotPositive { line: 2, .. })
        ));
        assert!(matches!(scan(vec![f64::NAN], vec![0.0]), Err(ScanError::NotFinite { column: 1, .. })));
        assert!(matches!(scan(vec![1.0], vec![f64::INFINITY]), Err(ScanError::NotFinite { column: 2, .. })));
        assert!(matches!(scan(vec![1.0, 2.0], vec![0.0]), Err(ScanError::UnequalColumns { .. })));
        let mut hollow = scan(vec![1.0], vec![0.0]).expect("valid");
        hollow.energies[0].values = vec![None];
        assert!(matches!(hollow.clone().checked(), Err(ScanError::NoEnergies { .. })));
        hollow.energies.clear();
        assert!(matches!(hollow.checked(), Err(ScanError::NoEnergyColumn { .. })));
    }
}
