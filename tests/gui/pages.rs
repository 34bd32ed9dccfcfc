//! The page of temperature, and curves side by side.

use crate::harness::{Window, give, open_sample, press, state};
use eframe::egui::accesskit::Role;
use eframe::egui::{Key, Modifiers, vec2};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::export::compare::{Form, Quantity};
use parabound::figure::ThermalQuantity;
use parabound::gui::command::Command;
use parabound::gui::state::{Page, Reference, ThermalView};
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
    let chart = window.get(by().role(Role::Figure).label_contains("Chart of heat capacity")).rect();
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
    // And its handle, by assistive technology and by keyboard.
    let handle = "Temperature on the chart";
    window.get_by_role_and_label(Role::Slider, handle).set_value_accesskit(700.0);
    window.run();
    window.get_by_role_and_label(Role::Slider, handle).focus();
    window.run();
    window.key_press(Key::ArrowRight);
    window.run();
    assert_eq!(state(&window).view.kelvin(), 710.0);
}

/// Rotation doubles the classical heat capacity of a diatomic molecule; a symmetry number σ takes R ln σ from the entropy.
#[test]
fn rotation_is_summed_on_demand_with_the_ideal_gas_and_its_weights() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Thermal));
    give(&mut window, Command::SetKelvin(1000.0));
    let alone = figures(&window, "Cᵥ");
    assert!(window.query(by().role(Role::Label).label_contains("Cₚ ")).is_none());
    window.get_by_role_and_label(Role::CheckBox, "with rotation").click();
    window.run();
    assert_eq!(state(&window).history.undo_name(), Some("change the thermal sums"));
    let both = figures(&window, "Cᵥ");
    const R: f64 = 8.314_462_618;
    // The stretching of a rotor, which a rigid one lacks, adds 4 D k_BT/B² R = 0.04 R with B = 7.51 and D = 8.6e-4 cm⁻¹
    // [Huber & Herzberg 1979]; the levels' own B(v) as much again.
    assert!((0.02..0.12).contains(&((both[0] - alone[0]) / R - 1.0)), "{alone:?} {both:?}");
    assert!((both[1] - alone[1] - R).abs() < 1e-3 * R, "{alone:?} {both:?}");
    let value = |window: &Window, row: &str| -> f64 {
        let node = window.get(by().role(Role::Label).label_contains(row));
        let text = node.accesskit_node().value().unwrap_or_default();
        text.trim_start_matches(row).split_whitespace().next().unwrap().parse().expect("a number")
    };
    let capacity = value(&window, "Cₚ ");
    assert!((capacity - both[0] - 2.5 * R).abs() < 2e-3, "{capacity}");
    let before = state(&window).study().expect("a study").findings.thermal_at(&[1000.0])[0].clone();
    let gas = before.rotating.and_then(|r| r.ideal_gas).expect("a gas");
    let shown = format!("S {:.3}", gas.entropy_joule_per_mole_kelvin);
    assert!(window.query(by().role(Role::Label).label_contains(&shown)).is_some(), "{shown}");
    let mut thermal = state(&window).document.focused().expect("a curve").2.thermal.clone();
    thermal.symmetry_number = Some(2);
    give(&mut window, Command::SetThermal(thermal.clone()));
    let shown = format!("S {:.3}", gas.entropy_joule_per_mole_kelvin - R * 2_f64.ln());
    assert!(window.query(by().role(Role::Label).label_contains(&shown)).is_some(), "{shown}");
    assert!(window.query(by().role(Role::SpinButton).label("Symmetry number")).is_some());
    // Nonsense changes nothing.
    thermal.spin_weights = Some([-1.0, 0.0]);
    give(&mut window, Command::SetThermal(thermal));
    assert_eq!(state(&window).document.focused().expect("a curve").2.thermal.spin_weights, None);
    press(&mut window, "Undo");
    press(&mut window, "Undo");
    assert_eq!(figures(&window, "Cᵥ"), alone);
}

#[test]
fn the_density_at_the_temperature_stands_on_the_plot_while_its_page_is_open() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Thermal));
    let cold = window.render().expect("painted");
    give(&mut window, Command::SetKelvin(2500.0));
    let inside = |window: &Window| -> f64 {
        let node = window.get(by().role(Role::Label).label_contains("density in reach"));
        let text = node.accesskit_node().value().unwrap_or_default();
        let share = text.split_whitespace().find_map(|word| word.parse().ok());
        share.expect("a share")
    };
    let hot = inside(&window);
    assert_ne!(window.render().expect("painted"), cold);
    give(&mut window, Command::SetKelvin(50.0));
    // When cold all molecules are in v = 0, whose share the levels' page has.
    let ground = state(&window).study().expect("a study").findings.levels[0].inside_reach.expect("a share");
    assert!((inside(&window) - 100.0 * ground).abs() < 0.11, "{} {ground}", inside(&window));
    assert!(hot < 0.9 * inside(&window));
    let with = window.render().expect("painted");
    window.get_by_role_and_label(Role::CheckBox, "density on the plot").click();
    window.run();
    assert!(!state(&window).view.shows_thermal_density());
    assert_ne!(window.render().expect("painted"), with);
}

#[test]
fn every_quantity_is_drawn_over_temperature() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Thermal));
    for quantity in ThermalQuantity::ALL {
        let view = state(&window).view.thermal;
        give(&mut window, Command::SetThermalView(ThermalView { quantity, ..view }));
        let chart = format!("Chart of {}", quantity.name());
        let node = window.get(by().role(Role::Figure).label_contains(&chart));
        let label = node.accesskit_node().label().unwrap_or_default();
        for line in ["numerical", "harmonic", "Morse fit"] {
            assert!(label.contains(line), "{label}");
        }
        let off = window.query_all(by().role(Role::Figure).label_contains("Chart of off in")).count();
        assert_eq!(off, 1, "{quantity:?}");
    }
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
