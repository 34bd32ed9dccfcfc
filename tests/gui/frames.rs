//! Every sample through a few frames at every size and in both themes; files that are none.

use crate::harness::{give, open, state};
use eframe::egui::{Theme, vec2};
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::samples::SAMPLES;
use parabound::gui::state::{CurveKey, Page, Preset, Strip};

#[test]
fn every_sample_and_curve_is_drawn() {
    for (index, sample) in SAMPLES.iter().enumerate() {
        let theme = if index % 2 == 0 { Theme::Dark } else { Theme::Light };
        let mut window = open([1000.0, 700.0], theme, Start { empty: true, ..Start::default() });
        give(&mut window, Command::OpenSample(index));
        assert!(
            state(&window).view.problem.is_none(),
            "{}: {:?}",
            sample.file_name,
            state(&window).view.problem
        );
        let curves: Vec<CurveKey> = state(&window).document.settings.keys().copied().collect();
        for key in curves {
            give(&mut window, Command::Focus(key));
            let failure = state(&window).failure().map(str::to_owned);
            assert_eq!(failure, None, "{} column {}", sample.file_name, key.column);
            for preset in Preset::ALL {
                give(&mut window, Command::Zoom(preset));
            }
            for strip in [Strip::Residuals, Strip::Gauge] {
                give(&mut window, Command::ShowStrip(strip));
            }
        }
    }
}

#[test]
fn any_size_is_survived() {
    let mut window = open([1400.0, 900.0], Theme::Dark, Start::default());
    for page in Page::ALL {
        give(&mut window, Command::ShowPage(page));
        for size in [
            [1400.0, 900.0],
            [1000.0, 700.0],
            [500.0, 400.0],
            [300.0, 900.0],
            [900.0, 120.0],
            [40.0, 40.0],
            [1.0, 1.0],
            [0.0, 0.0],
        ] {
            window.set_size(vec2(size[0], size[1]));
            window.run_steps(3);
        }
    }
}

#[test]
fn pages_are_drawn_for_a_scan_without_atoms() {
    let mut window = open([1400.0, 900.0], Theme::Light, Start { empty: true, ..Start::default() });
    // The bond in water names no pair of atoms: no mass, no levels, and the window says so.
    let water = SAMPLES.iter().position(|s| s.file_name.starts_with("water")).expect("a sample");
    give(&mut window, Command::OpenSample(water));
    let study = state(&window).study().expect("a study");
    assert!(study.findings.masses.is_none() && study.findings.levels.is_empty());
    assert!(study.findings.reach.is_some());
    for page in Page::ALL {
        give(&mut window, Command::ShowPage(page));
    }
    give(&mut window, Command::SetReducedMass(Some(0.948)));
    assert!(!state(&window).study().expect("a study").findings.levels.is_empty());
}

#[test]
fn files_that_are_no_scans_are_refused_with_words() {
    let folder = tempfile::tempdir().expect("a folder");
    let mut window = open([1000.0, 700.0], Theme::Dark, Start { empty: true, ..Start::default() });
    let contents: [(&str, &[u8]); 4] = [
        ("empty.csv", b""),
        ("words.txt", b"no numbers here\n"),
        ("noise.bin", &[0, 159, 146, 150, 7]),
        ("one.csv", b"R_A,E_hartree\n1.0,-1.0\n"),
    ];
    for (name, bytes) in contents {
        let path = folder.path().join(name);
        std::fs::write(&path, bytes).expect("written");
        give(&mut window, Command::OpenPath(path));
        let known = state(&window);
        let told = known.view.problem.as_ref().map(|p| p.text.clone());
        let stopped = known.study().is_some_and(|s| s.findings.impossible());
        assert!(told.is_some_and(|t| t.len() > 20) || stopped, "{name}");
        give(&mut window, Command::DropProblem);
    }
    give(&mut window, Command::OpenPath(folder.path().join("absent.csv")));
    assert!(state(&window).view.problem.as_ref().is_some_and(|p| p.text.contains("absent.csv")));
}
