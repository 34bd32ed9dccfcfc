//! Which fits are made and how their points are weighted.

use crate::fit::{EnergyWeights, Family, FitRequest, Variable, Weighting};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::state::State;
use crate::settings::Settings;
use eframe::egui;
use egui::{DragValue, RichText, Ui};

pub(super) fn choice_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some((_, loaded, settings)) = state.document.focused() else { return };
    ui.horizontal_wrapped(|ui| {
        ui.menu_button("Families …", |ui| families_ui(ui, settings, out))
            .response
            .on_hover_text("Which model functions are fitted.");
        let columns: Vec<&str> = loaded.scan.properties.iter().map(|c| c.name.as_str()).collect();
        let text = format!("Weights: {}", weights_name(&settings.fits.weights));
        ui.menu_button(text, |ui| weights_ui(ui, &settings.fits.weights, &columns, out))
            .response
            .on_hover_text("How much each point counts in the fits. The curve has no weights.");
    });
}

fn families_ui(ui: &mut Ui, settings: &Settings, out: &mut Vec<Command>) {
    let requests = &settings.fits.requests;
    for &family in Family::ALL {
        let at = requests.iter().position(|r| r.family == family);
        let mut on = at.is_some();
        ui.horizontal(|ui| {
            if ui.checkbox(&mut on, family.title()).changed() {
                let mut changed = requests.clone();
                if on {
                    changed.push(added(family));
                } else {
                    changed.retain(|r| r.family != family);
                }
                out.push(Command::SetFits(changed));
            }
            if let Some(at) = at {
                details_ui(ui, requests, at, out);
            }
        });
    }
}

/// A family with its choices spelled out, so that they can be changed.
fn added(family: Family) -> FitRequest {
    match family {
        Family::Polynomial => FitRequest::polynomial(6, Variable::X),
        Family::ExtendedMorse => FitRequest { degree: Some(4), power: Some(2), ..FitRequest::plain(family) },
        _ => FitRequest::plain(family),
    }
}

/// Degree and variable, order and power.
fn details_ui(ui: &mut Ui, requests: &[FitRequest], at: usize, out: &mut Vec<Command>) {
    let mut request = requests[at];
    let number = |ui: &mut Ui, value: &mut Option<u32>, range, name: &str| {
        let Some(value) = value else { return };
        let response = ui.add(DragValue::new(value).range(range).speed(0.05).prefix(format!("{name} ")));
        response.on_hover_text(format!("The {name} of this function."));
    };
    match request.family {
        Family::Polynomial => {
            number(ui, &mut request.degree, 2..=12, "degree");
            let variable = request.variable.get_or_insert(Variable::X);
            ui.menu_button(format!("in {}", variable_name(*variable)), |ui| {
                for other in Variable::ALL {
                    if ui.radio(*variable == other, variable_name(other)).clicked() {
                        *variable = other;
                        ui.close();
                    }
                }
            });
        }
        Family::ExtendedMorse => {
            number(ui, &mut request.degree, 0..=12, "order");
            number(ui, &mut request.power, 1..=10, "p");
        }
        _ => {}
    }
    if request != requests[at] {
        let mut changed = requests.to_vec();
        changed[at] = request;
        out.push(Command::SetFits(changed));
    }
}

const fn variable_name(variable: Variable) -> &'static str {
    match variable {
        Variable::X => "x = r − rₑ",
        Variable::Xi => "ξ = x/rₑ (Dunham)",
        Variable::Z => "x/r (Simons-Parr-Finlan)",
        Variable::Ogilvie => "2x/(r + rₑ) (Ogilvie)",
    }
}

const fn weights_name(weights: &Weighting) -> &'static str {
    match weights {
        Weighting::Equal {} => "equal",
        Weighting::Point { .. } => "by point",
        Weighting::Column { sigma: false, .. } => "by a column",
        Weighting::Column { sigma: true, .. } => "by standard errors",
        Weighting::Energy(_) => "by energy",
        Weighting::Noise { .. } => "by noise",
    }
}

fn weights_ui(ui: &mut Ui, weights: &Weighting, columns: &[&str], out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let mut choose = |ui: &mut Ui, on: bool, name: &str, about: &str, to: Weighting| {
        if ui.radio(on, name).on_hover_text(about).clicked() && !on {
            out.push(Command::SetWeighting(to));
        }
    };
    choose(ui, matches!(weights, Weighting::Equal {}), "equal", "All points alike.", Weighting::Equal {});
    choose(
        ui,
        matches!(weights, Weighting::Energy(_)),
        "by energy",
        "A smooth step down above an energy [Partridge & Schwenke 1997].",
        Weighting::Energy(EnergyWeights::default()),
    );
    choose(
        ui,
        matches!(weights, Weighting::Noise { .. }),
        "by noise",
        "1/σ² with the noise told from the scan: the errors then follow σ, not the residuals.",
        Weighting::Noise { sigma_per_cm: None },
    );
    for name in columns {
        for (sigma, what) in [(false, "column"), (true, "1/σ² from column")] {
            let column = Weighting::Column { name: (*name).to_owned(), sigma };
            let about = "A column of the file gives every row its weight.";
            choose(ui, *weights == column, &format!("{what} {name}"), about, column.clone());
        }
    }
    if matches!(weights, Weighting::Point { .. }) {
        choose(ui, true, "by point", "Given point by point on the page of the scan.", weights.clone());
    } else {
        let note = "Single weights: click a point on the page Scan.";
        ui.label(RichText::new(note).font(look::plain(look::SMALL)).color(look.dim));
    }
    if let Weighting::Energy(energy) = weights {
        let mut step = energy.step_per_cm;
        let field = DragValue::new(&mut step).range(100.0..=1e6).speed(50.0).max_decimals(0);
        let response = ui.add(field.prefix("step at ").suffix(" cm⁻¹"));
        if response.changed() {
            out.push(Command::SetWeighting(Weighting::Energy(EnergyWeights {
                step_per_cm: step,
                ..*energy
            })));
        }
    }
}
