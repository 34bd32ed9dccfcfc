//! Gauge, ladders and densities that stay: what the hand does there changes what is said.

use crate::harness::{Window, drag, give, open_sample, press, state};
use eframe::egui::accesskit::Role;
use eframe::egui::{Key, Modifiers, vec2};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::figure::GaugeMeasure;
use parabound::fit::Family;
use parabound::gui::command::Command;
use parabound::gui::plot::GAUGE_MENU;
use parabound::gui::state::{Page, Strip};
use parabound::reach::AbsoluteTolerance;
use parabound::units::{ANGSTROM_PER_BOHR, EnergyUnit, ForceConstantUnit};

const TOLERANCE: &str = "Tolerance of the reach in percent";

/// Drags the grip of a tolerance upwards (negative: downwards) by points of the screen.
fn drag_tolerance(window: &mut Window, name: &str, up: f32) {
    let line = window.get_by_role_and_label(Role::Slider, name).rect();
    let grip = line.right_center() - vec2(26.0, 0.0);
    drag(window, grip, grip - vec2(0.0, up));
}

fn value(window: &Window, name: &str) -> f64 {
    let node = window.get_by_role_and_label(Role::Slider, name);
    node.accesskit_node().numeric_value().expect("a slider has a value")
}

/// The reach by the measure in angstrom.
fn ends(window: &Window, measure: GaugeMeasure) -> (f64, f64) {
    let reach = state(window).study().expect("a study").findings.reach.clone().expect("a reach");
    let interval = match measure {
        GaugeMeasure::EnergyPercent => reach.energy,
        GaugeMeasure::EnergyPerCm => reach.absolute,
        GaugeMeasure::ForcePercent | GaugeMeasure::ForcePerCmAngstrom => reach.force,
    };
    let end = |x: Option<f64>| x.expect("an end inside the scan") * ANGSTROM_PER_BOHR;
    (end(interval.x_minus_bohr), end(interval.x_plus_bohr))
}

#[test]
fn dragging_the_tolerance_changes_reach_sentence_and_mark_of_the_ladders() {
    let mut window = open_sample();
    let seen = |window: &Window| {
        let pictures = &state(window).study().expect("a study").pictures;
        (
            ends(window, GaugeMeasure::EnergyPercent),
            pictures.sentence.text.clone(),
            pictures.ladders.first_outside,
        )
    };
    let (reach, sentence, mark) = seen(&window);
    assert!(sentence.contains("5 %"), "{sentence}");
    drag_tolerance(&mut window, TOLERANCE, -9.0);
    let percent = value(&window, TOLERANCE);
    assert!((0.5..3.5).contains(&percent), "{percent}");
    let (narrower, said, earlier) = seen(&window);
    assert!(narrower.1 < 0.8 * reach.1 && narrower.0 > 0.8 * reach.0, "{reach:?} {narrower:?}");
    assert!(!said.contains("5 %,") && said != sentence, "{said}");
    // LiH: harmonic minus numerical is about ω_e x_e (v + ½)², 6, 52 and 145 cm⁻¹ with ω_e x_e = 23 cm⁻¹ [Huber &
    // Herzberg 1979], against 70 cm⁻¹ at 5 % of ω_e = 1406 cm⁻¹ and less than 50 cm⁻¹ now.
    assert_eq!((mark, earlier), (Some(2), Some(1)));
    // What is on the screen is said there.
    assert!(window.query(by().role(Role::Label).label_contains(said.split(';').next().unwrap())).is_some());
    press(&mut window, "Undo");
    assert_eq!(seen(&window), (reach, sentence, mark));
}

#[test]
fn the_gauge_measures_energy_and_force_in_percent_and_in_units() {
    let mut window = open_sample();
    let mut pictures = Vec::new();
    for (_, measure) in GaugeMeasure::ALL {
        press(&mut window, GAUGE_MENU);
        window.get_by_role_and_label(Role::RadioButton, &Command::ShowGauge(measure).label()).click();
        window.run();
        assert_eq!(state(&window).view.gauge, measure);
        pictures.push(window.render().expect("painted"));
        let (from, to) = ends(&window, measure);
        assert!(from < 0.0 && to > 0.0);
    }
    assert!((1..4).all(|i| pictures[..i].iter().all(|p| *p != pictures[i])), "each has a picture of its own");
    // Another unit of the energy axis is another unit of the gauge.
    give(&mut window, Command::ShowGauge(GaugeMeasure::EnergyPerCm));
    let mut axes = state(&window).view.axes;
    axes.energy = EnergyUnit::KilojoulePerMole;
    let before = window.render().expect("painted");
    give(&mut window, Command::SetAxes(axes));
    assert_ne!(window.render().expect("painted"), before);
    // From the residuals a measure leads back to the gauge.
    give(&mut window, Command::ShowStrip(Strip::Residuals));
    give(&mut window, Command::ShowGauge(GaugeMeasure::ForcePercent));
    assert_eq!(state(&window).view.strip, Strip::Gauge);
}

