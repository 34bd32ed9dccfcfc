//! Milliseconds for one frame of a crowded plot, painted on the processor.
//!
//! The scene (invented): 20 curves of 500 points, 60 level lines, 60 filled densities of 400 points with
//! their outlines, a table of 60 rows and panels around them, in a window of 1400 by 900 points.
//! Printed are medians: processor time for laying triangles out (egui, epaint) and for painting them, and
//! wall time for painting with all threads. There is no window, so presenting is not in it.

use eframe::egui::{self, Color32, Mesh, Pos2, Rect, Shape, Stroke, pos2, vec2};
use parabound::gui::Program;
use parabound::gui::fonts::install_fonts;
use parabound::gui::painter::{Canvas, CpuPainter, Offscreen, Picture};
use std::time::Instant;

/// The scene; `densities` can be left out to see what they cost.
struct Scene {
    densities: bool,
}

const PLOT: Rect = Rect { min: Pos2 { x: 210.0, y: 120.0 }, max: Pos2 { x: 1010.0, y: 860.0 } };

fn at(x: f32, y: f32) -> Pos2 {
    pos2(PLOT.left() + x * PLOT.width(), PLOT.bottom() - y * PLOT.height())
}

fn well(x: f32, k: f32) -> f32 {
    let e = 1.0 - (-k * (x - 0.3) * 3.4).exp();
    0.9 * e * e
}

fn density(x: f32, v: usize) -> f32 {
    let v = v as f32;
    let g = (-((x - 0.35 - 0.003 * v) / (0.07 + 0.004 * v)).powi(2)).exp();
    0.018 * g * (1.0 + (3.4 * x * (3.0 + v)).sin())
}

impl Scene {
    fn plot(&self, painter: &egui::Painter) {
        let levels = (0..60).map(|v| {
            let t = (v as f32 + 0.5) / 62.0;
            0.9 * (2.0 * t - t * t)
        });
        for (v, level) in levels.enumerate() {
            if self.densities {
                let xs = || (0..400).map(|i| i as f32 / 399.0);
                let tops: Vec<Pos2> = xs().map(|x| at(x, level + density(x, v))).collect();
                let mut mesh = Mesh::default();
                let fill = Color32::from_rgba_unmultiplied(0x3f, 0xb6, 0xa8, 60);
                for (x, top) in xs().zip(&tops) {
                    mesh.colored_vertex(*top, fill);
                    mesh.colored_vertex(at(x, level), fill);
                }
                for i in (0..2 * 399).step_by(2) {
                    mesh.add_triangle(i, i + 1, i + 2);
                    mesh.add_triangle(i + 1, i + 3, i + 2);
                }
                painter.add(Shape::mesh(mesh));
                painter.add(Shape::line(tops, Stroke::new(1.0, Color32::from_rgb(0x3f, 0xb6, 0xa8))));
            }
            painter.hline(
                PLOT.x_range(),
                at(0.0, level).y,
                Stroke::new(1.0, Color32::from_rgb(0x85, 0x93, 0xa5)),
            );
        }
        for k in 0..20 {
            let points = (0..500).map(|i| i as f32 / 499.0).map(|x| at(x, well(x, 1.2 + 0.02 * k as f32)));
            painter.add(Shape::line(points.collect(), Stroke::new(1.6, Color32::from_rgb(0xf3, 0xf5, 0xf7))));
        }
    }
}

impl Program for Scene {
    fn logic(&mut self, _ctx: &egui::Context) {}

    fn ui(&mut self, ui: &mut egui::Ui) {
        egui::Panel::right("table").default_size(380.0).show(ui, |ui| {
            egui::Grid::new("levels").striped(true).show(ui, |ui| {
                for v in 0..60 {
                    ui.label(format!("v = {v}"));
                    for k in 1..4 {
                        ui.monospace(format!("{:.3} cm⁻¹", 123.456 * (v * k) as f32));
                    }
                    ui.end_row();
                }
            });
        });
        egui::CentralPanel::default().show(ui, |ui| {
            ui.painter().rect(
                PLOT.expand(6.0),
                6.0,
                Color32::from_rgb(0x18, 0x1d, 0x24),
                Stroke::new(1.0, Color32::GRAY),
                egui::StrokeKind::Inside,
            );
            let clipped = ui.painter().with_clip_rect(PLOT);
            self.plot(&clipped);
            clipped.rect_filled(
                Rect::from_min_size(at(0.3, 1.0), vec2(40.0, 740.0)),
                0.0,
                Color32::from_white_alpha(30),
            );
        });
    }
}

fn median_ms(mut times: Vec<f64>) -> f64 {
    times.sort_by(f64::total_cmp);
    times.get(times.len() / 2).copied().unwrap_or(f64::NAN)
}

/// Processor time of this thread in milliseconds where the system tells it (Linux), else the wall's:
/// on a busy machine only the former can be compared.
fn processor_ms() -> f64 {
    static START: std::sync::LazyLock<Instant> = std::sync::LazyLock::new(Instant::now);
    std::fs::read_to_string("/proc/thread-self/schedstat")
        .ok()
        .and_then(|text| text.split_whitespace().next()?.parse::<f64>().ok())
        .map_or_else(|| START.elapsed().as_secs_f64() * 1e3, |ns| ns * 1e-6)
}

fn measure(name: &str, densities: bool) {
    const FRAMES: usize = 60;
    let mut window = Offscreen::new(Canvas::default(), |ctx| {
        install_fonts(ctx);
        Scene { densities }
    });
    for _ in 0..3 {
        window.pass(Vec::new());
    }
    let timed = |f: &mut dyn FnMut()| {
        let start = processor_ms();
        f();
        processor_ms() - start
    };
    let wall = |f: &mut dyn FnMut()| {
        let start = Instant::now();
        f();
        start.elapsed().as_secs_f64() * 1e3
    };
    let mut primitives = Vec::new();
    let layout =
        median_ms((0..FRAMES / 3).map(|_| timed(&mut || primitives = window.pass(Vec::new()))).collect());
    let triangles: usize = primitives
        .iter()
        .map(|p| match &p.primitive {
            egui::epaint::Primitive::Mesh(mesh) => mesh.indices.len() / 3,
            egui::epaint::Primitive::Callback(_) => 0,
        })
        .sum();
    let mut paint = |threads: usize, clock: &dyn Fn(&mut dyn FnMut()) -> f64| {
        window.set_painter_threads(threads);
        median_ms((0..FRAMES).map(|_| clock(&mut || _ = window.paint(&primitives).size_px())).collect())
    };
    let one = paint(1, &timed);
    let all = paint(std::thread::available_parallelism().map_or(1, usize::from), &wall);
    println!(
        "{name}: {triangles} triangles; processor time: layout {layout:.2} ms, paint {one:.2} ms; \
         painting with all threads takes {all:.2} ms"
    );
}

fn main() {
    measure("crowded plot", true);
    measure("no densities", false);
    let mut picture = Picture::default();
    let painter = CpuPainter::new();
    let start = Instant::now();
    for _ in 0..20 {
        picture.reset([1400, 900], [0, 0, 0, 255]);
        painter.paint(&mut picture, 1.0, &[]);
    }
    println!("empty frame: {:.2} ms", start.elapsed().as_secs_f64() * 1e3 / 20.0);
}
