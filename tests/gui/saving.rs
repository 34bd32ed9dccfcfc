//! Study files and unsaved work: saved, opened, restored, never replaced unasked.

use crate::harness::{Window, give, open, open_sample, press, state};
use eframe::egui::{self, Key, Modifiers, Theme, accesskit::Role};
use egui_kittest::kittest::Queryable as _;
use parabound::export::json::findings_to_string;
use parabound::figure::GaugeMeasure;
use parabound::gui::Program as _;
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::state::{Page, Preset, Strip, Zoom};
use parabound::study_file::StudyFile;
use std::path::{Path, PathBuf};

fn open_file(path: &Path) -> Window {
    open([1400.0, 900.0], Theme::Dark, Start { files: vec![path.to_owned()], ..Start::default() })
}

fn message(window: &Window) -> String {
    state(window).view.message.clone().map(|m| m.text).unwrap_or_default()
}

fn findings(window: &Window) -> String {
    findings_to_string(&state(window).study().expect("a study").findings)
}

/// A copy of a sample scan in a folder of its own.
fn scan_in(folder: &Path) -> PathBuf {
    let path = folder.join("h2.csv");
    let from = concat!(env!("CARGO_MANIFEST_DIR"), "/../../sample-scans/h2_fci.csv");
    std::fs::copy(from, &path).expect("copied");
    path
}

#[test]
fn a_study_is_saved_by_menu_and_opens_as_it_was() {
    let folder = tempfile::tempdir().expect("a folder");
    let scan = scan_in(folder.path());
    let mut window = open_file(&scan);
    let row = state(&window).study().expect("a study").findings.source.points[7].row;
    for command in [
        Command::SetTolerance { tolerance: 0.1 + 0.2, resting: true },
        Command::SetAside(row),
        Command::SetReason { row, reason: "a test".into() },
        Command::ShowPage(Page::Levels),
        Command::Zoom(Preset::WholeWell),
        Command::ShowGauge(GaugeMeasure::ForcePercent),
        Command::ShowStrip(Strip::Residuals),
        Command::PinLevel(Some(2)),
        Command::KeepLevel(4, true),
    ] {
        give(&mut window, command);
    }
    press(&mut window, "File");
    press(&mut window, "Save study");
    window.get_by_role_and_label(Role::TextInput, "Path").focus();
    window.run();
    window.key_press_modifiers(Modifiers::COMMAND, Key::A);
    // The ending is put on where there is none.
    let path = folder.path().join("kept.parabound");
    let typed = folder.path().join("kept").display().to_string();
    window.get_by_role_and_label(Role::TextInput, "Path").type_text(&typed);
    window.run();
    window.key_press(Key::Enter);
    window.run();
    assert!(message(&window).contains("kept.parabound"), "{}", message(&window));

    let again = open_file(&path);
    assert_eq!(findings(&again), findings(&window));
    let (a, b) = (state(&again), state(&window));
    assert_eq!(
        a.document.settings.values().collect::<Vec<_>>(),
        b.document.settings.values().collect::<Vec<_>>()
    );
    assert_eq!((a.view.page, a.view.strip, a.view.pinned_level), (Page::Levels, Strip::Residuals, Some(2)));
    assert_eq!((a.view.gauge, a.outstanding()), (GaugeMeasure::ForcePercent, vec![2, 4]));
    assert_eq!(a.zoom(), Zoom::Preset(Preset::WholeWell));
    assert_eq!(a.history.undo_name(), None, "what the window starts with is no step");
    let text = std::fs::read_to_string(&path).expect("read");
    let file = StudyFile::from_bytes(text.as_bytes()).expect("ours");
    assert_eq!(file.scans[0].path.as_deref(), Some("h2.csv"), "both can be moved together");
}

#[test]
fn saving_again_asks_nothing_and_never_replaces_what_others_wrote() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("s.parabound");
    std::fs::write(&path, "precious").expect("written");
    let mut window = open_sample();
    give(&mut window, Command::SaveStudyTo { path: path.clone(), overwrite: false });
    assert!(message(&window).contains("was left as it is"), "{}", message(&window));
    assert_eq!(std::fs::read_to_string(&path).expect("read"), "precious");
    press(&mut window, "Replace it");
    let first = std::fs::read_to_string(&path).expect("read");
    StudyFile::from_bytes(first.as_bytes()).expect("replaced, as was asked");

    give(&mut window, Command::SetTolerance { tolerance: 0.2, resting: true });
    window.key_press_modifiers(Modifiers::COMMAND, Key::S);
    window.run();
    let second = std::fs::read_to_string(&path).expect("read");
    assert!(first != second && message(&window).contains("saved"), "{}", message(&window));

    // Another window saves the same file; this one notices before it writes.
    std::fs::write(&path, &first).expect("written");
    give(&mut window, Command::SetTolerance { tolerance: 0.3, resting: true });
    give(&mut window, Command::SaveStudy);
    assert!(message(&window).contains("another program"), "{}", message(&window));
    assert_eq!(std::fs::read_to_string(&path).expect("read"), first);
    give(&mut window, Command::ReopenStudy);
    let tolerance = |w: &Window| state(w).document.focused().map(|f| f.2.reach.tolerance);
    assert_eq!(tolerance(&window), Some(0.05));
    press(&mut window, "Undo");
    assert_eq!(tolerance(&window), Some(0.3));
}

