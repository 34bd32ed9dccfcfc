//! The legend: one entry a series, in rows above the plot, where it covers nothing.

use super::comparison::{Mark, mark};
use super::{Anchor, Item, Layout, Rgb, Stroke, area, line};

/// The sign beside a name.
pub enum Sign {
    /// A piece of the line.
    Line(Stroke),
    /// An area.
    Area(Rgb, f64),
    /// A ring.
    Ring(Stroke, Rgb),
    /// A mark told apart by its form.
    Mark(Mark, Stroke),
}

/// One entry.
pub struct Entry {
    pub label: String,
    pub sign: Sign,
}

const SIGN_EM: f64 = 2.2;
const GAP_EM: f64 = 0.5;
const BETWEEN_EM: f64 = 1.5;
const ROW_EM: f64 = 1.5;

/// The entries in rows of a width: for each entry its row and its left end from the row's start.
fn rows(layout: &Layout, entries: &[Entry], width_pt: f64) -> Vec<(usize, f64)> {
    let font = layout.font_pt;
    let (mut row, mut x) = (0, 0.0);
    let mut places = Vec::new();
    for entry in entries {
        let own = (SIGN_EM + GAP_EM) * font + layout.width(&entry.label, font);
        if x > 0.0 && x + own > width_pt {
            row += 1;
            x = 0.0;
        }
        places.push((row, x));
        x += own + BETWEEN_EM * font;
    }
    places
}

/// Height of the legend in points.
pub fn height(layout: &Layout, entries: &[Entry], width_pt: f64) -> f64 {
    let rows = rows(layout, entries, width_pt).last().map_or(0, |(row, _)| row + 1);
    rows as f64 * ROW_EM * layout.font_pt
}

/// The legend with its upper left corner at `at`.
pub fn items(layout: &Layout, entries: &[Entry], at: [f64; 2], width_pt: f64) -> Vec<Item> {
    let font = layout.font_pt;
    let mut items = Vec::new();
    for (entry, (row, x)) in entries.iter().zip(rows(layout, entries, width_pt)) {
        let left = at[0] + x;
        let base = at[1] + (row as f64 * ROW_EM + 1.0) * font;
        let (right, middle) = (left + SIGN_EM * font, base - 0.35 * font);
        let sign = match &entry.sign {
            Sign::Mark(form, stroke) => {
                items.extend(mark(layout, *form, [0.5 * (left + right), middle], stroke));
                None
            }
            Sign::Line(stroke) => Some(line(vec![[left, middle], [right, middle]], stroke.clone(), 1.0)),
            Sign::Area(fill, opacity) => {
                let half = 0.4 * font;
                let corners = [[left, middle - half], [right, middle - half], [right, middle + half]];
                Some(area([&corners[..], &[[left, middle + half]]].concat(), *fill, *opacity))
            }
            Sign::Ring(stroke, fill) => Some(Item::Circle {
                centre: [0.5 * (left + right), middle],
                radius_pt: 0.26 * font,
                stroke: stroke.clone(),
                fill: *fill,
                opacity: 1.0,
            }),
        };
        items.extend(sign);
        items.push(layout.text([right + GAP_EM * font, base], entry.label.clone(), Anchor::Start));
    }
    items
}
