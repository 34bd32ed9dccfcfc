//! The study: one pure function from scan and settings to findings. Only the order of the steps.

use crate::findings::Findings;
use crate::scan::Scan;
use crate::settings::Settings;
use thiserror::Error;

/// Why settings and scan do not fit together (a wrong name, not a bad curve).
#[derive(Clone, Debug, PartialEq, Error)]
pub enum StudyError {
    /// No energy column answers to the name.
    #[error("no energy column {wanted:?}; this scan has {known}")]
    Curve {
        /// What was asked for.
        wanted: String,
        /// What there is.
        known: String,
    },
}

/// Studies one curve of a scan.
///
/// Pure: reads no file, no clock, no environment; the same scan and settings give the same findings.
///
/// # Errors
/// [`StudyError`] when the settings name something that the scan does not have. A curve that cannot
/// be studied is no error here: its findings say why in a `stop` notice.
pub fn study(_scan: &Scan, _settings: &Settings) -> Result<Findings, StudyError> {
    todo!("study")
}
