//! Text logs: two patterns, what they catch, and which match counts.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::reading::{Logs, ReadingCommand};
use crate::gui::show::{self, ButtonForm, command_button, command_button_as};
use crate::gui::state::State;
use crate::scan::read::{Caught, LinePatterns, Match, ReadSettings, Tried};
use crate::units::{EnergyUnit, LengthUnit};
use eframe::egui;
use egui::{ComboBox, RichText, ScrollArea, TextEdit, Ui};
use std::collections::BTreeSet;

/// Logs listed.
const LISTED: usize = 200;
/// Width of the name of a field.
const NAME: f32 = 170.0;
/// Width of the field of a pattern.
const FIELD: f32 = 280.0;
/// Height of the lists.
const LIST: f32 = 150.0;

/// Shows the text logs, where there are some to be searched.
pub fn logs_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(logs) = &state.view.reading.logs else { return };
    let room = ui.ctx().content_rect().size();
    let folder = &logs.set.folder;
    let name =
        folder.file_name().map_or_else(|| folder.display().to_string(), |n| n.to_string_lossy().into());
    egui::Window::new(format!("Text logs in {name}"))
        .id(egui::Id::unique("logs"))
        .collapsible(false)
        .resizable(false)
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .fixed_size([(room.x - 80.0).min(720.0), (room.y - 100.0).min(620.0)])
        .show(ui.ctx(), |ui| content_ui(ui, state, logs, out));
    if ui.input(|i| i.key_pressed(egui::Key::Escape)) {
        out.push(Command::Reading(ReadingCommand::CloseLogs));
    }
}

fn content_ui(ui: &mut Ui, state: &State, logs: &Logs, out: &mut Vec<Command>) {
    let mut read = logs.read.clone();
    show::note(
        ui,
        "Each file is one point. A pattern is a regular expression tried line by line; the number is what stands in \
         its brackets, as in r=(\\S+). The bond length may also stand in the file's name.",
    );
    ui.add_space(6.0);
    let mut lines = read.lines.clone().unwrap_or_default();
    let tried = logs.caught().map(|found| &found.tried);
    patterns_ui(ui, &mut lines, &mut read, tried);
    if Some(&lines) != read.lines.as_ref() && lines != LinePatterns::default() {
        read.lines = Some(lines);
    }
    ui.add_space(8.0);
    caught_ui(ui, logs, tried);
    ui.add_space(8.0);
    text_ui(ui, logs);
    ui.add_space(8.0);
    if let Some(text) = &logs.refused {
        ui.label(RichText::new(text).color(Look::of(ui).stop));
    }
    ui.horizontal(|ui| {
        let label = match tried.map_or(0, Tried::points) {
            1 => "Read 1 point".to_owned(),
            points => format!("Read {points} points"),
        };
        let read = Command::Reading(ReadingCommand::ReadLogs);
        command_button_as(ui, state, &label, read, ButtonForm::Framed, out);
        command_button(ui, state, Command::Reading(ReadingCommand::CloseLogs), ButtonForm::Quiet, out);
    });
    if read != logs.read {
        out.push(Command::Reading(ReadingCommand::TryLogs(read)));
    }
}

fn patterns_ui(ui: &mut Ui, lines: &mut LinePatterns, read: &mut ReadSettings, tried: Option<&Tried>) {
    let fault = |i: usize, pattern: &str| {
        tried.and_then(|t| t.faults[i].clone()).filter(|_| !pattern.trim().is_empty())
    };
    ui.horizontal(|ui| {
        field_ui(ui, "Pattern of the bond length", "r = (\\S+)", &mut lines.length);
        unit_ui(ui, "bond lengths in", &mut read.length_unit, LengthUnit::ALL, show::length_unit);
    });
    fault_ui(ui, fault(0, &lines.length));
    ui.horizontal(|ui| {
        field_ui(ui, "Pattern of the energy", "energy\\s+(\\S+)", &mut lines.energy);
        unit_ui(ui, "energies in", &mut read.energy_unit, EnergyUnit::ALL, show::unit);
    });
    fault_ui(ui, fault(1, &lines.energy));
    ui.horizontal(|ui| {
        name_ui(ui, "of several matches");
        ui.radio_value(&mut lines.which, Match::First, "the first");
        ui.radio_value(&mut lines.which, Match::Last, "the last");
    });
}

/// A name in the first column.
fn name_ui(ui: &mut Ui, name: &str) -> egui::Response {
    let text = RichText::new(name).color(Look::of(ui).dim);
    let row = egui::Layout::left_to_right(egui::Align::Center);
    ui.allocate_ui_with_layout(egui::vec2(NAME, 24.0), row, |ui| {
        ui.set_min_width(NAME);
        ui.label(text)
    })
    .inner
}

