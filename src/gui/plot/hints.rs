//! Short hints on the picture itself, for the bundled samples: what can be taken hold of, and what follows.

use super::Stage;
use super::map::Map;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{ButtonForm, command_button_as};
use crate::gui::state::State;
use crate::units::LengthUnit;
use eframe::egui;
use egui::{Align, Layout, Pos2, Rect, Stroke, StrokeKind, Ui, UiBuilder, WidgetInfo, pos2, vec2};

const PAD: f32 = 7.0;

pub(super) fn hints_ui(
    ui: &mut Ui,
    state: &State,
    stage: &Stage,
    map: &Map,
    strip: &Map,
    out: &mut Vec<Command>,
) {
    let is_sample = state.document.focused().is_some_and(|(_, loaded, _)| loaded.is_sample);
    if !state.view.hints || !is_sample || stage.plot.width() < 380.0 || stage.plot.height() < 240.0 {
        return;
    }
    let plot = stage.plot;
    let window = state.window();
    let edge = |v: f64, unit: LengthUnit| map.x(unit.convert(v, LengthUnit::Angstrom));
    // Below the curve at the left there is room in every view near the minimum, as wide as the window leaves.
    let room = window.map_or(120.0, |w| edge(w.from, w.unit)) - plot.left() - 20.0 - 2.0 * PAD;
    let width = room.clamp(66.0, 108.0);
    let text = "Up and down walk the levels. A click on a point sets it aside.";
    let height = text_size(ui, text, width).y;
    let rect = hint_ui(ui, pos2(plot.left() + 8.0, plot.bottom() - height - 40.0), width, text, None);
    let place = Rect::from_min_size(rect.left_bottom() + vec2(0.0, 4.0), vec2(width + 2.0 * PAD, 20.0));
    ui.scope_builder(UiBuilder::new().max_rect(place).layout(Layout::left_to_right(Align::Center)), |ui| {
        ui.spacing_mut().interact_size.y = 18.0;
        command_button_as(ui, state, "Got it", Command::ShowHints(false), ButtonForm::Link, out);
    });
    if let Some(window) = window {
        let grip = pos2(edge(window.to, window.unit), plot.bottom() - 19.0);
        let text = "Drag an edge: the fits follow.";
        let size = text_size(ui, text, 400.0) + vec2(2.0 * PAD, 8.0);
        if grip.x > plot.left() && grip.x + size.x + 34.0 < plot.right() {
            hint_ui(ui, pos2(grip.x + 26.0, plot.bottom() - 31.0), 400.0, text, Some(grip + vec2(6.0, 0.0)));
        }
    }
    let percent = state.document.focused().map(|(_, _, settings)| 100.0 * settings.reach.tolerance);
    if let Some(y) = percent.filter(|p| strip.sees_y(*p)).map(|p| strip.y(p)) {
        let text = "Drag the line: the reach follows.";
        let size = text_size(ui, text, 400.0) + vec2(2.0 * PAD, 8.0);
        let grip = pos2(strip.rect.right() - 26.0, y);
        let at = pos2(strip.rect.right() - 10.0 - size.x, strip.rect.bottom() - 6.0 - size.y);
        if strip.rect.width() > 2.0 * size.x {
            let line = [pos2(grip.x, at.y), grip + vec2(0.0, 5.0)];
            ui.painter().line_segment(line, Stroke::new(1.0, Look::of(ui).accent));
            hint_ui(ui, at, 400.0, text, None);
        }
    }
}

fn text_size(ui: &Ui, text: &str, width: f32) -> egui::Vec2 {
    ui.painter().layout(text.to_owned(), look::plain(look::SMALL), look::DARK.text, width).size()
}

/// A hint with its upper left corner here; a line leads to what it speaks of.
fn hint_ui(ui: &mut Ui, at: Pos2, width: f32, text: &str, to: Option<Pos2>) -> Rect {
    let look = Look::of(ui);
    let galley = ui.painter().layout(text.to_owned(), look::plain(look::SMALL), look.text, width);
    let rect = Rect::from_min_size(at, galley.size() + vec2(2.0 * PAD, 8.0));
    let painter = ui.painter();
    if let Some(to) = to {
        painter.line_segment([pos2(rect.left(), rect.center().y), to], Stroke::new(1.0, look.accent));
    }
    painter.rect(rect, 5.0, look.raised, Stroke::new(1.0, look.accent), StrokeKind::Middle);
    painter.galley(rect.min + vec2(PAD, 4.0), galley, look.text);
    let response = ui.interact(rect, ui.scope_id().with(("hint", text)), egui::Sense::hover());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, text));
    rect
}
