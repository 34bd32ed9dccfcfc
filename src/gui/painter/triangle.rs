//! One triangle into one band of rows.
//!
//! Corners lie on a grid of 1/256 pixel, so that edge functions are exact integers: a pixel belongs to
//! exactly one of two triangles sharing an edge (top-left rule), and translucent fills show no seams.
//! (J. Pineda, A parallel algorithm for polygon rasterization, Computer Graphics 22 (4), 1988, for the
//! edge functions; the top-left rule as graphics hardware has it.)

use super::pixel;
use super::texture::Texture;
use eframe::egui::Pos2;

/// Bits of the grid below one pixel.
pub(super) const SUB_BITS: u32 = 8;
/// Grid steps in one pixel.
pub(super) const ONE: i32 = 1 << SUB_BITS;

/// A corner: where (in grid steps), its colour and its place in the texture.
#[derive(Clone, Copy)]
pub(super) struct Corner {
    pub(super) at: [i32; 2],
    pub(super) colour: [u8; 4],
    pub(super) uv: Pos2,
}

/// A rectangle of whole pixels; the ends are not part of it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct PixelRect {
    pub(super) x0: i32,
    pub(super) y0: i32,
    pub(super) x1: i32,
    pub(super) y1: i32,
}

impl PixelRect {
    pub(super) const fn is_empty(&self) -> bool {
        self.x0 >= self.x1 || self.y0 >= self.y1
    }
}

/// Some rows of the picture.
pub(super) struct Band<'a> {
    /// First row.
    pub(super) y0: i32,
    /// Pixels in a row.
    pub(super) width: usize,
    pub(super) pixels: &'a mut [u32],
}

impl Band<'_> {
    /// `count` pixels of row `y` from column `x` on; empty if they are not all inside.
    #[inline]
    pub(super) fn span(&mut self, x: i32, y: i32, count: usize) -> &mut [u32] {
        let start = (y - self.y0) as usize * self.width + x as usize;
        self.pixels.get_mut(start..start + count).unwrap_or_default()
    }
}

/// First pixel whose centre is not before the grid coordinate `at`.
#[inline]
pub(super) const fn first_centre(at: i32) -> i32 {
    (at + (ONE / 2 - 1)) >> SUB_BITS
}

/// An edge function along a row: its value at the first column of the box, and its steps.
/// Not negative means inside.
#[derive(Clone, Copy, Default)]
struct Edge {
    value: i64,
    per_column: i64,
    per_row: i64,
    /// What was taken from the value so that pixels on a right or lower edge count as outside.
    bias: i64,
}

impl Edge {
    fn new(from: [i32; 2], to: [i32; 2], x: i32, y: i32) -> Self {
        let (dx, dy) = (i64::from(to[0] - from[0]), i64::from(to[1] - from[1]));
        let centre = |p: i32| i64::from(p) * i64::from(ONE) + i64::from(ONE / 2);
        let bias = i64::from(!(dy < 0 || (dy == 0 && dx > 0)));
        let value = dx * (centre(y) - i64::from(from[1])) - dy * (centre(x) - i64::from(from[0]));
        Self { value: value - bias, per_column: -dy * i64::from(ONE), per_row: dx * i64::from(ONE), bias }
    }

    /// The columns (counted from the first of the box) of this row that are inside, cut to `columns`.
    #[inline]
    fn cut(&self, reciprocal: f64, columns: (i64, i64)) -> (i64, i64) {
        let (first, end) = columns;
        let step = self.per_column;
        if step == 0 {
            return if self.value < 0 { (end, end) } else { columns };
        }
        let inside = |t: i64| self.value + step * t >= 0;
        if step > 0 {
            if inside(first) {
                return columns;
            }
            if !inside(end - 1) {
                return (end, end);
            }
            let mut t = (-self.value as f64 * reciprocal) as i64;
            while !inside(t) {
                t += 1;
            }
            while inside(t - 1) {
                t -= 1;
            }
            (t, end)
        } else {
            if inside(end - 1) {
                return columns;
            }
            if !inside(first) {
                return (end, end);
            }
            let mut t = (-self.value as f64 * reciprocal) as i64;
            while inside(t) {
                t += 1;
            }
            while !inside(t - 1) {
                t -= 1;
            }
            (first, t)
        }
    }
}

/// What fills a triangle.
enum Fill {
    Flat(u32),
    /// Colours run between the corners; the texture is one colour, already multiplied in.
    Gradient([[u8; 4]; 3]),
    Textured,
}

/// Paints the triangle where it meets both `clip` and the band (`clip` must lie within the band).
pub(super) fn paint(band: &mut Band<'_>, clip: &PixelRect, texture: &Texture, mut corners: [Corner; 3]) {
    let [a, b, c] = corners.map(|corner| corner.at);
    let bounds = PixelRect {
        x0: first_centre(a[0].min(b[0]).min(c[0])).max(clip.x0),
        y0: first_centre(a[1].min(b[1]).min(c[1])).max(clip.y0),
        x1: (first_centre(a[0].max(b[0]).max(c[0]) + 1)).min(clip.x1),
        y1: (first_centre(a[1].max(b[1]).max(c[1]) + 1)).min(clip.y1),
    };
    if bounds.is_empty() {
        return;
    }
    let side = |i: usize, j: usize, axis: usize| i64::from(corners[j].at[axis] - corners[i].at[axis]);
    let mut area = side(0, 1, 0) * side(0, 2, 1) - side(0, 1, 1) * side(0, 2, 0);
    if area == 0 {
        return;
    }
    if area < 0 {
        corners.swap(1, 2);
        area = -area;
    }
    let Some(fill) = choose_fill(texture, &corners) else { return };
    // Edge k lies opposite corner k, so its value is that corner's weight.
    let edge = |k: usize| Edge::new(corners[(k + 1) % 3].at, corners[(k + 2) % 3].at, bounds.x0, bounds.y0);
    let mut edges = [edge(0), edge(1), edge(2)];
    let reciprocals = edges.map(|e| 1.0 / e.per_column as f64);
    let gradient = Interpolation::new(&edges, area);
    let all = (0, i64::from(bounds.x1 - bounds.x0));
    for y in bounds.y0..bounds.y1 {
        let mut columns = all;
        for (e, r) in edges.iter().zip(reciprocals) {
            columns = e.cut(r, columns);
            if columns.0 >= columns.1 {
                break;
            }
        }
        if columns.0 < columns.1 {
            let span = band.span(bounds.x0 + columns.0 as i32, y, (columns.1 - columns.0) as usize);
            match &fill {
                Fill::Flat(colour) => flat_span(span, *colour),
                Fill::Gradient(colours) => gradient_span(span, &gradient, &edges, columns.0, colours),
                Fill::Textured => textured_span(span, &gradient, &edges, columns.0, texture, &corners),
            }
        }
        for e in &mut edges {
            e.value += e.per_row;
        }
    }
}

