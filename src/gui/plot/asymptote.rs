//! The energy of the separated atoms as a line across the plot, with a grip at its right end.

use super::Stage;
use super::map::Map;
use super::steps::Slider;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::state::{State, Study};
use crate::potential::Potential;
use crate::potential::curve::OuterTail;
use crate::units::{EnergyUnit, to_per_cm};
use eframe::egui;
use egui::{CursorIcon, Pos2, Rect, Response, Sense, Stroke, Ui, pos2, vec2};

/// Name of the handle, as read aloud.
const NAME: &str = "Energy of the separated atoms above the minimum in wavenumbers";
/// One step of the arrow keys in cm⁻¹.
const STEP: f64 = 10.0;

/// Height of the line in cm⁻¹ above the minimum, and whether it is assumed.
fn height(state: &State, study: &Study) -> Option<(f64, bool)> {
    let curve = study.findings.curve.as_deref()?;
    let v_e = curve.v_e_hartree.value;
    let (_, _, settings) = state.document.focused()?;
    if let Some(given) = settings.interpolation.asymptote {
        return Some((to_per_cm(study.findings.source.energy_unit.to_hartree(given) - v_e), false));
    }
    match curve.outer {
        OuterTail::HardWall { .. } => None,
        _ => Some((to_per_cm(curve.limit_hartree() - v_e), true)),
    }
    .filter(|(e, _)| e.is_finite())
}

pub(super) fn asymptote_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    stage: &Stage,
    map: &Map,
    out: &mut Vec<Command>,
) {
    let Some((above, assumed)) = height(state, study).filter(|(e, _)| map.sees_y(*e)) else { return };
    let y = map.y(above);
    let grip = pos2(stage.plot.right() - 26.0, y);
    let line = Rect::from_min_max(pos2(grip.x - 120.0, y - 4.0), pos2(stage.plot.right(), y + 4.0));
    let response = ui
        .interact(
            line.union(Rect::from_center_size(grip, vec2(30.0, look::GRAB))),
            ui.scope_id().with(NAME),
            Sense::click_and_drag() | Sense::FOCUSABLE,
        )
        .on_hover_and_drag_cursor(CursorIcon::ResizeVertical);
    let slider =
        Slider { name: NAME, value: above, limits: (0.0, f64::INFINITY), step: STEP, sideways: false };
    if let Some(wanted) = wanted(ui, &response, &slider, map)
        && let Some(curve) = &study.findings.curve
    {
        // Below the minimum nothing dissociates.
        let hartree = curve.v_e_hartree.value + EnergyUnit::PerCm.to_hartree(wanted.max(1.0));
        let energy = study.findings.source.energy_unit.from_hartree(hartree);
        out.push(Command::SetAsymptote { energy: Some(energy), resting: !response.dragged() });
    }
    if response.drag_stopped() {
        out.push(Command::Settle);
    }
    slider.tell(ui, &response);
    draw(ui, &response, stage, grip, above, assumed);
}

/// Where the hand, the keys or assistive technology want the line, in cm⁻¹.
fn wanted(ui: &Ui, response: &Response, slider: &Slider<'_>, map: &Map) -> Option<f64> {
    if response.dragged() {
        // Only a hand that moves moves the line: the view may follow the new limit, and a resting pointer
        // would then mean another energy, again and again.
        let moves = !response.drag_started() && response.drag_delta() != egui::Vec2::ZERO;
        let pointer = response.interact_pointer_pos().filter(|_| moves)?;
        return Some(map.y_value(pointer.y).round()).filter(|w| *w != slider.value.round());
    }
    slider.wanted(ui, response)
}

fn draw(ui: &Ui, response: &Response, stage: &Stage, grip: Pos2, above: f64, assumed: bool) {
    let look = Look::of(ui);
    let lively = response.hovered() || response.dragged() || response.has_focus();
    let color = if assumed && !lively { look.level } else { look.accent };
    let ends = [pos2(stage.plot.left(), grip.y), pos2(stage.plot.right(), grip.y)];
    let width = if lively { 1.8 } else { 1.2 };
    ui.painter().extend(egui::Shape::dashed_line(&ends, Stroke::new(width, color), 9.0, 5.0));
    let size = if lively { vec2(28.0, 9.0) } else { vec2(24.0, 7.0) };
    ui.painter().rect_filled(Rect::from_center_size(grip, size), 3.0, color);
    let who = if assumed { "assumed" } else { "given" };
    let text = if lively {
        format!("separated atoms {} cm⁻¹, {who}", number::fixed(above, 0))
    } else {
        format!("separated atoms, {who}")
    };
    let galley = ui.painter().layout_no_wrap(text, look::plain(look::SMALL), color);
    let size = galley.size();
    let above_line = grip.y - size.y - 8.0 > stage.plot.top();
    let top = if above_line { grip.y - size.y - 5.0 } else { grip.y + 5.0 };
    let rect = Rect::from_min_size(pos2(stage.plot.right() - 8.0 - size.x, top), size);
    ui.painter().rect_filled(rect.expand2(vec2(3.0, 0.0)), 3.0, look.panel.gamma_multiply(0.85));
    ui.painter().galley(rect.min, galley, color);
}
