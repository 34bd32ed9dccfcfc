//! Grid, ticks and axis titles.

use super::map::Map;
use super::{GUTTER, Stage};
use crate::figure::{GaugeMeasure, number};
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{length_unit, text_in, unit as energy_unit};
use crate::gui::state::{AxisView, State, Study};
use crate::units::{EnergyUnit, LengthUnit, to_angstrom};
use eframe::egui;
use egui::{Align2, CursorIcon, Popup, Rect, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Marks at round values.
#[derive(Clone, Debug, PartialEq)]
pub struct Ticks {
    /// Where they are, in values of the figure.
    pub values: Vec<f64>,
    /// What is written at them.
    pub shown: Vec<f64>,
    /// Decimals that tell them apart.
    pub decimals: usize,
}

/// Marks over `range` at least `min_px` apart where `px` points are given to the range; steps of 1, 2
/// or 5 times a power of ten.
pub fn ticks((from, to): (f64, f64), px: f32, min_px: f32) -> Ticks {
    let none = Ticks { values: Vec::new(), shown: Vec::new(), decimals: 0 };
    let least = (to - from) * f64::from(min_px / px.max(1.0));
    if !(least.is_finite() && least > 0.0) {
        return none;
    }
    let power = 10_f64.powi(least.log10().floor() as i32);
    let step = [1.0, 2.0, 5.0, 10.0].map(|m| m * power).into_iter().find(|s| *s >= least * 0.999);
    let Some(step) = step.filter(|s| (to - from) / s < 400.0) else { return none };
    let first = (from / step).ceil() as i64;
    let last = (to / step).floor() as i64;
    let values: Vec<f64> = (first..=last).map(|i| i as f64 * step).collect();
    Ticks {
        shown: values.clone(),
        values,
        decimals: (-(step.log10() + 1e-9).floor()).clamp(0.0, 9.0) as usize,
    }
}

/// The same on an axis that shows other values than those of the figure.
pub(super) fn scaled_ticks(range: (f64, f64), px: f32, min_px: f32, scale: &Scale) -> Ticks {
    let found = ticks((scale.shown(range.0), scale.shown(range.1)), px, min_px);
    Ticks { values: found.shown.iter().map(|v| scale.value(*v)).collect(), ..found }
}

/// What an axis shows of a figure's values: factor · (value − origin), in a unit.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Scale {
    origin: f64,
    factor: f64,
    /// Title with the unit.
    pub title: String,
    /// The unit.
    pub unit: String,
    /// Decimals of a read-out.
    pub decimals: usize,
}

impl Scale {
    /// The bond-length axis as the user wants it.
    pub fn of_length(view: &AxisView, study: &Study) -> Self {
        let unit = view.length;
        let factor = LengthUnit::Angstrom.convert(1.0, unit);
        let r_e = study.findings.curve.as_ref().map(|c| to_angstrom(c.r_e_bohr.value));
        let (origin, what) = match r_e.filter(|_| view.displacement) {
            Some(r_e) => (r_e, "displacement x = r − rₑ"),
            None => (0.0, "bond length"),
        };
        let name = length_unit(unit);
        let decimals = if unit == LengthUnit::Picometre { 1 } else { 3 };
        Self { origin, factor, title: format!("{what} / {name}"), unit: name.to_owned(), decimals }
    }

    /// The energy axis as the user wants it.
    pub fn of_energy(view: &AxisView) -> Self {
        let unit = view.energy;
        let factor = EnergyUnit::PerCm.to_hartree(1.0) * unit.per_hartree();
        let name = energy_unit(unit);
        let decimals = match unit {
            EnergyUnit::Hartree => 5,
            EnergyUnit::Electronvolt => 4,
            EnergyUnit::PerCm => 0,
            EnergyUnit::Millielectronvolt => 1,
            _ => 2,
        };
        let title = format!("energy above the minimum / {name}");
        Self { origin: 0.0, factor, title, unit: name.to_owned(), decimals }
    }

