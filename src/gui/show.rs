//! Rows, headings and buttons: the few forms in which everything in the panels is shown.

use super::command::Command;
use super::look::{self, Look};
use super::state::State;
pub use crate::figure::rows::Row;
pub use crate::figure::typography::typographic;
use crate::figure::{LineStyle, Role};
use eframe::egui;
use egui::{Align2, Color32, FontId, Rect, Response, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// A row on the screen.
pub trait RowUi {
    /// Draws the row.
    fn ui(&self, ui: &mut Ui) -> Response;
}

impl RowUi for Row {
    fn ui(&self, ui: &mut Ui) -> Response {
        let look = Look::of(ui);
        let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), look::ROW), Sense::hover());
        response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, self.text()));
        let at = |fraction: f32| rect.left() + fraction * rect.width();
        let unit = text_in(
            ui,
            rect.right_center(),
            Align2::RIGHT_CENTER,
            self.unit,
            &look::plain(look::SECONDARY),
            look.dim,
        );
        // Long numbers push those at their left on, never into each other.
        let figures = |text: &str, color| {
            ui.painter().layout_no_wrap(text.to_owned(), look::figures(look::SECONDARY), color)
        };
        let put = |galley: std::sync::Arc<egui::Galley>, right: f32, color| {
            let left = right - galley.size().x;
            ui.painter().galley(pos2(left, rect.center().y - galley.size().y / 2.0), galley, color);
            left
        };
        let mut value_right = at(0.82).min(unit.left() - look::STEP);
        if let Some(second) = &self.second {
            let left = put(figures(second, look.dim), value_right, look.dim);
            value_right = at(0.53).min(left - look::STEP);
        }
        let value_left = put(figures(&self.value, look.text), value_right, look.text);
        let room = value_left - rect.left() - look::STEP;
        elided(ui, rect.left_center(), room, &self.label, look::plain(look::BODY), look.text);
        if self.about.is_empty() { response } else { response.on_hover_text(&self.about) }
    }
}

/// Text at a place; gives its rectangle.
pub fn text_in(ui: &Ui, at: egui::Pos2, anchor: Align2, text: &str, font: &FontId, color: Color32) -> Rect {
    ui.painter().text(at, anchor, text, font.clone(), color)
}

/// Text that begins at the left centre and is cut with an ellipsis where there is no more room.
pub fn elided(ui: &Ui, left_center: egui::Pos2, room: f32, text: &str, font: FontId, color: Color32) -> Rect {
    let mut job =
        egui::text::LayoutJob::single_section(text.to_owned(), egui::TextFormat::simple(font, color));
    job.wrap = egui::text::TextWrapping::truncate_at_width(room.max(8.0));
    let galley = ui.painter().layout_job(job);
    let min = pos2(left_center.x, left_center.y - galley.size().y / 2.0);
    let rect = Rect::from_min_size(min, galley.size());
    ui.painter().galley(min, galley, color);
    rect
}

/// A heading of a block, with dim words at the right.
pub fn heading(ui: &mut Ui, text: &str, right: &str) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 26.0), Sense::hover());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, text));
    let done = text_in(
        ui,
        rect.left_center(),
        Align2::LEFT_CENTER,
        text,
        &look::semibold(look::SECONDARY),
        look.dim,
    );
    if !right.is_empty() && rect.right() - done.right() > 40.0 {
        text_in(ui, rect.right_center(), Align2::RIGHT_CENTER, right, &look::plain(look::SMALL), look.dim);
    }
}

/// One column of a table: where it ends, and what its header says.
#[derive(Clone, Copy, Debug)]
pub struct Column {
    /// Right edge as a fraction of the table's width.
    pub right: f32,
    /// Name.
    pub name: &'static str,
    /// Unit, under the name.
    pub unit: &'static str,
    /// What it is.
    pub about: &'static str,
}

/// The columns with their right edges where what stands in them needs them: the room that is left is shared out
/// between them. None where there is too little room.
pub fn fitted<const N: usize>(
    ui: &Ui,
    columns: &[Column; N],
    rows: &[[String; N]],
    width: f32,
) -> Option<[Column; N]> {
    let size = |text: &str, font: FontId| {
        ui.painter().layout_no_wrap(text.to_owned(), font, Color32::PLACEHOLDER).size().x
    };
    let needed: [f32; N] = std::array::from_fn(|i| {
        let head = [columns[i].name, columns[i].unit].map(|t| size(t, look::plain(look::SMALL)));
        // Figures are all as wide as each other: the longest text is the widest.
        let longest = rows.iter().map(|row| &row[i]).max_by_key(|cell| cell.chars().count());
        let cells = longest.map_or(0.0, |cell| size(cell, look::figures(look::SECONDARY)));
        head.into_iter().fold(cells, f32::max)
    });
    let gap = (width - needed.iter().sum::<f32>()) / (N - 1).max(1) as f32;
    let mut right = 0.0;
    (gap >= look::STEP).then(|| {
        std::array::from_fn(|i| {
            right += needed[i] + if i == 0 { 0.0 } else { gap };
            Column { right: right / width, ..columns[i] }
        })
    })
}

