//! Thermal pictures on paper: two columns of panels under one legend; the temperature stands below the last row.

use super::axes::{self, Frame};
use super::{Anchor, Item, Layout, legend, panel};
use crate::figure::geometry::Bounds;
use crate::figure::{Role, Series, Shape};
use crate::figure::{ThermalPanel, content_bounds};

/// Columns of panels.
const COLUMNS: usize = 2;
/// Room between rows and between columns, in em.
const BETWEEN_ROWS_EM: f64 = 1.1;
const BETWEEN_COLUMNS_EM: f64 = 1.0;

/// Height of the picture as a share of its width.
pub const HEIGHT: f64 = 1.05;

/// All panels; none where there is nothing in them.
pub fn items(layout: &Layout, panels: &[ThermalPanel]) -> Option<Vec<Item>> {
    let font = layout.font_pt;
    let bounds: Vec<Bounds> = panels.iter().map(bounds).collect::<Option<_>>()?;
    let highest = bounds.iter().map(|b| b.x.1).fold(0.0, f64::max);
    let rows = panels.len().div_ceil(COLUMNS);
    if rows == 0 || highest <= 0.0 {
        return None;
    }
    // The lines first; the zero line explains itself.
    let mut all: Vec<&Series> = panels.iter().flat_map(|p| &p.figure.series).collect();
    all.retain(|s| s.role != Role::Zero);
    all.sort_by_key(|s| match (s.role, &s.shape) {
        (Role::Scanned, Shape::Line(_)) => 0,
        (Role::Parabola, _) => 1,
        (Role::Morse, _) => 2,
        (_, Shape::Points(_)) => 3,
        (Role::Tolerance, _) => 4,
        _ => 5,
    });
    let entries = panel::entries_of(layout, all.into_iter());
    let margin = 0.8 * font;
    let width = layout.size_pt[0] - 2.0 * margin;
    let top = margin + legend::height(layout, &entries, width) + 0.4 * font;
    let bottom = layout.size_pt[1] - axes::bottom_room(layout);
    let row = (bottom - top + BETWEEN_ROWS_EM * font) / rows as f64;
    let column = (width + BETWEEN_COLUMNS_EM * font) / COLUMNS as f64;
    // All panels of a column begin at the same place: the widest numbers decide.
    let left_room = |c: usize| {
        let own = bounds.iter().skip(c).step_by(COLUMNS);
        own.map(|b| axes::left_room(layout, b.y, row)).fold(0.0, f64::max)
    };
    let mut items = Vec::new();
    for (i, (panel, b)) in panels.iter().zip(&bounds).enumerate() {
        let (r, c) = (i / COLUMNS, i % COLUMNS);
        let left = margin + c as f64 * column;
        let frame = Frame {
            left: left + left_room(c) - 0.6 * font,
            right: left + column - (BETWEEN_COLUMNS_EM + 0.6) * font,
            top: top + r as f64 * row,
            bottom: top + (r + 1) as f64 * row - BETWEEN_ROWS_EM * font,
            bounds: Bounds { x: (0.0, highest), y: b.y },
        };
        items.extend(axes::grid(layout, &frame));
        items.extend(panel.figure.series.iter().flat_map(|s| panel::drawn(layout, &frame, s)));
        items.extend(marks(layout, &frame, panel));
        let last = i + COLUMNS >= panels.len();
        items.extend(axes::axes_at(layout, &frame, last.then_some(&panel.figure.x), &panel.figure.y, left));
    }
    items.extend(legend::items(layout, &entries, [margin, margin], width));
    Some(items)
}

/// The names beside the lines, above their right ends, each clear of the one before.
fn marks(layout: &Layout, frame: &Frame, panel: &ThermalPanel) -> Vec<Item> {
    let mut items = Vec::new();
    let mut used: Vec<f64> = Vec::new();
    for (at, text) in &panel.marks {
        let place = frame.place(*at);
        let base = place[1] - 0.35 * layout.font_pt;
        let clear = used.iter().all(|u| (u - base).abs() > layout.font_pt);
        if clear && base - layout.font_pt > frame.top && base < frame.bottom {
            items.push(layout.text([place[0] - 0.3 * layout.font_pt, base], text.clone(), Anchor::End));
            used.push(base);
        }
    }
    items
}

/// What a panel shows.
fn bounds(panel: &ThermalPanel) -> Option<Bounds> {
    let content = content_bounds(&panel.figure)?;
    let (low, high) = panel.range.unwrap_or_else(|| {
        let (a, b) = content.y;
        // A range too narrow for its own numbers says nothing: a thousandth of the value at least.
        let span = (b - a).max(1e-3 * b.abs()).max(1e-12);
        let middle = 0.5 * (a + b);
        (middle - 0.56 * span, middle + 0.56 * span)
    });
    Some(Bounds { x: (0.0, content.x.1), y: (low, high) }).filter(Bounds::is_valid)
}
