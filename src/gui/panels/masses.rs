//! The two atoms, their charge, or a reduced mass given directly.

use super::left::settle;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show;
use crate::gui::state::State;
use crate::settings::Settings;
use crate::species::{AtomChoice, isotopes_of};
use eframe::egui;
use egui::{Align2, DragValue, RichText, ScrollArea, Sense, Stroke, Ui, WidgetInfo, vec2};

pub(super) fn masses_ui(ui: &mut Ui, state: &State, settings: &Settings, out: &mut Vec<Command>) {
    show::heading(ui, "Masses", "");
    let look = Look::of(ui);
    let direct = settings.masses.reduced_mass_u.is_some();
    let atoms = atoms_in_force(state);
    if !direct {
        let row = ui.horizontal(|ui| {
            for index in 0..2 {
                let response = atom_ui(ui, index, atoms.as_ref(), out);
                if index == 0 {
                    focus_once(ui, &response, state.view.atoms_asked);
                }
            }
        });
        if state.view.atoms_wanted && atoms.is_none() {
            let rect = row.response.rect.expand(3.0);
            ui.painter().rect_stroke(
                rect,
                f32::from(look::CORNER) + 2.0,
                Stroke::new(1.5, look.accent),
                egui::StrokeKind::Inside,
            );
            show::note(ui, "Choose both atoms here, or give the reduced mass below.");
        }
        charge_ui(ui, state, settings, out);
    }
    let mass = state.study().and_then(|s| s.findings.masses.as_ref()).map(|m| m.reduced_mass_u.value);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 22.0), Sense::hover());
    let value = mass.map_or_else(|| number::NONE.to_owned(), |m| format!("{} u", number::fixed(m, 6)));
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, format!("reduced mass {value}")));
    show::text_in(
        ui,
        rect.left_center(),
        Align2::LEFT_CENTER,
        "reduced mass",
        &look::plain(look::SECONDARY),
        look.dim,
    );
    show::text_in(
        ui,
        rect.right_center(),
        Align2::RIGHT_CENTER,
        &value,
        &look::figures(look::SECONDARY),
        look.text,
    );
    response.on_hover_text(
        "m₁m₂/(m₁ + m₂) of the neutral atoms; for an ion less the missing electrons [Watson 1980].",
    );
    direct_mass_ui(ui, settings, mass, out);
}

/// The atoms named by the user, or else by the file.
fn atoms_in_force(state: &State) -> Option<[AtomChoice; 2]> {
    let (_, loaded, settings) = state.document.focused()?;
    settings.masses.atoms.clone().or_else(|| loaded.scan.atoms.clone())
}

/// Moves the focus here once for every time it was asked for, and scrolls here.
fn focus_once(ui: &Ui, response: &egui::Response, asked: u32) {
    let id = response.id.with("asked");
    if asked != ui.data(|d| d.get_temp(id).unwrap_or(0)) {
        ui.data_mut(|d| d.insert_temp(id, asked));
        response.request_focus();
        response.scroll_to_me(None);
    }
}

/// One atom: its isotope, and in the menu the other isotopes and elements.
fn atom_ui(
    ui: &mut Ui,
    index: usize,
    atoms: Option<&[AtomChoice; 2]>,
    out: &mut Vec<Command>,
) -> egui::Response {
    let name = ["First atom", "Second atom"][index];
    let choice = atoms.map(|a| &a[index]);
    let text = choice.map_or_else(|| "choose …".to_owned(), isotope_text);
    let button = egui::Button::new(RichText::new(&text).font(look::figures(look::SECONDARY)))
        .min_size(vec2(84.0, 26.0));
    let (response, _) = egui::containers::menu::MenuButton::from_button(button).ui(ui, |ui| {
        ui.set_min_width(190.0);
        let mut pick = |ui: &mut Ui, picked: AtomChoice| {
            let hydrogen = || AtomChoice { symbol: "H".to_owned(), mass_number: None };
            let mut pair = atoms.cloned().unwrap_or_else(|| [hydrogen(), hydrogen()]);
            pair[index] = picked;
            out.push(Command::SetAtoms(pair));
            ui.close();
        };
        if let Some(choice) = choice {
            isotopes_ui(ui, choice, &mut pick);
            ui.separator();
        }
        element_ui(ui, index, &mut pick);
    });
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, format!("{name} {text}")));
    response.on_hover_text(format!("{name}: choose its isotope, or another element."))
}