#[test]
fn the_absolute_tolerance_is_dragged_in_its_own_unit() {
    let mut window = open_sample();
    give(&mut window, Command::ShowGauge(GaugeMeasure::EnergyPerCm));
    let name = "Absolute tolerance of the reach in kcal/mol";
    assert_eq!(value(&window, name), 1.0);
    let before = ends(&window, GaugeMeasure::EnergyPerCm);
    let relative = ends(&window, GaugeMeasure::EnergyPercent);
    drag_tolerance(&mut window, name, 10.0);
    assert!(value(&window, name) > 1.2, "{}", value(&window, name));
    let after = ends(&window, GaugeMeasure::EnergyPerCm);
    assert!(after.0 < before.0 && after.1 > before.1, "{before:?} {after:?}");
    assert_eq!(ends(&window, GaugeMeasure::EnergyPercent), relative, "the relative one stands");
    assert_eq!(state(&window).history.undo_name(), Some("change the absolute tolerance"));
    press(&mut window, "Undo");
    assert_eq!(ends(&window, GaugeMeasure::EnergyPerCm), before);
    // In another unit the handle has that unit; by keyboard in steps.
    let tolerance = AbsoluteTolerance { value: 100.0, unit: EnergyUnit::PerCm };
    give(&mut window, Command::SetAbsoluteTolerance { tolerance, resting: true });
    let name = "Absolute tolerance of the reach in cm⁻¹";
    window.get_by_role_and_label(Role::Slider, name).focus();
    window.run();
    window.key_press(Key::ArrowUp);
    window.run();
    assert_eq!(value(&window, name), 105.0);
    // The tolerance of a force in its unit grows with x: there is no one line to drag.
    give(&mut window, Command::ShowGauge(GaugeMeasure::ForcePerCmAngstrom));
    let sliders = window.query_all(by().role(Role::Slider).label_contains("olerance of the reach"));
    assert_eq!(sliders.count(), 0);
}

#[test]
fn several_densities_stay_on_the_plot_and_are_let_go_together() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Levels));
    give(&mut window, Command::PinLevel(Some(0)));
    let one = window.render().expect("painted");
    let row = |v: usize| format!("Level v = {v}:");
    window.get(by().role(Role::Button).label_contains(&row(3))).click_modifiers(Modifiers::SHIFT);
    window.run();
    give(&mut window, Command::KeepLevel(5, true));
    window.hover_at(eframe::egui::pos2(5.0, 5.0));
    window.run();
    assert_eq!(state(&window).outstanding(), [0, 3, 5]);
    assert_ne!(window.render().expect("painted"), one);
    // The check box beside the figures keeps the level shown too.
    window.get_by_role_and_label(Role::CheckBox, "keep v = 0").click();
    window.run();
    give(&mut window, Command::PinLevel(Some(1)));
    assert_eq!(state(&window).outstanding(), [1, 0, 3, 5]);
    // A level that is not there is not kept.
    give(&mut window, Command::KeepLevel(4000, true));
    assert_eq!(state(&window).outstanding().len(), 4);
    window.key_press(Key::Escape);
    window.run();
    assert!(state(&window).outstanding().is_empty());
}

#[test]
fn a_rung_tells_its_difference_in_wavenumbers_and_in_percent_of_the_spacing() {
    let mut window = open_sample();
    let plot = window.get(by().role(Role::Figure).label_contains("Plot of")).rect();
    let bounds = state(&window).bounds().expect("bounds");
    let (harmonic, level, next) = {
        let study = state(&window).study().expect("a study");
        let levels = &study.findings.levels;
        (
            study.pictures.ladders.columns[0].energies_per_cm[2],
            levels[2].energy_per_cm,
            levels[3].energy_per_cm,
        )
    };
    let y = plot.bottom() - plot.height() * ((harmonic - bounds.y.0) / (bounds.y.1 - bounds.y.0)) as f32;
    // The first ladder begins right of the numbers of the levels.
    window.hover_at(eframe::egui::pos2(plot.right() + 32.0, y));
    for _ in 0..60 {
        window.step();
    }
    let says = |text: &str| window.query_all(by().role(Role::Label).label_contains(text)).count() > 0;
    let off = harmonic - level;
    assert!(says(&format!("+{off:.2} cm⁻¹")), "{off}");
    assert!(says(&format!("+{:.2} %", 100.0 * off / (next - level))));
    assert!(says("percent of the numerical spacing 3 ← 2"));
}

