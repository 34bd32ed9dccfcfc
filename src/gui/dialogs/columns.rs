//! The columns of a file: which one is what, and in which unit.

use super::recipes::recipes_ui;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::meaning::Meaning;
use crate::gui::panels;
use crate::gui::reading::{Looked, ReadingCommand};
use crate::gui::show;
use crate::gui::state::{LoadedScan, Problem, State};
use crate::scan::read::{DecimalSign, Delimiter, Preview, PreviewColumn, ReadSettings, Role};
use crate::scan::{Layout, Scan};
use crate::units::{EnergyUnit, LengthUnit};
use eframe::egui;
use egui::{ComboBox, RichText, ScrollArea, Ui, WidgetInfo};

/// Rows shown of the table.
const PREVIEW_ROWS: usize = 8;

/// What a column is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Use {
    Length,
    Energy,
    Other,
    Ignored,
}

impl Use {
    const ALL: [Self; 4] = [Self::Length, Self::Energy, Self::Other, Self::Ignored];

    const fn name(self) -> &'static str {
        match self {
            Self::Length => "bond length",
            Self::Energy => "energy",
            Self::Other => "property",
            Self::Ignored => "ignored",
        }
    }
}

/// A column of the table as it was read.
struct Shown<'a> {
    name: &'a str,
    is: Use,
    cells: Vec<String>,
}

/// A table whose columns are looked at: of a scan, or of a file that was refused.
struct Table<'a> {
    title: String,
    read: &'a ReadSettings,
    columns: Vec<Shown<'a>>,
    rows: usize,
    /// Only in a table of text can a column become something else.
    is_table: bool,
    length: Option<LengthUnit>,
    energy: Option<EnergyUnit>,
    separators: Option<[&'static str; 2]>,
    /// The first lines, where no table is seen.
    lines: &'a [String],
    meanings: &'a [Meaning],
    /// The file, where it was refused.
    problem: Option<&'a Problem>,
    /// The scan, where it was read.
    scan: Option<&'a Scan>,
}

impl Table<'_> {
    /// Whether a list says what every choice of units would mean.
    fn meanings_in_sight(&self) -> bool {
        self.problem.is_some_and(|p| !p.meanings.is_empty())
    }
}

/// Shows the columns of the scan asked for, or of the refused file.
pub fn columns_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let reading = &state.view.reading;
    let problem = state.view.problem.as_ref().filter(|_| reading.problem_columns);
    let asked = state.view.columns_of.and_then(|key| state.document.scan(key));
    let (table, close) = match (problem, asked) {
        (Some(problem), _) => match of_problem(problem) {
            Some(table) => (table, Command::Reading(ReadingCommand::ProblemColumns(false))),
            None => return,
        },
        (None, Some(loaded)) => {
            let known = reading.looked.as_ref();
            let known = known.filter(|k| k.scan == loaded.key && k.read == loaded.start.read);
            (of_scan(loaded, known), Command::ShowColumns(None))
        }
        (None, None) => return,
    };
    let room = ui.ctx().content_rect().size();
    let mut read = table.read.clone();
    egui::Window::new(&table.title)
        .id(egui::Id::unique("columns"))
        .collapsible(false)
        .resizable(false)
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .default_width((room.x - 80.0).min(620.0))
        .show(ui.ctx(), |ui| content_ui(ui, state, &table, &mut read, &close, out));
    if ui.input(|i| i.key_pressed(egui::Key::Escape)) {
        out.push(close);
    }
    if read != *table.read {
        out.push(match (problem, asked) {
            (None, Some(loaded)) => Command::ReadWith { scan: loaded.key, read },
            _ => Command::ReadAgain(read),
        });
    }
}

/// Cells as read, the decimal points under each other.
fn cells<'a>(values: impl Iterator<Item = &'a Option<f64>>) -> Vec<String> {
    let plain: Vec<String> = values.map(|v| v.map_or_else(String::new, show::as_read)).collect();
    let before = |text: &str| text.split('.').next().map_or(0, |whole| whole.chars().count());
    let most = plain.iter().map(|text| before(text)).max().unwrap_or(0);
    plain.into_iter().map(|text| format!("{}{text}", " ".repeat(most - before(&text)))).collect()
}

