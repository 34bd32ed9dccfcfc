//! The energy of the separated atoms: given by the user in the unit of the file, or assumed.

use super::left::settle;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show;
use crate::gui::state::{State, Study};
use crate::potential::Potential;
use crate::potential::curve::OuterTail;
use crate::settings::Settings;
use crate::units::{EnergyUnit, to_per_cm};
use eframe::egui;
use egui::{DragValue, RichText, Ui, WidgetInfo};

/// The limit that the curve runs into, in the unit of its energies, and whether it is assumed.
pub(super) fn limit_of(study: &Study) -> Option<(f64, bool)> {
    let curve = study.findings.curve.as_deref()?;
    let assumed = match curve.outer {
        OuterTail::InversePower { assumed, .. } | OuterTail::Exponential { assumed, .. } => assumed,
        OuterTail::HardWall { .. } => return None,
    };
    let energy = curve.limit_hartree();
    energy.is_finite().then(|| (study.findings.source.energy_unit.from_hartree(energy), assumed))
}

/// Rounded to a millionth of a hartree, whatever the unit.
fn rounded(energy: f64, unit: EnergyUnit) -> f64 {
    let decimals = (6.0 - unit.per_hartree().log10()).round().max(0.0) as i32;
    let scale = 10_f64.powi(decimals);
    (energy * scale).round() / scale
}

pub(super) fn asymptote_ui(ui: &mut Ui, state: &State, settings: &Settings, out: &mut Vec<Command>) {
    let Some(study) = state.study() else { return };
    show::heading(ui, "Separated atoms", "");
    let look = Look::of(ui);
    let unit = study.findings.source.energy_unit;
    let given = settings.interpolation.asymptote;
    let limit = limit_of(study);
    let mut is_given = given.is_some();
    let text = RichText::new("energy given").font(look::plain(look::SECONDARY)).color(look.dim);
    let response = ui.checkbox(&mut is_given, text).on_hover_text(
        "The energy of the two atoms apart, from the same kind of calculation. Without it the depth of the well is not known.",
    );
    if response.changed() {
        let last =
            study.findings.source.points.iter().filter(|p| p.used).map(|p| p.energy_hartree).next_back();
        let start = limit.map(|l| l.0).or(last.map(|e| unit.from_hartree(e))).unwrap_or(0.0);
        let energy = is_given.then(|| rounded(start, unit));
        out.push(Command::SetAsymptote { energy, resting: true });
    }
    if let Some(mut energy) = given {
        ui.horizontal(|ui| {
            let field = DragValue::new(&mut energy)
                .speed(unit.from_hartree(1e-4))
                .max_decimals(8)
                .custom_formatter(|v, _| show::as_read(v))
                .custom_parser(|text| text.trim().replace('−', "-").parse().ok());
            let response = ui.add(field);
            response.widget_info(|| {
                WidgetInfo::labeled(egui::Role::SpinButton, true, "Energy of the separated atoms")
            });
            if response.changed() {
                out.push(Command::SetAsymptote { energy: Some(energy), resting: false });
            }
            settle(&response, out);
            ui.label(RichText::new(show::unit(unit)).font(look::plain(look::SECONDARY)).color(look.dim));
        });
    }
    show::note(ui, &words(study, limit));
}

/// How high above the minimum the curve levels off, and who says so.
fn words(study: &Study, limit: Option<(f64, bool)>) -> String {
    let Some((energy, assumed)) = limit else {
        return "The curve ends in a wall beyond its last point.".to_owned();
    };
    let v_e = study.findings.curve.as_ref().map_or(0.0, |c| c.v_e_hartree.value);
    let above = to_per_cm(study.findings.source.energy_unit.to_hartree(energy) - v_e);
    let who = if assumed { "assumed" } else { "given" };
    format!("{} cm⁻¹ above the minimum, {who}", number::fixed(above, 0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn energies_are_offered_without_meaningless_digits() {
        assert_eq!(rounded(-7.987_654_321, EnergyUnit::Hartree), -7.987_654);
        assert_eq!(rounded(19_976.123_4, EnergyUnit::PerCm), 19_976.1);
    }
}
