//! Why a file could not be read as a scan.

use thiserror::Error;

/// Why a file could not be read as a scan.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum ScanError {}
