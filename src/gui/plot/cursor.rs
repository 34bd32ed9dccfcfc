//! The line under the pointer through plot and strip, and the figures it reads.

use super::Stage;
use super::axes::Scale;
use super::map::Map;
use crate::figure::number;
use crate::gui::look::{self, Look};
use crate::gui::show::text_in;
use crate::gui::state::State;
use eframe::egui;
use egui::{Align2, Stroke, Ui, pos2};

pub(super) fn cursor_ui(ui: &Ui, state: &State, stage: &Stage, map: &Map, strip: &Map, r_axis: &Scale) {
    let look = Look::of(ui);
    let Some(pointer) = ui.input(|i| i.pointer.hover_pos()) else { return };
    let over_plot = stage.plot.contains(pointer);
    if !over_plot && !stage.strip.contains(pointer) {
        return;
    }
    // A window or a menu over the plot has the pointer.
    if ui.ctx().layer_id_at(pointer).is_some_and(|l| l != ui.layer_id()) {
        return;
    }
    for rect in [stage.plot, stage.strip] {
        ui.painter().vline(pointer.x, rect.y_range(), Stroke::new(1.0, look.dim.gamma_multiply(0.35)));
    }
    let r = r_axis.shown(map.x_value(pointer.x));
    let symbol = if state.view.axes.displacement { "x" } else { "r" };
    let mut text = format!("{symbol} {} {}", number::fixed(r, r_axis.decimals), r_axis.unit);
    if over_plot {
        let e_axis = Scale::of_energy(&state.view.axes);
        let e = e_axis.shown(map.y_value(pointer.y));
        text.push_str(&format!("   E {} {}", number::fixed(e, e_axis.decimals), e_axis.unit));
    } else if strip.bounds.y.1 > 0.0 {
        text.push_str("   ");
    }
    let at = pos2(stage.plot.right() - 2.0, (stage.plot.bottom() + stage.strip.top()) / 2.0);
    text_in(ui, at, Align2::RIGHT_CENTER, text.trim_end(), &look::figures(look::SMALL), look.dim);
}
