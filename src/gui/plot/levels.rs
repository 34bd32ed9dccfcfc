//! Levels with their densities.

use super::map::Map;
use crate::figure::{DensityKind, DensityPicture, LevelPicture, ThermalDensityPicture, number};
use crate::gui::densities::{DensityView, shown_thermal};
use crate::gui::look::{self, Look};
use crate::gui::show::{as_read, text_in};
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Align2, Color32, Stroke, Ui, pos2};
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

/// Adds the levels that are seen to the plot, those that stand out strongest.
pub fn add_levels(
    plot: &mut PlotUi<'_>,
    levels: &[LevelPicture],
    stands_out: &dyn Fn(usize) -> bool,
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
        let is_shown = stands_out(level.v);
        let room = room(levels, index, map);
        if is_shown || room >= ROOM_FOR_DENSITY {
            let strength = if is_shown { 0.78 } else { 0.40 };
            add_density(plot, level, height, strength, map, look);
        }
        // A quasi-bound level has lines of its own.
        if level.quasi_bound {
            continue;
        }
        let alpha = if room < 3.0 { 0.35 } else { 0.8 };
        add_line(plot, level, look.level.gamma_multiply(alpha));
    }
}

/// The density at a temperature, from the minimum upwards; dashed, the harmonic one.
pub fn add_thermal(
    plot: &mut PlotUi<'_>,
    thermal: &ThermalDensityPicture,
    height: f64,
    map: &Map,
    look: &Look,
) {
    let scale = height * thermal.scale_per_cm;
    let points_per_x = f64::from(map.rect.width()) / (map.bounds.x.1 - map.bounds.x.0);
    for (part, (inside, range)) in thermal.parts.iter().enumerate() {
        let chosen = thinned(&thermal.r, range, points_per_x);
        let x: Vec<f64> = chosen.iter().map(|&i| thermal.r[i]).collect();
        let high: Vec<f64> = chosen.iter().map(|&i| scale * thermal.density[i]).collect();
        let color = if *inside { look.reach } else { look.outside };
        let area = FilledArea::new("thermal density", &x, &vec![0.0; x.len()], &high)
            .id(("thermal density", part))
            .fill_color(color.gamma_multiply(0.85))
            .allow_hover(false);
        plot.add(area);
    }
    let harmonic: Vec<[f64; 2]> = thermal.harmonic.iter().map(|[r, d]| [*r, scale * d]).collect();
    plot.line(
        Line::new("harmonic thermal density", PlotPoints::from(harmonic))
            .color(look.harmonic)
            .style(LineStyle::dashed_dense())
            .width(1.6)
            .allow_hover(false),
    );
}

/// Every so many-th index of a range, and both ends, so that neighbouring parts meet.
fn thinned(r: &[f64], range: &std::ops::RangeInclusive<usize>, points_per_x: f64) -> Vec<usize> {
    let span = r.last().zip(r.first()).map_or(0.0, |(b, a)| b - a);
    let wanted = (span * points_per_x / POINT_EVERY).max(24.0);
    let stride = ((r.len() as f64 / wanted).floor() as usize).max(1);
    (*range.start()..*range.end()).step_by(stride).chain([*range.end()]).collect()
}

/// What the density at the foot of the well is.
pub(super) fn thermal_name_ui(ui: &Ui, state: &State, study: &Study, map: &Map) {
    let thermal = shown_thermal(ui.ctx(), state, study);
    let Some(end) = thermal.as_ref().as_ref().and_then(|t| t.r.last()) else { return };
    let look = Look::of(ui);
    let name = format!("density at {} K", as_read(state.view.kelvin()));
    // Below its base line, where neither read-outs nor grips stand.
    let galley = ui.painter().layout_no_wrap(name, look::plain(look::SMALL), look.outside);
    let left = (map.x(*end) - 24.0).min(map.rect.right() - galley.size().x - 8.0);
    if left > map.rect.left() && map.sees_y(0.0) {
        // A low plot has less room there.
        let top = (map.y(0.0) + 2.0).min(map.rect.bottom() - galley.size().y);
        ui.painter().galley(pos2(left, top), galley, look.outside);
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
    let points_per_x = f64::from(map.rect.width()) / (map.bounds.x.1 - map.bounds.x.0);
    for (part, (inside, range)) in level.parts.iter().enumerate() {
        let chosen = thinned(&level.r, range, points_per_x);
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
                .id(("density line", picture.v, line.label))
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

/// The levels that stand out: their lines and turning points; those kept beside the one shown finer, with their v.
pub(super) fn shown_level_ui(ui: &Ui, state: &State, map: &Map) {
    let look = Look::of(ui);
    let painter = ui.painter().with_clip_rect(map.rect);
    for v in state.outstanding() {
        let level = state.levels_shown().iter().find(|l| l.v == v && map.sees_y(l.energy_per_cm));
        let Some(level) = level else { continue };
        let (width, half) = if state.shown_level() == Some(v) { (2.0, 5.0) } else { (1.3, 4.0) };
        let stroke = Stroke::new(width, look.accent);
        let y = map.y(level.energy_per_cm);
        let (left, right) = (map.x(level.turning_points.0), map.x(level.turning_points.1));
        painter.line_segment([pos2(left, y), pos2(right, y)], stroke);
        for x in [left, right] {
            painter.line_segment([pos2(x, y - half), pos2(x, y + half)], stroke);
        }
        if state.view.kept_levels.contains(&v) && right + 40.0 < map.rect.right() {
            // Right of the turning point and below the line neither curve nor density passes.
            let at = pos2(right + 8.0, y + 2.0);
            let name = format!("v = {v}");
            text_in(ui, at, Align2::LEFT_TOP, &name, &look::figures(look::SMALL), look.accent);
        }
    }
}

/// The levels as a list for those who do not see the picture. It takes no room and no pointer.
pub(super) fn list_ui(ui: &mut Ui, state: &State, map: &Map) {
    let builder = egui::UiBuilder::new().id_salt("levels of the picture").max_rect(map.rect);
    ui.scope_builder(builder, |ui| {
        ui.ctx().accesskit_node_builder(ui.unique_id(), |node| {
            node.set_role(egui::accesskit::Role::List);
            node.set_label("Levels of the picture");
        });
        for level in state.levels_shown() {
            let y = map.y(level.energy_per_cm).clamp(map.rect.top(), map.rect.bottom());
            let line = egui::Rect::from_min_size(pos2(map.rect.left(), y), egui::vec2(map.rect.width(), 0.0));
            let response = ui.interact(line, ui.unique_id().with(level.v), egui::Sense::hover());
            response.widget_info(|| {
                let (inner, outer) = level.turning_points;
                let kind = if level.quasi_bound { "Quasi-bound level" } else { "Level" };
                let text = format!(
                    "{kind} v = {}: {} cm⁻¹ above the minimum, turning points {} and {} Å",
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
