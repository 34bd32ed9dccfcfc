//! The program's window as a picture, with no display, GPU or window system.

use super::{CpuPainter, Picture};
use crate::gui::program::Program;
use eframe::egui;
use std::time::{Duration, Instant};

/// Size and look of a picture.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Canvas {
    /// Width and height in pixels.
    pub size_px: [usize; 2],
    /// Pixels in one point; 2 paints everything twice as large.
    pub pixels_per_point: f32,
    /// Light or dark.
    pub theme: egui::Theme,
    /// Passes after the work is done; sizes need two or three to settle.
    pub passes: usize,
}

impl Default for Canvas {
    fn default() -> Self {
        Self { size_px: [1400, 900], pixels_per_point: 1.0, theme: egui::Theme::Dark, passes: 4 }
    }
}

impl Canvas {
    /// The canvas with a scale that egui can lay out: a finite number from 0.1 to 20.
    fn scale(&self) -> f32 {
        if self.pixels_per_point.is_finite() { self.pixels_per_point.clamp(0.1, 20.0) } else { 1.0 }
    }
}

/// Seconds between two passes; the clock of a picture is not the wall's, so that it is always the same.
const PASS_SECONDS: f64 = 0.25;

/// A window that exists in memory only.
pub struct Offscreen<P> {
    ctx: egui::Context,
    painter: CpuPainter,
    picture: Picture,
    program: P,
    canvas: Canvas,
    pass: u32,
}

impl<P: Program> Offscreen<P> {
    /// Makes the program and a window of this size for it; nothing is painted yet.
    pub fn new(canvas: Canvas, make: impl FnOnce(&egui::Context) -> P) -> Self {
        let ctx = egui::Context::default();
        ctx.set_theme(canvas.theme);
        let program = make(&ctx);
        // The canvas has the last word, whatever the program prefers.
        ctx.set_theme(canvas.theme);
        Self { ctx, painter: CpuPainter::new(), picture: Picture::default(), program, canvas, pass: 0 }
    }

    /// One pass of the program with these events; what it shows is returned as triangles, not painted.
    pub fn pass(&mut self, events: Vec<egui::Event>) -> Vec<egui::ClippedPrimitive> {
        let scale = self.canvas.scale();
        let size = egui::Vec2::from(self.canvas.size_px.map(|side| side as f32)) / scale;
        let mut input = egui::RawInput {
            screen_rect: Some(egui::Rect::from_min_size(egui::Pos2::ZERO, size)),
            time: Some(f64::from(self.pass) * PASS_SECONDS),
            focused: true,
            system_theme: Some(self.canvas.theme),
            events,
            ..Default::default()
        };
        if let Some(viewport) = input.viewports.get_mut(&egui::ViewportId::ROOT) {
            viewport.native_pixels_per_point = Some(scale);
            viewport.inner_rect = input.screen_rect;
        }
        self.pass += 1;
        let program = &mut self.program;
        let mut out = self.ctx.run_ui(input, |ui| {
            program.logic(ui.ctx());
            program.ui(ui);
        });
        self.painter.apply_textures(&mut out.textures_delta);
        let primitives = self.ctx.tessellate(std::mem::take(&mut out.shapes), out.pixels_per_point);
        self.painter.release_textures(&mut out.textures_delta);
        primitives
    }

    /// Paints triangles returned by [`Self::pass`].
    pub fn paint(&mut self, primitives: &[egui::ClippedPrimitive]) -> &Picture {
        self.picture.reset(self.canvas.size_px, [0, 0, 0, 255]);
        self.painter.paint(&mut self.picture, self.ctx.pixels_per_point(), primitives);
        &self.picture
    }

    /// How many threads paint; all there are unless told otherwise.
    pub const fn set_painter_threads(&mut self, threads: usize) {
        self.painter.set_threads(threads);
    }

    /// Runs passes until no work is left (or `patience` is over) and everything has settled, then paints.
    pub fn settle(&mut self, patience: Duration) -> &Picture {
        let end = Instant::now() + patience;
        let mut primitives = self.pass(Vec::new());
        while self.program.is_working() && Instant::now() < end {
            std::thread::sleep(Duration::from_millis(5));
            self.program.logic(&self.ctx);
        }
        for _ in 0..self.canvas.passes {
            primitives = self.pass(Vec::new());
        }
        self.paint(&primitives)
    }

    /// The program inside.
    pub const fn program(&mut self) -> &mut P {
        &mut self.program
    }

    /// The context the program is shown in.
    pub const fn ctx(&self) -> &egui::Context {
        &self.ctx
    }
}

/// Shows the program without any display and returns the picture. Waits up to a minute for running work.
///
/// The same program gives the same picture, bit for bit: the clock stands still while work runs.
pub fn render_offscreen<P: Program>(make: impl FnOnce(&egui::Context) -> P, canvas: Canvas) -> Picture {
    let mut window = Offscreen::new(canvas, make);
    window.settle(Duration::from_secs(60));
    window.picture
}
