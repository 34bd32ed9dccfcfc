//! The panel on the left: curves, masses, fit window, fits, tolerance.

use super::right::fold_ui;
use super::{asymptote, masses};
use crate::digits;
use crate::figure::{fit_label, fit_role};
use crate::fit::Family;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, command_button, elided, line_sample};
use crate::gui::state::{CurveKey, State};
use crate::scan::EnergyColumn;
use crate::settings::Settings;
use crate::units::{LengthUnit, to_per_cm};
use eframe::egui;
use egui::{Align2, DragValue, Rect, RichText, ScrollArea, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

pub(super) fn left_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ScrollArea::vertical().id_salt("left").auto_shrink(false).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = look::STEP;
        ui.set_max_width(ui.available_width() - 4.0);
        curves_ui(ui, state, out);
        let Some((_, _, settings)) = state.document.focused() else { return };
        ui.add_space(10.0);
        masses::masses_ui(ui, state, settings, out);
        ui.add_space(10.0);
        window_ui(ui, state, out);
        ui.add_space(10.0);
        fits_ui(ui, state, settings, out);
        ui.add_space(10.0);
        tolerance_ui(ui, settings, out);
        ui.add_space(10.0);
        asymptote::asymptote_ui(ui, state, settings, out);
    });
}

fn curves_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    ui.horizontal(|ui| {
        let width = ui.available_width();
        ui.allocate_ui(vec2(width - 44.0, 26.0), |ui| show::heading(ui, "Curves", ""));
        if ui.ctx().content_rect().width() < 1120.0 {
            fold_ui(ui, Command::ShowLeft(false), out);
        }
    });
    let several = state.document.scans.len() > 1;
    let lines = lines(state, several);
    let list_ui = |ui: &mut Ui, range: std::ops::Range<usize>, out: &mut Vec<Command>| {
        for line in &lines[range] {
            match line {
                Line::File(key, name) => {
                    if file_ui(ui, name) {
                        out.push(Command::ShowColumns(Some(*key)));
                    }
                }
                Line::Curve { key, energy } => {
                    let points = energy.values.iter().flatten().count();
                    if curve_ui(ui, &energy.label, points, state.document.focus == Some(*key)) {
                        out.push(Command::Focus(*key));
                    }
                }
            }
        }
    };
    if lines.len() > MOST_LINES {
        let row = look::ROW + look::STEP;
        let height = row * MOST_LINES as f32 - look::STEP;
        let mut area = ScrollArea::vertical().id_salt("curves").max_height(height);
        if let Some(line) = newly_focused(ui, state, &lines) {
            area = area.vertical_scroll_offset((row * line as f32 - 0.5 * height).max(0.0));
        }
        area.show_rows(ui, look::ROW, lines.len(), |ui, range| list_ui(ui, range, out));
    } else {
        list_ui(ui, 0..lines.len(), out);
    }
    let Some((key, ..)) = state.document.focused() else { return };
    ui.horizontal_wrapped(|ui| {
        command_button(ui, state, Command::ShowColumns(Some(key.scan)), ButtonForm::Quiet, out);
        let other = Command::ShowComparison(!state.view.comparison.open);
        command_button(ui, state, other, ButtonForm::Quiet, out);
        if several {
            command_button(ui, state, Command::CloseScan, ButtonForm::Quiet, out);
        }
        if state.view.changed.contains(&key.scan) {
            command_button(ui, state, Command::Reload(key.scan), ButtonForm::Link, out);
        }
    });
}

/// More lines than this scroll by themselves.
const MOST_LINES: usize = 8;

