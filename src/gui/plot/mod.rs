//! The picture: main plot, strip and ladders on shared axes, and the hand that works on them.

mod asymptote;
pub(in crate::gui) mod axes;
mod card;
mod cursor;
mod gauge;
mod handles;
mod hints;
mod hits;
mod items;
mod ladders;
mod levels;
mod main_plot;
pub(in crate::gui) mod map;
mod points;
pub(super) mod steps;
mod strip;
mod tolerance;

use super::command::Command;
use super::look::{self, Look};
use super::show::{ButtonForm, command_button};
use super::state::{State, Strip, Study};
use crate::figure::{GaugeMeasure, Role, Shape};
use eframe::egui;
use egui::{Rect, Ui, pos2};
pub use gauge::MENU as GAUGE_MENU;
use map::Map;
pub(super) use tolerance::step as tolerance_step;

/// Room for the vertical axis at the left of the plot.
pub const GUTTER: f32 = 64.0;
/// Room for the ladders at its right.
const LADDERS: f32 = 92.0;
/// Room between plot and strip, for the read-out.
const GAP: f32 = 20.0;
/// Room for the horizontal axis.
const BELOW: f32 = 42.0;

/// Where everything of the picture stands.
#[derive(Clone, Copy, Debug)]
struct Stage {
    plot: Rect,
    strip: Rect,
    ladders: Rect,
    whole: Rect,
}

impl Stage {
    fn within(whole: Rect, ladders: bool) -> Self {
        let right = if ladders { LADDERS } else { 8.0 };
        let x = whole.left() + GUTTER..=(whole.right() - right).round();
        let height = whole.height() - BELOW - GAP;
        let strip = (0.22 * height).clamp(64.0, 150.0).min(0.4 * height).round();
        let top = whole.top() + 4.0;
        let plot_bottom = (whole.bottom() - BELOW - GAP - strip).round();
        let rect = |top: f32, bottom: f32| {
            Rect::from_min_max(pos2(x.start().round(), top.round()), pos2(*x.end(), bottom.max(top + 1.0)))
        };
        let plot = rect(top, plot_bottom);
        let strip = rect(plot_bottom + GAP, whole.bottom() - BELOW);
        let ladders = Rect::from_min_max(pos2(plot.right(), plot.top()), pos2(whole.right(), plot.bottom()));
        Self { plot, strip, ladders, whole }
    }
}

/// Draws the picture and collects what the hand does on it.
pub fn stage_ui(ui: &mut Ui, state: &State, study: &Study, out: &mut Vec<Command>) {
    let whole = ui.available_rect_before_wrap();
    let ladders = state.ladders_shown().filter(|l| !l.columns.is_empty() && whole.width() > 420.0);
    let stage = Stage::within(whole, ladders.is_some());
    let Some(bounds) = state.bounds().filter(|b| b.is_valid()) else { return };
    if stage.plot.width() < 40.0 || stage.plot.height() < 40.0 {
        return;
    }
    let look = Look::of(ui);
    for rect in [stage.plot, stage.strip] {
        ui.painter().rect_filled(rect, 2.0, look.panel);
    }
    let map = main_plot::main_plot_ui(ui, state, study, &stage, bounds, out);
    let strip = strip::strip_ui(ui, state, study, &stage, &map, out);
    let r_axis = axes::Scale::of_length(&state.view.axes, study);
    axes::x_axis_ui(ui, state, &stage, &map, &r_axis, out);
    if let Some(ladders) = ladders {
        ladders::ladders_ui(ui, state, ladders, &stage, &map, out);
    }
    handles::window_edges_ui(ui, state, study, &stage, &map, out);
    cursor::cursor_ui(ui, state, &stage, &map, &strip, &r_axis);
    levels::list_ui(ui, state, &map);
    hints::hints_ui(ui, state, &stage, &map, &strip, out);
    stale_mark_ui(ui, state, &stage, out);
    ui.allocate_rect(whole, egui::Sense::hover());
}

