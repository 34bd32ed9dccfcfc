//! The real program in a window that exists only for the test.

use eframe::egui;
use egui_kittest::Harness;
use egui_kittest::kittest::Queryable as _;
use parabound::fit::{Family, Fit};
use parabound::gui::app::{App, Start};
use parabound::gui::command::Command;
use parabound::gui::state::{State, Study};
use parabound_gui_tests::{CpuRenderer, Shown};

/// A window of the program.
pub type Window = Harness<'static, Shown<App>>;

/// Opens the program, computing on the thread that draws.
pub fn open(size: [f32; 2], theme: egui::Theme, start: Start) -> Window {
    let start = Start { inline: true, ..start };
    let mut window = Harness::builder()
        .with_size(egui::Vec2::from(size))
        .with_theme(theme)
        .with_max_steps(24)
        .with_render_cursor(false)
        .renderer(CpuRenderer::default())
        .build_eframe(|cc| Shown(App::new(&cc.egui_ctx, start)));
    window.run();
    window
}

/// Opens the program on the bundled sample.
pub fn open_sample() -> Window {
    open([1400.0, 900.0], egui::Theme::Dark, Start::default())
}

/// Gives a command as a menu or a key would.
pub fn give(window: &mut Window, command: Command) {
    let ctx = window.ctx.clone();
    window.state_mut().0.give(command, &ctx);
    window.run();
}

/// With `PARABOUND_GALLERY=FOLDER` a picture is written there to be looked at.
pub fn shown(window: &mut Window, name: &str) {
    window.run();
    let Some(folder) = std::env::var_os("PARABOUND_GALLERY") else { return };
    let picture = window.render().expect("painted");
    picture.save(std::path::PathBuf::from(folder).join(format!("{name}.png"))).expect("written");
}

/// What the window knows.
pub fn state(window: &Window) -> &State {
    window.state().0.state()
}

/// Presses a button by what it says.
pub fn press(window: &mut Window, label: &str) {
    window.get_by_role_and_label(egui::accesskit::Role::Button, label).click();
    window.run();
}

/// Press, move in small steps, release; one event a pass, as a hand would.
pub fn drag(window: &mut Window, from: egui::Pos2, to: egui::Pos2) {
    window.hover_at(from);
    window.run();
    window.drag_at(from);
    window.run();
    for step in 1..=4 {
        window.hover_at(from + (to - from) * (step as f32 / 4.0));
        window.run();
    }
    window.drop_at(to);
    window.run();
}

/// The harmonic fit of a study.
pub fn harmonic_fit(study: &Study) -> &Fit {
    let found = study.findings.found_fit(Family::Harmonic).expect("a harmonic fit");
    found.result.as_ref().expect("found")
}

/// The force constant of the harmonic fit in atomic units.
pub fn harmonic_force_constant(window: &Window) -> f64 {
    let study = state(window).study().expect("a study");
    let fit = harmonic_fit(study);
    fit.parameters.iter().find(|p| p.name == "k").expect("its force constant").estimate.value
}