fn of_problem(problem: &Problem) -> Option<Table<'_>> {
    let preview = problem.preview.as_ref()?;
    Some(Table {
        title: format!("Columns of {}", problem.file_name),
        read: &problem.start.read,
        columns: columns_seen(preview),
        rows: preview.columns.first().map_or(0, |c| c.cells.len()),
        is_table: true,
        length: problem.start.read.length_unit,
        energy: problem.start.read.energy_unit,
        separators: preview.separators,
        lines: &preview.lines,
        meanings: &problem.meanings,
        problem: Some(problem),
        scan: None,
    })
}

fn columns_seen(preview: &Preview) -> Vec<Shown<'_>> {
    preview.columns.iter().map(column_seen).collect()
}

fn column_seen(c: &PreviewColumn) -> Shown<'_> {
    Shown {
        name: &c.name,
        is: match c.role {
            Role::Length => Use::Length,
            Role::Energy => Use::Energy,
            Role::Property => Use::Other,
            Role::Ignored => Use::Ignored,
        },
        cells: cells(c.cells.iter()),
    }
}

fn of_scan<'a>(loaded: &'a LoadedScan, known: Option<&'a Looked>) -> Table<'a> {
    let meanings = known.map_or(&[][..], |known| &known.meanings);
    // The scan itself does not have the columns that are ignored.
    let preview = known.map(|known| &known.preview).filter(|p| p.columns.len() > 1);
    Table {
        title: format!("Columns of {}", loaded.scan.file_name),
        read: &loaded.start.read,
        columns: preview.map_or_else(|| columns_of(loaded), columns_seen),
        rows: loaded.scan.bond_lengths.len(),
        is_table: loaded.scan.layout == Layout::Delimited,
        length: Some(loaded.scan.length_unit),
        energy: loaded.scan.energies.first().map(|e| e.unit),
        separators: loaded.scan.separators,
        lines: &[],
        meanings,
        problem: None,
        scan: Some(&loaded.scan),
    }
}

fn columns_of(loaded: &LoadedScan) -> Vec<Shown<'_>> {
    let scan = &*loaded.scan;
    let rows = PREVIEW_ROWS;
    let lengths: Vec<Option<f64>> = scan.bond_lengths.iter().take(rows).copied().map(Some).collect();
    let length = Shown { name: &scan.length_column, is: Use::Length, cells: cells(lengths.iter()) };
    let energies = scan.energies.iter().filter(|e| e.made.is_none()).map(|e| Shown {
        name: &e.name,
        is: Use::Energy,
        cells: cells(e.values.iter().take(rows)),
    });
    let others = scan.properties.iter().map(|p| Shown {
        name: &p.name,
        is: Use::Other,
        cells: cells(p.values.iter().take(rows)),
    });
    std::iter::once(length).chain(energies).chain(others).collect()
}

fn content_ui(
    ui: &mut Ui,
    state: &State,
    table: &Table<'_>,
    read: &mut ReadSettings,
    close: &Command,
    out: &mut Vec<Command>,
) {
    if table.is_table {
        separators_ui(ui, table, read);
        ui.add_space(6.0);
    }
    units_ui(ui, table, read);
    ui.add_space(8.0);
    let room = ui.ctx().content_rect().size();
    if let Some(problem) = table.problem.filter(|_| table.meanings_in_sight()) {
        let rows = if room.y > 800.0 { 8.0 } else { 5.0 };
        panels::units_ui(ui, problem, rows, out);
    }
    if table.columns.is_empty() {
        show::note(ui, "With these signs no line is a row of numbers. The file begins:");
        for line in table.lines {
            ui.label(RichText::new(line).font(look::figures(look::SMALL)));
        }
    }
    // The same height from the first frame on: the window does not grow under the hand.
    let room_for_table = (room.y - if table.meanings_in_sight() { 520.0 } else { 400.0 }).max(110.0);
    ScrollArea::both()
        .id_salt("columns table")
        .min_scrolled_height(room_for_table)
        .max_width((room.x - 80.0).min(620.0))
        .max_height(room_for_table)
        .show(ui, |ui| table_ui(ui, table, read));
    if table.rows > PREVIEW_ROWS {
        show::note(ui, &format!("{PREVIEW_ROWS} of {} rows.", table.rows));
    }
    ui.add_space(8.0);
    if let Some(scan) = table.scan {
        recipes_ui(ui, state, scan, read, out);
        ui.add_space(8.0);
    }
    ui.horizontal(|ui| {
        if ui.button("Done").clicked() {
            out.push(close.clone());
        }
        // What was made of the columns is another matter; the bond of a larger molecule is asked for again.
        let plain = ReadSettings {
            made: table.read.made.clone(),
            lines: table.read.lines.clone(),
            ..ReadSettings::default()
        };
        let said = *table.read != plain;
        let as_said = egui::Button::new("As the file says").frame(false);
        if ui.add_enabled(said, as_said).on_disabled_hover_text("It is read as it says.").clicked() {
            *read = plain;
        }
    });
}

