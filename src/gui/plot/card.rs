//! The read-out of the level shown, in whichever corner of the plot hides least.

use super::Stage;
use super::map::Map;
use crate::figure::geometry::{Bounds, clip_line};
use crate::figure::{Role, Shape, lifetime_text, number, quasi_bound_words, width_text};
use crate::findings::QuasiBoundLevel;
use crate::gui::look::{self, Look};
use crate::gui::show::{elided, text_in};
use crate::gui::state::{State, Study};
use crate::radial::Level;
use eframe::egui;
use egui::{Align2, Color32, Rect, Stroke, StrokeKind, Ui, pos2, vec2};

const WIDTH: f32 = 204.0;
/// With J beside v.
const WIDTH_WITH_J: f32 = 236.0;
const ROW: f32 = 18.0;
const PAD: f32 = 10.0;
/// More line than this under the card, and one line of text below the plot takes its place.
const MOST_COVERED: f32 = 150.0;

/// What the card says.
struct Card {
    /// The level, and its J where it has one.
    name: String,
    /// Its energy with the unit.
    energy: String,
    /// Label, value, colour.
    rows: Vec<(&'static str, String, Color32)>,
    /// The same in one line.
    line: String,
}

impl Card {
    /// Of the level shown.
    fn of(state: &State, study: &Study, look: &Look) -> Option<Self> {
        let v = state.shown_level()?;
        let Some((rotating, _)) = state.rotation() else {
            let level = study.findings.levels.iter().find(|l| l.v == v)?;
            return Some(Self::without_rotation(level, look));
        };
        let quasi = || rotating.quasi_bound.iter().find(|q| q.v == v).map(|q| Self::quasi_bound(q, look));
        let bound = rotating.levels.iter().find(|l| l.v == v);
        bound.map(|level| Self::with_rotation(level, study, look)).or_else(quasi)
    }

    fn without_rotation(level: &Level, look: &Look) -> Self {
        let energy = number::fixed(level.energy_per_cm, 2);
        let harmonic = number::signed(-level.minus_harmonic_per_cm, 2);
        let beyond = number::percent(level.forbidden_probability, 1);
        let name = format!("v = {}", level.v);
        Self {
            line: format!("{name}: {energy} cm⁻¹, harmonic − E {harmonic}, beyond turning points {beyond}"),
            name,
            energy: energy_of(level),
            rows: rows(level, look),
        }
    }

    fn with_rotation(level: &Level, study: &Study, look: &Look) -> Self {
        let name = format!("v = {}, J = {}", level.v, level.j);
        let mut rows = Vec::new();
        let without = study.findings.levels.iter().find(|l| l.v == level.v);
        if let Some(without) = without {
            let up = number::signed(level.energy_per_cm - without.energy_per_cm, 2);
            rows.push(("− E(v, 0)", format!("{up} cm⁻¹"), look.rotation));
        }
        rows.push(("beyond turning points", number::percent(level.forbidden_probability, 1), look.text));
        if let Some(p) = level.inside_reach {
            rows.push(("inside the reach", number::percent(p, 1), look.reach));
        }
        rows.push(("ℏ²⟨r⁻²⟩/(2μ)", format!("{} cm⁻¹", number::fixed(level.b_v_per_cm, 4)), look.text));
        if level.leans_on_tail {
            rows.push(("leans on the tail", number::percent(level.outside_scan, 2), look.accent));
        }
        Self {
            line: format!("{name}: {} cm⁻¹", number::fixed(level.energy_per_cm, 2)),
            name,
            energy: energy_of(level),
            rows,
        }
    }

