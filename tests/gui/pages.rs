//! The page of temperature, and curves side by side.

use crate::harness::{Window, give, open_sample, press, state};
use eframe::egui::accesskit::Role;
use eframe::egui::{Key, Modifiers, vec2};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::export::compare::{Form, Quantity};
use parabound::gui::command::Command;
use parabound::gui::state::{Page, Reference};
use parabound::units::{EnergyUnit, LengthUnit};

/// What the page says of a quantity: its figures for the levels, the harmonic and the Morse picture.
fn figures(window: &Window, name: &str) -> Vec<f64> {
    let start = format!("{name} levels ");
    let node = window.get(by().role(Role::Label).label_contains(&start));
    let label = node.accesskit_node().value().unwrap_or_default();
    label.split_whitespace().filter_map(|word| word.parse().ok()).collect()
}

#[test]
fn the_page_of_temperature_follows_the_temperature() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Thermal));
    let cold = figures(&window, "q");
    assert_eq!(cold.len(), 3);
    // LiH at room temperature: almost all molecules are in v = 0.
    assert!(cold.iter().all(|q| (1.0..1.01).contains(q)), "{cold:?}");
    give(&mut window, Command::SetKelvin(2000.0));
    let hot = figures(&window, "q");
    assert!(hot[0] > 1.5, "{hot:?}");
    // The harmonic ladder is too wide, so its sum is too small; Morse comes closer.
    assert!(hot[1] < hot[0] && (hot[2] - hot[0]).abs() < (hot[1] - hot[0]).abs(), "{hot:?}");
    // A drag on the chart sets the temperature too.
    let chart = window.get(by().role(Role::Figure).label_contains("Chart of")).rect();
    window.hover_at(chart.center());
    window.run();
    window.drag_at(chart.center());
    window.run();
    window.hover_at(chart.center() + vec2(30.0, 0.0));
    window.run();
    window.drop_at(chart.center() + vec2(30.0, 0.0));
    window.run();
    let kelvin = state(&window).view.kelvin();
    assert!(kelvin > 500.0 && kelvin < 2000.0, "{kelvin}");
}

#[test]
fn curves_stand_side_by_side_with_differences_to_a_reference() {
    let mut window = open_sample();
    press(&mut window, "Compare …");
    // Both states of the sample are studied, not only the one in focus.
    for _ in 0..4 {
        window.run();
    }
    let results = &state(&window).results;
    assert_eq!(results.values().filter(|o| o.study.is_some()).count(), 2);
    let omega = |window: &Window, curve: &str| {
        let study = state(window).results.values().filter_map(|o| o.study.as_ref());
        let mut of = study.filter(|s| s.findings.source.curve_label == curve);
        Quantity::OmegaE.of(&of.next().expect("studied").findings).expect("a wavenumber").value
    };
    let difference = omega(&window, "E_A") - omega(&window, "E_X");
    window.get_by_role_and_label(Role::RadioButton, "Reference E_X").click();
    window.run();
    let row = window.get(by().role(Role::Button).label_contains("Curve E_A,"));
    let label = row.accesskit_node().label().unwrap_or_default();
    let shown = label.split(", ").find_map(|part| part.strip_prefix("ωₑ ")).expect("a difference");
    let shown: f64 = shown.split('(').next().unwrap().replace('−', "-").parse().expect("a number");
    assert!((shown - difference).abs() < 1.0, "{shown} {difference}");
    // Published constants, entered by hand; undone by name.
    give(&mut window, Command::SetPublished { quantity: Quantity::OmegaE, value: Some(1405.65) });
    give(&mut window, Command::SetReference(Some(Reference::Published)));
    assert_eq!(state(&window).history.undo_name(), Some("enter a published constant"));
    press(&mut window, "Copy as CSV");
    press(&mut window, "Undo");
    assert!(state(&window).document.published.iter().all(Option::is_none));
    // Sorted by a click on a heading; a click on a name shows the curve.
    window.get_by_role_and_label(Role::Button, "Sort by rₑ").click();
    window.run();
    assert_eq!(state(&window).view.comparison.sort, Some((Quantity::BondLength, false)));
    window.get(by().role(Role::Button).label_contains("Curve E_A,")).click();
    window.run();
    assert!(!state(&window).view.comparison.open);
    let focus = state(&window).document.focus.expect("a curve");
    assert_eq!(state(&window).document.curve_name(focus, false), "E_A");
    window.key_press_modifiers(Modifiers::ALT, Key::Num7);
    window.run();
    assert!(state(&window).view.comparison.open);
    give(&mut window, Command::CopyComparison(Form::Latex));
    assert_eq!(state(&window).view.message.as_ref().map(|m| m.text.as_str()), Some("Comparison copied."));
}

#[test]
fn densities_of_the_level_shown_are_compared() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Levels));
    give(&mut window, Command::PinLevel(Some(0)));
    let shares = |window: &Window| -> Vec<String> {
        let node = window.get(by().role(Role::Label).label_contains("forbidden, numerical"));
        let text = node.accesskit_node().value().unwrap_or_default();
        text.split(", ").skip(1).map(str::to_owned).collect()
    };
    let ground = shares(&window);
    // erfc(1) = 0.1573: the harmonic ground state beyond its turning points.
    assert_eq!(ground[1], "harmonic 15.7 %");
    assert_eq!(ground[3], "classical 0.0 %");
    assert!(ground[0].starts_with("numerical 15.") || ground[0].starts_with("numerical 16."), "{ground:?}");
    // The tails shrink as v grows.
    give(&mut window, Command::PinLevel(Some(8)));
    let percent = |text: &str| -> f64 { text.split_whitespace().nth(1).unwrap().parse().expect("a number") };
    assert!(percent(&shares(&window)[0]) < 0.6 * percent(&ground[0]), "{:?}", shares(&window));
    // A check box draws the classical density over the plot: the picture changes.
    let before = window.render().expect("painted");
    window.get_by_role_and_label(Role::CheckBox, "classical").click();
    window.run();
    assert!(state(&window).view.densities.classical);
    assert_ne!(window.render().expect("painted"), before);
}

#[test]
fn the_axes_show_other_units_and_displacements() {
    let mut window = open_sample();
    let before = window.render().expect("painted");
    window.get_by_role_and_label(Role::Button, "Unit of the energy axis").click();
    window.run();
    window.get_by_role_and_label(Role::RadioButton, "kJ/mol").click();
    window.run();
    assert_eq!(state(&window).view.axes.energy, EnergyUnit::KilojoulePerMole);
    window.get_by_role_and_label(Role::Button, "Unit of the bond-length axis").click();
    window.run();
    window.get_by_role_and_label(Role::RadioButton, "displacement / bohr").click();
    window.run();
    let axes = state(&window).view.axes;
    assert!(axes.displacement && axes.length == LengthUnit::Bohr);
    assert_ne!(window.render().expect("painted"), before);
    // Nothing of the study has changed by it.
    assert!(state(&window).history.undo_name().is_none());
}
