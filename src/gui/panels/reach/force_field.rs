//! The force constant as a force field wants it: in its unit, by both conventions, with the energy it serves up to.

use crate::figure::number;
use crate::figure::rows::Row;
use crate::findings::Findings;
use crate::fit::Family;
use crate::gui::command::Command;
use crate::gui::show::{self, RowUi as _, combo_ui};
use crate::gui::state::State;
use crate::units::{EnergyUnit, ForceConstantConvention, ForceConstantUnit, to_angstrom};
use eframe::egui::{RichText, Ui};

/// A unit of force constants as it is written.
const fn written(unit: ForceConstantUnit) -> &'static str {
    match unit {
        ForceConstantUnit::NewtonPerMetre => "N/m",
        ForceConstantUnit::MillidynePerAngstrom => "mdyn/Å",
        ForceConstantUnit::HartreePerBohr2 => "hartree/bohr²",
        ForceConstantUnit::KilojoulePerMoleNanometre2 => "kJ/(mol nm²)",
        ForceConstantUnit::KilocaloriePerMoleAngstrom2 => "kcal/(mol Å²)",
    }
}

pub(super) fn force_field_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    let Some(curve) = &findings.curve else { return };
    let Some(k) = curve.derivatives_hartree[0] else { return };
    show::rule(ui);
    show::heading(ui, "For a force field", "k of the curve, of the harmonic fit");
    let mut units = state.view.parameter_units;
    ui.horizontal(|ui| {
        ui.label(RichText::new("k in").font(crate::gui::look::plain(crate::gui::look::SECONDARY)));
        combo_ui(ui, "Unit of k", &mut units.force_constant, &ForceConstantUnit::ALL, written);
    });
    if units != state.view.parameter_units {
        out.push(Command::SetParameterUnits(units));
    }
    let unit = state.view.parameter_units.force_constant;
    let of_fit = findings
        .found_fit(Family::Harmonic)
        .and_then(|f| f.result.as_ref().ok()?.force_constant_hartree_per_bohr2());
    for (convention, name) in
        [(ForceConstantConvention::Half, "V = ½ k x²"), (ForceConstantConvention::Full, "V = k x²")]
    {
        let factor = unit.per_hartree_per_bohr2() * convention.of_curvature();
        let shown = |k: crate::estimate::Estimate| {
            let k = k.scaled(factor);
            let decimals = (4 - k.value.abs().log10().floor() as i32).clamp(0, 8) as usize;
            number::estimate(&k, decimals)
        };
        Row::new(name, shown(k), written(unit))
            .beside(of_fit.map_or_else(|| number::NONE.to_owned(), shown))
            .about(
                "At the left from V″(rₑ) of the curve, at the right from the harmonic fit in its window. With V = k x² the \
                 number is half as large.",
            )
            .ui(ui);
    }
    Row::new("rₑ", number::fixed(to_angstrom(curve.r_e_bohr.value), 5), "Å").ui(ui);
    let Some(reach) = &findings.reach else { return };
    let energy = EnergyUnit::KilocaloriePerMole;
    let [inner, outer] = reach
        .energy
        .energies_hartree
        .map(|e| e.map_or_else(|| number::NONE.to_owned(), |e| number::fixed(e * energy.per_hartree(), 2)));
    let name = format!("V − Vₑ where {} is reached", crate::verdict::percent(reach.tolerance));
    Row::new(name, format!("{inner} … {outer}"), "kcal/mol")
        .about("Energy of the curve at the inner and the outer end of the reach by energy.")
        .ui(ui);
}
