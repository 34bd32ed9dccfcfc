//! Curves side by side: one row a curve, as values or as differences to a reference.

use crate::estimate::Estimate;
use crate::export::compare::{Entry, Form, Quantity, Values, differences, shown, values};
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, ButtonForm, command_button, command_button_as, elided, text_in};
use crate::gui::state::{CurveKey, Reference, State};
use eframe::egui;
use egui::{Align2, CursorIcon, DragValue, Rect, ScrollArea, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Width of the names, and of a column of values at least.
const NAMES: f32 = 168.0;
const COLUMN: f32 = 84.0;
const ROW: f32 = 28.0;
const HEAD: f32 = 44.0;
/// The name of the row of published constants.
pub const PUBLISHED: &str = "published constants";

/// One row: a curve, what is known of it.
struct Row {
    key: CurveKey,
    name: String,
    values: Option<Values>,
    /// Why there are none, where there are none.
    why: &'static str,
}

fn rows(state: &State) -> Vec<Row> {
    let several = state.document.scans.len() > 1;
    let mut rows: Vec<Row> = state
        .document
        .settings
        .keys()
        .map(|key| {
            let study = state.results.get(key).and_then(|o| o.study.as_ref());
            let found = study.map(|s| values(&s.findings));
            let why = match (&found, state.results.get(key)) {
                (Some(v), _) if v.iter().all(Option::is_none) => "no minimum: no constants",
                (None, Some(o)) if o.failure.is_some() => "the study failed: look at this curve to see why",
                _ => "computing …",
            };
            Row { key: *key, name: state.document.curve_name(*key, several), values: found, why }
        })
        .collect();
    if let Some((quantity, falling)) = state.view.comparison.sort {
        let index = Quantity::ALL.iter().position(|q| *q == quantity).unwrap_or(0);
        let of = |row: &Row| row.values.as_ref().and_then(|v| v[index]).map(|e| e.value);
        // What has no value stays below in either order.
        rows.sort_by(|a, b| match (of(a), of(b)) {
            (Some(a), Some(b)) if falling => b.total_cmp(&a),
            (Some(a), Some(b)) => a.total_cmp(&b),
            (a, b) => b.is_some().cmp(&a.is_some()),
        });
    }
    rows
}

/// The constants that the user has entered.
fn published(state: &State) -> Values {
    state.document.published.map(|v| v.map(Estimate::exact))
}

/// The reference: its name and values, where it has any.
fn reference(state: &State, rows: &[Row]) -> Option<(String, Values)> {
    match state.view.comparison.reference? {
        Reference::Published => Some((PUBLISHED.to_owned(), published(state))),
        Reference::Curve(key) => {
            let row = rows.iter().find(|r| r.key == key)?;
            Some((row.name.clone(), row.values?))
        }
    }
}

/// The table for the clipboard.
pub fn comparison_text(state: &State, form: Form) -> String {
    let rows = rows(state);
    let reference = reference(state, &rows);
    let entries: Vec<Entry> = rows
        .into_iter()
        .filter_map(|row| {
            let own = row.values?;
            let values = reference.as_ref().map_or(own, |(_, r)| differences(&own, r));
            Some(Entry { name: row.name, values })
        })
        .collect();
    crate::export::compare::table(&entries, reference.as_ref().map(|r| r.0.as_str()), form)
}

pub(super) fn compare_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    head_ui(ui, state, out);
    ui.add_space(8.0);
    let rows = rows(state);
    let reference = reference(state, &rows);
    let column = ((ui.available_width() - NAMES - 16.0) / Quantity::ALL.len() as f32).max(COLUMN);
    ScrollArea::horizontal().id_salt("comparison").auto_shrink(false).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 0.0;
        let width = NAMES + column * Quantity::ALL.len() as f32;
        ui.set_min_width(width);
        columns_ui(ui, state, width, column, out);
        published_ui(ui, state, width, column, out);
        ScrollArea::vertical().id_salt("compared").auto_shrink(false).show_rows(
            ui,
            ROW,
            rows.len(),
            |ui, range| {
                for row in &rows[range] {
                    row_ui(ui, state, row, reference.as_ref(), width, column, out);
                }
            },
        );
    });
}

