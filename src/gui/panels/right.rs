//! The pages on the right and their tabs.

use super::{constants, fits, levels, reach, scan, thermal};
use crate::export::compare::Form;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, command_button};
use crate::gui::state::{Page, State};
use eframe::egui;
use egui::{Align2, ScrollArea, Sense, Stroke, Ui, WidgetInfo, vec2};

pub(super) fn right_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    tabs_ui(ui, state, out);
    ui.add_space(6.0);
    // Without a study the middle of the window says why.
    let Some(study) = state.study() else { return };
    if let Some(failure) = state.failure() {
        show::note(ui, &format!("{failure} The figures below belong to the settings before."));
        if state.report().is_some() {
            command_button(ui, state, Command::CopyReport, ButtonForm::Link, out);
        }
    }
    if state.looks_old() {
        ui.multiply_opacity(0.55);
    }
    let findings = &*study.findings;
    copy_ui(ui, state, out);
    if state.view.page == Page::Levels {
        levels::levels_ui(ui, state, study, out);
        return;
    }
    if state.view.page == Page::Scan {
        scan::scan_ui(ui, state, study, out);
        return;
    }
    ScrollArea::vertical().id_salt(("page", state.view.page.name())).auto_shrink(false).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 0.0;
        // Room for the scroll bar, so that units are never under it.
        ui.set_max_width(ui.available_width() - 4.0);
        match state.view.page {
            Page::Constants => constants::constants_ui(ui, state, findings, out),
            Page::Fits => fits::fits_ui(ui, state, findings, out),
            Page::Reach => reach::reach_ui(ui, state, findings, out),
            Page::Thermal => thermal::thermal_ui(ui, state, study, out),
            Page::Levels | Page::Scan => {}
        }
        ui.add_space(8.0);
    });
}

/// At the foot of every page: its tables for the clipboard.
fn copy_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    egui::Panel::bottom("copy")
        .exact_size(30.0)
        .resizable(false)
        .show_separator_line(false)
        .frame(egui::Frame::new())
        .show(ui, |ui| {
            ui.horizontal_centered(|ui| {
                ui.spacing_mut().item_spacing.x = 16.0;
                ui.spacing_mut().button_padding.x = 0.0;
                for (_, form) in Form::ALL {
                    command_button(ui, state, Command::CopyPage(form), ButtonForm::Quiet, out);
                }
            });
        });
}

/// The row of tabs; the one in front is underlined.
fn tabs_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let folds = state.view.panels.right == Some(true) || ui.ctx().content_rect().width() < 1200.0;
    let row = ui.horizontal(|ui| {
        // The last tab keeps off the word that folds the panel.
        ui.spacing_mut().item_spacing.x = match (ui.available_width() < 340.0, folds) {
            (true, true) => 6.0,
            (true, false) => 11.0,
            (false, _) => 17.0,
        };
        for page in Page::ALL {
            let front = state.view.page == page;
            let (font, color) = if front {
                (look::semibold(look::BODY), look.text)
            } else {
                (look::plain(look::BODY), look.dim)
            };
            let galley = ui.painter().layout_no_wrap(page.name().to_owned(), font.clone(), color);
            let (rect, response) = ui.allocate_exact_size(vec2(galley.size().x, 30.0), Sense::click());
            response.widget_info(|| WidgetInfo::selected(egui::Role::Tab, true, front, page.name()));
            let color = if response.hovered() || response.has_focus() { look.text } else { color };
            show::text_in(ui, rect.center(), Align2::CENTER_CENTER, page.name(), &font, color);
            if front {
                ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(2.0, look.accent));
            }
            let response = response
                .on_hover_cursor(egui::CursorIcon::PointingHand)
                .on_hover_text(Command::ShowPage(page).tooltip());
            if response.clicked() {
                out.push(Command::ShowPage(page));
            }
        }
        if folds {
            fold_ui(ui, Command::ShowRight(false), out);
        }
    });
    let line = row.response.rect.bottom();
    ui.painter().hline(ui.max_rect().x_range(), line, Stroke::new(1.0, look.rule));
}

/// A small button that folds a panel.
pub(super) fn fold_ui(ui: &mut Ui, command: Command, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    ui.with_layout(egui::Layout::right_to_left(egui::Align::Center), |ui| {
        let text = egui::RichText::new("fold").font(look::plain(look::SMALL)).color(look.dim);
        if ui.add(egui::Button::new(text).frame(false)).on_hover_text("Fold this panel").clicked() {
            out.push(command);
        }
    });
}
