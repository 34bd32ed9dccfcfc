//! The fits side by side: which of them the points support.

use crate::figure::drawing::comparison_drawing;
use crate::figure::{ComparisonPicture, fit_label, number};
use crate::findings::Findings;
use crate::fit::Compared;
use crate::gui::look::{self, Look};
use crate::gui::paper::drawing_ui;
use crate::gui::show::{self, Column};
use crate::units::to_per_cm;
use eframe::egui;
use egui::{Align2, Sense, Stroke, Ui, WidgetInfo, pos2, vec2};

const COLUMNS: [Column; 5] = [
    Column { right: 0.46, name: "rms", unit: "cm⁻¹", about: "√(Σ d²/n) in the window, unweighted." },
    Column { right: 0.60, name: "largest", unit: "cm⁻¹", about: "The largest residual in the window." },
    Column {
        right: 0.74,
        name: "left out",
        unit: "cm⁻¹",
        about: "Each point predicted by the fit to all the others, rms.",
    },
    Column { right: 0.88, name: "outside", unit: "cm⁻¹", about: "Points in use outside the window, rms." },
    Column {
        right: 1.0,
        name: "ΔAICc",
        unit: "",
        about: "Akaike criterion above the lowest of these fits [Hurvich & Tsai 1989].",
    },
];

pub(super) fn compare_ui(ui: &mut Ui, findings: &Findings) {
    let comparison = &findings.comparison;
    if comparison.fits.is_empty() {
        show::note(ui, "No fit succeeded, so there is nothing to compare.");
        return;
    }
    if let Some(sentence) = &comparison.sentence {
        show::note(ui, &show::typographic(sentence));
        ui.add_space(6.0);
    }
    show::columns_ui(ui, ui.available_width(), &COLUMNS);
    for compared in &comparison.fits {
        if let Some(fit) = findings.fits.get(compared.index) {
            row_ui(ui, &fit_label(fit), compared);
        }
    }
    ui.add_space(10.0);
    let Some(mut picture) = ComparisonPicture::of(findings) else { return };
    // The sentence stands above already.
    let words = picture.sentence.take().unwrap_or_default();
    let width = f64::from(ui.available_width());
    let drawing = comparison_drawing(&picture, width, f64::from(look::SMALL), ui.visuals().dark_mode);
    let response = drawing_ui(ui, &drawing, Sense::hover());
    response.widget_info(|| {
        WidgetInfo::labeled(egui::Role::Figure, true, format!("How far the fits miss. {words}"))
    });
}

/// Three significant digits, as far as the column is wide.
fn short(hartree: Option<f64>) -> String {
    let Some(value) = hartree.map(to_per_cm).filter(|v| v.is_finite()) else {
        return number::NONE.to_owned();
    };
    if value >= 1e5 || (value > 0.0 && value < 1e-3) {
        let power = value.log10().floor();
        let sign = if power < 0.0 { "⁻" } else { "" };
        let raised = number::superscript(power.abs() as u32);
        return format!("{}·10{sign}{raised}", crate::digits::fixed(value / 10f64.powf(power), 0));
    }
    crate::digits::rounded(value, if value.abs() < 0.01 { 2 } else { 3 })
}

fn row_ui(ui: &mut Ui, label: &str, fit: &Compared) {
    let look = Look::of(ui);
    let values = [
        short(Some(fit.rms_residual_hartree)),
        short(Some(fit.largest_residual_hartree)),
        short(fit.leave_one_out_rms_hartree),
        short(fit.outside_rms_hartree),
        fit.aicc_difference.map_or_else(|| number::NONE.to_owned(), |d| number::fixed(d, 1)),
    ];
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), look::ROW), Sense::hover());
    response.widget_info(|| {
        let spoken: Vec<String> =
            COLUMNS.iter().zip(&values).map(|(c, v)| format!("{} {v} {}", c.name, c.unit)).collect();
        WidgetInfo::labeled(egui::Role::Label, true, format!("{label}: {}", spoken.join(", ")))
    });
    let best = fit.aicc_difference == Some(0.0);
    if best {
        let mark = egui::Rect::from_min_size(rect.min, vec2(2.0, rect.height()));
        ui.painter().rect_filled(mark.translate(vec2(-8.0, 0.0)), 1.0, look.accent);
    }
    let room = rect.width() * 0.32;
    show::elided(ui, rect.left_center(), room, label, look::plain(look::SMALL), look.text);
    for (column, value) in COLUMNS.iter().zip(&values) {
        let at = pos2(rect.left() + column.right * rect.width(), rect.center().y);
        show::text_in(ui, at, Align2::RIGHT_CENTER, value, &look::figures(look::SMALL), look.text);
    }
    ui.painter().hline(rect.x_range(), rect.bottom(), Stroke::new(1.0, look.rule.gamma_multiply(0.5)));
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::EnergyUnit;

    #[test]
    fn numbers_of_any_size_fit_the_column() {
        let per_cm = |v: f64| short(Some(EnergyUnit::PerCm.to_hartree(v)));
        assert_eq!(per_cm(12.345), "12.3");
        assert_eq!(per_cm(2.1e-6), "2·10⁻⁶");
        assert_eq!(per_cm(3.2e8), "3·10⁸");
        assert_eq!(short(None), number::NONE);
        assert_eq!(short(Some(f64::NAN)), number::NONE);
    }
}
