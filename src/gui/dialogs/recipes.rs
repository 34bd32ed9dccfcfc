//! Curves made from columns: sums with factors, basis-set limits.

use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::reading::ReadingCommand;
use crate::gui::show;
use crate::gui::state::State;
use crate::scan::Scan;
use crate::scan::combine::Recipe;
use crate::scan::read::ReadSettings;
use eframe::egui;
use egui::{RichText, ScrollArea, TextEdit, Ui, WidgetInfo};

/// Scans with more values are tried only when the curve is asked for.
const TRIED_AT_ONCE: usize = 20_000;

/// The recipes in force, and a line for a new one.
pub(super) fn recipes_ui(
    ui: &mut Ui,
    state: &State,
    scan: &Scan,
    read: &mut ReadSettings,
    out: &mut Vec<Command>,
) {
    let look = Look::of(ui);
    show::heading(ui, "Curves made from columns", "");
    let mut dropped = None;
    ScrollArea::vertical().id_salt("recipes").max_height(64.0).show(ui, |ui| {
        for (index, recipe) in read.made.iter().enumerate() {
            ui.horizontal(|ui| {
                ui.label(RichText::new(recipe.text()).font(look::figures(look::SECONDARY)));
                let button =
                    ui.add(egui::Button::new(RichText::new("remove").color(look.accent)).frame(false));
                button.widget_info(|| {
                    WidgetInfo::labeled(egui::Role::Button, true, format!("Remove the curve {}", recipe.name))
                });
                if button.clicked() {
                    dropped = Some(index);
                }
            });
        }
    });
    if let Some(index) = dropped {
        read.made.remove(index);
    }
    let text = &state.view.reading.recipe;
    let recipe = checked(text, scan, &read.made);
    ui.horizontal(|ui| {
        let label = ui.label(RichText::new("recipe").color(look.dim));
        let mut typed = text.clone();
        let hint = "difference = A - B,  corrected = A + 0.5*B,  limit = corr2(A,B; 3,4)";
        let field = TextEdit::singleline(&mut typed).desired_width(430.0).hint_text(hint);
        let field = ui.add(field.font(look::figures(look::SECONDARY))).labelled_by(label.id);
        if field.changed() {
            out.push(Command::Reading(ReadingCommand::TypeRecipe(typed)));
        }
        let ready = recipe.as_ref().is_ok();
        let make = ui.add_enabled(ready, egui::Button::new("Make"));
        let entered = field.lost_focus() && ui.input(|i| i.key_pressed(egui::Key::Enter));
        if let Ok(recipe) = &recipe
            && (make.clicked() || entered)
        {
            read.made.push(recipe.clone());
            out.push(Command::Reading(ReadingCommand::TypeRecipe(String::new())));
        }
        make.on_disabled_hover_text("Write NAME = and columns with factors, or a limit of columns.");
    });
    match recipe {
        Err(problem) if !text.trim().is_empty() => {
            ui.label(RichText::new(problem).font(look::plain(look::SMALL)).color(look.stop));
        }
        _ => {
            show::note(
                ui,
                "A recipe is a sum of columns with factors, constants with a unit, or a limit: hf3, hf2, corr2.",
            );
        }
    }
}

/// The recipe, if it can be carried out on this scan.
fn checked(text: &str, scan: &Scan, made: &[Recipe]) -> Result<Recipe, String> {
    let recipe = Recipe::parse(text).map_err(|e| e.to_string())?;
    if made.iter().any(|known| known.name == recipe.name) {
        return Err(format!("there is a curve {} already", recipe.name));
    }
    if scan.energies.len() * scan.bond_lengths.len() <= TRIED_AT_ONCE {
        scan.clone().with_made(&recipe).map_err(|e| e.to_string())?;
    }
    Ok(recipe)
}
