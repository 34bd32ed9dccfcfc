//! The page of temperature: averages over the levels beside the harmonic and the Morse picture.

mod ideal_gas;
mod lines;
mod populations;

use crate::digits;
use crate::figure::number;
use crate::figure::{ThermalQuantity, ThermalValues, thermal_density_picture};
use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::kept::kept;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, Column, Row, RowUi as _, columns_ui};
use crate::gui::state::{State, Study, ThermalView};
use crate::thermal::{TEMPERATURES_KELVIN, ThermalPoint};
use eframe::egui;
use egui::{Align2, DragValue, RichText, Sense, Ui, WidgetInfo, pos2, vec2};

/// Temperatures offered.
const OFFERED: [(&str, f64); 3] = [("25 °C", 298.15), ("1000 K", 1000.0), ("2000 K", 2000.0)];

fn columns(rotating: bool) -> [Column; 4] {
    let column = |right, name, about| Column { right, name, unit: "", about };
    if rotating {
        [
            column(0.41, "levels", "Over E(v, J), solved for every J, with weights 2J + 1."),
            column(0.61, "harmonic", "The oscillator with k = V″(rₑ) and a rigid rotor of length rₑ."),
            column(0.80, "Morse", "Over E(v, J) of the Morse fit."),
            column(1.0, "", ""),
        ]
    } else {
        [
            column(0.41, "levels", "Over the numerical levels, vibration alone."),
            column(0.61, "harmonic", "The oscillator with k = V″(rₑ), in closed form."),
            column(0.80, "Morse", "Over the levels of the Morse fit."),
            column(1.0, "", ""),
        ]
    }
}

pub(super) fn thermal_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    if findings.thermal_input().is_none() {
        let text = if findings.masses.is_none() {
            "Thermal averages need levels, and levels a mass: name the atoms or give a reduced mass on the left."
        } else {
            "Without levels there are no thermal averages; see the notices below the plot."
        };
        show::note(ui, text);
        return;
    }
    let kelvin = state.view.kelvin();
    temperature_ui(ui, kelvin, out);
    choices_ui(ui, state, out);
    let made = || findings.thermal_at(&[kelvin]).into_iter().next();
    let point = kept(ui.ctx(), "thermal point", &study.findings, kelvin.to_bits(), made);
    let Some(point) = point.as_ref().as_ref() else { return };
    table_ui(ui, findings, point);
    support_ui(ui, findings, point);
    lines::lines_ui(ui, state, study, kelvin, out);
    let density = kept(ui.ctx(), "thermal density", &study.findings, kelvin.to_bits(), || {
        thermal_density_picture(findings, kelvin)
    });
    populations::populations_ui(ui, point, density.as_ref().as_ref());
    if findings.reach.is_some() {
        super::reach::temperature_ui(ui, findings);
    }
    ideal_gas::ideal_gas_ui(ui, state, findings, point, out);
}

fn temperature_ui(ui: &mut Ui, kelvin: f64, out: &mut Vec<Command>) {
    ui.horizontal(|ui| {
        ui.label("at");
        let mut value = kelvin;
        let field = DragValue::new(&mut value)
            .range(TEMPERATURES_KELVIN.0..=TEMPERATURES_KELVIN.1)
            .speed(2.0)
            .max_decimals(2)
            .suffix(" K");
        let response = ui.add_sized(vec2(96.0, 26.0), field);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Temperature in kelvin"));
        if response.changed() {
            out.push(Command::SetKelvin(value));
        }
        for (name, kelvin) in OFFERED {
            let look = Look::of(ui);
            let text = RichText::new(name).font(look::plain(look::SECONDARY)).color(look.dim);
            if ui.add(egui::Button::new(text).frame(false)).clicked() {
                out.push(Command::SetKelvin(kelvin));
            }
        }
    });
    ui.add_space(4.0);
}

