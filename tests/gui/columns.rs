//! How files are read, by label: columns of a refused file, what was chosen for a header before, files that wait
//! to be dealt with, and what notices offer to do about the points.

use crate::harness::{Window, give, open, press, shown, state};
use crate::invented::{grid, morse, table, write};
use eframe::egui::{self, accesskit::Role};
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::reading::ReadingCommand;
use parabound::notice::Code;
use parabound::scan::read::{DecimalSign, Delimiter, ReadSettings, Role as ColumnRole};
use parabound::units::{EnergyUnit, LengthUnit};
use std::path::PathBuf;

fn open_files(files: Vec<PathBuf>) -> Window {
    open([1400.0, 900.0], egui::Theme::Light, Start { files, ..Start::default() })
}

#[test]
fn refused_files_among_several_are_told_one_after_the_other() {
    let folder = tempfile::tempdir().expect("a folder");
    let good = table("R_angstrom,E_hartree", morse);
    let files = vec![
        write(folder.path(), "a.csv", &good),
        write(folder.path(), "bad.csv", "no scan at all"),
        write(folder.path(), "worse.csv", "R_angstrom,E_hartree\n1.0,x\n"),
        write(folder.path(), "b.csv", &good),
    ];
    let mut window = open_files(files);
    let names: Vec<_> = state(&window).document.scans.iter().map(|s| s.scan.file_name.clone()).collect();
    assert_eq!(names, ["a.csv", "b.csv"], "the order is kept");
    let refused = |window: &Window| state(window).view.problem.as_ref().map(|p| p.file_name.clone());
    assert_eq!(refused(&window).as_deref(), Some("bad.csv"));
    assert!(window.query(by().label_contains("1 more not read: worse.csv")).is_some());
    shown(&mut window, "light_two_refused");
    press(&mut window, "Put away");
    assert_eq!(refused(&window).as_deref(), Some("worse.csv"));
    press(&mut window, "Put away");
    assert_eq!(refused(&window), None);
}

#[test]
fn the_columns_of_a_refused_file_are_chosen_with_a_live_preview() {
    let folder = tempfile::tempdir().expect("a folder");
    // Two numbers with decimal commas a row, or four whole ones.
    let path = write(folder.path(), "commas.txt", "1,0,5,2\n1,1,3,1\n1,2,2,0\n1,3,1,5\n");
    let mut window = open_files(vec![path]);
    press(&mut window, "Columns …");
    assert!(window.query_by_label("columns separated by").is_some());
    assert!(window.query_by_label("decimal sign").is_some());
    let read = ReadSettings { delimiter: Some(Delimiter::Comma), ..ReadSettings::default() };
    give(&mut window, Command::ReadAgain(read));
    let preview = state(&window).view.problem.clone().expect("units are missing").preview.expect("a look");
    let roles: Vec<_> = preview.columns.iter().map(|c| c.role).collect();
    assert_eq!(roles[0], ColumnRole::Length);
    assert_eq!((roles.len(), preview.columns[2].cells[0]), (4, Some(5.0)));
    assert!(window.query_by_label("Use of column column 3").is_some(), "the preview follows");
    shown(&mut window, "light_columns_of_refused");
    let read = ReadSettings {
        delimiter: Some(Delimiter::Comma),
        energy_columns: Some(vec!["column 3".into()]),
        length_unit: Some(LengthUnit::Bohr),
        energy_unit: Some(EnergyUnit::Electronvolt),
        ..ReadSettings::default()
    };
    give(&mut window, Command::ReadAgain(read));
    assert!(state(&window).view.problem.is_none());
    assert_eq!(state(&window).document.scans[0].scan.energies[0].values[1], Some(3.0));
    assert!(!state(&window).view.reading.problem_columns, "the window is put away with the refusal");
}

