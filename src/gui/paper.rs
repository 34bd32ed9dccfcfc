//! Pictures for paper as PNG: the drawing turned into egui's shapes and painted in memory.

use super::fonts::install_fonts;
use super::painter::{Canvas, MAX_SIDE_PX, Picture, render_offscreen};
use super::program::Program;
use crate::figure::drawing::{Anchor, Drawing, Item, Rgb, Stroke};
use eframe::egui::{self, Color32, Mesh, Pos2, Shape};

/// Points in an inch.
const PT_PER_INCH: f64 = 72.0;

/// The picture as PNG.
///
/// # Errors
/// A sentence when it would be larger than the painter can hold, or could not be encoded.
pub fn drawing_to_png(drawing: &Drawing, dots_per_inch: f64) -> Result<Vec<u8>, String> {
    let picture = painted(drawing, dots_per_inch)?;
    picture.to_png().map_err(|e| format!("the picture could not be encoded ({e})"))
}

/// The picture as pixels, for the clipboard.
///
/// # Errors
/// A sentence when it would be larger than the painter can hold.
pub fn drawing_to_image(drawing: &Drawing, dots_per_inch: f64) -> Result<egui::ColorImage, String> {
    let picture = painted(drawing, dots_per_inch)?;
    Ok(egui::ColorImage::from_rgba_unmultiplied(picture.size_px(), &picture.to_rgba8()))
}

fn painted(drawing: &Drawing, dots_per_inch: f64) -> Result<Picture, String> {
    let scale = dots_per_inch / PT_PER_INCH;
    let size_px = drawing.size_pt.map(|side| (side * scale).round().max(1.0) as usize);
    if size_px.iter().any(|side| *side > MAX_SIDE_PX) {
        return Err(format!(
            "{} x {} pixels are more than the painter holds ({MAX_SIDE_PX} a side); lower --dpi or --width-mm",
            size_px[0], size_px[1]
        ));
    }
    let canvas =
        Canvas { size_px, pixels_per_point: scale as f32, theme: egui::Theme::Light, ..Canvas::default() };
    let make = |ctx: &egui::Context| {
        install_fonts(ctx);
        Sheet { drawing: drawing.clone() }
    };
    Ok(render_offscreen(make, canvas))
}

/// A program that shows one drawing.
struct Sheet {
    drawing: Drawing,
}

impl Program for Sheet {
    fn logic(&mut self, _ctx: &egui::Context) {}

    fn ui(&mut self, ui: &mut egui::Ui) {
        let painter = ui.ctx().layer_painter(egui::LayerId::background());
        painter.rect_filled(ui.ctx().content_rect(), 0.0, colour(self.drawing.ground, 1.0));
        for item in &self.drawing.items {
            paint(&painter, item, egui::Vec2::ZERO);
        }
    }
}

/// Shows a drawing in a panel, on the panel's own ground.
pub(super) fn drawing_ui(ui: &mut egui::Ui, drawing: &Drawing, sense: egui::Sense) -> egui::Response {
    let size = egui::vec2(drawing.size_pt[0] as f32, drawing.size_pt[1] as f32);
    let (rect, response) = ui.allocate_exact_size(size, sense);
    if ui.is_rect_visible(rect) {
        let painter = ui.painter_at(rect);
        for item in &drawing.items {
            paint(&painter, item, rect.min.to_vec2());
        }
    }
    response
}

fn colour(Rgb(r, g, b): Rgb, opacity: f64) -> Color32 {
    Color32::from_rgb(r, g, b).gamma_multiply(opacity as f32)
}

fn place([x, y]: [f64; 2]) -> Pos2 {
    egui::pos2(x as f32, y as f32)
}

fn pen(stroke: &Stroke, opacity: f64) -> egui::Stroke {
    egui::Stroke::new(stroke.width_pt as f32, colour(stroke.colour, opacity))
}

