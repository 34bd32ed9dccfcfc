//! The gauge under the plot: how far the curve departs from its parabola, in the measure chosen.

use super::axes::{self, Scale};
use super::map::Map;
use super::{Stage, strip};
use crate::figure::geometry::Bounds;
use crate::figure::{Figure, GaugeMeasure, Role, Shape, gauge_of};
use crate::figure::{LevelPicture, number};
use crate::gui::command::Command;
use crate::gui::kept::kept;
use crate::gui::look::{self, Look};
use crate::gui::show::text_in;
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Align2, CursorIcon, Popup, Rangef, Rect, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Name of the menu of measures.
pub const MENU: &str = "What the gauge measures";
/// Turning points of neighbouring levels closer than this are left out, numbers at them closer than that.
const MARKS_APART: f32 = 4.0;
const NUMBERS_APART: f32 = 13.0;
/// Room the strip needs above its lower edge for the bar of the zero-point amplitude.
const BAR: f32 = 11.0;

pub(super) fn gauge_ui(ui: &mut Ui, state: &State, study: &Study, stage: &Stage, main: &Map) -> Map {
    let look = Look::of(ui);
    let measure = state.view.gauge;
    let findings = &study.findings;
    let figure = kept(ui.ctx(), "gauge", findings, measure, || gauge_of(findings, measure));
    let scale = Scale::of_gauge(measure, &state.view.axes);
    let tolerance = tolerance(&figure);
    let half = held(ui, measure, half_range(&figure, measure, tolerance));
    let map = Map { rect: stage.strip, bounds: Bounds { x: main.bounds.x, y: (-half, half) } };
    let y = axes::scaled_ticks(map.bounds.y, map.rect.height(), 22.0, &scale);
    axes::grid_ui(ui, &map, &axes::x_ticks(&map, &Scale::of_length(&state.view.axes, study)), &y);
    let painter = ui.painter().with_clip_rect(map.rect);
    if measure != GaugeMeasure::EnergyPercent {
        band_ui(ui, &figure, &map);
    }
    if let Some(t) = tolerance {
        let band = Rect::from_min_max(pos2(map.rect.left(), map.y(t)), pos2(map.rect.right(), map.y(-t)));
        painter.rect_filled(band, 0.0, look.reach.gamma_multiply(0.10));
        for value in [t, -t] {
            let line = [pos2(map.rect.left(), map.y(value)), pos2(map.rect.right(), map.y(value))];
            painter.extend(egui::Shape::dashed_line(&line, Stroke::new(1.2, look.reach), 4.0, 3.0));
        }
    }
    turning_points_ui(ui, state, &study.pictures.levels, &map);
    zero_point_ui(ui, &figure, &map);
    strip::lines_ui(ui, "gauge", &figure, &map, look);
    let percent = matches!(measure, GaugeMeasure::EnergyPercent | GaugeMeasure::ForcePercent);
    axes::y_labels_ui(ui, &map, &y, |v| {
        let text = number::signed(v, y.decimals);
        if percent { format!("{text} %") } else { text }
    });
    if !percent {
        axes::y_title_ui(ui, &map, &format!("off by / {}", scale.unit));
    }
    map
}

/// The range of the last frame for as long as the hand is down: an axis must not run away from what is dragged on it.
fn held(ui: &Ui, measure: GaugeMeasure, wanted: f64) -> f64 {
    let id = egui::Id::unique("range of the gauge");
    let down = ui.input(|i| i.pointer.any_down());
    let last = ui.ctx().data(|d| d.get_temp::<(GaugeMeasure, f64)>(id));
    let half = last.filter(|(of, _)| down && *of == measure).map_or(wanted, |(_, half)| half);
    ui.ctx().data_mut(|d| d.insert_temp(id, (measure, half)));
    half
}

/// The tolerance in the unit of the figure, where it is one number.
fn tolerance(figure: &Figure) -> Option<f64> {
    figure.series.iter().find_map(|s| match (s.role, &s.shape) {
        (Role::Tolerance, Shape::Level(t)) => Some(t.abs()),
        _ => None,
    })
}