/// Whether J is summed too, and whether the density is drawn.
fn choices_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    ui.horizontal(|ui| {
        let mut rotation = settings.thermal.rotation;
        let response = ui.checkbox(&mut rotation, "with rotation").on_hover_text(
            "Sum over E(v, J), weights 2J + 1 times nuclear spin or 1/σ, every J solved for, up to the highest temperature of \
             the settings. Else vibration alone, over the levels with J = 0.",
        );
        if response.changed() {
            let thermal = crate::thermal::ThermalSettings { rotation, ..settings.thermal.clone() };
            out.push(Command::SetThermal(thermal));
        }
        let mut view = state.view.thermal;
        let response = ui.checkbox(&mut view.density, "density on the plot").on_hover_text(
            "Σ p(v) |ψ(v)|² at this temperature, drawn from the minimum upwards at the scale of the densities of the levels; \
             dashed, the harmonic one.",
        );
        if response.changed() {
            out.push(Command::SetThermalView(ThermalView { ..view }));
        }
    });
}

fn table_ui(ui: &mut Ui, findings: &Findings, point: &ThermalPoint) {
    let width = ui.available_width();
    let columns = columns(point.rotating.is_some());
    columns_ui(ui, width, &columns);
    let look = Look::of(ui);
    let r_e = findings.curve.as_ref().map(|c| c.local.r_e_bohr);
    for quantity in ThermalQuantity::ALL {
        let (rect, response) = ui.allocate_exact_size(vec2(width, look::ROW), Sense::hover());
        let y = rect.center().y;
        let label = look::plain(look::BODY);
        let left = pos2(rect.left(), y);
        show::text_in(ui, left, Align2::LEFT_CENTER, quantity.symbol(), &label, look.text);
        let ThermalValues { numerical, harmonic, morse } = quantity.values(point, r_e);
        let mut words = quantity.symbol().to_owned();
        let colors = [look.text, look.harmonic, look.morse];
        for ((value, column), color) in [Some(numerical), harmonic, morse].iter().zip(&columns).zip(colors) {
            let shown = value.map_or_else(
                || number::NONE.to_owned(),
                |v| digits::rounded(v, if v.abs() < 0.1 { 3 } else { 5 }),
            );
            let at = pos2(rect.left() + column.right * width, y);
            let font = look::figures(look::SECONDARY);
            show::text_in(ui, at, Align2::RIGHT_CENTER, &shown, &font, color);
            words.push_str(&format!(" {} {shown}", column.name));
        }
        let unit = look::plain(look::SMALL);
        show::text_in(ui, pos2(rect.right(), y), Align2::RIGHT_CENTER, quantity.unit(), &unit, look.dim);
        response.widget_info(|| {
            WidgetInfo::labeled(egui::Role::Label, true, format!("{words} {}", quantity.unit()))
        });
        response.on_hover_text(quantity.about());
    }
}

/// How much of the averages rests on levels that may not be what they seem.
fn support_ui(ui: &mut Ui, findings: &Findings, point: &ThermalPoint) {
    let (share, converged) = match &point.rotating {
        Some(r) => (r.unsupported_share, r.converged && point.converged),
        None => (point.unsupported_share, point.converged),
    };
    let text = if share < 1e-8 { "< 0.000001 %".to_owned() } else { number::percent(share, 6) };
    let about = "Share of the population in levels that lean on the tail, or in the last ones before the sum ends; below \
                 0.01 % the averages count as converged.";
    Row::new("on levels not firm", text, "").about(about).ui(ui);
    if let (Some(sum), Some(_)) = (&findings.rotating_sum, &point.rotating) {
        let (levels, highest_j) = sum.extent();
        let text = format!(
            "{} levels up to J = {highest_j}, for temperatures up to {} K.",
            number::fixed(levels as f64, 0),
            number::fixed(sum.solved_for_kelvin, 0)
        );
        show::note(ui, &text);
    }
    if !converged {
        let text = if point.rotating.is_some() {
            "Not converged: more than 0.01 % rests on levels that lean on the tail, or J or v end too early."
        } else {
            "Not converged: more than 0.01 % rests on levels that lean on the tail, or lies beyond the last level."
        };
        let look = Look::of(ui);
        let text = RichText::new(text).font(look::plain(look::SMALL)).color(look.accent);
        ui.add(egui::Label::new(text).wrap());
    }
}
