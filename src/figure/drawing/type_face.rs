//! The face that pictures are set in: widths for the layout, glyphs for PDF.

use std::sync::OnceLock;

/// A text as glyphs.
pub type GlyphRun = Vec<(u16, char)>;

/// The face.
pub struct TypeFace {
    face: ttf_parser::Face<'static>,
}

/// The bytes of the face (OpenType with CFF outlines).
pub const FACE: &[u8] = include_bytes!("../../../assets/fonts/ParaboundSans-Regular.otf");
/// Width of a glyph where the face cannot be read, in em.
const FALLBACK_EM: f64 = 0.55;

impl TypeFace {
    /// The face, read once.
    pub fn get() -> &'static Self {
        static READ: OnceLock<TypeFace> = OnceLock::new();
        READ.get_or_init(|| match ttf_parser::Face::parse(FACE, 0) {
            Ok(face) => Self { face },
            Err(error) => unreachable!("the face is part of the program and a test reads it: {error}"),
        })
    }

    /// Units of the face in an em.
    pub fn units_per_em(&self) -> f64 {
        f64::from(self.face.units_per_em())
    }

    /// Glyph of each character; those that the face lacks give glyph 0.
    pub fn glyphs(&self, text: &str) -> GlyphRun {
        text.chars().map(|c| (self.face.glyph_index(c).map_or(0, |g| g.0), c)).collect()
    }

    /// Advance of a glyph in em.
    pub fn advance_em(&self, glyph: u16) -> f64 {
        self.face
            .glyph_hor_advance(ttf_parser::GlyphId(glyph))
            .map_or(FALLBACK_EM, |a| f64::from(a) / self.units_per_em())
    }

    /// Width of a text in points.
    pub fn width_pt(&self, text: &str, size_pt: f64) -> f64 {
        self.glyphs(text).iter().map(|(g, _)| self.advance_em(*g)).sum::<f64>() * size_pt
    }

    /// Ascender, descender, height of capitals and bounding box in thousandths of an em, for PDF.
    pub fn metrics_thousandths(&self) -> ([i32; 3], [i32; 4]) {
        let scale = |v: i16| (f64::from(v) * 1000.0 / self.units_per_em()).round() as i32;
        let b = self.face.global_bounding_box();
        let capitals = self.face.capital_height().unwrap_or_else(|| self.face.ascender());
        (
            [scale(self.face.ascender()), scale(self.face.descender()), scale(capitals)],
            [scale(b.x_min), scale(b.y_min), scale(b.x_max), scale(b.y_max)],
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every sign that pictures use is in the face.
    #[test]
    fn the_face_has_every_sign() {
        let face = TypeFace::get();
        for (glyph, sign) in face.glyphs("vrVE0123456789 cm⁻¹ÅK%½²ωₑψ−–+=/(){}\u{2009}") {
            assert!(glyph != 0, "{sign:?}");
        }
        let (one, two) = (face.width_pt("m", 10.0), face.width_pt("mm", 10.0));
        assert!(one > 4.0 && (two - 2.0 * one).abs() < 1e-9);
    }
}
