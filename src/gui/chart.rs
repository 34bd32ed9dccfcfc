//! A small chart of a page: any figure with its axes, legend and read-out.

use super::look::{self, Look};
use super::plot::axes::{Ticks, grid_ui, ticks};
use super::plot::map::Map;
use super::show::{line_sample, styled_line, text_in};
use crate::figure::geometry::Bounds;
use crate::figure::{Figure, Role, Series, Shape, content_bounds, number};
use eframe::egui;
use egui::{Align2, Rect, Response, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Room for the figures of the vertical axis, and for those of the horizontal one with its title.
const LEFT: f32 = 46.0;
const BELOW: f32 = 38.0;
/// Height of a row of the legend, and the length of a sample of a line.
const LEGEND: f32 = 18.0;
const SAMPLE: f32 = 20.0;

/// A chart that was drawn.
pub struct Shown {
    /// What the hand does on it.
    pub response: Response,
    /// From its values to the screen and back.
    pub map: Map,
}

/// Draws a figure in the given height; `mark` is an abscissa marked by a line, `range` that of the ordinate, where it is
/// not that of the lines.
pub fn chart_ui(
    ui: &mut Ui,
    figure: &Figure,
    height: f32,
    mark: Option<f64>,
    range: Option<(f64, f64)>,
) -> Option<Shown> {
    let content = content_bounds(figure)?;
    let look = Look::of(ui);
    let width = ui.available_width();
    legend_ui(ui, figure);
    let (whole, _) = ui.allocate_exact_size(vec2(width, height), Sense::hover());
    let rect = Rect::from_min_max(
        pos2(whole.left() + LEFT, whole.top() + 16.0),
        pos2(whole.right() - 18.0, whole.bottom() - BELOW),
    );
    let pad = 0.05 * (content.y.1 - content.y.0).max(1e-9 * content.y.1.abs()).max(1e-12);
    let bounds = Bounds { x: content.x, y: range.unwrap_or((content.y.0 - pad, content.y.1 + pad)) };
    let map = Map { rect, bounds };
    let id = ui.scope_id().with(("chart", figure.y.title));
    let response = ui.interact(rect, id, Sense::click_and_drag());
    ui.painter().rect_filled(rect, 2.0, look.ground);
    let (x, y) = (
        ticks(bounds.x, rect.width(), 62.0),
        ticks(bounds.y, rect.height(), if height < 150.0 { 15.0 } else { 30.0 }),
    );
    grid_ui(ui, &map, &x, &y);
    let clipped = ui.painter().with_clip_rect(rect);
    for series in &figure.series {
        draw(&clipped, &map, series, look);
    }
    if let Some(at) = mark.filter(|v| map.sees_x(*v)) {
        clipped.vline(map.x(at), rect.y_range(), Stroke::new(1.4, look.accent));
    }
    labels_ui(ui, figure, &map, whole, &x, &y);
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Figure, true, in_words(figure)));
    let response = read_out(ui, figure, &map, response);
    Some(Shown { response, map })
}

/// The figure as read aloud.
fn in_words(figure: &Figure) -> String {
    let mut names: Vec<&str> = figure.series.iter().map(|s| s.label.as_str()).collect();
    names.dedup();
    format!("Chart of {} over {}: {}", figure.y.text(), figure.x.text(), names.join(", "))
}

fn draw(painter: &egui::Painter, map: &Map, series: &Series, look: &Look) {
    let color = look.role(series.role);
    match &series.shape {
        Shape::Line(points) => {
            let points: Vec<_> = points.iter().map(|p| map.at(*p)).collect();
            styled_line(painter, &points, series.role.line_style(), Stroke::new(1.6, color));
        }
        Shape::Points(points) => {
            for p in points {
                painter.circle(map.at(*p), 2.8, look.panel, Stroke::new(1.4, color));
            }
        }
        Shape::Band(from, to) => {
            let (left, right) = map.bounds.x;
            let x = map.x(from.unwrap_or(left).max(left))..=map.x(to.unwrap_or(right).min(right));
            let band = Rect::from_x_y_ranges(x, map.rect.y_range());
            painter.rect_filled(band, 0.0, color.gamma_multiply(0.16));
        }
        Shape::Level(value) => {
            let ends = [pos2(map.rect.left(), map.y(*value)), pos2(map.rect.right(), map.y(*value))];
            styled_line(painter, &ends, series.role.line_style(), Stroke::new(1.0, color));
        }
        // No figure of the pages has a confidence band.
        Shape::Ribbon(_) => {}
        Shape::Bar(y, from, to) => {
            let ends = [map.at([*from, *y]), map.at([*to, *y])];
            painter.line_segment(ends, Stroke::new(3.0, color));
        }
    }
}

