//! Textures as egui hands them over: the font atlas and pictures.

use super::pixel;
use eframe::egui::{
    Pos2, TextureFilter, TextureId, TextureWrapMode, TexturesDelta, epaint::ImageData, epaint::ImageDelta,
};
use std::collections::BTreeMap;

/// The largest side accepted; larger pictures are ignored rather than exhausting memory.
const MAX_SIDE: usize = 16_384;

/// One texture, kept as premultiplied RGBA.
pub(super) struct Texture {
    width: usize,
    height: usize,
    texels: Vec<[u8; 4]>,
    nearest: bool,
    wrap: TextureWrapMode,
}

/// All textures, by egui's identity.
#[derive(Default)]
pub(super) struct TextureStore {
    textures: BTreeMap<Key, Texture>,
}

/// `TextureId` has an order, but as a key of our own it cannot change under us.
type Key = (bool, u64);

const fn key(id: TextureId) -> Key {
    match id {
        TextureId::Managed(n) => (false, n),
        TextureId::User(n) => (true, n),
    }
}

impl TextureStore {
    /// Takes all new and changed textures out of `delta`. Call before painting.
    pub(super) fn apply(&mut self, delta: &mut TexturesDelta) {
        #[expect(clippy::iter_over_hash_type, reason = "textures do not depend on each other")]
        for (id, images) in delta.set.drain() {
            for image in images {
                self.set(id, &image);
            }
        }
    }

    pub(super) fn remove(&mut self, id: TextureId) {
        self.textures.remove(&key(id));
    }

    pub(super) fn get(&self, id: TextureId) -> Option<&Texture> {
        self.textures.get(&key(id))
    }

    fn set(&mut self, id: TextureId, delta: &ImageDelta) {
        let ImageData::Color(image) = &delta.image;
        let [width, height] = image.size;
        if width > MAX_SIDE || height > MAX_SIDE || image.pixels.len() != width * height {
            return;
        }
        match delta.pos {
            None => {
                let texture = Texture {
                    width,
                    height,
                    texels: image.pixels.iter().map(|c| c.to_array()).collect(),
                    nearest: delta.options.magnification == TextureFilter::Nearest,
                    wrap: delta.options.wrap_mode,
                };
                self.textures.insert(key(id), texture);
            }
            Some(at) => {
                if let Some(texture) = self.textures.get_mut(&key(id)) {
                    texture.patch(at, width, &image.pixels);
                }
            }
        }
    }
}

impl Texture {
    /// Copies a patch of `patch_width` columns to `at`; what lies outside is left out.
    fn patch(&mut self, [x0, y0]: [usize; 2], patch_width: usize, pixels: &[eframe::egui::Color32]) {
        if patch_width == 0 || x0 >= self.width {
            return;
        }
        let columns = patch_width.min(self.width - x0);
        let rows = self.texels.chunks_exact_mut(self.width).skip(y0);
        for (row, patch) in rows.zip(pixels.chunks_exact(patch_width)) {
            for (texel, colour) in row[x0..x0 + columns].iter_mut().zip(patch) {
                *texel = colour.to_array();
            }
        }
    }

    pub(super) const fn size(&self) -> [usize; 2] {
        [self.width, self.height]
    }

    /// `count` texels of row `y` from column `x` on, if they all lie inside.
    #[inline]
    pub(super) fn row(&self, x: usize, y: usize, count: usize) -> Option<&[[u8; 4]]> {
        if y >= self.height || x.checked_add(count)? > self.width {
            return None;
        }
        let start = y * self.width + x;
        self.texels.get(start..start + count)
    }

    #[inline]
    fn wrapped(&self, at: i64, side: usize) -> usize {
        let side = side as i64;
        let inside = match self.wrap {
            TextureWrapMode::ClampToEdge => at.clamp(0, side - 1),
            TextureWrapMode::Repeat => at.rem_euclid(side),
            TextureWrapMode::MirroredRepeat => {
                let twice = at.rem_euclid(2 * side);
                twice.min(2 * side - 1 - twice)
            }
        };
        inside as usize
    }

    #[inline]
    fn texel(&self, x: i64, y: i64) -> [u8; 4] {
        let (x, y) = (self.wrapped(x, self.width), self.wrapped(y, self.height));
        self.texels.get(y * self.width + x).copied().unwrap_or_default()
    }

    /// The colour at `uv` (0 to 1 over the texture), as whole channel values.
    pub(super) fn sample_flat(&self, uv: Pos2) -> [u8; 4] {
        self.sample(uv.x * self.width as f32, uv.y * self.height as f32).map(|c| (c + 0.5) as u8)
    }

