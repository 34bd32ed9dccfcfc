//! A quantity over temperature and how far the models are off in it, on one axis, with the temperature as a handle.

use crate::figure::{ThermalQuantity, thermal_picture};
use crate::gui::chart::{Shown, chart_ui};
use crate::gui::command::Command;
use crate::gui::kept::kept;
use crate::gui::look::Look;
use crate::gui::plot::steps::Slider;
use crate::gui::show::{self, combo_ui};
use crate::gui::state::{State, Study, ThermalView};
use eframe::egui;
use egui::{CursorIcon, Rect, Sense, Ui, pos2, vec2};

/// Heights of the two charts.
const HEIGHTS: [f32; 2] = [178.0, 138.0];
/// Name of the handle.
const HANDLE: &str = "Temperature on the chart";

pub(super) fn lines_ui(ui: &mut Ui, state: &State, study: &Study, kelvin: f64, out: &mut Vec<Command>) {
    let findings = &study.findings;
    show::rule(ui);
    let rotating = findings.rotating_sum.is_some();
    show::heading(ui, "Over temperature", if rotating { "with rotation" } else { "vibration alone" });
    let mut quantity = state.view.thermal.quantity;
    combo_ui(ui, "Quantity over temperature", &mut quantity, &ThermalQuantity::ALL, ThermalQuantity::name);
    if quantity != state.view.thermal.quantity {
        out.push(Command::SetThermalView(ThermalView { quantity, ..state.view.thermal }));
    }
    let listed = findings.thermal.iter().map(|p| p.kelvin).fold(0.0, f64::max);
    // The highest temperature of the settings, farther where one is looked at beyond it.
    let highest = if kelvin > listed { 1.05 * kelvin } else { listed };
    let key = (quantity, highest.to_bits());
    let picture =
        kept(ui.ctx(), "thermal lines", findings, key, || thermal_picture(findings, quantity, highest));
    let Some(picture) = picture.as_ref() else { return };
    let figures = [(&picture.values, None), (&picture.deviation, picture.deviation_range)];
    for (i, ((figure, range), height)) in figures.into_iter().zip(HEIGHTS).enumerate() {
        let Some(shown) = chart_ui(ui, figure, height, Some(kelvin), range) else { continue };
        let pointer = shown.response.interact_pointer_pos();
        if let Some(wanted) = pointer.map(|p| temperature(&shown, p.x)).filter(|t| *t != kelvin) {
            out.push(Command::SetKelvin(wanted));
        }
        if i == 0 {
            handle_ui(ui, &shown, kelvin, highest, out);
        }
    }
}

/// The temperature at a place of the screen, in whole kelvin.
fn temperature(shown: &Shown, x: f32) -> f64 {
    let rect = shown.map.rect;
    shown.map.x_value(x.clamp(rect.left(), rect.right())).round().max(1.0)
}

/// The grip at the foot of the line that marks the temperature.
fn handle_ui(ui: &Ui, shown: &Shown, kelvin: f64, highest: f64, out: &mut Vec<Command>) {
    if !shown.map.sees_x(kelvin) {
        return;
    }
    let look = Look::of(ui);
    let grip = pos2(shown.map.x(kelvin), shown.map.rect.bottom() - 9.0);
    let response = ui
        .interact(
            Rect::from_center_size(grip, vec2(16.0, 16.0)),
            ui.scope_id().with(HANDLE),
            Sense::click_and_drag() | Sense::FOCUSABLE,
        )
        .on_hover_and_drag_cursor(CursorIcon::ResizeHorizontal);
    let slider = Slider { name: HANDLE, value: kelvin, limits: (1.0, highest), step: 10.0, sideways: true };
    let dragged = response.interact_pointer_pos().filter(|_| response.dragged());
    let wanted = match dragged {
        Some(pointer) => Some(temperature(shown, pointer.x)),
        None => slider.wanted(ui, &response).map(|t| t.clamp(1.0, highest)),
    };
    if let Some(wanted) = wanted.filter(|t| *t != kelvin) {
        out.push(Command::SetKelvin(wanted));
    }
    slider.tell(ui, &response);
    let lively = response.hovered() || response.dragged() || response.has_focus();
    let size = if lively { vec2(10.0, 16.0) } else { vec2(8.0, 12.0) };
    ui.painter().rect_filled(Rect::from_center_size(grip, size), 3.0, look.accent);
}