fn head_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    ui.horizontal_wrapped(|ui| {
        ui.label(egui::RichText::new("Curves side by side").font(look::semibold(look::SENTENCE)));
        ui.add_space(12.0);
        command_button_as(
            ui,
            state,
            "back to the picture",
            Command::ShowComparison(false),
            ButtonForm::Link,
            out,
        );
        ui.add_space(12.0);
        for (_, form) in Form::ALL {
            command_button(ui, state, Command::CopyComparison(form), ButtonForm::Quiet, out);
        }
    });
    let text = match state.view.comparison.reference {
        None => {
            "Choose a reference by the ring before a name to see differences to it. A click on a heading sorts, a click on a name shows the curve."
        }
        Some(_) => {
            "Differences to the reference, value minus reference; errors are those of the value. A click on its ring shows values again."
        }
    };
    ui.add(egui::Label::new(egui::RichText::new(text).font(look::plain(look::SMALL)).color(look.dim)).wrap());
}

/// Names and units; a click sorts, a second one turns the order.
fn columns_ui(ui: &mut Ui, state: &State, width: f32, column: f32, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let (rect, _) = ui.allocate_exact_size(vec2(width, HEAD), Sense::hover());
    for (i, quantity) in Quantity::ALL.into_iter().enumerate() {
        let right = rect.left() + NAMES + column * (i as f32 + 1.0) - 8.0;
        let cell =
            Rect::from_min_max(pos2(right - column + 8.0, rect.top()), pos2(right + 8.0, rect.bottom()));
        let response = ui
            .interact(cell, ui.scope_id().with(quantity.name()), Sense::click())
            .on_hover_cursor(CursorIcon::PointingHand)
            .on_hover_text(quantity.about());
        let name = format!("Sort by {}", quantity.name());
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, &name));
        let sorted = state.view.comparison.sort.filter(|(q, _)| *q == quantity).map(|(_, falling)| falling);
        let lively = response.hovered() || response.has_focus() || sorted.is_some();
        let color = if lively { look.text } else { look.dim };
        let arrow = match sorted {
            Some(true) => "↓ ",
            Some(false) => "↑ ",
            None => "",
        };
        let title = format!("{arrow}{}", quantity.name());
        let small = look::plain(look::SMALL);
        text_in(ui, pos2(right, rect.top() + 13.0), Align2::RIGHT_CENTER, &title, &small, color);
        text_in(ui, pos2(right, rect.top() + 30.0), Align2::RIGHT_CENTER, quantity.unit(), &small, look.dim);
        if response.clicked() {
            let next = match sorted {
                None => Some((quantity, false)),
                Some(false) => Some((quantity, true)),
                Some(true) => None,
            };
            out.push(Command::SortComparison(next));
        }
    }
    ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(1.0, look.rule));
}

/// The constants to compare with, entered by hand.
fn published_ui(ui: &mut Ui, state: &State, width: f32, column: f32, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let (rect, _) = ui.allocate_exact_size(vec2(width, ROW + 6.0), Sense::hover());
    let chosen = state.view.comparison.reference == Some(Reference::Published);
    ring_ui(ui, rect, PUBLISHED, Reference::Published, chosen, out);
    let at = pos2(rect.left() + 26.0, rect.center().y);
    elided(ui, at, NAMES - 32.0, PUBLISHED, look::plain(look::BODY), look.accent);
    for (i, quantity) in Quantity::ALL.into_iter().enumerate() {
        let right = rect.left() + NAMES + column * (i as f32 + 1.0);
        let cell = Rect::from_min_max(
            pos2(right - column + 10.0, rect.top() + 4.0),
            pos2(right, rect.bottom() - 4.0),
        );
        let given = state.document.published[i];
        let mut value = given.unwrap_or(0.0);
        let field = DragValue::new(&mut value)
            .speed(0.0)
            .custom_formatter(move |v, _| match given {
                None if v == 0.0 => "enter".to_owned(),
                _ => crate::digits::rounded(v, 9),
            })
            .custom_parser(|text| {
                let text = text.trim().replace('−', "-");
                if text.is_empty() || text == "enter" { Some(0.0) } else { text.parse().ok() }
            });
        let response = ui.put(cell, field).on_hover_text(
            "A published value to compare with; empty or 0 takes it away. Parabound brings none of its own.",
        );
        let name = format!("Published {} in {}", quantity.name(), quantity.unit());
        response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, &name));
        if response.changed() {
            let value = (value != 0.0 && value.is_finite()).then_some(value);
            out.push(Command::SetPublished { quantity, value });
        }
        super::left::settle(&response, out);
    }
    ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(1.0, look.rule));
}