    /// The colour at texel coordinates `x`, `y` (texel centres at one half), channels 0 to 255:
    /// bilinear between the four nearest centres, or the texel itself where the texture asks for that.
    #[inline]
    pub(super) fn sample(&self, x: f32, y: f32) -> [f32; 4] {
        if self.texels.is_empty() {
            return [0.0; 4];
        }
        if self.nearest {
            return self.texel(floor(x), floor(y)).map(f32::from);
        }
        let (x, y) = (x - 0.5, y - 0.5);
        let (x0, y0) = (floor(x), floor(y));
        let (fx, fy) = (x - x0 as f32, y - y0 as f32);
        let inside = |at: i64, side: usize| at >= 0 && at + 1 < side as i64;
        let [a, b, c, d] = if inside(x0, self.width) && inside(y0, self.height) {
            let first = y0 as usize * self.width + x0 as usize;
            let second = first + self.width;
            match (self.texels.get(first..first + 2), self.texels.get(second..second + 2)) {
                (Some(&[a, b]), Some(&[c, d])) => [a, b, c, d],
                _ => return [0.0; 4],
            }
        } else {
            [self.texel(x0, y0), self.texel(x0 + 1, y0), self.texel(x0, y0 + 1), self.texel(x0 + 1, y0 + 1)]
        };
        let (wa, wb) = ((1.0 - fx) * (1.0 - fy), fx * (1.0 - fy));
        let (wc, wd) = ((1.0 - fx) * fy, fx * fy);
        std::array::from_fn(|i| {
            f32::from(a[i]) * wa + f32::from(b[i]) * wb + f32::from(c[i]) * wc + f32::from(d[i]) * wd
        })
    }
}

/// Largest whole number not above `x`; a plain conversion is several times quicker than `f32::floor`
/// where the processor has no rounding instruction. Not-a-number gives zero.
#[inline]
fn floor(x: f32) -> i64 {
    let whole = x.clamp(-1e9, 1e9) as i64;
    whole - i64::from(x < whole as f32)
}

/// A colour times a texel, packed.
#[inline]
pub(super) fn tinted(colour: [u8; 4], texel: [u8; 4]) -> u32 {
    pixel::pack(pixel::multiply(colour, texel))
}

#[cfg(test)]
mod tests {
    use super::*;
    use eframe::egui::{Color32, ColorImage, TextureOptions, pos2};

    const ID: TextureId = TextureId::Managed(3);

    fn store(size: [usize; 2], options: TextureOptions) -> TextureStore {
        let pixels = (0..size[0] * size[1]).map(|i| Color32::from_gray((i * 10) as u8)).collect();
        let mut delta = TexturesDelta::default();
        delta.push(ID, ImageDelta::full(ColorImage::new(size, pixels), options));
        let mut store = TextureStore::default();
        store.apply(&mut delta);
        store
    }

    fn grey(store: &TextureStore, x: f32, y: f32) -> f32 {
        store.get(ID).map_or(-1.0, |t| t.sample(x, y)[0])
    }

    #[test]
    fn bilinear_is_exact_at_centres_and_halfway_between() {
        let s = store([4, 3], TextureOptions::LINEAR);
        assert_eq!(grey(&s, 1.5, 1.5), 50.0);
        assert_eq!(grey(&s, 2.0, 1.5), 55.0);
        assert_eq!(grey(&s, 1.5, 2.0), 70.0);
        // Beyond the edge the edge goes on.
        assert_eq!(grey(&s, -9.0, 0.2), 0.0);
        assert_eq!(grey(&s, 99.0, 99.0), 110.0);
    }

    #[test]
    fn nearest_repeat_and_mirror() {
        let s = store([4, 1], TextureOptions::NEAREST_REPEAT);
        assert_eq!(grey(&s, 5.2, 0.5), 10.0);
        assert_eq!(grey(&s, -0.5, 0.5), 30.0);
        let s = store(
            [4, 1],
            TextureOptions { wrap_mode: TextureWrapMode::MirroredRepeat, ..TextureOptions::NEAREST },
        );
        assert_eq!(grey(&s, 4.5, 0.5), 30.0);
        assert_eq!(grey(&s, -0.5, 0.5), 0.0);
    }

    #[test]
    fn a_patch_changes_its_texels_only_even_when_it_sticks_out() {
        let mut s = store([4, 3], TextureOptions::NEAREST);
        let patch =
            |at| ImageDelta::partial(at, ColorImage::filled([2, 2], Color32::WHITE), TextureOptions::NEAREST);
        let mut delta = TexturesDelta::default();
        delta.push(ID, patch([1, 0]));
        delta.push(ID, patch([3, 2]));
        delta.push(ID, patch([40, 40]));
        s.apply(&mut delta);
        let white: Vec<usize> =
            (0..12).filter(|i| grey(&s, (i % 4) as f32 + 0.5, (i / 4) as f32 + 0.5) == 255.0).collect();
        assert_eq!(white, [1, 2, 5, 6, 11]);
        s.remove(ID);
        assert!(s.get(ID).is_none());
    }

    #[test]
    fn odd_requests_are_survived() {
        for size in [[0, 0], [1, 1], [0, 5]] {
            let s = store(size, TextureOptions::LINEAR);
            for x in [f32::NAN, f32::INFINITY, f32::NEG_INFINITY, -1e30, 1e30, 0.0] {
                let _ = grey(&s, x, x);
                let _ = s.get(ID).map(|t| t.sample_flat(pos2(x, x)));
            }
            assert!(s.get(ID).is_none_or(|t| t.row(usize::MAX, 0, 2).is_none()));
        }
    }
}