/// Half the range of the gauge, a few tolerances, in coarse steps: the axis must not run away from a tolerance line
/// that is being dragged. Without one tolerance for all displacements: what the line does in the reach, four times.
fn half_range(figure: &Figure, measure: GaugeMeasure, tolerance: Option<f64>) -> f64 {
    match (measure, tolerance) {
        (GaugeMeasure::EnergyPercent | GaugeMeasure::ForcePercent, t) => {
            let wanted = 3.0 * t.unwrap_or(5.0);
            [3.0, 12.0, 30.0, 60.0, 120.0, 300.0].into_iter().find(|h| *h >= wanted).unwrap_or(300.0)
        }
        (_, Some(t)) => coarse(3.0 * t),
        (_, None) => coarse(4.0 * largest_in_reach(figure)),
    }
}

/// The next of 1, 2, 5, 10, 20 and so on.
fn coarse(least: f64) -> f64 {
    if !(least.is_finite() && least > 0.0) {
        return 1.0;
    }
    let power = 10_f64.powi(least.log10().floor() as i32);
    let steps = [1.0, 2.0, 5.0, 10.0].map(|m| m * power);
    steps.into_iter().find(|s| *s >= least * (1.0 - 1e-9)).unwrap_or(10.0 * power)
}

fn largest_in_reach(figure: &Figure) -> f64 {
    let (from, to) = reach(figure).unwrap_or((f64::NEG_INFINITY, f64::INFINITY));
    let line = figure.series.iter().find_map(|s| match &s.shape {
        Shape::Line(points) if s.role == Role::Scanned => Some(points),
        _ => None,
    });
    let inside = line.into_iter().flatten().filter(|p| p[0] >= from && p[0] <= to);
    inside.map(|p| p[1].abs()).fold(0.0, f64::max)
}

/// Ends of the reach by this measure in angstrom; open ends are infinite.
fn reach(figure: &Figure) -> Option<(f64, f64)> {
    figure.series.iter().find_map(|s| match s.shape {
        Shape::Band(from, to) if s.role == Role::Reach => {
            Some((from.unwrap_or(f64::NEG_INFINITY), to.unwrap_or(f64::INFINITY)))
        }
        _ => None,
    })
}

/// The reach by this measure, where it is not that of the plot above.
fn band_ui(ui: &Ui, figure: &Figure, map: &Map) {
    let Some((from, to)) = reach(figure) else { return };
    let look = Look::of(ui);
    let (left, right) = map.bounds.x;
    let painter = ui.painter().with_clip_rect(map.rect);
    let x = map.x(from.max(left))..=map.x(to.min(right));
    painter.rect_filled(Rect::from_x_y_ranges(x, map.rect.y_range()), 0.0, look.reach.gamma_multiply(0.20));
    for edge in [from, to].into_iter().filter(|e| map.sees_x(*e)) {
        painter.vline(map.x(edge), map.rect.y_range(), Stroke::new(1.0, look.reach.gamma_multiply(0.75)));
    }
}

/// Where a classical particle of each level's energy turns, on the line of no deviation, v = 0 innermost.
fn turning_points_ui(ui: &Ui, state: &State, levels: &[LevelPicture], map: &Map) {
    let look = Look::of(ui);
    let painter = ui.painter().with_clip_rect(map.rect);
    let zero = map.y(0.0);
    let font = look::figures(look::SMALL);
    for side in [0, 1] {
        let (mut mark, mut number) = (f32::INFINITY, f32::INFINITY);
        for level in levels {
            let r = if side == 0 { level.turning_points.0 } else { level.turning_points.1 };
            if !r.is_finite() || !map.sees_x(r) {
                continue;
            }
            let x = map.x(r);
            let shown = state.shown_level() == Some(level.v);
            if shown {
                painter.vline(x, Rangef::new(zero - 9.0, zero + 9.0), Stroke::new(2.0, look.accent));
            } else if (x - mark).abs() >= MARKS_APART {
                painter.vline(x, Rangef::new(zero - 4.0, zero + 4.0), Stroke::new(1.2, look.level));
                mark = x;
            }
            let apart = if level.v < 10 { NUMBERS_APART } else { 1.6 * NUMBERS_APART };
            let inside = x > map.rect.left() + 6.0 && x < map.rect.right() - 6.0;
            if inside && (shown || (x - number).abs() >= apart) {
                let color = if shown { look.accent } else { look.dim };
                let at = pos2(x, zero + if shown { 11.0 } else { 6.0 });
                let text = level.v.to_string();
                // The tolerance line may pass here.
                let back = Rect::from_center_size(at + vec2(0.0, 6.0), vec2(7.0 * text.len() as f32, 10.0));
                painter.rect_filled(back, 2.0, look.panel.gamma_multiply(0.7));
                text_in(ui, at, Align2::CENTER_TOP, &text, &font, color);
                number = x;
            }
        }
    }
}

