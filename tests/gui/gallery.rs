//! Every page in both themes, in a wide, a narrow and a sharp window. With `PARABOUND_GALLERY=FOLDER`
//! the pictures are written there to be looked at.

use crate::harness::{Window, open, press, state};
use crate::invented::{grid, morse, table, write as write_file};
use eframe::egui::Theme;
use parabound::figure::{GaugeMeasure, ThermalQuantity};
use parabound::gui::app::Start;
use parabound::gui::command::Command;
use parabound::gui::densities::DensityView;
use parabound::gui::reading::ReadingCommand;
use parabound::gui::samples::SAMPLES;
use parabound::gui::state::{FitsPart, Page, Preset, ThermalView};
use parabound::scan::read::{LinePatterns, Match, ReadSettings};
use parabound::species::parse_atoms;
use parabound::thermal::ThermalSettings;
use parabound::units::{EnergyUnit, LengthUnit};
use std::path::PathBuf;

fn write(window: &mut Window, name: &str) {
    window.run();
    let Some(folder) = std::env::var_os("PARABOUND_GALLERY") else { return };
    let picture = window.render().expect("painted");
    picture.save(PathBuf::from(folder).join(format!("{name}.png"))).expect("written");
}

fn give(window: &mut Window, commands: &[Command]) {
    let ctx = window.ctx.clone();
    for command in commands {
        window.state_mut().0.give(command.clone(), &ctx);
        window.run();
    }
}

/// Theme, size, scale.
const KINDS: [(&str, Theme, [f32; 2], f32); 4] = [
    ("dark", Theme::Dark, [1400.0, 900.0], 1.0),
    ("light", Theme::Light, [1400.0, 900.0], 1.0),
    ("narrow", Theme::Light, [1000.0, 700.0], 1.0),
    ("sharp", Theme::Dark, [2000.0, 1400.0], 2.0),
];

#[test]
fn every_page_is_shown_in_every_kind_of_window() {
    for (kind, theme, size, scale) in KINDS {
        let mut window = open(size, theme, Start::default());
        window.ctx.set_pixels_per_point(scale);
        window.run();
        for page in Page::ALL {
            give(&mut window, &[Command::ShowPage(page)]);
            assert_eq!(state(&window).view.page, page);
            write(&mut window, &format!("{kind}_{}", page.name().to_lowercase()));
        }
        let all = DensityView { harmonic: true, morse: true, classical: true, ..DensityView::default() };
        let averaged = DensityView { averaged: true, classical: true, height: 2.0, ..DensityView::default() };
        for (name, level, densities) in [("densities", 1, all), ("averaged", 14, averaged)] {
            give(
                &mut window,
                &[
                    Command::ShowPage(Page::Levels),
                    Command::PinLevel(Some(level)),
                    Command::Zoom(if level > 5 { Preset::WholeWell } else { Preset::NearMinimum }),
                    Command::SetDensities(densities),
                ],
            );
            write(&mut window, &format!("{kind}_{name}"));
        }
        give(&mut window, &[Command::SetDensities(DensityView::default()), Command::PinLevel(Some(1))]);
        give(&mut window, &[Command::Zoom(Preset::NearMinimum), Command::ShowPage(Page::Reach)]);
        for (name, measure) in GaugeMeasure::ALL {
            give(&mut window, &[Command::ShowGauge(measure)]);
            write(&mut window, &format!("{kind}_gauge_{name}"));
        }
        give(&mut window, &[Command::ShowGauge(GaugeMeasure::EnergyPercent)]);
        let with_rotation = ThermalSettings { rotation: true, ..ThermalSettings::default() };
        let kept = [Command::KeepLevel(0, true), Command::KeepLevel(3, true)];
        give(&mut window, &kept);
        give(
            &mut window,
            &[
                Command::ShowPage(Page::Thermal),
                Command::SetKelvin(1500.0),
                Command::SetThermal(with_rotation),
                Command::SetThermalView(ThermalView {
                    quantity: ThermalQuantity::MeanSquareX,
                    density: true,
                }),
            ],
        );
        write(&mut window, &format!("{kind}_rotation"));
        give(&mut window, &[Command::Undo, Command::PinLevel(None), Command::PinLevel(Some(1))]);
        give(&mut window, &[Command::Zoom(Preset::NearMinimum), Command::ShowComparison(true)]);
        window.run();
        write(&mut window, &format!("{kind}_compare"));
        give(&mut window, &[Command::ShowComparison(false)]);
        for part in FitsPart::ALL {
            give(&mut window, &[Command::ShowPage(Page::Fits), Command::ShowFitsPart(part)]);
            write(&mut window, &format!("{kind}_fits_{}", part.name().to_lowercase().replace(' ', "_")));
        }
        rotation(&mut window, kind);
        let row = state(&window).study().expect("a study").findings.source.points[12].row;
        give(
            &mut window,
            &[
                Command::ShowPage(Page::Scan),
                Command::SelectPoint(Some(row)),
                Command::SetAside(row),
                Command::OpenNotice(Some(1)),
                Command::ShowAllNotices(true),
                Command::Zoom(Preset::WholeWell),
            ],
        );
        assert_eq!(state(&window).view.selected_row, Some(row));
        write(&mut window, &format!("{kind}_point_aside"));
        give(
            &mut window,
            &[
                Command::ShowLeft(true),
                Command::SetAsymptote { energy: Some(-7.98), resting: true },
                Command::ShowPage(Page::Constants),
            ],
        );
        write(&mut window, &format!("{kind}_asymptote"));
    }
}

