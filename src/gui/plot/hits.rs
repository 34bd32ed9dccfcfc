//! What lies under the pointer, and what is said about it.

use super::map::Map;
use crate::figure::geometry::read_line;
use crate::figure::{LevelPicture, Role, Series, Shape, number};
use crate::gui::look::{self, Look};
use crate::gui::state::{State, Study};
use eframe::egui;
use egui::{Pos2, Response, RichText, Ui};

/// How near the pointer must be to a point and to a line.
const NEAR_POINT: f32 = 8.0;
const NEAR_LINE: f32 = 5.0;

/// What lies under the pointer.
#[derive(Clone, Debug, Default)]
pub struct Hit {
    /// Index of a point.
    pub point: Option<usize>,
    /// v of a level.
    pub level: Option<usize>,
    /// Index of a series of the main plot.
    pub series: Option<usize>,
}

/// Finds what is under the pointer while it is over the plot.
pub fn find(ui: &Ui, response: &Response, state: &State, study: &Study, map: &Map) -> Hit {
    let mut hit = Hit::default();
    let hovering = response.hovered() && !response.dragged();
    let Some(pointer) = ui.input(|i| i.pointer.hover_pos()).filter(|p| hovering && map.rect.contains(*p))
    else {
        return hit;
    };
    let pictures = &study.pictures;
    hit.point = pictures
        .points
        .iter()
        .enumerate()
        .map(|(i, p)| (i, map.at(p.at).distance(pointer)))
        .filter(|(_, d)| *d <= NEAR_POINT)
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .map(|(i, _)| i);
    if hit.point.is_some() {
        return hit;
    }
    let turning = state.rotation().map_or(&[][..], |(_, picture)| &picture.series);
    let series: Vec<&Series> = pictures.main.series.iter().chain(turning).collect();
    hit.series = series.iter().rposition(|s| near(s, pointer, map));
    hit.level = level_at(state.levels_shown(), pointer, map);
    hit
}

fn near(series: &Series, pointer: Pos2, map: &Map) -> bool {
    match &series.shape {
        Shape::Line(points) => {
            let step = f64::from(NEAR_LINE) * (map.bounds.x.1 - map.bounds.x.0) / f64::from(map.rect.width());
            let x = map.x_value(pointer.x);
            // Steep lines are near sideways, flat ones above and below.
            let heights = [x - step, x, x + step].map(|x| read_line(points, x).map(|y| map.y(y)));
            let [Some(a), Some(b), Some(c)] = heights else { return false };
            let (low, high) = (a.min(b).min(c), a.max(b).max(c));
            pointer.y > low - NEAR_LINE && pointer.y < high + NEAR_LINE
        }
        _ => false,
    }
}

/// The level whose line is nearest, within half the distance to the next one.
fn level_at(levels: &[LevelPicture], pointer: Pos2, map: &Map) -> Option<usize> {
    let energy = map.y_value(pointer.y);
    let r = map.x_value(pointer.x);
    let nearest = levels
        .iter()
        .filter(|l| l.r.first().is_some_and(|a| *a <= r) && l.r.last().is_some_and(|b| *b >= r))
        .min_by(|a, b| (a.energy_per_cm - energy).abs().total_cmp(&(b.energy_per_cm - energy).abs()))?;
    let distance = (map.y(nearest.energy_per_cm) - pointer.y).abs();
    (distance <= 14.0).then_some(nearest.v)
}

/// Says what is under the pointer.
pub fn explain_ui(ui: &Ui, response: &Response, state: &State, study: &Study, hit: &Hit, map: &Map) {
    let look = Look::of(ui);
    if let Some(point) = hit.point.and_then(|i| study.pictures.points.get(i)) {
        egui::Tooltip::for_enabled(response).at_pointer().gap(14.0).show(|ui| {
            let unit = study.findings.source.length_unit.name();
            ui.label(
                RichText::new(format!("r = {} {unit}", point.r_as_read)).font(look::figures(look::SECONDARY)),
            );
            let above = format!("{} cm⁻¹ above the minimum", number::fixed(point.at[1], 2));
            ui.label(RichText::new(above).font(look::figures(look::SECONDARY)));
            let total = format!("{} hartree", number::fixed(point.energy_hartree, 8));
            ui.label(RichText::new(total).font(look::figures(look::SECONDARY)).color(look.dim));
            let words = match &point.set_aside {
                Some(why) => format!("Set aside: {why}. Click to use it again."),
                None => "Click to set it aside.".to_owned(),
            };
            ui.label(RichText::new(words).font(look::plain(look::SMALL)).color(look.dim));
        });
        return;
    }
    let turning = state.rotation().map_or(&[][..], |(_, picture)| &picture.series);
    let Some(series) = hit.series.and_then(|i| study.pictures.main.series.iter().chain(turning).nth(i))
    else {
        return;
    };
    let pointer = ui.input(|i| i.pointer.hover_pos());
    egui::Tooltip::for_enabled(response).at_pointer().gap(14.0).show(|ui| {
        ui.label(
            RichText::new(&series.label).font(look::semibold(look::SECONDARY)).color(look.role(series.role)),
        );
        let has_energy = !matches!(series.role, Role::QuasiBound | Role::Tunnelling);
        if let (Shape::Line(points), Some(pointer), true) = (&series.shape, pointer, has_energy)
            && let Some(energy) = read_line(points, map.x_value(pointer.x))
        {
            let words =
                if series.role == Role::Scanned { "above the minimum" } else { "above the curve's minimum" };
            ui.label(
                RichText::new(format!("{} cm⁻¹ {words}", number::fixed(energy, 0)))
                    .font(look::figures(look::SECONDARY)),
            );
        }
        if !series.about.is_empty() {
            ui.label(RichText::new(&series.about).font(look::plain(look::SMALL)).color(look.dim));
        }
    });
}