/// The zero-point amplitude as a bar near the bottom, with its name where there is room.
fn zero_point_ui(ui: &Ui, figure: &Figure, map: &Map) {
    let look = Look::of(ui);
    let Some((from, to)) = figure.series.iter().find_map(|s| match s.shape {
        Shape::Bar(_, from, to) => Some((from, to)),
        _ => None,
    }) else {
        return;
    };
    let painter = ui.painter().with_clip_rect(map.rect);
    let y = map.rect.bottom() - BAR;
    let (left, right) = (map.x(from), map.x(to));
    painter.hline(Rangef::new(left, right), y, Stroke::new(3.0, look.accent));
    for x in [left, right] {
        painter.vline(x, Rangef::new(y - 4.0, y + 4.0), Stroke::new(1.5, look.accent));
    }
    // At the left: the deviation falls to the right for every bond, so the line is not met there.
    let name = "zero-point amplitude";
    let galley = ui.painter().layout_no_wrap(name.to_owned(), look::plain(look::SMALL), look.accent);
    let size = galley.size();
    if left - 8.0 - size.x > map.rect.left() + 4.0 {
        painter.galley(pos2(left - 8.0 - size.x, y - size.y / 2.0), galley, look.accent);
    }
}

/// What is measured, at the left of the tabs; a click offers the other measures.
pub(super) fn measure_ui(ui: &Ui, state: &State, stage: &Stage, right: f32, out: &mut Vec<Command>) {
    let look = Look::of(ui);
    let measure = state.view.gauge;
    let unit = Scale::of_gauge(measure, &state.view.axes).unit;
    let what = match measure {
        GaugeMeasure::EnergyPercent | GaugeMeasure::EnergyPerCm => "energy",
        GaugeMeasure::ForcePercent | GaugeMeasure::ForcePerCmAngstrom => "force",
    };
    let font = look::plain(look::SMALL);
    let galley = ui.painter().layout_no_wrap(format!("{what} / {unit}"), font, look.dim);
    let size = galley.size() + vec2(12.0, 0.0);
    let place = Rect::from_min_size(pos2(right - size.x, stage.strip.top() + 5.0), vec2(size.x, 18.0));
    let id = ui.scope_id().with(MENU);
    let response =
        ui.interact(place.expand(3.0), id, Sense::click()).on_hover_cursor(CursorIcon::PointingHand);
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, MENU));
    let lively = response.hovered() || response.has_focus() || Popup::is_id_open(ui.ctx(), response.id);
    let color = if lively { look.text } else { look.dim };
    ui.painter().rect_filled(place.expand(3.0), 3.0, look.panel.gamma_multiply(0.85));
    let at = pos2(place.left(), place.center().y - galley.size().y / 2.0);
    ui.painter().galley_with_override_text_color(at, galley, color);
    let tip = pos2(place.right() - 4.0, place.center().y);
    let corners = vec![tip + vec2(-4.0, -2.0), tip + vec2(4.0, -2.0), tip + vec2(0.0, 3.0)];
    ui.painter().add(egui::Shape::convex_polygon(corners, color, Stroke::NONE));
    let response = response.on_hover_text("Energy or force, in percent or in a unit. Click for the others.");
    Popup::menu(&response).show(|ui| {
        for (_, other) in GaugeMeasure::ALL {
            let command = Command::ShowGauge(other);
            let entry = ui.radio(other == measure, command.label()).on_hover_text(command.tooltip());
            if entry.clicked() {
                out.push(command);
            }
        }
    });
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_range_moves_in_coarse_steps() {
        assert_eq!([0.9, 1.0, 1.01, 4.0, 5.1, 350.0].map(coarse), [1.0, 1.0, 2.0, 5.0, 10.0, 500.0]);
        assert_eq!([0.0, -1.0, f64::NAN, f64::INFINITY].map(coarse), [1.0; 4]);
    }
}
