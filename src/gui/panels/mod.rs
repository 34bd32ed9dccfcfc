//! The window's parts, one file each, and how they share the room.

mod asymptote;
mod center;
mod compare;
mod constants;
mod densities;
mod fits;
mod grid;
mod left;
mod levels;
mod masses;
mod notices;
mod offer;
mod problem;
mod reach;
mod right;
mod scan;
mod thermal;
mod top;
mod units;
mod waiting;

pub use compare::comparison_text;
pub(super) use fits::{parameter_row, symbol};
pub(super) use units::units_ui;
pub(super) use waiting::words as progress_words;

use super::command::Command;
use super::dialogs;
use super::look::Look;
use super::state::State;
use eframe::egui;
use egui::{Frame, Margin, Panel, Ui};

/// Below this width the left panel folds by itself.
const ROOM_FOR_LEFT: f32 = 1120.0;
/// Below this width the right panel folds too.
const ROOM_FOR_RIGHT: f32 = 760.0;
/// Width of a folded panel.
const FOLDED: f32 = 30.0;

/// The whole window.
pub fn window_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    parts_ui(ui, state, out);
    settle_hover(state, out);
}

/// Several parts can say which level the pointer is over; the last one counts, none means none.
fn settle_hover(state: &State, out: &mut Vec<Command>) {
    let mut hovered = None;
    out.retain(|command| match command {
        Command::HoverLevel(level) => {
            hovered = *level;
            false
        }
        _ => true,
    });
    if hovered != state.view.hovered_level {
        out.push(Command::HoverLevel(hovered));
    }
}

fn parts_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let width = ui.available_width();
    let plain = |margin: Margin| Frame::new().fill(look.panel).inner_margin(margin);
    Panel::top("top")
        .exact_size(44.0)
        .resizable(false)
        .frame(plain(Margin::symmetric(16, 0)))
        .show(ui, |ui| top::top_ui(ui, state, out));
    offer::offer_ui(ui, state, out);
    if state.document.scans.is_empty() {
        egui::CentralPanel::default()
            .frame(Frame::new().fill(look.ground).inner_margin(24))
            .show(ui, |ui| problem::empty_ui(ui, state, out));
        dialogs_ui(ui, state, out);
        return;
    }
    let left_open = state.view.panels.left.unwrap_or(width >= ROOM_FOR_LEFT);
    // A left panel opened by hand in a narrow window takes the room of the right one.
    let crowded = left_open && width < ROOM_FOR_LEFT;
    let right_open = state.view.panels.right.unwrap_or(width >= ROOM_FOR_RIGHT && !crowded);
    if left_open {
        Panel::left("left")
            .exact_size(212.0)
            .resizable(false)
            .frame(plain(Margin { left: 16, right: 12, top: 8, bottom: 8 }))
            .show(ui, |ui| left::left_ui(ui, state, out));
    } else {
        Panel::left("left folded")
            .exact_size(FOLDED)
            .resizable(false)
            .frame(plain(Margin::symmetric(2, 8)))
            .show(ui, |ui| folded_ui(ui, "Curves, masses, fits", Command::ShowLeft(true), out));
    }
    let comparing = state.view.comparison.open;
    if comparing {
        // The table has all the room.
    } else if right_open {
        let size = if width >= 1300.0 { 386.0 } else { 348.0 };
        Panel::right("right")
            .exact_size(size)
            .resizable(false)
            .frame(plain(Margin { left: 18, right: 14, top: 8, bottom: 8 }))
            .show(ui, |ui| right::right_ui(ui, state, out));
    } else {
        Panel::right("right folded")
            .exact_size(FOLDED)
            .resizable(false)
            .frame(plain(Margin::symmetric(2, 8)))
            .show(ui, |ui| folded_ui(ui, "Constants, levels, fits, reach", Command::ShowRight(true), out));
    }
    notices::notices_panel_ui(ui, state, out);
    egui::CentralPanel::default()
        .frame(Frame::new().fill(look.ground).inner_margin(Margin {
            left: 16,
            right: 14,
            top: 10,
            bottom: 6,
        }))
        .show(ui, |ui| {
            if comparing {
                compare::compare_ui(ui, state, out);
            } else {
                center::center_ui(ui, state, out);
            }
        });
    problem::problem_ui(ui, state, out);
    dialogs_ui(ui, state, out);
}

fn dialogs_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    dialogs::guide_ui(ui, state, out);
    dialogs::columns_ui(ui, state, out);
    dialogs::logs_ui(ui, state, out);
    dialogs::path_window_ui(ui, state, out);
    dialogs::keys_ui(ui, state, out);
    dialogs::search_ui(ui, state, out);
}

/// A folded panel: its name written upwards, unfolded by a click anywhere on it.
fn folded_ui(ui: &mut Ui, name: &str, command: Command, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(ui.available_size(), egui::Sense::click());
    let response = response.on_hover_text("Unfold").on_hover_cursor(egui::CursorIcon::PointingHand);
    response.widget_info(|| egui::WidgetInfo::labeled(egui::Role::Button, true, name));
    let color = if response.hovered() || response.has_focus() { look.text } else { look.dim };
    let galley =
        ui.painter().layout_no_wrap(name.to_owned(), super::look::plain(super::look::SECONDARY), color);
    let at = egui::pos2(rect.center().x - galley.size().y / 2.0, rect.top() + 8.0 + galley.size().x);
    ui.painter()
        .add(egui::epaint::TextShape::new(at, galley, color).with_angle(-std::f32::consts::FRAC_PI_2));
    if response.clicked() {
        out.push(command);
    }
}