/// The picture and the page of one J, and the other parts of the page of levels.
fn rotation(window: &mut Window, kind: &str) {
    use parabound::gui::state::LevelsPart;
    let pair = |text: &str| parabound::species::parse_atoms(text).expect("a pair");
    give(
        window,
        &[
            Command::SetRotation(vec![5, 10, 15, 20, 25, 30]),
            Command::SetIsotopologues(vec![pair("7Li,2H"), pair("6Li,1H")]),
            Command::SetTailSensitivity(true),
            Command::ShowJ(20),
        ],
    );
    let quasi = state(window).rotation().and_then(|(levels, _)| levels.quasi_bound.first()).map(|q| q.v);
    for part in LevelsPart::ALL {
        let zoom = if part == LevelsPart::Rotation { Preset::NearMinimum } else { Preset::WholeWell };
        let level = if zoom == Preset::WholeWell { quasi } else { Some(2) };
        give(window, &[Command::ShowLevelsPart(part), Command::Zoom(zoom), Command::PinLevel(level)]);
        write(window, &format!("{kind}_levels_{}", part.name().to_lowercase().replace(' ', "_")));
    }
    give(
        window,
        &[
            Command::Undo,
            Command::Undo,
            Command::Undo,
            Command::ShowJ(0),
            Command::ShowLevelsPart(LevelsPart::Table),
            Command::PinLevel(Some(1)),
            Command::Zoom(Preset::NearMinimum),
        ],
    );
}

/// Invented numbers: a parabola with a cubic term, without atoms and, if so wanted, without units.
fn plain_file(folder: &std::path::Path, header: &str) -> PathBuf {
    let path = folder.join("plain.csv");
    let rows: Vec<String> = (0..20)
        .map(|i| {
            let x = -0.3 + 0.03 * f64::from(i);
            format!("{:.3},{:.8}", 1.3 + x, 0.5 * x * x - 0.3 * x.powi(3))
        })
        .collect();
    std::fs::write(&path, format!("{header}\n{}\n", rows.join("\n"))).expect("written");
    path
}

#[test]
fn missing_atoms_and_missing_units_are_shown_in_every_kind_of_window() {
    let folder = tempfile::tempdir().expect("a folder");
    for (kind, theme, size, scale) in KINDS {
        for (name, header) in [("no_units", "R,E"), ("no_atoms", "R_angstrom,E_hartree")] {
            let files = vec![plain_file(folder.path(), header)];
            let mut window = open(size, theme, Start { files, ..Start::default() });
            window.ctx.set_pixels_per_point(scale);
            window.run();
            if name == "no_atoms" {
                give(&mut window, &[Command::NameAtoms]);
                assert!(state(&window).view.atoms_wanted);
            }
            write(&mut window, &format!("{kind}_{name}"));
        }
        let mut window = open(size, theme, Start { empty: true, ..Start::default() });
        window.ctx.set_pixels_per_point(scale);
        write(&mut window, &format!("{kind}_empty"));
    }
}

