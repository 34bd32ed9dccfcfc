//! Readers: bytes and a name in, a scan out. They open no files.

mod assemble;
mod columns;
mod delimited;
mod fixed;
mod frames;
mod header;
mod lines;
mod number;
mod preview;
mod prose;
mod qcschema;
mod table;
#[cfg(test)]
mod tests;
mod text;
mod words;
mod xyz;

use super::Scan;
use super::combine::Recipe;
use super::error::ScanError;
use crate::parallel::side_by_side;
use crate::units::{EnergyUnit, LengthUnit};
use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

pub use delimited::LIMIT_ROWS;
pub use lines::{Caught, LIMIT_LOGS, LinePatterns, LinesError, Match, Patterns, Tried, try_patterns};
pub use number::DecimalSign;
pub use preview::{Preview, PreviewColumn, Role, preview};
pub use table::Delimiter;
pub use text::LIMIT_BYTES;
pub use words::{parse_energy_unit, parse_length_unit};

/// What the user says about a file that the file does not say, or says wrong.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct ReadSettings {
    /// Name of the bond-length column (full, without unit, an unambiguous part, or its number from 1); none: the
    /// first that the header calls a length, or the first of all where there is no header.
    pub length_column: Option<String>,
    /// Names of the energy columns of a table; none: those that the header calls energies.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub energy_columns: Option<Vec<String>>,
    /// Names of columns of a table that are left out; the other numbers are properties along the curve.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub ignored_columns: Vec<String>,
    /// Unit of the bond lengths; it goes before what the file says.
    pub length_unit: Option<LengthUnit>,
    /// Unit of all energy columns; it goes before what the file says.
    pub energy_unit: Option<EnergyUnit>,
    /// What separates the columns of a table; none: told from its lines.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub delimiter: Option<Delimiter>,
    /// What stands for decimals in a table; none: told from its lines.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub decimal_sign: Option<DecimalSign>,
    /// In a file of Cartesian coordinates, the two atoms of the bond by their numbers from 1; none: the
    /// only two there are.
    pub bond: Option<[usize; 2]>,
    /// Curves made from the energy columns, in this order; a later one may use an earlier one.
    pub made: Vec<Recipe>,
    /// Patterns that find bond length and energy in text logs; with them the files are logs, each a point.
    pub lines: Option<LinePatterns>,
}

/// Files from this size on have their checksum made on a thread of its own.
const WORTH_A_THREAD_BYTES: usize = 200_000;

/// Reads a scan from the bytes of a file: QCSchema JSON, frames of Cartesian coordinates, or delimited text,
/// told apart by their content.
///
/// A unit comes from the settings, the header, or the words of a comment (then with a notice), in this
/// order; it is never guessed. Rows keep their order and all numbers their digits.
///
/// # Errors
/// [`ScanError`] with place, value found and remedy.
pub fn read_scan(file_name: &str, bytes: &[u8], settings: &ReadSettings) -> Result<Scan, ScanError> {
    // The checksum of a long file is made beside the reading.
    let (scan, sum) = if bytes.len() < WORTH_A_THREAD_BYTES {
        (parsed(file_name, bytes, settings), sha256_hex(bytes))
    } else {
        side_by_side(|| parsed(file_name, bytes, settings), || sha256_hex(bytes))
    };
    let mut scan = scan?;
    scan.sha256 = sum;
    let scan = scan.checked()?;
    settings.made.iter().try_fold(scan, |scan, recipe| Ok(scan.with_made(recipe)?))
}

/// The scan in the bytes, without their checksum.
fn parsed(file_name: &str, bytes: &[u8], settings: &ReadSettings) -> Result<Scan, ScanError> {
    let (text, encoding) = text::decode(bytes)?;
    let mut scan = if qcschema::looks_like(&text) {
        qcschema::parse(&text, settings)?.scan(file_name, settings)?
    } else if xyz::looks_like(&text) {
        xyz::parse(&text, settings)?.scan(file_name, settings)?
    } else {
        assemble::scan(file_name, delimited::parse(&text, settings)?, settings)?
    };
    scan.notices.splice(0..0, encoding);
    Ok(scan)
}

/// Reads one scan from text logs, each given by name and bytes, by the patterns in the settings.
///
/// # Errors
/// [`ScanError`]; without patterns there is nothing to find.
pub fn read_logs<'b>(
    name: &str,
    logs: impl IntoIterator<Item = (&'b str, &'b [u8])>,
    settings: &ReadSettings,
) -> Result<Scan, ScanError> {
    let nothing = LinePatterns::default();
    let patterns = settings.lines.as_ref().unwrap_or(&nothing);
    let scan = lines::read_lines(name, logs, patterns, (settings.length_unit, settings.energy_unit))?;
    settings.made.iter().try_fold(scan, |scan, recipe| Ok(scan.with_made(recipe)?))
}

/// SHA-256 in hexadecimal.
pub(crate) fn sha256_hex(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|b| format!("{b:02x}")).collect()
}

/// A column header without its unit.
pub(crate) fn label_of(header: &str) -> String {
    columns::ColumnName::parse(header).label
}
