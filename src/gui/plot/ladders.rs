//! The ladders at the plot's right edge, on its energy axis.

use super::Stage;
use super::map::Map;
use crate::figure::{Ladder, Ladders, Role, number};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, styled_line, text_in};
use crate::gui::state::State;
use eframe::egui;
use egui::{Align2, Pos2, Rangef, Sense, Shape, Stroke, Ui, pos2, vec2};

/// Room for the quantum numbers at the left of the ladders.
const NUMBERS: f32 = 24.0;
/// Rungs of neighbouring levels closer than this are drawn thinner and without ties.
const CROWDED: f32 = 3.5;
/// Quantum numbers keep this distance.
const NUMBERS_APART: f32 = 13.0;

/// Abscissas of a ladder's rungs.
fn column(stage: &Stage, index: usize, count: usize) -> Rangef {
    let left = stage.ladders.left() + NUMBERS;
    let width = (stage.ladders.width() - NUMBERS - 2.0) / count as f32;
    let from = left + index as f32 * width;
    Rangef::new(from, from + (width - 4.0).min(16.0))
}

pub(super) fn ladders_ui(
    ui: &mut Ui,
    state: &State,
    ladders: &Ladders,
    stage: &Stage,
    map: &Map,
    out: &mut Vec<Command>,
) {
    let count = ladders.columns.len();
    ties_ui(ui, ladders, stage, map);
    for (index, ladder) in ladders.columns.iter().enumerate() {
        rungs_ui(ui, state, ladder, column(stage, index, count), map);
    }
    numbers_ui(ui, state, ladders, stage, map);
    legend_ui(ui, ladders, stage);
    hover_ui(ui, state, ladders, stage, map, out);
}

/// Whether a rung has its neighbours at a distance that can be seen.
fn roomy(energies: &[f64], v: usize, map: &Map) -> bool {
    let gap =
        energies.get(v + 1).map(|e| e - energies[v]).or(v.checked_sub(1).map(|u| energies[v] - energies[u]));
    gap.is_none_or(|g| g * map.points_per_y() >= f64::from(CROWDED))
}

fn rungs_ui(ui: &Ui, state: &State, ladder: &Ladder, x: Rangef, map: &Map) {
    let look = Look::of(ui);
    for (v, &energy) in ladder.energies_per_cm.iter().enumerate() {
        if !energy.is_finite() || !map.sees_y(energy) {
            continue;
        }
        let shown = state.stands_out(v);
        let width = match (shown, roomy(&ladder.energies_per_cm, v, map)) {
            (true, _) => 3.0,
            (false, true) => 2.0,
            (false, false) => 1.0,
        };
        let stroke = Stroke::new(width, look.role(ladder.role));
        let quasi = ladder.role == Role::Effective
            && state.rotation().is_some_and(|(_, picture)| picture.quasi_bound.iter().any(|q| q.v == v));
        if quasi {
            let ends = [pos2(x.min, map.y(energy)), pos2(x.max, map.y(energy))];
            styled_line(ui.painter(), &ends, Role::Tolerance.line_style(), stroke);
        } else {
            ui.painter().hline(x, map.y(energy), stroke);
        }
    }
}

/// Hairlines between rungs of the same v in neighbouring ladders.
fn ties_ui(ui: &Ui, ladders: &Ladders, stage: &Stage, map: &Map) {
    let look = Look::of(ui);
    let painter = ui.painter().with_clip_rect(stage.ladders);
    let count = ladders.columns.len();
    for (index, pair) in ladders.columns.windows(2).enumerate() {
        let (from, to) = (column(stage, index, count).max, column(stage, index + 1, count).min);
        let rungs = pair[0].energies_per_cm.iter().zip(&pair[1].energies_per_cm).enumerate();
        for (v, (&a, &b)) in rungs {
            let seen = map.sees_y(a) && map.sees_y(b);
            if a.is_finite() && b.is_finite() && seen && roomy(&pair[1].energies_per_cm, v, map) {
                painter
                    .line_segment([pos2(from, map.y(a)), pos2(to, map.y(b))], Stroke::new(1.0, look.faint));
            }
        }
    }
}

/// Quantum numbers at the numerical levels, and the mark of the first one out of tolerance.
fn numbers_ui(ui: &Ui, state: &State, ladders: &Ladders, stage: &Stage, map: &Map) {
    let look = Look::of(ui);
    let (first, next) =
        (&ladders.columns[0].energies_per_cm, ladders.columns.get(1).map(|c| &c.energies_per_cm));
    let mut last_y = f32::INFINITY;
    for (v, &energy) in first.iter().enumerate() {
        // Where the harmonic rung has left the view, the number stands at the numerical one.
        let beside = next.and_then(|n| n.get(v).copied());
        let Some(energy) = [Some(energy), beside].into_iter().flatten().find(|e| map.sees_y(*e)) else {
            continue;
        };
        let y = map.y(energy);
        let marked = ladders.first_outside == Some(v);
        let shown = state.shown_level() == Some(v);
        if last_y - y < NUMBERS_APART && !marked {
            continue;
        }
        last_y = y;
        let right = stage.ladders.left() + NUMBERS - 4.0;
        let color = if shown { look.accent } else { look.dim };
        text_in(ui, pos2(right, y), Align2::RIGHT_CENTER, &v.to_string(), &look::figures(look::SMALL), color);
        if marked {
            triangle(ui, pos2(stage.ladders.left() + 3.0, y));
        }
    }
}