#[test]
fn a_scan_that_changed_or_went_is_shown_as_it_was() {
    let folder = tempfile::tempdir().expect("a folder");
    let scan = scan_in(folder.path());
    let mut window = open_file(&scan);
    let before = findings(&window);
    let path = folder.path().join("s.parabound");
    give(&mut window, Command::SaveStudyTo { path: path.clone(), overwrite: false });

    let text = std::fs::read_to_string(&scan).expect("read");
    let cut: Vec<&str> = text.lines().collect();
    std::fs::write(&scan, cut[..cut.len() - 1].join("\n")).expect("written");
    let mut changed = open_file(&path);
    assert_eq!(findings(&changed), before);
    assert!(message(&changed).contains("have changed"), "{}", message(&changed));
    assert_eq!(changed.query_all_by_label("Read again").count(), 2, "by the curves and by the message");
    let key = state(&changed).document.scans[0].key;
    give(&mut changed, Command::Reload(key));
    assert_ne!(findings(&changed), before);

    std::fs::remove_file(&scan).expect("removed");
    assert_eq!(findings(&open_file(&path)), before);
}

#[test]
fn damaged_study_files_are_refused_with_words() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("s.parabound");
    let mut window = open_sample();
    give(&mut window, Command::SaveStudyTo { path: path.clone(), overwrite: false });
    let text = std::fs::read_to_string(&path).expect("read");
    let missing = text.replace("\"sample\": true", "\"sample\": false").replace("lih_X_A.csv", "gone.csv");
    for (content, word) in [
        (text[..text.len() / 2].to_owned(), "JSON"),
        (text.replace("\"version\": 1", "\"version\": 99"), "99"),
        (text.replace("\"tolerance\"", "\"tollerance\""), "tollerance"),
    ] {
        std::fs::write(&path, content).expect("written");
        let window = open_file(&path);
        let told = state(&window).view.problem.clone().map(|p| p.text).unwrap_or_default();
        assert!(told.contains(word), "{told}");
    }
    std::fs::write(&path, missing).expect("written");
    let window = open_file(&path);
    assert!(message(&window).contains("gone.csv"), "{}", message(&window));
    assert!(state(&window).document.scans.is_empty());
}

#[test]
fn default_settings_come_back_by_name() {
    let mut window = open_sample();
    let before = findings(&window);
    give(&mut window, Command::SetTolerance { tolerance: 0.2, resting: true });
    press(&mut window, "File");
    press(&mut window, "Default settings");
    assert_eq!(findings(&window), before);
    assert_eq!(state(&window).history.undo_name(), Some("default settings"));
    assert!(state(&window).can(&Command::ResetSettings).is_err());
}

/// A window that keeps its work in this folder.
fn kept(folder: &Path) -> Window {
    let start = Start { state_folder: Some(folder.to_owned()), ..Start::default() };
    open([1400.0, 900.0], Theme::Dark, start)
}

fn work_files(folder: &Path) -> usize {
    let names = std::fs::read_dir(folder).expect("listed").map(|e| e.expect("entry").path());
    names.filter(|p| p.extension().is_some_and(|e| e == "parabound")).count()
}

#[test]
fn work_left_by_two_windows_at_once_is_offered_and_restored() {
    let folder = tempfile::tempdir().expect("a folder");
    let (mut a, mut b) = (kept(folder.path()), kept(folder.path()));
    give(&mut a, Command::SetTolerance { tolerance: 0.11, resting: true });
    give(&mut b, Command::SetTolerance { tolerance: 0.22, resting: true });
    // Ended without closing, as by a crash; what was noted last is on disk then.
    drop((a, b));
    assert_eq!(work_files(folder.path()), 2);
    let mut window = kept(folder.path());
    assert_eq!(state(&window).leftovers.len(), 2);
    assert!(state(&window).leftovers[0].text.contains("lih_X_A.csv"));
    // What one window holds in its hands another does not offer.
    assert!(state(&kept(folder.path())).leftovers.is_empty());
    let tolerance = |w: &Window| state(w).document.focused().map(|f| f.2.reach.tolerance);
    press(&mut window, "Restore");
    let first = tolerance(&window);
    press(&mut window, "Restore");
    let mut both = [first, tolerance(&window)];
    both.sort_by(|a, b| a.partial_cmp(b).expect("numbers"));
    assert_eq!(both, [Some(0.11), Some(0.22)]);
    press(&mut window, "Undo");
    assert_eq!(tolerance(&window), first, "restoring can be undone");
    drop(window);
    let mut window = kept(folder.path());
    assert_eq!(state(&window).leftovers.len(), 1, "what was restored is part of the later work");
    press(&mut window, "Not now");
    assert!(state(&window).leftovers.is_empty());
    window.state_mut().0.on_exit();
    drop(window);
    let mut window = kept(folder.path());
    press(&mut window, "Discard");
    window.state_mut().0.on_exit();
    drop(window);
    assert_eq!(work_files(folder.path()), 0);
}

