//! The levels of one J: one row each, hovering shows the level on the plot.

use super::quasi;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::panels::densities;
use crate::gui::show::{self, Column, columns_ui};
use crate::gui::state::{State, Study};
use crate::radial::Level;
use eframe::egui;
use egui::{Align2, ScrollArea, Sense, Ui, WidgetInfo, pos2, vec2};

/// Height of a row of the table.
const ROW: f32 = 22.0;

/// Right edges of the columns as fractions of the width, with their headings.
const COLUMNS: [Column; 5] = [
    Column { right: 0.075, name: "v", unit: "", about: "Vibrational quantum number." },
    Column { right: 0.41, name: "E − Vₑ", unit: "cm⁻¹", about: "Energy above the minimum." },
    Column { right: 0.63, name: "− harmonic", unit: "cm⁻¹", about: "E − Vₑ − ωₑ(v + ½)." },
    Column {
        right: 0.82, name: "Bᵥ", unit: "cm⁻¹", about: "Rotational constant ℏ²⟨r⁻²⟩/(2μ)."
    },
    Column {
        right: 1.0,
        name: "in reach",
        unit: "density",
        about: "Share of the density inside the energy reach.",
    },
];

/// With rotation two columns differ.
const TURNING: [Column; 5] = [
    COLUMNS[0],
    COLUMNS[1],
    Column { right: 0.63, name: "− E(v, 0)", unit: "cm⁻¹", about: "E(v, J) minus E(v, 0), all of it." },
    Column {
        right: 0.82, name: "ℏ²⟨r⁻²⟩/2μ", unit: "cm⁻¹", about: "Over the state of this J."
    },
    COLUMNS[4],
];

pub(super) fn table_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    let turning = state.rotation().map(|(levels, _)| levels);
    let levels = turning.map_or(&findings.levels, |r| &r.levels);
    if turning.is_none() && state.view.j > 0 {
        show::note(ui, "There are no levels with this J: rotation begins at J = Λ.");
        return;
    }
    ui.spacing_mut().item_spacing.y = 0.0;
    let width = ui.available_width() - 10.0;
    let plain = if turning.is_some() { &TURNING } else { &COLUMNS };
    let without = |level: &Level| turning.and_then(|_| findings.levels.get(level.v));
    let cells = |brief: bool| -> Vec<[String; 5]> {
        levels.iter().map(|level| cells(level, without(level), brief)).collect()
    };
    // In a narrow panel the errors are left to the text on hover.
    let full = cells(false);
    let (rows, columns) = match show::fitted(ui, plain, &full, width) {
        Some(columns) => (full, columns),
        None => {
            let brief = cells(true);
            let columns = show::fitted(ui, plain, &brief, width).unwrap_or(*plain);
            (brief, columns)
        }
    };
    columns_ui(ui, width, &columns);
    let leaning = levels.iter().any(|l| l.leans_on_tail);
    let mut hovered = None;
    let roomy = turning.is_none() && ui.available_height() > densities::HEIGHT + 8.0 * ROW;
    let foot = if leaning { 30.0 } else { 0.0 } + if roomy { densities::HEIGHT } else { 0.0 };
    let foot = foot + turning.map_or(0.0, |r| quasi::height(&r.quasi_bound));
    ScrollArea::vertical()
        .id_salt("levels")
        .auto_shrink([false, turning.is_some()])
        .max_height((ui.available_height() - foot).max(3.0 * ROW))
        .show_rows(ui, ROW, levels.len(), |ui, seen| {
            for (level, cells) in levels[seen.clone()].iter().zip(&rows[seen]) {
                let response = level_ui(ui, state, level, (cells, &columns), width);
                if response.hovered() {
                    hovered = Some(level.v);
                }
                if response.clicked() && ui.input(|i| i.modifiers.shift) {
                    out.push(Command::KeepLevel(level.v, !state.view.kept_levels.contains(&level.v)));
                } else if response.clicked() {
                    let again = state.view.pinned_level == Some(level.v);
                    out.push(Command::PinLevel((!again).then_some(level.v)));
                }
            }
        });
    if leaning {
        ui.add_space(6.0);
        show::note(ui, "○ leans on the tail: would change if the curve beyond the scan did.");
    }
    if let Some(turning) = turning {
        ui.add_space(4.0);
        hovered = quasi::quasi_ui(ui, state, &turning.quasi_bound, out).or(hovered);
    }
    if hovered.is_some() {
        out.push(Command::HoverLevel(hovered));
    }
    if roomy {
        densities::densities_ui(ui, state, study, out);
    }
}

/// The energy with its error.
fn energy(level: &Level) -> String {
    number::with_error_capped(level.energy_per_cm, level.energy_error_per_cm, 2)
}

/// What stands in a row; beside the level with rotation stands the one without. `brief`: no error.
fn cells(level: &Level, without: Option<&Level>, brief: bool) -> [String; 5] {
    let third = without.map_or(level.minus_harmonic_per_cm, |w| level.energy_per_cm - w.energy_per_cm);
    [
        level.v.to_string(),
        if brief { number::fixed(level.energy_per_cm, 2) } else { energy(level) },
        number::signed(third, if third.abs() < 1e3 { 2 } else { 1 }),
        number::fixed(level.b_v_per_cm, if level.b_v_per_cm < 10.0 { 4 } else { 3 }),
        level.inside_reach.map_or_else(|| number::NONE.to_owned(), |p| number::percent(p, 1)),
    ]
}

/// A row.
fn level_ui(
    ui: &mut Ui,
    state: &State,
    level: &Level,
    (cells, columns): (&[String; 5], &[Column; 5]),
    width: f32,
) -> egui::Response {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(width, ROW), Sense::click());
    let shown = state.stands_out(level.v);
    if shown || response.hovered() || response.has_focus() {
        ui.painter().rect_filled(rect.expand2(vec2(4.0, 0.0)), 4.0, look.raised);
    }
    for (i, (cell, column)) in cells.iter().zip(columns).enumerate() {
        let color = match i {
            0 if shown => look.accent,
            2 if level.j > 0 => look.rotation,
            2 => look.harmonic,
            4 => look.dim,
            _ => look.text,
        };
        let at = pos2(rect.left() + column.right * width, rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, cell, &look::figures(look::SECONDARY), color);
    }
    if level.leans_on_tail {
        let at = pos2(rect.left() + 3.0, rect.center().y);
        ui.painter().circle_stroke(at, 3.0, egui::Stroke::new(1.2, look.accent));
    }
    let lean = if level.leans_on_tail { ", leans on the tail" } else { "" };
    response.widget_info(|| {
        let j = if level.j > 0 { format!(", J = {}", level.j) } else { String::new() };
        let words = format!("Level v = {}{j}: {} cm⁻¹{lean}", level.v, energy(level));
        WidgetInfo::selected(egui::Role::Button, true, shown, words)
    });
    response
}