/// The cheapest way to fill; `None` if nothing would be seen.
fn choose_fill(texture: &Texture, corners: &[Corner; 3]) -> Option<Fill> {
    let [a, b, c] = corners;
    let one_place = a.uv == b.uv && b.uv == c.uv;
    if !one_place {
        return Some(Fill::Textured);
    }
    let texel = texture.sample_flat(a.uv);
    let colours = if texel == [255; 4] {
        [a.colour, b.colour, c.colour]
    } else {
        [a, b, c].map(|corner| pixel::multiply(corner.colour, texel))
    };
    if colours[0] == colours[1] && colours[1] == colours[2] {
        let colour = pixel::pack(colours[0]);
        return (colour != 0).then_some(Fill::Flat(colour));
    }
    Some(Fill::Gradient(colours))
}

/// One colour over a span.
#[inline]
pub(super) fn flat_span(span: &mut [u32], colour: u32) {
    if colour >> 24 == 255 {
        span.fill(colour);
    } else {
        for p in span {
            *p = pixel::over(colour, *p);
        }
    }
}

/// Turns edge values into weights of the corners.
struct Interpolation {
    per_area: f64,
    /// Change of the three weights from one column to the next.
    step: [f64; 3],
}

impl Interpolation {
    fn new(edges: &[Edge; 3], area: i64) -> Self {
        let per_area = 1.0 / area as f64;
        Self { per_area, step: edges.map(|e| e.per_column as f64 * per_area) }
    }

    /// The three weights at a column of the row the edges stand at; they add up to one.
    #[inline]
    fn weights(&self, edges: &[Edge; 3], column: i64) -> [f64; 3] {
        edges.map(|e| (e.value + e.bias + e.per_column * column) as f64 * self.per_area)
    }
}

#[inline]
fn mix(weights: &[f64; 3], values: [f64; 3]) -> f64 {
    weights[0] * values[0] + weights[1] * values[1] + weights[2] * values[2]
}

/// Colours running linearly along a span.
///
/// 16 binary digits after the point: over the widest picture the rounding of the step adds up to less
/// than the half that is left at either end, so a channel can never leave 0 to 255.
#[inline]
fn gradient_span(
    span: &mut [u32],
    gradient: &Interpolation,
    edges: &[Edge; 3],
    column: i64,
    colours: &[[u8; 4]; 3],
) {
    const SCALE: f64 = 65_536.0;
    let weights = gradient.weights(edges, column);
    let channel = |i: usize| [0, 1, 2].map(|k: usize| f64::from(colours[k][i]));
    let mut now: [i32; 4] = std::array::from_fn(|i| (mix(&weights, channel(i)) * SCALE) as i32 + 32_768);
    let step: [i32; 4] = if span.len() > 1 {
        std::array::from_fn(|i| (mix(&gradient.step, channel(i)) * SCALE) as i32)
    } else {
        [0; 4]
    };
    for p in span {
        let source = pixel::pack(now.map(|c| (c >> 16) as u8));
        *p = pixel::over(source, *p);
        for (c, s) in now.iter_mut().zip(step) {
            *c = c.wrapping_add(s);
        }
    }
}

/// A texture, tinted by colours that may run as well.
fn textured_span(
    span: &mut [u32],
    gradient: &Interpolation,
    edges: &[Edge; 3],
    column: i64,
    texture: &Texture,
    corners: &[Corner; 3],
) {
    let [width, height] = texture.size().map(|side| side as f64);
    let weights = gradient.weights(edges, column);
    let us = corners.map(|c| f64::from(c.uv.x) * width);
    let vs = corners.map(|c| f64::from(c.uv.y) * height);
    let (u0, v0) = (mix(&weights, us) as f32, mix(&weights, vs) as f32);
    let (du, dv) = (mix(&gradient.step, us) as f32, mix(&gradient.step, vs) as f32);
    let tint = |i: usize| corners.map(|c| f64::from(c.colour[i]) / 255.0);
    let tint0: [f32; 4] = std::array::from_fn(|i| mix(&weights, tint(i)) as f32);
    let tint_step: [f32; 4] = std::array::from_fn(|i| mix(&gradient.step, tint(i)) as f32);
    for (i, p) in span.iter_mut().enumerate() {
        let t = i as f32;
        let texel = texture.sample(u0 + du * t, v0 + dv * t);
        let source = std::array::from_fn(|i| (texel[i] * (tint0[i] + tint_step[i] * t) + 0.5) as u8);
        *p = pixel::over(pixel::pack(source), *p);
    }
}
