//! Errors by resampled residuals: asked for, watched, stopped, shown beside the others.

use crate::findings::FitBootstrap;
use crate::findings::FitFindings;
use crate::fit::{BootstrapSettings, Fit};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, Row, RowUi as _, command_button};
use crate::gui::state::{Resampling, State};
use eframe::egui;
use egui::{DragValue, ProgressBar, RichText, Ui, WidgetInfo};
use std::sync::Arc;

pub(super) fn resample_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.add_space(4.0);
    let look = Look::of(ui);
    if let Resampling::Running(progress) = &state.resampling {
        let (done, all) = progress.steps();
        let share = done as f32 / all.max(1) as f32;
        let text = format!("{done} of {all} fits");
        ui.horizontal(|ui| {
            let width = ui.available_width() - 70.0;
            let bar = ui.add(ProgressBar::new(share).desired_width(width).text(text.as_str()));
            bar.widget_info(|| {
                WidgetInfo::labeled(egui::Role::ProgressIndicator, true, format!("Resampling, {text}"))
            });
            command_button(ui, state, Command::StopResampling, ButtonForm::Framed, out);
        });
        return;
    }
    ui.horizontal(|ui| {
        command_button(ui, state, Command::Resample, ButtonForm::Framed, out);
        let mut repeats = state.view.repeats();
        let most = BootstrapSettings::MOST_REPEATS;
        let response = ui.add(DragValue::new(&mut repeats).range(2..=most).speed(5.0));
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Repeats"));
        if response.changed() {
            out.push(Command::SetRepeats(repeats));
        }
        ui.label(RichText::new("times").font(look::plain(look::SECONDARY)).color(look.dim));
    });
    match &state.resampling {
        Resampling::None => {}
        Resampling::Stopped => show::note(ui, "Stopped; nothing was kept."),
        Resampling::Failed(text) => show::note(ui, text),
        Resampling::Done(findings, ..) => {
            let current = state.study().is_some_and(|s| Arc::ptr_eq(&s.findings, findings));
            let text = if current {
                "The errors stand below each fit, beside those of linear propagation."
            } else {
                "The errors found belong to other settings. Resample again."
            };
            show::note(ui, text);
        }
        Resampling::Running(_) => {}
    }
}

/// The errors of one fit, where they belong to what is shown.
fn found(state: &State, index: usize) -> Option<&Result<FitBootstrap, String>> {
    let Resampling::Done(findings, _, fits) = &state.resampling else { return None };
    let current = state.study().is_some_and(|s| Arc::ptr_eq(&s.findings, findings));
    fits.get(index).filter(|_| current)?.as_ref()
}

pub(super) fn errors_ui(ui: &mut Ui, state: &State, index: usize, fit: &FitFindings, result: &Fit) {
    let errors = match found(state, index) {
        None => return,
        Some(Err(text)) => return show::note(ui, &format!("No resampled errors: {text}.")),
        Some(Ok(errors)) => errors,
    };
    let about = format!(
        "Standard error by {} resamplings; beside it that of linear propagation.",
        errors.settings.repeats
    );
    let shown = |error: Option<f64>| {
        error.map_or_else(|| crate::figure::number::NONE.to_owned(), |e| crate::digits::rounded(e, 3))
    };
    for (parameter, error) in result.parameters.iter().zip(&errors.parameter_errors) {
        let (factor, unit, _) = super::window_unit(parameter.unit);
        let linear = parameter.estimate.std_error.map(|e| e * factor);
        Row::new(
            format!("error of {}", super::symbol(&parameter.name)),
            shown(error.map(|e| e * factor)),
            unit,
        )
        .beside(shown(linear))
        .about(about.as_str())
        .ui(ui);
    }
    for ((name, estimate), error) in fit.constants_per_cm.iter().zip(&errors.constant_errors_per_cm) {
        let Some(estimate) = estimate else { continue };
        Row::new(format!("error of {}", super::symbol(name)), shown(*error), "cm⁻¹")
            .beside(shown(estimate.std_error))
            .about(about.as_str())
            .ui(ui);
    }
    if errors.failed > 0 {
        show::note(ui, &format!("{} of the repeats did not converge.", errors.failed));
    }
}
