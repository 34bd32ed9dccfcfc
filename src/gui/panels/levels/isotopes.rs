//! Other isotopes on the same curve, side by side.

use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::panels::grid::{FIRST, HEAD, ROW, grid_ui};
use crate::gui::sheets::{isotopes_sheet, isotopic_constants_sheet};
use crate::gui::show;
use crate::gui::state::{State, Study};
use crate::species::{AtomChoice, isotopes_of, parse_atoms};
use eframe::egui;
use egui::{Key, RichText, TextEdit, Ui, WidgetInfo};

/// Rows of levels in sight.
const ROWS: f32 = 14.0;
/// Pairs in sight, and room for their names.
const MOST_PAIRS: usize = 6;
const NAMES: f32 = 62.0;
/// Pairs that are proposed at most.
const PROPOSED: usize = 6;

pub(super) fn isotopes_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let findings = &*study.findings;
    let Some((_, _, settings)) = state.document.focused() else { return };
    let own = findings.masses.as_ref().and_then(|m| m.atoms.as_ref());
    let own: Option<[AtomChoice; 2]> = own.map(|atoms| {
        atoms.clone().map(|a| AtomChoice { symbol: a.symbol, mass_number: Some(a.mass_number) })
    });
    chosen_ui(ui, &settings.isotopologues, out);
    add_ui(ui, own.as_ref(), &settings.isotopologues, out);
    ui.add_space(6.0);
    if findings.isotopologues.is_empty() {
        show::note(
            ui,
            "The same curve with other masses: add a pair of isotopes to see its levels and their shifts beside those of the study.",
        );
        return;
    }
    tables_ui(ui, findings);
}

fn tables_ui(ui: &mut Ui, findings: &Findings) {
    show::heading(ui, "Constants", "");
    let constants = isotopic_constants_sheet(findings);
    let rows = constants.rows.len().min(MOST_PAIRS) as f32;
    grid_ui(ui, "isotopic constants", &constants, NAMES, HEAD + ROW * rows + 10.0);
    show::rule(ui);
    show::heading(ui, "Levels", "E − Vₑ and shifts");
    grid_ui(ui, "isotopes", &isotopes_sheet(findings), FIRST, HEAD + ROW * ROWS);
}

/// The pairs chosen, each with a way to take it out.
fn chosen_ui(ui: &mut Ui, pairs: &[[AtomChoice; 2]], out: &mut Vec<Command>) {
    if pairs.is_empty() {
        return;
    }
    ui.horizontal_wrapped(|ui| {
        for (i, pair) in pairs.iter().enumerate() {
            let name = pair_name(pair);
            let button = ui.button(format!("{name} ×")).on_hover_text(format!("Take {name} out."));
            button.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, format!("Take {name} out")));
            if button.clicked() {
                let mut rest = pairs.to_vec();
                rest.remove(i);
                out.push(Command::SetIsotopologues(rest));
            }
        }
    });
    ui.add_space(4.0);
}

/// `⁷Li²H`.
pub(in crate::gui) fn pair_name(pair: &[AtomChoice; 2]) -> String {
    let one = |choice: &AtomChoice| choice.atom().map_or_else(|_| choice.pretty(), |atom| atom.pretty());
    format!("{}{}", one(&pair[0]), one(&pair[1]))
}

/// A menu with the pairs that are near, and a field for any other.
fn add_ui(ui: &mut Ui, own: Option<&[AtomChoice; 2]>, pairs: &[[AtomChoice; 2]], out: &mut Vec<Command>) {
    let mut add = |pair: [AtomChoice; 2]| {
        let mut all = pairs.to_vec();
        all.push(pair);
        out.push(Command::SetIsotopologues(all));
    };
    let is_new = |pair: &[AtomChoice; 2]| {
        let same = |other: &[AtomChoice; 2]| pair_name(other) == pair_name(pair);
        !pairs.iter().any(same) && !own.is_some_and(same)
    };
    let look = Look::of(ui);
    let id = ui.scope_id().with("pair typed");
    let mut text: String = ui.data(|d| d.get_temp(id)).unwrap_or_default();
    ui.horizontal_wrapped(|ui| {
        ui.label(RichText::new("add").font(look::plain(look::SECONDARY)).color(look.dim));
        for pair in own.map(proposals).unwrap_or_default().into_iter().filter(is_new).take(PROPOSED) {
            let name = pair_name(&pair);
            let button = ui.button(name.as_str()).on_hover_text("Solve the same curve with these isotopes.");
            button.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, format!("Add {name}")));
            if button.clicked() {
                add(pair);
            }
        }
        let field = ui.add(TextEdit::singleline(&mut text).desired_width(84.0).hint_text("2H,35Cl"));
        field.widget_info(|| WidgetInfo::labeled(egui::Role::TextInput, true, "Pair of isotopes to add"));
        let parsed = parse_atoms(&text).and_then(|[a, b]| {
            a.atom()?;
            b.atom()?;
            Ok([a, b])
        });
        if field.lost_focus()
            && ui.input(|i| i.key_pressed(Key::Enter))
            && let Ok(pair) = parsed.clone()
        {
            text.clear();
            if is_new(&pair) {
                add(pair);
            }
        }
        let words = match &parsed {
            Err(error) if !text.is_empty() => error.to_string(),
            _ => "Two isotopes with a comma between, then Enter: 2H,35Cl.".to_owned(),
        };
        field.on_hover_text(words);
        ui.data_mut(|d| d.insert_temp(id, text.clone()));
    });
}

/// The pairs of natural isotopes of the same elements, the most abundant first; deuterium and tritium among those of
/// hydrogen.
fn proposals(own: &[AtomChoice; 2]) -> Vec<[AtomChoice; 2]> {
    let of = |choice: &AtomChoice| -> Vec<(f64, AtomChoice)> {
        let natural = isotopes_of(&choice.symbol).iter();
        natural
            .filter_map(|i| {
                let share = i.abundance_percent.filter(|a| *a > 0.0);
                // Tritium is rare and is made.
                let share = share.or((choice.symbol == "H" && i.mass_number == 3).then_some(1e-9))?;
                let mass_number = Some(i.mass_number);
                Some((share, AtomChoice { symbol: choice.symbol.clone(), mass_number }))
            })
            .collect()
    };
    let (first, second) = (of(&own[0]), of(&own[1]));
    let mut all: Vec<(f64, [AtomChoice; 2])> = first
        .iter()
        .flat_map(|(a, x)| second.iter().map(move |(b, y)| (a * b, [x.clone(), y.clone()])))
        .collect();
    // Of two like elements each pair comes once.
    if own[0].symbol == own[1].symbol {
        all.retain(|(_, [x, y])| x.mass_number <= y.mass_number);
    }
    all.sort_by(|a, b| b.0.total_cmp(&a.0));
    all.into_iter().map(|(_, pair)| pair).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_most_abundant_pairs_are_proposed_each_once() {
        let pair = |text: &str| parse_atoms(text).expect("a pair");
        let names: Vec<String> = proposals(&pair("H,H")).iter().map(pair_name).collect();
        assert_eq!(names, ["¹H¹H", "¹H²H", "²H²H", "¹H³H", "²H³H", "³H³H"]);
        let names: Vec<String> = proposals(&pair("Li,H")).iter().map(pair_name).collect();
        assert_eq!(names[..3], ["⁷Li¹H", "⁶Li¹H", "⁷Li²H"]);
    }
}