fn paint(painter: &egui::Painter, item: &Item, offset: egui::Vec2) {
    let place = |p: [f64; 2]| place(p) + offset;
    match item {
        Item::Open(_) | Item::Close => {}
        Item::Path { points, closed, stroke, fill, opacity } => {
            if let Some(fill) = fill {
                let mut mesh = filled(points, colour(*fill, *opacity));
                mesh.translate(offset);
                painter.add(Shape::mesh(mesh));
            }
            let Some(stroke) = stroke else { return };
            let mut corners: Vec<Pos2> = points.iter().map(|p| place(*p)).collect();
            match stroke.dashes_pt.as_slice() {
                [on, off] => {
                    if *closed {
                        corners.extend(corners.first().copied());
                    }
                    let dashes = Shape::dashed_line(&corners, pen(stroke, *opacity), *on as f32, *off as f32);
                    painter.extend(dashes);
                }
                _ if *closed => {
                    painter.add(Shape::closed_line(corners, pen(stroke, *opacity)));
                }
                _ => {
                    painter.add(Shape::line(corners, pen(stroke, *opacity)));
                }
            }
        }
        Item::Circle { centre, radius_pt, stroke, fill, opacity } => {
            painter.circle(place(*centre), *radius_pt as f32, colour(*fill, *opacity), pen(stroke, *opacity));
        }
        Item::Text { at, text, size_pt, colour: ink, anchor, upwards } => {
            let ink = colour(*ink, 1.0);
            let font = egui::FontId::proportional(*size_pt as f32);
            let galley = painter.layout_no_wrap(text.clone(), font, ink);
            let base = galley.rows.first().map_or(0.0, |row| {
                row.pos.y + row.row.glyphs.first().map_or(galley.size().y, |glyph| glyph.pos.y)
            });
            let back = match anchor {
                Anchor::Start => 0.0,
                Anchor::Middle => 0.5 * galley.size().x,
                Anchor::End => galley.size().x,
            };
            let at = place(*at);
            let shape = if *upwards {
                egui::epaint::TextShape::new(at + egui::vec2(-base, back), galley, ink)
                    .with_angle(-std::f32::consts::FRAC_PI_2)
            } else {
                egui::epaint::TextShape::new(at - egui::vec2(back, base), galley, ink)
            };
            painter.add(shape);
        }
    }
}

/// A polygon as trapezoids between neighbouring abscissas of its corners: egui fills convex ones only.
fn filled(points: &[[f64; 2]], ink: Color32) -> Mesh {
    let mut mesh = Mesh::default();
    let mut cuts: Vec<f64> = points.iter().map(|p| p[0]).collect();
    cuts.sort_by(f64::total_cmp);
    cuts.dedup();
    let edges = (0..points.len()).map(|i| (points[i], points[(i + 1) % points.len()]));
    let edges: Vec<([f64; 2], [f64; 2])> =
        edges.filter(|(a, b)| a[0] != b[0]).map(|(a, b)| if a[0] < b[0] { (a, b) } else { (b, a) }).collect();
    for cut in cuts.windows(2) {
        let at = |(a, b): &([f64; 2], [f64; 2]), x: f64| a[1] + (b[1] - a[1]) * (x - a[0]) / (b[0] - a[0]);
        let mut crossed: Vec<[f64; 2]> = edges
            .iter()
            .filter(|(a, b)| a[0] <= cut[0] && b[0] >= cut[1])
            .map(|edge| [at(edge, cut[0]), at(edge, cut[1])])
            .collect();
        crossed.sort_by(|a, b| (a[0] + a[1]).total_cmp(&(b[0] + b[1])));
        for pair in crossed.chunks_exact(2) {
            let first = mesh.vertices.len() as u32;
            for corner in
                [[cut[0], pair[0][0]], [cut[1], pair[0][1]], [cut[1], pair[1][1]], [cut[0], pair[1][0]]]
            {
                mesh.colored_vertex(place(corner), ink);
            }
            mesh.add_triangle(first, first + 1, first + 2);
            mesh.add_triangle(first, first + 2, first + 3);
        }
    }
    mesh
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The area of the trapezoids is that of the polygon (an L: not convex).
    #[test]
    fn a_polygon_keeps_its_area() {
        let l = [[0.0, 0.0], [4.0, 0.0], [4.0, 1.0], [1.0, 1.0], [1.0, 3.0], [0.0, 3.0]];
        let mesh = filled(&l, Color32::RED);
        let at = |i: u32| mesh.vertices[i as usize].pos;
        let area: f32 = mesh
            .indices
            .chunks_exact(3)
            .map(|t| 0.5 * (at(t[1]) - at(t[0])).rot90().dot(at(t[2]) - at(t[0])).abs())
            .sum();
        assert!((area - 6.0).abs() < 1e-5, "{area}");
    }

    /// A PNG picture has the size asked for and is not blank.
    #[test]
    fn a_picture_is_painted() {
        let drawing = Drawing {
            size_pt: [72.0, 36.0],
            about: String::new(),
            ground: Rgb(255, 255, 255),
            items: vec![Item::Text {
                at: [10.0, 20.0],
                text: "cm⁻¹".to_owned(),
                size_pt: 12.0,
                colour: Rgb(0, 0, 0),
                anchor: Anchor::Start,
                upwards: false,
            }],
        };
        let png = drawing_to_png(&drawing, 144.0).unwrap();
        let picture = image::load_from_memory(&png).unwrap().to_rgb8();
        assert_eq!(picture.dimensions(), (144, 72));
        let dark = picture.pixels().filter(|p| p.0[0] < 128).count();
        assert!((20..2000).contains(&dark), "{dark} dark pixels");
        assert!(drawing_to_png(&drawing, 1e6).is_err());
    }
}
