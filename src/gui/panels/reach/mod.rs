//! The page of the reach: by displacement, in a unit of energy, of the fits, by level, by temperature.

mod force_field;

use super::left::settle;
use crate::figure::fit_label;
use crate::figure::number;
use crate::figure::rows::{Row, interval_text, level_value, temperature_text};
use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::plot::tolerance_step;
use crate::gui::show::{self, RowUi as _, combo_ui};
use crate::gui::state::State;
use crate::reach::{AbsoluteTolerance, Interval, LevelReach};
use crate::units::{EnergyUnit, to_angstrom};
use crate::verdict::percent;
use eframe::egui;
use egui::{DragValue, RichText, Ui, WidgetInfo};

/// Levels whose densities are listed.
const LEVELS: usize = 8;

pub(super) fn reach_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    let Some(reach) = &findings.reach else {
        show::note(ui, "No minimum with a positive force constant: there is no parabola to compare with.");
        return;
    };
    let tolerance = percent(reach.tolerance);
    show::heading(ui, "By displacement", &format!("tolerance {tolerance}"));
    for (name, interval, about) in [
        ("energy", &reach.energy, "|V − Vₑ − ½ k x²| ≤ τ · ½ k x²; leading order 3 τ k/|V‴|."),
        ("force", &reach.force, "|V′ − k x| ≤ τ |k x|; leading order 2 τ k/|V‴|."),
    ] {
        Row::new(name, interval_text(interval), "Å").about(format!("{about}{}", errors(interval))).ui(ui);
        let leading = interval
            .leading_order_bohr
            .map_or_else(|| number::NONE.to_owned(), |x| format!("±{}", number::fixed(to_angstrom(x), 4)));
        Row::new("leading order", leading, "Å").about(about).ui(ui);
        if let Some(text) = open_end(interval) {
            show::note(ui, text);
        }
    }
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        Row::new("zero-point amplitude", number::fixed(to_angstrom(amplitude), 4), "Å")
            .about("√(ℏ/(μω)), ω = 2πc ωₑ: the yardstick for a displacement.")
            .ui(ui);
    }
    absolute_ui(ui, state, findings, out);
    fits_ui(ui, findings);
    levels_ui(ui, state, findings, out);
    temperature_ui(ui, findings);
    force_field::force_field_ui(ui, state, findings, out);
}

/// Standard errors of both ends and where they come from, as words for a hint.
fn errors(interval: &Interval) -> String {
    let one = |name: &str, error: Option<(f64, crate::estimate::ErrorSource)>| {
        error.map(|(e, _)| format!(" {name} end ± {} Å.", crate::digits::rounded(to_angstrom(e), 2)))
    };
    let ends = [one("Inner", interval.x_minus_error), one("Outer", interval.x_plus_error)];
    let text: String = ends.into_iter().flatten().collect();
    if text.is_empty() { text } else { format!("{text} From the noise of the scan and the interpolation.") }
}

/// Energies of the curve at both ends, in a unit.
fn energies(interval: &Interval, unit: EnergyUnit) -> String {
    let decimals = match unit {
        EnergyUnit::PerCm => 0,
        EnergyUnit::Hartree => 5,
        EnergyUnit::Electronvolt => 4,
        _ => 2,
    };
    let one = |e: Option<f64>| {
        e.map_or_else(|| number::NONE.to_owned(), |e| number::fixed(e * unit.per_hartree(), decimals))
    };
    let [inner, outer] = interval.energies_hartree;
    format!("{} … {}", one(inner), one(outer))
}

