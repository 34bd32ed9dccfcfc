//! The edges of the fit window: lines with grips that can be dragged, stepped with the arrow keys and
//! set by assistive technology.

use super::map::Map;
use super::points::{in_scan_unit, snap};
use super::steps::Slider;
use super::{Stage, points};
use crate::figure::number;
use crate::fit::Window;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::state::{State, Study};
use crate::units::LengthUnit;
use eframe::egui;
use egui::{Color32, CursorIcon, Pos2, Rect, Response, Sense, Shape, Stroke, Ui, pos2, vec2};

/// Names of the handles, as read aloud.
pub const NAMES: [&str; 2] = ["Lower edge of the fit window", "Upper edge of the fit window"];
/// Distance on the screen within which an edge snaps to a point.
const SNAP: f32 = 7.0;
/// One step of the arrow keys in angstrom.
const STEP: f64 = 0.01;
/// Height of the middle of a grip above the bottom of the plot.
const GRIP_ABOVE: f32 = 19.0;

pub(super) fn window_edges_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    stage: &Stage,
    map: &Map,
    out: &mut Vec<Command>,
) {
    for upper in [false, true] {
        edge_ui(ui, state, study, stage, map, upper, out);
    }
}

fn edge_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    stage: &Stage,
    map: &Map,
    upper: bool,
    out: &mut Vec<Command>,
) {
    let Some(window) = state.window() else { return };
    let edge = if upper { window.to } else { window.from };
    let value = window.unit.convert(edge, LengthUnit::Angstrom);
    let seen = map.sees_x(value);
    let x = map.x(value.clamp(map.bounds.x.0, map.bounds.x.1));
    let grip = pos2(x, stage.plot.bottom() - GRIP_ABOVE);
    let hit = if seen {
        Rect::from_center_size(pos2(x, stage.plot.center().y), vec2(8.0, stage.plot.height()))
            .union(Rect::from_center_size(grip, vec2(look::GRAB, 30.0)))
    } else {
        Rect::from_center_size(grip, vec2(look::GRAB + 6.0, 34.0))
    };
    let name = NAMES[usize::from(upper)];
    let id = ui.scope_id().with(name);
    let response = ui
        .interact(hit, id, Sense::click_and_drag() | Sense::FOCUSABLE)
        .on_hover_and_drag_cursor(CursorIcon::ResizeHorizontal);
    let limits = limits(study, window, upper);
    let shown = |edge: f64| window.unit.convert(edge, LengthUnit::Angstrom);
    let slider =
        Slider { name, value, limits: (shown(limits.0), shown(limits.1)), step: STEP, sideways: true };
    if let Some(wanted) = wanted_edge(ui, &response, &slider, study, map, window.unit) {
        let wanted = wanted.clamp(limits.0, limits.1);
        let mut changed = window;
        if upper {
            changed.to = wanted;
        } else {
            changed.from = wanted;
        }
        if changed != window {
            out.push(Command::SetWindow { window: changed, resting: !response.dragged() });
        }
    }
    if response.drag_stopped() {
        out.push(Command::Settle);
    }
    click_through(&response, study, map, out);
    slider.tell(ui, &response);
    draw(ui, &response, state, stage, grip, value, seen, upper);
}

/// How far an edge may go, in the unit of the window: it keeps off the other edge and on the scan.
fn limits(study: &Study, window: Window, upper: bool) -> (f64, f64) {
    let r = || study.pictures.points.iter().map(|p| p.r_as_read);
    let (first, last) = (r().fold(f64::INFINITY, f64::min), r().fold(0.0, f64::max));
    let apart = LengthUnit::Angstrom.convert(0.005, window.unit);
    let (low, high) = if upper {
        (window.from + apart, last.max(window.to))
    } else {
        (first.min(window.from), window.to - apart)
    };
    (low, high.max(low))
}

