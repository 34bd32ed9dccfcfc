//! Text logs: searched by two patterns, kept in study files, found again, read anew.

use crate::harness::{Window, give, open, press, shown, state};
use crate::invented::{grid, morse, table, write};
use eframe::egui::{self, Key, Modifiers, accesskit::Role};
use egui_kittest::kittest::{Queryable as _, by};
use parabound::export::json::findings_to_string;
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::reading::ReadingCommand;
use parabound::scan::Layout;
use parabound::scan::read::{LinePatterns, Match, ReadSettings};
use parabound::settings::Settings;
use parabound::units::{EnergyUnit, LengthUnit};
use std::path::Path;

fn patterns(length: &str, energy: &str, which: Match) -> ReadSettings {
    ReadSettings {
        lines: Some(LinePatterns { length: length.into(), energy: energy.into(), which }),
        length_unit: Some(LengthUnit::Angstrom),
        energy_unit: Some(EnergyUnit::Hartree),
        ..ReadSettings::default()
    }
}

/// Those that fit the logs below.
fn fitting() -> ReadSettings {
    patterns(r"bond (\S+)", r"energy (\S+)", Match::Last)
}

fn try_patterns(window: &mut Window, length: &str, energy: &str, which: Match) {
    give(window, Command::Reading(ReadingCommand::TryLogs(patterns(length, energy, which))));
}

fn type_path(window: &mut Window, path: &Path) {
    window.get_by_role_and_label(Role::TextInput, "Path").focus();
    window.run();
    window.key_press_modifiers(Modifiers::COMMAND, Key::A);
    window.get_by_role_and_label(Role::TextInput, "Path").type_text(&path.display().to_string());
    window.run();
    window.key_press(Key::Enter);
    window.run();
}

/// Invented logs of no program.
fn write_logs(folder: &Path, count: usize) {
    for (i, r) in grid().take(count).enumerate() {
        let text = format!("run {i}\nbond {r:.2}\nenergy 0.5\nenergy {:.10}\nend\n", morse(r));
        write(folder, &format!("point_{i:02}.log"), &text);
    }
}

#[test]
fn a_folder_of_text_logs_becomes_a_scan_by_two_patterns() {
    let folder = tempfile::tempdir().expect("a folder");
    write_logs(folder.path(), 30);
    let mut window = open([1400.0, 900.0], egui::Theme::Dark, Start { empty: true, ..Start::default() });
    press(&mut window, "File");
    press(&mut window, "Text logs …");
    type_path(&mut window, folder.path());
    assert!(window.query_by_label("Pattern of the bond length").is_some());
    let points = |window: &Window| {
        let logs = state(window).view.reading.logs.clone().expect("the dialog is open");
        logs.searched.expect("tried").1.tried.points()
    };
    try_patterns(&mut window, r"bond (\S+)", "energy (", Match::Last);
    assert_eq!(points(&window), 0);
    assert!(window.query(by().label_contains("not a regular expression")).is_some());
    try_patterns(&mut window, r"bond (\S+)", r"energy (\S+)", Match::First);
    assert!(window.query(by().label_contains("30 of 30 files give a point.")).is_some());
    assert_eq!(window.query_all_by_label("0.5").count(), 30, "what is caught is shown");
    try_patterns(&mut window, r"bond (\S+)", r"energy (\S+)", Match::Last);
    shown(&mut window, "dark_logs");
    press(&mut window, "Read 30 points");
    let scan = state(&window).document.scans[0].scan.clone();
    assert_eq!((scan.layout, scan.bond_lengths.len()), (Layout::Lines, 30));
    assert!((scan.energies[0].values[8].expect("a value") - morse(1.27)).abs() < 1e-9);
    assert!(state(&window).view.reading.logs.is_none());
    // The next folder is searched with the same patterns.
    let next = tempfile::tempdir().expect("a folder");
    write_logs(next.path(), 12);
    give(&mut window, Command::OpenPath(next.path().to_owned()));
    assert_eq!(points(&window), 12);
    press(&mut window, "Cancel");
    // Read again, the folder is looked at again.
    write(folder.path(), "point_30.log", "bond 2.15\nenergy 0.1\n");
    let key = state(&window).document.scans[0].key;
    give(&mut window, Command::Reload(key));
    assert_eq!(state(&window).document.scans[0].scan.bond_lengths.len(), 31);
}

