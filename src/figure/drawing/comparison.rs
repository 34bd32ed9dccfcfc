//! The comparison of fits on paper: a row a fit, its measures on a logarithmic axis, ΔAICc at the right.

use super::axes::Frame;
use super::legend::{self, Entry, Sign};
use super::{Anchor, Item, Layout, Stroke, line};
use crate::figure::geometry::Bounds;
use crate::figure::{ComparisonPicture, Measure, number};

/// How a measure is marked: told apart by form, not by colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mark {
    Disc,
    Ring,
    Diamond,
    Cross,
}

const fn mark_of(measure: Measure) -> Mark {
    match measure {
        Measure::Rms => Mark::Disc,
        Measure::Largest => Mark::Ring,
        Measure::LeaveOneOut => Mark::Diamond,
        Measure::Outside => Mark::Cross,
    }
}

/// The mark at a place.
pub fn mark(layout: &Layout, mark: Mark, centre: [f64; 2], stroke: &Stroke) -> Vec<Item> {
    let radius = 0.30 * layout.font_pt;
    let [x, y] = centre;
    match mark {
        Mark::Disc | Mark::Ring => vec![Item::Circle {
            centre,
            radius_pt: radius,
            stroke: stroke.clone(),
            fill: if mark == Mark::Disc { stroke.colour } else { layout.palette.ground },
            opacity: 1.0,
        }],
        Mark::Diamond => {
            let d = 1.25 * radius;
            vec![Item::Path {
                points: vec![[x - d, y], [x, y - d], [x + d, y], [x, y + d]],
                closed: true,
                stroke: Some(stroke.clone()),
                fill: Some(layout.palette.ground),
                opacity: 1.0,
            }]
        }
        Mark::Cross => {
            let stroke_of = |sign: f64| {
                let ends = vec![[x - radius, y - sign * radius], [x + radius, y + sign * radius]];
                line(ends, stroke.clone(), 1.0)
            };
            vec![stroke_of(1.0), stroke_of(-1.0)]
        }
    }
}

/// Height of a row in em, of the axis below, of the heading above.
const ROW_EM: f64 = 2.0;
const AXIS_EM: f64 = 3.4;
const HEAD_EM: f64 = 1.6;

/// Height that the picture needs, in points.
pub fn height(layout: &Layout, picture: &ComparisonPicture) -> f64 {
    let font = layout.font_pt;
    let words = picture.sentence.as_deref().map_or(0, |s| wrapped(layout, s).len());
    top(layout) + (picture.rows.len() as f64 * ROW_EM + AXIS_EM + words as f64 * 1.35 + 0.8) * font
}

fn entries(layout: &Layout) -> Vec<Entry> {
    let stroke = layout.solid(layout.palette.text, 1.2);
    Measure::ALL
        .into_iter()
        .map(|m| Entry { label: m.label().to_owned(), sign: Sign::Mark(mark_of(m), stroke.clone()) })
        .collect()
}

fn width(layout: &Layout) -> f64 {
    layout.size_pt[0] - 1.6 * layout.font_pt
}

fn top(layout: &Layout) -> f64 {
    let font = layout.font_pt;
    0.8 * font + legend::height(layout, &entries(layout), width(layout)) + HEAD_EM * font
}

/// The sentence in lines of the picture's width.
fn wrapped(layout: &Layout, text: &str) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split(' ') {
        match lines.last_mut() {
            Some(last) if layout.width(&format!("{last} {word}"), layout.font_pt) <= width(layout) => {
                last.push(' ');
                last.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}

/// The picture.
pub fn items(layout: &Layout, picture: &ComparisonPicture) -> Vec<Item> {
    let font = layout.font_pt;
    let names = picture.rows.iter().map(|r| layout.width(&r.label, font)).fold(0.0, f64::max);
    let top = top(layout);
    let (from, to) = picture.decades;
    let frame = Frame {
        left: 1.6 * font + names,
        right: layout.size_pt[0] - 6.0 * font,
        top,
        bottom: top + picture.rows.len() as f64 * ROW_EM * font,
        bounds: Bounds { x: (f64::from(from) - 0.15, f64::from(to) + 0.15), y: (0.0, 1.0) },
    };
    let mut items = legend::items(layout, &entries(layout), [0.8 * font, 0.8 * font], width(layout));
    items.extend(axis(layout, &frame, picture.decades));
    let heading = [layout.size_pt[0] - 0.8 * font, top - 0.6 * font];
    items.push(layout.text(heading, "ΔAICc", Anchor::End));
    for (i, row) in picture.rows.iter().enumerate() {
        let y = frame.top + (i as f64 + 0.5) * ROW_EM * font;
        items.push(Item::Open(row.label.clone()));
        items.push(layout.text([frame.left - 0.8 * font, y + 0.35 * font], row.label.clone(), Anchor::End));
        items.push(line(
            vec![[frame.left, y], [frame.right, y]],
            layout.solid(layout.palette.grid, 0.8),
            1.0,
        ));
        let stroke = layout.solid(layout.palette.role(row.role), 1.4);
        for (measure, value) in &row.marks {
            let x = frame.place([value.log10(), 0.0])[0];
            items.extend(mark(layout, mark_of(*measure), [x, y], &stroke));
        }
        let aicc = row.aicc_difference.map_or_else(|| number::NONE.to_owned(), |d| number::fixed(d, 1));
        items.push(layout.text([layout.size_pt[0] - 0.8 * font, y + 0.35 * font], aicc, Anchor::End));
        items.push(Item::Close);
    }
    if let Some(sentence) = &picture.sentence {
        for (i, text) in wrapped(layout, sentence).into_iter().enumerate() {
            let y = frame.bottom + (AXIS_EM + 1.0 + 1.35 * i as f64) * font;
            items.push(layout.text([0.8 * font, y], text, Anchor::Start));
        }
    }
    items
}

fn axis(layout: &Layout, frame: &Frame, (from, to): (i32, i32)) -> Vec<Item> {
    let font = layout.font_pt;
    // Every decade has a line; where they stand close, only some have a number.
    let every = ((to - from) as f64 * 4.5 * font / (frame.right - frame.left)).ceil().max(1.0) as i32;
    let mut items = Vec::new();
    for power in from..=to {
        let x = frame.place([f64::from(power), 0.0])[0];
        let ends = vec![[x, frame.top], [x, frame.bottom]];
        items.push(line(ends, layout.solid(layout.palette.grid, 0.8), 1.0));
        if (power - from) % every == 0 {
            let text = if from < -3 || to > 4 {
                let sign = if power < 0 { "⁻" } else { "" };
                format!("10{sign}{}", number::superscript(power.unsigned_abs()))
            } else if power < 0 {
                crate::digits::fixed(10f64.powi(power), power.unsigned_abs() as usize)
            } else {
                number::fixed(10f64.powi(power), 0)
            };
            items.push(layout.text([x, frame.bottom + 1.25 * font], text, Anchor::Middle));
        }
    }
    items.push(Item::Path {
        points: frame.corners(),
        closed: true,
        stroke: Some(layout.solid(layout.palette.text, 0.8)),
        fill: None,
        opacity: 1.0,
    });
    let middle = 0.5 * (frame.left + frame.right);
    items.push(layout.text([middle, frame.bottom + 2.75 * font], "energy missed / cm⁻¹", Anchor::Middle));
    items
}
