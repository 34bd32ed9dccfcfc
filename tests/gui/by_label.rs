//! The main job by label: look, drag, see a number change, undo, export.

use crate::harness::{Window, drag, harmonic_force_constant, open, open_sample, press, state};
use eframe::egui::{self, Key, Modifiers, accesskit::Role, vec2};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::product::Product;
use parabound::gui::state::{Page, Strip};

const UPPER: &str = "Upper edge of the fit window";
const LOWER: &str = "Lower edge of the fit window";

fn edge_value(window: &Window, name: &str) -> f64 {
    let node = window.get_by_role_and_label(Role::Slider, name);
    node.accesskit_node().numeric_value().expect("a slider has a value")
}

#[test]
fn dragging_the_window_edge_changes_the_force_constant_and_undo_takes_it_back() {
    let mut window = open_sample();
    let (k, edge) = (harmonic_force_constant(&window), edge_value(&window, UPPER));
    let grip = window.get_by_role_and_label(Role::Slider, UPPER).rect().center();
    drag(&mut window, grip, grip + vec2(90.0, 0.0));
    let (wider, k_wider) = (edge_value(&window, UPPER), harmonic_force_constant(&window));
    assert!(wider > edge + 0.1, "{edge} -> {wider}");
    // The well is softer outside: a wider window gives a smaller force constant.
    assert!(k_wider < 0.99 * k, "{k} -> {k_wider}");
    assert_eq!(state(&window).history.undo_name(), Some("move the fit window"));
    press(&mut window, "Undo");
    assert_eq!(harmonic_force_constant(&window), k);
    assert!((edge_value(&window, UPPER) - edge).abs() < 1e-9);
    press(&mut window, "Redo");
    assert_eq!(harmonic_force_constant(&window), k_wider);
    // One gesture, one step.
    press(&mut window, "Undo");
    assert_ne!(state(&window).history.undo_name(), Some("move the fit window"));
}

#[test]
fn an_edge_snaps_to_a_point_so_that_the_point_counts() {
    let mut window = open_sample();
    let plot = window.get(by().role(Role::Figure).label_contains("Plot of")).rect();
    let bounds = state(&window).bounds().expect("bounds");
    // The scan has 2.0 angstrom; the hand lets go four screen points beside it.
    let share = ((2.0 - bounds.x.0) / (bounds.x.1 - bounds.x.0)) as f32;
    let x = plot.left() + plot.width() * share + 4.0;
    let grip = window.get_by_role_and_label(Role::Slider, UPPER).rect().center();
    drag(&mut window, grip, egui::pos2(x, grip.y));
    assert_eq!(edge_value(&window, UPPER), 2.0);
    let points = &state(&window).study().expect("a study").pictures.points;
    assert!(points.iter().any(|p| p.r_as_read == 2.0 && p.in_window));
}

#[test]
fn edges_move_by_keyboard_and_by_assistive_technology() {
    let mut window = open_sample();
    let before = edge_value(&window, LOWER);
    window.get_by_role_and_label(Role::Slider, LOWER).focus();
    window.run();
    window.key_press(Key::ArrowLeft);
    window.run();
    assert!((edge_value(&window, LOWER) - (before - 0.01)).abs() < 2e-3);
    window.get_by_role_and_label(Role::Slider, LOWER).set_value_accesskit(1.2);
    window.run();
    assert!((edge_value(&window, LOWER) - 1.2).abs() < 1e-9);
    // An edge cannot pass the other one.
    window.get_by_role_and_label(Role::Slider, LOWER).set_value_accesskit(99.0);
    window.run();
    assert!(edge_value(&window, LOWER) < edge_value(&window, UPPER));
}

#[test]
fn dragging_the_tolerance_line_widens_the_reach() {
    let mut window = open_sample();
    let reach = |window: &Window| {
        let study = state(window).study().expect("a study");
        study.findings.reach.as_ref().and_then(|r| r.energy.x_plus_bohr).expect("an outer end")
    };
    let before = reach(&window);
    let name = "Tolerance of the reach in percent";
    assert!((edge_value(&window, name) - 5.0).abs() < 1e-9);
    let grip = window.get_by_role_and_label(Role::Slider, name).rect().right_center() - vec2(26.0, 0.0);
    drag(&mut window, grip, grip - vec2(0.0, 12.0));
    assert!(edge_value(&window, name) > 6.0);
    assert!(reach(&window) > 1.2 * before);
    assert_eq!(state(&window).history.undo_name(), Some("change the tolerance"));
}