#[test]
fn a_window_closed_with_nothing_unsaved_leaves_nothing() {
    let folder = tempfile::tempdir().expect("a folder");
    let mut window = kept(folder.path());
    let path = folder.path().join("mine").with_extension("parabound");
    give(&mut window, Command::SetTolerance { tolerance: 0.2, resting: true });
    give(&mut window, Command::SaveStudyTo { path: path.clone(), overwrite: false });
    window.state_mut().0.on_exit();
    drop(window);
    assert_eq!(work_files(folder.path()), 1, "only the study that was saved");
    // Closed with a change that was not saved: offered the next time, with no question asked.
    let mut window = kept(folder.path());
    give(&mut window, Command::OpenPath(path.clone()));
    give(&mut window, Command::SetTolerance { tolerance: 0.3, resting: true });
    window.state_mut().0.on_exit();
    drop(window);
    let mut window = kept(folder.path());
    press(&mut window, "Restore");
    assert_eq!(state(&window).document.focused().map(|f| f.2.reach.tolerance), Some(0.3));
    give(&mut window, Command::SaveStudy);
    assert!(
        message(&window).contains(&path.display().to_string()),
        "it knows its file: {}",
        message(&window)
    );
    // Files used last are there the next time.
    window.run();
    drop(window);
    let window = kept(folder.path());
    assert_eq!(state(&window).recent.first().map(PathBuf::as_path), Some(path.as_path()));
}

#[test]
fn recent_files_are_opened_from_the_menu() {
    let folder = tempfile::tempdir().expect("a folder");
    let scan = scan_in(folder.path());
    let mut window = open_sample();
    give(&mut window, Command::OpenPath(scan));
    give(&mut window, Command::CloseScan);
    press(&mut window, "File");
    window.get_by_role_and_label(egui::accesskit::Role::Button, "Recent files").hover();
    window.run();
    press(&mut window, "Recent files");
    press(&mut window, "h2.csv");
    assert_eq!(state(&window).document.scans.len(), 2);
}

/// What is looked at comes back with the study: axes, densities, J, the part of a page, the comparison.
#[test]
fn what_is_looked_at_is_saved_and_comes_back() {
    use parabound::export::compare::Quantity;
    use parabound::gui::densities::DensityView;
    use parabound::gui::state::{AxisView, LevelsPart, Reference};
    use parabound::units::{EnergyUnit, LengthUnit};
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("seen.parabound");
    let mut window = open_sample();
    let other = *state(&window).document.settings.keys().last().expect("a second curve");
    let axes = AxisView { length: LengthUnit::Bohr, displacement: true, energy: EnergyUnit::Electronvolt };
    let densities = DensityView {
        classical: true,
        averaged: true,
        width_angstrom: Some(0.123),
        height: 2.5,
        ..DensityView::default()
    };
    for command in [
        Command::SetAxes(axes),
        Command::SetDensities(densities),
        Command::ShowLevelsPart(LevelsPart::Isotopes),
        Command::ShowJ(7),
        Command::SetKelvin(512.5),
        Command::SetReference(Some(Reference::Curve(other))),
        Command::SortComparison(Some((Quantity::OmegaE, true))),
        Command::ShowComparison(true),
        Command::SaveStudyTo { path: path.clone(), overwrite: false },
    ] {
        give(&mut window, command);
    }
    let again = open_file(&path);
    let view = &state(&again).view;
    assert_eq!((view.axes, view.densities, view.j), (axes, densities, 7));
    assert_eq!((view.page, view.levels_part), (Page::Levels, LevelsPart::Isotopes));
    assert_eq!(view.kelvin(), 512.5);
    let Some(Reference::Curve(key)) = view.comparison.reference else { panic!("{:?}", view.comparison) };
    let document = &state(&again).document;
    assert_eq!(document.curve_name(key, false), state(&window).document.curve_name(other, false));
    assert_eq!(view.comparison.sort, Some((Quantity::OmegaE, true)));
    assert!(view.comparison.open);
    // Words and numbers that are not known are passed over.
    let text = std::fs::read_to_string(&path).expect("written");
    let odd = text
        .replace("\"bohr\"", "\"ell\"")
        .replace("\"classical\"", "\"brown\"")
        .replace("Isotopes", "Nowhere")
        .replace("512.5", "-4.0");
    std::fs::write(&path, odd).expect("written");
    let view = &state(&open_file(&path)).view.clone();
    assert_eq!((view.axes.length, view.levels_part), (LengthUnit::Angstrom, LevelsPart::Table));
    assert!(view.densities.averaged && !view.densities.classical);
    assert_eq!(view.kelvin(), 298.15);
}
