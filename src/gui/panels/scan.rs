//! The page of the scan: every point as read, and what can be done with the one looked at.

use super::left::settle;
use crate::figure::{PlotPoint, fit_label, fit_role, number};
use crate::findings::{FitFindings, Point};
use crate::fit::{Fit, Weighting};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, Column, Row, RowUi as _, columns_ui, command_button};
use crate::gui::state::{State, Study};
use crate::units::to_per_cm;
use eframe::egui;
use egui::{Align2, DragValue, RichText, ScrollArea, Sense, TextEdit, Ui, WidgetInfo, pos2, vec2};

/// Height of a row of the table.
const ROW: f32 = 22.0;
/// Height of what is said about the point looked at.
const FOOT: f32 = 216.0;

fn columns(study: &Study) -> [Column; 4] {
    let source = &study.findings.source;
    [
        Column { right: 0.08, name: "row", unit: "", about: "Row of the table in the file, counted from 1." },
        Column {
            right: 0.24,
            name: "r",
            unit: show::length_unit(source.length_unit),
            about: "Bond length as read.",
        },
        Column { right: 0.67, name: "energy", unit: show::unit(source.energy_unit), about: "As read." },
        Column {
            right: 0.97,
            name: "above minimum",
            unit: "cm⁻¹",
            about: "Above the minimum of the curve, or above the lowest point where it has none.",
        },
    ]
}

pub(super) fn scan_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    ui.spacing_mut().item_spacing.y = 0.0;
    let points = &study.findings.source.points;
    let width = ui.available_width() - 10.0;
    let columns = columns(study);
    let decimals = decimals(state, points);
    columns_ui(ui, width, &columns);
    let room = (ui.available_height() - FOOT).max(3.0 * ROW);
    ScrollArea::vertical().id_salt("points").auto_shrink(false).max_height(room).show_rows(
        ui,
        ROW,
        points.len(),
        |ui, rows| {
            for point in &points[rows] {
                let picture = study.pictures.points.iter().find(|p| p.row == point.row);
                if row_ui(ui, state, study, point, picture, &columns, width, decimals) {
                    let again = state.view.selected_row == Some(point.row);
                    out.push(Command::SelectPoint((!again).then_some(point.row)));
                }
            }
        },
    );
    show::rule(ui);
    let selected = state.view.selected_row.and_then(|row| points.iter().find(|p| p.row == row));
    match selected {
        Some(point) => {
            ScrollArea::vertical()
                .id_salt("point")
                .auto_shrink(false)
                .show(ui, |ui| point_ui(ui, state, study, point, out));
        }
        None => {
            let used = points.iter().filter(|p| p.used).count();
            let text = format!(
                "{used} of {} points used. Choose a row to see it on the plot, to set it aside or to use it again.",
                points.len()
            );
            show::note(ui, &text);
        }
    }
}

/// One row; true when it was chosen.
#[expect(clippy::too_many_arguments, reason = "everything that a row is made of")]
fn row_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    point: &Point,
    picture: Option<&PlotPoint>,
    columns: &[Column; 4],
    width: f32,
    decimals: [usize; 2],
) -> bool {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(width, ROW), Sense::click());
    let chosen = state.view.selected_row == Some(point.row);
    if chosen || response.hovered() || response.has_focus() {
        ui.painter().rect_filled(rect.expand2(vec2(4.0, 0.0)), 4.0, look.raised);
    }
    let unit = study.findings.source.energy_unit;
    let energy = as_read_energy(state, point).unwrap_or_else(|| unit.from_hartree(point.energy_hartree));
    let cells = [
        (point.row + 1).to_string(),
        number::fixed(point.r_as_read, decimals[0]),
        number::fixed(energy, decimals[1]),
        picture.map_or_else(|| number::NONE.to_owned(), |p| number::fixed(p.at[1], 1)),
    ];
    let inside = picture.is_some_and(|p| p.in_window);
    for (index, (cell, column)) in cells.iter().zip(columns).enumerate() {
        let color = match (point.used, index) {
            (true, 0) if chosen => look.accent,
            (true, 1 | 2) if inside => look.text,
            _ => look.dim,
        };
        let at = pos2(rect.left() + column.right * width, rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, cell, &look::figures(look::SECONDARY), color);
    }
    if !point.used {
        let right = rect.left() + columns[3].right * width;
        let line = egui::Rangef::new(rect.left() + 4.0, right);
        ui.painter().hline(line, rect.center().y, egui::Stroke::new(1.0, look.stop));
    }
    let aside = point.why_not.as_ref().map_or_else(String::new, |why| format!(", set aside: {why}"));
    response.widget_info(|| {
        let text = format!("Point {}: {} {}{aside}", cells[0], cells[1], columns[1].unit);
        WidgetInfo::selected(egui::Role::Button, true, chosen, text)
    });
    let response = match &point.why_not {
        Some(why) => response.on_hover_text(format!("Set aside: {why}.")),
        None => response,
    };
    response.clicked()
}

