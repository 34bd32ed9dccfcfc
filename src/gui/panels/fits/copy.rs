//! Parameters to the clipboard, as text or LaTeX, in the units and the convention of whoever needs them.

use crate::gui::command::Command;
use crate::gui::show::{self, ButtonForm, combo_ui, command_button};
use crate::gui::state::State;
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit};
use eframe::egui::Ui;

pub(super) fn copy_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    show::heading(ui, "Copy parameters", "");
    let mut units = state.view.parameter_units;
    ui.horizontal_wrapped(|ui| {
        combo_ui(
            ui,
            "Unit of k",
            &mut units.force_constant,
            &ForceConstantUnit::ALL,
            ForceConstantUnit::name,
        );
        let conventions = [ForceConstantConvention::Half, ForceConstantConvention::Full];
        combo_ui(ui, "What k means", &mut units.convention, &conventions, ForceConstantConvention::formula);
        combo_ui(ui, "Unit of depths", &mut units.energy, &EnergyUnit::ALL, show::unit);
        combo_ui(ui, "Unit of lengths", &mut units.length, &LengthUnit::ALL, show::length_unit);
    });
    if units != state.view.parameter_units {
        out.push(Command::SetParameterUnits(units));
    }
    ui.add_space(4.0);
    ui.horizontal_wrapped(|ui| {
        command_button(ui, state, Command::CopyParameters, ButtonForm::Framed, out);
        command_button(ui, state, Command::CopyParametersLatex, ButtonForm::Framed, out);
    });
}