fn labels_ui(ui: &Ui, figure: &Figure, map: &Map, whole: Rect, x: &Ticks, y: &Ticks) {
    let look = Look::of(ui);
    let font = look::figures(look::SMALL);
    for &value in &y.values {
        let at = pos2(map.rect.left() - 6.0, map.y(value));
        text_in(ui, at, Align2::RIGHT_CENTER, &number::fixed(value, y.decimals), &font, look.dim);
    }
    for &value in &x.values {
        let at = pos2(map.x(value), map.rect.bottom() + 4.0);
        text_in(ui, at, Align2::CENTER_TOP, &number::fixed(value, x.decimals), &font, look.dim);
    }
    let small = look::plain(look::SMALL);
    text_in(ui, pos2(whole.left(), whole.top()), Align2::LEFT_TOP, &figure.y.text(), &small, look.dim);
    let at = pos2(map.rect.center().x, whole.bottom() - 2.0);
    text_in(ui, at, Align2::CENTER_BOTTOM, &figure.x.text(), &small, look.dim);
}

/// Samples of the lines with their names, each once.
fn legend_ui(ui: &mut Ui, figure: &Figure) {
    let look = Look::of(ui);
    let mut named: Vec<(Role, &str)> = Vec::new();
    for series in &figure.series {
        let shown = matches!(series.shape, Shape::Line(_) | Shape::Band(..));
        if shown && !named.contains(&(series.role, series.label.as_str())) {
            named.push((series.role, &series.label));
        }
    }
    ui.horizontal_wrapped(|ui| {
        ui.spacing_mut().item_spacing = vec2(12.0, 2.0);
        for (role, name) in named {
            let galley = ui.painter().layout_no_wrap(name.to_owned(), look::plain(look::SMALL), look.dim);
            let size = vec2(SAMPLE + 5.0 + galley.size().x, LEGEND);
            let (rect, response) = ui.allocate_exact_size(size, Sense::hover());
            let sample = Rect::from_min_size(rect.min, vec2(SAMPLE, LEGEND));
            if role == Role::Reach {
                let band = Rect::from_center_size(sample.center(), vec2(SAMPLE, 10.0));
                ui.painter().rect_filled(band, 2.0, look.reach.gamma_multiply(0.4));
            } else {
                line_sample(ui, sample, role, look.role(role));
            }
            let at = pos2(rect.left() + SAMPLE + 5.0, rect.center().y - galley.size().y / 2.0);
            ui.painter().galley(at, galley, look.dim);
            if let Some(series) = figure.series.iter().find(|s| s.label == name && !s.about.is_empty()) {
                response.on_hover_text(&series.about);
            }
        }
    });
}

/// The values of all lines at the pointer.
fn read_out(ui: &Ui, figure: &Figure, map: &Map, response: Response) -> Response {
    let Some(pointer) = response.hover_pos() else { return response };
    let look = Look::of(ui);
    let x = map.x_value(pointer.x);
    ui.painter().vline(pointer.x, map.rect.y_range(), Stroke::new(1.0, look.dim.gamma_multiply(0.4)));
    let mut text = format!("{} {} {}", figure.x.title, number::fixed(x, 1), figure.x.unit);
    for series in &figure.series {
        let Shape::Line(points) = &series.shape else { continue };
        if let Some(y) = at(points, x) {
            text.push_str(&format!("\n{}  {} {}", series.label, number::fixed(y, 3), figure.y.unit));
        }
    }
    response.on_hover_text_at_pointer(text)
}

/// The value of a line between its points.
fn at(points: &[[f64; 2]], x: f64) -> Option<f64> {
    let after = points.partition_point(|p| p[0] < x);
    let (a, b) = (points.get(after.checked_sub(1)?)?, points.get(after)?);
    Some(a[1] + (b[1] - a[1]) * (x - a[0]) / (b[0] - a[0]))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_read_between_their_points_only() {
        let line = [[0.0, 0.0], [1.0, 2.0], [3.0, 2.0]];
        assert_eq!(at(&line, 0.5), Some(1.0));
        assert_eq!(at(&line, 2.0), Some(2.0));
        assert_eq!((at(&line, -1.0), at(&line, 4.0)), (None, None));
    }
}