/// The ring that makes a row the reference.
fn ring_ui(ui: &mut Ui, row: Rect, name: &str, of: Reference, chosen: bool, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let mark = pos2(row.left() + 10.0, row.center().y);
    let hit = Rect::from_center_size(mark, vec2(20.0, row.height()));
    let response = ui
        .interact(hit, ui.scope_id().with(("reference", name, row.top() as i32)), Sense::click())
        .on_hover_cursor(CursorIcon::PointingHand)
        .on_hover_text("Take this row as the reference, or as a row like the others.");
    let label = format!("Reference {name}");
    response.widget_info(|| WidgetInfo::selected(egui::Role::RadioButton, true, chosen, &label));
    let color = if response.hovered() || response.has_focus() || chosen { look.accent } else { look.dim };
    if chosen {
        ui.painter().circle_filled(mark, 4.5, color);
    } else {
        ui.painter().circle_stroke(mark, 4.5, Stroke::new(1.2, color));
    }
    if response.clicked() {
        out.push(Command::SetReference((!chosen).then_some(of)));
    }
}

fn row_ui(
    ui: &mut Ui,
    state: &State,
    row: &Row,
    reference: Option<&(String, Values)>,
    width: f32,
    column: f32,
    out: &mut Vec<Command>,
) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(width, ROW), Sense::click());
    let focused = state.document.focus == Some(row.key);
    if response.hovered() || response.has_focus() {
        ui.painter().rect_filled(rect, 4.0, look.raised);
    }
    let of = Reference::Curve(row.key);
    let chosen = state.view.comparison.reference == Some(of);
    ring_ui(ui, rect, &row.name, of, chosen, out);
    let font = if focused { look::semibold(look::BODY) } else { look::plain(look::BODY) };
    elided(ui, pos2(rect.left() + 26.0, rect.center().y), NAMES - 32.0, &row.name, font, look.text);
    let mut words = format!("Curve {}", row.name);
    let is_difference = reference.is_some() && !chosen;
    let listed = row.values.as_ref().map(|own| match reference {
        Some((_, r)) if !chosen => differences(own, r),
        _ => *own,
    });
    match &listed {
        Some(values) if values.iter().any(Option::is_some) || is_difference => {
            for (i, (value, quantity)) in values.iter().zip(Quantity::ALL).enumerate() {
                let text = value
                    .as_ref()
                    .map_or_else(|| number::NONE.to_owned(), |v| shown(v, quantity, is_difference));
                let at = pos2(rect.left() + NAMES + column * (i as f32 + 1.0) - 8.0, rect.center().y);
                let color = if value.is_some() { look.text } else { look.faint };
                text_in(ui, at, Align2::RIGHT_CENTER, &text, &look::figures(look::SECONDARY), color);
                words.push_str(&format!(", {} {text}", quantity.name()));
            }
        }
        _ => {
            let at = pos2(rect.left() + NAMES + 8.0, rect.center().y);
            show::elided(ui, at, width - NAMES - 8.0, row.why, look::plain(look::SECONDARY), look.dim);
            words.push_str(&format!(": {}", row.why));
        }
    }
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, &words));
    if response.on_hover_cursor(CursorIcon::PointingHand).clicked() {
        out.push(Command::Focus(row.key));
        out.push(Command::ShowComparison(false));
    }
}
