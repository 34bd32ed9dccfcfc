//! What the window tests share.

mod cpu_renderer;

pub use cpu_renderer::{CpuRenderer, to_image};

use eframe::egui;
use parabound::gui::Program;

/// A program as the harness wants it: `Harness::builder().build_eframe(|cc| Shown(App::new(..)))`.
pub struct Shown<P>(pub P);

impl<P: Program> eframe::App for Shown<P> {
    fn logic(&mut self, ctx: &egui::Context, _frame: &mut eframe::Frame) {
        self.0.logic(ctx);
    }

    fn ui(&mut self, ui: &mut egui::Ui, _frame: &mut eframe::Frame) {
        self.0.ui(ui);
    }
}
