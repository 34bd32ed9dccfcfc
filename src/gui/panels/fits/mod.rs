//! The page of fits: parameters with their errors, the fits over all windows, the fits side by side.

mod choice;
mod compare;
mod copy;
mod failure;
mod resample;
mod windows;

use crate::figure::{fit_label, fit_role, number};
use crate::findings::{Findings, FitFindings};
use crate::fit::{Fit, Parameter, ParameterUnit};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, Row, RowUi as _, line_sample};
use crate::gui::state::{FitsPart, State};
use crate::units::{
    ANGSTROM_PER_BOHR, LengthUnit, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, PER_CM_PER_HARTREE, to_per_cm,
};
use eframe::egui;
use egui::{Align2, Rect, Sense, Ui, WidgetInfo, pos2, vec2};

pub(in crate::gui::panels) fn fits_ui(
    ui: &mut Ui,
    state: &State,
    findings: &Findings,
    out: &mut Vec<Command>,
) {
    if findings.curve.is_none() {
        show::note(ui, "No minimum, no fits: see the notices below the plot.");
        return;
    }
    parts_ui(ui, state, out);
    match state.view.fits_part {
        FitsPart::Parameters => parameters_ui(ui, state, findings, out),
        FitsPart::Windows => windows::windows_ui(ui, state, out),
        FitsPart::Compare => compare::compare_ui(ui, findings),
    }
}

/// The parts of the page, the one in front in the colour of links.
fn parts_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.horizontal(|ui| {
        ui.spacing_mut().item_spacing.x = 16.0;
        ui.spacing_mut().button_padding.x = 0.0;
        for part in FitsPart::ALL {
            let front = state.view.fits_part == part;
            let form = if front { ButtonForm::Link } else { ButtonForm::Quiet };
            show::command_button(ui, state, Command::ShowFitsPart(part), form, out);
        }
    });
    ui.add_space(4.0);
}

fn parameters_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    choice::choice_ui(ui, state, out);
    // Above the parameters: its bar and its stop button are not to be looked for.
    resample::resample_ui(ui, state, out);
    show::rule(ui);
    for (i, fit) in findings.fits.iter().enumerate() {
        if i > 0 {
            show::rule(ui);
        }
        fit_ui(ui, state, (i, fit), out);
    }
    show::rule(ui);
    copy::copy_ui(ui, state, out);
}

fn fit_ui(ui: &mut Ui, state: &State, (index, fit): (usize, &FitFindings), out: &mut Vec<Command>) {
    title_ui(ui, fit);
    match &fit.result {
        Ok(result) => {
            result_ui(ui, fit, result);
            resample::errors_ui(ui, state, index, fit, result);
        }
        Err(error) => failure::failure_ui(ui, state, index, error, out),
    }
}

/// Name of the fit after a sample of its line, its window at the right.
fn title_ui(ui: &mut Ui, fit: &FitFindings) {
    let look = Look::of(ui);
    let label = fit_label(fit);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 28.0), Sense::hover());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, &label));
    let role = fit_role(fit.request.family);
    let sample = Rect::from_min_size(pos2(rect.left(), rect.top()), vec2(26.0, rect.height()));
    line_sample(ui, sample, role, look.role(role));
    let at = pos2(rect.left() + 34.0, rect.center().y);
    show::text_in(ui, at, Align2::LEFT_CENTER, &label, &look::semibold(look::BODY), look.text);
    if let Ok(result) = &fit.result {
        let edge = |r: f64| number::fixed(result.window.unit.convert(r, LengthUnit::Angstrom), 3);
        let window =
            format!("{} … {} Å, {} points", edge(result.window.from), edge(result.window.to), result.points);
        show::text_in(
            ui,
            rect.right_center(),
            Align2::RIGHT_CENTER,
            &window,
            &look::plain(look::SMALL),
            look.dim,
        );
    }
}

