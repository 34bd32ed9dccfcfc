//! The ideal gas at 1 bar, as tables of thermochemistry have it, and how rotation is weighted.

use crate::figure::number;
use crate::findings::Findings;
use crate::gui::command::Command;
use crate::gui::look::{self, Look};
use crate::gui::show::{self, Row, RowUi as _, combo_ui};
use crate::gui::state::State;
use crate::thermal::{SpinWeights, ThermalPoint, ThermalSettings};
use eframe::egui;
use egui::{DragValue, RichText, Ui, WidgetInfo};

/// Largest symmetry number and weight that can be entered.
const MOST: u32 = 100;

/// How the levels of a J are weighted.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Kind {
    ByAtoms,
    Symmetry,
    Spin,
}

impl Kind {
    const ALL: [Self; 3] = [Self::ByAtoms, Self::Symmetry, Self::Spin];

    fn of(settings: &ThermalSettings) -> Self {
        match (settings.spin_weights, settings.symmetry_number) {
            (Some(_), _) => Self::Spin,
            (None, Some(_)) => Self::Symmetry,
            (None, None) => Self::ByAtoms,
        }
    }

    const fn name(self) -> &'static str {
        match self {
            Self::ByAtoms => "as the atoms say",
            Self::Symmetry => "symmetry number",
            Self::Spin => "nuclear spin",
        }
    }

    /// The settings of this kind, beginning with what is in force.
    fn chosen(self, settings: &ThermalSettings, weights: Option<SpinWeights>) -> ThermalSettings {
        let mut chosen = settings.clone();
        (chosen.symmetry_number, chosen.spin_weights) = match (self, weights) {
            (Self::ByAtoms, _) => (None, None),
            (Self::Symmetry, Some(SpinWeights::Symmetry(n))) => (Some(n.round().max(1.0) as u32), None),
            (Self::Symmetry, _) => (Some(1), None),
            (Self::Spin, Some(SpinWeights::EvenOdd(even, odd))) => (None, Some([even, odd])),
            (Self::Spin, _) => (None, Some([0.5, 0.5])),
        };
        chosen
    }
}

pub(super) fn ideal_gas_ui(
    ui: &mut Ui,
    state: &State,
    findings: &Findings,
    point: &ThermalPoint,
    out: &mut Vec<Command>,
) {
    let Some((_, _, settings)) = state.document.focused() else { return };
    let settings = &settings.thermal;
    show::rule(ui);
    show::heading(ui, "Ideal gas at 1 bar", &format!("{} K", number::fixed(point.kelvin, 2)));
    let Some(rotating) = &point.rotating else {
        let text = if settings.rotation {
            "There are no sums with rotation; the notices below the plot say why."
        } else {
            "Needs the sum over rotation: tick \"with rotation\" above."
        };
        show::note(ui, text);
        return;
    };
    match &rotating.ideal_gas {
        None => show::note(ui, "The mass of the molecule is not known: name the atoms."),
        Some(gas) => {
            let [capacity, entropy] =
                [gas.heat_capacity_joule_per_mole_kelvin, gas.entropy_joule_per_mole_kelvin];
            Row::new("Cₚ", number::fixed(capacity, 3), "J/(mol K)").about("Cᵥ + 5R/2.").ui(ui);
            Row::new("S", number::fixed(entropy, 3), "J/(mol K)")
                .about(
                    "With translation [Sackur 1911, Tetrode 1912], without nuclear spin as tables have it.",
                )
                .ui(ui);
            Row::new("H − H(0)", number::fixed(gas.enthalpy_kilojoule_per_mole, 4), "kJ/mol")
                .about("U + 5RT/2, counted from the lowest level.")
                .ui(ui);
        }
    }
    let weights = findings.rotating_sum.as_ref().map(|s| s.weights);
    weights_ui(ui, settings, weights, out);
    if let Some(mass) = findings.rotating_sum.as_ref().and_then(|s| s.mass_u) {
        let said = match weights {
            Some(SpinWeights::Symmetry(n)) => format!("symmetry number {}", number::fixed(n, 0)),
            Some(SpinWeights::EvenOdd(even, odd)) => {
                let shown = |w: f64| crate::digits::rounded(w, 4);
                format!("weights {} of even and {} of odd J", shown(even), shown(odd))
            }
            None => String::new(),
        };
        show::note(
            ui,
            &format!(
                "{said}; {} u, the mean over natural isotopes where none was chosen.",
                number::fixed(mass, 4)
            ),
        );
    }
}

fn weights_ui(ui: &mut Ui, settings: &ThermalSettings, weights: Option<SpinWeights>, out: &mut Vec<Command>) {
    let mut changed = settings.clone();
    ui.horizontal_wrapped(|ui| {
        ui.set_min_height(look::ROW);
        let look = Look::of(ui);
        ui.label(RichText::new("weight of J").font(look::plain(look::SECONDARY)).color(look.dim));
        let before = Kind::of(settings);
        let mut kind = before;
        combo_ui(ui, "How the levels of each J are weighted", &mut kind, &Kind::ALL, Kind::name);
        if kind != before {
            changed = kind.chosen(settings, weights);
        }
        if let Some(number) = &mut changed.symmetry_number {
            let response = ui.add(DragValue::new(number).range(1..=MOST).speed(0.05).prefix("σ "));
            response.widget_info(|| WidgetInfo::labeled(egui::Role::SpinButton, true, "Symmetry number"));
            response.on_hover_text("1 for unlike atoms, 2 for like ones: the partition function is divided by it.");
        }
        if let Some(pair) = &mut changed.spin_weights {
            for (weight, name) in pair.iter_mut().zip(["even J", "odd J"]) {
                let field =
                    DragValue::new(weight).range(0.0..=f64::from(MOST)).speed(0.01).max_decimals(4);
                let response = ui.add(field.prefix(format!("{name} ")));
                response.widget_info(|| {
                    WidgetInfo::labeled(egui::Role::SpinButton, true, format!("Weight of {name}"))
                });
                response.on_hover_text(
                    "Share of the nuclear-spin states: 1/4 and 3/4 for two protons, 2/3 and 1/3 for two deuterons.",
                );
            }
        }
        let field = DragValue::new(&mut changed.electronic_weight).range(1..=MOST).speed(0.05).prefix("g ");
        let response = ui.add(field);
        response.widget_info(|| {
            WidgetInfo::labeled(egui::Role::SpinButton, true, "Weight of the electronic state")
        });
        response.on_hover_text("Degeneracy of the electronic state: R ln g in the entropy.");
    });
    if changed != *settings {
        out.push(Command::SetThermal(changed));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Each kind begins with what was in force, so that the numbers do not jump.
    #[test]
    fn a_kind_begins_with_what_is_in_force() {
        let settings = ThermalSettings::default();
        let two = Kind::Symmetry.chosen(&settings, Some(SpinWeights::Symmetry(2.0)));
        assert_eq!((two.symmetry_number, Kind::of(&two)), (Some(2), Kind::Symmetry));
        let spin = Kind::Spin.chosen(&two, Some(SpinWeights::EvenOdd(0.25, 0.75)));
        assert_eq!((spin.spin_weights, spin.symmetry_number), (Some([0.25, 0.75]), None));
        assert_eq!(Kind::ByAtoms.chosen(&spin, None), settings);
        // Half and half is the symmetry number 2 where many J count.
        assert_eq!(Kind::Spin.chosen(&two, Some(SpinWeights::Symmetry(2.0))).spin_weights, Some([0.5, 0.5]));
    }
}
