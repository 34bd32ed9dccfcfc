//! Rotation, the limit and isotopes in the window: chosen by label, seen on the plot and in the tables, undone.

use crate::harness::{Window, open_sample, press, state};
use eframe::egui::accesskit::Role;
use eframe::egui::{Key, Modifiers};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::export::compare::Form;
use parabound::gui::command::Command;
use parabound::gui::sheets::page_text;
use parabound::gui::state::{LevelsPart, Page};
use parabound::study::rotating_levels;

fn give(window: &mut Window, command: Command) {
    let ctx = window.ctx.clone();
    window.state_mut().0.give(command, &ctx);
    window.run();
}

fn type_into(window: &mut Window, name: &str, text: &str) {
    window.get_by_role_and_label(Role::TextInput, name).focus();
    window.run();
    window.key_press_modifiers(Modifiers::COMMAND, Key::A);
    window.get_by_role_and_label(Role::TextInput, name).type_text(text);
    window.run();
    window.key_press(Key::Enter);
    window.run();
}

#[test]
fn a_j_is_chosen_and_its_levels_stand_on_the_plot_and_in_the_table() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Levels));
    window.get_by_role_and_label(Role::SpinButton, "J shown").set_value_accesskit(20.0);
    window.run();
    assert_eq!(state(&window).view.j, 20);
    let findings = state(&window).study().expect("a study").findings.clone();
    let wanted = rotating_levels(&findings, 20).expect("levels");
    let quasi = wanted.quasi_bound.first().expect("a quasi-bound level");
    // The list of the picture has the bound and the quasi-bound levels of this J.
    let list = window.get_by_role_and_label(Role::List, "Levels of the picture");
    let told: Vec<String> = list.children().filter_map(|n| n.accesskit_node().label()).collect();
    let quasi_told = told.iter().filter(|l| l.starts_with("Quasi-bound level v =")).count();
    assert_eq!(quasi_told, wanted.quasi_bound.len());
    assert_eq!(told.iter().filter(|l| l.starts_with("Level v =")).count(), wanted.levels.len());
    // The table names energy, width and lifetime; a click keeps the level shown.
    let start = format!("Quasi-bound level v = {}, J = 20", quasi.v);
    let row = window.get(by().role(Role::Button).label_contains(&start));
    let label = row.accesskit_node().label().unwrap_or_default();
    assert!(label.contains("width Γ") && label.contains("lifetime"), "{label}");
    row.click();
    window.run();
    assert_eq!(state(&window).shown_level(), Some(quasi.v));
    // Down leads to the highest bound level; J walks with Alt.
    give(&mut window, Command::StepLevel(-1));
    assert_eq!(state(&window).view.pinned_level, wanted.levels.last().map(|l| l.v));
    window.key_press_modifiers(Modifiers::ALT, Key::ArrowUp);
    window.run();
    assert_eq!((state(&window).view.j, state(&window).rotation().map(|r| r.0.j)), (21, Some(21)));
    press(&mut window, "without rotation");
    assert!(state(&window).rotation().is_none());
    assert!(state(&window).history.undo_name().is_none(), "looking changes nothing");
}

#[test]
fn lambda_shifts_the_levels_and_is_undone() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Levels));
    give(&mut window, Command::ShowJ(1));
    let lowest = |window: &Window| state(window).rotation().map(|(r, _)| r.levels[0].energy_per_cm);
    let before = lowest(&window).expect("a level");
    window.get_by_role_and_label(Role::SpinButton, "Λ of the electronic state").set_value_accesskit(1.0);
    window.run();
    // J(J + 1) − Λ² falls from 2 to 1: the level by B_v = 7.28 cm⁻¹ [LiH, B_0 = 7.406 less, of this curve].
    let b_0 = state(&window).study().expect("a study").findings.levels[0].b_v_per_cm;
    let after = lowest(&window).expect("a level");
    assert!((before - after - b_0).abs() < 0.02, "{before} {after} {b_0}");
    // J = 0 does not exist with Λ = 1, but the levels without rotation stay.
    give(&mut window, Command::SetLambda(3));
    assert!(state(&window).rotation().is_none(), "J begins at Λ");
    give(&mut window, Command::StepJ(1));
    assert_eq!(state(&window).view.j, 3);
    assert_eq!(state(&window).history.undo_name(), Some("change Λ"));
    press(&mut window, "Undo");
    let settings = &state(&window).document.focused().expect("a curve").2.levels;
    assert_eq!(settings.lambda, 0);
}

#[test]
fn the_j_of_the_study_are_typed_listed_fitted_and_undone() {
    let mut window = open_sample();
    give(&mut window, Command::ShowLevelsPart(LevelsPart::Rotation));
    type_into(&mut window, "J of the study", "5-2");
    assert!(state(&window).study().expect("a study").findings.quasi_bound.is_none(), "refused");
    type_into(&mut window, "J of the study", "5,10,20");
    let findings = state(&window).study().expect("a study").findings.clone();
    assert_eq!(findings.settings.levels.rotation, [5, 10, 20]);
    let table = findings.dunham_table.as_ref().expect("a table");
    let b_e = table.coefficients.iter().find(|y| (y.k, y.l) == (0, 1)).expect("Y_01").value_per_cm.value;
    let row = window.get(by().role(Role::Label).label_contains("Y₀₁ ≈ Bₑ"));
    let shown = row.accesskit_node().value().or(row.accesskit_node().label()).unwrap_or_default();
    assert!(shown.contains(&format!("{b_e:.3}")), "{shown}, {b_e}");
    let line = window.get(by().role(Role::Label).label_contains("v 0, J = 0"));
    let told = line.accesskit_node().value().or(line.accesskit_node().label()).unwrap_or_default();
    assert!(told.contains("J = 20"), "{told}");
    // The copy carries every digit of E(0, 20).
    let csv = page_text(state(&window), Form::Csv).expect("a table");
    let energy = findings.rotational_levels.iter().find(|l| l.v == 0 && l.j == 20).expect("a level");
    assert!(csv.contains(&energy.energy_per_cm.to_string()), "{csv}");
    assert_eq!(state(&window).history.undo_name(), Some("choose the J of the study"));
    press(&mut window, "Undo");
    assert!(state(&window).study().expect("a study").findings.quasi_bound.is_none());
}

