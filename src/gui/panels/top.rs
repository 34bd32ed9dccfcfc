//! The bar on top: name plate, what is looked at, files, undo, theme.

use crate::figure::number;
use crate::gui::catalog;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::product::Product;
use crate::gui::samples::SAMPLES;
use crate::gui::show::{self, ButtonForm, command_button, elided};
use crate::gui::state::State;
use eframe::egui;
use egui::{Align, Layout, RichText, Ui, UiBuilder, vec2};

/// Room between groups of controls.
const BETWEEN: f32 = 14.0;

/// Name plate at the left, controls at the right. The controls are laid out from left to right, in the order in
/// which Tab goes through them; where they begin follows from the width they had the last time.
pub(super) fn top_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let whole = ui.available_rect_before_wrap();
    let memory = ui.scope_id().with("width of the controls");
    let known: Option<f32> = ui.data(|d| d.get_temp(memory));
    let width = known.unwrap_or(560.0).min(whole.width());
    let (name, controls) = whole.split_left_right_at_x(whole.right() - width);
    let row = Layout::left_to_right(Align::Center);
    ui.scope_builder(UiBuilder::new().max_rect(name.with_max_x(name.right() - BETWEEN)).layout(row), |ui| {
        title_ui(ui, state)
    });
    let used =
        ui.scope_builder(UiBuilder::new().max_rect(controls).layout(row), |ui| controls_ui(ui, state, out));
    let used = used.response.rect.width();
    if known.is_none_or(|k| (k - used).abs() > 0.5) {
        ui.data_mut(|d| d.insert_temp(memory, used));
        ui.ctx().request_discard("the controls have another width");
    }
}

fn controls_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    menu_ui(ui, state, "File", out);
    menu_ui(ui, state, "View", out);
    menu_ui(ui, state, "Help", out);
    ui.add_space(4.0);
    command_button(ui, state, Command::Open, ButtonForm::Framed, out);
    export_ui(ui, state, out);
    ui.add_space(BETWEEN - 6.0);
    command_button(ui, state, Command::Undo, ButtonForm::Quiet, out);
    command_button(ui, state, Command::Redo, ButtonForm::Quiet, out);
    ui.add_space(BETWEEN - 4.0);
    theme_ui(ui, out);
}

fn title_ui(ui: &mut Ui, state: &State) {
    let look = Look::of(ui);
    if ui.available_width() < 84.0 {
        return;
    }
    ui.label(RichText::new("parabound").font(look::semibold(15.0)));
    let Some((_, loaded, settings)) = state.document.focused() else { return };
    ui.add_space(4.0);
    let mut text = String::new();
    if let Some(kept) = state.kept.get(&state.document.origin) {
        let name = kept.path.file_name().map(|n| n.to_string_lossy().into_owned()).unwrap_or_default();
        let mark = if crate::gui::apply::has_work(state) { " (changed)" } else { "" };
        text = format!("{name}{mark}  ·  ");
    }
    text.push_str(&loaded.scan.file_name);
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

/// A menu with the commands of its place.
fn menu_ui(ui: &mut Ui, state: &State, name: &str, out: &mut Vec<Command>) {
    ui.spacing_mut().button_padding.x = 8.0;
    let text = RichText::new(name).font(look::plain(look::SECONDARY));
    let button = egui::Button::new(text).frame_when_inactive(false);
    egui::containers::menu::MenuButton::from_button(button).ui(ui, |ui| {
        ui.set_min_width(190.0);
        let commands = match name {
            "File" => {
                samples_ui(ui, state, out);
                recent_ui(ui, state, out);
                ui.separator();
                catalog::FILE_MENU.to_vec()
            }
            "View" => catalog::view_menu(state),
            _ => catalog::help_menu(state),
        };
        for command in commands {
            entry_ui(ui, state, command, out);
        }
    });
}

/// A line of a menu, with its keys at the right.
fn entry_ui(ui: &mut Ui, state: &State, command: Command, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let enabled = command.is_enabled(state);
    let keys = command.shortcut().map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
    let button = egui::Button::new(command.label()).frame_when_inactive(false);
    let keys = RichText::new(keys).font(look::plain(look::SMALL)).color(look.dim);
    let response = ui.add_enabled(enabled.is_ok(), button.right_text(keys));
    let name = command.label();
    response.widget_info(|| egui::WidgetInfo::labeled(egui::Role::Button, enabled.is_ok(), &name));
    let response = response.on_hover_text(command.tooltip());
    let response = match enabled {
        Ok(()) => response,
        Err(reason) => response.on_disabled_hover_text(reason),
    };
    if response.clicked() {
        out.push(command);
        ui.close();
    }
}

fn samples_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.menu_button("Samples", |ui| {
        ui.set_min_width(200.0);
        for index in 0..SAMPLES.len() {
            entry_ui(ui, state, Command::OpenSample(index), out);
        }
    });
}

fn recent_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.menu_button("Recent files", |ui| {
        ui.set_min_width(200.0);
        if state.recent.is_empty() {
            show::note(ui, "No file was opened yet.");
        }
        for path in &state.recent {
            entry_ui(ui, state, Command::OpenPath(path.clone()), out);
        }
        ui.separator();
        entry_ui(ui, state, Command::ForgetRecent, out);
    });
}

fn export_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.menu_button("Export", |ui| {
        ui.set_min_width(220.0);
        for product in Product::ALL {
            entry_ui(ui, state, Command::Export(product), out);
        }
        ui.separator();
        entry_ui(ui, state, Command::CopyPicture, out);
    });
}

fn theme_ui(ui: &mut Ui, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let dark = ui.visuals().dark_mode;
    let mut choice = |ui: &mut Ui, is_dark: bool| {
        let command = Command::SetDark(is_dark);
        let color = if dark == is_dark { look.text } else { look.dim };
        let text = RichText::new(command.label()).font(look::plain(look::SECONDARY)).color(color);
        if ui.add(egui::Button::selectable(false, text).frame(false)).clicked() {
            out.push(command);
        }
    };
    choice(ui, false);
    ui.label(RichText::new("·").color(look.faint));
    choice(ui, true);
}