/// What separates the columns and what stands for decimals.
fn separators_ui(ui: &mut Ui, table: &Table<'_>, read: &mut ReadSettings) {
    let look = Look::of(ui);
    let told = |i: usize| table.separators.map_or("not told", |s| s[i]);
    ui.horizontal_wrapped(|ui| {
        let label = ui.label(RichText::new("columns separated by").color(look.dim));
        let text = read.delimiter.map_or_else(|| told(0), Delimiter::words);
        let response = ComboBox::from_id_salt("columns delimiter").selected_text(text).show_ui(ui, |ui| {
            ui.selectable_value(&mut read.delimiter, None, "as it looks");
            for delimiter in Delimiter::ALL {
                ui.selectable_value(&mut read.delimiter, Some(delimiter), delimiter.words());
            }
        });
        response.response.labelled_by(label.id);
        ui.add_space(16.0);
        let label = ui.label(RichText::new("decimal sign").color(look.dim));
        let text = read.decimal_sign.map_or_else(|| told(1), DecimalSign::word);
        let response = ComboBox::from_id_salt("columns decimal").selected_text(text).show_ui(ui, |ui| {
            ui.selectable_value(&mut read.decimal_sign, None, "as it looks");
            for sign in DecimalSign::ALL {
                ui.selectable_value(&mut read.decimal_sign, Some(sign), sign.word());
            }
        });
        response.response.labelled_by(label.id);
    });
}

/// What a choice of units would mean, e.g. `rₑ 1.275 Å, ωₑ 2990 cm⁻¹, rise 3.33 eV`.
fn meaning_of(table: &Table<'_>, length: Option<LengthUnit>, energy: Option<EnergyUnit>) -> String {
    let found = table.meanings.iter().find(|m| Some(m.length) == length && Some(m.energy) == energy);
    let Some(meaning) = found else { return String::new() };
    let plain = |value: f64, digits: usize| {
        if value.abs() < 1e6 { crate::digits::rounded(value, digits) } else { format!("{value:.1e}") }
    };
    let omega = meaning.omega_e_per_cm.map_or_else(String::new, |w| format!(", ωₑ {} cm⁻¹", plain(w, 4)));
    let unusual = if meaning.is_common { "" } else { " (unusual for a bond)" };
    format!(
        "rₑ {} Å{omega}, depth to the end {} eV{unusual}",
        plain(meaning.r_e_angstrom, 4),
        plain(meaning.rise_electronvolt, 3)
    )
}

/// The units of bond lengths and of energies, each choice with what it would mean.
fn units_ui(ui: &mut Ui, table: &Table<'_>, read: &mut ReadSettings) {
    let look = Look::of(ui);
    let entry = |name: &str, meaning: String| {
        if meaning.is_empty() { name.to_owned() } else { format!("{name}:  {meaning}") }
    };
    ui.horizontal_wrapped(|ui| {
        let label = ui.label(RichText::new("bond lengths in").color(look.dim));
        let mut length = table.length;
        let text = length.map_or("not stated", show::length_unit);
        let response = ComboBox::from_id_salt("columns length").selected_text(text).show_ui(ui, |ui| {
            for unit in LengthUnit::ALL {
                let text = entry(show::length_unit(unit), meaning_of(table, Some(unit), table.energy));
                ui.selectable_value(&mut length, Some(unit), text);
            }
        });
        response.response.labelled_by(label.id);
        if length != table.length {
            read.length_unit = length;
        }
        ui.add_space(16.0);
        let label = ui.label(RichText::new("energies in").color(look.dim));
        let mut energy = table.energy;
        let text = energy.map_or("not stated", show::unit);
        let response = ComboBox::from_id_salt("columns energy").selected_text(text).show_ui(ui, |ui| {
            for unit in EnergyUnit::ALL {
                let text = entry(show::unit(unit), meaning_of(table, table.length, Some(unit)));
                ui.selectable_value(&mut energy, Some(unit), text);
            }
        });
        response.response.labelled_by(label.id);
        if energy != table.energy {
            read.energy_unit = energy;
        }
    });
    let meaning = meaning_of(table, table.length, table.energy);
    if !meaning.is_empty() {
        show::note(ui, &format!("So it is {meaning}."));
    }
}