#[test]
fn isotopes_are_added_and_taken_out_by_label() {
    let mut window = open_sample();
    give(&mut window, Command::ShowLevelsPart(LevelsPart::Isotopes));
    press(&mut window, "Add ⁷Li²H");
    type_into(&mut window, "Pair of isotopes to add", "6Li,2H");
    let findings = state(&window).study().expect("a study").findings.clone();
    assert_eq!(findings.isotopologues.len(), 2);
    // LiD: ω_e falls by the root of the masses, 1405.65 to 1054.80 cm⁻¹ [Huber & Herzberg 1979, from memory].
    let own = findings.constants.from_derivatives.as_ref().expect("constants").omega_e_per_cm.value;
    let ratio = findings.isotopologues[0].omega_e_per_cm / own;
    assert!((ratio - 1054.80 / 1405.65).abs() < 2e-3, "{ratio}");
    let text = page_text(state(&window), Form::Text).expect("a table");
    assert!(text.contains("shift ⁷Li²H / cm⁻¹") && text.contains("⁶Li²H"), "{text}");
    press(&mut window, "Take ⁷Li²H out");
    assert_eq!(state(&window).study().expect("a study").findings.isotopologues.len(), 1);
    press(&mut window, "Undo");
    press(&mut window, "Undo");
    press(&mut window, "Undo");
    assert!(state(&window).study().expect("a study").findings.isotopologues.is_empty());
}

#[test]
fn the_limit_shows_spacings_and_what_moves_with_the_tail() {
    let mut window = open_sample();
    give(&mut window, Command::ShowLevelsPart(LevelsPart::Limit));
    assert!(window.query(by().role(Role::Figure).label_contains("Spacings of the levels.")).is_some());
    press(&mut window, "Move the tail");
    let settings = |window: &Window| state(window).document.focused().expect("a curve").2.levels.clone();
    assert!(settings(&window).tail_sensitivity);
    assert_eq!(state(&window).history.undo_name(), Some("levels with moved tails"));
    let findings = state(&window).study().expect("a study").findings.clone();
    let trials = &findings.level_support.as_ref().expect("counted").sensitivity;
    let text = page_text(state(&window), Form::Text).expect("a table");
    assert_eq!(text.contains("Moved tails"), !trials.is_empty());
    press(&mut window, "Leave the tail");
    assert!(!settings(&window).tail_sensitivity);
    press(&mut window, "Undo");
    assert!(settings(&window).tail_sensitivity);
}

#[test]
fn every_page_is_copied_in_every_form() {
    let mut window = open_sample();
    for page in Page::ALL {
        give(&mut window, Command::ShowPage(page));
        let text = page_text(state(&window), Form::Text).expect("text");
        assert!(text.lines().count() > 3, "{page:?}: {text}");
        let csv = page_text(state(&window), Form::Csv).expect("CSV");
        assert!(!csv.contains(['−', '\u{2009}']) || csv.contains("E − Vₑ"), "{page:?}: {csv}");
        let latex = page_text(state(&window), Form::Latex).expect("LaTeX");
        let (begin, end) =
            (latex.matches(r"\begin{tabular}").count(), latex.matches(r"\end{tabular}").count());
        assert!(begin > 0 && begin == end, "{page:?}: {latex}");
        // What LaTeX cannot read without a package of its own does not come through.
        let odd: String = latex.chars().filter(|c| !c.is_ascii()).collect();
        assert!(odd.is_empty(), "{page:?}: {odd} in {latex}");
        press(&mut window, "Copy as LaTeX");
        let told = state(&window).view.message.as_ref().map(|m| m.text.clone());
        assert_eq!(told, Some(format!("{} copied.", page.name())));
    }
}

#[test]
fn the_picture_is_copied_as_it_is_seen() {
    let mut window = open_sample();
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::CopyPicture, &ctx);
    let mut copied = None;
    for _ in 0..4 {
        window.step();
        let commands = &window.output().platform_output.commands;
        let image = commands.iter().find_map(|c| match c {
            eframe::egui::OutputCommand::CopyImage(image) => Some(image.clone()),
            _ => None,
        });
        copied = copied.or(image);
    }
    let image = copied.expect("an image on the clipboard");
    assert!(image.size[0] > 1000 && image.size[1] > 700, "{:?}", image.size);
    let ground = image.pixels[0];
    assert!(image.pixels.iter().filter(|p| **p != ground).count() > 10_000, "it shows something");
    assert_eq!(state(&window).view.message.as_ref().map(|m| m.text.as_str()), Some("Picture copied."));
}
