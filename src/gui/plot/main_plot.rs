//! The main plot: curve, fits, levels with densities, points.

use super::axes::Scale;
use super::map::Map;
use super::{Stage, asymptote, axes, card, hits, items, levels, points, reach_band_ui, reach_label_ui};
use crate::figure::geometry::Bounds;
use crate::figure::number;
use crate::gui::command::Command;
use crate::gui::densities::{shown_densities, shown_thermal};
use crate::gui::look::Look;
use crate::gui::state::{Preset, State, Study};
use eframe::egui;
use egui::{PointerButton, Rect, Response, Stroke, StrokeKind, Ui, UiBuilder, WidgetInfo};
use egui_plot::{Plot, PlotBounds};

/// Draws the plot and gives the map of its axes.
pub(super) fn main_plot_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    stage: &Stage,
    bounds: Bounds,
    out: &mut Vec<Command>,
) -> Map {
    let look = Look::of(ui);
    let before = Map { rect: stage.plot, bounds };
    let (r_axis, e_axis) = (Scale::of_length(&state.view.axes, study), Scale::of_energy(&state.view.axes));
    let (x, y) =
        (axes::x_ticks(&before, &r_axis), axes::scaled_ticks(bounds.y, stage.plot.height(), 44.0, &e_axis));
    axes::grid_ui(ui, &before, &x, &y);
    reach_band_ui(ui, state, study, stage, &before);
    let (response, bounds) = plot_items_ui(ui, state, study, &before, look, out);
    let map = Map { rect: stage.plot, bounds };
    let hit = hits::find(ui, &response, state, study, &map);
    axes::y_labels_ui(ui, &map, &y, |v| number::fixed(v, y.decimals));
    axes::energy_title_ui(ui, state, &map, &e_axis, out);
    points::points_ui(ui, state, &study.pictures.points, &map, hit.point);
    levels::shown_level_ui(ui, state, &map);
    levels::thermal_name_ui(ui, state, study, &map);
    reach_label_ui(ui, state, study, stage, &map);
    axes::frame_ui(ui, &map);
    asymptote::asymptote_ui(ui, state, study, stage, &map, out);
    card::card_ui(ui, state, study, stage, &map);
    name_ui(&response, state, study);
    work_ui(ui, state, study, &response, &hit, &map, out);
    map
}

/// Everything that is drawn in axis values, by the plot itself, which also pans and zooms.
fn plot_items_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    before: &Map,
    look: &Look,
    out: &mut Vec<Command>,
) -> (Response, Bounds) {
    let bounds = before.bounds;
    let pictures = &study.pictures;
    let wheel = ui.input(|i| i.smooth_scroll_delta().y);
    // The other densities are those of the levels without rotation.
    let rotation = state.rotation().map(|(_, picture)| picture);
    let densities = if state.view.densities.is_any() && rotation.is_none() {
        shown_densities(ui.ctx(), state, study)
    } else {
        std::sync::Arc::default()
    };
    let turning = rotation.map_or(&[][..], |r| &r.series);
    let thermal = shown_thermal(ui.ctx(), state, study);
    let response = ui
        .scope_builder(UiBuilder::new().max_rect(before.rect), |ui| {
            Plot::new("main plot")
                .width(before.rect.width())
                .height(before.rect.height())
                .show_axes(false)
                .show_grid(false)
                .show_background(false)
                .show_x(false)
                .show_y(false)
                .allow_scroll(false)
                .allow_boxed_zoom(false)
                .allow_double_click_reset(false)
                .show(ui, |plot| {
                    let (min, max) = ([bounds.x.0, bounds.y.0], [bounds.x.1, bounds.y.1]);
                    plot.set_plot_bounds(PlotBounds::from_min_max(min, max));
                    if wheel != 0.0 && plot.response().contains_pointer() {
                        plot.zoom_bounds_around_hovered(egui::Vec2::splat((wheel * 0.004).exp()));
                    }
                    levels::add_levels(
                        plot,
                        state.levels_shown(),
                        &|v| state.stands_out(v),
                        state.view.densities.height,
                        before,
                        look,
                    );
                    if let Some(thermal) = thermal.as_ref().as_ref() {
                        levels::add_thermal(plot, thermal, state.view.densities.height, before, look);
                    }
                    for densities in densities.iter() {
                        levels::add_density_lines(plot, densities, &state.view.densities, look);
                    }
                    for (index, series) in pictures.main.series.iter().chain(turning).enumerate() {
                        items::add_lines(plot, series, index, &bounds, look);
                    }
                })
        })
        .inner;
    let after = *response.transform.bounds();
    let after = Bounds { x: (after.min()[0], after.max()[0]), y: (after.min()[1], after.max()[1]) };
    if !after.is_valid() || !moved(&bounds, &after) || too_far(&after, &pictures.views.all_points) {
        return (response.response, bounds);
    }
    out.push(Command::SetBounds(after));
    (response.response, after)
}

