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

    /// The weight of the corner opposite, at a column of this row, times the triangle's area.
    #[inline]
    fn weight(&self, column: i64) -> f64 {
        (self.value + self.bias + self.per_column * column) as f64
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

/// A texture, with the colour at its origin looked up: egui's untextured shapes all point there.
pub(super) struct Fabric<'a> {
    pub(super) texture: &'a Texture,
    origin: [u8; 4],
}

impl<'a> Fabric<'a> {
    pub(super) fn new(texture: &'a Texture) -> Self {
        Self { texture, origin: texture.sample_flat(Pos2::ZERO) }
    }

    #[inline]
    pub(super) fn at(&self, uv: Pos2) -> [u8; 4] {
        if uv == Pos2::ZERO { self.origin } else { self.texture.sample_flat(uv) }
    }
}

/// What fills a triangle.
enum Fill {
    Flat(u32),
    Gradient(Gradient),
    Textured(Interpolation),
}

/// The pixels that may belong to the triangle with these corners, within `clip`.
#[inline]
pub(super) fn bounds(at: &[[i32; 2]; 3], clip: &PixelRect) -> PixelRect {
    let [a, b, c] = at;
    PixelRect {
        x0: first_centre(a[0].min(b[0]).min(c[0])).max(clip.x0),
        y0: first_centre(a[1].min(b[1]).min(c[1])).max(clip.y0),
        x1: first_centre(a[0].max(b[0]).max(c[0]) + 1).min(clip.x1),
        y1: first_centre(a[1].max(b[1]).max(c[1]) + 1).min(clip.y1),
    }
}

/// Paints the triangle within its [`bounds`], which must lie in the band and must not be empty.
pub(super) fn paint(band: &mut Band<'_>, bounds: &PixelRect, fabric: &Fabric<'_>, mut corners: [Corner; 3]) {
    let side = |i: usize, j: usize, axis: usize| i64::from(corners[j].at[axis] - corners[i].at[axis]);
    let mut area = side(0, 1, 0) * side(0, 2, 1) - side(0, 1, 1) * side(0, 2, 0);
    if area == 0 {
        return;
    }
    if area < 0 {
        corners.swap(1, 2);
        area = -area;
    }
    // Edge k lies opposite corner k, so its value is that corner's weight.
    let edge = |k: usize| Edge::new(corners[(k + 1) % 3].at, corners[(k + 2) % 3].at, bounds.x0, bounds.y0);
    let mut edges = [edge(0), edge(1), edge(2)];
    let Some(fill) = choose_fill(fabric, &corners, &edges, area) else { return };
    let width = i64::from(bounds.x1 - bounds.x0);
    // A narrow triangle is searched pixel by pixel, which costs less than three divisions.
    let reciprocals = if width > NARROW { edges.map(|e| 1.0 / e.per_column as f64) } else { [0.0; 3] };
    for y in bounds.y0..bounds.y1 {
        let (first, end) =
            if width > NARROW { cut(&edges, reciprocals, width) } else { search(&edges, width) };
        if first < end {
            let span = band.span(bounds.x0 + first as i32, y, (end - first) as usize);
            match &fill {
                Fill::Flat(colour) => flat_span(span, *colour),
                Fill::Gradient(gradient) => gradient.paint(span, &edges, first),
                Fill::Textured(way) => textured_span(span, way, &edges, first, fabric.texture, &corners),
            }
        }
        for e in &mut edges {
            e.value += e.per_row;
        }
    }
}

/// Up to this many columns are searched one by one.
const NARROW: i64 = 6;

/// The columns inside all three edges in this row, for a wide triangle.
#[inline]
fn cut(edges: &[Edge; 3], reciprocals: [f64; 3], width: i64) -> (i64, i64) {
    let mut columns = (0, width);
    for (e, r) in edges.iter().zip(reciprocals) {
        columns = e.cut(r, columns);
        if columns.0 >= columns.1 {
            break;
        }
    }
    columns
}

/// The same for a narrow one.
#[inline]
fn search(edges: &[Edge; 3], width: i64) -> (i64, i64) {
    let [mut a, mut b, mut c] = edges.map(|e| e.value);
    let mut columns = (width, width);
    for t in 0..width {
        // The sign of a number is its highest digit: negative if any of the three is.
        let inside = (a | b | c) >= 0;
        if inside && columns.0 == width {
            columns.0 = t;
        } else if !inside && columns.0 < width {
            columns.1 = t;
            break;
        }
        a += edges[0].per_column;
        b += edges[1].per_column;
        c += edges[2].per_column;
    }
    columns
}