/// A line of the list of curves.
enum Line<'a> {
    File(u64, &'a str),
    Curve { key: CurveKey, energy: &'a EnergyColumn },
}

/// The line of the curve in focus, when another one was in focus before: it is brought into sight.
fn newly_focused(ui: &Ui, state: &State, lines: &[Line<'_>]) -> Option<usize> {
    let memory = egui::Id::unique("curve in focus");
    let focus = state.document.focus?;
    let before: Option<CurveKey> = ui.data(|d| d.get_temp(memory));
    if before == Some(focus) {
        return None;
    }
    ui.data_mut(|d| d.insert_temp(memory, focus));
    lines.iter().position(|line| matches!(line, Line::Curve { key, .. } if *key == focus))
}

/// Files, where there are several, and their curves.
fn lines(state: &State, several: bool) -> Vec<Line<'_>> {
    let mut lines = Vec::new();
    for loaded in &state.document.scans {
        if several {
            lines.push(Line::File(loaded.key, &loaded.scan.file_name));
        }
        for (column, energy) in loaded.scan.energies.iter().enumerate() {
            let key = CurveKey { scan: loaded.key, column };
            lines.push(Line::Curve { key, energy });
        }
    }
    lines
}

/// The name of a file; true when it was clicked, for a look at its columns.
fn file_ui(ui: &mut Ui, name: &str) -> bool {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), look::ROW), Sense::click());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, format!("Columns of {name}")));
    let lively = response.hovered() || response.has_focus();
    let color = if lively { look.text } else { look.dim };
    elided(ui, rect.left_center(), rect.width(), name, look::plain(look::SMALL), color);
    response
        .on_hover_text(format!("{name}: its columns and units"))
        .on_hover_cursor(egui::CursorIcon::PointingHand)
        .clicked()
}

/// A curve with the number of its points; true when it was chosen.
fn curve_ui(ui: &mut Ui, label: &str, points: usize, focused: bool) -> bool {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), look::ROW), Sense::click());
    response.widget_info(|| {
        WidgetInfo::selected(egui::Role::RadioButton, true, focused, format!("Curve {label}"))
    });
    if focused || response.hovered() || response.has_focus() {
        ui.painter().rect_filled(rect.expand2(vec2(8.0, 0.0)), f32::from(look::CORNER), look.raised);
    }
    let mark = pos2(rect.left() + 5.0, rect.center().y);
    if focused {
        ui.painter().circle_filled(mark, 4.5, look.scan);
    } else {
        ui.painter().circle_stroke(mark, 4.5, Stroke::new(1.2, look.dim));
    }
    let count = show::text_in(
        ui,
        rect.right_center(),
        Align2::RIGHT_CENTER,
        &format!("{points} points"),
        &look::plain(look::SMALL),
        look.dim,
    );
    let color = if focused { look.text } else { look.dim };
    let start = pos2(rect.left() + 20.0, rect.center().y);
    elided(ui, start, count.left() - start.x - 6.0, label, look::plain(look::BODY), color);
    response.on_hover_cursor(egui::CursorIcon::PointingHand).clicked() && !focused
}

/// Ends the gesture when the hand lets go of a field.
pub(in crate::gui::panels) fn settle(response: &egui::Response, out: &mut Vec<Command>) {
    if response.drag_stopped() || response.lost_focus() {
        out.push(Command::Settle);
    }
}

fn window_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    show::heading(ui, "Fit window", "");
    let look = Look::of(ui);
    let Some(window) = state.window() else {
        show::note(ui, "No minimum, no window.");
        return;
    };
    let edge = |r: f64| window.unit.convert(r, LengthUnit::Angstrom);
    let mut values = [edge(window.from), edge(window.to)];
    ui.horizontal(|ui| {
        for (i, name) in ["Window from", "Window to"].into_iter().enumerate() {
            let limits = if i == 0 { 0.01..=values[1] - 1e-4 } else { values[0] + 1e-4..=100.0 };
            let field =
                DragValue::new(&mut values[i]).range(limits).speed(0.005).fixed_decimals(3).suffix(" Å");
            let response = ui.add_sized(vec2(84.0, 26.0), field);
            response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, name));
            if response.changed() {
                let back = |a: f64| LengthUnit::Angstrom.convert(a, window.unit);
                let mut changed = window;
                if i == 0 {
                    changed.from = back(values[0]);
                } else {
                    changed.to = back(values[1]);
                }
                out.push(Command::SetWindow { window: changed, resting: false });
            }
            settle(&response, out);
        }
    });
    ui.horizontal(|ui| {
        let text = points_text(state);
        ui.label(RichText::new(text).font(look::plain(look::SMALL)).color(look.dim));
        if state.can(&Command::ResetWindow).is_ok() {
            command_button(ui, state, Command::ResetWindow, ButtonForm::Link, out);
        }
    });
}

