//! The painter, by picture: a small sheet with everything a window is made of.
//!
//! `UPDATE_SNAPSHOTS=1` writes the pictures anew; look at them before they are kept.

use eframe::egui::{self, Color32, CornerRadius, Rect, Shape, Stroke, StrokeKind, Vec2, pos2, vec2};
use egui_kittest::{Harness, SnapshotOptions, image_snapshot_options};
use parabound::gui::Program;
use parabound::gui::fonts::{install_fonts, semibold};
use parabound::gui::painter::{Canvas, Picture, render_offscreen};
use parabound_gui_tests::{CpuRenderer, Shown, to_image};

/// Text in each face, lines, fills, rings, a dashed curve, a scaled texture, widgets.
struct Sheet {
    texture: Option<egui::TextureHandle>,
    value: f64,
}

impl Sheet {
    fn new(ctx: &egui::Context) -> Self {
        install_fonts(ctx);
        Self { texture: None, value: 0.044 }
    }

    fn drawing(&mut self, ui: &egui::Ui) {
        let painter = ui.painter();
        let ink = ui.visuals().strong_text_color();
        let curve: Vec<_> = (0..=60)
            .map(|i| i as f32 / 60.0)
            .map(|t| {
                pos2(190.0 + 140.0 * t, 150.0 - 110.0 * (1.0 - (-5.0 * (t - 0.25)).exp()).powi(2).min(1.0))
            })
            .collect();
        let parabola: Vec<_> =
            curve.iter().map(|p| pos2(p.x, 150.0 - (p.x - 225.0).powi(2) / 12.0)).collect();
        let plot = painter.with_clip_rect(Rect::from_min_max(pos2(190.0, 30.0), pos2(330.0, 155.0)));
        plot.rect_filled(
            Rect::from_min_max(pos2(215.0, 30.0), pos2(240.0, 155.0)),
            0.0,
            Color32::from_rgba_unmultiplied(63, 182, 168, 70),
        );
        plot.add(Shape::line(curve.clone(), Stroke::new(2.0, ink)));
        plot.extend(Shape::dashed_line(
            &parabola,
            Stroke::new(1.5, Color32::from_rgb(242, 166, 90)),
            7.0,
            4.0,
        ));
        for p in curve.iter().step_by(9) {
            plot.circle(*p, 3.5, ui.visuals().panel_fill, Stroke::new(1.2, ink));
        }
        plot.circle_filled(pos2(300.0, 110.0), 14.0, Color32::from_rgba_unmultiplied(233, 196, 106, 150));
        painter.rect(
            Rect::from_min_size(pos2(290.0, 120.0), vec2(60.0, 34.0)),
            CornerRadius::same(6),
            Color32::from_rgba_unmultiplied(105, 179, 242, 90),
            Stroke::new(1.0, ink),
            StrokeKind::Inside,
        );
        let texture = self.texture.get_or_insert_with(|| {
            let pixels =
                (0..16).map(|i| Color32::from_rgb(i * 16, 255 - i * 16, if i % 2 == 0 { 200 } else { 40 }));
            let image = egui::ColorImage::new([4, 4], pixels.collect());
            ui.ctx().load_texture("checker", image, egui::TextureOptions::LINEAR)
        });
        let uv = Rect::from_min_max(pos2(0.0, 0.0), pos2(1.0, 1.0));
        painter.image(
            texture.id(),
            Rect::from_min_size(pos2(12.0, 118.0), vec2(50.0, 38.0)),
            uv,
            Color32::WHITE,
        );
    }
}

impl Program for Sheet {
    fn logic(&mut self, _ctx: &egui::Context) {}

    fn ui(&mut self, ui: &mut egui::Ui) {
        egui::CentralPanel::default().show(ui, |ui| {
            ui.label(egui::RichText::new("The parabola holds").family(semibold()).size(14.5));
            ui.label("ωₑxₑ → 22.76 cm⁻¹ Å");
            ui.monospace("1387.90(9) ±½ ⟨µ⟩");
            ui.horizontal(|ui| {
                let name = ui.label("Tolerance").id;
                ui.add(egui::DragValue::new(&mut self.value)).labelled_by(name);
            });
            self.drawing(ui);
        });
    }
}

const SIZE: [usize; 2] = [360, 165];

fn options() -> SnapshotOptions {
    SnapshotOptions::new().output_path(concat!(env!("CARGO_MANIFEST_DIR"), "/pictures"))
}

fn offscreen(theme: egui::Theme, pixels_per_point: f32) -> Picture {
    let size_px = SIZE.map(|side| (side as f32 * pixels_per_point) as usize);
    render_offscreen(Sheet::new, Canvas { size_px, pixels_per_point, theme, passes: 3 })
}

#[test]
fn the_sheet_looks_as_it_should() {
    for (theme, scale, name) in [
        (egui::Theme::Dark, 1.0, "sheet_dark"),
        (egui::Theme::Light, 1.0, "sheet_light"),
        (egui::Theme::Light, 2.0, "sheet_large"),
    ] {
        let image = to_image(&offscreen(theme, scale)).expect("a picture");
        image_snapshot_options(&image, name, &options());
    }
}

#[test]
fn the_same_sheet_is_the_same_bits() {
    assert!(offscreen(egui::Theme::Dark, 1.0) == offscreen(egui::Theme::Dark, 1.0));
    assert!(offscreen(egui::Theme::Dark, 1.0) != offscreen(egui::Theme::Light, 1.0));
}

/// The harness of the window tests and the offscreen window show the same.
#[test]
fn harness_and_offscreen_agree() {
    let mut harness = Harness::builder()
        .with_size(Vec2::from(SIZE.map(|side| side as f32)))
        .with_theme(egui::Theme::Dark)
        .with_render_cursor(false)
        .renderer(CpuRenderer::default())
        .build_eframe(|cc| Shown(Sheet::new(&cc.egui_ctx)));
    harness.run();
    let image = harness.render().expect("a picture");
    image_snapshot_options(&image, "sheet_dark", &options());
}

#[test]
fn odd_sizes_and_scales_are_painted_too() {
    for (size_px, pixels_per_point) in [
        ([0, 0], 1.0),
        ([1, 1], 1.0),
        ([7, 300], 3.7),
        ([50, 50], f32::NAN),
        ([64, 64], 1e9),
        ([64, 64], -2.0),
    ] {
        let picture = render_offscreen(
            Sheet::new,
            Canvas { size_px, pixels_per_point, theme: egui::Theme::Dark, passes: 1 },
        );
        assert_eq!(picture.size_px(), size_px);
    }
}