fn result_ui(ui: &mut Ui, fit: &FitFindings, result: &Fit) {
    for parameter in &result.parameters {
        parameter_row(parameter).ui(ui);
    }
    for (name, estimate) in &fit.constants_per_cm {
        if let Some(estimate) = estimate {
            Row::new(symbol(name), number::estimate(estimate, 2), "cm⁻¹")
                .about("Constant of the fitted function, with the mass in force.")
                .ui(ui);
        }
    }
    let per_cm = |hartree: f64| number::fixed(to_per_cm(hartree), 2);
    Row::new("rms residual", per_cm(result.rms_residual_hartree), "cm⁻¹")
        .about("√(Σ d²/n), unweighted.")
        .ui(ui);
    Row::new("largest residual", per_cm(result.largest_residual_hartree), "cm⁻¹").ui(ui);
    if let Some(loo) = result.leave_one_out_rms_hartree {
        Row::new("leave-one-out rms", per_cm(loo), "cm⁻¹")
            .about("Each point predicted by the fit to all the others.")
            .ui(ui);
    }
    if let Some(aicc) = result.aicc {
        Row::new("AICc", number::fixed(aicc, 1), "")
            .about("Akaike criterion, corrected [Hurvich & Tsai 1989]; the lowest of fits to the same points is to be preferred.")
            .ui(ui);
    }
    for notice in &result.notices {
        show::note(ui, &notice.text);
    }
}

/// A parameter in the units of the window.
pub(in crate::gui) fn parameter_row(parameter: &Parameter) -> Row {
    let about = parameter.estimate.source.map_or_else(
        || "No standard error is known.".to_owned(),
        |s| format!("Standard error: {}.", s.word()),
    );
    let (factor, unit, decimals) = window_unit(parameter.unit);
    let scaled = parameter.estimate.scaled(factor);
    Row::new(symbol(&parameter.name), number::estimate(&scaled, decimals), unit).about(about)
}

/// Factor from atomic units, name and decimals of a parameter's unit in the window.
fn window_unit(unit: ParameterUnit) -> (f64, &'static str, usize) {
    match unit {
        ParameterUnit::TotalEnergy => (1.0, "Eₕ", 8),
        ParameterUnit::Wavenumber => (PER_CM_PER_HARTREE, "cm⁻¹", 1),
        ParameterUnit::Length => (ANGSTROM_PER_BOHR, "Å", 5),
        ParameterUnit::InverseLength => (1.0 / ANGSTROM_PER_BOHR, "Å⁻¹", 5),
        ParameterUnit::InverseLengthPower(n) => (
            ANGSTROM_PER_BOHR.powi(-n.cast_signed()),
            ["Å⁻¹", "Å⁻²", "Å⁻³", "Å⁻⁴"][(n.clamp(1, 4) - 1) as usize],
            5,
        ),
        ParameterUnit::ForceConstant => (NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, "N/m", 2),
        ParameterUnit::Coefficient(n) => {
            (PER_CM_PER_HARTREE / ANGSTROM_PER_BOHR.powi(n as i32), coefficient_unit(n), 0)
        }
        ParameterUnit::Dimensionless => (1.0, "", 5),
    }
}

fn coefficient_unit(n: u32) -> &'static str {
    match n {
        1 => "cm⁻¹/Å",
        2 => "cm⁻¹/Å²",
        3 => "cm⁻¹/Å³",
        4 => "cm⁻¹/Å⁴",
        5 => "cm⁻¹/Å⁵",
        6 => "cm⁻¹/Å⁶",
        7 => "cm⁻¹/Å⁷",
        8 => "cm⁻¹/Å⁸",
        _ => "cm⁻¹/Åⁿ",
    }
}

/// A name of the findings format as the trade writes it.
pub(in crate::gui) fn symbol(name: &str) -> String {
    match name {
        "e_min" => "V(rₑ)".to_owned(),
        "r_e" => "rₑ".to_owned(),
        "d_e" => "Dₑ (depth)".to_owned(),
        "omega_e" => "ωₑ".to_owned(),
        "omega_e_x_e" => "ωₑxₑ".to_owned(),
        "b_e" => "Bₑ".to_owned(),
        "alpha_e" => "αₑ".to_owned(),
        "zero_point_energy" => "zero-point energy".to_owned(),
        "centrifugal_d_e" => "Dₑ (rotation)".to_owned(),
        _ => {
            const LOWERED: [char; 10] = ['₀', '₁', '₂', '₃', '₄', '₅', '₆', '₇', '₈', '₉'];
            let lower = |c: char| c.to_digit(10).map_or(c, |d| LOWERED[d as usize]);
            name.replace("beta_", "β").chars().map(lower).collect()
        }
    }
}

#[cfg(test)]
mod tests {
    use super::symbol;

    #[test]
    fn names_become_symbols() {
        assert_eq!(symbol("c12"), "c₁₂");
        assert_eq!(symbol("beta_0"), "β₀");
        assert_eq!(symbol("a"), "a");
    }
}