/// Says that what is seen is older than the settings, and what can be done, in a corner, so that nothing moves
/// when it comes and goes.
fn stale_mark_ui(ui: &mut Ui, state: &State, stage: &Stage, out: &mut Vec<Command>) {
    if !state.looks_old() {
        return;
    }
    let look = Look::of(ui);
    let veil = look.ground.gamma_multiply(0.45);
    ui.painter().rect_filled(stage.plot.union(stage.strip).with_max_x(stage.whole.right()), 0.0, veil);
    let (text, color, command) = if state.failure().is_some() {
        ("failed: older result shown".to_owned(), look.stop, None)
    } else if state.is_stopped() {
        ("stopped: older result shown".to_owned(), look.accent, Some(Command::ComputeAgain))
    } else if let Some(progress) = &state.view.progress {
        let words = super::panels::progress_words(progress.tenths, &progress.step);
        (format!("computing …  {words}"), look.dim, Some(Command::StopComputing))
    } else {
        ("computing …".to_owned(), look.dim, None)
    };
    let galley = ui.painter().layout_no_wrap(text, look::plain(look::SMALL), color);
    let size = galley.size();
    let room = if command.is_some() { 66.0 } else { 0.0 };
    let right = stage.plot.right() - 8.0;
    let at = pos2(right - room - size.x, stage.plot.top() + 7.0);
    let back = Rect::from_min_max(at, pos2(right, at.y + size.y)).expand2(egui::vec2(6.0, 4.0));
    ui.painter().rect_filled(back, 3.0, look.raised);
    ui.painter().galley(at, galley, color);
    if let Some(command) = command {
        let place = Rect::from_min_max(pos2(right - room + 4.0, back.top()), pos2(right, back.bottom()));
        let layout = egui::Layout::right_to_left(egui::Align::Center);
        ui.scope_builder(egui::UiBuilder::new().max_rect(place).layout(layout), |ui| {
            ui.spacing_mut().interact_size.y = 16.0;
            ui.spacing_mut().button_padding.y = 0.0;
            command_button(ui, state, command, ButtonForm::Link, out);
        });
    }
}

/// The ends of the reach on the bond-length axis, open ends at the border of the view.
fn reach_ends(study: &Study, map: &Map) -> Option<(f64, f64)> {
    let band = study.pictures.main.series.iter().find(|s| s.role == Role::Reach)?;
    let Shape::Band(from, to) = band.shape else { return None };
    let (left, right) = map.bounds.x;
    let ends = (from.unwrap_or(left).max(left), to.unwrap_or(right).min(right));
    (ends.1 > ends.0).then_some(ends)
}

/// Whether the strip measures by what the reach of the plot is measured by.
fn one_reach(state: &State) -> bool {
    state.view.strip != Strip::Gauge || state.view.gauge == GaugeMeasure::EnergyPercent
}

/// The reach as one band through plot and strip; where the strip measures something else it has a band of its own.
fn reach_band_ui(ui: &Ui, state: &State, study: &Study, stage: &Stage, map: &Map) {
    let Some((from, to)) = reach_ends(study, map) else { return };
    let look = Look::of(ui);
    let (left, right) = (map.x(from), map.x(to));
    let bottom = if one_reach(state) { stage.strip.bottom() } else { stage.plot.bottom() };
    let band = Rect::from_min_max(pos2(left, stage.plot.top()), pos2(right, bottom));
    ui.painter().rect_filled(band, 0.0, look.reach.gamma_multiply(0.20));
    for (x, r) in [(left, from), (right, to)] {
        // An open end has no edge to draw.
        if r > map.bounds.x.0 && r < map.bounds.x.1 {
            ui.painter().vline(x, band.y_range(), egui::Stroke::new(1.0, look.reach.gamma_multiply(0.75)));
        }
    }
}

/// The name of the band, over what is drawn there.
fn reach_label_ui(ui: &Ui, state: &State, study: &Study, stage: &Stage, map: &Map) {
    let Some((from, to)) = reach_ends(study, map) else { return };
    let look = Look::of(ui);
    let (left, right) = (map.x(from), map.x(to));
    let name = if one_reach(state) { "reach" } else { "reach by energy" };
    let galley = ui.painter().layout_no_wrap(name.to_owned(), look::plain(look::SMALL), look.reach);
    let size = galley.size();
    let inside = right - left > size.x + 12.0;
    let x = if inside { left + 6.0 } else { left - 6.0 - size.x };
    if x > stage.plot.left() {
        let rect = Rect::from_min_size(pos2(x, stage.plot.top() + 6.0), size);
        ui.painter().rect_filled(rect.expand2(egui::vec2(3.0, 1.0)), 3.0, look.panel.gamma_multiply(0.8));
        ui.painter().galley(rect.min, galley, look.reach);
    }
}
