//! Window and command line come to the same findings, whatever the unit of the scan.

use crate::harness::{give, open, state};
use eframe::egui;
use parabound::fit::Window;
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::settings::Settings;
use parabound::units::LengthUnit;
use std::path::{Path, PathBuf};

fn scan(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../sample-scans").join(name)
}

/// The findings of one curve as the command line makes them.
fn headless(path: &Path, settings: &Settings) -> String {
    let bytes = std::fs::read(path).expect("the scan");
    let name = path.file_name().expect("a name").to_string_lossy().into_owned();
    let scan = parabound::scan::read::read_scan(&name, &bytes, &settings.read).expect("a scan");
    let findings = parabound::study::study(&scan, settings).expect("a study");
    parabound::export::json::findings_to_string(&findings)
}

#[test]
fn window_and_command_line_find_the_same() {
    for (file, atoms, curve) in [
        ("h2_fci.csv", "1H,1H", None),
        ("lih_X_A.csv", "7Li,1H", Some("E_A")),
        ("co_ccsdt_bohr.dat", "12C,16O", None),
    ] {
        let path = scan(file);
        let mut settings = Settings::default();
        settings.masses.atoms = Some(parabound::species::parse_atoms(atoms).expect("atoms"));
        settings.curve = curve.map(str::to_owned);
        let start = Start { files: vec![path.clone()], settings: settings.clone(), ..Start::default() };
        let window = open([1400.0, 900.0], egui::Theme::Dark, start);
        let (key, loaded, of_window) = state(&window).document.focused().expect("a curve");
        assert!(curve.is_none_or(|c| loaded.scan.energies[key.column].name.contains(c)));
        let study = state(&window).study().expect("a study");
        let text = parabound::export::json::findings_to_string(&study.findings);
        // The window names the column of the curve it shows; nothing else may differ.
        settings.curve.clone_from(&of_window.curve);
        assert_eq!(text, headless(&path, &settings), "{file}");
    }
}

/// Errors resampled by a button are written as the option would have them.
#[test]
fn resampled_errors_are_in_the_file_that_is_written() {
    let path = scan("h2_fci.csv");
    let mut settings = Settings::default();
    settings.masses.atoms = Some(parabound::species::parse_atoms("1H,1H").expect("atoms"));
    let start = Start { files: vec![path.clone()], settings: settings.clone(), ..Start::default() };
    let mut window = open([1400.0, 900.0], egui::Theme::Dark, start);
    for command in [Command::SetRepeats(50), Command::Resample] {
        give(&mut window, command);
    }
    settings.curve.clone_from(&state(&window).study().expect("a study").findings.settings.curve);
    settings.fits.bootstrap = Some(parabound::fit::BootstrapSettings { repeats: 50, ..Default::default() });
    let written = parabound::gui::extras::with_resampled(state(&window)).expect("findings");
    assert_eq!(parabound::export::json::findings_to_string(&written), headless(&path, &settings));
}

/// A window given in another unit than the scan's: edges on the plot, points counted, fit.
#[test]
fn a_window_in_angstrom_on_a_scan_in_bohr() {
    let path = scan("co_ccsdt_bohr.dat");
    let mut settings = Settings::default();
    settings.masses.atoms = Some(parabound::species::parse_atoms("12C,16O").expect("atoms"));
    settings.fits.window = Some(Window { from: 1.05, to: 1.25, unit: LengthUnit::Angstrom });
    let start = Start { files: vec![path], settings, ..Start::default() };
    let mut window = open([1400.0, 900.0], egui::Theme::Dark, start);
    let count = |window: &crate::harness::Window| {
        let shown = state(window).window().expect("a window");
        let study = state(window).study().expect("a study");
        assert_eq!(shown.unit, LengthUnit::Bohr, "edges snap in the scan's own unit");
        let inside = study.pictures.points.iter().filter(|p| state(window).in_window(p)).count();
        let marked = study.pictures.points.iter().filter(|p| p.in_window).count();
        let fitted = crate::harness::harmonic_fit(study).points;
        assert_eq!((inside, marked), (fitted, fitted));
        fitted
    };
    let before = count(&window);
    // Moved as the hand does it, in the scan's unit.
    let shown = state(&window).window().expect("a window");
    let wider = Window { to: shown.to + 0.2, ..shown };
    let ctx = window.ctx.clone();
    window.state_mut().0.give(Command::SetWindow { window: wider, resting: true }, &ctx);
    window.run();
    assert!(count(&window) > before);
}

/// A picture of the window ends with the status that a headless study of the same file ends with.
#[test]
fn pictures_of_the_window_end_with_the_status_of_the_study() {
    let folder = tempfile::tempdir().expect("a folder");
    let out = folder.path().join("window.png");
    let write = |name: &str, text: &str| {
        let path = folder.path().join(name);
        std::fs::write(&path, text).expect("written");
        path
    };
    // Invented numbers: no unit; then a wall without a minimum.
    let refused = write("open.csv", "R,E\n1.0,0.3\n1.1,0.2\n1.2,0.1\n1.3,0.2\n1.4,0.3\n");
    let falling: String =
        (0..12).map(|i| format!("{},{}\n", 1.0 + 0.1 * f64::from(i), -0.01 * f64::from(i))).collect();
    let impossible = write("wall.csv", &format!("r_bohr,E_hartree\n{falling}"));
    let picture = |file: PathBuf, overwrite: bool| {
        parabound::gui::run(parabound::headless::WindowArgs {
            files: vec![file],
            picture: Some(out.clone()),
            size: Some((500, 400)),
            overwrite,
            ..Default::default()
        })
    };
    assert_eq!(picture(scan("lih_X_A.csv"), false), 0);
    let first = std::fs::read(&out).expect("a picture");
    assert_eq!(picture(scan("lih_X_A.csv"), false), 3, "a picture is in the way");
    assert_eq!(std::fs::read(&out).expect("still there"), first);
    assert_eq!(picture(refused, true), 3);
    assert_eq!(picture(impossible, true), 4);
    assert_ne!(std::fs::read(&out).expect("a picture of the refusal"), first);
}