/// The reach within an energy, in the unit of whoever needs it.
fn absolute_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    let (Some(reach), Some((_, _, settings))) = (&findings.reach, state.document.focused()) else { return };
    show::rule(ui);
    show::heading(ui, "Within an energy", "");
    let mut tolerance = settings.reach.absolute;
    ui.horizontal(|ui| {
        ui.label(dim(ui, "tolerance"));
        let unit = tolerance.unit;
        let step = tolerance_step(unit);
        let field = DragValue::new(&mut tolerance.value).range(1e-9..=1e6).speed(0.2 * step).max_decimals(6);
        let response = ui.add_sized(egui::vec2(76.0, 24.0), field);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Absolute tolerance"));
        combo_ui(ui, "Unit of the absolute tolerance", &mut tolerance.unit, &EnergyUnit::ALL, show::unit);
        if tolerance.unit != unit {
            // The same energy in the other unit, with few digits.
            let value = tolerance.unit.from_hartree(unit.to_hartree(tolerance.value));
            tolerance.value = crate::digits::rounded(value, 3).parse().unwrap_or(value);
        }
        let resting = !response.dragged();
        if tolerance != settings.reach.absolute {
            out.push(Command::SetAbsoluteTolerance { tolerance, resting });
        }
        settle(&response, out);
    });
    let AbsoluteTolerance { value, unit } = reach.absolute_tolerance;
    let name = format!("within {} {}", show::as_read(value), show::unit(unit));
    let about = "|V − Vₑ − ½ k x²| is smaller than the tolerance.";
    Row::new(name, interval_text(&reach.absolute), "Å")
        .about(format!("{about}{}", errors(&reach.absolute)))
        .ui(ui);
    Row::new("energy at its ends", energies(&reach.absolute, unit), show::unit(unit))
        .about(
            "V − Vₑ of the curve at the inner and at the outer end: so far up the well the parabola serves.",
        )
        .ui(ui);
    if let Some(text) = open_end(&reach.absolute) {
        show::note(ui, text);
    }
}

/// Where each fit stands for the scan.
fn fits_ui(ui: &mut Ui, findings: &Findings) {
    let Some(reach) = &findings.reach else { return };
    let fits: Vec<_> = findings.fits.iter().filter_map(|f| Some((f, f.reach?))).collect();
    if fits.is_empty() {
        return;
    }
    let AbsoluteTolerance { value, unit } = reach.absolute_tolerance;
    show::rule(ui);
    show::heading(
        ui,
        "Fits against the scan",
        &format!("{} or {} {}", percent(reach.tolerance), show::as_read(value), show::unit(unit)),
    );
    for (fit, of) in fits {
        let about = format!(
            "|V(fit) − V| ≤ the larger of {} of V − Vₑ and {} {}, connected around rₑ.",
            percent(of.tolerance),
            show::as_read(value),
            show::unit(unit)
        );
        let (text, unit_shown, more) = match of.interval {
            None => ("not even at rₑ".to_owned(), "", String::new()),
            Some(_) if of.whole_scan() => ("the whole scan".to_owned(), "", String::new()),
            Some(interval) => {
                let ends = format!(" V − Vₑ there: {} {}.", energies(&interval, unit), show::unit(unit));
                (interval_text(&interval), "Å", format!("{ends}{}", errors(&interval)))
            }
        };
        Row::new(fit_label(fit), text, unit_shown).about(format!("{about}{more}")).ui(ui);
    }
}

fn levels_ui(ui: &mut Ui, state: &State, findings: &Findings, out: &mut Vec<Command>) {
    let Some(reach) = &findings.reach else { return };
    if reach.levels.is_none() && reach.spacing.is_none() {
        return;
    }
    show::rule(ui);
    show::heading(ui, "By level", "tolerance / cm⁻¹");
    level_row_ui(ui, state, "levels", reach.levels.as_ref(), out);
    level_row_ui(ui, state, "spacings", reach.spacing.as_ref(), out);
    show::rule(ui);
    show::heading(ui, "Density in the reach", "beyond turning points");
    for level in findings.levels.iter().take(LEVELS) {
        let inside = level.inside_reach.map_or_else(|| number::NONE.to_owned(), |p| number::percent(p, 1));
        Row::new(format!("v = {}", level.v), inside, "")
            .beside(number::percent(level.forbidden_probability, 1))
            .about("∫|ψ|² dr inside the energy reach; at the right, outside the classical turning points.")
            .ui(ui);
    }
}