/// Of many logs those that give no point stand first, with their text.
#[test]
fn the_log_without_a_point_is_seen_first() {
    let folder = tempfile::tempdir().expect("a folder");
    write_logs(folder.path(), 40);
    let lines: String = (0..3000).map(|i| format!("step {i}\n")).collect();
    write(folder.path(), "point_99.log", &format!("{lines}bond 3.30\n{lines}broken off\n"));
    let start = Start { empty: true, ..Start::default() };
    let mut window = open([1400.0, 900.0], egui::Theme::Light, start);
    give(&mut window, Command::Reading(ReadingCommand::OpenLogs(vec![folder.path().to_owned()])));
    assert!(
        window.query(by().label_contains("run 0")).is_some(),
        "the first log is shown before there are patterns"
    );
    give(&mut window, Command::Reading(ReadingCommand::TryLogs(fitting())));
    shown(&mut window, "light_logs_one_fails");
    let logs = state(&window).view.reading.logs.as_ref().expect("open");
    let found = logs.caught().expect("tried");
    assert_eq!(logs.set.files[found.order[0]].0, "point_99.log");
    assert!(found.lines.iter().any(|(number, text)| *number == 3001 && text == "bond 3.30"));
    assert!(found.lines.len() < 100);
    assert!(window.query_by_label("no match").is_some());
    assert!(state(&window).can(&Command::Reading(ReadingCommand::ReadLogs)).is_err());
}

/// A window with a scan made of the logs in a folder.
fn opened(folder: &Path, state_folder: Option<&Path>) -> Window {
    let settings = Settings { read: fitting(), ..Settings::default() };
    let state_folder = state_folder.map(Path::to_owned);
    let start = Start { files: vec![folder.to_owned()], settings, state_folder, ..Start::default() };
    let window = open([1400.0, 900.0], egui::Theme::Light, start);
    assert_eq!(state(&window).document.scans.len(), 1, "{:?}", state(&window).view.message);
    window
}

fn findings(window: &Window) -> String {
    findings_to_string(&state(window).study().expect("a study").findings)
}

#[test]
fn patterns_of_the_command_line_make_a_scan_or_wait_in_their_window() {
    let folder = tempfile::tempdir().expect("a folder");
    write_logs(folder.path(), 20);
    let window = opened(folder.path(), None);
    assert_eq!(state(&window).document.scans[0].scan.layout, Layout::Lines);
    assert!(state(&window).study().is_some_and(|s| s.findings.curve.is_some()));
    // The files by name give the same scan.
    let mut files: Vec<_> =
        std::fs::read_dir(folder.path()).expect("listed").map(|e| e.expect("an entry").path()).collect();
    files.sort();
    let settings = Settings { read: fitting(), ..Settings::default() };
    let start = Start { files: files.clone(), settings, ..Start::default() };
    let named = open([1400.0, 900.0], egui::Theme::Light, start);
    assert_eq!(state(&named).document.scans[0].scan.sha256, state(&window).document.scans[0].scan.sha256);
    let settings = Settings { read: patterns("bond (.*)", "total (.*)", Match::Last), ..Settings::default() };
    let mut refused =
        open([1400.0, 900.0], egui::Theme::Light, Start { files, settings, ..Start::default() });
    assert!(state(&refused).document.scans.is_empty());
    assert!(refused.query(by().label_contains("no line matches the pattern of the energy")).is_some());
    shown(&mut refused, "light_logs_refused");
}

