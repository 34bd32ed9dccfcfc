//! The line under the pointer through plot and strip, and the figures it reads.

use super::Stage;
use super::map::Map;
use crate::figure::number;
use crate::gui::look::{self, Look};
use crate::gui::show::text_in;
use eframe::egui;
use egui::{Align2, Stroke, Ui, pos2};

pub(super) fn cursor_ui(ui: &Ui, stage: &Stage, map: &Map, strip: &Map) {
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
    let mut text = format!("r {} Å", number::fixed(map.x_value(pointer.x), 3));
    if over_plot {
        text.push_str(&format!("   E {} cm⁻¹", number::fixed(map.y_value(pointer.y), 0)));
    } else if strip.bounds.y.1 > 0.0 {
        text.push_str("   ");
    }
    let at = pos2(stage.plot.right() - 2.0, (stage.plot.bottom() + stage.strip.top()) / 2.0);
    text_in(ui, at, Align2::RIGHT_CENTER, text.trim_end(), &look::figures(look::SMALL), look.dim);
}
