//! The tolerance lines of the gauge: the upper one has a grip.

use super::map::Map;
use super::steps::Slider;
use crate::figure::{GaugeMeasure, number};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::unit;
use crate::gui::state::State;
use crate::reach::{AbsoluteTolerance, ReachSettings};
use crate::units::{EnergyUnit, to_per_cm};
use eframe::egui;
use egui::{CursorIcon, Rect, Response, Sense, Stroke, StrokeKind, Ui, pos2, vec2};

/// Bounds of the tolerance in percent.
const PERCENT: (f64, f64) = (0.1, 50.0);
/// Bounds of the absolute tolerance in cm⁻¹.
const PER_CM: (f64, f64) = (0.01, 20_000.0);

/// The tolerance that a gauge has, as a handle.
struct Handle {
    /// Name, as read aloud.
    name: String,
    /// In its own unit.
    value: f64,
    /// Its unit as written.
    unit: &'static str,
    /// What the figure has for one of the unit.
    figure_per_unit: f64,
    limits: (f64, f64),
    step: f64,
}

impl Handle {
    /// None where the tolerance is no single number.
    fn of(measure: GaugeMeasure, settings: &ReachSettings) -> Option<Self> {
        match measure {
            GaugeMeasure::EnergyPercent | GaugeMeasure::ForcePercent => Some(Self {
                name: "Tolerance of the reach in percent".to_owned(),
                value: 100.0 * settings.tolerance,
                unit: "%",
                figure_per_unit: 1.0,
                limits: PERCENT,
                step: 0.5,
            }),
            GaugeMeasure::EnergyPerCm => {
                let AbsoluteTolerance { value, unit: of } = settings.absolute;
                let figure_per_unit = to_per_cm(of.to_hartree(1.0));
                Some(Self {
                    name: format!("Absolute tolerance of the reach in {}", unit(of)),
                    value,
                    unit: unit(of),
                    figure_per_unit,
                    limits: (PER_CM.0 / figure_per_unit, PER_CM.1 / figure_per_unit),
                    step: step(of),
                })
            }
            GaugeMeasure::ForcePerCmAngstrom => None,
        }
    }

    fn command(
        &self,
        measure: GaugeMeasure,
        settings: &ReachSettings,
        wanted: f64,
        resting: bool,
    ) -> Command {
        let value = wanted.clamp(self.limits.0, self.limits.1);
        match measure {
            GaugeMeasure::EnergyPerCm => {
                let tolerance = AbsoluteTolerance { value, ..settings.absolute };
                Command::SetAbsoluteTolerance { tolerance, resting }
            }
            _ => Command::SetTolerance { tolerance: value / 100.0, resting },
        }
    }
}

/// A step of the arrow keys, and what a drag is rounded to.
pub const fn step(unit: EnergyUnit) -> f64 {
    match unit {
        EnergyUnit::PerCm => 5.0,
        EnergyUnit::Hartree => 1e-4,
        EnergyUnit::Electronvolt => 1e-3,
        EnergyUnit::KilojoulePerMole => 0.1,
        EnergyUnit::KilocaloriePerMole => 0.05,
        EnergyUnit::Millielectronvolt => 1.0,
    }
}

pub(super) fn tolerance_ui(ui: &mut Ui, state: &State, map: &Map, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let measure = state.view.gauge;
    let Some(handle) = Handle::of(measure, &settings.reach) else { return };
    let at = handle.value * handle.figure_per_unit;
    if !map.sees_y(at) {
        return;
    }
    let y = map.y(at);
    let grip = pos2(map.rect.right() - 26.0, y);
    let line = Rect::from_min_max(pos2(map.rect.left(), y - 3.0), pos2(map.rect.right(), y + 3.0));
    let id = ui.scope_id().with(("tolerance", handle.name.as_str()));
    let response = ui
        .interact(
            line.union(Rect::from_center_size(grip, vec2(30.0, look::GRAB - 4.0))),
            id,
            Sense::click_and_drag() | Sense::FOCUSABLE,
        )
        .on_hover_and_drag_cursor(CursorIcon::ResizeVertical);
    let slider = Slider {
        name: &handle.name,
        value: handle.value,
        limits: handle.limits,
        step: handle.step,
        sideways: false,
    };
    if let Some(wanted) = wanted(ui, &response, &slider, &handle, map) {
        let wanted = wanted.clamp(handle.limits.0, handle.limits.1);
        if (wanted - handle.value).abs() > 1e-9 * handle.limits.1 {
            out.push(handle.command(measure, &settings.reach, wanted, !response.dragged()));
        }
    }
    if response.drag_stopped() {
        out.push(Command::Settle);
    }
    slider.tell(ui, &response);
    draw(ui, &response, map, grip, &handle);
}

/// Where the hand, the keys or assistive technology want the tolerance, in its unit.
fn wanted(ui: &Ui, response: &Response, slider: &Slider<'_>, handle: &Handle, map: &Map) -> Option<f64> {
    if response.dragged() {
        let pointer = response.interact_pointer_pos().filter(|_| !response.drag_started())?;
        // A fifth of a step of the keys: 0.1 % or 1 cm⁻¹.
        let fine = 0.2 * slider.step;
        return Some((map.y_value(pointer.y) / handle.figure_per_unit / fine).round() * fine);
    }
    slider.wanted(ui, response)
}

fn draw(ui: &Ui, response: &Response, map: &Map, grip: egui::Pos2, handle: &Handle) {
    let look = Look::of(ui);
    let lively = response.hovered() || response.dragged() || response.has_focus();
    let size = if lively { vec2(28.0, 8.0) } else { vec2(24.0, 6.0) };
    ui.painter().rect_filled(Rect::from_center_size(grip, size), 3.0, look.reach);
    if !lively {
        return;
    }
    ui.painter().hline(map.rect.x_range(), grip.y, Stroke::new(1.8, look.reach));
    let decimals = (-(0.2 * handle.step).log10()).ceil().max(0.0) as usize;
    let text = format!("tolerance {} {}", number::fixed(handle.value, decimals), handle.unit);
    let galley = ui.painter().layout_no_wrap(text, look::figures(look::SMALL), look.text);
    let size = galley.size() + vec2(12.0, 6.0);
    let rect = Rect::from_min_size(pos2(grip.x - 22.0 - size.x, grip.y - size.y / 2.0), size);
    ui.painter().rect(rect, 4.0, look.raised, Stroke::new(1.0, look.rule), StrokeKind::Middle);
    ui.painter().galley(rect.min + vec2(6.0, 3.0), galley, look.text);
}