/// How many points the window holds.
fn points_text(state: &State) -> String {
    let Some(study) = state.study() else { return String::new() };
    let points = &study.pictures.points;
    format!("{} of {} points used", state.points_in_window(), points.len())
}

fn fits_ui(ui: &mut Ui, state: &State, settings: &Settings, out: &mut Vec<Command>) {
    show::heading(ui, "Fits", "rms in the window / cm⁻¹");
    let look = Look::of(ui);
    let Some(study) = state.study() else { return };
    for fit in &study.findings.fits {
        let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 23.0), Sense::hover());
        let role = fit_role(fit.request.family);
        let sample = Rect::from_min_size(rect.min, vec2(26.0, rect.height()));
        line_sample(ui, sample, role, look.role(role));
        let (value, about) = match &fit.result {
            Ok(f) => {
                let rms = digits::rounded(to_per_cm(f.rms_residual_hartree), 2);
                (rms, "Root mean square of the residuals at the points in the window, in cm⁻¹.".to_owned())
            }
            Err(error) => ("no fit".to_owned(), error.to_string()),
        };
        let label = fit_label(fit);
        response.widget_info(|| {
            WidgetInfo::labeled(egui::Role::Label, true, format!("{label} fit, rms {value} cm⁻¹"))
        });
        let start = pos2(rect.left() + 34.0, rect.center().y);
        show::text_in(ui, start, Align2::LEFT_CENTER, &label, &look::plain(look::BODY), look.text);
        show::text_in(
            ui,
            rect.right_center(),
            Align2::RIGHT_CENTER,
            &value,
            &look::figures(look::SECONDARY),
            look.dim,
        );
        response.on_hover_text(about);
    }
    degree_ui(ui, settings, out);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 23.0), Sense::hover());
    let sample = Rect::from_min_size(rect.min, vec2(26.0, rect.height()));
    line_sample(ui, sample, crate::figure::Role::Parabola, look.harmonic);
    let start = pos2(rect.left() + 34.0, rect.center().y);
    show::text_in(ui, start, Align2::LEFT_CENTER, "Parabola at rₑ", &look::plain(look::BODY), look.text);
    response.on_hover_text("½ k x² with k = V″(rₑ): what the reach is about. No fit, so no residual.");
}

fn degree_ui(ui: &mut Ui, settings: &Settings, out: &mut Vec<Command>) {
    // Of the polynomials; other families have an order of their own, on the page of fits.
    let polynomial = settings.fits.requests.iter().find(|r| r.family == Family::Polynomial);
    let Some(degree) = polynomial.and_then(|r| r.degree) else { return };
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        ui.add_space(34.0 - ui.spacing().item_spacing.x);
        let label = ui.label(RichText::new("degree").font(look::plain(look::SECONDARY)).color(look.dim));
        let mut value = degree;
        let response = ui.add(DragValue::new(&mut value).range(2..=12).speed(0.03)).labelled_by(label.id);
        if response.changed() {
            out.push(Command::SetDegree(value));
        }
    });
}

fn tolerance_ui(ui: &mut Ui, settings: &Settings, out: &mut Vec<Command>) {
    show::heading(ui, "Tolerance for the parabola", "");
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let mut percent = settings.reach.tolerance * 100.0;
        let field = DragValue::new(&mut percent)
            .range(0.1..=50.0)
            .speed(0.05)
            .max_decimals(2)
            .custom_formatter(|v, _| crate::verdict::percent(v / 100.0));
        let response = ui.add_sized(vec2(84.0, 26.0), field);
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Tolerance"));
        if response.changed() {
            out.push(Command::SetTolerance { tolerance: percent / 100.0, resting: false });
        }
        settle(&response, out);
        ui.label(RichText::new("of the energy").font(look::plain(look::SECONDARY)).color(look.dim));
    });
}
