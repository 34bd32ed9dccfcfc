//! Series of a figure as items of the plot, cut to what is seen.

use crate::figure::geometry::{Bounds, clip_line};
use crate::figure::{LineStyle, Series, Shape};
use crate::gui::look::Look;
use eframe::egui;
use egui_plot::{FilledArea, Line, PlotPoints, PlotUi};

/// How much fainter a fit is outside its window.
const BEYOND: f32 = 0.5;

/// The width of a line of this style.
const fn width(style: LineStyle) -> f32 {
    match style {
        LineStyle::Solid => 1.8,
        LineStyle::Dotted => 1.1,
        LineStyle::Dashed => 2.0,
        LineStyle::LongDashed | LineStyle::ShortDashed => 1.4,
    }
}

fn plot_style(style: LineStyle) -> egui_plot::LineStyle {
    match style {
        LineStyle::Solid => egui_plot::LineStyle::Solid,
        LineStyle::Dashed => egui_plot::LineStyle::Dashed { length: 7.0 },
        LineStyle::LongDashed => egui_plot::LineStyle::Dashed { length: 14.0 },
        LineStyle::ShortDashed => egui_plot::LineStyle::Dashed { length: 4.0 },
        LineStyle::Dotted => egui_plot::LineStyle::Dotted { spacing: 5.0 },
    }
}

/// Adds the lines of a series. `index` keeps the names of items apart.
pub fn add_lines(plot: &mut PlotUi<'_>, series: &Series, index: usize, bounds: &Bounds, look: &Look) {
    let color = look.role(series.role);
    if let Shape::Ribbon(ribbon) = &series.shape {
        add_ribbon(plot, series, ribbon, index, color);
    }
    let Shape::Line(points) = &series.shape else { return };
    let style = series.role.line_style();
    // A line is cut a little outside the view, so that its joints are not seen.
    let view = bounds.grown(0.02, 0.02);
    for (part, (range, strength)) in parts(series.strong, &view).into_iter().enumerate() {
        for (run, line) in clip_line(points, &Bounds { x: range, y: view.y }).into_iter().enumerate() {
            let item = Line::new(series.label.clone(), PlotPoints::from(line))
                .id((index, part, run))
                .color(color.gamma_multiply(strength))
                .width(width(style))
                .style(plot_style(style))
                // Bands are measured upwards, which makes steep lines thin.
                .allow_band(false)
                .allow_hover(false);
            plot.line(item);
        }
    }
}

/// A confidence band; thinner than a line where the fit is sure.
fn add_ribbon(
    plot: &mut PlotUi<'_>,
    series: &Series,
    ribbon: &[[f64; 3]],
    index: usize,
    color: egui::Color32,
) {
    let column = |k: usize| ribbon.iter().map(|p| p[k]).collect::<Vec<f64>>();
    let area = FilledArea::new(series.label.clone(), &column(0), &column(1), &column(2));
    plot.add(area.id((index, "band")).fill_color(color.gamma_multiply(0.22)).allow_hover(false));
}

/// The parts of the view with the strength at which a series is drawn there.
fn parts(strong: Option<(f64, f64)>, view: &Bounds) -> Vec<((f64, f64), f32)> {
    let (left, right) = view.x;
    let Some((from, to)) = strong else { return vec![((left, right), 1.0)] };
    let (from, to) = (from.clamp(left, right), to.clamp(left, right));
    [((left, from), BEYOND), ((from, to), 1.0), ((to, right), BEYOND)]
        .into_iter()
        .filter(|((a, b), _)| b > a)
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fit_is_faint_outside_its_window() {
        let view = Bounds { x: (1.0, 3.0), y: (0.0, 1.0) };
        assert_eq!(parts(Some((1.5, 5.0)), &view), [((1.0, 1.5), BEYOND), ((1.5, 3.0), 1.0)]);
        assert_eq!(parts(None, &view), [((1.0, 3.0), 1.0)]);
    }
}
