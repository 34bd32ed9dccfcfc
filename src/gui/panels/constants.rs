//! The page of constants and energies.

use crate::figure::rows::{curve_rows, energy_rows, short_reach_rows};
use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::product::Product;
use crate::gui::show::{self, ButtonForm, RowUi as _};
use crate::gui::state::State;
use eframe::egui::Ui;

pub(super) fn constants_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    if findings.curve.is_none() {
        show::note(ui, "No minimum, no constants: see the notices below the plot.");
        return;
    }
    show::heading(ui, "From the curve", "derivatives · levels");
    for row in curve_rows(findings) {
        row.ui(ui);
    }
    if findings.masses.is_none() {
        show::note(
            ui,
            "Wavenumbers and levels need a mass: name the atoms or give a reduced mass on the left.",
        );
    }
    let energies = energy_rows(findings);
    if !energies.is_empty() {
        show::rule(ui);
        show::heading(ui, "Energies", "");
        for row in energies {
            row.ui(ui);
        }
    }
    let reach = short_reach_rows(findings);
    if !reach.is_empty() {
        show::rule(ui);
        show::heading(ui, "Reach of the parabola", "");
        for row in reach {
            row.ui(ui);
        }
    }
    ui.add_space(12.0);
    ui.horizontal(|ui| {
        show::command_button_as(
            ui,
            state,
            "Findings as JSON …",
            Command::Export(Product::Findings),
            ButtonForm::Framed,
            out,
        );
    });
    ui.add_space(12.0);
    show::note(
        ui,
        "V = ½ k x² with k = V″(rₑ). Constants at the left from derivatives [Dunham 1932], at the right from the numerical levels. Hover a row for its formula and for where its error comes from.",
    );
}
