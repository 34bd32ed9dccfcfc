//! A drawing as SVG 1.1: text stays text, every series is a group with its name as title.

use super::drawing::{Anchor, Drawing, Item, PT_PER_MM, Rgb, Stroke};
use std::fmt::Write as _;

/// Faces in the order of preference: the program's own where it is installed, then common ones.
const FAMILIES: &str =
    "Inter, 'Helvetica Neue', Helvetica, Arial, 'Liberation Sans', 'DejaVu Sans', sans-serif";

/// The SVG file.
pub fn svg(drawing: &Drawing) -> String {
    let [width, height] = drawing.size_pt;
    let mut out = String::from("<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n");
    let _ = writeln!(
        out,
        "<svg xmlns=\"http://www.w3.org/2000/svg\" version=\"1.1\" width=\"{}mm\" height=\"{}mm\" \
         viewBox=\"0 0 {} {}\" font-family=\"{FAMILIES}\">",
        short(width / PT_PER_MM),
        short(height / PT_PER_MM),
        short(width),
        short(height)
    );
    let _ = writeln!(out, "<title>{}</title>", escaped(&drawing.about));
    let ground = hex(drawing.ground);
    let _ = writeln!(out, "<rect width=\"100%\" height=\"100%\" fill=\"{ground}\"/>");
    for item in &drawing.items {
        write_item(&mut out, item);
    }
    out.push_str("</svg>\n");
    out
}

fn write_item(out: &mut String, item: &Item) {
    let _ = match item {
        Item::Open(label) => writeln!(out, "<g class=\"series\"><title>{}</title>", escaped(label)),
        Item::Close => writeln!(out, "</g>"),
        Item::Path { points, closed, stroke, fill, opacity } => {
            let mut path = String::new();
            for (i, [x, y]) in points.iter().enumerate() {
                let _ = write!(path, "{}{} {}", if i == 0 { "M" } else { "L" }, short(*x), short(*y));
            }
            if *closed {
                path.push('Z');
            }
            let fill = fill.map_or_else(|| "none".to_owned(), hex);
            let stroke = stroke.as_ref().map_or_else(String::new, stroke_attributes);
            writeln!(out, "<path d=\"{path}\" fill=\"{fill}\"{stroke}{}/>", opacity_attribute(*opacity))
        }
        Item::Circle { centre, radius_pt, stroke, fill, opacity } => writeln!(
            out,
            "<circle cx=\"{}\" cy=\"{}\" r=\"{}\" fill=\"{}\"{}{}/>",
            short(centre[0]),
            short(centre[1]),
            short(*radius_pt),
            hex(*fill),
            stroke_attributes(stroke),
            opacity_attribute(*opacity)
        ),
        Item::Text { at, text, size_pt, colour, anchor, upwards } => {
            let (x, y) = (short(at[0]), short(at[1]));
            let place = if *upwards {
                format!("transform=\"translate({x} {y}) rotate(-90)\"")
            } else {
                format!("x=\"{x}\" y=\"{y}\"")
            };
            let anchor = match anchor {
                Anchor::Start => "start",
                Anchor::Middle => "middle",
                Anchor::End => "end",
            };
            writeln!(
                out,
                "<text {place} font-size=\"{}\" fill=\"{}\" text-anchor=\"{anchor}\">{}</text>",
                short(*size_pt),
                hex(*colour),
                escaped(text)
            )
        }
    };
}

fn stroke_attributes(stroke: &Stroke) -> String {
    let mut text = format!(
        " stroke=\"{}\" stroke-width=\"{}\" stroke-linejoin=\"round\"",
        hex(stroke.colour),
        short(stroke.width_pt)
    );
    if !stroke.dashes_pt.is_empty() {
        let dashes: Vec<String> = stroke.dashes_pt.iter().map(|d| short(*d)).collect();
        let _ = write!(text, " stroke-dasharray=\"{}\"", dashes.join(" "));
    }
    text
}

fn opacity_attribute(opacity: f64) -> String {
    if opacity < 1.0 { format!(" opacity=\"{}\"", short(opacity)) } else { String::new() }
}

/// Thousandths of a point are finer than any printer.
pub(super) fn short(value: f64) -> String {
    let text = format!("{value:.3}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

fn hex(Rgb(r, g, b): Rgb) -> String {
    format!("#{r:02x}{g:02x}{b:02x}")
}

/// Text with the signs that XML reserves written as entities; control characters are left out, XML has none.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            c if c.is_control() || c == '\u{fffe}' || c == '\u{ffff}' => {}
            c => out.push(c),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_short_and_text_is_safe() {
        assert_eq!(short(1.0), "1");
        assert_eq!(short(-0.0001), "0");
        assert_eq!(short(2.5), "2.5");
        assert_eq!(short(100.0), "100");
        assert_eq!(escaped("a<b & \"c\"\u{1}"), "a&lt;b &amp; &quot;c&quot;");
    }
}
