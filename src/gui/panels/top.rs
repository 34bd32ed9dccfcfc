//! The bar on top: name plate, what is looked at, files, undo, theme.

use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::product::Product;
use crate::gui::samples::SAMPLES;
use crate::gui::show::{ButtonForm, command_button, elided};
use crate::gui::state::State;
use eframe::egui;
use egui::{Align, Layout, RichText, Ui, vec2};

pub(super) fn top_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        theme_ui(ui, out);
        ui.add_space(16.0);
        command_button(ui, state, Command::Redo, ButtonForm::Quiet, out);
        command_button(ui, state, Command::Undo, ButtonForm::Quiet, out);
        ui.add_space(12.0);
        export_ui(ui, state, out);
        samples_ui(ui, state, out);
        command_button(ui, state, Command::Open, ButtonForm::Framed, out);
        ui.add_space(16.0);
        let room = ui.available_rect_before_wrap();
        ui.allocate_ui_with_layout(room.size(), Layout::left_to_right(Align::Center), |ui| {
            title_ui(ui, state)
        });
    });
}

fn title_ui(ui: &mut Ui, state: &State) {
    let look = Look::of(ui);
    if ui.available_width() < 84.0 {
        return;
    }
    ui.label(RichText::new("parabound").font(look::semibold(15.0)));
    let Some((_, loaded, settings)) = state.document.focused() else { return };
    ui.add_space(4.0);
    let mut text = loaded.scan.file_name.clone();
    if let Some(name) = &settings.curve {
        let energy = loaded.scan.energies.iter().find(|e| e.name == *name);
        text.push_str(&format!("  ·  {}", energy.map_or(name.as_str(), |e| e.label.as_str())));
    }
    if let Some(molecule) = molecule(state) {
        text.push_str(&format!("  ·  {molecule}"));
    }
    let room = ui.available_width();
    let (rect, response) = ui.allocate_exact_size(vec2(room.max(0.0), 24.0), egui::Sense::hover());
    if room > 24.0 {
        elided(ui, rect.left_center(), room, &text, look::plain(look::BODY), look.dim);
    }
    response.on_hover_text(text);
}

/// The molecule with its mass numbers, e.g. ⁷Li¹H.
pub(super) fn molecule(state: &State) -> Option<String> {
    let masses = state.study()?.findings.masses.as_ref()?;
    let atoms = masses.atoms.as_ref()?;
    let mut text: String =
        atoms.iter().map(|a| format!("{}{}", number::superscript(a.mass_number), a.symbol)).collect();
    match masses.charge {
        0 => {}
        1 => text.push('⁺'),
        -1 => text.push('⁻'),
        q => {
            text.push_str(&number::superscript(q.unsigned_abs()));
            text.push(if q > 0 { '⁺' } else { '⁻' });
        }
    }
    Some(text)
}

fn samples_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.menu_button("Samples", |ui| {
        for index in 0..SAMPLES.len() {
            if command_button(ui, state, Command::OpenSample(index), ButtonForm::Quiet, out).clicked() {
                ui.close();
            }
        }
    });
}

fn export_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.menu_button("Export", |ui| {
        for product in Product::ALL {
            if command_button(ui, state, Command::Export(product), ButtonForm::Quiet, out).clicked() {
                ui.close();
            }
        }
    });
}

fn theme_ui(ui: &mut Ui, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let dark = ui.visuals().dark_mode;
    let mut choice = |ui: &mut Ui, is_dark: bool| {
        let command = Command::SetDark(is_dark);
        let color = if dark == is_dark { look.text } else { look.dim };
        let text = RichText::new(command.label()).font(look::plain(look::SECONDARY)).color(color);
        if ui.add(egui::Button::selectable(false, text).frame(false)).clicked() && dark != is_dark {
            out.push(command);
        }
    };
    choice(ui, true);
    ui.label(RichText::new("·").color(look.faint));
    choice(ui, false);
}
