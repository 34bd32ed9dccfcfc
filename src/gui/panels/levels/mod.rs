//! The page of levels: those of one J, E(v, J), how they end, other isotopes.

mod isotopes;
mod limit;
mod quasi;
mod rotation;
mod table;

use super::left::settle;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm};
use crate::gui::state::{LevelsPart, State, Study};
use crate::settings::{HIGHEST_J, HIGHEST_LAMBDA};
use eframe::egui;
use egui::{DragValue, RichText, ScrollArea, Ui, WidgetInfo, vec2};

pub(super) fn levels_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    if study.findings.levels.is_empty() {
        let text = if study.findings.masses.is_none() {
            "Levels need a mass: name the atoms or give a reduced mass on the left."
        } else {
            "This curve holds no level; see the notices below the plot."
        };
        show::note(ui, text);
        return;
    }
    parts_ui(ui, state, out);
    match state.view.levels_part {
        LevelsPart::Table => {
            j_ui(ui, state, out);
            table::table_ui(ui, state, study, out);
        }
        part => {
            ScrollArea::vertical().id_salt(("levels", part.name())).auto_shrink(false).show(ui, |ui| {
                ui.spacing_mut().item_spacing.y = 0.0;
                ui.set_max_width(ui.available_width() - 4.0);
                match part {
                    LevelsPart::Rotation => rotation::rotation_ui(ui, state, study, out),
                    LevelsPart::Limit => limit::limit_ui(ui, state, study, out),
                    LevelsPart::Isotopes => isotopes::isotopes_ui(ui, state, study, out),
                    LevelsPart::Table => {}
                }
                ui.add_space(8.0);
            });
        }
    }
}

/// The parts of the page, the one in front in the colour of links.
fn parts_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.horizontal(|ui| {
        ui.spacing_mut().item_spacing.x = 16.0;
        ui.spacing_mut().button_padding.x = 0.0;
        for part in LevelsPart::ALL {
            let front = state.view.levels_part == part;
            let form = if front { ButtonForm::Link } else { ButtonForm::Quiet };
            show::command_button(ui, state, Command::ShowLevelsPart(part), form, out);
        }
    });
    ui.add_space(2.0);
}

/// J and Λ.
fn j_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let dim = |text: &str| RichText::new(text).font(look::plain(look::SECONDARY)).color(look.dim);
    ui.horizontal(|ui| {
        ui.label(dim("J"));
        let mut j = state.view.j;
        let response = ui.add_sized(vec2(56.0, 24.0), DragValue::new(&mut j).range(0..=HIGHEST_J).speed(0.1));
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "J shown"));
        if response.changed() {
            out.push(Command::ShowJ(j));
        }
        response.on_hover_text(
            "Rotational quantum number: the plot shows V(r) + ℏ²[J(J + 1) − Λ²]/(2μr²) with its bound and \
             quasi-bound levels. 0: levels without rotation. Alt+↑ and Alt+↓ walk.",
        );
        ui.add_space(6.0);
        lambda_ui(ui, state, out);
    });
}

/// Λ of the electronic state.
fn lambda_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let look = Look::of(ui);
    ui.label(RichText::new("Λ").font(look::plain(look::SECONDARY)).color(look.dim));
    let mut lambda = settings.levels.lambda;
    let field = DragValue::new(&mut lambda).range(0..=HIGHEST_LAMBDA).speed(0.05);
    let response = ui.add_sized(vec2(40.0, 24.0), field);
    response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Λ of the electronic state"));
    if response.changed() {
        out.push(Command::SetLambda(lambda));
    }
    settle(&response, out);
    response
        .on_hover_text("Λ of the electronic state (0 for Σ, 1 for Π, 2 for Δ): rotation begins at J = Λ.");
}
