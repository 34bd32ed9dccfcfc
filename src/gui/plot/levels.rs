//! Levels with their densities.

use super::map::Map;
use crate::figure::{DensityKind, DensityPicture, LevelPicture, number};
use crate::gui::densities::DensityView;
use crate::gui::look::Look;
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Color32, Stroke, Ui, pos2};
use egui_plot::{FilledArea, Line, LineStyle, PlotPoints, PlotUi};

/// Densities are drawn where levels are at least this far apart on the screen.
const ROOM_FOR_DENSITY: f64 = 8.0;
/// A filled area gets one point per so many screen points at most.
const POINT_EVERY: f64 = 2.5;
/// Other densities are cut where they fall below this fraction of the highest numerical one.
const NEGLIGIBLE: f64 = 2e-3;

/// Distance of a level to its neighbours on the screen.
fn room(levels: &[LevelPicture], index: usize, map: &Map) -> f64 {
    let energy = levels[index].energy_per_cm;
    let above = levels.get(index + 1).map(|l| l.energy_per_cm - energy);
    let below = index.checked_sub(1).map(|i| energy - levels[i].energy_per_cm);
    above.or(below).map_or(f64::INFINITY, |d| d * map.points_per_y())
}

/// Adds the levels that are seen to the plot, the one shown last and strongest.
pub fn add_levels(
    plot: &mut PlotUi<'_>,
    levels: &[LevelPicture],
    shown: Option<usize>,
    height: f64,
    map: &Map,
    look: &Look,
) {
    for (index, level) in levels.iter().enumerate() {
        let top = level.energy_per_cm
            + level.density.iter().fold(0.0, |a: f64, d| a.max(*d)) * height * level.scale_per_cm;
        if top < map.bounds.y.0 || level.energy_per_cm > map.bounds.y.1 {
            continue;
        }
        let is_shown = shown == Some(level.v);
        let room = room(levels, index, map);
        if is_shown || room >= ROOM_FOR_DENSITY {
            let strength = if is_shown { 0.78 } else { 0.40 };
            add_density(plot, level, height, strength, map, look);
        }
        let alpha = if room < 3.0 { 0.35 } else { 0.8 };
        add_line(plot, level, look.level.gamma_multiply(alpha));
    }
}

fn add_density(
    plot: &mut PlotUi<'_>,
    level: &LevelPicture,
    height: f64,
    strength: f32,
    map: &Map,
    look: &Look,
) {
    let scale = height * level.scale_per_cm;
    let span = level.r.last().zip(level.r.first()).map_or(0.0, |(b, a)| b - a);
    let points_per_x = f64::from(map.rect.width()) / (map.bounds.x.1 - map.bounds.x.0);
    let wanted = (span * points_per_x / POINT_EVERY).max(24.0);
    let stride = ((level.r.len() as f64 / wanted).floor() as usize).max(1);
    for (part, (inside, range)) in level.parts.iter().enumerate() {
        // Every stride-th point, and both ends, so that neighbouring parts meet.
        let (start, end) = (*range.start(), *range.end());
        let chosen: Vec<usize> = (start..end).step_by(stride).chain([end]).collect();
        let x: Vec<f64> = chosen.iter().map(|&i| level.r[i]).collect();
        let low = vec![level.energy_per_cm; x.len()];
        let high: Vec<f64> = chosen.iter().map(|&i| level.energy_per_cm + scale * level.density[i]).collect();
        let (color, strength) =
            if *inside { (look.reach, (strength * 1.3).min(0.95)) } else { (look.outside, strength) };
        let area = FilledArea::new("density", &x, &low, &high)
            .id(("density", level.v, part))
            .fill_color(color.gamma_multiply(strength))
            .allow_hover(false);
        plot.add(area);
    }
}

