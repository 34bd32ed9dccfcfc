//! Below the table of levels: which densities are drawn, and what they say of the level shown.

use crate::density::Shares;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::densities::{DensityView, shown_densities};
use crate::gui::look::{self, Look};
use crate::gui::show;
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Align2, DragValue, Rect, Sense, Ui, WidgetInfo, pos2, vec2};

/// Room for all of it.
pub(super) const HEIGHT: f32 = 196.0;
/// Right edges of the columns as fractions of the width.
const COLUMNS: [(f32, &str); 4] =
    [(0.50, "numerical"), (0.68, "harmonic"), (0.84, "Morse"), (1.0, "classical")];

pub(super) fn densities_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    show::rule(ui);
    choice_ui(ui, state, out);
    let all = shown_densities(ui.ctx(), state, study);
    let shown = state.shown_level();
    let Some(picture) = all.iter().find(|p| Some(p.v) == shown) else {
        show::note(
            ui,
            "Point at a level, or choose one with the arrow keys, to see what its densities say. Shift and a click \
             keep several on the plot.",
        );
        return;
    };
    let figures = &picture.figures;
    head_ui(ui, state, figures.v, out);
    shares_ui(
        ui,
        "forbidden",
        &figures.forbidden,
        "Beyond the turning points, where V is above the level's energy: a classical particle is never there.",
    );
    shares_ui(ui, "inside the reach", &figures.inside_reach, "Inside the energy reach of the parabola.");
    if let (Some(distance), Some(width)) = (figures.classical_distance, picture.averaging_width) {
        let text = format!(
            "Numerical against classical density, both averaged over {} Å: ∫|Δ| dr = {} (0 alike, 2 never together).",
            number::fixed(width, 3),
            number::fixed(distance, 3)
        );
        show::note(ui, &text);
    } else if picture.averaging_width.is_some() {
        show::note(
            ui,
            "Not compared with the classical density: the averaging width is too small against the range, or there \
             is no classical motion between two turning points.",
        );
    }
}

/// What is drawn.
fn choice_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let mut view = state.view.densities;
    ui.horizontal_wrapped(|ui| {
        ui.spacing_mut().item_spacing.x = 10.0;
        ui.label(egui::RichText::new("densities").font(look::semibold(look::SECONDARY)).color(look.dim));
        ui.checkbox(&mut view.harmonic, "harmonic");
        ui.checkbox(&mut view.morse, "Morse");
        ui.checkbox(&mut view.classical, "classical").on_hover_text(
            "The share of a period that a classical particle of this energy spends at each bond length.",
        );
        ui.checkbox(&mut view.averaged, "averaged").on_hover_text(
            "The numerical and the classical density averaged over the width: at high v they come together.",
        );
    });
    ui.horizontal(|ui| {
        let dim = |text: &str| egui::RichText::new(text).font(look::plain(look::SECONDARY)).color(look.dim);
        ui.label(dim("height"));
        let (low, high) = DensityView::HEIGHTS;
        let field =
            DragValue::new(&mut view.height).range(low..=high).speed(0.02).max_decimals(2).suffix(" ×");
        let response = ui.add_sized(vec2(62.0, 24.0), field);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Height of the densities"));
        ui.add_space(8.0);
        ui.label(dim("averaged over"));
        let usual = state.study().and_then(|s| s.findings.densities.averaging_width_bohr);
        let mut width = view.width_angstrom.or(usual.map(crate::units::to_angstrom)).unwrap_or(0.1);
        let field =
            DragValue::new(&mut width).range(0.001..=10.0).speed(0.002).fixed_decimals(3).suffix(" Å");
        let response = ui.add_sized(vec2(76.0, 24.0), field);
        response
            .widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Averaging width in angstrom"));
        if response.changed() {
            view.width_angstrom = Some(width);
        }
    });
    if view != state.view.densities {
        out.push(Command::SetDensities(view));
    }
}

/// The level, whether it stays on the plot, and the names of the columns.
fn head_ui(ui: &mut Ui, state: &State, v: usize, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let (rect, _) = ui.allocate_exact_size(vec2(ui.available_width(), 22.0), Sense::hover());
    let mut stays = state.view.kept_levels.contains(&v);
    let place = Rect::from_min_size(rect.min, vec2(0.34 * rect.width(), rect.height()));
    let layout = egui::Layout::left_to_right(egui::Align::Center);
    ui.scope_builder(egui::UiBuilder::new().max_rect(place).layout(layout), |ui| {
        let name = egui::RichText::new(format!("keep v = {v}"))
            .font(look::semibold(look::SECONDARY))
            .color(look.accent);
        let command = Command::KeepLevel(v, !stays);
        let response = ui.checkbox(&mut stays, name).on_hover_text(command.tooltip());
        if response.changed() {
            out.push(command);
        }
    });
    for (right, name) in COLUMNS {
        let at = pos2(rect.left() + right * rect.width(), rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, name, &look::plain(look::SMALL), look.dim);
    }
}

fn shares_ui(ui: &mut Ui, name: &str, shares: &Shares, about: &str) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 22.0), Sense::hover());
    let values = [shares.numerical, shares.harmonic, shares.morse, shares.classical];
    let colors = [look.text, look.harmonic, look.morse, look.dim];
    show::elided(ui, rect.left_center(), 0.34 * rect.width(), name, look::plain(look::SECONDARY), look.text);
    let mut words = name.to_owned();
    for (((right, column), value), color) in COLUMNS.into_iter().zip(values).zip(colors) {
        let text = value.map_or_else(|| number::NONE.to_owned(), |p| number::percent(p, 1));
        let at = pos2(rect.left() + right * rect.width(), rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, &text, &look::figures(look::SECONDARY), color);
        words.push_str(&format!(", {column} {text}"));
    }
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, words.as_str()));
    response.on_hover_text(about);
}
