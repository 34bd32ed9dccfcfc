//! The question of units: what every choice would mean, to be chosen by its row.

use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::meaning::Meaning;
use crate::gui::show::{self, Column, columns_ui};
use crate::gui::state::Problem;
use eframe::egui;
use egui::{Align2, ScrollArea, Sense, Ui, WidgetInfo, pos2, vec2};

const ROW: f32 = 23.0;
/// Rows shown without scrolling.
pub(super) const MOST_ROWS: f32 = 11.0;

const COLUMNS: [Column; 5] = [
    Column { right: 0.20, name: "bond lengths", unit: "in", about: "Unit of the bond lengths." },
    Column { right: 0.40, name: "energies", unit: "in", about: "Unit of the energies." },
    Column {
        right: 0.59,
        name: "rₑ",
        unit: "Å",
        about: "Bond length at the minimum, or of the lowest point where there is no minimum.",
    },
    Column {
        right: 0.78,
        name: "ωₑ",
        unit: "cm⁻¹",
        about: "√(k/μ)/(2πc). Known where the file or you name the atoms or a mass.",
    },
    Column {
        right: 1.0,
        name: "depth to the end",
        unit: "eV",
        about: "From the minimum to the point at the longest bond length: for a whole scan nearly the depth of the well.",
    },
];

/// The choices for a refused file, `most_rows` of them in sight at once.
pub(in crate::gui) fn units_ui(ui: &mut Ui, problem: &Problem, most_rows: f32, out: &mut Vec<Command>) {
    show::note(
        ui,
        "What each choice would mean. Choose the row that is right; dim rows would be unusual for a bond.",
    );
    ui.spacing_mut().item_spacing.y = 0.0;
    let width = ui.available_width() - 14.0;
    columns_ui(ui, width, &COLUMNS);
    let rows = problem.meanings.len();
    ScrollArea::vertical()
        .id_salt("units")
        .max_height((ROW * most_rows).min(0.45 * ui.ctx().content_rect().height()))
        .show_rows(ui, ROW, rows, |ui, range| {
            for meaning in &problem.meanings[range] {
                if meaning_ui(ui, meaning, width) {
                    out.push(meaning.command(&problem.start.read));
                }
            }
        });
    ui.add_space(8.0);
}

/// One choice; true when it was made.
fn meaning_ui(ui: &mut Ui, meaning: &Meaning, width: f32) -> bool {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(width, ROW), Sense::click());
    let lively = response.hovered() || response.has_focus();
    if lively {
        ui.painter().rect(
            rect.expand2(vec2(4.0, 0.0)),
            4.0,
            look.panel,
            egui::Stroke::new(1.0, look.accent),
            egui::StrokeKind::Inside,
        );
    }
    let length = show::length_unit(meaning.length);
    let energy = show::unit(meaning.energy);
    let plain = |value: f64, digits: usize| {
        if value.abs() < 1e6 { crate::digits::rounded(value, digits) } else { format!("{value:.1e}") }
    };
    let cells = [
        length.to_owned(),
        energy.to_owned(),
        plain(meaning.r_e_angstrom, 4),
        meaning.omega_e_per_cm.map_or_else(|| number::NONE.to_owned(), |w| plain(w, 4)),
        plain(meaning.rise_electronvolt, 3),
    ];
    for (index, (cell, column)) in cells.iter().zip(&COLUMNS).enumerate() {
        let font = if index < 2 { look::plain(look::BODY) } else { look::figures(look::SECONDARY) };
        let color = if meaning.is_common { look.text } else { look.dim };
        let color = if meaning.is_common || lively { color } else { color.gamma_multiply(0.8) };
        let at = pos2(rect.left() + column.right * width, rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, cell, &font, color);
    }
    response.widget_info(|| {
        let unusual = if meaning.is_common { "" } else { ", unusual for a bond" };
        let text = format!("Bond lengths in {length}, energies in {energy}: rₑ {} Å{unusual}", cells[2]);
        WidgetInfo::labeled(egui::Role::Button, true, text)
    });
    response.on_hover_cursor(egui::CursorIcon::PointingHand).clicked()
}
