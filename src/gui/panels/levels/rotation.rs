//! E(v, J) of the J of the study, and the Dunham coefficients fitted to them.

use crate::figure::number;
use crate::figure::rows::Row;
use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::panels::grid::{FIRST, HEAD, ROW, grid_ui};
use crate::gui::sheets::{dunham_rows, energies_sheet};
use crate::gui::show::{self, RowUi as _};
use crate::gui::state::{State, Study};
use crate::settings::{quantum_numbers, quantum_numbers_text};
use eframe::egui;
use egui::{Key, RichText, TextEdit, Ui, WidgetInfo};

/// Rows of E(v, J) in sight.
const ROWS: f32 = 12.0;

pub(super) fn rotation_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    choice_ui(ui, state, out);
    ui.add_space(4.0);
    if findings.quasi_bound.is_none() {
        show::note(
            ui,
            "Name the J whose levels belong to the study, such as 1-20 or 5,10,15: they stand here and in the findings, \
             quasi-bound ones with their widths, and the Dunham coefficients are fitted to them.",
        );
        return;
    }
    let quasi = findings.quasi_bound.as_ref().map_or(0, Vec::len);
    show::heading(ui, "E(v, J) − Vₑ", &format!("{quasi} quasi-bound"));
    grid_ui(ui, "E(v, J)", &energies_sheet(findings), FIRST, HEAD + ROW * ROWS);
    if quasi > 0 {
        show::note(
            ui,
            "In colour: quasi-bound, behind the centrifugal barrier. Widths stand under \"One J\".",
        );
    }
    show::rule(ui);
    dunham_ui(ui, findings);
}

/// The list of J, changed when Enter is pressed or the field is left.
fn choice_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some((key, _, settings)) = state.document.focused() else { return };
    let look = Look::of(ui);
    let in_force = quantum_numbers_text(&settings.levels.rotation);
    let id = ui.scope_id().with(("J of the study", key));
    let mut text: String = ui.data(|d| d.get_temp(id)).unwrap_or_else(|| in_force.clone());
    let read = quantum_numbers(&text);
    ui.horizontal(|ui| {
        ui.label(RichText::new("J of the study").font(look::plain(look::SECONDARY)).color(look.dim));
        let field = TextEdit::singleline(&mut text).desired_width(138.0).hint_text("such as 1-20");
        let response = ui.add(field);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::TextInput, true, "J of the study"));
        if response.has_focus() {
            ui.data_mut(|d| d.insert_temp(id, text.clone()));
        }
        let left = response.lost_focus() || ui.input(|i| i.key_pressed(Key::Enter)) && response.has_focus();
        if left {
            ui.data_mut(|d| d.remove::<String>(id));
            if let Some(all) = quantum_numbers(&text).filter(|all| *all != settings.levels.rotation) {
                out.push(Command::SetRotation(all));
            }
        }
        response.on_hover_text("Whole numbers up to 1000 with commas, ranges as 0-20.");
        ui.add_space(4.0);
        super::lambda_ui(ui, state, out);
    });
    if read.is_none() {
        let text = RichText::new("Whole numbers up to 1000 with commas, or a range: 1,2,10 or 0-20.");
        ui.label(text.font(look::plain(look::SMALL)).color(look.stop));
    }
}

fn dunham_ui(ui: &mut Ui, findings: &Findings) {
    let Some(table) = &findings.dunham_table else {
        show::note(ui, "Dunham coefficients need levels of two J and two v at least that lean on no tail.");
        return;
    };
    show::heading(ui, "Dunham coefficients", "fit · derivatives / cm⁻¹");
    for row in dunham_rows(findings) {
        row.ui(ui);
    }
    let rms = number::significant(table.rms_residual_per_cm, 2);
    Row::new(format!("rms over {} levels", table.levels), rms, "")
        .about("E(v, J) = Σ Yₖₗ times (v + ½) to the power k and J(J + 1) − Λ² to the power l, least squares with equal weights: the errors measure the terms left out.")
        .ui(ui);
}
