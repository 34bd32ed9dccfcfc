//! The window study of a findings file.

use super::super::numbers::{angstrom, estimated, number, quantity};
use crate::estimate::Estimate;
use crate::fit::window_study::{Plateau, WindowFit, WindowStudy};
use crate::units::{ANGSTROM_PER_BOHR, LengthUnit, NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2, to_per_cm};
use serde_json::{Value, json};

/// Models, fits, plateaus and the proposal.
pub(super) fn window_study(study: &WindowStudy) -> Value {
    json!({
        "models": study.models.iter().map(|m| json!({
            "model": m.family,
            "variable": m.variable,
            "degree": m.degree,
        })).collect::<Vec<_>>(),
        "fits": study.fits.iter().map(fit).collect::<Vec<_>>(),
        "plateaus": study.plateaus.iter().map(plateau).collect::<Vec<_>>(),
        "proposed_plateau": study.proposed,
    })
}

fn fit(fit: &WindowFit) -> Value {
    let edge = |value: f64| quantity(fit.window.unit.convert(value, LengthUnit::Angstrom), "angstrom");
    let numbers = fit.numbers.as_ref().ok();
    let of = |estimate: Option<Estimate>, factor: f64, unit: &str| {
        estimate.map_or(Value::Null, |e| estimated(e, factor, unit))
    };
    json!({
        "model": fit.model,
        "window": {"from": edge(fit.window.from), "to": edge(fit.window.to), "points": fit.points},
        "half_width": angstrom(fit.half_width_bohr()),
        "symmetric": fit.symmetric,
        "converged": numbers.is_some(),
        "failure": fit.numbers.as_ref().err().map(ToString::to_string),
        "r_e": of(numbers.map(|n| n.r_e_bohr), ANGSTROM_PER_BOHR, "angstrom"),
        "k": of(
            numbers.map(|n| n.force_constant_hartree_per_bohr2),
            NEWTON_PER_METRE_PER_HARTREE_PER_BOHR2,
            "N/m",
        ),
        "omega_e": of(numbers.and_then(|n| n.omega_e_per_cm), 1.0, "cm-1"),
        "omega_e_x_e": of(numbers.and_then(|n| n.omega_e_x_e_per_cm), 1.0, "cm-1"),
        "rms_residual": numbers.map(|n| quantity(to_per_cm(n.rms_residual_hartree), "cm-1")),
        "aicc": number(numbers.and_then(|n| n.aicc)),
    })
}

fn plateau(plateau: &Plateau) -> Value {
    json!({
        "model": plateau.model,
        "from_half_width": angstrom(plateau.from_half_width_bohr),
        "to_half_width": angstrom(plateau.to_half_width_bohr),
        "windows": plateau.windows,
        "spread": number(plateau.spread),
        "middle": plateau.middle,
    })
}
