//! The painter: a frame's meshes, cut into bands of rows that threads take in turn.

use super::picture::Picture;
use super::texture::{self, Texture, TextureStore};
use super::triangle::{self, Band, Corner, Fabric, ONE, PixelRect, first_centre, flat_span};
use super::{far, pixel};
use eframe::egui::epaint::{ClippedPrimitive, Mesh, Primitive, Vertex};
use eframe::egui::{Rect, TextureId, TexturesDelta};
use std::sync::Mutex;

/// Rows one thread paints before it takes the next band.
const BAND_ROWS: usize = 48;
/// Triangles whose rows are bounded together, to pass over those that miss a band.
const GROUP: usize = 32;
/// Corners farther out than this many pixels are cut off before painting.
pub(super) const FAR_PX: f32 = 32_000.0;

/// Paints egui's output into a [`Picture`].
///
/// Colours are multiplied by alpha and blended in gamma space, exactly as egui's shaders do. The result
/// does not depend on the number of threads.
pub struct CpuPainter {
    textures: TextureStore,
    /// Textures to forget before the next ones come.
    unused: Vec<TextureId>,
    threads: usize,
}

impl Default for CpuPainter {
    fn default() -> Self {
        Self::new()
    }
}

impl CpuPainter {
    /// A painter that uses the machine's processors, eight at most.
    #[must_use]
    pub fn new() -> Self {
        Self::with_threads(std::thread::available_parallelism().map_or(1, usize::from).min(8))
    }

    /// A painter that uses this many threads (at least one).
    #[must_use]
    pub fn with_threads(threads: usize) -> Self {
        Self { textures: TextureStore::default(), unused: Vec::new(), threads: threads.max(1) }
    }

    /// Changes the number of threads (at least one); the picture stays the same.
    pub const fn set_threads(&mut self, threads: usize) {
        self.threads = if threads == 0 { 1 } else { threads };
    }

    /// Takes over new and changed textures. Call before [`Self::paint`].
    pub fn apply_textures(&mut self, delta: &mut TexturesDelta) {
        for id in self.unused.drain(..) {
            self.textures.remove(id);
        }
        self.textures.apply(delta);
    }

    /// Notes which textures are no longer used. They are forgotten when the next ones come, so what was
    /// laid out together with this list can still be painted.
    pub fn release_textures(&mut self, delta: &mut TexturesDelta) {
        self.unused.extend(delta.free.drain());
    }

    /// Paints over what the picture shows. Corners that are not finite numbers are left out; a paint
    /// callback (which needs a GPU) is passed over.
    pub fn paint(&self, picture: &mut Picture, pixels_per_point: f32, primitives: &[ClippedPrimitive]) {
        let [width, height] = picture.size_px();
        if width == 0 || height == 0 || !pixels_per_point.is_finite() || pixels_per_point <= 0.0 {
            return;
        }
        let whole = PixelRect { x0: 0, y0: 0, x1: width as i32, y1: height as i32 };
        let meshes: Vec<Prepared<'_>> = primitives
            .iter()
            .filter_map(|p| match &p.primitive {
                Primitive::Mesh(mesh) => {
                    let texture = self.textures.get(mesh.texture_id)?;
                    Prepared::new(
                        mesh,
                        texture,
                        pixels_per_point,
                        clip_px(p.clip_rect, pixels_per_point, &whole),
                    )
                }
                Primitive::Callback(_) => None,
            })
            .collect();
        let bands = picture.pixels_mut().chunks_mut(BAND_ROWS * width).enumerate();
        let paint_band = |(i, pixels): (usize, &mut [u32])| {
            let mut band = Band { y0: (i * BAND_ROWS) as i32, width, pixels };
            for mesh in &meshes {
                mesh.paint(&mut band);
            }
        };
        if self.threads == 1 {
            bands.for_each(paint_band);
            return;
        }
        let bands = Mutex::new(bands);
        let work = || {
            // The lock is held while a band is taken, not while it is painted.
            while let Some(band) = bands.lock().ok().and_then(|mut b| b.next()) {
                paint_band(band);
            }
        };
        std::thread::scope(|scope| {
            for _ in 1..self.threads {
                scope.spawn(work);
            }
            work();
        });
    }
}

/// A clip rectangle in whole pixels, rounded as egui's GPU painters round it.
fn clip_px(clip: Rect, pixels_per_point: f32, whole: &PixelRect) -> PixelRect {
    let px = |at: f32, end: i32| ((at * pixels_per_point).round() as i32).clamp(0, end);
    PixelRect {
        x0: px(clip.min.x, whole.x1),
        y0: px(clip.min.y, whole.y1),
        x1: px(clip.max.x, whole.x1),
        y1: px(clip.max.y, whole.y1),
    }
}

