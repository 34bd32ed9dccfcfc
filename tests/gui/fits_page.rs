//! The page of fits by label: which window, side by side, resampled errors, families and weights, copying, failures.

use crate::harness::{Window, give, harmonic_force_constant, open_sample, press, state};
use eframe::egui::{self, accesskit::Role};
use egui_kittest::Harness;
use egui_kittest::kittest::{NodeT as _, Queryable as _, by};
use parabound::export::parameters::ParameterUnits;
use parabound::figure::Shape;
use parabound::figure::drawing::window_study_drawing;
use parabound::fit::{Family, FitRequest, Weighting, Window as FitWindow};
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::look;
use parabound::gui::state::{Page, Resampling};
use parabound::units::{ForceConstantConvention, ForceConstantUnit, LengthUnit};
use parabound_gui_tests::{CpuRenderer, Shown};
use std::time::{Duration, Instant};

fn fits_page() -> Window {
    let mut window = open_sample();
    give(&mut window, Command::ShowPage(Page::Fits));
    window
}

/// Whether anything says this, or a part of it.
fn says(window: &Window, text: &str) -> bool {
    window.query_all(by().label_contains(text)).next().is_some()
}

fn click_at(window: &mut Window, at: egui::Pos2) {
    for step in 0..3 {
        match step {
            0 => window.hover_at(at),
            1 => window.drag_at(at),
            _ => window.drop_at(at),
        }
        window.run();
    }
}

#[test]
fn a_click_in_the_picture_takes_that_window_and_undo_takes_it_back() {
    let mut window = fits_page();
    let before = harmonic_force_constant(&window);
    press(&mut window, "Which window");
    let picture = state(&window).windows().expect("windows").0.picture.clone().expect("a picture");
    assert!(says(&window, "Proposed"));
    press(&mut window, "Take the proposed window");
    let proposal = &picture.targets[picture.proposal.expect("a proposal")];
    assert_eq!(state(&window).window(), Some(proposal.window));
    assert!(says(&window, "The proposed window is in force."));
    press(&mut window, "Undo");
    assert_eq!(harmonic_force_constant(&window), before);
    // The picture itself: the widest harmonic window that is in sight.
    let rect = window.get(by().role(Role::Figure).label_contains("Window study")).rect();
    let size = [f64::from(rect.width()), f64::from(rect.height())];
    let (_, frames) = window_study_drawing(&picture, size, f64::from(look::SMALL), true);
    let seen = |at: [f64; 2]| {
        let b = picture.bounds[0];
        (b.y.0..b.y.1).contains(&at[1]).then(|| frames[0].place(at))
    };
    let target = picture.targets.iter().rev().filter_map(|t| Some((t, t.at[0].and_then(seen)?)));
    let (target, [x, y]) = target.clone().next().expect("a window in sight");
    click_at(&mut window, rect.min + egui::vec2(x as f32, y as f32));
    let taken = state(&window).window().expect("a window");
    let nearest = picture.nearest(0, target.at[0].expect("a place")).expect("near itself");
    assert_eq!(taken, picture.targets[nearest].window);
    assert_eq!(state(&window).history.undo_name(), Some("move the fit window"));
}

#[test]
fn the_fits_stand_side_by_side_with_the_sentence() {
    let mut window = fits_page();
    press(&mut window, "Side by side");
    let sentence = state(&window).study().expect("a study").findings.comparison.sentence.clone();
    let start: String = sentence.expect("three fits").chars().take(30).collect();
    assert!(says(&window, &start), "{start}");
    for fit in ["Harmonic: rms", "Morse: rms", "Polynomial 6: rms"] {
        assert!(says(&window, fit), "{fit}");
    }
    assert!(window.query(by().role(Role::Figure).label_contains("How far the fits miss")).is_some());
}

#[test]
fn resampled_errors_stand_beside_the_others_until_something_changes() {
    let mut window = fits_page();
    give(&mut window, Command::SetRepeats(20));
    press(&mut window, "Resample residuals");
    assert!(matches!(state(&window).resampling, Resampling::Done(..)));
    assert!(says(&window, "error of k") && says(&window, "error of ωₑ"));
    give(&mut window, Command::SetDegree(5));
    assert!(!says(&window, "error of k"), "they belong to other settings");
    assert!(says(&window, "Resample again"));
}