#[test]
fn a_study_file_carries_its_logs_and_looks_for_them_again() {
    let place = tempfile::tempdir().expect("a folder");
    let folder = place.path().join("run");
    std::fs::create_dir(&folder).expect("made");
    write_logs(&folder, 24);
    let kept = place.path().join("kept.parabound");
    let mut window = opened(&folder, None);
    give(&mut window, Command::SetAside(3));
    give(&mut window, Command::SaveStudyTo { path: kept.clone(), overwrite: false });
    let again = |name: &Path| {
        let files = vec![name.to_owned()];
        open([1400.0, 900.0], egui::Theme::Light, Start { files, ..Start::default() })
    };
    let opened = again(&kept);
    assert_eq!(findings(&opened), findings(&window));
    assert!(state(&opened).view.message.is_none() && state(&opened).view.changed.is_empty());

    // Both moved together are found, and with another log the scan is offered for reading anew.
    let other = place.path().join("moved");
    std::fs::create_dir(&other).expect("made");
    std::fs::rename(&folder, other.join("run")).expect("moved");
    std::fs::rename(&kept, other.join("kept.parabound")).expect("moved");
    let kept = other.join("kept.parabound");
    write(&other.join("run"), "point_24.log", "bond 1.91\nenergy 0.06\n");
    let mut opened = again(&kept);
    assert_eq!(findings(&opened), findings(&window), "it is shown as it was");
    press(&mut opened, "Dismiss");
    press(&mut opened, "Read again");
    assert_eq!(state(&opened).document.scans[0].scan.bond_lengths.len(), 25);
    assert!(state(&opened).document.focused().is_some_and(|(_, _, s)| s.set_aside.len() == 1));

    std::fs::remove_dir_all(other.join("run")).expect("removed");
    let opened = again(&kept);
    assert_eq!(findings(&opened), findings(&window), "the logs are carried");
}

#[test]
fn unsaved_work_on_logs_is_restored() {
    let place = tempfile::tempdir().expect("a folder");
    let (folder, kept) = (place.path().join("run"), place.path().join("state"));
    std::fs::create_dir(&folder).expect("made");
    write_logs(&folder, 24);
    let mut window = opened(&folder, Some(&kept));
    give(&mut window, Command::SetAside(3));
    let before = findings(&window);
    drop(window);
    std::fs::remove_dir_all(&folder).expect("removed");
    let start = Start { empty: true, state_folder: Some(kept), ..Start::default() };
    let mut window = open([1400.0, 900.0], egui::Theme::Light, start);
    press(&mut window, "Restore");
    assert_eq!(findings(&window), before);
}

#[test]
fn the_patterns_of_a_scan_are_changed_and_the_change_is_undone() {
    let folder = tempfile::tempdir().expect("a folder");
    write_logs(folder.path(), 24);
    let mut window = opened(folder.path(), None);
    press(&mut window, "Columns …");
    assert!(window.query_by_label("Pattern of the bond length").is_some());
    try_patterns(&mut window, r"bond (\S+)", r"energy (\S+)", Match::First);
    press(&mut window, "Read 24 points");
    let first = |window: &Window| state(window).document.scans[0].scan.energies[0].values[0];
    assert_eq!((first(&window), state(&window).document.scans.len()), (Some(0.5), 1));
    assert!(state(&window).view.reading.logs.is_none());
    press(&mut window, "Undo");
    assert_ne!(first(&window), Some(0.5));
}

#[test]
fn columns_and_patterns_are_remembered_from_one_start_to_the_next() {
    let place = tempfile::tempdir().expect("a folder");
    let (logs, kept) = (place.path().join("logs"), place.path().join("state"));
    std::fs::create_dir(&logs).expect("made");
    write_logs(&logs, 12);
    let path = write(place.path(), "plain.csv", &table("R,E", morse));
    let start = |files: Vec<_>| Start { files, state_folder: Some(kept.clone()), ..Start::default() };
    let mut window = open([1400.0, 900.0], egui::Theme::Light, start(vec![path.clone()]));
    window.get(by().role(Role::Button).label_contains("Bond lengths in Å, energies in hartree")).click();
    window.run();
    give(&mut window, Command::Reading(ReadingCommand::OpenLogs(vec![logs.clone()])));
    give(&mut window, Command::Reading(ReadingCommand::TryLogs(fitting())));
    press(&mut window, "Read 12 points");
    drop(window);
    let mut window = open([1400.0, 900.0], egui::Theme::Light, start(vec![path]));
    assert!(state(&window).view.problem.is_none(), "the units are known");
    give(&mut window, Command::Reading(ReadingCommand::OpenLogs(vec![logs])));
    assert!(window.query_by_label("Read 12 points").is_some(), "the patterns are there");
}
