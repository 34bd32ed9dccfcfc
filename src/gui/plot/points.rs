//! The scan's points: rings on the curve, faded outside the window, crossed when set aside.

use super::map::Map;
use crate::figure::PlotPoint;
use crate::gui::command::Command;
use crate::gui::look::Look;
use crate::gui::state::State;
use crate::units::LengthUnit;
use eframe::egui;
use egui::{Stroke, Ui, vec2};

/// What a click on a point does.
pub(super) fn toggle(point: &PlotPoint) -> Command {
    if point.set_aside.is_some() { Command::Restore(point.row) } else { Command::SetAside(point.row) }
}

pub(super) fn points_ui(ui: &Ui, state: &State, points: &[PlotPoint], map: &Map, hovered: Option<usize>) {
    let look = Look::of(ui);
    let painter = ui.painter().with_clip_rect(map.rect.expand(1.0));
    let pointed = state.view.pointed_angstrom;
    for (index, point) in points.iter().enumerate() {
        if !(map.sees_x(point.at[0]) && map.sees_y(point.at[1])) {
            continue;
        }
        let at = map.at(point.at);
        if pointed.is_some_and(|r| (r - point.at[0]).abs() < 1e-6) {
            painter.circle_stroke(at, 9.0, Stroke::new(2.0, look.accent));
        }
        if hovered == Some(index) {
            painter.circle_filled(at, 7.5, look.accent.gamma_multiply(0.3));
        }
        if point.set_aside.is_some() {
            let arm = vec2(3.5, 3.5);
            for arm in [arm, vec2(arm.x, -arm.y)] {
                painter.line_segment([at - arm, at + arm], Stroke::new(1.6, look.stop));
            }
            continue;
        }
        let inside = state.in_window(point);
        let (radius, color) = if inside { (3.6, look.scan) } else { (3.0, look.level) };
        painter.circle(at, radius, look.panel, Stroke::new(1.5, color));
    }
}

/// The point nearest to a bond length (angstrom) within a distance on the screen: what an edge snaps to.
pub(super) fn snap<'a>(points: &'a [PlotPoint], x: f32, map: &Map, within: f32) -> Option<&'a PlotPoint> {
    points
        .iter()
        .map(|p| (p, (map.x(p.at[0]) - x).abs()))
        .filter(|(_, d)| *d <= within)
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .map(|(p, _)| p)
}

/// A bond length in angstrom in the unit of the scan, rounded to a thousandth of an angstrom.
pub(super) fn in_scan_unit(r_angstrom: f64, unit: LengthUnit) -> f64 {
    LengthUnit::Angstrom.convert((r_angstrom * 1000.0).round() / 1000.0, unit)
}