fn triangle(ui: &Ui, at: Pos2) {
    let look = Look::of(ui);
    let points = vec![at + vec2(0.0, -5.0), at + vec2(6.0, 0.0), at + vec2(0.0, 5.0)];
    ui.painter().add(Shape::convex_polygon(points, look.accent, Stroke::NONE));
}

/// Names of the ladders, in the room beside the strip.
fn legend_ui(ui: &Ui, ladders: &Ladders, stage: &Stage) {
    let look = Look::of(ui);
    let left = stage.ladders.left() + 8.0;
    let mut y = stage.strip.top() + 9.0;
    let font = look::plain(look::SMALL);
    text_in(ui, pos2(left, stage.strip.top() - 9.0), Align2::LEFT_CENTER, "ladders", &font, look.dim);
    for ladder in &ladders.columns {
        if y + 6.0 > stage.strip.bottom() {
            break;
        }
        ui.painter().hline(Rangef::new(left, left + 10.0), y, Stroke::new(2.0, look.role(ladder.role)));
        let room = stage.whole.right() - left - 14.0;
        crate::gui::show::elided(ui, pos2(left + 14.0, y), room, &ladder.label, font.clone(), look.dim);
        y += 16.0;
    }
}

/// Hovering a rung shows its level and how far the models are off.
fn hover_ui(ui: &mut Ui, state: &State, ladders: &Ladders, stage: &Stage, map: &Map, out: &mut Vec<Command>) {
    let response = ui.interact(stage.ladders, ui.scope_id().with("ladders"), Sense::click());
    let pointer = ui.input(|i| i.pointer.hover_pos()).filter(|_| response.hovered());
    let Some(pointer) = pointer else { return };
    let numerical = ladders.columns.iter().find(|c| c.role == crate::figure::Role::Scanned);
    let Some(numerical) = numerical else { return };
    let index = (0..ladders.columns.len())
        .find(|&i| column(stage, i, ladders.columns.len()).contains(pointer.x))
        .unwrap_or(0);
    let near = ladders.columns[index]
        .energies_per_cm
        .iter()
        .enumerate()
        .filter(|(_, e)| e.is_finite())
        .map(|(v, &e)| (v, (map.y(e) - pointer.y).abs()))
        .filter(|(_, d)| *d < 9.0)
        .min_by(|a, b| a.1.total_cmp(&b.1));
    let Some((v, _)) = near else { return };
    let energy = numerical.energies_per_cm.get(v).copied().unwrap_or(f64::NAN);
    out.push(Command::HoverLevel(Some(v)));
    if response.clicked() && ui.input(|i| i.modifiers.shift) {
        out.push(Command::KeepLevel(v, !state.view.kept_levels.contains(&v)));
    } else if response.clicked() {
        out.push(Command::PinLevel(Some(v)));
    }
    let spacing = spacing(&numerical.energies_per_cm, v);
    egui::Tooltip::for_enabled(&response).at_pointer().gap(14.0).show(|ui| {
        let look = Look::of(ui);
        egui::Grid::new("rung").num_columns(3).show(ui, |ui| {
            for ladder in &ladders.columns {
                let Some(&e) = ladder.energies_per_cm.get(v).filter(|e| e.is_finite()) else { continue };
                ui.colored_label(look.role(ladder.role), format!("{}, v = {v}", ladder.label));
                let text = if ladder.role == crate::figure::Role::Scanned || !energy.is_finite() {
                    format!("{} cm⁻¹", number::fixed(e, 2))
                } else {
                    format!("{} cm⁻¹", number::signed(e - energy, 2))
                };
                ui.monospace(text);
                let share = spacing.filter(|_| ladder.role != crate::figure::Role::Scanned);
                let share = share.map(|s| format!("{} %", number::signed(100.0 * (e - energy) / s, 2)));
                ui.with_layout(egui::Layout::right_to_left(egui::Align::Center), |ui| {
                    ui.monospace(share.unwrap_or_default());
                });
                ui.end_row();
            }
        });
        let words = "Model minus numerical, in cm⁻¹ and in percent of the numerical spacing";
        let from = if numerical.energies_per_cm.len() > v + 1 { v } else { v.saturating_sub(1) };
        show::note(ui, &format!("{words} {} ← {from}.", from + 1));
    });
}

/// The numerical spacing above a level, of the highest one the spacing below.
fn spacing(energies_per_cm: &[f64], v: usize) -> Option<f64> {
    let from = if energies_per_cm.len() > v + 1 { v } else { v.checked_sub(1)? };
    Some(energies_per_cm.get(from + 1)? - energies_per_cm[from]).filter(|s| *s > 0.0)
}

/// The strip of screen the ladders stand on.
#[cfg(test)]
mod tests {
    use super::*;
    use egui::Rect;

    /// The highest level has no spacing above it.
    #[test]
    fn spacings_are_those_above() {
        let levels = [500.0, 1450.0, 2300.0];
        assert_eq!([0, 1, 2, 3].map(|v| spacing(&levels, v)), [Some(950.0), Some(850.0), Some(850.0), None]);
        assert_eq!(spacing(&levels[..1], 0), None);
    }

    #[test]
    fn columns_do_not_overlap() {
        let whole = Rect::from_min_size(pos2(0.0, 0.0), vec2(700.0, 600.0));
        let stage = Stage::within(whole, true);
        for count in 1..=6 {
            let columns: Vec<Rangef> = (0..count).map(|i| column(&stage, i, count)).collect();
            assert!(columns.windows(2).all(|c| c[0].max + 1.0 < c[1].min), "{columns:?}");
            assert!(columns.last().is_some_and(|c| c.max <= stage.whole.right()));
        }
    }
}
