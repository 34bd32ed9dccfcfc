//! Pictures of a test's window, painted by the program's own painter: no GPU, no display.

use eframe::egui;
use egui_kittest::TestRenderer;
use parabound::gui::painter::{CpuPainter, Picture};

/// Hand it to a harness: `Harness::builder().renderer(CpuRenderer::default())`.
#[derive(Default)]
pub struct CpuRenderer {
    painter: CpuPainter,
    picture: Picture,
}

impl TestRenderer for CpuRenderer {
    fn handle_delta(&mut self, delta: &mut egui::TexturesDelta) {
        self.painter.apply_textures(delta);
        self.painter.release_textures(delta);
    }

    fn render(&mut self, ctx: &egui::Context, output: &egui::FullOutput) -> Result<image::RgbaImage, String> {
        let scale = output.pixels_per_point;
        let size = (ctx.content_rect().size() * scale).round();
        self.picture.reset([size.x as usize, size.y as usize], [0, 0, 0, 255]);
        self.painter.paint(&mut self.picture, scale, &ctx.tessellate(output.shapes.clone(), scale));
        to_image(&self.picture)
    }
}

/// The picture in the form the comparison wants.
///
/// # Errors
/// None of a picture that has as many pixels as its size says, which is always so.
pub fn to_image(picture: &Picture) -> Result<image::RgbaImage, String> {
    let [width, height] = picture.size_px().map(|side| side as u32);
    image::RgbaImage::from_raw(width, height, picture.to_rgba8())
        .ok_or_else(|| "pixels are missing".to_owned())
}
