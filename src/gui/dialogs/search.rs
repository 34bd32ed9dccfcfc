//! The search of commands: every command by name, with its keys and where it lives.

use crate::gui::catalog::{self, Entry};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{elided, text_in};
use crate::gui::state::{Search, State};
use eframe::egui;
use egui::{Align2, Key, Modifiers, ScrollArea, Sense, TextEdit, Ui, WidgetInfo, pos2, vec2};

const WIDTH: f32 = 520.0;
const ROW: f32 = 27.0;
const ROWS: f32 = 12.0;

/// Shows the search where it is open.
pub fn search_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(search) = &state.view.search else { return };
    let width = WIDTH.min(ui.ctx().content_rect().width() - 48.0);
    egui::Window::new("Commands")
        .title_bar(false)
        .resizable(false)
        .collapsible(false)
        .fixed_size([width, 0.0])
        .anchor(Align2::CENTER_TOP, [0.0, 56.0])
        .show(ui.ctx(), |ui| content_ui(ui, state, search, out));
}

fn content_ui(ui: &mut Ui, state: &State, search: &Search, out: &mut Vec<Command>) {
    let found = catalog::search(&search.text, state);
    let take = keys(ui, search, &found, out);
    let mut text = search.text.clone();
    let field = ui.add(
        TextEdit::singleline(&mut text)
            .hint_text("Name of a command")
            .desired_width(f32::INFINITY)
            .id_salt("search of commands"),
    );
    field.widget_info(|| WidgetInfo::text_edit(true, &search.text, &text, "Search of commands"));
    ui.ctx().accesskit_node_builder(field.id, |node| node.set_label("Search of commands"));
    if field.changed() {
        out.push(Command::TypeSearch(text));
    } else if !field.has_focus() && ui.memory(|m| m.focused().is_none()) {
        field.request_focus();
    }
    ui.add_space(6.0);
    let mut taken = take.then(|| found.get(search.chosen)).flatten();
    ui.spacing_mut().item_spacing.y = 0.0;
    ScrollArea::vertical()
        .id_salt("found")
        .min_scrolled_height(ROW * ROWS)
        .max_height(ROW * ROWS)
        .auto_shrink([false, true])
        .show(ui, |ui| {
            if found.is_empty() {
                crate::gui::show::note(ui, "No command answers to this.");
            }
            for (line, entry) in found.iter().enumerate() {
                if line_ui(ui, state, entry, line == search.chosen) {
                    taken = Some(entry);
                }
            }
        });
    if let Some(entry) = taken.filter(|e| e.command.is_enabled(state).is_ok()) {
        out.push(Command::ShowSearch(false));
        out.push(entry.command.clone());
    }
}

/// Arrows move through what was found, Enter takes, Escape closes; taken before the text field sees them.
fn keys(ui: &Ui, search: &Search, found: &[Entry], out: &mut Vec<Command>) -> bool {
    let pressed = |key| ui.input_mut(|i| i.count_and_consume_key(Modifiers::NONE, key));
    let step = pressed(Key::ArrowDown) as i64 - pressed(Key::ArrowUp) as i64;
    if step != 0 && !found.is_empty() {
        let line = (search.chosen as i64 + step).clamp(0, found.len() as i64 - 1);
        out.push(Command::ChooseFound(line as usize));
    }
    if pressed(Key::Escape) > 0 {
        out.push(Command::ShowSearch(false));
    }
    pressed(Key::Enter) > 0
}

/// One command; true when it was clicked.
fn line_ui(ui: &mut Ui, state: &State, entry: &Entry, chosen: bool) -> bool {
    let look = Look::of(ui);
    let refused = entry.command.is_enabled(state).err();
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::click());
    if chosen || response.hovered() {
        ui.painter().rect_filled(rect, f32::from(look::CORNER), look.rule);
    }
    if chosen {
        response.scroll_to_me(None);
    }
    let keys = entry.command.shortcut().map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
    let name = entry.command.name();
    response.widget_info(|| {
        let state = refused.map_or_else(String::new, |r| format!(" Not now: {r}"));
        WidgetInfo::selected(
            egui::Role::Button,
            refused.is_none(),
            chosen,
            format!("{name}, {}.{state}", entry.place.name()),
        )
    });
    let color = if refused.is_some() { look.dim } else { look.text };
    let (right, middle) = (rect.right() - 10.0, rect.center().y);
    text_in(ui, pos2(right, middle), Align2::RIGHT_CENTER, &keys, &look::plain(look::SECONDARY), look.text);
    let place = refused.unwrap_or(entry.place.name());
    let room = 0.26 * rect.width();
    let font = look::plain(look::SMALL);
    let place_left = rect.left() + 0.55 * rect.width();
    elided(ui, pos2(place_left, middle), room, place, font, look.dim);
    let room = place_left - rect.left() - 22.0;
    elided(ui, pos2(rect.left() + 12.0, middle), room, &name, look::plain(look::BODY), color);
    let response = response.on_hover_text(entry.command.tooltip());
    response.clicked()
}
