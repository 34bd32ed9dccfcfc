//! Triangles with corners far outside the picture, as a strongly zoomed plot has them: cut to a
//! rectangle that is larger than any picture and small enough for exact whole-number arithmetic.

use super::cpu::{FAR_PX, grid};
use super::triangle::Corner;
use eframe::egui::epaint::Vertex;
use eframe::egui::pos2;

/// A corner as real numbers: x, y (pixels), four colour channels, u, v.
type Point = [f64; 8];

/// The parts of the triangle within reach, as triangles; none if a corner is not a finite number.
///
/// (I. E. Sutherland, G. W. Hodgman, Reentrant polygon clipping, Communications of the ACM 17, 1974.)
pub(super) fn cut(corners: [&Vertex; 3], pixels_per_point: f32) -> Vec<[Corner; 3]> {
    let mut polygon: Vec<Point> = corners.iter().map(|v| point(v, pixels_per_point)).collect();
    if !polygon.iter().all(|p| p[0].is_finite() && p[1].is_finite()) {
        return Vec::new();
    }
    let limit = f64::from(FAR_PX);
    for (axis, sign) in [(0, 1.0), (0, -1.0), (1, 1.0), (1, -1.0)] {
        polygon = cut_side(&polygon, |p| limit - sign * p[axis]);
    }
    let corner = |p: &Point| Corner {
        at: [grid(p[0] as f32), grid(p[1] as f32)],
        colour: [2, 3, 4, 5].map(|i: usize| (p[i] + 0.5) as u8),
        uv: pos2(p[6] as f32, p[7] as f32),
    };
    let Some((first, rest)) = polygon.split_first() else { return Vec::new() };
    rest.windows(2).map(|pair| [corner(first), corner(&pair[0]), corner(&pair[1])]).collect()
}

fn point(v: &Vertex, pixels_per_point: f32) -> Point {
    let scale = f64::from(pixels_per_point);
    let [r, g, b, a] = v.color.to_array().map(f64::from);
    let [u, t] = [v.uv.x, v.uv.y].map(f64::from);
    [f64::from(v.pos.x) * scale, f64::from(v.pos.y) * scale, r, g, b, a, u, t]
}

/// Keeps the side of the polygon where `inside` is not negative.
fn cut_side(polygon: &[Point], inside: impl Fn(&Point) -> f64) -> Vec<Point> {
    let mut kept = Vec::with_capacity(polygon.len() + 1);
    for (i, here) in polygon.iter().enumerate() {
        let next = &polygon[(i + 1) % polygon.len()];
        let (from, to) = (inside(here), inside(next));
        if from >= 0.0 {
            kept.push(*here);
        }
        if (from >= 0.0) != (to >= 0.0) {
            let t = from / (from - to);
            kept.push(std::array::from_fn(|k| here[k] + (next[k] - here[k]) * t));
        }
    }
    kept
}