#[test]
fn findings_are_exported_and_nothing_is_replaced_unasked() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("lih.findings.json");
    let mut window = open_sample();
    press(&mut window, "Export");
    press(&mut window, "Findings (JSON) …");
    // Without a desktop the built-in path window asks.
    let field = window.get_by_role_and_label(Role::TextInput, "Path");
    field.focus();
    window.run();
    window.key_press_modifiers(Modifiers::COMMAND, Key::A);
    window.get_by_role_and_label(Role::TextInput, "Path").type_text(&path.display().to_string());
    window.run();
    press(&mut window, "Write");
    let text = std::fs::read_to_string(&path).expect("the file is there");
    let study = state(&window).study().expect("a study");
    assert_eq!(text, parabound::export::json::findings_to_string(&study.findings));
    let ctx = window.ctx.clone();
    // A findings file is replaced, as on the command line; anything else is left alone.
    for (content, refused) in [(text.as_str(), false), ("precious", true)] {
        std::fs::write(&path, content).expect("written");
        let again = Command::ExportTo { product: Product::Findings, path: path.clone(), overwrite: false };
        window.state_mut().0.give(again, &ctx);
        window.run();
        let message = state(&window).view.message.clone().expect("a message");
        assert_eq!(message.failure, refused, "{message:?}");
        assert_eq!(message.text.contains("exists"), refused, "{message:?}");
        assert_eq!(std::fs::read_to_string(&path).expect("still there"), content);
    }
}

#[test]
fn everything_made_of_a_study_is_written() {
    let folder = tempfile::tempdir().expect("a folder");
    let mut window = open_sample();
    let ctx = window.ctx.clone();
    for product in Product::ALL {
        let endings: &[&str] =
            if product == Product::Picture { &[".svg", ".pdf", ".png"] } else { &[product.ending()] };
        for ending in endings {
            let path = folder.path().join(format!("lih{ending}"));
            let write = Command::ExportTo { product, path: path.clone(), overwrite: false };
            window.state_mut().0.give(write.clone(), &ctx);
            window.run();
            let bytes = std::fs::read(&path).expect("written");
            let starts: &[u8] = match *ending {
                ".svg" => b"<?xml",
                ".pdf" => b"%PDF",
                ".png" => b"\x89PNG",
                ".report.html" => b"<!DOCTYPE html>",
                ".findings.json" => b"{",
                _ => b"",
            };
            assert!(bytes.len() > 200 && bytes.starts_with(starts), "{ending}");
            // A second time it is in the way, unless it is a findings file.
            window.state_mut().0.give(write, &ctx);
            window.run();
            let message = state(&window).view.message.clone().expect("a message");
            assert_eq!(message.failure, product != Product::Findings, "{message:?}");
        }
    }
    let wrong = Command::ExportTo {
        product: Product::Picture,
        path: folder.path().join("lih.bmp"),
        overwrite: false,
    };
    window.state_mut().0.give(wrong, &ctx);
    window.run();
    let message = state(&window).view.message.clone().expect("a message");
    assert!(message.failure && message.text.contains(".svg, .pdf or .png"), "{message:?}");
}

#[test]
fn every_page_and_strip_is_reached_by_its_tab() {
    let mut window = open_sample();
    for page in Page::ALL {
        window.get_by_role_and_label(Role::Tab, page.name()).click();
        window.run();
        assert_eq!(state(&window).view.page, page);
    }
    for strip in [Strip::Residuals, Strip::Gauge] {
        window.get_by_role_and_label(Role::Tab, strip.name()).click();
        window.run();
        assert_eq!(state(&window).view.strip, strip);
    }
}

