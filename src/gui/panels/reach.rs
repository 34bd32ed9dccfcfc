//! The page of the reach: by energy, by force, by level, by temperature.

use crate::figure::number;
use crate::figure::rows::{Row, interval_text, level_value, temperature_text};
use crate::findings::Findings;
use crate::gui::show::{self, RowUi as _};
use crate::reach::Interval;
use crate::units::to_angstrom;
use crate::verdict::percent;
use eframe::egui::Ui;

pub(super) fn reach_ui(ui: &mut Ui, findings: &Findings) {
    let Some(reach) = &findings.reach else {
        show::note(ui, "No minimum with a positive force constant: there is no parabola to compare with.");
        return;
    };
    let tolerance = percent(reach.tolerance);
    show::heading(ui, "By displacement", &format!("tolerance {tolerance}"));
    for (name, interval, about) in [
        ("energy", &reach.energy, "|V − Vₑ − ½ k x²| ≤ τ · ½ k x²; leading order 3 τ k/|V‴|."),
        ("force", &reach.force, "|V′ − k x| ≤ τ |k x|; leading order 2 τ k/|V‴|."),
    ] {
        Row::new(name, interval_text(interval), "Å").about(about).ui(ui);
        let leading = interval
            .leading_order_bohr
            .map_or_else(|| number::NONE.to_owned(), |x| format!("±{}", number::fixed(to_angstrom(x), 4)));
        Row::new("leading order", leading, "Å").about(about).ui(ui);
        if let Some(text) = open_end(interval) {
            show::note(ui, text);
        }
    }
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        Row::new("zero-point amplitude", number::fixed(to_angstrom(amplitude), 4), "Å")
            .about("√(ℏ/(μω)), ω = 2πc ωₑ: the yardstick for a displacement.")
            .ui(ui);
    }
    levels_ui(ui, findings);
    temperature_ui(ui, findings);
}

fn levels_ui(ui: &mut Ui, findings: &Findings) {
    let Some(reach) = &findings.reach else { return };
    if reach.levels.is_none() && reach.spacing.is_none() {
        return;
    }
    show::rule(ui);
    show::heading(ui, "By level", "tolerance in cm⁻¹");
    for (name, of) in [("levels", &reach.levels), ("spacings", &reach.spacing)] {
        if let Some(of) = of {
            Row::new(name, level_value(of), "")
                .beside(number::fixed(of.tolerance_per_cm, 1))
                .about(
                    "The highest v up to which the harmonic one stays within the tolerance, with all below.",
                )
                .ui(ui);
        }
    }
    show::rule(ui);
    show::heading(ui, "Density in the reach", "beyond turning points");
    for level in findings.levels.iter().take(8) {
        let inside = level.inside_reach.map_or_else(|| number::NONE.to_owned(), |p| number::percent(p, 1));
        Row::new(format!("v = {}", level.v), inside, "")
            .beside(number::percent(level.forbidden_probability, 1))
            .about("∫|ψ|² dr inside the energy reach; at the right, outside the classical turning points.")
            .ui(ui);
    }
}

pub(super) fn temperature_ui(ui: &mut Ui, findings: &Findings) {
    let Some(reach) = &findings.reach else { return };
    let t = reach.temperature_kelvin;
    let rows = [
        ("partition function within 1 %", t.partition_function),
        ("mean energy within 1 % of kT", t.mean_energy),
        ("⟨x²⟩ within 5 %", t.mean_square_x),
    ];
    if rows.iter().all(|r| r.1.is_none()) {
        return;
    }
    show::rule(ui);
    show::heading(ui, "By temperature", "");
    for (name, limit) in rows {
        let value = match limit {
            None => number::NONE.to_owned(),
            Some(kelvin) => temperature_text(kelvin),
        };
        Row::new(name, value, "K").ui(ui);
    }
}

fn open_end(interval: &Interval) -> Option<&'static str> {
    match (interval.x_minus_bohr, interval.x_plus_bohr) {
        (Some(_), Some(_)) => None,
        (None, None) => Some("Neither side is left before the scan ends."),
        (None, _) => Some("Not left on the inner side before the scan ends."),
        (_, None) => Some("Not left on the outer side before the scan ends."),
    }
}
