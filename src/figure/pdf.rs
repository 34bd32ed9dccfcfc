//! A drawing as PDF 1.6, written by hand: one page, the face embedded, text that can be searched and copied.
//!
//! Glyphs are addressed by their number in the face (Identity-H), which for OpenType faces with CFF outlines that
//! are not keyed by character collection is the character identifier (ISO 32000-1, 9.7.4.2).

use super::drawing::{Anchor, Drawing, FACE, Item, Rgb, Stroke, TypeFace};
use super::svg::short;
use std::collections::BTreeMap;
use std::fmt::Write as _;

/// A circle is four Bézier curves with handles of this fraction of the radius.
const HANDLE: f64 = 0.552_284_75;

/// The PDF file.
pub fn pdf(drawing: &Drawing) -> Vec<u8> {
    let face = TypeFace::get();
    let mut page = Page { height: drawing.size_pt[1], ..Page::default() };
    page.ground(drawing);
    for item in &drawing.items {
        page.item(face, item);
    }
    let [width, height] = drawing.size_pt;
    let states: String = page
        .opacities
        .iter()
        .fold(String::new(), |t, o| t + &format!("/O{o} <</ca {0} /CA {0}>> ", percent(*o)));
    let mut file = File::default();
    file.object(1, "<</Type /Catalog /Pages 2 0 R>>");
    file.object(2, "<</Type /Pages /Kids [3 0 R] /Count 1>>");
    file.object(
        3,
        &format!(
            "<</Type /Page /Parent 2 0 R /MediaBox [0 0 {} {}] /Contents 4 0 R /Resources \
             <</Font <</F 5 0 R>> /ExtGState <<{states}>>>>>>",
            short(width),
            short(height)
        ),
    );
    file.stream(4, "", page.content.as_bytes());
    file.object(
        5,
        "<</Type /Font /Subtype /Type0 /BaseFont /ParaboundSans-Regular /Encoding /Identity-H \
         /DescendantFonts [6 0 R] /ToUnicode 8 0 R>>",
    );
    let widths: String = page
        .used
        .keys()
        .fold(String::new(), |t, g| t + &format!("{g} [{}] ", short(1000.0 * face.advance_em(*g))));
    file.object(
        6,
        &format!(
            "<</Type /Font /Subtype /CIDFontType0 /BaseFont /ParaboundSans-Regular /CIDSystemInfo \
             <</Registry (Adobe) /Ordering (Identity) /Supplement 0>> /FontDescriptor 7 0 R /W [{widths}]>>"
        ),
    );
    let ([ascent, descent, capitals], b) = face.metrics_thousandths();
    file.object(
        7,
        &format!(
            "<</Type /FontDescriptor /FontName /ParaboundSans-Regular /Flags 4 /FontBBox [{} {} {} {}] \
             /ItalicAngle 0 /Ascent {ascent} /Descent {descent} /CapHeight {capitals} /StemV 80 /FontFile3 9 0 R>>",
            b[0], b[1], b[2], b[3]
        ),
    );
    file.stream(8, "", to_unicode(&page.used).as_bytes());
    file.stream(9, "/Subtype /OpenType ", FACE);
    file.object(10, &format!("<</Title {} /Producer (Parabound)>>", utf16(&drawing.about)));
    file.end(1, 10)
}

/// Text as a PDF string in UTF-16 with its mark.
fn utf16(text: &str) -> String {
    let mut out = String::from("<FEFF");
    for unit in text.encode_utf16() {
        let _ = write!(out, "{unit:04X}");
    }
    out.push('>');
    out
}

fn percent(opacity: u32) -> String {
    short(f64::from(opacity) / 100.0)
}

/// The map from glyphs back to characters, at most 100 to a block as the format asks.
fn to_unicode(used: &BTreeMap<u16, char>) -> String {
    let mut text = String::from(
        "/CIDInit /ProcSet findresource begin 12 dict begin begincmap /CMapName /Signs def /CMapType 2 def\n\
         /CIDSystemInfo <</Registry (Adobe) /Ordering (UCS) /Supplement 0>> def\n\
         1 begincodespacerange <0000> <FFFF> endcodespacerange\n",
    );
    let entries: Vec<(&u16, &char)> = used.iter().collect();
    for block in entries.chunks(100) {
        let _ = writeln!(text, "{} beginbfchar", block.len());
        for (glyph, sign) in block {
            let mut units = [0; 2];
            let hex: String = sign.encode_utf16(&mut units).iter().map(|u| format!("{u:04X}")).collect();
            let _ = writeln!(text, "<{glyph:04X}> <{hex}>");
        }
        text.push_str("endbfchar\n");
    }
    text.push_str("endcmap CMapName currentdict /CMap defineresource pop end end\n");
    text
}

/// The content of the page; y upwards.
#[derive(Default)]
struct Page {
    height: f64,
    content: String,
    used: BTreeMap<u16, char>,
    /// In percent.
    opacities: std::collections::BTreeSet<u32>,
}