/// Where the hand, the keys or assistive technology want the edge, in the unit of the scan.
fn wanted_edge(
    ui: &Ui,
    response: &Response,
    slider: &Slider<'_>,
    study: &Study,
    map: &Map,
    unit: LengthUnit,
) -> Option<f64> {
    if response.dragged() {
        let pointer = response.interact_pointer_pos()?;
        // Nothing moves before the hand does.
        if response.drag_started() {
            return None;
        }
        let near = snap(&study.pictures.points, pointer.x, map, SNAP);
        return Some(near.map_or_else(|| in_scan_unit(map.x_value(pointer.x), unit), |p| p.r_as_read));
    }
    slider.wanted(ui, response).map(|v| in_scan_unit(v, unit))
}

/// A click on the line where a point lies is meant for the point.
fn click_through(response: &Response, study: &Study, map: &Map, out: &mut Vec<Command>) {
    let Some(pointer) = response.interact_pointer_pos().filter(|_| response.clicked()) else { return };
    let near = study.pictures.points.iter().find(|p| map.at(p.at).distance(pointer) <= 8.0);
    if let Some(point) = near {
        out.push(points::toggle(point));
    }
}

#[expect(clippy::too_many_arguments, reason = "everything that is drawn of one edge")]
fn draw(
    ui: &Ui,
    response: &Response,
    state: &State,
    stage: &Stage,
    grip: Pos2,
    value: f64,
    seen: bool,
    upper: bool,
) {
    let look = Look::of(ui);
    let lively = response.hovered() || response.dragged() || response.has_focus();
    let color = if lively { look.accent } else { look.accent.gamma_multiply(0.85) };
    if !seen {
        arrow(ui, grip, color, upper);
    } else {
        let width = if lively { 2.0 } else { 1.4 };
        ui.painter().vline(grip.x, stage.plot.y_range(), Stroke::new(width, color));
        let size = if lively { vec2(9.0, 28.0) } else { vec2(7.0, 26.0) };
        ui.painter().rect_filled(Rect::from_center_size(grip, size), 3.0, color);
        for offset in [-4.0, 0.0, 4.0] {
            let line = [pos2(grip.x - 1.5, grip.y + offset), pos2(grip.x + 1.5, grip.y + offset)];
            ui.painter().line_segment(line, Stroke::new(1.0, look.panel));
        }
    }
    if lively {
        let inside = state.points_in_window();
        let text = format!("{} Å · {inside} points", number::fixed(value, 3));
        tag(ui, stage, grip, &text, upper);
    }
}

/// An arrow towards an edge beyond the view.
fn arrow(ui: &Ui, grip: Pos2, color: Color32, upper: bool) {
    let look = Look::of(ui);
    let inward = if upper { -1.0 } else { 1.0 };
    let tip = grip + vec2(2.0 * inward, 0.0);
    let back = vec2(9.0 * inward, 7.0);
    let points = vec![tip, tip + back, tip + vec2(back.x, -back.y)];
    ui.painter().add(Shape::convex_polygon(points, color, Stroke::new(1.0, look.panel)));
}

/// The read-out beside a grip, on the side where the window is not.
fn tag(ui: &Ui, stage: &Stage, grip: Pos2, text: &str, upper: bool) {
    let look = Look::of(ui);
    let galley = ui.painter().layout_no_wrap(text.to_owned(), look::figures(look::SMALL), look.text);
    let size = galley.size() + vec2(12.0, 8.0);
    let room_right = stage.plot.right() - grip.x - 12.0 > size.x;
    let room_left = grip.x - stage.plot.left() - 12.0 > size.x;
    let right = if upper { room_right || !room_left } else { !room_left && room_right };
    let left = if right { grip.x + 10.0 } else { grip.x - 10.0 - size.x };
    let rect = Rect::from_min_size(pos2(left, grip.y - size.y / 2.0), size);
    ui.painter().rect(rect, 4.0, look.raised, Stroke::new(1.0, look.rule), egui::StrokeKind::Middle);
    ui.painter().galley(rect.min + vec2(6.0, 4.0), galley, look.text);
}
