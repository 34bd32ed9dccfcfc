//! Milliseconds for one frame of the whole program, with no display: laying out, cutting into triangles,
//! painting on the processor. Medians over many frames of the bundled sample, in three views; in the
//! last one an edge of the fit window is dragged, so that every frame holds a new study too.

use parabound::fit::Window;
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::painter::{Canvas, Offscreen};
use parabound::gui::state::Preset;
use parabound::units::LengthUnit;
use std::time::{Duration, Instant};

const FRAMES: usize = 60;

fn milliseconds(times: &mut [f64]) -> f64 {
    times.sort_by(f64::total_cmp);
    times.get(times.len() / 2).copied().unwrap_or(f64::NAN) * 1e3
}

/// Times frames; `before` is done before each one and counted as `work`.
fn frames(name: &str, window: &mut Offscreen<App>, mut before: impl FnMut(&mut Offscreen<App>, usize)) {
    let mut parts = [Vec::new(), Vec::new(), Vec::new()];
    for i in 0..FRAMES {
        let start = Instant::now();
        before(window, i);
        parts[0].push(start.elapsed().as_secs_f64());
        let start = Instant::now();
        let triangles = window.pass(Vec::new());
        parts[1].push(start.elapsed().as_secs_f64());
        let start = Instant::now();
        window.paint(&triangles);
        parts[2].push(start.elapsed().as_secs_f64());
    }
    let [work, layout, paint] = parts.each_mut().map(|p| milliseconds(p));
    println!("{name:<28} {work:>8.2} {layout:>10.2} {paint:>10.2}");
}

fn main() {
    let start = Start { inline: true, ..Start::default() };
    let mut window = Offscreen::new(Canvas::default(), |ctx| App::new(ctx, start));
    window.settle(Duration::from_secs(60));
    let ctx = window.ctx().clone();
    println!("milliseconds, median of {FRAMES}      study    layout      paint");
    frames("near the minimum", &mut window, |_, _| {});
    window.program().give(Command::Zoom(Preset::WholeWell), &ctx);
    frames("whole well, all levels", &mut window, |_, _| {});
    window.program().give(Command::Zoom(Preset::NearMinimum), &ctx);
    frames("dragging a window edge", &mut window, |window, i| {
        let window_now = Window { from: 1.2, to: 1.9 + 0.005 * i as f64, unit: LengthUnit::Angstrom };
        window.program().give(Command::SetWindow { window: window_now, resting: false }, &ctx);
        window.program().compute_now();
    });
}
