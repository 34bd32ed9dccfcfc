//! `parabound figure`: one scan in, one picture out.

use super::args::FigureArgs;
use super::input::Input;
use super::run_study::starting_settings;
use crate::figure::drawing::{Drawing, drawing};
use crate::figure::{pdf, svg};
use crate::files::{self, Replace};
use crate::notice::Severity;
use crate::study::study;

const NOT_READ: u8 = 3;
const IMPOSSIBLE: u8 = 4;

/// What a picture is written as.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Format {
    Svg,
    Pdf,
    Png,
}

/// Runs the command; returns the exit status.
pub fn run(arguments: &FigureArgs) -> u8 {
    match picture(arguments) {
        Ok(()) => 0,
        Err((status, message)) => {
            eprintln!("parabound: {message}");
            status
        }
    }
}

fn picture(arguments: &FigureArgs) -> Result<(), (u8, String)> {
    let format = match arguments.out.extension().and_then(|e| e.to_str()).map(str::to_lowercase).as_deref() {
        Some("svg") => Format::Svg,
        Some("pdf") => Format::Pdf,
        Some("png") => Format::Png,
        _ => {
            let text = format!("{}: a picture ends in .svg, .pdf or .png", arguments.out.display());
            return Err((2, text));
        }
    };
    let not_read = |message: String| (NOT_READ, format!("{}: {message}", arguments.file.display()));
    let mut settings = starting_settings(&arguments.choices).map_err(|m| (NOT_READ, m))?;
    let input = Input::read(std::slice::from_ref(&arguments.file), &settings.read).map_err(not_read)?;
    let scan = input.scan(&settings.read).map_err(not_read)?;
    arguments.choices.set_rows_aside(&scan, &mut settings).map_err(not_read)?;
    let findings = study(&scan, &settings).map_err(|e| not_read(e.to_string()))?;
    if let Some(stop) = findings.notices.iter().find(|n| n.severity == Severity::Stop) {
        return Err((IMPOSSIBLE, format!("{}: {}", arguments.file.display(), stop.text)));
    }
    let drawing = drawing(&findings, arguments.subject, &arguments.paper)
        .map_err(|e| (IMPOSSIBLE, format!("{}: {e}", arguments.file.display())))?;
    let bytes = match format {
        Format::Svg => svg::svg(&drawing).into_bytes(),
        Format::Pdf => pdf::pdf(&drawing),
        Format::Png => png(&drawing, arguments.dots_per_inch).map_err(|m| (NOT_READ, m))?,
    };
    let replace = if arguments.overwrite { Replace::Anything } else { Replace::Nothing };
    files::write(&arguments.out, &bytes, replace).map_err(|e| (NOT_READ, e.to_string()))
}

#[cfg(feature = "gui")]
fn png(drawing: &Drawing, dots_per_inch: f64) -> Result<Vec<u8>, String> {
    crate::gui::drawing_to_png(drawing, dots_per_inch)
}

#[cfg(not(feature = "gui"))]
fn png(_drawing: &Drawing, _dots_per_inch: f64) -> Result<Vec<u8>, String> {
    Err("this build has no painter for PNG pictures; write .svg or .pdf, or build with the window".to_owned())
}