#[test]
fn what_was_chosen_for_a_header_is_used_again_and_said() {
    let folder = tempfile::tempdir().expect("a folder");
    let first = write(folder.path(), "first.csv", &table("R,E", morse));
    let second = write(folder.path(), "second.csv", &table("R,E", |r| 1.1 * morse(r)));
    let mut window = open_files(vec![first]);
    window.get(by().role(Role::Button).label_contains("Bond lengths in Å, energies in hartree")).click();
    window.run();
    give(&mut window, Command::OpenPath(second));
    assert!(state(&window).view.problem.is_none());
    let scan = &state(&window).document.scans[1].scan;
    assert_eq!((scan.length_unit, scan.energies[0].unit), (LengthUnit::Angstrom, EnergyUnit::Hartree));
    let message = state(&window).view.message.clone().expect("it is said");
    assert!(message.text.contains("second.csv") && message.text.contains("same header"), "{}", message.text);
    // As the file says, it is asked about again.
    let key = state(&window).document.scans[1].key;
    give(&mut window, Command::ReadWith { scan: key, read: ReadSettings::default() });
    assert!(state(&window).view.problem.is_some());
}

#[test]
fn the_columns_of_any_file_are_reached_and_say_what_units_would_mean() {
    let folder = tempfile::tempdir().expect("a folder");
    let text = table("R_angstrom,E_hartree", morse);
    let files = ["one.csv", "two.csv"].map(|name| write(folder.path(), name, &text));
    let mut window = open_files(files.to_vec());
    let first = state(&window).document.scans[0].key;
    assert_ne!(state(&window).document.focus.map(|f| f.scan), Some(first));
    press(&mut window, "Columns of one.csv");
    assert_eq!(state(&window).view.columns_of, Some(first));
    let known = state(&window).view.reading.looked.clone().expect("worked out");
    assert_eq!((known.scan, known.meanings.len()), (first, LengthUnit::ALL.len() * EnergyUnit::ALL.len()));
    assert!(window.query(by().label_contains("So it is rₑ 1.27")).is_some());
    shown(&mut window, "light_columns_of_scan");
    let bohr =
        known.meanings.iter().find(|m| m.length == LengthUnit::Bohr && m.energy == EnergyUnit::Hartree);
    assert!((bohr.expect("a choice").r_e_angstrom - 1.27 * 0.529_177).abs() < 1e-3);
}

#[test]
fn notices_offer_to_restrict_the_scan_and_to_use_points_again() {
    let folder = tempfile::tempdir().expect("a folder");
    let jump = |r: f64| if r > 1.9 { morse(r) - 0.004 } else { morse(r) };
    let path = write(folder.path(), "jump.csv", &table("# HCl scan\nR_angstrom,E_hartree", jump));
    let mut window = open_files(vec![path]);
    give(&mut window, Command::ShowAllNotices(true));
    let codes = |window: &Window| -> Vec<Code> {
        state(window).study().expect("a study").findings.notices.iter().map(|n| n.code).collect()
    };
    assert!(codes(&window).contains(&Code::Jump), "{:?}", codes(&window));
    shown(&mut window, "light_jump");
    press(&mut window, "Only the inner part");
    let used = |window: &Window| {
        let points = &state(window).study().expect("a study").findings.source.points;
        points.iter().filter(|p| p.used).map(|p| p.r_as_read).fold(0.0, f64::max)
    };
    assert!((used(&window) - 1.87).abs() < 1e-9, "{}", used(&window));
    assert!(!codes(&window).contains(&Code::Jump));
    press(&mut window, "Use them again");
    assert!(codes(&window).contains(&Code::Jump));
    press(&mut window, "Undo");
    assert!(!codes(&window).contains(&Code::Jump));
}

#[test]
fn a_note_on_a_point_is_kept_in_the_findings_and_undone() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = write(folder.path(), "plain.csv", &table("R_angstrom,E_hartree", morse));
    let mut window = open_files(vec![path]);
    give(&mut window, Command::SetNote { row: 4, text: "recomputed".into() });
    let note = |window: &Window| {
        let points = &state(window).study().expect("a study").findings.source.points;
        points.iter().find(|p| p.row == 4).and_then(|p| p.note.clone())
    };
    assert_eq!(note(&window).as_deref(), Some("recomputed"));
    press(&mut window, "Undo");
    assert_eq!(note(&window), None);
}

#[test]
fn a_charge_of_zero_goes_before_that_of_the_file() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = write(folder.path(), "ion.csv", &table("# H2+, X 2Sigma_g+\nR_angstrom,E_hartree", morse));
    let mut window = open_files(vec![path]);
    let charge =
        |window: &Window| state(window).study().expect("a study").findings.masses.as_ref().map(|m| m.charge);
    assert_eq!(charge(&window), Some(1));
    give(&mut window, Command::SetCharge(Some(0)));
    assert_eq!(charge(&window), Some(0));
}