impl Page {
    fn ground(&mut self, drawing: &Drawing) {
        let [width, height] = drawing.size_pt;
        let colour = colour(drawing.ground);
        let _ = writeln!(self.content, "1 J 1 j {colour} rg 0 0 {} {} re f", short(width), short(height));
    }

    fn at(&self, [x, y]: [f64; 2]) -> String {
        format!("{} {}", short(x), short(self.height - y))
    }

    fn item(&mut self, face: &TypeFace, item: &Item) {
        match item {
            Item::Open(_) | Item::Close => {}
            Item::Path { points, closed, stroke, fill, opacity } => {
                self.begin(*opacity, stroke.as_ref(), *fill);
                for (i, p) in points.iter().enumerate() {
                    let _ = write!(self.content, "{} {} ", self.at(*p), if i == 0 { "m" } else { "l" });
                }
                self.finish(*closed, stroke.is_some(), fill.is_some());
            }
            Item::Circle { centre, radius_pt, stroke, fill, opacity } => {
                self.begin(*opacity, Some(stroke), Some(*fill));
                self.circle(*centre, *radius_pt);
                self.finish(true, true, true);
            }
            Item::Text { at, text, size_pt, colour: ink, anchor, upwards } => {
                let glyphs = face.glyphs(text);
                let width = face.width_pt(text, *size_pt);
                let back = match anchor {
                    Anchor::Start => 0.0,
                    Anchor::Middle => 0.5 * width,
                    Anchor::End => width,
                };
                let (x, y) = (at[0], self.height - at[1]);
                let matrix = if *upwards {
                    format!("0 1 -1 0 {} {}", short(x), short(y - back))
                } else {
                    format!("1 0 0 1 {} {}", short(x - back), short(y))
                };
                let mut hex = String::with_capacity(4 * glyphs.len());
                for (glyph, sign) in glyphs {
                    let _ = write!(hex, "{glyph:04X}");
                    self.used.insert(glyph, sign);
                }
                let (ink, size) = (colour(*ink), short(*size_pt));
                let _ = writeln!(self.content, "BT {ink} rg /F {size} Tf {matrix} Tm <{hex}> Tj ET");
            }
        }
    }

    fn begin(&mut self, opacity: f64, stroke: Option<&Stroke>, fill: Option<Rgb>) {
        let opacity = (100.0 * opacity).round().clamp(0.0, 100.0) as u32;
        self.opacities.insert(opacity);
        let _ = write!(self.content, "q /O{opacity} gs ");
        if let Some(fill) = fill {
            let _ = write!(self.content, "{} rg ", colour(fill));
        }
        if let Some(stroke) = stroke {
            let dashes: Vec<String> = stroke.dashes_pt.iter().map(|d| short(*d)).collect();
            // Round ends would fill the gaps between dots.
            let cap = if dashes.is_empty() { 1 } else { 0 };
            let (ink, width) = (colour(stroke.colour), short(stroke.width_pt));
            let _ = write!(self.content, "{ink} RG {width} w {cap} J [{}] 0 d ", dashes.join(" "));
        }
    }

    fn finish(&mut self, closed: bool, stroke: bool, fill: bool) {
        let operator = match (closed, stroke, fill) {
            (true, true, true) => "b",
            (false, true, true) => "B",
            (true, true, false) => "s",
            (false, true, false) => "S",
            (_, false, true) => "f",
            (_, false, false) => "n",
        };
        let _ = writeln!(self.content, "{operator} Q");
    }

    fn circle(&mut self, [x, y]: [f64; 2], r: f64) {
        let h = HANDLE * r;
        let start = self.at([x + r, y]);
        let _ = write!(self.content, "{start} m ");
        let quarters = [
            [[x + r, y + h], [x + h, y + r], [x, y + r]],
            [[x - h, y + r], [x - r, y + h], [x - r, y]],
            [[x - r, y - h], [x - h, y - r], [x, y - r]],
            [[x + h, y - r], [x + r, y - h], [x + r, y]],
        ];
        for [a, b, c] in quarters {
            let (a, b, c) = (self.at(a), self.at(b), self.at(c));
            let _ = write!(self.content, "{a} {b} {c} c ");
        }
    }
}

fn colour(Rgb(r, g, b): Rgb) -> String {
    [r, g, b].map(|c| short(f64::from(c) / 255.0)).join(" ")
}

/// The file under way: objects and where they begin.
struct File {
    bytes: Vec<u8>,
    starts: Vec<usize>,
}

impl Default for File {
    fn default() -> Self {
        // Bytes above 127 in the second line say that the file is not plain text.
        let mut bytes = b"%PDF-1.6\n%".to_vec();
        bytes.extend_from_slice(&[0xe2, 0xe3, 0xcf, 0xd3, b'\n']);
        Self { bytes, starts: Vec::new() }
    }
}

