//! The window without a scan, and files that were refused.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::reading::ReadingCommand;
use crate::gui::samples::SAMPLES;
use crate::gui::show::{self, ButtonForm, command_button, command_button_as};
use crate::gui::state::{Asks, Problem, State};
use crate::scan::read::ReadSettings;
use crate::units::{EnergyUnit, LengthUnit};
use eframe::egui;
use egui::{ComboBox, CornerRadius, Frame, Margin, RichText, Stroke, Ui};

/// The empty window: what to do first. A refused file stands in its place.
pub(super) fn empty_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let height = ui.available_height();
    ui.vertical_centered(|ui| {
        let tall = state.view.problem.as_ref().is_some_and(|p| !p.meanings.is_empty());
        ui.add_space((0.5 * height - if tall { 270.0 } else { 190.0 }).max(8.0));
        ui.set_max_width(540.0);
        if let Some(problem) = &state.view.problem {
            // Its columns take its place.
            if state.view.reading.looks_at_columns_of(problem) {
                return;
            }
            problem_frame(look).show(ui, |ui| {
                ui.with_layout(egui::Layout::top_down(egui::Align::Min), |ui| {
                    refused_ui(ui, state, problem, out)
                });
            });
            return;
        }
        let hovering = ui.input(|i| !i.raw.hovered_files.is_empty());
        let border = if hovering { look.accent } else { look.rule };
        Frame::new()
            .fill(look.panel)
            .stroke(Stroke::new(if hovering { 2.0 } else { 1.0 }, border))
            .corner_radius(CornerRadius::same(10))
            .inner_margin(Margin::same(28))
            .show(ui, |ui| {
                ui.label(RichText::new("Open a bond scan").font(look::semibold(look::SENTENCE)));
                ui.add_space(6.0);
                let text = "A table of bond lengths and energies: drop a file here, or choose one. \
                            Text in columns, XYZ trajectories and QCSchema files are understood.";
                ui.label(RichText::new(text).color(look.dim));
                ui.add_space(14.0);
                command_button(ui, state, Command::Open, ButtonForm::Framed, out);
                ui.add_space(18.0);
                ui.label(
                    RichText::new("or look at a sample").font(look::plain(look::SECONDARY)).color(look.dim),
                );
                ui.add_space(4.0);
                for index in 0..SAMPLES.len() {
                    command_button(ui, state, Command::OpenSample(index), ButtonForm::Link, out);
                }
            });
    });
}

fn problem_frame(look: &Look) -> Frame {
    Frame::new()
        .fill(look.raised)
        .stroke(Stroke::new(1.0, look.stop))
        .corner_radius(CornerRadius::same(10))
        .inner_margin(Margin::same(20))
}

/// A refused file over the window with what was there before.
pub(super) fn problem_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(problem) = &state.view.problem else { return };
    if state.view.reading.looks_at_columns_of(problem) {
        return;
    }
    let look = Look::of(ui);
    egui::Window::new("File not read")
        .title_bar(false)
        .resizable(false)
        .collapsible(false)
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .fixed_size([500.0, 0.0])
        .frame(problem_frame(look))
        .show(ui.ctx(), |ui| refused_ui(ui, state, problem, out));
}