#[test]
fn how_files_are_read_is_shown_in_every_kind_of_window() {
    let folder = tempfile::tempdir().expect("a folder");
    let logs = folder.path().join("hcl");
    std::fs::create_dir(&logs).expect("made");
    for (i, r) in grid().enumerate() {
        let text = format!(
            "step 1\nr = {r:.2} angstrom\nenergy     0.2500000000\nenergy     {:.10}\nend\n",
            morse(r)
        );
        write_file(&logs, &format!("point-{i:02}.log"), &text);
    }
    let (length_unit, energy_unit) = (Some(LengthUnit::Angstrom), Some(EnergyUnit::Hartree));
    let patterns = |energy: &str| ReadSettings {
        lines: Some(LinePatterns { length: r"r = (\S+)".into(), energy: energy.into(), which: Match::Last }),
        length_unit,
        energy_unit,
        ..ReadSettings::default()
    };
    let open_units = write_file(folder.path(), "open.csv", &table("# HCl\nR,E", morse));
    let scan = write_file(folder.path(), "hcl.csv", &table("# HCl\nR_angstrom,E_hartree", morse));
    let refused = write_file(folder.path(), "bad.csv", "R_angstrom,E_hartree\n1.0,x\n");
    for (kind, theme, size, scale) in KINDS {
        let mut window = open(size, theme, Start { files: vec![open_units.clone()], ..Start::default() });
        window.ctx.set_pixels_per_point(scale);
        give(&mut window, &[Command::Reading(ReadingCommand::ProblemColumns(true))]);
        write(&mut window, &format!("{kind}_read_columns_open"));
        let files = vec![scan.clone(), refused.clone()];
        let mut window = open(size, theme, Start { files, ..Start::default() });
        window.ctx.set_pixels_per_point(scale);
        write(&mut window, &format!("{kind}_read_refused"));
        press(&mut window, "Put away");
        let key = state(&window).document.scans[0].key;
        let recipe = ReadingCommand::TypeRecipe("shifted = E + 0.1 eV".into());
        give(&mut window, &[Command::ShowColumns(Some(key)), Command::Reading(recipe)]);
        press(&mut window, "Make");
        let recipe = ReadingCommand::TypeRecipe("wrong = Q".into());
        give(&mut window, &[Command::Reading(recipe)]);
        write(&mut window, &format!("{kind}_read_columns"));
        press(&mut window, "Done");
        give(&mut window, &[Command::Reading(ReadingCommand::OpenLogs(vec![logs.clone()]))]);
        for (name, energy) in [("wrong", "energy ("), ("logs", r"energy\s+(\S+)")] {
            give(&mut window, &[Command::Reading(ReadingCommand::TryLogs(patterns(energy)))]);
            write(&mut window, &format!("{kind}_read_{name}"));
        }
        press(&mut window, "Read 40 points");
        assert_eq!(state(&window).document.scans.len(), 2);
    }
}

