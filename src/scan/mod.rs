//! A scan: the table as imported. It keeps every row and every digit as read; what a study uses of it
//! is decided by the settings.

pub mod error;
pub mod read;

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

/// A scan, valid by construction: at least one row and one energy column, equal lengths, finite
/// numbers, positive bond lengths. Rows keep the file's order.
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
    /// Bond lengths as read, one a row, in `length_unit`.
    pub bond_lengths: Vec<f64>,
    /// The energy columns, in file order.
    pub energies: Vec<EnergyColumn>,
    /// All other numeric columns.
    pub properties: Vec<PropertyColumn>,
    /// The atoms, where the file names them.
    pub atoms: Option<[AtomChoice; 2]>,
    /// The molecule's charge, where the file names it.
    pub charge: Option<i32>,
    /// What reading remarked.
    pub notices: Vec<Notice>,
}