/// Numbers of a file with its own signs, chosen in the window, come out and in again to the last digit.
#[test]
fn what_was_read_through_the_columns_window_is_exported_and_read_again_to_the_last_digit() {
    let folder = tempfile::tempdir().expect("a folder");
    let comma = |value: f64| format!("{value:e}").replace('.', ",");
    let rows: Vec<String> = grid()
        .map(|r| format!("{};{};{}", comma(r / 3.0 + 0.8), comma(9.5), comma(morse(r / 3.0 + 0.8) / 7.0)))
        .collect();
    let path = write(folder.path(), "odd.txt", &format!("a;b;c\n{}\n", rows.join("\n")));
    let mut window = open_files(vec![path]);
    press(&mut window, "Columns …");
    window.get_by_role_and_label(Role::ComboBox, "decimal sign").click();
    window.run();
    shown(&mut window, "light_decimal_sign");
    window.get_by_label("comma").click();
    window.run();
    let problem = state(&window).view.problem.clone().expect("units are open");
    assert_eq!(problem.start.read.decimal_sign, Some(DecimalSign::Comma));
    let read = ReadSettings {
        length_column: Some("a".into()),
        energy_columns: Some(vec!["c".into()]),
        ..problem.start.read.clone()
    };
    give(&mut window, Command::ReadAgain(read));
    shown(&mut window, "light_columns_with_units");
    window.get(by().role(Role::Button).label_contains("Bond lengths in Å, energies in eV")).click();
    window.run();
    let numbers = |window: &Window| {
        let (key, loaded, _) = state(window).document.focused().expect("a curve");
        let energies: Vec<Option<u64>> =
            loaded.scan.energies[key.column].values.iter().map(|v| v.map(f64::to_bits)).collect();
        let lengths: Vec<u64> = loaded.scan.bond_lengths.iter().map(|r| r.to_bits()).collect();
        (loaded.scan.length_unit, loaded.scan.energies[key.column].unit, lengths, energies)
    };
    let read = numbers(&window);
    let first = grid().next().expect("a bond length") / 3.0 + 0.8;
    assert_eq!(
        (read.0, read.1, read.2[0]),
        (LengthUnit::Angstrom, EnergyUnit::Electronvolt, first.to_bits())
    );
    let path = folder.path().join("points.csv");
    let product = parabound::gui::product::Product::Points;
    give(&mut window, Command::ExportTo { product, path: path.clone(), overwrite: false });
    give(&mut window, Command::OpenPath(path));
    assert_eq!(state(&window).document.scans.len(), 2);
    assert_eq!(numbers(&window), read);
}

#[test]
fn the_bond_of_a_larger_molecule_is_asked_for() {
    let folder = tempfile::tempdir().expect("a folder");
    // Invented: three atoms, the first and the third at distance r.
    let frames: String = grid()
        .map(|r| format!("3\nenergy = {:.10} hartree\nH 0 0 0\nO 0 0.9 0\nCl 0 0 {r:.2}\n", morse(r)))
        .collect();
    let mut window = open_files(vec![write(folder.path(), "three.xyz", &frames)]);
    let problem = state(&window).view.problem.clone().expect("a question");
    assert!(problem.text.contains("3 atoms"), "{}", problem.text);
    window.get_by_role_and_label(Role::ComboBox, "to").click();
    window.run();
    window.get(by().label_contains("Cl")).click();
    window.run();
    shown(&mut window, "light_bond");
    press(&mut window, "Read this bond");
    assert!(state(&window).view.problem.is_none());
    let scan = &state(&window).document.scans[0].scan;
    assert!((scan.bond_lengths[8] - 1.27).abs() < 1e-9, "{:?}", scan.bond_lengths);
}

#[test]
fn a_column_is_ignored_and_brought_back() {
    let folder = tempfile::tempdir().expect("a folder");
    let rows: Vec<String> = grid().map(|r| format!("{r:.2},{:.10},{r:.1}", morse(r))).collect();
    let text = format!("R_angstrom,E_hartree,steps\n{}\n", rows.join("\n"));
    let mut window = open_files(vec![write(folder.path(), "steps.csv", &text)]);
    let properties = |window: &Window| state(window).document.scans[0].scan.properties.len();
    assert_eq!(properties(&window), 1);
    press(&mut window, "Columns …");
    for (choice, left) in [("ignored", 0), ("property", 1)] {
        window.get_by_role_and_label(Role::ComboBox, "Use of column steps").click();
        window.run();
        window.get_by_role_and_label(Role::Button, choice).click();
        window.run();
        assert_eq!(properties(&window), left, "{choice}");
    }
    press(&mut window, "Undo");
    assert_eq!(properties(&window), 0);
}

