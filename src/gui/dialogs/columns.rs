//! The columns of a file: which one is what, and in which unit.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show;
use crate::gui::state::{LoadedScan, State};
use crate::scan::Layout;
use crate::scan::read::ReadSettings;
use crate::units::{EnergyUnit, LengthUnit};
use eframe::egui;
use egui::{Align, ComboBox, Layout as UiLayout, RichText, ScrollArea, Ui, WidgetInfo};

/// Rows shown of the table.
const PREVIEW_ROWS: usize = 8;

/// What a column is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Use {
    Length,
    Energy,
    Other,
}

impl Use {
    const ALL: [Self; 3] = [Self::Length, Self::Energy, Self::Other];

    const fn name(self) -> &'static str {
        match self {
            Self::Length => "bond length",
            Self::Energy => "energy",
            Self::Other => "property",
        }
    }
}

/// A column of the table as it was read.
struct Shown<'a> {
    name: &'a str,
    is: Use,
    cells: Vec<String>,
}

/// Shows the columns of the scan asked for.
pub fn columns_ui(ui: &mut Ui, state: &State, out: &mut Vec<Command>) {
    let Some(loaded) = state.view.columns_of.and_then(|key| state.document.scan(key)) else { return };
    let room = ui.ctx().content_rect().size();
    egui::Window::new(format!("Columns of {}", loaded.scan.file_name))
        .id(egui::Id::unique("columns"))
        .collapsible(false)
        .resizable(false)
        .anchor(egui::Align2::CENTER_CENTER, egui::Vec2::ZERO)
        .default_width((room.x - 80.0).min(620.0))
        .show(ui.ctx(), |ui| content_ui(ui, loaded, out));
    if ui.input(|i| i.key_pressed(egui::Key::Escape)) {
        out.push(Command::ShowColumns(None));
    }
}

fn columns_of(loaded: &LoadedScan) -> Vec<Shown<'_>> {
    let scan = &*loaded.scan;
    let cell = |v: &Option<f64>| v.map_or_else(String::new, show::as_read);
    let rows = PREVIEW_ROWS;
    let length = Shown {
        name: &scan.length_column,
        is: Use::Length,
        cells: scan.bond_lengths.iter().take(rows).map(|r| show::as_read(*r)).collect(),
    };
    let energies = scan.energies.iter().filter(|e| e.made.is_none()).map(|e| Shown {
        name: &e.name,
        is: Use::Energy,
        cells: e.values.iter().take(rows).map(cell).collect(),
    });
    let others = scan.properties.iter().map(|p| Shown {
        name: &p.name,
        is: Use::Other,
        cells: p.values.iter().take(rows).map(cell).collect(),
    });
    std::iter::once(length).chain(energies).chain(others).collect()
}

fn content_ui(ui: &mut Ui, loaded: &LoadedScan, out: &mut Vec<Command>) {
    let mut read = loaded.start.read.clone();
    let columns = columns_of(loaded);
    units_ui(ui, loaded, &mut read);
    ui.add_space(8.0);
    let room = ui.ctx().content_rect().size();
    ScrollArea::both()
        .id_salt("columns table")
        .max_width((room.x - 80.0).min(620.0))
        .max_height((room.y - 260.0).max(120.0))
        .show(ui, |ui| table_ui(ui, loaded, &columns, &mut read));
    let rows = loaded.scan.bond_lengths.len();
    if rows > PREVIEW_ROWS {
        show::note(ui, &format!("{PREVIEW_ROWS} of {rows} rows."));
    }
    ui.add_space(8.0);
    ui.horizontal(|ui| {
        if ui.button("Done").clicked() {
            out.push(Command::ShowColumns(None));
        }
        // What was made of the columns, and between which atoms, or how logs are searched, is another matter.
        let plain = ReadSettings {
            bond: loaded.start.read.bond,
            made: loaded.start.read.made.clone(),
            lines: loaded.start.read.lines.clone(),
            ..ReadSettings::default()
        };
        let said = loaded.start.read != plain;
        let as_said = egui::Button::new("As the file says").frame(false);
        if ui.add_enabled(said, as_said).on_disabled_hover_text("It is read as it says.").clicked() {
            read = plain;
        }
    });
    if read != loaded.start.read {
        out.push(Command::ReadWith { scan: loaded.key, read });
    }
}

/// The units of bond lengths and of energies.
fn units_ui(ui: &mut Ui, loaded: &LoadedScan, read: &mut ReadSettings) {
    let look = Look::of(ui);
    ui.horizontal_wrapped(|ui| {
        let label = ui.label(RichText::new("bond lengths in").color(look.dim));
        let mut length = loaded.scan.length_unit;
        let combo = ComboBox::from_id_salt("columns length").selected_text(show::length_unit(length));
        let response = combo.show_ui(ui, |ui| {
            for unit in LengthUnit::ALL {
                ui.selectable_value(&mut length, unit, show::length_unit(unit));
            }
        });
        response.response.labelled_by(label.id);
        if length != loaded.scan.length_unit {
            read.length_unit = Some(length);
        }
        ui.add_space(16.0);
        let label = ui.label(RichText::new("energies in").color(look.dim));
        let now = loaded.scan.energies.first().map(|e| e.unit);
        let mut energy = now;
        let text = now.map_or("not stated", show::unit);
        let response = ComboBox::from_id_salt("columns energy").selected_text(text).show_ui(ui, |ui| {
            for unit in EnergyUnit::ALL {
                ui.selectable_value(&mut energy, Some(unit), show::unit(unit));
            }
        });
        response.response.labelled_by(label.id);
        if energy != now {
            read.energy_unit = energy;
        }
    });
}

fn table_ui(ui: &mut Ui, loaded: &LoadedScan, columns: &[Shown<'_>], read: &mut ReadSettings) {
    let look = Look::of(ui);
    // Only in a table can a column become something else.
    let fixed = loaded.scan.layout != Layout::Delimited;
    egui::Grid::new("columns grid").striped(false).spacing([18.0, 4.0]).show(ui, |ui| {
        for column in columns {
            ui.label(RichText::new(column.name).font(look::semibold(look::SECONDARY)).color(look.text));
        }
        ui.end_row();
        for (index, column) in columns.iter().enumerate() {
            let mut is = column.is;
            ui.add_enabled_ui(!fixed, |ui| {
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
        for row in 0..PREVIEW_ROWS.min(loaded.scan.bond_lengths.len()) {
            for column in columns {
                ui.with_layout(UiLayout::right_to_left(Align::Center), |ui| {
                    let cell = column.cells.get(row).map_or("", String::as_str);
                    let color = if column.is == Use::Other { look.dim } else { look.text };
                    ui.label(RichText::new(cell).font(look::figures(look::SECONDARY)).color(color));
                });
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
            ReadSettings { length_column: Some(length), energy_columns: Some(energies), ..read.clone() }
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
        assert_eq!(changed(&start, &columns, 1, Use::Other), start);
        assert_eq!(changed(&start, &columns, 0, Use::Other), start);
    }
}
