//! What a window shows: the one thing every way of painting asks for.

use eframe::egui;

/// A program that egui can show: in a window on the GPU, in a window painted on the processor, in a
/// picture without any display, and in tests.
pub trait Program {
    /// What has to happen whether or not anything is seen: answers of workers, shortcuts, commands.
    /// Called before each [`Self::ui`], and alone while the window is hidden.
    fn logic(&mut self, ctx: &egui::Context);

    /// Shows everything.
    fn ui(&mut self, ui: &mut egui::Ui);

    /// Whether work that will change what is shown still runs beside the window. A picture without a
    /// display waits for it.
    fn is_working(&self) -> bool {
        false
    }

    /// The window is about to close for good: the last chance to save.
    fn on_exit(&mut self) {}
}

impl<P: Program + ?Sized> Program for Box<P> {
    fn logic(&mut self, ctx: &egui::Context) {
        (**self).logic(ctx);
    }

    fn ui(&mut self, ui: &mut egui::Ui) {
        (**self).ui(ui);
    }

    fn is_working(&self) -> bool {
        (**self).is_working()
    }

    fn on_exit(&mut self) {
        (**self).on_exit();
    }
}
