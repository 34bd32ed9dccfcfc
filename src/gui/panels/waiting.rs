//! The middle of the window while there is no study: computing, stopped, failed.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{ButtonForm, command_button};
use crate::gui::state::State;
use eframe::egui;
use egui::{CornerRadius, Frame, Margin, RichText, Stroke, Ui};

/// Widest card.
const WIDTH: f32 = 460.0;

pub(super) fn waiting_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let (title, text, border, commands): (_, String, _, &[Command]) = if let Some(failure) = state.failure() {
        let commands: &[Command] = if state.report().is_some() {
            &[Command::CopyReport, Command::ResetSettings]
        } else {
            &[Command::ResetSettings]
        };
        ("This curve could not be computed", failure.to_owned(), look.stop, commands)
    } else if state.is_stopped() {
        let text = "Its scan and settings are unharmed.".to_owned();
        ("The computation was stopped", text, look.rule, &[Command::ComputeAgain])
    } else if let Some(progress) = &state.view.progress {
        ("Computing …", words(progress.tenths, &progress.step), look.rule, &[Command::StopComputing])
    } else {
        // What comes at once is not announced with a card.
        return;
    };
    ui.vertical_centered(|ui| {
        ui.add_space((0.5 * ui.available_height() - 90.0).max(8.0));
        ui.set_max_width(WIDTH.min(ui.available_width()));
        Frame::new()
            .fill(look.panel)
            .stroke(Stroke::new(1.0, border))
            .corner_radius(CornerRadius::same(10))
            .inner_margin(Margin::same(24))
            .show(ui, |ui| {
                ui.label(RichText::new(title).font(look::semibold(look::SENTENCE)));
                ui.add_space(6.0);
                ui.label(RichText::new(text).color(look.dim));
                ui.add_space(12.0);
                for command in commands {
                    command_button(ui, state, command.clone(), ButtonForm::Framed, out);
                }
            });
    });
}

/// How long and how far, in words.
pub fn words(tenths: u64, step: &str) -> String {
    let comma = if step.is_empty() { "" } else { ", " };
    format!("{}.{} s{comma}{step}", tenths / 10, tenths % 10)
}