/// The other densities of the level shown, each from the line of its own level.
pub fn add_density_lines(plot: &mut PlotUi<'_>, picture: &DensityPicture, view: &DensityView, look: &Look) {
    let scale = picture.scale_per_cm * view.height;
    for line in picture.lines.iter().filter(|l| view.shows(l.kind)) {
        let (color, style) = match line.kind {
            DensityKind::Numerical => (look.text, LineStyle::Solid),
            DensityKind::Harmonic => (look.harmonic, LineStyle::dashed_dense()),
            DensityKind::Morse => (look.morse, LineStyle::Solid),
            DensityKind::Classical => (look.dim, LineStyle::dotted_dense()),
            DensityKind::AveragedNumerical => (look.scan, LineStyle::Solid),
            DensityKind::AveragedClassical => (look.accent, LineStyle::dashed_dense()),
        };
        // Singular at the turning points, a classical density has no highest value to measure by.
        let highest =
            picture.lines.first().map_or(0.0, |l| l.points.iter().fold(0.0, |a: f64, p| a.max(p[1])));
        let points: Vec<[f64; 2]> = line
            .points
            .iter()
            .filter(|p| p[1] > NEGLIGIBLE * highest)
            .map(|[r, density]| [*r, line.energy_per_cm + scale * density])
            .collect();
        plot.line(
            Line::new(line.label, PlotPoints::from(points))
                .id(("density line", line.label))
                .color(color)
                .style(style)
                .width(1.6)
                .allow_hover(false),
        );
    }
}

/// The level's line: strong between the turning points, faint where its density goes on.
fn add_line(plot: &mut PlotUi<'_>, level: &LevelPicture, color: Color32) {
    let (inner, outer) = level.turning_points;
    let mut segment = |a: f64, b: f64, part: usize, color: Color32| {
        if a.is_finite() && b.is_finite() && b > a {
            let points = PlotPoints::from(vec![[a, level.energy_per_cm], [b, level.energy_per_cm]]);
            plot.line(
                Line::new("level", points)
                    .id(("level", level.v, part))
                    .color(color)
                    .width(1.0)
                    .allow_hover(false),
            );
        }
    };
    let faint = color.gamma_multiply(0.45);
    if let (Some(&first), Some(&last)) = (level.r.first(), level.r.last()) {
        segment(first, inner, 0, faint);
        segment(outer, last, 2, faint);
    }
    segment(inner, outer, 1, color);
}

/// The level brought forward: its line, its turning points, its name.
pub(super) fn shown_level_ui(ui: &Ui, state: &State, study: &Study, map: &Map) {
    let look = Look::of(ui);
    let Some(level) = state.shown_level().and_then(|v| study.pictures.levels.iter().find(|l| l.v == v))
    else {
        return;
    };
    if !map.sees_y(level.energy_per_cm) {
        return;
    }
    let painter = ui.painter().with_clip_rect(map.rect);
    let y = map.y(level.energy_per_cm);
    let (left, right) = (map.x(level.turning_points.0), map.x(level.turning_points.1));
    painter.line_segment([pos2(left, y), pos2(right, y)], Stroke::new(2.0, look.accent));
    for x in [left, right] {
        painter.line_segment([pos2(x, y - 5.0), pos2(x, y + 5.0)], Stroke::new(2.0, look.accent));
    }
}

/// The levels as a list for those who do not see the picture. It takes no room and no pointer.
pub(super) fn list_ui(ui: &mut Ui, study: &Study, map: &Map) {
    let builder = egui::UiBuilder::new().id_salt("levels of the picture").max_rect(map.rect);
    ui.scope_builder(builder, |ui| {
        ui.ctx().accesskit_node_builder(ui.unique_id(), |node| {
            node.set_role(egui::accesskit::Role::List);
            node.set_label("Levels of the picture");
        });
        for level in &study.pictures.levels {
            let y = map.y(level.energy_per_cm).clamp(map.rect.top(), map.rect.bottom());
            let line = egui::Rect::from_min_size(pos2(map.rect.left(), y), egui::vec2(map.rect.width(), 0.0));
            let response = ui.interact(line, ui.unique_id().with(level.v), egui::Sense::hover());
            response.widget_info(|| {
                let (inner, outer) = level.turning_points;
                let text = format!(
                    "Level v = {}: {} cm⁻¹ above the minimum, turning points {} and {} Å",
                    level.v,
                    number::fixed(level.energy_per_cm, 2),
                    number::fixed(inner, 3),
                    number::fixed(outer, 3)
                );
                egui::WidgetInfo::labeled(egui::accesskit::Role::ListItem, true, text)
            });
        }
    });
}
