//! Grid, ticks and axis titles.

use super::map::Map;
use super::{GUTTER, Stage};
use crate::figure::{BOND_LENGTH, number};
use crate::gui::look::{self, Look};
use crate::gui::show::text_in;
use eframe::egui;
use egui::{Align2, Stroke, Ui, pos2};

/// Marks at round values.
#[derive(Clone, Debug, PartialEq)]
pub struct Ticks {
    /// The values.
    pub values: Vec<f64>,
    /// Decimals that tell them apart.
    pub decimals: usize,
}

/// Marks over `range` at least `min_px` apart where `px` points are given to the range; steps of 1, 2
/// or 5 times a power of ten.
pub fn ticks((from, to): (f64, f64), px: f32, min_px: f32) -> Ticks {
    let none = Ticks { values: Vec::new(), decimals: 0 };
    let least = (to - from) * f64::from(min_px / px.max(1.0));
    if !(least.is_finite() && least > 0.0) {
        return none;
    }
    let power = 10_f64.powi(least.log10().floor() as i32);
    let step = [1.0, 2.0, 5.0, 10.0].map(|m| m * power).into_iter().find(|s| *s >= least * 0.999);
    let Some(step) = step.filter(|s| (to - from) / s < 400.0) else { return none };
    let first = (from / step).ceil() as i64;
    let last = (to / step).floor() as i64;
    let values = (first..=last).map(|i| i as f64 * step).collect();
    Ticks { values, decimals: (-(step.log10() + 1e-9).floor()).clamp(0.0, 9.0) as usize }
}

/// Grid lines across a rectangle.
pub fn grid_ui(ui: &Ui, map: &Map, x: &Ticks, y: &Ticks) {
    let look = Look::of(ui);
    let stroke = Stroke::new(1.0, look.grid);
    let painter = ui.painter().with_clip_rect(map.rect);
    for &value in &x.values {
        painter.vline(map.x(value).round() + 0.5, map.rect.y_range(), stroke);
    }
    for &value in &y.values {
        painter.hline(map.rect.x_range(), map.y(value).round() + 0.5, stroke);
    }
}

/// The marks of the bond-length axis, the same in plot and strip.
pub fn x_ticks(map: &Map) -> Ticks {
    ticks(map.bounds.x, map.rect.width(), 64.0)
}

/// Figures along the left side of a rectangle; `text` writes a value.
pub fn y_labels_ui(ui: &Ui, map: &Map, y: &Ticks, text: impl Fn(f64) -> String) {
    let look = Look::of(ui);
    let font = look::figures(look::SMALL);
    for &value in &y.values {
        let at = map.y(value);
        if at > map.rect.top() + 3.0 && at < map.rect.bottom() - 3.0 {
            text_in(ui, pos2(map.rect.left() - 7.0, at), Align2::RIGHT_CENTER, &text(value), &font, look.dim);
        }
    }
}

/// A title written upwards at the far left of a rectangle; left out where it does not fit.
pub fn y_title_ui(ui: &Ui, map: &Map, title: &str) {
    let look = Look::of(ui);
    let galley = ui.painter().layout_no_wrap(title.to_owned(), look::plain(look::SMALL), look.dim);
    let size = galley.size();
    if size.x > map.rect.height() {
        return;
    }
    let at = pos2(map.rect.left() - GUTTER, map.rect.center().y + size.x / 2.0);
    ui.painter()
        .add(egui::epaint::TextShape::new(at, galley, look.dim).with_angle(-std::f32::consts::FRAC_PI_2));
}

/// The bond-length axis under the strip.
pub(super) fn x_axis_ui(ui: &Ui, stage: &Stage, map: &Map) {
    let look = Look::of(ui);
    let font = look::figures(look::SMALL);
    let marks = x_ticks(map);
    for &value in &marks.values {
        let x = map.x(value);
        let text = number::fixed(value, marks.decimals.max(1));
        text_in(ui, pos2(x, stage.strip.bottom() + 5.0), Align2::CENTER_TOP, &text, &font, look.dim);
    }
    let at = pos2(stage.strip.center().x, stage.strip.bottom() + 23.0);
    text_in(ui, at, Align2::CENTER_TOP, &BOND_LENGTH.text(), &look::plain(look::SMALL), look.dim);
}

/// A hairline round a rectangle.
pub fn frame_ui(ui: &Ui, map: &Map) {
    let look = Look::of(ui);
    ui.painter().rect_stroke(map.rect, 2.0, Stroke::new(1.0, look.rule), egui::StrokeKind::Middle);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_and_apart() {
        let t = ticks((1.02, 2.62), 640.0, 64.0);
        assert_eq!(t.decimals, 1);
        assert_eq!(t.values.len(), 8);
        assert!((t.values[0] - 1.2).abs() < 1e-12);
        assert_eq!(
            ticks((-250.0, 7600.0), 500.0, 44.0).values,
            [0.0, 1000.0, 2000.0, 3000.0, 4000.0, 5000.0, 6000.0, 7000.0]
        );
    }

    #[test]
    fn bad_ranges_have_none() {
        for range in [(0.0, 0.0), (1.0, 0.0), (f64::NAN, 1.0), (0.0, f64::INFINITY)] {
            assert!(ticks(range, 100.0, 20.0).values.is_empty());
        }
    }
}
