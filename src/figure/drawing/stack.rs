//! Figures one above the other on one abscissa, under one legend.

use super::axes::{self, Frame};
use super::{Item, Layout, legend, panel};
use crate::figure::geometry::Bounds;
use crate::figure::{Figure, Shape};

/// The figures with what is shown of each, and where each lies.
pub fn items(layout: &Layout, figures: &[Figure], bounds: &[Bounds]) -> (Vec<Item>, Vec<Frame>) {
    let font = layout.font_pt;
    let margin = 0.8 * font;
    let rooms = bounds.iter().map(|b| axes::left_room(layout, b.y, layout.size_pt[1] / figures.len() as f64));
    let left = rooms.fold(0.0, f64::max);
    let right = layout.size_pt[0] - margin;
    let mut entries: Vec<legend::Entry> = Vec::new();
    for (figure, bounds) in figures.iter().zip(bounds) {
        for entry in panel::entries(layout, figure, bounds, None) {
            if !entries.iter().any(|e| e.label == entry.label) {
                entries.push(entry);
            }
        }
    }
    let top = margin + legend::height(layout, &entries, right - margin) + 0.4 * font;
    let bottom = layout.size_pt[1] - axes::bottom_room(layout);
    let between = 0.9 * font;
    let count = figures.len() as f64;
    let height = (bottom - top - between * (count - 1.0)) / count;
    let mut items = legend::items(layout, &entries, [margin, margin], right - margin);
    let mut frames = Vec::new();
    for (i, (figure, bounds)) in figures.iter().zip(bounds).enumerate() {
        let top = top + i as f64 * (height + between);
        let frame = Frame { left, right, top, bottom: top + height, bounds: *bounds };
        items.extend(axes::grid(layout, &frame));
        let is_band = |s: &&crate::figure::Series| matches!(s.shape, Shape::Band(..));
        for series in figure.series.iter().filter(is_band) {
            items.extend(panel::drawn(layout, &frame, series));
        }
        for series in figure.series.iter().filter(|s| !is_band(s)) {
            items.extend(panel::drawn(layout, &frame, series));
        }
        let last = i + 1 == figures.len();
        items.extend(axes::axes(layout, &frame, last.then_some(&figure.x), &figure.y));
        frames.push(frame);
    }
    (items, frames)
}