/// The cheapest way to fill; `None` if nothing would be seen.
#[inline]
fn choose_fill(fabric: &Fabric<'_>, corners: &[Corner; 3], edges: &[Edge; 3], area: i64) -> Option<Fill> {
    let [a, b, c] = corners;
    if a.uv != b.uv || b.uv != c.uv {
        return Some(Fill::Textured(Interpolation::new(edges, area)));
    }
    let texel = fabric.at(a.uv);
    let colours = if texel == [255; 4] {
        [a.colour, b.colour, c.colour]
    } else {
        [a, b, c].map(|corner| pixel::multiply(corner.colour, texel))
    };
    if colours[0] == colours[1] && colours[1] == colours[2] {
        let colour = pixel::pack(colours[0]);
        return (colour != 0).then_some(Fill::Flat(colour));
    }
    Some(Fill::Gradient(Gradient::new(edges, area, &colours)))
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
        edges.map(|e| e.weight(column) * self.per_area)
    }
}

#[inline]
fn mix(weights: &[f64; 3], values: [f64; 3]) -> f64 {
    weights[0] * values[0] + weights[1] * values[1] + weights[2] * values[2]
}

/// Colours running linearly between the corners; the texture is one colour, already multiplied in.
///
/// Channels are kept with 16 binary digits after the point: over the widest picture the rounding of the
/// step adds up to less than the half that is left at either end, so none can leave 0 to 255.
struct Gradient {
    /// Channels of each corner, divided by the triangle's area.
    corners: [[f64; 4]; 3],
    /// Change of the channels from one column to the next.
    step: [i32; 4],
}

impl Gradient {
    #[inline]
    fn new(edges: &[Edge; 3], area: i64, colours: &[[u8; 4]; 3]) -> Self {
        let scale = 65_536.0 / area as f64;
        let corners = colours.map(|colour| colour.map(|c| f64::from(c) * scale));
        let slope = edges.map(|e| e.per_column as f64);
        let step = std::array::from_fn(|i| {
            (slope[0] * corners[0][i] + slope[1] * corners[1][i] + slope[2] * corners[2][i]) as i32
        });
        Self { corners, step }
    }

    #[inline]
    fn paint(&self, span: &mut [u32], edges: &[Edge; 3], column: i64) {
        let w = edges.map(|e| e.weight(column));
        let [a, b, c] = &self.corners;
        let mut now: [i32; 4] =
            std::array::from_fn(|i| (w[0] * a[i] + w[1] * b[i] + w[2] * c[i]) as i32 + 32_768);
        for p in span {
            let source = pixel::pack(now.map(|c| (c >> 16) as u8));
            *p = pixel::over(source, *p);
            for (c, s) in now.iter_mut().zip(self.step) {
                *c = c.wrapping_add(s);
            }
        }
    }
}

/// A texture, tinted by colours that may run as well.
fn textured_span(
    span: &mut [u32],
    way: &Interpolation,
    edges: &[Edge; 3],
    column: i64,
    texture: &Texture,
    corners: &[Corner; 3],
) {
    let [width, height] = texture.size().map(|side| side as f64);
    let weights = way.weights(edges, column);
    let us = corners.map(|c| f64::from(c.uv.x) * width);
    let vs = corners.map(|c| f64::from(c.uv.y) * height);
    let (u0, v0) = (mix(&weights, us) as f32, mix(&weights, vs) as f32);
    let (du, dv) = (mix(&way.step, us) as f32, mix(&way.step, vs) as f32);
    let tint = |i: usize| corners.map(|c| f64::from(c.colour[i]) / 255.0);
    let tint0: [f32; 4] = std::array::from_fn(|i| mix(&weights, tint(i)) as f32);
    let tint_step: [f32; 4] = std::array::from_fn(|i| mix(&way.step, tint(i)) as f32);
    for (i, p) in span.iter_mut().enumerate() {
        let t = i as f32;
        let texel = texture.sample(u0 + du * t, v0 + dv * t);
        let source = std::array::from_fn(|i| (texel[i] * (tint0[i] + tint_step[i] * t) + 0.5) as u8);
        *p = pixel::over(pixel::pack(source), *p);
    }
}
