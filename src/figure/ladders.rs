//! Level ladders: the numerical levels and each model's, side by side.

use super::Role;
use super::curve::{fit_label, fit_role};
use crate::findings::Findings;
use crate::fit::Family;

/// One ladder.
#[derive(Clone, Debug, PartialEq)]
pub struct Ladder {
    /// Whose levels these are.
    pub role: Role,
    /// Name of the column.
    pub label: String,
    /// Energies in cm⁻¹ above the minimum of the curve, v ascending.
    pub energies_per_cm: Vec<f64>,
}

/// The ladders of a study.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ladders {
    /// The ladders, left to right: harmonic, numerical, then the fits.
    pub columns: Vec<Ladder>,
    /// First v at which harmonic and numerical differ by more than the tolerance.
    pub first_outside: Option<usize>,
}

/// Harmonic (ω_e (v + ½), k = V″(r_e)), numerical and fitted levels. A fit's levels count from its own
/// minimum, as in the findings; harmonic ones are listed as far as the numerical ones go.
pub fn ladders(findings: &Findings) -> Ladders {
    let numerical: Vec<f64> = findings.levels.iter().map(|l| l.energy_per_cm).collect();
    let mut columns = Vec::new();
    if let Some(constants) = &findings.constants.from_derivatives {
        let omega = constants.omega_e_per_cm.value;
        columns.push(Ladder {
            role: Role::Parabola,
            label: "harmonic".to_owned(),
            energies_per_cm: (0..numerical.len()).map(|v| omega * (v as f64 + 0.5)).collect(),
        });
    }
    if !numerical.is_empty() {
        columns.push(Ladder {
            role: Role::Scanned,
            label: "numerical".to_owned(),
            energies_per_cm: numerical,
        });
        for fit in findings.fits.iter().filter(|f| f.request.family != Family::Harmonic) {
            if fit.levels_per_cm.iter().any(|e| e.is_finite()) {
                columns.push(Ladder {
                    role: fit_role(fit.request.family),
                    label: fit_label(fit),
                    energies_per_cm: fit.levels_per_cm.clone(),
                });
            }
        }
    }
    Ladders { columns, first_outside: first_outside(findings) }
}

fn first_outside(findings: &Findings) -> Option<usize> {
    let reach = findings.reach.as_ref()?.levels?;
    let first = reach.highest_v.map_or(0, |v| v + 1);
    findings.levels.iter().any(|l| l.v == first).then_some(first)
}
