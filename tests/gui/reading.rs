//! Getting scans in: units by their row, folders, the clipboard, columns, files read again.

use crate::harness::{Window, give, open, open_sample, press, state};
use eframe::egui::{self, Key, Modifiers, accesskit::Role, accesskit::Toggled};
use egui_kittest::kittest::{Queryable as _, by};
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::state::Page;
use parabound::units::{EnergyUnit, LengthUnit};
use std::path::{Path, PathBuf};

/// Invented numbers: a parabola with a cubic term, and a second column with twice its height.
fn table(header: &str) -> String {
    let row = |i: i32| {
        let x = -0.3 + 0.03 * f64::from(i);
        let energy = 0.5 * x * x - 0.3 * x.powi(3);
        format!("{:.3},{energy:.8},{:.8}", 1.3 + x, 2.0 * energy)
    };
    let rows: Vec<String> = (0..20).map(row).collect();
    format!("{header}\n{}\n", rows.join("\n"))
}

fn write(folder: &Path, name: &str, header: &str) -> PathBuf {
    let path = folder.join(name);
    std::fs::write(&path, table(header)).expect("written");
    path
}

fn open_file(path: PathBuf) -> Window {
    open([1400.0, 900.0], egui::Theme::Dark, Start { files: vec![path], ..Start::default() })
}

#[test]
fn units_are_chosen_by_the_row_that_says_what_they_would_mean() {
    let folder = tempfile::tempdir().expect("a folder");
    let mut window = open_file(write(folder.path(), "plain.csv", "R,E,E2"));
    let problem = state(&window).view.problem.clone().expect("a question");
    assert_eq!(problem.meanings.len(), LengthUnit::ALL.len() * EnergyUnit::ALL.len());
    let row = by().role(Role::Button).label_contains("Bond lengths in Å, energies in hartree");
    window.get(row).click();
    window.run();
    assert!(state(&window).view.problem.is_none());
    let curve = state(&window).study().and_then(|s| s.findings.curve.clone()).expect("a curve");
    let said =
        problem.meanings.iter().find(|m| m.length == LengthUnit::Angstrom && m.energy == EnergyUnit::Hartree);
    let r_e = LengthUnit::Angstrom.from_bohr(curve.r_e_bohr.value);
    assert!((said.expect("this choice").r_e_angstrom - r_e).abs() < 1e-9);
}

#[test]
fn the_notice_without_a_mass_leads_to_the_atoms() {
    let folder = tempfile::tempdir().expect("a folder");
    let files = vec![write(folder.path(), "plain.csv", "R_angstrom,E_hartree,E2_hartree")];
    let mut window = open([1000.0, 700.0], egui::Theme::Dark, Start { files, ..Start::default() });
    assert!(window.query_by_label("First atom choose …").is_none(), "the left panel is folded");
    give(&mut window, Command::ShowAllNotices(true));
    press(&mut window, "Name the atoms");
    let atom = window.get_by_role_and_label(Role::Button, "First atom choose …");
    assert!(atom.is_focused(), "the first atom can be chosen at once");
}

#[test]
fn a_folder_opens_what_can_be_read_in_it_as_one_step() {
    let folder = tempfile::tempdir().expect("a folder");
    write(folder.path(), "b.csv", "R_angstrom,E_hartree,E2_hartree");
    write(folder.path(), "a.csv", "R_angstrom,E_hartree,E2_hartree");
    std::fs::write(folder.path().join("notes.md"), "no scan").expect("written");
    let mut window = open_sample();
    give(&mut window, Command::OpenPath(folder.path().to_owned()));
    let names: Vec<_> = state(&window).document.scans.iter().map(|s| s.scan.file_name.clone()).collect();
    assert_eq!(names, ["lih_X_A.csv", "a.csv", "b.csv"]);
    let message = state(&window).view.message.clone().expect("a message");
    assert!(message.text.contains("2 files read") && message.text.contains("notes.md"), "{message:?}");
    press(&mut window, "Undo");
    assert_eq!(state(&window).document.scans.len(), 1);
}

