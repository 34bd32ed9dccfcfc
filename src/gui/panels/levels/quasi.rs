//! The quasi-bound levels of the J shown: energy, width, lifetime.

use crate::figure::{lifetime_text, number, quasi_bound_words, width_text};
use crate::findings::QuasiBoundLevel;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, Column, columns_ui};
use crate::gui::state::State;
use crate::units::to_angstrom;
use eframe::egui;
use egui::{Align2, ScrollArea, Sense, Ui, WidgetInfo, pos2, vec2};

const ROW: f32 = 22.0;
/// Rows shown without scrolling.
const MOST_ROWS: usize = 5;

const COLUMNS: [Column; 4] = [
    Column { right: 0.075, name: "v", unit: "", about: "Counted on from the bound levels of this J." },
    Column {
        right: 0.34, name: "E − Vₑ", unit: "cm⁻¹", about: "Energy above the minimum without rotation."
    },
    Column {
        right: 0.66,
        name: "width Γ",
        unit: "cm⁻¹",
        about: "The level is a pole of the scattering matrix at E − iΓ/2 [Siegert 1939].",
    },
    Column { right: 1.0, name: "lifetime", unit: "ħ/Γ", about: "How long it takes to tunnel out." },
];

/// Room that they take.
pub(super) fn height(levels: &[QuasiBoundLevel]) -> f32 {
    if levels.is_empty() { 26.0 } else { 82.0 + ROW * levels.len().min(MOST_ROWS) as f32 }
}

/// The table; gives the level under the pointer.
pub(super) fn quasi_ui(
    ui: &mut Ui,
    state: &State,
    levels: &[QuasiBoundLevel],
    out: &mut Vec<Command>,
) -> Option<usize> {
    let Some(first) = levels.first() else {
        show::note(ui, "No level stands behind the centrifugal barrier at this J.");
        return None;
    };
    let barrier = format!(
        "barrier {} cm⁻¹ at {} Å",
        number::fixed(first.barrier_per_cm, 1),
        number::fixed(to_angstrom(first.barrier_bohr), 3)
    );
    show::heading(ui, "Quasi-bound", &barrier);
    let width = ui.available_width() - 10.0;
    columns_ui(ui, width, &COLUMNS);
    let mut hovered = None;
    ScrollArea::vertical().id_salt("quasi-bound").max_height(ROW * MOST_ROWS as f32).show_rows(
        ui,
        ROW,
        levels.len(),
        |ui, rows| {
            for level in &levels[rows] {
                let response = level_ui(ui, state, level, width);
                if response.hovered() {
                    hovered = Some(level.v);
                }
                if response.clicked() {
                    let again = state.view.pinned_level == Some(level.v);
                    out.push(Command::PinLevel((!again).then_some(level.v)));
                }
            }
        },
    );
    hovered
}

fn level_ui(ui: &mut Ui, state: &State, level: &QuasiBoundLevel, width: f32) -> egui::Response {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(width, ROW), Sense::click());
    let shown = state.shown_level() == Some(level.v);
    if shown || response.hovered() || response.has_focus() {
        ui.painter().rect_filled(rect.expand2(vec2(4.0, 0.0)), 4.0, look.raised);
    }
    let cells = [
        level.v.to_string(),
        number::fixed(level.energy_per_cm, 2),
        width_text(level.width_per_cm),
        lifetime_text(level.lifetime_seconds()),
    ];
    for (i, (cell, column)) in cells.iter().zip(&COLUMNS).enumerate() {
        let color = match i {
            0 if shown => look.accent,
            2 => look.rotation,
            _ => look.text,
        };
        let at = pos2(rect.left() + column.right * width, rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, cell, &look::figures(look::SECONDARY), color);
    }
    response.widget_info(|| {
        let words = format!("Quasi-bound level {}", quasi_bound_words(level));
        WidgetInfo::selected(egui::Role::Button, true, shown, words)
    });
    response
}
