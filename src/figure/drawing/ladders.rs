//! Ladders on paper: one column a model, rungs of the same v tied.

use super::axes::{self, Frame};
use super::{Anchor, Item, Layout, line};
use crate::figure::geometry::Bounds;
use crate::figure::{Axis, Ladder, Ladders, number};

const ENERGY: Axis = Axis { title: "energy above the minimum", unit: "cm⁻¹" };
/// Half a rung as a fraction of a column.
const HALF_RUNG: f64 = 0.30;

/// The ladders between two energies (cm⁻¹).
pub fn items(layout: &Layout, ladders: &Ladders, y: (f64, f64)) -> Vec<Item> {
    let font = layout.font_pt;
    let columns = ladders.columns.len().max(1) as f64;
    let left = axes::left_room(layout, y, layout.size_pt[1] - 6.0 * font);
    let frame = Frame {
        left,
        right: layout.size_pt[0] - 3.6 * font,
        top: 2.4 * font,
        bottom: layout.size_pt[1] - 2.4 * font,
        bounds: Bounds { x: (0.0, columns), y },
    };
    let shown = |e: f64| e >= y.0 && e <= y.1;
    let mut items = Vec::new();
    for (i, column) in ladders.columns.iter().enumerate() {
        let middle = i as f64 + 0.5;
        items.push(Item::Open(column.label.clone()));
        for (v, &energy) in column.energies_per_cm.iter().enumerate().filter(|(_, e)| shown(**e)) {
            let rung = [middle - HALF_RUNG, middle + HALF_RUNG].map(|x| frame.place([x, energy]));
            items.push(line(rung.to_vec(), layout.stroke(column.role, 1.5), 1.0));
            let above = frame.place([middle, energy]);
            let room = above[1] - 1.4 * font > frame.top;
            if let Some(text) = difference(ladders, column, v, energy).filter(|_| room) {
                let at = [above[0], above[1] - 0.45 * font];
                items.push(layout.dim_text(at, text, Anchor::Middle));
            }
            let next = ladders.columns.get(i + 1).and_then(|c| c.energies_per_cm.get(v));
            if let Some(&next) = next.filter(|e| shown(**e)) {
                let tie = [[middle + HALF_RUNG, energy], [middle + 1.0 - HALF_RUNG, next]];
                let tie = tie.map(|p| frame.place(p)).to_vec();
                items.push(line(tie, layout.solid(layout.palette.dim, 0.5), 0.8));
            }
        }
        items.push(Item::Close);
        let at = frame.place([middle, y.0]);
        items.push(layout.text([at[0], frame.bottom + 1.4 * font], column.label.clone(), Anchor::Middle));
    }
    if ladders.columns.len() > 1 {
        let at = [frame.left, frame.top - 0.6 * font];
        items.push(layout.dim_text(at, "numbers: model minus numerical, in cm⁻¹", Anchor::Start));
    }
    items.extend(names(layout, ladders, &frame, shown));
    items.extend(axes::axes(layout, &frame, None, &ENERGY));
    items
}

/// By how much a model's rung lies above the numerical one, in cm⁻¹.
fn difference(ladders: &Ladders, column: &Ladder, v: usize, energy: f64) -> Option<String> {
    let numerical = ladders.columns.iter().find(|c| c.label == "numerical")?;
    if numerical.label == column.label {
        return None;
    }
    let off = energy - numerical.energies_per_cm.get(v)?;
    Some(number::signed(off, if off.abs() < 9.95 { 1 } else { 0 }))
}

/// v at the right of the last rungs, and the mark of the first level beyond the tolerance.
fn names(layout: &Layout, ladders: &Ladders, frame: &Frame, shown: impl Fn(f64) -> bool) -> Vec<Item> {
    let font = layout.font_pt;
    let mut items = Vec::new();
    let mut last = f64::INFINITY;
    let numerical = ladders.columns.iter().position(|c| c.label == "numerical");
    let Some((column, energies)) = numerical.map(|i| (i, &ladders.columns[i].energies_per_cm)) else {
        return items;
    };
    for (v, &energy) in energies.iter().enumerate().filter(|(_, e)| shown(**e)) {
        let at = frame.place([frame.bounds.x.1, energy]);
        if last - at[1] > 1.1 * font {
            items.push(layout.text(
                [at[0] + 0.4 * font, at[1] + 0.35 * font],
                format!("v = {v}"),
                Anchor::Start,
            ));
            last = at[1];
        }
        if ladders.first_outside == Some(v) {
            let place = frame.place([column as f64 + 0.5, energy]);
            items.push(Item::Open("first level beyond the tolerance".to_owned()));
            items.push(Item::Circle {
                centre: place,
                radius_pt: 0.32 * font,
                stroke: layout.solid(layout.palette.outside, 1.2),
                fill: layout.palette.ground,
                opacity: 1.0,
            });
            items.push(Item::Close);
            let words = layout.text([place[0], place[1] - 0.7 * font], "beyond tolerance", Anchor::Middle);
            items.push(words);
        }
    }
    items
}