#[test]
fn a_pasted_table_is_a_scan() {
    let mut window = open_sample();
    window.event(egui::Event::Paste(table("R_angstrom,E_hartree,E2_hartree")));
    window.run();
    assert_eq!(state(&window).document.scans.len(), 2);
    assert!(state(&window).study().is_some_and(|s| s.findings.source.file_name == "pasted table"));
    window.event(egui::Event::Paste("no table".into()));
    window.run();
    assert!(state(&window).view.problem.is_some(), "what is no table is said to be none");
}

#[test]
fn another_unit_in_the_columns_window_reads_the_file_again() {
    let folder = tempfile::tempdir().expect("a folder");
    let mut window = open_file(write(folder.path(), "two.csv", "R_angstrom,E_hartree,E2_hartree"));
    let r_e = |window: &Window| {
        let study = state(window).study().expect("a study");
        study.findings.curve.as_ref().expect("a curve").r_e_bohr.value
    };
    let before = r_e(&window);
    press(&mut window, "Columns …");
    let key = state(&window).view.columns_of.expect("the window is open");
    assert!(window.query_by_label("Use of column E2_hartree").is_some());
    let mut read = state(&window).document.scans[0].start.read.clone();
    read.length_unit = Some(LengthUnit::Bohr);
    read.energy_columns = Some(vec!["E2_hartree".into()]);
    give(&mut window, Command::ReadWith { scan: key, read });
    assert!((r_e(&window) - before * 0.529_177_210_544).abs() < 1e-6 * before);
    assert_eq!(state(&window).document.scans[0].scan.energies.len(), 1);
    press(&mut window, "Done");
    press(&mut window, "Undo");
    assert_eq!(r_e(&window), before);
    assert_eq!(state(&window).document.scans[0].scan.energies.len(), 2);
}

#[test]
fn a_file_read_again_keeps_its_settings() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = write(folder.path(), "plain.csv", "R_angstrom,E_hartree,E2_hartree");
    let mut window = open_file(path.clone());
    give(&mut window, Command::SetAside(3));
    let text = std::fs::read_to_string(&path).expect("there").replace("1.300,", "1.301,");
    std::fs::write(&path, text).expect("written");
    let key = state(&window).document.scans[0].key;
    give(&mut window, Command::Reload(key));
    let (_, loaded, settings) = state(&window).document.focused().expect("a curve");
    assert!(loaded.scan.bond_lengths.contains(&1.301));
    assert_eq!(settings.set_aside.len(), 1);
    assert!(!state(&window).is_stale(), "the new file is studied");
    press(&mut window, "Undo");
    let (_, loaded, _) = state(&window).document.focused().expect("a curve");
    assert!(loaded.scan.bond_lengths.contains(&1.3) && !state(&window).is_stale());
}

#[test]
fn a_point_is_weighted_and_set_aside_with_a_reason_on_its_page() {
    let mut window = open_sample();
    window.key_press_modifiers(Modifiers::ALT, Key::Num1);
    window.run();
    assert_eq!(state(&window).view.page, Page::Scan);
    window.get(by().role(Role::Button).label_contains("Point 12: ")).click();
    window.run();
    assert_eq!(state(&window).view.selected_row, Some(11));
    assert!(state(&window).view.pointed_angstrom.is_some(), "the plot shows it");
    give(&mut window, Command::SetWeight { row: 11, weight: 0.25 });
    let weight = |window: &Window| {
        let points = &state(window).study().expect("a study").findings.source.points;
        points.iter().find(|p| p.row == 11).expect("row 12").weight
    };
    assert_eq!(weight(&window), 0.25);
    press(&mut window, "Undo");
    assert_eq!(weight(&window), 1.0);
    press(&mut window, "Set aside");
    give(&mut window, Command::SetReason { row: 11, reason: "wrong root".into() });
    let points = &state(&window).study().expect("a study").findings.source.points;
    assert_eq!(
        points.iter().find(|p| p.row == 11).and_then(|p| p.why_not.clone()).as_deref(),
        Some("wrong root")
    );
    press(&mut window, "Use again");
    assert!(state(&window).document.focused().is_some_and(|(_, _, s)| s.set_aside.is_empty()));
}