/// So many decimals that no bond length and no energy loses a digit of the file.
fn decimals(state: &State, points: &[Point]) -> [usize; 2] {
    let most = |values: &mut dyn Iterator<Item = f64>| {
        values.map(|v| format!("{v}").split_once('.').map_or(0, |(_, d)| d.len())).max().unwrap_or(0).min(14)
    };
    [
        most(&mut points.iter().map(|p| p.r_as_read)),
        most(&mut points.iter().filter_map(|p| as_read_energy(state, p))),
    ]
}

/// The energy with the digits of the file.
fn as_read_energy(state: &State, point: &Point) -> Option<f64> {
    let (key, loaded, _) = state.document.focused()?;
    loaded.scan.energies.get(key.column)?.values.get(point.row).copied().flatten()
}

/// What is known of the point looked at, and what can be done with it.
fn point_ui(ui: &mut Ui, state: &State, study: &Study, point: &Point, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let line =
            state.document.focused().map_or(point.row + 1, |(_, loaded, _)| loaded.scan.line(point.row));
        let text = format!("Row {}, line {line} of the file", point.row + 1);
        ui.label(RichText::new(text).font(look::semibold(look::SECONDARY)).color(look.dim));
        let command = if point.used { Command::SetAside(point.row) } else { Command::Restore(point.row) };
        ui.with_layout(egui::Layout::right_to_left(egui::Align::Center), |ui| {
            command_button(ui, state, command, ButtonForm::Framed, out);
        });
    });
    ui.add_space(look::STEP);
    reason_ui(ui, state, point, out);
    ui.add_space(look::STEP);
    for fit in &study.findings.fits {
        residual_ui(ui, fit, point);
    }
    weight_ui(ui, state, point, out);
    note_ui(ui, state, point, out);
    let remark = state.document.focused().and_then(|(_, loaded, _)| {
        loaded.scan.row_remarks.iter().find(|(row, _)| *row == point.row).map(|(_, text)| text.clone())
    });
    if let Some(remark) = remark {
        show::note(ui, &format!("In the file: {remark}"));
    }
}

/// Why the point is set aside, to be said in the user's own words where it was the user who did it.
fn reason_ui(ui: &mut Ui, state: &State, point: &Point, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let Some(aside) = settings.set_aside.iter().find(|a| a.row == point.row) else {
        if let Some(why) = &point.why_not {
            show::note(ui, &format!("Set aside by the program: {why}."));
        }
        return;
    };
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new("because").font(look::plain(look::SECONDARY)).color(look.dim));
        let mut reason = aside.reason.clone();
        let field = TextEdit::singleline(&mut reason).desired_width(f32::INFINITY);
        let response = ui.add(field).labelled_by(label.id);
        if response.changed() {
            out.push(Command::SetReason { row: point.row, reason });
        }
        if response.lost_focus() {
            out.push(Command::Settle);
        }
    });
}

/// The weight of the point in the fits, to be changed where no rule gives it.
fn weight_ui(ui: &mut Ui, state: &State, point: &Point, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let by_hand = matches!(settings.fits.weights, Weighting::Equal {} | Weighting::Point { .. });
    if !by_hand {
        Row::new("weight in fits, by rule", crate::digits::rounded(point.weight, 3), "").ui(ui);
        return;
    }
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new("weight in fits").font(look::plain(look::BODY)).color(look.text));
        let mut weight = point.weight;
        let field = DragValue::new(&mut weight).range(0.0..=1e6).speed(0.02).max_decimals(6);
        let response = ui.add(field).labelled_by(label.id).on_hover_text(
            "0 leaves the point out of the fits, but not out of the curve. Only the ratio of weights matters.",
        );
        if response.changed() {
            out.push(Command::SetWeight { row: point.row, weight });
        }
        settle(&response, out);
    });
}

/// A note on the point, kept in the findings.
fn note_ui(ui: &mut Ui, state: &State, point: &Point, out: &mut Vec<Command>) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new("note").font(look::plain(look::SECONDARY)).color(look.dim));
        let known = settings.notes.iter().find(|n| n.row == point.row);
        let mut text = known.map_or_else(String::new, |n| n.text.clone());
        let field = TextEdit::singleline(&mut text).desired_width(f32::INFINITY);
        let response = ui.add(field).labelled_by(label.id);
        if response.changed() {
            out.push(Command::SetNote { row: point.row, text });
        }
        if response.lost_focus() {
            out.push(Command::Settle);
        }
    });
}

/// How far a fit misses the point.
fn residual_ui(ui: &mut Ui, fit: &FitFindings, point: &Point) {
    let Ok(result) = &fit.result else { return };
    let look = Look::of(ui);
    let value = residual(result, point)
        .map_or_else(|| "not in the window".to_owned(), |d| crate::digits::rounded(to_per_cm(d), 3));
    let response = Row::new(format!("{} − scan", fit_label(fit)), value, "cm⁻¹").ui(ui);
    let mark = egui::Rect::from_min_size(response.rect.left_top(), vec2(3.0, response.rect.height()));
    let role = fit_role(fit.request.family);
    ui.painter().rect_filled(mark.shrink2(vec2(0.0, 6.0)).translate(vec2(-8.0, 0.0)), 1.0, look.role(role));
}

fn residual(fit: &Fit, point: &Point) -> Option<f64> {
    fit.residuals.iter().find(|(r, _)| (r - point.r_bohr).abs() < 1e-9).map(|(_, d)| *d)
}
