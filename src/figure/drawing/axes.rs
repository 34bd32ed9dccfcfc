//! Axes: ticks at round numbers, grid, frame, titles with units.

use super::{Anchor, Item, Layout, line};
use crate::figure::geometry::Bounds;
use crate::figure::{Axis, number};

/// Where a panel lies on the paper and what it shows.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// Left edge in points.
    pub left: f64,
    /// Right edge in points.
    pub right: f64,
    /// Upper edge in points.
    pub top: f64,
    /// Lower edge in points.
    pub bottom: f64,
    /// What is shown.
    pub bounds: Bounds,
}

impl Frame {
    /// Place of a point on the paper.
    pub fn place(&self, [x, y]: [f64; 2]) -> [f64; 2] {
        let part = |v: f64, (a, b): (f64, f64)| (v - a) / (b - a);
        [
            self.left + part(x, self.bounds.x) * (self.right - self.left),
            self.bottom - part(y, self.bounds.y) * (self.bottom - self.top),
        ]
    }

    /// The point of the figure at a place on the paper; none outside the panel.
    pub fn value(&self, [x, y]: [f64; 2]) -> Option<[f64; 2]> {
        let inside = (self.left..=self.right).contains(&x) && (self.top..=self.bottom).contains(&y);
        let (a, b) = self.bounds.x;
        let (c, d) = self.bounds.y;
        inside.then(|| {
            [
                a + (x - self.left) / (self.right - self.left) * (b - a),
                c + (self.bottom - y) / (self.bottom - self.top) * (d - c),
            ]
        })
    }

    pub(super) fn corners(&self) -> Vec<[f64; 2]> {
        vec![
            [self.left, self.top],
            [self.right, self.top],
            [self.right, self.bottom],
            [self.left, self.bottom],
        ]
    }
}

/// Round numbers in a range, about `wanted` of them, and the decimals they need.
pub fn ticks((from, to): (f64, f64), wanted: f64) -> (Vec<f64>, usize) {
    let rough = (to - from) / wanted.max(1.0);
    if !(rough > 0.0 && rough.is_finite()) {
        return (Vec::new(), 0);
    }
    let power = rough.log10().floor();
    let ten = 10_f64.powf(power);
    let step =
        [1.0, 2.0, 5.0, 10.0].map(|m| m * ten).into_iter().find(|s| *s >= 0.75 * rough).unwrap_or(10.0 * ten);
    let decimals = (-step.log10().floor()).max(0.0) as usize;
    let first = (from / step).ceil() as i64;
    let last = (to / step).floor() as i64;
    ((first..=last.min(first + 100)).map(|i| i as f64 * step).collect(), decimals)
}

fn labels(values: &[f64], decimals: usize) -> Vec<String> {
    values.iter().map(|v| number::fixed(*v, decimals)).collect()
}

/// Room that the vertical axis needs at the left, in points.
pub fn left_room(layout: &Layout, y: (f64, f64), height_pt: f64) -> f64 {
    let (values, decimals) = ticks(y, wanted_up(layout, height_pt));
    let widest =
        labels(&values, decimals).iter().map(|l| layout.width(l, layout.font_pt)).fold(0.0, f64::max);
    widest + 2.9 * layout.font_pt
}

/// Room that the horizontal axis needs below.
pub fn bottom_room(layout: &Layout) -> f64 {
    3.4 * layout.font_pt
}

fn wanted_up(layout: &Layout, height_pt: f64) -> f64 {
    (height_pt / (3.2 * layout.font_pt)).clamp(3.0, 9.0)
}

/// The grid, to be drawn behind everything.
pub fn grid(layout: &Layout, frame: &Frame) -> Vec<Item> {
    let stroke = || layout.solid(layout.palette.grid, 0.5);
    let (x, y) = all_ticks(layout, frame);
    let upright = x.0.iter().map(|v| {
        let at = frame.place([*v, frame.bounds.y.0])[0];
        line(vec![[at, frame.top], [at, frame.bottom]], stroke(), 1.0)
    });
    let level = y.0.iter().map(|v| {
        let at = frame.place([frame.bounds.x.0, *v])[1];
        line(vec![[frame.left, at], [frame.right, at]], stroke(), 1.0)
    });
    upright.chain(level).collect()
}

/// Tick values with the decimals they need.
type Ticks = (Vec<f64>, usize);

fn all_ticks(layout: &Layout, frame: &Frame) -> (Ticks, Ticks) {
    let wide = (frame.right - frame.left) / (6.5 * layout.font_pt);
    (
        ticks(frame.bounds.x, wide.clamp(2.0, 10.0)),
        ticks(frame.bounds.y, wanted_up(layout, frame.bottom - frame.top)),
    )
}

/// Frame, tick marks, numbers and titles; the vertical title at the left edge of the paper.
pub fn axes(layout: &Layout, frame: &Frame, x: Option<&Axis>, y: &Axis) -> Vec<Item> {
    axes_at(layout, frame, x, y, 0.0)
}

/// The same with the vertical title at `left_pt`.
pub fn axes_at(layout: &Layout, frame: &Frame, x: Option<&Axis>, y: &Axis, left_pt: f64) -> Vec<Item> {
    let (font, mark) = (layout.font_pt, 0.35 * layout.font_pt);
    let ((x_values, x_decimals), (y_values, y_decimals)) = all_ticks(layout, frame);
    let stroke = || layout.solid(layout.palette.text, 0.8);
    let mut items = vec![Item::Path {
        points: frame.corners(),
        closed: true,
        stroke: Some(stroke()),
        fill: None,
        opacity: 1.0,
    }];
    if let Some(x) = x {
        for (value, label) in x_values.iter().zip(labels(&x_values, x_decimals)) {
            let at = frame.place([*value, frame.bounds.y.0])[0];
            items.push(line(vec![[at, frame.bottom], [at, frame.bottom - mark]], stroke(), 1.0));
            items.push(layout.text([at, frame.bottom + 1.25 * font], label, Anchor::Middle));
        }
        let middle = 0.5 * (frame.left + frame.right);
        items.push(layout.text([middle, frame.bottom + 2.75 * font], x.text(), Anchor::Middle));
    }
    for (value, label) in y_values.iter().zip(labels(&y_values, y_decimals)) {
        let at = frame.place([frame.bounds.x.0, *value])[1];
        items.push(line(vec![[frame.left, at], [frame.left + mark, at]], stroke(), 1.0));
        items.push(layout.text([frame.left - 0.5 * font, at + 0.35 * font], label, Anchor::End));
    }
    items.push(Item::Text {
        at: [left_pt + 1.15 * font, 0.5 * (frame.top + frame.bottom)],
        text: y.text(),
        size_pt: font,
        colour: layout.palette.text,
        anchor: Anchor::Middle,
        upwards: true,
    });
    items
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_and_inside() {
        assert_eq!(ticks((0.0, 10.0), 5.0), (vec![0.0, 2.0, 4.0, 6.0, 8.0, 10.0], 0));
        let (values, decimals) = ticks((1.31, 2.04), 6.0);
        assert_eq!(decimals, 1);
        assert!(values.first().is_some_and(|v| (*v - 1.4).abs() < 1e-12));
        assert!(values.len() >= 3, "{values:?}");
        assert_eq!(ticks((1.0, 1.0), 5.0), (Vec::new(), 0));
        assert_eq!(ticks((0.0, f64::NAN), 5.0), (Vec::new(), 0));
    }
}