/// Whether two bounds differ by more than rounding.
fn moved(a: &Bounds, b: &Bounds) -> bool {
    let differ = |p: (f64, f64), q: (f64, f64)| {
        let size = p.1 - p.0;
        (p.0 - q.0).abs() > 1e-6 * size || (p.1 - q.1).abs() > 1e-6 * size
    };
    differ(a.x, b.x) || differ(a.y, b.y)
}

/// Whether a view has lost the scan, or looks closer than numbers go.
fn too_far(view: &Bounds, all: &Option<Bounds>) -> bool {
    let Some(all) = all else { return false };
    let one = |(a, b): (f64, f64), (c, d): (f64, f64)| {
        let (size, whole) = (b - a, d - c);
        size > 6.0 * whole || size < 1e-6 * whole || b < c || a > d
    };
    one(view.x, all.x) || one(view.y, all.y)
}

/// Tells what the plot shows to those who do not see it.
fn name_ui(response: &Response, state: &State, study: &Study) {
    response.widget_info(|| {
        let turning = state.rotation().map_or_else(String::new, |(levels, _)| {
            format!(
                " With J = {}: {} bound and {} quasi-bound levels.",
                levels.j,
                levels.levels.len(),
                levels.quasi_bound.len()
            )
        });
        let points = &study.pictures.points;
        let used = points.iter().filter(|p| p.set_aside.is_none()).count();
        let text = format!(
            "Plot of {}: {} points, {used} used, {} levels. {}{turning}",
            study.findings.source.curve_label,
            points.len(),
            study.findings.levels.len(),
            study.pictures.sentence.text
        );
        WidgetInfo::labeled(egui::Role::Figure, true, text)
    });
}

/// Clicks, box zoom, hovering.
fn work_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    response: &Response,
    hit: &hits::Hit,
    map: &Map,
    out: &mut Vec<Command>,
) {
    if let Some(level) = hit.level {
        out.push(Command::HoverLevel(Some(level)));
    }
    hits::explain_ui(ui, response, state, study, hit, map);
    if response.double_clicked() {
        out.push(Command::Zoom(Preset::NearMinimum));
    } else if response.clicked() {
        click(ui, state, study, hit, out);
    }
    box_zoom_ui(ui, response, map, out);
}

/// A click on a point sets it aside or uses it again; on a level it keeps it shown, with Shift beside others; elsewhere it
/// lets go.
fn click(ui: &Ui, state: &State, study: &Study, hit: &hits::Hit, out: &mut Vec<Command>) {
    if let Some(point) = hit.point.and_then(|i| study.pictures.points.get(i)) {
        out.push(points::toggle(point));
    } else if let Some(v) = hit.level.filter(|_| ui.input(|i| i.modifiers.shift)) {
        out.push(Command::KeepLevel(v, !state.view.kept_levels.contains(&v)));
    } else {
        let again = hit.level.is_some() && hit.level == state.view.pinned_level;
        out.push(Command::PinLevel(hit.level.filter(|_| !again)));
    }
}

/// A box drawn with the secondary button becomes the view.
fn box_zoom_ui(ui: &Ui, response: &Response, map: &Map, out: &mut Vec<Command>) {
    let secondary = PointerButton::Secondary;
    let ends = ui.input(|i| i.pointer.press_origin()).zip(response.interact_pointer_pos());
    let Some((from, to)) =
        ends.filter(|_| response.dragged_by(secondary) || response.drag_stopped_by(secondary))
    else {
        return;
    };
    let look = Look::of(ui);
    let area = Rect::from_two_pos(from, to).intersect(map.rect);
    if response.drag_stopped_by(secondary) {
        if area.width() > 6.0 && area.height() > 6.0 {
            out.push(Command::SetBounds(Bounds {
                x: (map.x_value(area.left()), map.x_value(area.right())),
                y: (map.y_value(area.bottom()), map.y_value(area.top())),
            }));
        }
        return;
    }
    ui.painter().rect(
        area,
        1.0,
        look.accent.gamma_multiply(0.12),
        Stroke::new(1.0, look.accent),
        StrokeKind::Inside,
    );
}
