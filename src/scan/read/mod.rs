//! Readers: bytes and a name in, a scan out.

use super::Scan;
use super::error::ScanError;
use crate::units::{EnergyUnit, LengthUnit};
use serde::{Deserialize, Serialize};

/// What the user says about a file that the file does not say, or says wrong.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct ReadSettings {
    /// Name of the bond-length column (full, without unit, an unambiguous part, or its number from 1); none: the first.
    pub length_column: Option<String>,
    /// Unit of the bond lengths.
    pub length_unit: Option<LengthUnit>,
    /// Unit of the energies.
    pub energy_unit: Option<EnergyUnit>,
}

/// Reads a scan from the bytes of a file.
///
/// # Errors
/// [`ScanError`] with place, value found and remedy.
pub fn read_scan(_file_name: &str, _bytes: &[u8], _settings: &ReadSettings) -> Result<Scan, ScanError> {
    todo!("scan reader")
}
