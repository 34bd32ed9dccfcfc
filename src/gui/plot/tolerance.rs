//! The tolerance lines of the gauge: the upper one has a grip.

use super::map::Map;
use super::steps::Slider;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::state::State;
use eframe::egui;
use egui::{CursorIcon, Rect, Response, Sense, Stroke, StrokeKind, Ui, pos2, vec2};

/// Name of the handle, as read aloud.
const NAME: &str = "Tolerance of the reach in percent";
/// Bounds of the tolerance in percent.
const LIMITS: (f64, f64) = (0.1, 50.0);

pub(super) fn tolerance_ui(ui: &mut Ui, state: &State, map: &Map, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let percent = 100.0 * settings.reach.tolerance;
    if !map.sees_y(percent) {
        return;
    }
    let y = map.y(percent);
    let grip = pos2(map.rect.right() - 26.0, y);
    let line = Rect::from_min_max(pos2(map.rect.left(), y - 3.0), pos2(map.rect.right(), y + 3.0));
    let id = ui.scope_id().with(NAME);
    let response = ui
        .interact(
            line.union(Rect::from_center_size(grip, vec2(30.0, look::GRAB - 4.0))),
            id,
            Sense::click_and_drag() | Sense::FOCUSABLE,
        )
        .on_hover_and_drag_cursor(CursorIcon::ResizeVertical);
    let slider = Slider { name: NAME, value: percent, limits: LIMITS, step: 0.5, sideways: false };
    if let Some(wanted) = wanted(ui, &response, &slider, map) {
        let tolerance = wanted.clamp(LIMITS.0, LIMITS.1) / 100.0;
        if (tolerance - settings.reach.tolerance).abs() > 1e-9 {
            out.push(Command::SetTolerance { tolerance, resting: !response.dragged() });
        }
    }
    if response.drag_stopped() {
        out.push(Command::Settle);
    }
    slider.tell(ui, &response);
    draw(ui, &response, map, grip, percent);
}

/// Where the hand, the keys or assistive technology want the tolerance, in percent.
fn wanted(ui: &Ui, response: &Response, slider: &Slider<'_>, map: &Map) -> Option<f64> {
    if response.dragged() {
        let pointer = response.interact_pointer_pos().filter(|_| !response.drag_started())?;
        return Some((map.y_value(pointer.y) * 10.0).round() / 10.0);
    }
    slider.wanted(ui, response)
}

fn draw(ui: &Ui, response: &Response, map: &Map, grip: egui::Pos2, percent: f64) {
    let look = Look::of(ui);
    let lively = response.hovered() || response.dragged() || response.has_focus();
    let size = if lively { vec2(28.0, 8.0) } else { vec2(24.0, 6.0) };
    ui.painter().rect_filled(Rect::from_center_size(grip, size), 3.0, look.reach);
    if !lively {
        return;
    }
    ui.painter().hline(map.rect.x_range(), grip.y, Stroke::new(1.8, look.reach));
    let text = format!("tolerance {} %", number::fixed(percent, 1));
    let galley = ui.painter().layout_no_wrap(text, look::figures(look::SMALL), look.text);
    let size = galley.size() + vec2(12.0, 6.0);
    let rect = Rect::from_min_size(pos2(grip.x - 22.0 - size.x, grip.y - size.y / 2.0), size);
    ui.painter().rect(rect, 4.0, look.raised, Stroke::new(1.0, look.rule), StrokeKind::Middle);
    ui.painter().galley(rect.min + vec2(6.0, 3.0), galley, look.text);
}