fn table_ui(ui: &mut Ui, table: &Table<'_>, read: &mut ReadSettings) {
    let look = Look::of(ui);
    let columns = &table.columns;
    egui::Grid::new("columns grid").striped(false).spacing([18.0, 4.0]).show(ui, |ui| {
        for column in columns {
            ui.label(RichText::new(column.name).font(look::semibold(look::SECONDARY)).color(look.text));
        }
        ui.end_row();
        for (index, column) in columns.iter().enumerate() {
            let mut is = column.is;
            ui.add_enabled_ui(table.is_table, |ui| {
                let combo = ComboBox::from_id_salt(("use", index)).selected_text(is.name());
                let response = combo.show_ui(ui, |ui| {
                    for choice in Use::ALL {
                        ui.selectable_value(&mut is, choice, choice.name());
                    }
                });
                let name = format!("Use of column {}", column.name);
                response.response.widget_info(|| WidgetInfo::labeled(egui::Role::ComboBox, true, &name));
            });
            if is != column.is {
                *read = changed(read, columns, index, is);
            }
        }
        ui.end_row();
        for row in 0..PREVIEW_ROWS.min(table.rows) {
            for column in columns {
                let cell = column.cells.get(row).map_or("", String::as_str);
                let color = if matches!(column.is, Use::Other | Use::Ignored) { look.dim } else { look.text };
                ui.label(RichText::new(cell).font(look::figures(look::SECONDARY)).color(color));
            }
            ui.end_row();
        }
    });
}

/// The settings with one column used differently; the column that was the bond length becomes a property.
fn changed(read: &ReadSettings, columns: &[Shown<'_>], index: usize, is: Use) -> ReadSettings {
    let mut uses: Vec<Use> = columns.iter().map(|c| c.is).collect();
    if is == Use::Length {
        for other in uses.iter_mut().filter(|u| **u == Use::Length) {
            *other = Use::Other;
        }
    }
    uses[index] = is;
    let names = |wanted: Use| {
        let of = columns.iter().zip(&uses).filter(move |(_, u)| **u == wanted);
        of.map(|(c, _)| c.name.to_owned()).collect::<Vec<_>>()
    };
    let energies = names(Use::Energy);
    // Without a bond length or an energy there is no scan: such a choice changes nothing.
    match names(Use::Length).pop() {
        Some(length) if !energies.is_empty() => {
            let ignored_columns = names(Use::Ignored);
            let (length_column, energy_columns) = (Some(length), Some(energies));
            ReadSettings { length_column, energy_columns, ignored_columns, ..read.clone() }
        }
        _ => read.clone(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn there_is_always_one_bond_length_and_an_energy() {
        let shown = |name, is| Shown { name, is, cells: Vec::new() };
        let columns = [shown("r", Use::Length), shown("E", Use::Energy), shown("mu", Use::Other)];
        let start = ReadSettings::default();
        let swapped = changed(&start, &columns, 2, Use::Length);
        assert_eq!(swapped.length_column.as_deref(), Some("mu"));
        assert_eq!(swapped.energy_columns, Some(vec!["E".to_owned()]));
        let more = changed(&start, &columns, 2, Use::Energy);
        assert_eq!(more.energy_columns, Some(vec!["E".to_owned(), "mu".to_owned()]));
        let less = changed(&start, &columns, 2, Use::Ignored);
        assert_eq!(less.ignored_columns, ["mu"]);
        assert_eq!(changed(&start, &columns, 1, Use::Other), start);
        assert_eq!(changed(&start, &columns, 0, Use::Other), start);
    }
}
