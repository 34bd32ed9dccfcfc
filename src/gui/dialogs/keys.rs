//! The sheet of shortcuts, made from the list of commands, and what the mouse does on the picture.

use crate::gui::catalog::entries;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::reading::ReadingCommand;
use crate::gui::show::{self, elided};
use crate::gui::state::State;
use eframe::egui;
use egui::{Align2, Key, Modifiers, ScrollArea, Sense, Ui, WidgetInfo, pos2, vec2};

const ROW: f32 = 22.0;
const WIDTH: f32 = 420.0;

/// What has no command of its own.
const BY_HAND: [(&str, &str); 10] = [
    ("drag a grip", "fit window, tolerance, separated atoms"),
    ("arrows on a grip", "the same in steps; Tab leads there"),
    ("click on a point", "set it aside, or use it again"),
    ("click on a level", "keep it shown"),
    ("Shift+click on a level", "keep it shown beside others"),
    ("wheel", "zoom at the pointer"),
    ("drag", "move the view"),
    ("drag with the right button", "zoom to a box"),
    ("double click", "look at near the minimum"),
    ("Tab, Shift+Tab, Space", "walk through all controls, press one"),
];

/// Shows the sheet where it is open.
pub fn keys_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    if !state.view.keys_open {
        return;
    }
    let room = ui.ctx().content_rect().size();
    let columns: usize = if room.x >= 940.0 { 2 } else { 1 };
    let width = (WIDTH * columns as f32 + 24.0 * (columns - 1) as f32).min(room.x - 48.0);
    egui::Window::new("Keys and mouse")
        .resizable(false)
        .collapsible(false)
        .fixed_size([width, 0.0])
        .anchor(Align2::CENTER_CENTER, [0.0, 0.0])
        .show(ui.ctx(), |ui| {
            if ui.input_mut(|i| i.consume_key(Modifiers::NONE, Key::Escape)) {
                out.push(Command::ShowKeys(false));
            }
            let most = (room.y - 170.0).max(ROW);
            ScrollArea::vertical().id_salt("keys").min_scrolled_height(most).max_height(most).show(
                ui,
                |ui| {
                    ui.spacing_mut().item_spacing = vec2(24.0, 0.0);
                    ui.columns(columns, |parts| {
                        commands_ui(&mut parts[0], state);
                        hand_ui(&mut parts[columns - 1]);
                    });
                },
            );
            ui.add_space(10.0);
            let close = ui.button("Close");
            if close.clicked() {
                out.push(Command::ShowKeys(false));
            }
        });
}

fn commands_ui(ui: &mut Ui, state: &State) {
    show::heading(ui, "Keys", "");
    for entry in entries(state) {
        if let Some(keys) = entry.command.shortcut() {
            row_ui(ui, &ui.ctx().format_shortcut(&keys), &entry.command.name());
        }
    }
    // The desktop has these keys: what was copied comes with them.
    let paste = egui::KeyboardShortcut::new(Modifiers::COMMAND, Key::V);
    row_ui(ui, &ui.ctx().format_shortcut(&paste), ReadingCommand::AskPaste.name());
}

fn hand_ui(ui: &mut Ui) {
    show::heading(ui, "On the picture", "");
    for (hand, what) in BY_HAND {
        row_ui(ui, hand, what);
    }
}

fn row_ui(ui: &mut Ui, keys: &str, what: &str) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, format!("{keys}: {what}")));
    let split = 0.40 * rect.width();
    let at = |x: f32| pos2(rect.left() + x, rect.center().y);
    elided(ui, at(0.0), split - 8.0, keys, look::plain(look::SECONDARY), look.text);
    elided(ui, at(split), rect.width() - split, what, look::plain(look::SECONDARY), look.dim);
    response.on_hover_text(what);
}
