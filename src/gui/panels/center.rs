//! The middle: sentence, regions, plot, strip and ladders.

use crate::figure::Role;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::plot;
use crate::gui::show::{self, ButtonForm, command_button};
use crate::gui::state::{Preset, State, Zoom};
use eframe::egui;
use egui::{Align, Layout, Rect, RichText, Sense, Ui, vec2};

/// Width that the names of the regions take.
const ROOM_FOR_REGIONS: f32 = 360.0;

pub(super) fn center_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    // A window of no size has no room for anything.
    if ui.available_width() < 120.0 || ui.available_height() < 120.0 {
        return;
    }
    let Some(study) = state.study() else {
        let text = state.failure().unwrap_or("Computing …");
        ui.centered_and_justified(|ui| ui.label(text));
        return;
    };
    sentence_ui(ui, state, out);
    ui.add_space(2.0);
    regions_ui(ui, state, out);
    ui.add_space(2.0);
    plot::stage_ui(ui, state, study, out);
}

fn sentence_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let Some(study) = state.study() else { return };
    let sentence = &study.pictures.sentence;
    let fade = state.is_stale() || state.failure().is_some();
    ui.horizontal_wrapped(|ui| {
        let color = if fade { look.dim } else { look.text };
        let mut text = RichText::new(&sentence.text).font(look::semibold(look::SENTENCE)).color(color);
        text = text.line_height(Some(21.0));
        ui.label(text);
        if !sentence.why.is_empty() {
            command_button(ui, state, Command::ToggleWhy, ButtonForm::Link, out);
        }
    });
    if state.view.why_open {
        for reason in &sentence.why {
            show::note(ui, reason);
        }
    }
}

/// The regions as a menu, where there is no room for their names.
fn regions_menu_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let shown = match state.zoom() {
        Zoom::Preset(preset) => preset.name(),
        Zoom::Free(_) => "view",
    };
    ui.menu_button(shown, |ui| {
        for preset in Preset::ALL {
            if command_button(ui, state, Command::Zoom(preset), ButtonForm::Quiet, out).clicked() {
                ui.close();
            }
        }
    });
}

/// Legend at the left as far as there is room, regions at the right.
fn regions_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let height = 22.0;
    ui.allocate_ui_with_layout(
        vec2(ui.available_width(), height),
        Layout::right_to_left(Align::Center),
        |ui| {
            ui.spacing_mut().item_spacing.x = 14.0;
            ui.spacing_mut().button_padding.x = 0.0;
            if ui.available_width() < ROOM_FOR_REGIONS {
                regions_menu_ui(ui, state, out);
                return;
            }
            for preset in Preset::ALL.into_iter().rev() {
                let front = state.zoom() == Zoom::Preset(preset);
                let form = if front { ButtonForm::Link } else { ButtonForm::Quiet };
                command_button(ui, state, Command::Zoom(preset), form, out);
            }
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                ui.add_space(plot::GUTTER - 8.0);
                let entries = [
                    (Role::Scanned, "scan"),
                    (Role::Parabola, "parabola"),
                    (Role::Harmonic, "harmonic fit"),
                    (Role::Morse, "Morse"),
                    (Role::Polynomial, "polynomial"),
                ];
                for (role, name) in entries {
                    let font = look::plain(look::SMALL);
                    let galley = ui.painter().layout_no_wrap(name.to_owned(), font, look.dim);
                    let width = 31.0 + galley.size().x;
                    if ui.available_width() < width + 6.0 {
                        break;
                    }
                    let (rect, _) = ui.allocate_exact_size(vec2(width, height), Sense::hover());
                    let sample = Rect::from_min_size(rect.min, vec2(26.0, height));
                    show::line_sample(ui, sample, role, look.role(role));
                    let at = egui::pos2(rect.left() + 31.0, rect.center().y - galley.size().y / 2.0);
                    ui.painter().galley(at, galley, look.dim);
                }
            });
        },
    );
}