fn refused_ui(ui: &mut Ui, state: &State, problem: &Problem, out: &mut Vec<Command>) {
    let is_asked = problem.asks != Asks::Nothing;
    let title = if is_asked { "One thing is missing in" } else { "Not read as a scan:" };
    ui.label(RichText::new(format!("{title} {}", problem.file_name)).font(look::semibold(look::SENTENCE)));
    ui.add_space(6.0);
    ui.label(&problem.text);
    let waiting = &state.view.reading.waiting;
    if !waiting.is_empty() {
        let names: Vec<&str> = waiting.iter().take(6).map(|p| p.file_name.as_str()).collect();
        let more = if waiting.len() > names.len() { ", …" } else { "" };
        ui.add_space(6.0);
        show::note(ui, &format!("{} more not read: {}{more}", waiting.len(), names.join(", ")));
    }
    ui.add_space(12.0);
    if let Asks::Bond(atoms) = &problem.asks {
        bond_ui(ui, problem, atoms, out);
        ui.add_space(12.0);
    }
    if problem.asks == Asks::Units {
        if problem.meanings.is_empty() {
            units_ui(ui, problem, out);
        } else {
            super::units::units_ui(ui, problem, super::units::MOST_ROWS, out);
        }
        ui.add_space(12.0);
    }
    ui.horizontal_wrapped(|ui| {
        command_button_as(ui, state, "Choose another file …", Command::Open, ButtonForm::Framed, out);
        if let Some(path) = &problem.path {
            command_button_as(
                ui,
                state,
                "Read again",
                Command::OpenPath(path.clone()),
                ButtonForm::Framed,
                out,
            );
        }
        let has_columns = !matches!(problem.asks, Asks::Bond(_));
        if has_columns && problem.preview.as_ref().is_some_and(|p| !p.lines.is_empty()) {
            let columns = Command::Reading(ReadingCommand::ProblemColumns(true));
            command_button(ui, state, columns, ButtonForm::Framed, out);
        }
        if let Some(logs) = problem.as_logs() {
            command_button(ui, state, logs, ButtonForm::Quiet, out);
        }
        command_button(ui, state, Command::DropProblem, ButtonForm::Quiet, out);
    });
}

/// Which two atoms the bond is between.
fn bond_ui(ui: &mut Ui, problem: &Problem, atoms: &[String], out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let id = egui::Id::unique(("bond of", &problem.file_name));
    let mut bond: [usize; 2] = ui.data(|d| d.get_temp(id)).unwrap_or([1, 2]);
    let known = bond.iter().all(|i| (1..=atoms.len()).contains(i));
    bond = if known { bond } else { [1, 2] };
    ui.horizontal_wrapped(|ui| {
        for (side, name) in ["bond from", "to"].into_iter().enumerate() {
            let label = ui.label(RichText::new(name).color(look.dim));
            let combo = ComboBox::from_id_salt(("bond", side)).selected_text(&atoms[bond[side] - 1]);
            let response = combo.show_ui(ui, |ui| {
                for (index, atom) in atoms.iter().enumerate() {
                    ui.selectable_value(&mut bond[side], index + 1, atom);
                }
            });
            response.response.labelled_by(label.id);
        }
        let read = ReadSettings { bond: Some(bond), ..problem.start.read.clone() };
        let button = ui.add_enabled(bond[0] != bond[1], egui::Button::new("Read this bond"));
        if button.on_disabled_hover_text("Choose two different atoms.").clicked() {
            out.push(Command::ReadAgain(read));
        }
    });
    ui.data_mut(|d| d.insert_temp(id, bond));
}

/// A small chooser: the unit of each kind, and what the choice costs when it is wrong.
fn units_ui(ui: &mut Ui, problem: &Problem, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let mut read = problem.start.read.clone();
    egui::Grid::new("units").num_columns(2).spacing([12.0, 6.0]).show(ui, |ui| {
        let label = ui.label(RichText::new("bond lengths in").color(look.dim));
        let text = read.length_unit.map_or("not chosen", LengthUnit::name);
        let response = ComboBox::from_id_salt("length unit").selected_text(text).show_ui(ui, |ui| {
            for unit in LengthUnit::ALL {
                ui.selectable_value(&mut read.length_unit, Some(unit), unit.name());
            }
        });
        response.response.labelled_by(label.id);
        ui.end_row();
        let label = ui.label(RichText::new("energies in").color(look.dim));
        let text = read.energy_unit.map_or("not chosen", EnergyUnit::name);
        let response = ComboBox::from_id_salt("energy unit").selected_text(text).show_ui(ui, |ui| {
            for unit in EnergyUnit::ALL {
                ui.selectable_value(&mut read.energy_unit, Some(unit), unit.name());
            }
        });
        response.response.labelled_by(label.id);
        ui.end_row();
    });
    let note = "A wrong unit of length moves every number: one bohr is 0.529 Å.";
    ui.label(RichText::new(note).font(look::plain(look::SMALL)).color(look.dim));
    if read != problem.start.read {
        out.push(Command::ReadAgain(read));
    }
}