/// The header of a table: names, and under them the units.
pub fn columns_ui(ui: &mut Ui, width: f32, columns: &[Column]) {
    let look = Look::of(ui);
    let (rect, _) = ui.allocate_exact_size(vec2(width, 38.0), Sense::hover());
    let mut left = rect.left();
    for column in columns {
        let right = rect.left() + column.right * width;
        for (y, text) in [(rect.top() + 10.0, column.name), (rect.top() + 26.0, column.unit)] {
            text_in(ui, pos2(right, y), Align2::RIGHT_CENTER, text, &look::plain(look::SMALL), look.dim);
        }
        let cell = Rect::from_min_max(pos2(left, rect.top()), pos2(right, rect.bottom()));
        ui.interact(cell, ui.scope_id().with(column.name), Sense::hover()).on_hover_text(column.about);
        left = right;
    }
    ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(1.0, look.rule));
}

/// A unit of energy as it is written.
pub const fn unit(unit: crate::units::EnergyUnit) -> &'static str {
    match unit {
        crate::units::EnergyUnit::PerCm => "cm⁻¹",
        other => other.name(),
    }
}

/// A unit of length as it is written.
pub const fn length_unit(unit: crate::units::LengthUnit) -> &'static str {
    match unit {
        crate::units::LengthUnit::Angstrom => "Å",
        other => other.name(),
    }
}

/// A number with the digits it was read with.
pub fn as_read(value: f64) -> String {
    format!("{value}").replace('-', "−")
}

/// A hairline between blocks.
pub fn rule(ui: &mut Ui) {
    let look = Look::of(ui);
    let (rect, _) = ui.allocate_exact_size(vec2(ui.available_width(), 17.0), Sense::hover());
    ui.painter().hline(rect.x_range(), rect.center().y.round() + 0.5, Stroke::new(1.0, look.rule));
}

/// Dim small print, wrapped.
pub fn note(ui: &mut Ui, text: &str) {
    let look = Look::of(ui);
    ui.add(egui::Label::new(egui::RichText::new(text).font(look::plain(look::SMALL)).color(look.dim)).wrap());
}

/// How a command is offered.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ButtonForm {
    /// With a frame.
    Framed,
    /// Words only, dim.
    Quiet,
    /// Words only, in the colour of links.
    Link,
}

/// A button that gives a command; it says what it does, its shortcut, and why it cannot be pressed.
pub fn command_button(
    ui: &mut Ui,
    state: &State,
    command: Command,
    form: ButtonForm,
    out: &mut Vec<Command>,
) -> Response {
    command_button_as(ui, state, &command.label(), command, form, out)
}

/// The same with other words on it.
pub fn command_button_as(
    ui: &mut Ui,
    state: &State,
    label: &str,
    command: Command,
    form: ButtonForm,
    out: &mut Vec<Command>,
) -> Response {
    let look = Look::of(ui);
    let enabled = state.can(&command);
    let text = egui::RichText::new(label);
    let button = match form {
        ButtonForm::Framed => egui::Button::new(text),
        ButtonForm::Quiet => {
            egui::Button::new(text.color(look.dim).font(look::plain(look::SECONDARY))).frame(false)
        }
        ButtonForm::Link => {
            egui::Button::new(text.color(look.accent).font(look::plain(look::SECONDARY))).frame(false)
        }
    };
    let mut response =
        ui.add_enabled(enabled.is_ok(), button).on_hover_cursor(egui::CursorIcon::PointingHand);
    let mut words = match &command {
        Command::Undo => state.history.undo_name().map_or_else(String::new, |n| format!("Take back: {n}.")),
        Command::Redo => state.history.redo_name().map_or_else(String::new, |n| format!("Do again: {n}.")),
        other => other.tooltip().to_owned(),
    };
    if let Some(keys) = command.shortcut() {
        words = format!("{words} ({})", ui.ctx().format_shortcut(&keys)).trim_start().to_owned();
    }
    if !words.is_empty() {
        response = response.on_hover_text(words);
    }
    if let Err(reason) = enabled {
        response = response.on_disabled_hover_text(reason);
    }
    if response.clicked() {
        out.push(command);
    }
    response
}

/// Draws a sample of a line in the style of a role.
pub fn line_sample(ui: &Ui, rect: Rect, role: Role, color: Color32) {
    let [a, b] = [rect.left_center(), rect.right_center()];
    let stroke = Stroke::new(2.0, color);
    styled_line(ui.painter(), &[a, b], role.line_style(), stroke);
}

/// A line through screen points in a style.
pub fn styled_line(painter: &egui::Painter, points: &[egui::Pos2], style: LineStyle, stroke: Stroke) {
    if points.len() < 2 {
        return;
    }
    let dashes = |dash: f32, gap: f32| {
        painter.extend(egui::Shape::dashed_line(points, stroke, dash, gap));
    };
    match style {
        LineStyle::Solid => {
            painter.add(egui::Shape::line(points.to_vec(), stroke));
        }
        LineStyle::Dashed => dashes(7.0, 4.0),
        LineStyle::LongDashed => dashes(11.0, 4.0),
        LineStyle::ShortDashed => dashes(3.0, 3.0),
        LineStyle::Dotted => dashes(2.0, 3.0),
    }
}

/// A choice of one of a few; `label` is its hint and its name.
pub fn combo_ui<T: Copy + PartialEq>(
    ui: &mut Ui,
    label: &str,
    value: &mut T,
    all: &[T],
    name: impl Fn(T) -> &'static str,
) {
    let response = egui::ComboBox::from_id_salt(label)
        .selected_text(name(*value))
        .width(0.0)
        .show_ui(ui, |ui| {
            for &one in all {
                ui.selectable_value(value, one, name(one));
            }
        })
        .response
        .on_hover_text(label);
    response.widget_info(|| {
        WidgetInfo::labeled(egui::Role::ComboBox, true, format!("{label}, {}", name(*value)))
    });
}
