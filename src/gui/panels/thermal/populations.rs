//! Which levels are populated, and where the bond is then.

use crate::figure::ThermalDensityPicture;
use crate::figure::number;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, Row, RowUi as _};
use crate::thermal::ThermalPoint;
use eframe::egui;
use egui::{Align2, Rangef, Rect, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

/// Populations shown.
const POPULATIONS: usize = 6;

pub(super) fn populations_ui(ui: &mut Ui, point: &ThermalPoint, density: Option<&ThermalDensityPicture>) {
    if point.populations.is_empty() {
        return;
    }
    show::rule(ui);
    show::heading(ui, "Populations", "vibration alone; upright: harmonic");
    let listed = point.populations.iter().copied().take(POPULATIONS).enumerate();
    for (v, share) in listed.filter(|(v, share)| *v < 2 || *share >= 5e-7) {
        bar_ui(ui, v, share, density.and_then(|d| d.harmonic_populations.get(v).copied()));
    }
    let Some(density) = density else { return };
    let percent = |p: Option<f64>| p.map_or_else(|| number::NONE.to_owned(), |p| number::percent(p, 1));
    Row::new("density in reach", percent(density.inside_reach), "")
        .beside(percent(density.harmonic_inside_reach))
        .about("Share of Σ p(v) |ψ(v)|² inside the energy reach; at the right, of the harmonic density [Bloch 1932].")
        .ui(ui);
}

fn bar_ui(ui: &mut Ui, v: usize, share: f64, harmonic: Option<f64>) {
    let look = Look::of(ui);
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), 20.0), Sense::hover());
    let name = format!("v = {v}");
    let shown = |share: f64| number::percent(share, if share < 1e-3 { 4 } else { 2 });
    let value = shown(share);
    let y = rect.center().y;
    let small = look::plain(look::SECONDARY);
    show::text_in(ui, pos2(rect.left(), y), Align2::LEFT_CENTER, &name, &small, look.text);
    let bar = Rect::from_min_max(
        pos2(rect.left() + 52.0, rect.top() + 6.0),
        pos2(rect.right() - 84.0, rect.bottom() - 6.0),
    );
    ui.painter().rect_filled(bar, 2.0, look.raised);
    let mut full = bar;
    full.set_width(bar.width() * share.clamp(0.0, 1.0) as f32);
    ui.painter().rect_filled(full, 2.0, look.outside);
    if let Some(harmonic) = harmonic {
        let x = bar.left() + bar.width() * harmonic.clamp(0.0, 1.0) as f32;
        let upright = Rangef::new(bar.top() - 2.0, bar.bottom() + 2.0);
        ui.painter().vline(x, upright, Stroke::new(2.0, look.harmonic));
    }
    let figures = look::figures(look::SECONDARY);
    show::text_in(ui, pos2(rect.right(), y), Align2::RIGHT_CENTER, &value, &figures, look.text);
    let beside = harmonic.map_or_else(String::new, |p| format!(", harmonic {}", shown(p)));
    response.widget_info(|| WidgetInfo::labeled(egui::Role::Label, true, format!("{name} {value}{beside}")));
    response.on_hover_text(format!("Share of all molecules in v = {v}: {value}{beside}."));
}
