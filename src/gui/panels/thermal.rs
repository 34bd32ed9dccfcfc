//! The page of temperature: averages over the levels beside the harmonic and the Morse picture.

use crate::digits;
use crate::figure::number;
use crate::findings::Findings;
use crate::gui::chart::chart_ui;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, Column, columns_ui};
use crate::gui::state::{State, Study};
use crate::thermal::{Averages, TEMPERATURES_KELVIN, ThermalPoint, thermal};
use crate::units::to_angstrom;
use eframe::egui;
use egui::{Align2, DragValue, Rect, Sense, Ui, WidgetInfo, pos2, vec2};

const COLUMNS: [Column; 4] = [
    Column { right: 0.41, name: "levels", unit: "", about: "Over the numerical levels, vibration alone." },
    Column {
        right: 0.61,
        name: "harmonic",
        unit: "",
        about: "The oscillator with k = V″(rₑ), in closed form.",
    },
    Column { right: 0.80, name: "Morse", unit: "", about: "Over the levels of the Morse fit." },
    Column { right: 1.0, name: "", unit: "", about: "" },
];
/// Populations shown.
const POPULATIONS: usize = 6;

pub(super) fn thermal_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    let Some(input) = findings.thermal_input() else {
        let text = if findings.masses.is_none() {
            "Thermal averages need levels, and levels a mass: name the atoms or give a reduced mass on the left."
        } else {
            "Without levels there are no thermal averages; see the notices below the plot."
        };
        show::note(ui, text);
        return;
    };
    let kelvin = state.view.kelvin();
    temperature_ui(ui, kelvin, out);
    let Some(point) = thermal(&input, &[kelvin]).into_iter().next() else { return };
    table_ui(ui, &point);
    if !point.converged {
        show::note(
            ui,
            "At this temperature more than 0.01 % rests on levels that lean on the tail, or lies beyond the last level.",
        );
    }
    show::rule(ui);
    show::heading(ui, "Over temperature", "vibration alone");
    if let Some(shown) = chart_ui(ui, &study.pictures.thermal, 190.0, Some(kelvin))
        && let Some(pointer) = shown.response.interact_pointer_pos()
    {
        let wanted = shown.map.x_value(pointer.x.clamp(shown.map.rect.left(), shown.map.rect.right()));
        let wanted = wanted.round().max(1.0);
        // A hand that rests on the chart asks for nothing new.
        if wanted != kelvin {
            out.push(Command::SetKelvin(wanted));
        }
    }
    populations_ui(ui, &point);
    reach_ui(ui, findings);
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
        for (name, kelvin) in [("25 °C", 298.15), ("1000 K", 1000.0), ("2000 K", 2000.0)] {
            let look = Look::of(ui);
            let text = egui::RichText::new(name).font(look::plain(look::SECONDARY)).color(look.dim);
            if ui.add(egui::Button::new(text).frame(false)).clicked() {
                out.push(Command::SetKelvin(kelvin));
            }
        }
    });
    ui.add_space(4.0);
}

/// One quantity: name, its three values, unit, what it is.
struct Quantity {
    name: &'static str,
    values: [Option<f64>; 3],
    unit: &'static str,
    about: &'static str,
}

fn quantities(point: &ThermalPoint) -> Vec<Quantity> {
    let of = |get: fn(&Averages) -> f64| {
        [Some(get(&point.vibrational)), point.harmonic.as_ref().map(get), point.morse.as_ref().map(get)]
    };
    let root = |bohr2: f64| to_angstrom(bohr2.max(0.0).sqrt());
    vec![
        Quantity {
            name: "q",
            values: of(|a| a.partition_function),
            unit: "",
            about: "Partition function Σ exp(−(E(v) − E(0))/k_BT), counted from v = 0.",
        },
        Quantity {
            name: "U − E(0)",
            values: of(|a| a.mean_energy_kilojoule_per_mole()),
            unit: "kJ/mol",
            about: "Mean vibrational energy above v = 0.",
        },
        Quantity {
            name: "C_V",
            values: of(|a| a.heat_capacity_joule_per_mole_kelvin()),
            unit: "J/(mol K)",
            about: "Vibrational heat capacity: variance of the energy over k_BT².",
        },
        Quantity {
            name: "S",
            values: of(|a| a.entropy_joule_per_mole_kelvin()),
            unit: "J/(mol K)",
            about: "Vibrational entropy R (ln q + U/k_BT).",
        },
        Quantity {
            name: "⟨r⟩",
            values: [Some(to_angstrom(point.mean_r_bohr)), None, None],
            unit: "Å",
            about: "Mean bond length; the harmonic picture keeps it at rₑ.",
        },
        Quantity {
            name: "√⟨x²⟩",
            values: [
                Some(root(point.mean_square_x_bohr2)),
                point.harmonic_mean_square_x_bohr2.map(root),
                None,
            ],
            unit: "Å",
            about: "Root mean square displacement from rₑ.",
        },
    ]
}