fn isotope_text(choice: &AtomChoice) -> String {
    match choice.atom() {
        Ok(atom) => format!("{}{}", number::superscript(atom.mass_number), atom.symbol),
        Err(_) => choice.symbol.clone(),
    }
}

/// Isotopes that occur in nature, and those next to them by mass.
fn isotopes_ui(ui: &mut Ui, choice: &AtomChoice, pick: &mut impl FnMut(&mut Ui, AtomChoice)) {
    let all = isotopes_of(&choice.symbol);
    let natural = || all.iter().filter(|i| i.abundance_percent.is_some_and(|a| a > 0.0));
    let lowest = natural().map(|i| i.mass_number).min().unwrap_or(0);
    let highest = natural().map(|i| i.mass_number).max().unwrap_or(u32::MAX);
    let chosen = choice.atom().ok().map(|a| a.mass_number);
    ScrollArea::vertical().max_height(260.0).show(ui, |ui| {
        for isotope in
            all.iter().filter(|i| i.mass_number >= lowest && i.mass_number <= highest.saturating_add(1))
        {
            let share = isotope
                .abundance_percent
                .map_or_else(|| "traces or none".to_owned(), |a| format!("{} %", number::fixed(a, 2)));
            let text = format!("{}{}   {share}", number::superscript(isotope.mass_number), isotope.symbol);
            if ui.selectable_label(chosen == Some(isotope.mass_number), text).clicked() {
                let picked =
                    AtomChoice { symbol: choice.symbol.clone(), mass_number: Some(isotope.mass_number) };
                pick(ui, picked);
            }
        }
    });
}

/// A field for another element.
fn element_ui(ui: &mut Ui, index: usize, pick: &mut impl FnMut(&mut Ui, AtomChoice)) {
    let id = ui.scope_id().with(("element", index));
    let mut text: String = ui.data(|d| d.get_temp(id)).unwrap_or_default();
    let label = ui.label("Other, such as Cl or 2H");
    let field = ui.add(egui::TextEdit::singleline(&mut text).desired_width(170.0)).labelled_by(label.id);
    let parsed = AtomChoice::parse(&text);
    if !text.trim().is_empty()
        && let Err(error) = &parsed
    {
        show::note(ui, &error.to_string());
    }
    if field.lost_focus()
        && ui.input(|i| i.key_pressed(egui::Key::Enter))
        && let Ok(choice) = parsed
    {
        text.clear();
        pick(ui, choice);
    }
    ui.data_mut(|d| d.insert_temp(id, text));
}

fn charge_ui(ui: &mut Ui, state: &State, settings: &Settings, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new("charge").font(look::plain(look::SECONDARY)).color(look.dim));
        let of_file = state.document.focused().and_then(|(_, loaded, _)| loaded.scan.charge);
        let mut charge = settings.masses.charge.or(of_file).unwrap_or(0);
        let field = DragValue::new(&mut charge)
            .range(-4..=4)
            .speed(0.05)
            .custom_formatter(|v, _| number::signed(v, 0));
        let response = ui.add(field).labelled_by(label.id);
        if response.changed() {
            out.push(Command::SetCharge(Some(charge)));
        }
        settle(&response, out);
    });
}

fn direct_mass_ui(ui: &mut Ui, settings: &Settings, mass: Option<f64>, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let given = settings.masses.reduced_mass_u;
    ui.horizontal(|ui| {
        let mut direct = given.is_some();
        let text = RichText::new("given directly").font(look::plain(look::SECONDARY)).color(look.dim);
        if ui.checkbox(&mut direct, text).changed() {
            out.push(Command::SetReducedMass(direct.then(|| mass.unwrap_or(1.0))));
            out.push(Command::Settle);
        }
        if let Some(mut value) = given {
            let field =
                DragValue::new(&mut value).range(1e-4..=300.0).speed(0.001).max_decimals(8).suffix(" u");
            let response = ui.add(field);
            response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Reduced mass"));
            if response.changed() {
                out.push(Command::SetReducedMass(Some(value)));
            }
            settle(&response, out);
        }
    });
}
