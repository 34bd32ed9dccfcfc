//! Every command of the list: through its menu or button, through its keys, through the search; and undone.

use crate::harness::{Window, give, open, press, state};
use eframe::egui::{self, Key, Modifiers, Theme, accesskit::Role};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::fit::Window as FitWindow;
use parabound::gui::app::Start;
use parabound::gui::catalog::{Entry, Place, entries};
use parabound::gui::command::Command;
use parabound::units::LengthUnit;
use std::path::Path;

/// A window in which as many commands as possible can be given: two scans, a study that is kept in a file, a moved
/// window, a step to take back and one to do again, a level and a message shown.
fn prepared(folder: &Path) -> Window {
    let scan = folder.join("h2.csv");
    if !scan.exists() {
        let from = concat!(env!("CARGO_MANIFEST_DIR"), "/../../sample-scans/h2_fci.csv");
        std::fs::copy(from, &scan).expect("copied");
    }
    let start = Start { files: vec![scan], ..Start::default() };
    let mut window = open([1400.0, 900.0], Theme::Dark, start);
    let moved = |to| {
        let window = FitWindow { from: 0.6, to, unit: LengthUnit::Angstrom };
        Command::SetWindow { window, resting: true }
    };
    for command in [
        Command::OpenSample(1),
        moved(0.9),
        moved(1.0),
        Command::Undo,
        Command::SaveStudyTo { path: folder.join("kept.parabound"), overwrite: true },
        Command::PinLevel(Some(1)),
        Command::ShowJ(3),
    ] {
        give(&mut window, command);
    }
    window
}

/// All that a command can change, as text.
fn digest(window: &Window, folder: &Path) -> String {
    let s = state(window);
    let mut view = s.view.clone();
    view.hovered_level = None;
    let scans: Vec<_> = s.document.scans.iter().map(|l| (l.key, l.scan.file_name.clone())).collect();
    let text = format!(
        "{scans:?} {:?} {:?} {view:?} {:?} {:?} {:?} {:?}",
        s.document.focus,
        s.document.settings,
        s.recent,
        s.preferences,
        s.history.undo_name(),
        window.ctx.theme()
    );
    text.replace(&folder.display().to_string(), "FOLDER")
}

/// What is undone: scans and settings.
fn document(window: &Window) -> String {
    let s = state(window);
    let scans: Vec<_> = s.document.scans.iter().map(|l| l.key).collect();
    format!("{scans:?} {:?}", s.document.settings)
}

fn by_label(window: &mut Window, entry: &Entry) {
    for menu in entry.place.menus() {
        press(window, menu);
    }
    if let Place::Page(page) = entry.place {
        window.get_by_role_and_label(Role::Tab, page.name()).click();
        window.run();
    }
    let label = entry.command.label();
    let pressable = |role| matches!(role, Role::Button | Role::Tab | Role::RadioButton);
    let found = by().predicate(move |n| pressable(n.role()));
    // The number of notices stands in the label.
    let found =
        if entry.place == Place::Notices { found.label_contains(&label) } else { found.label(&label) };
    // What stands in a menu may stand elsewhere too; menus are drawn last.
    window.query_all(found).last().unwrap_or_else(|| panic!("no {label:?} in {:?}", entry.place)).click();
    window.run();
}

fn by_keys(window: &mut Window, keys: egui::KeyboardShortcut) {
    window.key_press_modifiers(keys.modifiers, keys.logical_key);
    window.run();
}

fn by_search(window: &mut Window, entry: &Entry) {
    window.key_press_modifiers(Modifiers::COMMAND, Key::K);
    window.run();
    window.get_by_role_and_label(Role::TextInput, "Search of commands").type_text(&entry.command.name());
    window.run();
    window.key_press(Key::Enter);
    window.run();
}

/// The list is gone through in parts, so that they are checked side by side.
const PARTS: usize = 3;

#[test]
fn every_command_does_the_same_by_label_by_keys_and_by_search_and_can_be_undone() {
    check(0);
}

#[test]
fn every_command_second_part() {
    check(1);
}

#[test]
fn every_command_third_part() {
    check(2);
}

fn check(part: usize) {
    let folder = tempfile::tempdir().expect("a folder");
    let folder = folder.path();
    let all = entries(state(&prepared(folder)));
    assert!(all.len() > 45, "{}", all.len());
    let (mut refused, mut undone) = (Vec::new(), 0);
    for entry in all.iter().skip(part).step_by(PARTS) {
        let mut window = prepared(folder);
        let before = document(&window);
        if entry.command.is_enabled(state(&window)).is_err() {
            refused.push(entry.command.clone());
            continue;
        }
        give(&mut window, entry.command.clone());
        let wanted = digest(&window, folder);
        let mut label = prepared(folder);
        by_label(&mut label, entry);
        assert_eq!(digest(&label, folder), wanted, "by label: {:?}", entry.command);
        if let Some(keys) = entry.command.shortcut() {
            let mut window = prepared(folder);
            by_keys(&mut window, keys);
            assert_eq!(digest(&window, folder), wanted, "by keys: {:?}", entry.command);
        }
        if entry.command != Command::ShowSearch(true) {
            let mut window = prepared(folder);
            by_search(&mut window, entry);
            assert_eq!(digest(&window, folder), wanted, "by search: {:?}", entry.command);
        }
        let is_history = matches!(entry.command, Command::Undo | Command::Redo);
        if !is_history && document(&label) != before {
            press(&mut label, "Undo");
            assert_eq!(document(&label), before, "undone: {:?}", entry.command);
            undone += 1;
        }
    }
    assert!(refused.is_empty(), "could not be given: {refused:?}");
    // Seven samples, recent files, and what changes settings.
    assert!(undone >= 2, "{undone}");
}