/// LiH: k = 102.6 N/m by ω_e = 1405.65 cm⁻¹ [Huber & Herzberg 1979] and μ = 0.8812 u; 1 kcal/(mol Å²) = 0.6948 N/m.
#[test]
fn the_page_of_the_reach_serves_force_fields_and_tells_where_fits_hold() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Reach));
    let text = |window: &Window, start: &str| -> String {
        let node = window.get(by().role(Role::Label).label_contains(start));
        node.accesskit_node().value().unwrap_or_default()
    };
    let number = |text: &str, start: &str| -> f64 {
        let rest = text.trim_start_matches(start).trim_start();
        rest.split(['(', ' ']).next().unwrap().parse().expect("a number")
    };
    let mut units = state(&window).view.parameter_units;
    units.force_constant = ForceConstantUnit::KilocaloriePerMoleAngstrom2;
    give(&mut window, Command::SetParameterUnits(units));
    let [half, full] = ["V = ½ k x²", "V = k x²"].map(|name| {
        let text = text(&window, name);
        assert!(text.contains("kcal/(mol Å²)"), "{text}");
        number(&text, name)
    });
    // The sample's level of theory is 1.3 % below in ω_e, twice that in k.
    assert!((half / (102.6 / 0.6948) - 1.0).abs() < 0.04, "{half}");
    assert!((full - 0.5 * half).abs() < 0.01, "{half} {full}");
    // The absolute tolerance in another unit is the same energy, until its number is changed.
    assert!(text(&window, "within 1 kcal/mol").contains('…'));
    let before = ends(&window, GaugeMeasure::EnergyPerCm);
    let tolerance = AbsoluteTolerance { value: 4.184, unit: EnergyUnit::KilojoulePerMole };
    give(&mut window, Command::SetAbsoluteTolerance { tolerance, resting: true });
    assert!(text(&window, "within 4.184 kJ/mol").contains('…'));
    let after = ends(&window, GaugeMeasure::EnergyPerCm);
    assert!((before.1 - after.1).abs() < 1e-9, "{before:?} {after:?}");
    // Morse holds farther than the parabola: all fits are listed with an interval.
    let study = state(&window).study().expect("a study");
    let outer = |family| {
        let fit = study.findings.fits.iter().find(|f| f.request.family == family).expect("a fit");
        fit.reach.and_then(|r| r.interval).and_then(|i| i.x_plus_bohr)
    };
    let (harmonic, morse) = (outer(Family::Harmonic).expect("an end"), outer(Family::Morse));
    assert!(morse.is_none_or(|m| m > 2.0 * harmonic), "{harmonic} {morse:?}");
    for name in ["Harmonic", "Morse", "Polynomial 6"] {
        let listed = window.query_all(by().role(Role::Label).label_contains(name));
        assert!(listed.count() > 0, "{name}");
    }
}

#[test]
fn levels_and_spacings_have_tolerances_of_their_own() {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Reach));
    let highest = |window: &Window| {
        let reach = state(window).study().expect("a study").findings.reach.clone().expect("a reach");
        let (levels, spacing) = (reach.levels.expect("levels"), reach.spacing.expect("spacings"));
        [levels.highest_v, spacing.highest_v]
    };
    let before = highest(&window);
    let (tolerance_per_cm, resting) = (Some(300.0), true);
    give(&mut window, Command::SetLevelTolerance { tolerance_per_cm, resting });
    let levels = highest(&window);
    assert!(levels[0] > before[0] && levels[1] == before[1], "{before:?} {levels:?}");
    give(&mut window, Command::SetSpacingTolerance { tolerance_per_cm, resting });
    assert!(highest(&window)[1] > before[1]);
    // A button leads back to the default; nonsense changes nothing.
    give(&mut window, Command::SetSpacingTolerance { tolerance_per_cm: Some(-1.0), resting });
    for name in ["levels", "spacings"] {
        press(&mut window, &format!("Default tolerance of the {name}"));
    }
    assert_eq!(highest(&window), before);
    assert_eq!(state(&window).history.undo_name(), Some("change the tolerance of spacings"));
}