#[test]
fn a_click_on_a_point_sets_it_aside_and_a_second_one_takes_it_back() {
    let mut window = open_sample();
    let plot = window.get(by().role(Role::Figure).label_contains("Plot of")).rect();
    let bounds = state(&window).bounds().expect("bounds");
    let point = {
        let points = &state(&window).study().expect("a study").pictures.points;
        points.iter().find(|p| p.r_as_read == 1.9).expect("the scan has 1.9 angstrom").clone()
    };
    let share = |(a, b): (f64, f64), v: f64| ((v - a) / (b - a)) as f32;
    let at = egui::pos2(
        plot.left() + plot.width() * share(bounds.x, point.at[0]),
        plot.bottom() - plot.height() * share(bounds.y, point.at[1]),
    );
    let used = |window: &Window| {
        let study = state(window).study().expect("a study");
        study.findings.source.points.iter().find(|p| p.row == point.row).is_some_and(|p| p.used)
    };
    for expected in [false, true] {
        window.hover_at(at);
        window.run();
        window.drag_at(at);
        window.run();
        window.drop_at(at);
        window.run();
        assert_eq!(used(&window), expected);
        // Two clicks in a row must not count as a double click.
        window.hover_at(at + vec2(60.0, 90.0));
        window.run_steps(40);
    }
}

#[test]
fn levels_are_walked_with_the_arrow_keys() {
    let mut window = open_sample();
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::PinLevel(None), &ctx);
    window.run();
    for expected in [0, 1, 2] {
        window.key_press(Key::ArrowUp);
        window.run();
        assert_eq!(state(&window).shown_level(), Some(expected));
    }
    window.key_press(Key::ArrowDown);
    window.run();
    assert_eq!(state(&window).shown_level(), Some(1));
}

#[test]
fn another_curve_is_chosen_and_shows_its_own_numbers() {
    let mut window = open_sample();
    let first = harmonic_force_constant(&window);
    window.get_by_role_and_label(Role::RadioButton, "Curve E_A").click();
    window.run();
    assert!(harmonic_force_constant(&window) < 0.2 * first, "the A state is far softer");
}

#[test]
fn without_a_scan_the_window_says_what_to_do() {
    let mut window = open([1000.0, 700.0], egui::Theme::Light, Start { empty: true, ..Start::default() });
    assert!(window.query_by_label("Open a bond scan").is_some());
    press(&mut window, "H₂, full CI");
    assert_eq!(state(&window).document.scans.len(), 1);
}

#[test]
fn a_missing_unit_is_asked_for_and_the_file_read_again() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("plain.csv");
    // Invented numbers: a parabola with a cubic term.
    let rows: Vec<String> = (0..20)
        .map(|i| {
            let x = -0.3 + 0.03 * f64::from(i);
            format!("{:.3},{:.8}", 1.3 + x, 0.5 * x * x - 0.3 * x.powi(3))
        })
        .collect();
    std::fs::write(&path, format!("R,E\n{}\n", rows.join("\n"))).expect("written");
    let mut window =
        open([1400.0, 900.0], egui::Theme::Dark, Start { files: vec![path], ..Start::default() });
    let problem = state(&window).view.problem.clone().expect("a problem");
    assert_eq!(problem.asks, parabound::gui::state::Asks::Units, "{}", problem.text);
    let ctx = window.ctx.clone();
    let read = parabound::scan::read::ReadSettings {
        length_unit: Some(parabound::units::LengthUnit::Angstrom),
        energy_unit: Some(parabound::units::EnergyUnit::Hartree),
        ..Default::default()
    };
    window.state_mut().0.give(Command::ReadAgain(read), &ctx);
    window.run();
    assert!(state(&window).view.problem.is_none());
    assert!(state(&window).study().is_some_and(|s| s.findings.curve.is_some()));
}

#[test]
fn an_idle_window_does_not_paint() {
    let mut window = open_sample();
    window.run();
    for _ in 0..5 {
        window.step();
        let output = &window.output().viewport_output[&egui::ViewportId::ROOT];
        assert!(output.repaint_delay > std::time::Duration::from_secs(5), "{:?}", output.repaint_delay);
    }
}