#[test]
fn a_curve_is_made_from_columns_and_undone() {
    let folder = tempfile::tempdir().expect("a folder");
    let rows: Vec<String> =
        grid().map(|r| format!("{r:.2},{:.10},{:.10}", morse(r), 0.001 * morse(r))).collect();
    let text = format!("R_angstrom,A_hartree,B_hartree\n{}\n", rows.join("\n"));
    let mut window = open_files(vec![write(folder.path(), "parts.csv", &text)]);
    press(&mut window, "Columns …");
    window.get_by_role_and_label(Role::TextInput, "recipe").focus();
    window.run();
    window.get_by_role_and_label(Role::TextInput, "recipe").type_text("sum = A + 2*D");
    window.run();
    let make =
        |window: &Window| window.get_by_role_and_label(Role::Button, "Make").accesskit_node().is_disabled();
    assert!(make(&window), "there is no column D");
    give(&mut window, Command::Reading(ReadingCommand::TypeRecipe("sum = A + 2*B".into())));
    assert!(!make(&window));
    shown(&mut window, "light_recipe");
    press(&mut window, "Make");
    let names = |window: &Window| -> Vec<String> {
        state(window).document.scans[0].scan.energies.iter().map(|e| e.name.clone()).collect()
    };
    assert_eq!(names(&window), ["A_hartree", "B_hartree", "sum"]);
    let value = state(&window).document.scans[0].scan.energies[2].values[0].expect("made");
    assert!((value - 1.002 * morse(0.95)).abs() < 1e-9);
    assert!(state(&window).document.focus.is_some_and(|f| f.column == 2), "the new curve is looked at");
    press(&mut window, "Remove the curve sum");
    assert_eq!(names(&window).len(), 2);
    press(&mut window, "Undo");
    assert_eq!(names(&window).len(), 3);
}

#[test]
fn refused_files_of_a_folder_are_told_on_request_and_what_is_left_out_is_said() {
    let folder = tempfile::tempdir().expect("a folder");
    for i in 0..1002 {
        write(folder.path(), &format!("a_{i:04}.csv"), "R_angstrom,E_hartree\n1.0,0.1\n1.1,0.0\n1.2,0.1\n");
    }
    let message = |window: &Window| state(window).view.message.clone().expect("a message").text;
    let empty = || open([1400.0, 900.0], egui::Theme::Light, Start { empty: true, ..Start::default() });
    let mut window = empty();
    give(&mut window, Command::OpenPath(folder.path().to_owned()));
    assert_eq!(state(&window).document.scans.len(), 1000);
    assert!(message(&window).contains("2 files of the folder not looked at"), "{}", message(&window));

    let folder = tempfile::tempdir().expect("a folder");
    write(folder.path(), "good.csv", &table("R_angstrom,E_hartree", morse));
    for i in 0..6 {
        write(folder.path(), &format!("bad_{i}.csv"), "no table");
    }
    let mut window = empty();
    give(&mut window, Command::OpenPath(folder.path().to_owned()));
    assert!(message(&window).contains("bad_3.csv and 2 more"), "{}", message(&window));
    press(&mut window, "Show why");
    assert!(state(&window).view.problem.as_ref().is_some_and(|p| p.file_name == "bad_0.csv"));
    assert_eq!(state(&window).view.reading.waiting.len(), 5);
}

/// What is copied elsewhere comes by the menu too; the desktop is asked for it.
#[test]
fn the_menu_pastes_a_table() {
    let mut window = open([1400.0, 900.0], egui::Theme::Light, Start::default());
    press(&mut window, "File");
    window.get_by_role_and_label(Role::Button, "Paste a table").click();
    let mut asked = false;
    for _ in 0..4 {
        window.step();
        let output = &window.output().viewport_output[&egui::ViewportId::ROOT];
        asked |= output.commands.contains(&egui::ViewportCommand::RequestPaste);
    }
    assert!(asked);
}
