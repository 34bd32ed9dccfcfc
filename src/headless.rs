//! The command line: arguments, files, studies, exports, exit status.

use std::process::ExitCode;

/// Entry point of the program.
pub fn main() -> ExitCode {
    ExitCode::SUCCESS
}