/// The field of a pattern after its name.
fn field_ui(ui: &mut Ui, name: &str, hint: &str, pattern: &mut String) {
    let label = name_ui(ui, name);
    let font = look::figures(look::BODY);
    let field = TextEdit::singleline(pattern).hint_text(hint).font(font).align(egui::Align2::LEFT_CENTER);
    ui.add_sized([FIELD, 24.0], field).labelled_by(label.id);
}

fn fault_ui(ui: &mut Ui, fault: Option<String>) {
    if let Some(fault) = fault {
        ui.label(RichText::new(fault).font(look::plain(look::SMALL)).color(Look::of(ui).stop));
    }
}

fn unit_ui<U: Copy + PartialEq, const N: usize>(
    ui: &mut Ui,
    name: &str,
    unit: &mut Option<U>,
    all: [U; N],
    word: fn(U) -> &'static str,
) {
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new(name).color(look.dim));
        let text = unit.map_or("not chosen", word);
        let response = ComboBox::from_id_salt(name).width(90.0).selected_text(text).show_ui(ui, |ui| {
            for one in all {
                ui.selectable_value(unit, Some(one), word(one));
            }
        });
        response.response.labelled_by(label.id);
    });
}

/// What is caught in each file.
fn caught_ui(ui: &mut Ui, logs: &Logs, tried: Option<&Tried>) {
    let look = Look::of(ui);
    let count = logs.set.files.len();
    let points = tried.map_or(0, Tried::points);
    show::heading(ui, "Caught", "");
    show::note(ui, &format!("{points} of {count} files give a point."));
    ScrollArea::vertical().id_salt("caught").max_height(LIST).auto_shrink([false, true]).show(ui, |ui| {
        egui::Grid::new("caught").num_columns(3).min_col_width(120.0).spacing([18.0, 3.0]).show(ui, |ui| {
            for name in ["file", "bond length", "energy"] {
                ui.label(RichText::new(name).font(look::plain(look::SMALL)).color(look.dim));
            }
            ui.end_row();
            let as_they_are: Vec<usize> = (0..count).collect();
            // Until the latest patterns are tried the list keeps the order it had.
            let order = logs.searched.as_ref().map_or(&as_they_are, |(_, found)| &found.order);
            for &index in order.iter().take(LISTED) {
                let Some((name, _)) = logs.set.files.get(index) else { continue };
                ui.label(RichText::new(name).font(look::plain(look::SECONDARY)).color(look.dim));
                for which in 0..2 {
                    let caught = tried.and_then(|t| t.logs.get(index)?[which].as_ref());
                    caught_cell_ui(ui, caught);
                }
                ui.end_row();
            }
        });
        if count > LISTED {
            show::note(ui, &format!("{LISTED} of {count} files."));
        }
    });
}

fn caught_cell_ui(ui: &mut Ui, caught: Option<&Result<Caught, String>>) {
    let look = Look::of(ui);
    match caught {
        None => {
            ui.label(RichText::new("–").color(look.dim));
        }
        Some(Ok(caught)) => {
            let place =
                if caught.line == 0 { "file name".to_owned() } else { format!("line {}", caught.line) };
            let text = RichText::new(&caught.text).font(look::figures(look::SECONDARY)).color(look.text);
            ui.label(text).on_hover_text(place);
        }
        Some(Err(why)) => {
            let text = if why.contains("no line matches") { "no match" } else { "no number" };
            ui.label(RichText::new(text).font(look::plain(look::SECONDARY)).color(look.stop))
                .on_hover_text(why);
        }
    }
}

/// The first file listed, the lines that were caught in it marked.
fn text_ui(ui: &mut Ui, logs: &Logs) {
    let look = Look::of(ui);
    let Some((_, found)) = &logs.searched else { return };
    let Some((index, name)) = found.order.first().and_then(|&i| Some((i, &logs.set.files.get(i)?.0))) else {
        return;
    };
    let caught: BTreeSet<usize> = found
        .tried
        .logs
        .get(index)
        .into_iter()
        .flatten()
        .filter_map(|c| c.as_ref()?.as_ref().ok().map(|c| c.line))
        .collect();
    show::heading(ui, name, "");
    ScrollArea::both().id_salt("log text").max_height(LIST).auto_shrink([false, true]).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 1.0;
        for (number, line) in &found.lines {
            let marked = *number > 0 && caught.contains(number);
            let text = if *number == 0 { "   …".to_owned() } else { format!("{number:5}  {line}") };
            let color = if marked { look.text } else { look.dim };
            let text = RichText::new(text).font(look::figures(look::SMALL)).color(color);
            let text = if marked { text.background_color(look.raised) } else { text };
            ui.add(egui::Label::new(text).extend());
        }
    });
}