/// With workers of its own: the bar is there, and Stop ends the work long before its end.
#[test]
fn resampling_shows_its_progress_and_stops() {
    let mut window: Window = Harness::builder()
        .with_size(egui::vec2(1400.0, 900.0))
        .with_max_steps(24)
        .renderer(CpuRenderer::default())
        .build_eframe(|cc| Shown(App::new(&cc.egui_ctx, Start { page: Page::Fits, ..Start::default() })));
    let deadline = Instant::now() + Duration::from_secs(300);
    let wait = |window: &mut Window, ready: &dyn Fn(&Window) -> bool| {
        while !ready(window) {
            assert!(Instant::now() < deadline, "nothing came");
            std::thread::sleep(Duration::from_millis(5));
            window.step();
        }
    };
    wait(&mut window, &|w| state(w).study().is_some() && !state(w).is_stale());
    // The panels settle before anything is pressed in them.
    (0..4).for_each(|_| window.step());
    let ctx = window.ctx.clone();
    for command in [Command::SetRepeats(20_000), Command::Resample] {
        window.state_mut().0.give(command, &ctx);
    }
    let bar = by().role(Role::ProgressIndicator).label_contains("Resampling");
    wait(&mut window, &|w| match &state(w).resampling {
        Resampling::Running(progress) => progress.steps().0 > 0,
        _ => false,
    });
    window.step();
    assert!(window.query(bar).is_some());
    window.get_by_role_and_label(Role::Button, "Stop").click();
    wait(&mut window, &|w| matches!(state(w).resampling, Resampling::Stopped));
    window.step();
    assert!(says(&window, "Stopped; nothing was kept."));
}

#[test]
fn families_and_weights_are_chosen_from_their_menus() {
    let mut window = fits_page();
    window.get_by_label("Families …").click();
    window.run();
    window.get_by_label("Varshni").click();
    window.run();
    let fits = |window: &Window| {
        let study = state(window).study().expect("a study");
        study.findings.fits.iter().map(|f| f.request.family).collect::<Vec<_>>()
    };
    assert_eq!(fits(&window).last(), Some(&Family::Varshni));
    assert_eq!(state(&window).history.undo_name(), Some("choose the fits"));
    give(&mut window, Command::Undo);
    assert_eq!(fits(&window).len(), 3);
    let before = harmonic_force_constant(&window);
    give(&mut window, Command::SetWeighting(Weighting::Energy(Default::default())));
    assert!(says(&window, "Weights: by energy"));
    assert_ne!(harmonic_force_constant(&window), before);
}

#[test]
fn parameters_are_copied_in_the_units_chosen() {
    let mut window = fits_page();
    let units = ParameterUnits {
        force_constant: ForceConstantUnit::KilocaloriePerMoleAngstrom2,
        convention: ForceConstantConvention::Full,
        ..ParameterUnits::default()
    };
    give(&mut window, Command::SetParameterUnits(units));
    let ctx = window.ctx.clone();
    for (command, needles) in [
        (Command::CopyParameters, ["kcal/(mol angstrom^2)", "V = k x^2"]),
        (Command::CopyParametersLatex, ["\\begin{tabular}", "V = k x^2"]),
    ] {
        window.state_mut().0.give(command, &ctx);
        window.step();
        let copied = window.output().platform_output.commands.iter().find_map(|c| match c {
            egui::OutputCommand::CopyText(text) => Some(text.clone()),
            _ => None,
        });
        let copied = copied.expect("something on the clipboard");
        for needle in needles {
            assert!(copied.contains(needle), "{needle} in {copied}");
        }
        window.run();
    }
    assert!(window.query_by_label("Copy parameters as LaTeX").is_some());
}

#[test]
fn a_fit_that_fails_says_so_in_its_place_with_a_remedy() {
    let mut window = fits_page();
    let far = FitWindow { from: 3.0, to: 4.5, unit: LengthUnit::Angstrom };
    give(&mut window, Command::SetWindow { window: far, resting: true });
    assert!(says(&window, "No fit: "));
    assert!(says(&window, "Widen the window") && says(&window, "Leave this fit out"));
    window.get_all_by_label("Take the default window").next().expect("a remedy").click();
    window.run();
    assert!(!says(&window, "No fit: "));
    let too_high = FitRequest { degree: Some(20), ..FitRequest::plain(Family::ExtendedMorse) };
    let harmonic = FitRequest::plain(Family::Harmonic);
    give(&mut window, Command::SetFits(vec![harmonic, too_high]));
    assert!(says(&window, "No fit: degree, order or power 20"), "the other fit stands");
    assert!(harmonic_force_constant(&window) > 0.0);
    press(&mut window, "Take the nearest offered");
    let study = state(&window).study().expect("a study");
    let asked = study.findings.fits[1].request.degree;
    assert_eq!(asked, Some(12));
}

/// The confidence bands are part of the main plot, about their own curves.
#[test]
fn every_fit_has_its_band_on_the_plot() {
    let window = open_sample();
    let study = state(&window).study().expect("a study");
    let ribbons: Vec<_> =
        study.pictures.main.series.iter().filter(|s| matches!(s.shape, Shape::Ribbon(_))).collect();
    assert_eq!(ribbons.len(), 3);
    for series in ribbons {
        let Shape::Ribbon(points) = &series.shape else { continue };
        assert!(points.iter().all(|[_, low, high]| low < high), "{}", series.label);
    }
    assert!(window.get(by().role(Role::Figure).label_contains("Plot of")).accesskit_node().label().is_some());
}
