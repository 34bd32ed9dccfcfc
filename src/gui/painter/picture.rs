//! A picture in memory, and as PNG.

use super::pixel;
use std::io::Cursor;

/// The largest side of a picture, in pixels.
pub const MAX_SIDE_PX: usize = 16_384;

/// A picture: rows from the top, pixels from the left, each `0xAARRGGBB` with colours multiplied by alpha.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Picture {
    width_px: usize,
    height_px: usize,
    pixels: Vec<u32>,
}

impl Picture {
    /// A picture of one colour, given as red, green, blue and alpha (colours multiplied by alpha).
    /// Sides are limited to [`MAX_SIDE_PX`].
    #[must_use]
    pub fn new(size_px: [usize; 2], colour: [u8; 4]) -> Self {
        let mut picture = Self::default();
        picture.reset(size_px, colour);
        picture
    }

    /// Makes the picture this large and fills it with one colour, keeping its memory.
    pub fn reset(&mut self, size_px: [usize; 2], colour: [u8; 4]) {
        [self.width_px, self.height_px] = size_px.map(|side| side.min(MAX_SIDE_PX));
        self.pixels.clear();
        self.pixels.resize(self.width_px * self.height_px, pixel::pack(colour));
    }

    /// Width and height in pixels.
    #[must_use]
    pub const fn size_px(&self) -> [usize; 2] {
        [self.width_px, self.height_px]
    }

    /// All pixels, `0xAARRGGBB`, row after row.
    #[must_use]
    pub fn pixels(&self) -> &[u32] {
        &self.pixels
    }

    pub(super) fn pixels_mut(&mut self) -> &mut [u32] {
        &mut self.pixels
    }

    /// Red, green, blue and alpha (colours multiplied by alpha) of one pixel; `None` outside.
    #[must_use]
    pub fn rgba_at(&self, x: usize, y: usize) -> Option<[u8; 4]> {
        if x >= self.width_px {
            return None;
        }
        self.pixels.get(y * self.width_px + x).copied().map(pixel::unpack)
    }

    /// All pixels as bytes, red first, colours *not* multiplied by alpha, as picture files want them.
    #[must_use]
    pub fn to_rgba8(&self) -> Vec<u8> {
        let straight = |p: &u32| {
            let [r, g, b, a] = pixel::unpack(*p);
            if a == 255 || a == 0 {
                return [r, g, b, a];
            }
            let alpha = u32::from(a);
            let c = |c: u8| ((u32::from(c) * 255 + alpha / 2) / alpha).min(255) as u8;
            [c(r), c(g), c(b), a]
        };
        self.pixels.iter().flat_map(straight).collect()
    }

    /// The picture as a PNG file in memory.
    ///
    /// # Errors
    /// A picture without pixels cannot be encoded.
    pub fn to_png(&self) -> std::io::Result<Vec<u8>> {
        use image::ImageEncoder as _;
        if self.pixels.is_empty() {
            return Err(std::io::Error::new(std::io::ErrorKind::InvalidInput, "the picture has no pixels"));
        }
        let mut bytes = Cursor::new(Vec::new());
        image::codecs::png::PngEncoder::new(&mut bytes)
            .write_image(
                &self.to_rgba8(),
                self.width_px as u32,
                self.height_px as u32,
                image::ExtendedColorType::Rgba8,
            )
            .map_err(std::io::Error::other)?;
        Ok(bytes.into_inner())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn png_comes_back_as_it_was() {
        let mut picture = Picture::new([3, 2], [10, 20, 30, 255]);
        picture.pixels_mut()[4] = pixel::pack([64, 0, 128, 128]);
        let back = image::load_from_memory(&picture.to_png().unwrap()).unwrap().to_rgba8();
        assert_eq!(back.dimensions(), (3, 2));
        assert_eq!(back.get_pixel(0, 0).0, [10, 20, 30, 255]);
        assert_eq!(back.get_pixel(1, 1).0, [128, 0, 255, 128]);
    }

    #[test]
    fn empty_and_huge_pictures_are_no_panic() {
        assert!(Picture::new([0, 7], [0; 4]).to_png().is_err());
        assert_eq!(Picture::new([usize::MAX, 1], [0; 4]).size_px(), [MAX_SIDE_PX, 1]);
    }
}
