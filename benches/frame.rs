//! Milliseconds for one frame of the whole program with no display: laying out, cutting into triangles, painting
//! on the processor (only presenting is not in it), while the worker computes beside, as in the real window.
//!
//! Printed are median and longest frame. Budgets, on a machine of two cores without a GPU: while dragging a median
//! below 33 ms and no frame above 100 ms with 60 levels drawn; 200 curves as fluid as one; nothing while idle; the
//! first picture within a second.

use eframe::egui::{self, Event, Modifiers, PointerButton, Pos2, pos2};
use parabound::fit::Window;
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::painter::{Canvas, Offscreen};
use parabound::gui::state::{CurveKey, Page, Preset};
use parabound::settings::Settings;
use parabound::units::LengthUnit;
use std::fmt::Write as _;
use std::path::PathBuf;
use std::time::{Duration, Instant};

const FRAMES: usize = 80;
/// A hand moves the pointer no more often than this.
const HAND: Duration = Duration::from_millis(8);

type Bench = Offscreen<App>;

/// Times frames; `before` is what the hand does before each.
fn frames(name: &str, window: &mut Bench, mut before: impl FnMut(&mut Bench, usize) -> Vec<Event>) {
    let (mut all, mut layout) = (Vec::new(), Vec::new());
    for i in 0..FRAMES {
        let begin = Instant::now();
        let events = before(window, i);
        let triangles = window.pass(events);
        layout.push(begin.elapsed().as_secs_f64() * 1e3);
        window.paint(&triangles);
        all.push(begin.elapsed().as_secs_f64() * 1e3);
        std::thread::sleep(HAND.saturating_sub(begin.elapsed()));
    }
    let median = |times: &mut [f64]| {
        times.sort_by(f64::total_cmp);
        times.get(times.len() / 2).copied().unwrap_or(f64::NAN)
    };
    let (layout, median_all) = (median(&mut layout), median(&mut all));
    let longest = all.last().copied().unwrap_or(f64::NAN);
    println!("{name:<46} {layout:>8.1} {median_all:>8.1} {longest:>8.1}");
}

fn open(size_px: [usize; 2], files: Vec<PathBuf>) -> Bench {
    let mut settings = Settings::default();
    settings.masses.atoms = parabound::species::parse_atoms("35Cl,35Cl").ok().filter(|_| !files.is_empty());
    let start = Start { files, settings, ..Start::default() };
    let mut window = Offscreen::new(Canvas { size_px, ..Canvas::default() }, |ctx| App::new(ctx, start));
    window.settle(Duration::from_secs(60));
    window
}

fn give(window: &mut Bench, command: Command) {
    let ctx = window.ctx().clone();
    window.program().give(command, &ctx);
    window.settle(Duration::from_secs(60));
}

/// A scan of a Morse function (invented) that holds sixty levels: D = 0.09 hartree, a = 1.24/bohr, r_e = 3.7 bohr,
/// reduced mass of two atoms of ³⁵Cl.
fn sixty_levels(columns: usize) -> String {
    let mut text = String::from("R_bohr");
    for c in 0..columns {
        let _ = write!(text, ",E{c}_hartree");
    }
    for i in 0..60 {
        let r = 2.75 + 0.06 * f64::from(i) * (1.0 + 0.012 * f64::from(i));
        let _ = write!(text, "\n{r:.6}");
        for c in 0..columns {
            let e = 1.0 - (-1.24 * (r - 3.7 - 1e-4 * c as f64)).exp();
            let _ = write!(text, ",{:.10}", 0.09 * e * e);
        }
    }
    text.push('\n');
    text
}

/// Presses on the upper edge of the window and moves it to and fro, by events as the hand does.
fn drag(window: &mut Bench, i: usize) -> Vec<Event> {
    let from = 0.02 * (i % 20) as f64;
    let state = window.program().state();
    let Some(now) = state.window() else { return Vec::new() };
    let to = LengthUnit::Angstrom.convert(2.25 + from, now.unit);
    let ctx = window.ctx().clone();
    let command = Command::SetWindow { window: Window { to, ..now }, resting: false };
    window.program().give(command, &ctx);
    vec![Event::PointerMoved(pos2(700.0 + 2.0 * (i % 20) as f32, 400.0))]
}

/// Moves the view with the pointer pressed.
fn pan(i: usize) -> Vec<Event> {
    let at = |i: usize| Pos2::new(500.0 + 3.0 * (i % 30) as f32, 420.0 - (i % 30) as f32);
    let press = |pressed| Event::PointerButton {
        pos: at(i),
        button: PointerButton::Primary,
        pressed,
        modifiers: Modifiers::NONE,
    };
    match i {
        0 => vec![Event::PointerMoved(at(0)), press(true)],
        _ if i + 1 == FRAMES => vec![press(false)],
        _ => vec![Event::PointerMoved(at(i))],
    }
}

fn main() -> std::io::Result<()> {
    let begin = Instant::now();
    let mut window = open([1400, 900], Vec::new());
    println!(
        "first picture after {:.0} ms, fonts, sample and study included",
        begin.elapsed().as_secs_f64() * 1e3
    );
    println!(
        "{:<46} {:>8} {:>8} {:>8}",
        format!("milliseconds, {FRAMES} frames"),
        "layout",
        "median",
        "longest"
    );
    frames("sample, near the minimum", &mut window, |_, _| Vec::new());
    frames("sample, dragging an edge", &mut window, drag);

    let folder = std::env::temp_dir().join(format!("parabound-frames-{}", std::process::id()));
    std::fs::create_dir_all(&folder)?;
    let one = folder.join("sixty.csv");
    std::fs::write(&one, sixty_levels(1))?;
    for size in [[1400, 900], [2560, 1440]] {
        let mut window = open(size, vec![one.clone()]);
        give(&mut window, Command::Zoom(Preset::WholeWell));
        give(&mut window, Command::ShowPage(Page::Levels));
        let levels = window.program().state().study().map_or(0, |s| s.findings.levels.len());
        let words = |what: &str| format!("{levels} levels, {}x{}, {what}", size[0], size[1]);
        frames(&words("resting"), &mut window, |_, _| Vec::new());
        frames(&words("dragging an edge"), &mut window, drag);
        frames(&words("moving the view"), &mut window, |_, i| pan(i));
    }

    let many = folder.join("many.csv");
    std::fs::write(&many, sixty_levels(200))?;
    let begin = Instant::now();
    let mut window = open([1400, 900], vec![many]);
    println!("200 curves of 60 points opened in {:.0} ms", begin.elapsed().as_secs_f64() * 1e3);
    let key = |window: &mut Bench, i: usize| {
        let scan = window.program().state().document.focus.map_or(0, |f| f.scan);
        CurveKey { scan, column: i % 200 }
    };
    frames("200 curves, resting", &mut window, |_, _| Vec::new());
    frames("200 curves, dragging an edge", &mut window, drag);
    frames("200 curves, another one every frame", &mut window, |window, i| {
        let (ctx, key) = (window.ctx().clone(), key(window, i));
        window.program().give(Command::Focus(key), &ctx);
        Vec::new()
    });
    let scroll = Event::MouseWheel {
        unit: egui::MouseWheelUnit::Point,
        delta: egui::vec2(0.0, -40.0),
        phase: egui::TouchPhase::Move,
        source: egui::MouseWheelSource::Wheel,
        modifiers: Modifiers::NONE,
    };
    frames("200 curves, scrolling the list", &mut window, |_, _| {
        vec![Event::PointerMoved(pos2(100.0, 180.0)), scroll.clone()]
    });
    std::fs::remove_dir_all(&folder)
}