    /// The axis of the gauge: percent, or the units of the plot's axes.
    pub fn of_gauge(measure: GaugeMeasure, view: &AxisView) -> Self {
        let energy = Self::of_energy(view);
        let per_length = LengthUnit::Angstrom.convert(1.0, view.length);
        let (factor, unit) = match measure {
            GaugeMeasure::EnergyPercent | GaugeMeasure::ForcePercent => (1.0, "%".to_owned()),
            GaugeMeasure::EnergyPerCm => (energy.factor, energy.unit),
            GaugeMeasure::ForcePerCmAngstrom => {
                (energy.factor / per_length, format!("{}/{}", energy.unit, length_unit(view.length)))
            }
        };
        Self { origin: 0.0, factor, title: format!("deviation / {unit}"), unit, decimals: 1 }
    }

    /// What the axis shows of a value of the figure.
    pub fn shown(&self, value: f64) -> f64 {
        self.factor * (value - self.origin)
    }

    /// The value of the figure that the axis shows so.
    pub fn value(&self, shown: f64) -> f64 {
        shown / self.factor + self.origin
    }
}

/// Grid lines across a rectangle.
pub fn grid_ui(ui: &Ui, map: &Map, x: &Ticks, y: &Ticks) {
    let look = Look::of(ui);
    let stroke = Stroke::new(1.0, look.grid);
    let painter = ui.painter().with_clip_rect(map.rect);
    for &value in &x.values {
        painter.vline(map.x(value).round() + 0.5, map.rect.y_range(), stroke);
    }
    for &value in &y.values {
        painter.hline(map.rect.x_range(), map.y(value).round() + 0.5, stroke);
    }
}

/// The marks of the bond-length axis, the same in plot and strip.
pub(super) fn x_ticks(map: &Map, scale: &Scale) -> Ticks {
    scaled_ticks(map.bounds.x, map.rect.width(), 64.0, scale)
}

/// Figures along the left side of a rectangle; `text` writes a value.
pub fn y_labels_ui(ui: &Ui, map: &Map, y: &Ticks, text: impl Fn(f64) -> String) {
    let look = Look::of(ui);
    let font = look::figures(look::SMALL);
    for (&value, &shown) in y.values.iter().zip(&y.shown) {
        let at = map.y(value);
        if at > map.rect.top() + 3.0 && at < map.rect.bottom() - 3.0 {
            text_in(ui, pos2(map.rect.left() - 7.0, at), Align2::RIGHT_CENTER, &text(shown), &font, look.dim);
        }
    }
}

/// A title written upwards at the far left of a rectangle; left out where it does not fit. Gives its place.
pub fn y_title_ui(ui: &Ui, map: &Map, title: &str) -> Option<Rect> {
    let look = Look::of(ui);
    let galley = ui.painter().layout_no_wrap(title.to_owned(), look::plain(look::SMALL), look.dim);
    let size = galley.size();
    if size.x > map.rect.height() {
        return None;
    }
    let at = pos2(map.rect.left() - GUTTER, map.rect.center().y + size.x / 2.0);
    ui.painter()
        .add(egui::epaint::TextShape::new(at, galley, look.dim).with_angle(-std::f32::consts::FRAC_PI_2));
    Some(Rect::from_min_size(pos2(at.x, at.y - size.x), vec2(size.y, size.x)))
}

/// The title of the energy axis; a click offers other units.
pub(super) fn energy_title_ui(ui: &Ui, state: &State, map: &Map, scale: &Scale, out: &mut Vec<Command>) {
    let Some(place) = y_title_ui(ui, map, &scale.title) else { return };
    let view = state.view.axes;
    choice_ui(ui, place, "Unit of the energy axis", scale, out, |ui| {
        let mut chosen = None;
        for unit in EnergyUnit::ALL {
            if ui.radio(view.energy == unit, energy_unit(unit)).clicked() {
                chosen = Some(AxisView { energy: unit, ..view });
            }
        }
        chosen
    });
}