impl File {
    /// Objects are numbered from 1 in the order in which they are written.
    fn object(&mut self, number: usize, text: &str) {
        self.starts.push(self.bytes.len());
        self.bytes.extend_from_slice(format!("{number} 0 obj\n{text}\nendobj\n").as_bytes());
    }

    fn stream(&mut self, number: usize, entries: &str, content: &[u8]) {
        self.starts.push(self.bytes.len());
        let head = format!("{number} 0 obj\n<<{entries}/Length {}>>\nstream\n", content.len());
        self.bytes.extend_from_slice(head.as_bytes());
        self.bytes.extend_from_slice(content);
        self.bytes.extend_from_slice(b"\nendstream\nendobj\n");
    }

    fn end(mut self, root: usize, info: usize) -> Vec<u8> {
        let table = self.bytes.len();
        let count = self.starts.len() + 1;
        let mut text = format!("xref\n0 {count}\n0000000000 65535 f \n");
        for start in &self.starts {
            let _ = writeln!(text, "{start:010} 00000 n ");
        }
        let _ = write!(
            text,
            "trailer\n<</Size {count} /Root {root} 0 R /Info {info} 0 R>>\nstartxref\n{table}\n%%EOF\n"
        );
        self.bytes.extend_from_slice(text.as_bytes());
        self.bytes
    }
}

#[cfg(test)]
mod tests {
    use super::super::drawing::Stroke;
    use super::*;

    fn example() -> Drawing {
        let stroke = Stroke { colour: Rgb(10, 20, 30), width_pt: 1.0, dashes_pt: vec![2.0, 1.0] };
        Drawing {
            size_pt: [200.0, 100.0],
            about: "An example (with parentheses) in cm⁻¹".to_owned(),
            ground: Rgb(255, 255, 255),
            items: vec![
                Item::Path {
                    points: vec![[0.0, 0.0], [50.0, 50.0]],
                    closed: false,
                    stroke: Some(stroke.clone()),
                    fill: None,
                    opacity: 0.5,
                },
                Item::Circle {
                    centre: [20.0, 20.0],
                    radius_pt: 3.0,
                    stroke,
                    fill: Rgb(255, 0, 0),
                    opacity: 1.0,
                },
                Item::Text {
                    at: [100.0, 50.0],
                    text: "energy / cm⁻¹".to_owned(),
                    size_pt: 9.0,
                    colour: Rgb(0, 0, 0),
                    anchor: Anchor::Middle,
                    upwards: true,
                },
            ],
        }
    }

    /// Header, end, every entry of the cross-reference table at an object, every stream as long as it says.
    #[test]
    fn the_structure_is_sound() {
        let bytes = pdf(&example());
        assert!(bytes.starts_with(b"%PDF-1.6\n"));
        assert!(bytes.ends_with(b"%%EOF\n"));
        let find = |needle: &[u8], from: usize| {
            bytes[from..].windows(needle.len()).position(|w| w == needle).map(|i| i + from)
        };
        let start = find(b"startxref\n", bytes.len() - 40).unwrap() + 10;
        let end = start + bytes[start..].iter().position(|b| *b == b'\n').unwrap();
        let table: usize = std::str::from_utf8(&bytes[start..end]).unwrap().parse().unwrap();
        assert!(bytes[table..].starts_with(b"xref\n0 11\n"));
        let entries = std::str::from_utf8(&bytes[table..]).unwrap().lines().skip(3).take(10);
        let mut checked = 0;
        for (i, entry) in entries.enumerate() {
            assert_eq!(entry.len(), 19, "{entry:?}");
            let at: usize = entry[..10].parse().unwrap();
            assert!(bytes[at..].starts_with(format!("{} 0 obj\n", i + 1).as_bytes()), "object {}", i + 1);
            checked += 1;
        }
        assert_eq!(checked, 10);
        let mut from = 0;
        let mut streams = 0;
        while let Some(at) = find(b"/Length ", from) {
            let close = find(b">>", at).unwrap();
            let length: usize = std::str::from_utf8(&bytes[at + 8..close]).unwrap().parse().unwrap();
            let body = close + b">>\nstream\n".len();
            assert!(bytes[body + length..].starts_with(b"\nendstream\nendobj"));
            from = body + length;
            streams += 1;
        }
        assert_eq!(streams, 3);
        assert!(find(b"/FontFile3 9 0 R", 0).is_some());
    }

    /// The superscripts can be copied out again.
    #[test]
    fn signs_map_back_to_characters() {
        let glyphs = TypeFace::get().glyphs("⁻¹");
        let map = to_unicode(&glyphs.iter().copied().collect());
        for (glyph, sign) in glyphs {
            assert!(map.contains(&format!("<{glyph:04X}> <{:04X}>", u32::from(sign))), "{map}");
        }
    }
}
