//! The built-in path window, for desktops that offer no file dialog.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::reading::ReadingCommand;
use crate::gui::show;
use crate::gui::state::{PathPurpose, PathWindow, State};
use eframe::egui;
use egui::{Key, RichText, ScrollArea, TextEdit, Ui};
use std::path::{Path, PathBuf};

/// Shows the path window where one is open.
pub fn path_window_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(window) = &state.view.path_window else { return };
    let title = match window.purpose {
        PathPurpose::Open => "Open a bond scan".to_owned(),
        PathPurpose::Write(product) => format!("Write {}", product.name().to_lowercase()),
        PathPurpose::SaveStudy => "Save study".to_owned(),
        PathPurpose::Logs => "Text logs: the folder they are in".to_owned(),
    };
    egui::Window::new(title)
        .collapsible(false)
        .resizable(false)
        .fixed_size([480.0, 360.0])
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .show(ui.ctx(), |ui| content_ui(ui, window, out));
    if ui.input(|i| i.key_pressed(Key::Escape)) {
        out.push(Command::ClosePathWindow);
    }
}

fn content_ui(ui: &mut Ui, window: &PathWindow, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let label = ui.label(RichText::new("Path").font(look::plain(look::SECONDARY)).color(look.dim));
    let mut text = window.text.clone();
    let field = ui.add(TextEdit::singleline(&mut text).desired_width(f32::INFINITY)).labelled_by(label.id);
    if field.changed() {
        out.push(Command::TypePath(text));
    }
    let mut accepted = field.lost_focus() && ui.input(|i| i.key_pressed(Key::Enter));
    // Only then: a field that asks for the keyboard again has not lost it.
    if ui.memory(|m| m.focused().is_none()) {
        field.request_focus();
    }
    ScrollArea::vertical().id_salt("entries").max_height(230.0).auto_shrink(false).show(ui, |ui| {
        if window.entries.is_empty() {
            show::note(ui, "No such folder, or nothing in it.");
        }
        for entry in &window.entries {
            if ui.selectable_label(false, entry).clicked() {
                out.push(Command::TypePath(joined(&window.text, entry)));
            }
        }
    });
    ui.horizontal(|ui| {
        let verb = match window.purpose {
            PathPurpose::Open | PathPurpose::Logs => "Open",
            PathPurpose::Write(_) => "Write",
            PathPurpose::SaveStudy => "Save",
        };
        accepted |= ui.button(verb).clicked();
        if ui.button("Cancel").clicked() {
            out.push(Command::ClosePathWindow);
        }
    });
    if accepted && !window.text.trim().is_empty() {
        let path = PathBuf::from(window.text.trim());
        out.push(match window.purpose {
            PathPurpose::Open => Command::OpenPath(path),
            PathPurpose::Write(product) => Command::ExportTo { product, path, overwrite: false },
            PathPurpose::SaveStudy => Command::SaveStudyTo { path, overwrite: false },
            PathPurpose::Logs => Command::Reading(ReadingCommand::OpenLogs(vec![path])),
        });
        out.push(Command::ClosePathWindow);
    }
}

/// The text with its last part replaced by an entry of the folder it names.
fn joined(text: &str, entry: &str) -> String {
    let folder = if text.ends_with(['/', '\\']) {
        PathBuf::from(text)
    } else {
        Path::new(text).parent().map_or_else(PathBuf::new, Path::to_path_buf)
    };
    let mut path = folder.join(entry.trim_end_matches('/')).display().to_string();
    if entry.ends_with('/') {
        path.push('/');
    }
    path
}

#[cfg(test)]
mod tests {
    use super::joined;

    #[test]
    fn an_entry_replaces_the_last_part() {
        assert_eq!(joined("a/b/c.csv", "d.csv"), "a/b/d.csv");
        assert_eq!(joined("a/b/", "e/"), "a/b/e/");
        assert_eq!(joined("x", "y"), "y");
    }
}
