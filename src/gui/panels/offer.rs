//! The offer to take up unsaved work of an earlier window: one line under the bar on top.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{ButtonForm, command_button, elided};
use crate::gui::state::State;
use eframe::egui;
use egui::{Align, Frame, Layout, Margin, Panel, Sense, Ui, WidgetInfo, vec2};

const ROW: f32 = 34.0;

pub(super) fn offer_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(leftover) = state.leftovers.first() else { return };
    let look = Look::of(ui);
    Panel::top("offer")
        .exact_size(ROW)
        .resizable(false)
        .frame(Frame::new().fill(look.raised).inner_margin(Margin::symmetric(16, 0)))
        .show(ui, |ui| {
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                for command in [Command::LeaveWork, Command::DiscardWork] {
                    command_button(ui, state, command, ButtonForm::Quiet, out);
                }
                command_button(ui, state, Command::RestoreWork, ButtonForm::Link, out);
                let more = match state.leftovers.len() - 1 {
                    0 => String::new(),
                    1 => " One more after this.".to_owned(),
                    n => format!(" {n} more after this."),
                };
                let text = format!("{}{more}", leftover.text);
                let (rect, response) =
                    ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
                elided(
                    ui,
                    rect.left_center(),
                    rect.width() - 12.0,
                    &text,
                    look::plain(look::BODY),
                    look.text,
                );
                response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, &text));
                response.on_hover_text(text);
            });
        });
}