/// The bond-length axis under the strip; a click on its title offers other units and the displacement.
pub(super) fn x_axis_ui(
    ui: &Ui,
    state: &State,
    stage: &Stage,
    map: &Map,
    scale: &Scale,
    out: &mut Vec<Command>,
) {
    let look = Look::of(ui);
    let font = look::figures(look::SMALL);
    let marks = x_ticks(map, scale);
    for (&value, &shown) in marks.values.iter().zip(&marks.shown) {
        let x = map.x(value);
        let text = number::fixed(shown, marks.decimals.max(usize::from(scale.decimals > 1)));
        text_in(ui, pos2(x, stage.strip.bottom() + 5.0), Align2::CENTER_TOP, &text, &font, look.dim);
    }
    let at = pos2(stage.strip.center().x, stage.strip.bottom() + 23.0);
    let place = text_in(ui, at, Align2::CENTER_TOP, &scale.title, &look::plain(look::SMALL), look.dim);
    let view = state.view.axes;
    choice_ui(ui, place, "Unit of the bond-length axis", scale, out, |ui| {
        let mut chosen = None;
        for displacement in [false, true] {
            for unit in LengthUnit::ALL {
                let what = if displacement { "displacement" } else { "bond length" };
                let is_chosen = (view.length, view.displacement) == (unit, displacement);
                if ui.radio(is_chosen, format!("{what} / {}", length_unit(unit))).clicked() {
                    chosen = Some(AxisView { length: unit, displacement, ..view });
                }
            }
        }
        chosen
    });
}

/// What can be chosen at the title of an axis.
fn choice_ui(
    ui: &Ui,
    place: Rect,
    name: &str,
    scale: &Scale,
    out: &mut Vec<Command>,
    choices: impl FnOnce(&mut Ui) -> Option<AxisView>,
) {
    let look = Look::of(ui);
    let hit = place.expand(4.0);
    let response = ui.interact(hit, ui.scope_id().with(name), Sense::click());
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Button, true, name));
    if response.hovered() || response.has_focus() || Popup::is_id_open(ui.ctx(), response.id) {
        let (from, to) = if place.width() > place.height() {
            (place.left_bottom(), place.right_bottom())
        } else {
            (place.right_bottom(), place.right_top())
        };
        ui.painter().line_segment([from, to], Stroke::new(1.0, look.accent));
    }
    let response = response
        .on_hover_cursor(CursorIcon::PointingHand)
        .on_hover_text(format!("Shown in {}. Click for other units.", scale.unit));
    if let Some(chosen) = Popup::menu(&response).show(choices).and_then(|shown| shown.inner) {
        out.push(Command::SetAxes(chosen));
    }
}

/// A hairline round a rectangle.
pub fn frame_ui(ui: &Ui, map: &Map) {
    let look = Look::of(ui);
    ui.painter().rect_stroke(map.rect, 2.0, Stroke::new(1.0, look.rule), egui::StrokeKind::Middle);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_and_apart() {
        let t = ticks((1.02, 2.62), 640.0, 64.0);
        assert_eq!(t.decimals, 1);
        assert_eq!(t.values.len(), 8);
        assert!((t.values[0] - 1.2).abs() < 1e-12);
        assert_eq!(
            ticks((-250.0, 7600.0), 500.0, 44.0).shown,
            [0.0, 1000.0, 2000.0, 3000.0, 4000.0, 5000.0, 6000.0, 7000.0]
        );
    }

    #[test]
    fn a_scaled_axis_has_round_marks_of_its_own() {
        // 1 bohr = 0.529177 angstrom [CODATA 2018].
        let scale = Scale {
            origin: 1.6,
            factor: LengthUnit::Angstrom.convert(1.0, LengthUnit::Bohr),
            title: String::new(),
            unit: "bohr".to_owned(),
            decimals: 3,
        };
        let t = scaled_ticks((1.02, 2.62), 640.0, 64.0, &scale);
        assert!(t.shown.contains(&0.0) && t.shown.contains(&1.0), "{t:?}");
        let at = t.shown.iter().position(|v| *v == 1.0).map(|i| t.values[i]);
        assert!(at.is_some_and(|r| (r - 2.129_177_2).abs() < 1e-6), "{t:?}");
    }

    #[test]
    fn bad_ranges_have_none() {
        for range in [(0.0, 0.0), (1.0, 0.0), (f64::NAN, 1.0), (0.0, f64::INFINITY)] {
            assert!(ticks(range, 100.0, 20.0).values.is_empty());
        }
    }
}
