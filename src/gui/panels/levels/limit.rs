//! The levels up to dissociation: spacings with their straight line, how they end, what leans on the tail.

use crate::figure::drawing::birge_sponer_drawing;
use crate::figure::rows::Row;
use crate::figure::{birge_sponer_sentence, number};
use crate::findings::{Findings, TailTrial};
use crate::gui::command::Command;
use crate::gui::look;
use crate::gui::paper::drawing_ui;
use crate::gui::sheets::{change_words, limit_rows};
use crate::gui::show::{self, ButtonForm, RowUi as _, command_button};
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Sense, Ui, WidgetInfo};

/// Height of the picture.
const HEIGHT: f32 = 250.0;

pub(super) fn limit_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    show::heading(ui, "Spacings", "Birge and Sponer");
    picture_ui(ui, findings);
    for row in limit_rows(findings) {
        row.ui(ui);
    }
    show::rule(ui);
    tail_ui(ui, state, findings, out);
}

fn picture_ui(ui: &mut Ui, findings: &Findings) {
    let size = [f64::from(ui.available_width()), f64::from(HEIGHT)];
    let font = f64::from(look::SMALL);
    let Some(drawing) = birge_sponer_drawing(findings, size, font, ui.visuals().dark_mode) else {
        show::note(ui, "The straight line needs three levels at least that lean on no tail.");
        return;
    };
    let sentence = birge_sponer_sentence(findings).unwrap_or_default();
    let response = drawing_ui(ui, &drawing, Sense::hover());
    response.widget_info(|| {
        WidgetInfo::labeled(egui::Role::Figure, true, format!("Spacings of the levels. {sentence}"))
    });
    show::note(ui, &sentence);
    ui.add_space(4.0);
}

fn tail_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    show::heading(ui, "Tail", "levels that stay");
    let support = findings.level_support.as_ref();
    if let Some(support) = support {
        Row::new("supported by the scan", format!("{} of {}", support.supported, support.levels), "")
            .about("Levels that lean on no tail: the others would move if the curve beyond the scan did.")
            .ui(ui);
        for trial in &support.sensitivity {
            trial_row(trial, support.levels).ui(ui);
        }
    }
    let on = findings.settings.levels.tail_sensitivity;
    if on && support.is_some_and(|s| s.sensitivity.is_empty()) {
        show::note(
            ui,
            "Nothing to move: the curve ends in a wall, or the scan comes nearer to its limit than the move.",
        );
    }
    ui.add_space(4.0);
    command_button(ui, state, Command::SetTailSensitivity(!on), ButtonForm::Framed, out);
    ui.add_space(4.0);
    show::note(
        ui,
        "Moving the tail solves again with Cₙ changed by a fifth and with the limit by a hundredth of the depth, and counts the levels from v = 0 on that move by no more than a leaning level may.",
    );
}

fn trial_row(trial: &TailTrial, levels: usize) -> Row {
    let mut about = format!(
        "{} levels then; largest shift of a level that is there in both {} cm⁻¹.",
        trial.levels,
        number::significant(trial.largest_shift_per_cm, 3)
    );
    if trial.levels != levels {
        about = format!("{levels} levels become {about}");
    }
    Row::new(change_words(&trial.change), trial.unmoved.to_string(), "").about(about)
}
