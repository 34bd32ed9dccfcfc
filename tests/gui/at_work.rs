//! A window at work with no display, for the test that kills it: changes something every few milliseconds, says
//! so, and saves the study now and then. Ends only when it is killed.
//!
//!     at-work STATE_FOLDER STUDY_FILE NUMBER

use parabound::fit::Window;
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::painter::{Canvas, Offscreen};
use parabound::units::LengthUnit;
use std::io::Write as _;
use std::path::PathBuf;
use std::time::Duration;

fn main() {
    let mut arguments = std::env::args_os().skip(1);
    let mut next = || arguments.next().map(PathBuf::from).unwrap_or_default();
    let (folder, study, number) = (next(), next(), next());
    let number: f64 = number.to_str().and_then(|n| n.parse().ok()).unwrap_or(0.0);
    let start = Start { state_folder: Some(folder), ..Start::default() };
    let canvas = Canvas { size_px: [900, 600], passes: 1, ..Canvas::default() };
    let mut window = Offscreen::new(canvas, |ctx| App::new(ctx, start));
    window.settle(Duration::from_secs(120));
    let ctx = window.ctx().clone();
    let mine = Window { from: 1.0 + 0.001 * number, to: 2.2, unit: LengthUnit::Angstrom };
    window.program().give(Command::SetWindow { window: mine, resting: true }, &ctx);
    for change in 1_u32.. {
        // The change's number is the tolerance in millionths.
        let tolerance = f64::from(change) * 1e-6;
        window.program().give(Command::SetTolerance { tolerance, resting: false }, &ctx);
        if change % 25 == 1 {
            window.program().give(Command::SaveStudyTo { path: study.clone(), overwrite: true }, &ctx);
        }
        window.pass(Vec::new());
        let mut out = std::io::stdout().lock();
        if writeln!(out, "{change}").and_then(|()| out.flush()).is_err() {
            return;
        }
        std::thread::sleep(Duration::from_millis(15));
    }
}