/// The highest v within a tolerance that can be changed; without one of its own it is τ ωₑ.
fn level_row_ui(ui: &mut Ui, state: &State, name: &str, of: Option<&LevelReach>, out: &mut Vec<Command>) {
    let (Some(of), Some((_, _, settings))) = (of, state.document.focused()) else { return };
    let by_level = name == "levels";
    let own = if by_level {
        settings.reach.level_tolerance_per_cm
    } else {
        settings.reach.spacing_tolerance_per_cm
    };
    let command = |tolerance_per_cm: Option<f64>, resting: bool| {
        if by_level {
            Command::SetLevelTolerance { tolerance_per_cm, resting }
        } else {
            Command::SetSpacingTolerance { tolerance_per_cm, resting }
        }
    };
    let about = if by_level {
        "The highest v up to which |ωₑ(v + ½) − E(v)| stays within the tolerance, with all below."
    } else {
        "The highest v up to which the spacing E(v + 1) − E(v) differs from ωₑ by no more, with all below."
    };
    ui.horizontal(|ui| {
        ui.set_min_height(look::ROW);
        let whole = ui.available_width();
        let (place, response) =
            ui.allocate_exact_size(egui::vec2(0.5 * whole, look::ROW), egui::Sense::hover());
        let look = Look::of(ui);
        let words = format!("{name} {}", level_value(of));
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, words.as_str()));
        let label = (egui::Align2::LEFT_CENTER, look::plain(look::BODY));
        show::text_in(ui, place.left_center(), label.0, name, &label.1, look.text);
        let figures = look::figures(look::SECONDARY);
        let right = egui::Align2::RIGHT_CENTER;
        show::text_in(ui, place.right_center(), right, &level_value(of), &figures, look.text);
        response.on_hover_text(about);
        let mut value = of.tolerance_per_cm;
        let field = DragValue::new(&mut value).range(1e-3..=1e6).speed(0.5).fixed_decimals(1);
        let response = ui.add_sized(egui::vec2(70.0, 22.0), field);
        response.widget_info(|| {
            WidgetInfo::labeled(
                egui::Role::SpinButton,
                true,
                format!("Tolerance of the {name} in wavenumbers"),
            )
        });
        if response.changed() {
            out.push(command(Some(value), !response.dragged()));
        }
        settle(&response, out);
        if own.is_some() {
            let text = dim(ui, "τ ωₑ");
            let back = ui.add(egui::Button::new(text).frame(false));
            back.widget_info(|| {
                WidgetInfo::labeled(egui::Role::Button, true, format!("Default tolerance of the {name}"))
            });
            if back.on_hover_text("Take the tolerance of the energy times ωₑ again.").clicked() {
                out.push(command(None, true));
            }
        }
    });
}

fn dim(ui: &Ui, text: &str) -> RichText {
    RichText::new(text).font(look::plain(look::SECONDARY)).color(Look::of(ui).dim)
}

pub(super) fn temperature_ui(ui: &mut Ui, findings: &Findings) {
    let Some(reach) = &findings.reach else { return };
    let t = reach.temperature_kelvin;
    let rows = [
        ("partition function, 1 %", t.partition_function, "|ln q(harmonic) − ln q| ≤ 0.01."),
        ("mean energy, 1 % of kT", t.mean_energy, "|U(harmonic) − U| ≤ 0.01 k_BT, each from its v = 0."),
        ("⟨x²⟩, 5 %", t.mean_square_x, "Mean square displacement from rₑ."),
    ];
    if rows.iter().all(|r| r.1.is_none()) && t.looked_up_to.is_none() {
        return;
    }
    show::rule(ui);
    show::heading(ui, "By temperature", "vibration alone");
    for (name, limit, about) in rows {
        // What holds at every temperature looked at says how far that was.
        let value = match (limit, t.looked_up_to) {
            (Some(kelvin), _) => temperature_text(kelvin),
            (None, Some(highest)) => format!("to {} at least", number::fixed(highest, 0)),
            (None, None) => number::NONE.to_owned(),
        };
        Row::new(name, value, "K").about(about).ui(ui);
    }
    if let Some(highest) = t.looked_up_to {
        let highest = number::fixed(highest, 0);
        show::note(ui, &format!("Looked at up to {highest} K, as far as the levels support the sums."));
    }
}

fn open_end(interval: &Interval) -> Option<&'static str> {
    match (interval.x_minus_bohr, interval.x_plus_bohr) {
        (Some(_), Some(_)) => None,
        (None, None) => Some("Neither side is left before the scan ends."),
        (None, _) => Some("Not left on the inner side before the scan ends."),
        (_, None) => Some("Not left on the outer side before the scan ends."),
    }
}