#[test]
fn every_control_has_a_name_and_tab_reaches_it_in_order() {
    let mut window = open([1400.0, 900.0], Theme::Dark, Start::default());
    let roles = [
        Role::Button,
        Role::CheckBox,
        Role::Slider,
        Role::TextInput,
        Role::Tab,
        Role::RadioButton,
        Role::ComboBox,
        Role::SpinButton,
        Role::Figure,
        Role::List,
        Role::ListItem,
    ];
    let mut named = 0;
    for node in window.get_all(by().predicate(move |n| roles.contains(&n.role()))) {
        let label = node.accesskit_node().label().unwrap_or_default();
        assert!(!label.trim().is_empty(), "a {:?} without a name", node.accesskit_node().role());
        named += 1;
    }
    assert!(named > 60, "{named}");
    let mut walked: Vec<String> = Vec::new();
    for _ in 0..160 {
        window.key_press(Key::Tab);
        window.run();
        let focused = window.query(by().predicate(|n| n.is_focused()));
        let label = focused.and_then(|n| n.accesskit_node().label()).unwrap_or_default();
        if walked.first() == Some(&label) && !label.is_empty() {
            break;
        }
        walked.push(label);
    }
    let at = |name: &str| {
        walked
            .iter()
            .position(|w| w == name)
            .unwrap_or_else(|| panic!("Tab does not reach {name}: {walked:?}"))
    };
    let order = [
        "File",
        "View",
        "Help",
        "Open …",
        "Export",
        "Undo",
        "Light",
        "Dark",
        "Curve E_X",
        "Lower edge of the fit window",
        "Upper edge of the fit window",
    ];
    // Undo cannot be given yet.
    let order: Vec<usize> = order.iter().filter(|n| **n != "Undo").map(|n| at(n)).collect();
    assert!(order.windows(2).all(|w| w[0] < w[1]), "{order:?} in {walked:?}");
    at("Tolerance of the reach in percent");
    at("Constants");
}

#[test]
fn the_picture_tells_what_it_shows() {
    let window = open([1400.0, 900.0], Theme::Dark, Start::default());
    let plot = window.get(by().role(Role::Figure).label_contains("Plot of"));
    let told = plot.accesskit_node().label().unwrap_or_default();
    assert!(told.contains("70 points") && told.contains("Within 5 %"), "{told}");
    let list = window.get_by_role_and_label(Role::List, "Levels of the picture");
    let levels: Vec<String> = list
        .children()
        .filter_map(|n| n.accesskit_node().label())
        .filter(|l| l.starts_with("Level v ="))
        .collect();
    assert_eq!(levels.len(), state(&window).study().expect("a study").findings.levels.len());
    assert!(
        levels[0].starts_with("Level v = 0: 689.2") && levels[0].contains("turning points"),
        "{}",
        levels[0]
    );
}

#[test]
fn the_search_is_walked_with_the_arrows_and_closed_with_escape() {
    let mut window = open([1000.0, 700.0], Theme::Light, Start::default());
    by_keys(&mut window, egui::KeyboardShortcut::new(Modifiers::COMMAND, Key::K));
    window.get_by_role_and_label(Role::TextInput, "Search of commands").type_text("page");
    window.run();
    for _ in 0..2 {
        window.key_press(Key::ArrowDown);
        window.run();
    }
    assert_eq!(state(&window).view.search.as_ref().map(|s| s.chosen), Some(2));
    window.key_press(Key::Escape);
    window.run();
    assert!(state(&window).view.search.is_none());
    // What cannot be given now says why and stays.
    by_keys(&mut window, egui::KeyboardShortcut::new(Modifiers::COMMAND, Key::K));
    window.get_by_role_and_label(Role::TextInput, "Search of commands").type_text("redo");
    window.run();
    window.key_press(Key::Enter);
    window.run();
    assert!(state(&window).view.search.is_some());
    assert!(window.query_by_label_contains("Nothing was taken back.").is_some());
}

#[test]
fn the_size_of_the_interface_and_the_rest_are_remembered() {
    let folder = tempfile::tempdir().expect("a folder");
    let start = || Start { state_folder: Some(folder.path().to_owned()), ..Start::default() };
    let mut window = open([1400.0, 900.0], Theme::Dark, start());
    assert!(state(&window).view.hints, "a first start shows the hints");
    let hint = "Drag an edge: the fits follow.";
    assert!(window.query_by_label(hint).is_some());
    press(&mut window, "Got it");
    assert!(window.query_by_label(hint).is_none());
    for _ in 0..3 {
        by_keys(&mut window, egui::KeyboardShortcut::new(Modifiers::COMMAND, Key::Equals));
    }
    by_keys(&mut window, egui::KeyboardShortcut::new(Modifiers::COMMAND, Key::Minus));
    press(&mut window, "Light");
    assert_eq!(window.ctx.theme(), Theme::Light);
    give(&mut window, Command::SetStill(true));
    let zoom = window.ctx.zoom_factor();
    assert!((zoom - 1.2).abs() < 1e-6, "{zoom}");
    drop(window);
    let window = open([1400.0, 900.0], Theme::Dark, start());
    assert_eq!(window.ctx.zoom_factor(), zoom);
    // The harness has the last word on the theme of the window itself.
    assert_eq!(state(&window).preferences.dark, Some(false));
    assert_eq!(window.ctx.global_style().animation_time, 0.0);
    assert!(!state(&window).view.hints);
}