/// A mesh ready for painting: corners on the grid, and the rows its triangles reach, group by group.
struct Prepared<'a> {
    mesh: &'a Mesh,
    fabric: Fabric<'a>,
    clip: PixelRect,
    pixels_per_point: f32,
    /// Grid positions; [`OUTSIDE`] for corners that need the long way.
    corners: Vec<[i32; 2]>,
    /// First and last row for each [`GROUP`] of triangles.
    rows: Vec<(i32, i32)>,
}

/// Marks a corner that is far away or not a finite number.
const OUTSIDE: [i32; 2] = [i32::MAX; 2];

impl<'a> Prepared<'a> {
    fn new(mesh: &'a Mesh, texture: &'a Texture, pixels_per_point: f32, clip: PixelRect) -> Option<Self> {
        if clip.is_empty() || mesh.indices.is_empty() {
            return None;
        }
        let corners: Vec<[i32; 2]> = mesh.vertices.iter().map(|v| on_grid(v, pixels_per_point)).collect();
        let rows = mesh
            .indices
            .chunks(3 * GROUP)
            .map(|group| {
                let mut rows = (i32::MAX, i32::MIN);
                for &i in group {
                    let [_, y] = corners.get(i as usize).copied().unwrap_or(OUTSIDE);
                    if y == i32::MAX {
                        return (i32::MIN, i32::MAX);
                    }
                    rows = (rows.0.min(y), rows.1.max(y));
                }
                (first_centre(rows.0), first_centre(rows.1))
            })
            .collect();
        Some(Self { mesh, fabric: Fabric::new(texture), clip, pixels_per_point, corners, rows })
    }

    fn paint(&self, band: &mut Band<'_>) {
        let rows = (band.pixels.len() / band.width) as i32;
        let clip =
            PixelRect { y0: self.clip.y0.max(band.y0), y1: self.clip.y1.min(band.y0 + rows), ..self.clip };
        if clip.is_empty() {
            return;
        }
        for (group, &(first, last)) in self.mesh.indices.chunks(3 * GROUP).zip(&self.rows) {
            if first < clip.y1 && last >= clip.y0 {
                self.paint_group(band, &clip, group);
            }
        }
    }

    fn paint_group(&self, band: &mut Band<'_>, clip: &PixelRect, mut indices: &[u32]) {
        loop {
            if let &[a, b, c, d, e, f, ref rest @ ..] = indices
                && (d, e) == (c, b)
                && self.paint_glyph(band, clip, [a, b, c, f])
            {
                indices = rest;
            } else if let &[a, b, c, ref rest @ ..] = indices {
                self.paint_triangle(band, clip, [a, b, c]);
                indices = rest;
            } else {
                return;
            }
        }
    }

    fn paint_triangle(&self, band: &mut Band<'_>, clip: &PixelRect, indices: [u32; 3]) {
        let [Some(&a), Some(&b), Some(&c)] = indices.map(|i| self.corners.get(i as usize)) else { return };
        if a == OUTSIDE || b == OUTSIDE || c == OUTSIDE {
            self.paint_far_triangle(band, clip, indices);
            return;
        }
        let bounds = triangle::bounds(&[a, b, c], clip);
        if bounds.is_empty() {
            return;
        }
        if let [Some(a), Some(b), Some(c)] = indices.map(|i| self.corner(i)) {
            triangle::paint(band, &bounds, &self.fabric, [a, b, c]);
        }
    }

    #[cold]
    fn paint_far_triangle(&self, band: &mut Band<'_>, clip: &PixelRect, indices: [u32; 3]) {
        let [Some(a), Some(b), Some(c)] = indices.map(|i| self.mesh.vertices.get(i as usize)) else { return };
        for corners in far::cut([a, b, c], self.pixels_per_point) {
            let bounds = triangle::bounds(&corners.map(|c| c.at), clip);
            if !bounds.is_empty() {
                triangle::paint(band, &bounds, &self.fabric, corners);
            }
        }
    }

    fn corner(&self, index: u32) -> Option<Corner> {
        let i = index as usize;
        let vertex = self.mesh.vertices.get(i)?;
        Some(Corner { at: *self.corners.get(i)?, colour: vertex.color.to_array(), uv: vertex.uv })
    }

