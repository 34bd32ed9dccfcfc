//! The middle: sentence, regions, plot, strip and ladders.

use super::waiting;
use crate::figure::Role;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::plot;
use crate::gui::show::{self, ButtonForm, command_button};
use crate::gui::state::{Preset, State, Zoom};
use eframe::egui;
use egui::{Align, Layout, Rect, RichText, Sense, Ui, vec2};

/// Width that the names of the regions take.
const ROOM_FOR_REGIONS: f32 = 332.0;
/// A lower window does without the legend.
const ROOM_FOR_LEGEND: f32 = 320.0;

pub(super) fn center_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    // A window of no size has no room for anything.
    if ui.available_width() < 120.0 || ui.available_height() < 120.0 {
        return;
    }
    let Some(study) = state.study() else {
        waiting::waiting_ui(ui, state, out);
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
    let fade = state.looks_old();
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

/// What the lines of the plot are called.
const LEGEND: [(Role, &str); 5] = [
    (Role::Scanned, "scan"),
    (Role::Parabola, "parabola"),
    (Role::Harmonic, "harmonic fit"),
    (Role::Morse, "Morse"),
    (Role::Polynomial, "polynomial"),
];
/// Length of a sample of a line in the legend, and the room after it.
const SAMPLE: f32 = 22.0;
const AFTER_SAMPLE: f32 = 5.0;
/// Room between names.
const BETWEEN: f32 = 14.0;
const BETWEEN_NAMES: f32 = 10.0;
const ROW: f32 = 22.0;

/// Legend at the left, regions at the right; where both do not fit, the legend has a row of its own.
fn regions_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let fits = ui.available_width() >= legend_width(ui, state) + ROOM_FOR_REGIONS;
    if !fits && ui.available_height() > ROOM_FOR_LEGEND {
        ui.horizontal_wrapped(|ui| legend_ui(ui, state, out));
    }
    ui.allocate_ui_with_layout(vec2(ui.available_width(), ROW), Layout::right_to_left(Align::Center), |ui| {
        ui.spacing_mut().item_spacing.x = BETWEEN;
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
        if fits {
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| legend_ui(ui, state, out));
        }
    });
}

/// Room for the way back from a J.
const WAY_BACK: f32 = 104.0;

/// What the legend says of rotation.
fn rotation_name(state: &State) -> Option<String> {
    let lambda = state.document.focused().map_or(0, |(_, _, s)| s.levels.lambda);
    let j = match (state.view.j, state.rotation()) {
        (0, _) => return None,
        (_, Some((levels, _))) => levels.j,
        (j, None) => return Some(format!("no levels with J = {j}")),
    };
    Some(if lambda > 0 { format!("J = {j}, Λ = {lambda}") } else { format!("J = {j}") })
}

fn legend_width(ui: &Ui, state: &State) -> f32 {
    let width = |name: &str| {
        let galley = ui.painter().layout_no_wrap(name.to_owned(), look::plain(look::SMALL), look::DARK.dim);
        SAMPLE + AFTER_SAMPLE + galley.size().x + BETWEEN_NAMES
    };
    let rotation = rotation_name(state).map_or(0.0, |name| width(&name) + WAY_BACK);
    LEGEND.iter().map(|(_, name)| width(name)).sum::<f32>() + rotation
}

fn legend_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.spacing_mut().item_spacing = vec2(BETWEEN_NAMES, 0.0);
    for (role, name) in LEGEND {
        name_ui(ui, role, name);
    }
    if let Some(name) = rotation_name(state) {
        name_ui(ui, Role::Effective, &name);
        ui.spacing_mut().button_padding.x = 0.0;
        ui.spacing_mut().interact_size.y = ROW;
        command_button(ui, state, Command::ShowJ(0), ButtonForm::Link, out);
    }
}

/// One line of the plot by its name.
fn name_ui(ui: &mut Ui, role: Role, name: &str) {
    let look = Look::of(ui);
    let galley = ui.painter().layout_no_wrap(name.to_owned(), look::plain(look::SMALL), look.dim);
    let size = vec2(SAMPLE + AFTER_SAMPLE + galley.size().x, ROW);
    let (rect, _) = ui.allocate_exact_size(size, Sense::hover());
    show::line_sample(ui, Rect::from_min_size(rect.min, vec2(SAMPLE, ROW)), role, look.role(role));
    let at = egui::pos2(rect.left() + SAMPLE + AFTER_SAMPLE, rect.center().y - galley.size().y / 2.0);
    ui.painter().galley(at, galley, look.dim);
}