    fn quasi_bound(level: &QuasiBoundLevel, look: &Look) -> Self {
        let energy = format!("{} cm⁻¹", number::fixed(level.energy_per_cm, 2));
        let below = number::fixed(level.barrier_per_cm - level.energy_per_cm, 2);
        Self {
            name: format!("v = {}, J = {}", level.v, level.j),
            energy,
            rows: vec![
                ("width Γ", format!("{} cm⁻¹", width_text(level.width_per_cm)), look.rotation),
                ("lifetime ħ/Γ", lifetime_text(level.lifetime_seconds()), look.text),
                ("below the barrier", format!("{below} cm⁻¹"), look.text),
            ],
            line: quasi_bound_words(level),
        }
    }
}

fn energy_of(level: &Level) -> String {
    format!("{} cm⁻¹", number::with_error_capped(level.energy_per_cm, level.energy_error_per_cm, 2))
}

pub(super) fn card_ui(ui: &Ui, state: &State, study: &Study, stage: &Stage, map: &Map) {
    let look = Look::of(ui);
    let Some(card) = Card::of(state, study, look) else { return };
    let width = if state.rotation().is_some() { WIDTH_WITH_J } else { WIDTH };
    let size = vec2(width, ROW * (card.rows.len() as f32 + 1.0) + 2.0 * PAD - 2.0);
    let roomy = size.x + 40.0 < map.rect.width() && size.y + 40.0 < map.rect.height();
    let Some(rect) = roomy.then(|| place(state, study, map, size)).flatten() else {
        line_ui(ui, &card.line, stage);
        return;
    };
    ui.painter().rect(
        rect,
        f32::from(look::CORNER) + 2.0,
        look.raised.gamma_multiply(0.97),
        Stroke::new(1.0, look.rule),
        StrokeKind::Middle,
    );
    let mut y = rect.top() + PAD + ROW / 2.0 - 2.0;
    let (left, right) = (rect.left() + PAD, rect.right() - PAD);
    let figures = look::figures(look::SECONDARY);
    let name = look::semibold(look::BODY);
    text_in(ui, pos2(left, y), Align2::LEFT_CENTER, &card.name, &name, look.accent);
    text_in(ui, pos2(right, y), Align2::RIGHT_CENTER, &card.energy, &figures, look.text);
    for (label, value, color) in card.rows {
        y += ROW;
        text_in(ui, pos2(left, y), Align2::LEFT_CENTER, label, &look::plain(look::SECONDARY), look.dim);
        text_in(ui, pos2(right, y), Align2::RIGHT_CENTER, &value, &figures, color);
    }
}

fn rows(level: &Level, look: &Look) -> Vec<(&'static str, String, Color32)> {
    let mut rows = vec![(
        "harmonic − E",
        format!("{} cm⁻¹", number::signed(-level.minus_harmonic_per_cm, 2)),
        look.harmonic,
    )];
    if let Some(d) = level.minus_morse_per_cm {
        rows.push(("Morse − E", format!("{} cm⁻¹", number::signed(-d, 2)), look.morse));
    }
    rows.push(("beyond turning points", number::percent(level.forbidden_probability, 1), look.text));
    if let Some(p) = level.inside_reach {
        rows.push(("inside the reach", number::percent(p, 1), look.reach));
    }
    rows.push(("Bᵥ", format!("{} cm⁻¹", number::fixed(level.b_v_per_cm, 4)), look.text));
    if level.leans_on_tail {
        rows.push(("leans on the tail", number::percent(level.outside_scan, 2), look.accent));
    }
    rows
}

/// The same in one line between plot and strip, as far as there is room.
fn line_ui(ui: &Ui, text: &str, stage: &Stage) {
    let look = Look::of(ui);
    let at = pos2(stage.plot.left() + 2.0, (stage.plot.bottom() + stage.strip.top()) / 2.0);
    let over = ui.input(|i| i.pointer.hover_pos()).is_some_and(|p| stage.plot.union(stage.strip).contains(p));
    let room = stage.plot.width() - if over { 190.0 } else { 4.0 };
    elided(ui, at, room, text, look::plain(look::SMALL), look.accent);
}

/// The corner in which the card covers the least of curve and fits; none when that is too much.
fn place(state: &State, study: &Study, map: &Map, size: egui::Vec2) -> Option<Rect> {
    let inner = map.rect.shrink(12.0);
    // Above the read-outs of the window edges, below the word at the top.
    let (top, bottom) = (inner.top() + 14.0, inner.bottom() - 26.0);
    let corners = [
        pos2(inner.right() - size.x, bottom - size.y),
        pos2(inner.right() - size.x, (top + bottom - size.y) / 2.0),
        pos2(inner.left(), bottom - size.y),
        pos2(inner.right() - size.x, top),
        pos2(inner.left(), top),
    ];
    corners
        .into_iter()
        .map(|min| Rect::from_min_size(min, size))
        .map(|rect| (rect, covered(state, study, map, rect)))
        .min_by(|a, b| a.1.total_cmp(&b.1))
        .filter(|(_, covered)| *covered <= MOST_COVERED)
        .map(|(rect, _)| rect)
}

/// Length of line under a rectangle, the scanned curve counting most.
fn covered(state: &State, study: &Study, map: &Map, rect: Rect) -> f32 {
    let bounds = Bounds {
        x: (map.x_value(rect.left()), map.x_value(rect.right())),
        y: (map.y_value(rect.bottom()), map.y_value(rect.top())),
    };
    let length =
        |line: &[[f64; 2]]| line.windows(2).map(|p| map.at(p[0]).distance(map.at(p[1]))).sum::<f32>();
    let turning = state.rotation().map_or(&[][..], |(_, picture)| &picture.series);
    let all = study.pictures.main.series.iter().chain(turning);
    let lines: f32 = all
        .filter_map(|s| match &s.shape {
            Shape::Line(points) => Some((s.role, points)),
            _ => None,
        })
        .map(|(role, points)| {
            let weight = if matches!(role, Role::Scanned | Role::Tail | Role::Effective | Role::EffectiveTail)
            {
                4.0
            } else {
                1.0
            };
            weight * clip_line(points, &bounds).iter().map(|l| length(l)).sum::<f32>()
        })
        .sum();
    let levels: f32 = state
        .levels_shown()
        .iter()
        .filter(|l| map.sees_y(l.energy_per_cm) && rect.y_range().contains(map.y(l.energy_per_cm)))
        .map(|l| {
            let (a, b) =
                (map.x(l.turning_points.0).max(rect.left()), map.x(l.turning_points.1).min(rect.right()));
            (b - a).max(0.0) * 0.6
        })
        .sum();
    lines + levels
}