    /// Two triangles that form an upright rectangle, one texel to a pixel and of one colour, as every
    /// letter is: a plain copy. `false` if they are anything else, and then nothing is painted.
    fn paint_glyph(&self, band: &mut Band<'_>, clip: &PixelRect, indices: [u32; 4]) -> bool {
        let [Some(a), Some(b), Some(c), Some(d)] = indices.map(|i| self.corner(i)) else { return false };
        let upright = a.at[1] == b.at[1] && a.at[0] == c.at[0] && d.at == [b.at[0], c.at[1]];
        let one_colour = a.colour == b.colour && a.colour == c.colour && a.colour == d.colour;
        if !upright
            || !one_colour
            || a.at[0] >= d.at[0]
            || a.at[1] >= d.at[1]
            || a.at == OUTSIDE
            || d.at == OUTSIDE
        {
            return false;
        }
        if [b, c, d].iter().all(|corner| corner.uv == a.uv) {
            let colour = texture::tinted(a.colour, self.fabric.at(a.uv));
            let area = covered(a.at, d.at, clip);
            for y in area.y0..area.y1 {
                flat_span(band.span(area.x0, y, (area.x1 - area.x0).max(0) as usize), colour);
            }
            return true;
        }
        if a.uv.y != b.uv.y || a.uv.x != c.uv.x || d.uv.x != b.uv.x || d.uv.y != c.uv.y {
            return false;
        }
        let [width, height] = self.fabric.texture.size();
        let (Some(dx), Some(dy)) = (
            shift([a.at[0], d.at[0]], [a.uv.x, d.uv.x], width),
            shift([a.at[1], d.at[1]], [a.uv.y, d.uv.y], height),
        ) else {
            return false;
        };
        let area = covered(a.at, d.at, clip);
        if area.is_empty() {
            return true;
        }
        let count = (area.x1 - area.x0) as usize;
        for y in area.y0..area.y1 {
            let (Ok(u), Ok(v)) = (usize::try_from(area.x0 + dx), usize::try_from(y + dy)) else {
                return true;
            };
            let Some(texels) = self.fabric.texture.row(u, v, count) else { return true };
            for (p, texel) in band.span(area.x0, y, count).iter_mut().zip(texels) {
                if *texel != [0; 4] {
                    *p = pixel::over(texture::tinted(a.colour, *texel), *p);
                }
            }
        }
        true
    }
}

/// The pixels whose centres lie in an upright rectangle of the grid, within `clip`.
fn covered(min: [i32; 2], max: [i32; 2], clip: &PixelRect) -> PixelRect {
    PixelRect {
        x0: first_centre(min[0]).max(clip.x0),
        y0: first_centre(min[1]).max(clip.y0),
        x1: first_centre(max[0]).min(clip.x1),
        y1: first_centre(max[1]).min(clip.y1),
    }
}

/// By how many whole texels the texture is shifted against the pixels, if one texel meets one pixel:
/// then bilinear sampling at a pixel's centre gives that texel itself. Texels outside give `None`.
fn shift(at: [i32; 2], uv: [f32; 2], side: usize) -> Option<i32> {
    /// A hundredth of a texel cannot be seen: 2.5 of 255 at most, and only at full contrast.
    const NEAR: f32 = 0.01;
    let px = at.map(|a| a as f32 / ONE as f32);
    let texel = uv.map(|u| u * side as f32);
    let [first, last] = [texel[0] - px[0], texel[1] - px[1]];
    let whole = first.round();
    let fits = (first - whole).abs() < NEAR
        && (last - whole).abs() < NEAR
        && texel[0] >= 0.0
        && texel[1] <= side as f32;
    fits.then_some(whole as i32)
}

fn on_grid(vertex: &Vertex, pixels_per_point: f32) -> [i32; 2] {
    let [x, y] = [vertex.pos.x * pixels_per_point, vertex.pos.y * pixels_per_point];
    // Written so that not-a-number fails too.
    if x.abs() <= FAR_PX && y.abs() <= FAR_PX { [grid(x), grid(y)] } else { OUTSIDE }
}

/// The nearest grid coordinate. Adding and taking away a large number rounds as `f32::round_ties_even`
/// does, without a function call.
#[inline]
pub(super) fn grid(px: f32) -> i32 {
    const ROUND: f64 = 6_755_399_441_055_744.0; // 1.5 * 2^52
    ((f64::from(px) * f64::from(ONE) + ROUND) - ROUND) as i32
}

#[cfg(test)]
mod tests;