#[test]
fn the_energy_of_the_separated_atoms_gives_the_depth_and_undo_takes_it_back() {
    let mut window = open_sample();
    let depth = |window: &Window| {
        state(window).study().expect("a study").findings.constants.well_depth_per_cm.as_ref().map(|d| d.value)
    };
    assert_eq!(depth(&window), None);
    window.get_by_role_and_label(Role::CheckBox, "energy given").click();
    window.run();
    let given = depth(&window).expect("the depth is known now");
    assert!(given > 15_000.0, "{given}");
    give(&mut window, Command::Zoom(parabound::gui::state::Preset::WholeWell));
    let name = "Energy of the separated atoms above the minimum in wavenumbers";
    let grip = window.get_by_role_and_label(Role::Slider, name).rect().right_center() - egui::vec2(26.0, 0.0);
    crate::harness::drag(&mut window, grip, grip - egui::vec2(0.0, 20.0));
    assert!(depth(&window).expect("still known") > given + 100.0);
    press(&mut window, "Undo");
    assert_eq!(depth(&window), Some(given));
    press(&mut window, "Undo");
    assert_eq!(depth(&window), None);
}

#[test]
fn a_notice_is_read_in_full_by_a_click() {
    let mut window = open_sample();
    let text = {
        let notice = &state(&window).study().expect("a study").findings.notices[0];
        notice.text.split_whitespace().take(3).collect::<Vec<_>>().join(" ")
    };
    for expected in [Some(0), None] {
        window.get(by().role(Role::Button).label_contains(&text)).click();
        window.run();
        assert_eq!(state(&window).view.open_notice, expected);
    }
}

/// Two hundred files, and two hundred columns of one: a few lines of the list are drawn, and the curve in focus is
/// among them. The times are printed, not judged.
#[test]
fn two_hundred_curves_are_listed_without_drawing_them_all() {
    let folder = tempfile::tempdir().expect("a folder");
    for i in 0..200 {
        write(folder.path(), &format!("scan_{i:03}.csv"), "R_angstrom,E_hartree,E2_hartree");
    }
    let wide = tempfile::tempdir().expect("a folder");
    let header: Vec<String> = (0..200).map(|i| format!("E{i}_hartree")).collect();
    let rows: Vec<String> = (0..40)
        .map(|row| {
            let x = 0.03 * f64::from(row) - 0.3;
            let cells: Vec<String> = (0..200)
                .map(|i| format!("{:.9}", (0.4 + 0.001 * f64::from(i)) * x * x - 0.3 * x.powi(3)))
                .collect();
            format!("{:.3},{}", 1.3 + x, cells.join(","))
        })
        .collect();
    let file = wide.path().join("wide.csv");
    std::fs::write(&file, format!("R_angstrom,{}\n{}\n", header.join(","), rows.join("\n")))
        .expect("written");
    for (path, curves) in [(folder.path(), 400), (file.as_path(), 200)] {
        let mut window = open([1400.0, 900.0], egui::Theme::Light, Start { empty: true, ..Start::default() });
        let start = std::time::Instant::now();
        give(&mut window, Command::OpenPath(path.to_owned()));
        let opened = start.elapsed();
        assert_eq!(state(&window).document.settings.len(), curves);
        let drawn = window.query_all(by().role(Role::RadioButton).label_contains("Curve ")).count();
        assert!((1..40).contains(&drawn), "{drawn}");
        let start = std::time::Instant::now();
        for _ in 0..20 {
            give(&mut window, Command::StepCurve(7));
            assert!(!state(&window).is_stale(), "it is studied");
            window.run();
            let chosen = by().role(Role::RadioButton).predicate(|n| n.toggled() == Some(Toggled::True));
            assert_eq!(window.query_all(chosen).count(), 1, "the curve in focus is in sight");
        }
        let switched = start.elapsed() / 20;
        let start = std::time::Instant::now();
        for _ in 0..50 {
            window.step();
        }
        println!(
            "{curves} curves: opened in {opened:.1?}, a switch {switched:.1?}, a frame {:.1?}",
            start.elapsed() / 50
        );
    }
}