#[test]
fn hints_search_sheet_offer_and_menus_are_shown_in_every_kind_of_window() {
    use egui_kittest::kittest::Queryable as _;
    for (kind, theme, size, scale) in KINDS {
        let folder = tempfile::tempdir().expect("a folder");
        let start =
            || Start { state_folder: Some(folder.path().to_owned()), theme: Some(theme), ..Start::default() };
        let mut left = open(size, theme, start());
        give(&mut left, &[Command::SetTolerance { tolerance: 0.1, resting: true }]);
        drop(left);
        let mut window = open(size, theme, start());
        window.ctx.set_pixels_per_point(scale);
        assert!(state(&window).view.hints && !state(&window).leftovers.is_empty());
        write(&mut window, &format!("{kind}_hints_offer"));
        give(&mut window, &[Command::LeaveWork, Command::ShowHints(false), Command::ShowSearch(true)]);
        write(&mut window, &format!("{kind}_search"));
        give(&mut window, &[Command::TypeSearch("le".into())]);
        write(&mut window, &format!("{kind}_search_typed"));
        give(&mut window, &[Command::ShowSearch(false), Command::ShowKeys(true)]);
        write(&mut window, &format!("{kind}_keys"));
        give(&mut window, &[Command::ShowKeys(false), Command::ShowGuide(true)]);
        write(&mut window, &format!("{kind}_guide"));
        give(&mut window, &[Command::ShowGuide(false)]);
        for menu in ["File", "View"] {
            window.get_by_role_and_label(eframe::egui::accesskit::Role::Button, menu).click();
            window.run();
            write(&mut window, &format!("{kind}_menu_{}", menu.to_lowercase()));
            window.key_press(eframe::egui::Key::Escape);
            window.run();
        }
    }
}

#[test]
fn failures_are_shown_in_every_kind_of_window() {
    use parabound::gui::compute::Ticket;
    use parabound::gui::job::compute;
    use parabound::gui::state::Study;
    fn faulty(
        scan: &parabound::scan::Scan,
        settings: &parabound::settings::Settings,
        ticket: &Ticket,
    ) -> Result<Study, String> {
        assert!(settings.reach.tolerance < 0.06, "a fault put in for the test");
        compute(scan, settings, ticket)
    }
    for (kind, theme, size, scale) in KINDS {
        let start = Start { job: Some(faulty), ..Start::default() };
        let mut window = open(size, theme, start);
        window.ctx.set_pixels_per_point(scale);
        give(&mut window, &[Command::SetTolerance { tolerance: 0.2, resting: true }]);
        assert!(state(&window).report().is_some());
        write(&mut window, &format!("{kind}_failed_with_older"));
        let settings = parabound::settings::Settings {
            reach: parabound::reach::ReachSettings { tolerance: 0.2, ..Default::default() },
            ..Default::default()
        };
        let start = Start { job: Some(faulty), settings, ..Start::default() };
        let mut window = open(size, theme, start);
        window.ctx.set_pixels_per_point(scale);
        write(&mut window, &format!("{kind}_failed"));
        assert!(state(&window).study().is_none());
    }
}

/// The pictures of the user guide, on samples of the program. What they show is what is told of them there.
#[test]
fn pictures_of_the_guide_show_what_it_tells() {
    let sample = |part: &str| {
        let index = SAMPLES.iter().position(|s| s.file_name.contains(part)).expect("a sample");
        Command::OpenSample(index)
    };
    let rotation = ThermalSettings { rotation: true, ..ThermalSettings::default() };
    let pictures: [(&str, &str, Vec<Command>); 4] = [
        ("window-light", "lih", vec![Command::PinLevel(Some(1))]),
        ("reach-n2", "n2", vec![Command::ShowPage(Page::Reach)]),
        ("levels-h2", "h2", vec![Command::ShowPage(Page::Levels), Command::PinLevel(Some(1))]),
        (
            "temperature-hf",
            "hf",
            vec![
                Command::StepCurve(2),
                Command::SetAtoms(parse_atoms("H,F").expect("atoms")),
                Command::ShowPage(Page::Thermal),
                Command::SetThermal(rotation),
                Command::SetKelvin(1000.0),
            ],
        ),
    ];
    for (name, part, commands) in pictures {
        let mut window = open([1240.0, 800.0], Theme::Light, Start::default());
        give(&mut window, &[sample(part)]);
        give(&mut window, &commands);
        let study = state(&window).study().expect("a study");
        assert!(
            study.findings.source.file_name.contains(part) && !study.findings.levels.is_empty(),
            "{name}: {} of {}, {} levels",
            study.findings.source.curve,
            study.findings.source.file_name,
            study.findings.levels.len()
        );
        write(&mut window, name);
    }
}
