//! The strip under the plot: gauge or residuals on the plot's bond-length axis.

use super::map::Map;
use super::tolerance::tolerance_ui;
use super::{Stage, axes, gauge, items};
use crate::figure::geometry::Bounds;
use crate::figure::{Figure, Shape, number};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::text_in;
use crate::gui::state::{State, Strip, Study};
use eframe::egui;
use egui::{Align2, Rect, Sense, Stroke, Ui, UiBuilder, WidgetInfo, pos2, vec2};
use egui_plot::{Plot, PlotBounds, PlotPoints, Points};

/// Draws the strip and gives the map of its axes.
pub(super) fn strip_ui(
    ui: &mut Ui,
    state: &State,
    study: &Study,
    stage: &Stage,
    main: &Map,
    out: &mut Vec<Command>,
) -> Map {
    let map = match state.view.strip {
        Strip::Gauge => gauge::gauge_ui(ui, state, study, stage, main),
        Strip::Residuals => residuals_ui(ui, state, study, stage, main),
    };
    axes::frame_ui(ui, &map);
    if state.view.strip == Strip::Gauge {
        tolerance_ui(ui, state, &map, out);
    }
    tabs_ui(ui, state, stage, out);
    map
}

/// A figure's lines in a plot that only shows.
pub(super) fn lines_ui(ui: &mut Ui, name: &str, figure: &Figure, map: &Map, look: &Look) {
    let bounds = map.bounds;
    ui.scope_builder(UiBuilder::new().max_rect(map.rect), |ui| {
        Plot::new(name)
            .width(map.rect.width())
            .height(map.rect.height())
            .show_axes(false)
            .show_grid(false)
            .show_background(false)
            .show_x(false)
            .show_y(false)
            .allow_scroll(false)
            .allow_zoom(false)
            .allow_drag(false)
            .allow_boxed_zoom(false)
            .allow_double_click_reset(false)
            .sense(Sense::hover())
            .show(ui, |plot| {
                let (min, max) = ([bounds.x.0, bounds.y.0], [bounds.x.1, bounds.y.1]);
                plot.set_plot_bounds(PlotBounds::from_min_max(min, max));
                for (index, series) in figure.series.iter().enumerate() {
                    items::add_lines(plot, series, index, &bounds, look);
                    if let Shape::Points(points) = &series.shape {
                        let seen: Vec<[f64; 2]> =
                            points.iter().filter(|p| map.sees_x(p[0]) && map.sees_y(p[1])).copied().collect();
                        let item = Points::new(series.label.clone(), PlotPoints::from(seen))
                            .id(("points", index))
                            .radius(2.2)
                            .color(look.role(series.role))
                            .allow_hover(false);
                        plot.points(item);
                    }
                }
            });
    });
}

/// Residuals differ by orders of magnitude between fits: the axis is linear near zero and logarithmic
/// beyond (inverse hyperbolic sine).
fn residuals_ui(ui: &mut Ui, state: &State, study: &Study, stage: &Stage, main: &Map) -> Map {
    let look = Look::of(ui);
    let mut figure = study.pictures.residuals.clone();
    let largest = |points: &[[f64; 2]]| points.iter().map(|p| p[1].abs()).fold(0.0, f64::max);
    let sizes: Vec<f64> = figure
        .series
        .iter()
        .filter_map(|s| match &s.shape {
            Shape::Points(points) => Some(largest(points)),
            _ => None,
        })
        .filter(|s| *s > 0.0)
        .collect();
    let smallest = sizes.iter().copied().fold(f64::INFINITY, f64::min);
    let largest = sizes.iter().copied().fold(0.0, f64::max);
    // A fit a thousand times better than another one is a flat line beside it, as it should be.
    let unit = if smallest.is_finite() { (0.5 * smallest).max(largest / 300.0).max(1e-9) } else { 1.0 };
    let bend = |d: f64| (d / unit).asinh();
    for series in &mut figure.series {
        if let Shape::Line(points) | Shape::Points(points) = &mut series.shape {
            for p in points {
                p[1] = bend(p[1]);
            }
        }
    }
    let half = 1.15 * bend(largest.max(unit));
    let map = Map { rect: stage.strip, bounds: Bounds { x: main.bounds.x, y: (-half, half) } };
    let (values, labels) = decades(unit, largest, &map, bend);
    let y = axes::Ticks { shown: values.clone(), values, decimals: 0 };
    axes::grid_ui(ui, &map, &axes::x_ticks(&map, &axes::Scale::of_length(&state.view.axes, study)), &y);
    lines_ui(ui, "residuals", &figure, &map, look);
    axes::y_labels_ui(ui, &map, &y, |v| {
        let label = labels.iter().find(|(at, _)| *at == v);
        label.map_or_else(String::new, |(_, text)| text.clone())
    });
    axes::y_title_ui(ui, &map, &study.pictures.residuals.y.text());
    map
}

/// Zero and powers of ten on both sides, as far apart as figures need.
fn decades(unit: f64, largest: f64, map: &Map, bend: impl Fn(f64) -> f64) -> (Vec<f64>, Vec<(f64, String)>) {
    let mut marks = vec![(0.0, "0".to_owned())];
    let mut last = map.y(0.0);
    let lowest = unit.log10().floor() as i32;
    for power in lowest..=largest.max(unit).log10().floor() as i32 {
        let value = 10_f64.powi(power);
        let y = map.y(bend(value));
        if last - y < 15.0 {
            continue;
        }
        last = y;
        let decimals = (-power).max(0) as usize;
        marks.push((bend(value), number::signed(value, decimals)));
        marks.push((bend(-value), number::signed(-value, decimals)));
    }
    (marks.iter().map(|m| m.0).collect(), marks)
}

/// Name of what is shown at the left, the other kinds at the right.
fn tabs_ui(ui: &mut Ui, state: &State, stage: &Stage, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let font = look::plain(look::SMALL);
    let mut right = stage.strip.right() - 10.0;
    for strip in Strip::ALL.into_iter().rev() {
        let front = state.view.strip == strip;
        let galley = ui.painter().layout_no_wrap(strip.name().to_owned(), font.clone(), look.text);
        let size = galley.size();
        let rect = Rect::from_min_size(pos2(right - size.x, stage.strip.top() + 5.0), vec2(size.x, 18.0));
        let id = ui.scope_id().with(("strip", strip.name()));
        let response =
            ui.interact(rect.expand(3.0), id, Sense::click()).on_hover_cursor(egui::CursorIcon::PointingHand);
        response.widget_info(|| WidgetInfo::selected(egui::Role::Tab, true, front, strip.name()));
        let color = if front || response.hovered() || response.has_focus() { look.text } else { look.dim };
        ui.painter().rect_filled(rect.expand(3.0), 3.0, look.panel.gamma_multiply(0.85));
        text_in(ui, rect.center(), Align2::CENTER_CENTER, strip.name(), &font, color);
        if front {
            ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(1.5, look.accent));
        }
        let response = response.on_hover_text(Command::ShowStrip(strip).tooltip());
        if response.clicked() {
            out.push(Command::ShowStrip(strip));
        }
        right = rect.left() - 16.0;
    }
    if state.view.strip == Strip::Gauge {
        gauge::measure_ui(ui, state, stage, right, out);
    }
}
