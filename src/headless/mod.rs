//! The command line: arguments, files, studies, exports, exit status.
//!
//! Exit status: 0 done; 2 wrong usage; 3 a file could not be read or understood (a missing unit
//! counts), or a result could not be written; 4 understood, but a study is impossible; 5 a recheck found
//! a difference. Of several files each is done, and the status is the highest.

mod args;
mod dry_run;
mod figure;
mod help;
mod input;
mod recheck;
mod run_study;
mod summary;

pub use args::{
    Command, FigureArgs, RecheckArgs, StudyArgs, UsageError, WindowArgs, parse, parse_with_remarks,
};
#[cfg(feature = "gui")]
pub(crate) use input::Input;
#[cfg(feature = "gui")]
pub(crate) use run_study::read_settings;
pub use summary::summary;

use std::process::ExitCode;

/// Entry point of the program.
pub fn main() -> ExitCode {
    let parsed = parse_with_remarks(std::env::args_os().skip(1)).map(|(command, remarks)| {
        for remark in remarks {
            eprintln!("parabound: {remark}");
        }
        command
    });
    let status = match parsed {
        Ok(Command::Help) => print(help::HELP),
        Ok(Command::Version) => print(concat!("parabound ", env!("CARGO_PKG_VERSION"), "\n")),
        Ok(Command::Study(arguments)) => run_study::run(&arguments),
        Ok(Command::Figure(arguments)) => figure::run(&arguments),
        Ok(Command::Recheck(arguments)) => recheck::run(&arguments),
        Ok(Command::Window(arguments)) => window(*arguments),
        Err(error) => {
            eprintln!("parabound: {error}\nparabound --help lists the commands and options.");
            2
        }
    };
    ExitCode::from(status)
}

/// Writes to standard output; gives the exit status. A reader that has gone away is no error.
fn print(text: &str) -> u8 {
    use std::io::Write as _;
    let mut out = std::io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() != std::io::ErrorKind::BrokenPipe => {
            eprintln!("parabound: standard output could not be written ({error})");
            3
        }
        _ => 0,
    }
}

#[cfg(feature = "gui")]
fn window(arguments: WindowArgs) -> u8 {
    crate::gui::run(arguments)
}

#[cfg(not(feature = "gui"))]
fn window(_arguments: WindowArgs) -> u8 {
    eprintln!("parabound: this build has no window; use 'parabound study FILE...' (see --help)");
    2
}
