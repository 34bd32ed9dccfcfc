//! Parameters to the clipboard, as text or LaTeX, in the units and the convention of whoever needs them.

use crate::gui::command::Command;
use crate::gui::show::{self, ButtonForm, command_button};
use crate::gui::state::State;
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, LengthUnit};
use eframe::egui;
use egui::{ComboBox, Ui, WidgetInfo};

pub(super) fn copy_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    show::heading(ui, "Copy parameters", "");
    let mut units = state.view.parameter_units;
    ui.horizontal_wrapped(|ui| {
        combo(ui, "Unit of k", &mut units.force_constant, &ForceConstantUnit::ALL, ForceConstantUnit::name);
        let conventions = [ForceConstantConvention::Half, ForceConstantConvention::Full];
        combo(ui, "What k means", &mut units.convention, &conventions, ForceConstantConvention::formula);
        combo(ui, "Unit of depths", &mut units.energy, &EnergyUnit::ALL, show::unit);
        combo(ui, "Unit of lengths", &mut units.length, &LengthUnit::ALL, show::length_unit);
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

fn combo<T: Copy + PartialEq>(
    ui: &mut Ui,
    label: &str,
    value: &mut T,
    all: &[T],
    name: impl Fn(T) -> &'static str,
) {
    let response = ComboBox::from_id_salt(label)
        .selected_text(name(*value))
        .width(0.0)
        .show_ui(ui, |ui| {
            for &one in all {
                ui.selectable_value(value, one, name(one));
            }
        })
        .response
        .on_hover_text(label);
    response.widget_info(|| {
        WidgetInfo::labeled(egui::Role::ComboBox, true, format!("{label}, {}", name(*value)))
    });
}