fn table_ui(ui: &mut Ui, point: &ThermalPoint) {
    let width = ui.available_width();
    columns_ui(ui, width, &COLUMNS);
    let look = Look::of(ui);
    for quantity in quantities(point) {
        let (rect, response) = ui.allocate_exact_size(vec2(width, look::ROW), Sense::hover());
        let y = rect.center().y;
        let label = look::plain(look::BODY);
        text(ui, rect.left(), y, Align2::LEFT_CENTER, quantity.name, &label, look.text);
        let colors = [look.text, look.harmonic, look.morse];
        let mut words = quantity.name.to_owned();
        for ((value, column), color) in quantity.values.iter().zip(&COLUMNS).zip(colors) {
            let shown = value.map_or_else(
                || number::NONE.to_owned(),
                |v| digits::rounded(v, if v.abs() < 0.1 { 3 } else { 5 }),
            );
            let x = rect.left() + column.right * width;
            text(ui, x, y, Align2::RIGHT_CENTER, &shown, &look::figures(look::SECONDARY), color);
            words.push_str(&format!(" {} {shown}", column.name));
        }
        let unit = look::plain(look::SMALL);
        text(ui, rect.right(), y, Align2::RIGHT_CENTER, quantity.unit, &unit, look.dim);
        response.widget_info(|| {
            WidgetInfo::labeled(egui::Role::Label, true, format!("{words} {}", quantity.unit))
        });
        response.on_hover_text(quantity.about);
    }
}

fn text(ui: &Ui, x: f32, y: f32, anchor: Align2, text: &str, font: &egui::FontId, color: egui::Color32) {
    show::text_in(ui, pos2(x, y), anchor, text, font, color);
}

fn populations_ui(ui: &mut Ui, point: &ThermalPoint) {
    if point.populations.is_empty() {
        return;
    }
    show::rule(ui);
    show::heading(ui, "Populations", "share of all molecules");
    let look = Look::of(ui);
    for (v, share) in
        point.populations.iter().take(POPULATIONS).enumerate().filter(|(v, share)| *v < 2 || **share >= 5e-7)
    {
        let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 20.0), Sense::hover());
        let name = format!("v = {v}");
        let value = number::percent(*share, if *share < 1e-3 { 4 } else { 2 });
        let left = pos2(rect.left(), rect.center().y);
        show::text_in(ui, left, Align2::LEFT_CENTER, &name, &look::plain(look::SECONDARY), look.text);
        let bar = Rect::from_min_max(
            pos2(rect.left() + 52.0, rect.top() + 6.0),
            pos2(rect.right() - 84.0, rect.bottom() - 6.0),
        );
        ui.painter().rect_filled(bar, 2.0, look.raised);
        let mut full = bar;
        full.set_width(bar.width() * share.clamp(0.0, 1.0) as f32);
        ui.painter().rect_filled(full, 2.0, look.outside);
        let right = pos2(rect.right(), rect.center().y);
        show::text_in(ui, right, Align2::RIGHT_CENTER, &value, &look::figures(look::SECONDARY), look.text);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, format!("{name} {value}")));
    }
}

/// Up to which temperature the harmonic picture holds.
fn reach_ui(ui: &mut Ui, findings: &Findings) {
    if findings.reach.is_some() {
        super::reach::temperature_ui(ui, findings);
    }
}
