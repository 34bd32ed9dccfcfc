//! What follows from a fitted function: constants and levels, with the covariance of its parameters
//! carried to each of them, σ² = gᵀ C g.

use crate::estimate::Estimate;
use crate::fit::Fit;
use crate::potential::curve::LocalDerivatives;
use crate::potential::{Family, Model, Parametric as _, Potential as _, Variable};
use crate::radial::{MOST_LEVELS, RadialRequest, bound_states};
use crate::spectroscopy::dunham;
use crate::units::to_per_cm;

/// The harmonic ladder has no end and is listed up to this many rungs, that of a rising polynomial, which has to be
/// solved for, up to half of it: both far beyond what a fit near the minimum can say.
const RUNGS: usize = 40;

/// How many levels a function is asked for: the ladder of a well that dissociates ends by itself, but that of a nearly
/// harmonic Morse function only after millions.
const fn rungs(family: Family) -> usize {
    match family {
        Family::Harmonic => RUNGS,
        Family::Polynomial => RUNGS / 2,
        _ => MOST_LEVELS,
    }
}

/// Names of the constants, in the order in which they are listed.
pub const NAMES: [&str; 6] = ["omega_e", "omega_e_x_e", "b_e", "alpha_e", "d_e", "zero_point_energy"];

/// How many of them follow from the derivatives at the minimum.
const FROM_DERIVATIVES: usize = 4;

/// A constant by its name; none where the function has none.
pub type Named = (&'static str, Option<Estimate>);

/// The constants of a fitted function in cm⁻¹ and its levels in cm⁻¹ above its own minimum.
pub fn derived(fit: &Fit, mass_me: f64) -> (Vec<Named>, Vec<Estimate>) {
    let levels = levels(fit, mass_me);
    let mut constants = from_derivatives(fit, mass_me);
    if constants.is_empty() {
        return (constants, levels);
    }
    let depth = fit.parameters.iter().find(|p| p.name == "d_e");
    constants.push((NAMES[FROM_DERIVATIVES], depth.map(|p| p.estimate.scaled(to_per_cm(1.0)))));
    constants.push((NAMES[FROM_DERIVATIVES + 1], levels.first().copied()));
    (constants, levels)
}

/// The same numbers without errors, for a model whose parameters were resampled: the constants in the order of
/// [`NAMES`] (NaN where there is none), then the levels.
pub fn values(model: &Model, mass_me: f64) -> Vec<f64> {
    let levels = solve(model, mass_me, rungs(model.family()), &mut |_, _| ());
    let names = model.parameter_names();
    let depth = names.iter().position(|(name, _)| name == "d_e").map(|i| to_per_cm(model.values()[i]));
    let mut values = named(model, mass_me).unwrap_or([f64::NAN; FROM_DERIVATIVES]).to_vec();
    values.push(depth.unwrap_or(f64::NAN));
    values.push(levels.first().copied().unwrap_or(f64::NAN));
    values.extend(levels);
    values
}

/// ω_e, ω_e x_e, B_e, α_e from the derivatives at the minimum; NaN for what a parabola does not have.
fn named(model: &Model, mass_me: f64) -> Option<[f64; FROM_DERIVATIVES]> {
    let local = LocalDerivatives::new(model.minimum_bohr(), model.derivatives_hartree(model.minimum_bohr()));
    if !(local.second_hartree > 0.0 && local.second_hartree.is_finite()) {
        return None;
    }
    let c = dunham(&local, mass_me);
    // α_e needs V‴, ω_e x_e also V⁗: a polynomial of lower degree does not know them.
    let degree = match model.family() {
        Family::Harmonic => 2,
        Family::Polynomial => match model {
            Model::Polynomial(p) if matches!(p.variable(), Variable::X | Variable::Xi) => p.degree(),
            _ => usize::MAX,
        },
        _ => usize::MAX,
    };
    let known = |value: f64, from_degree: usize| if degree < from_degree { f64::NAN } else { value };
    Some([c.omega_e_per_cm, known(c.omega_e_x_e_per_cm, 4), c.b_e_per_cm, known(c.alpha_e_per_cm, 3)])
}

fn from_derivatives(fit: &Fit, mass_me: f64) -> Vec<Named> {
    let of = |model: &Model| named(model, mass_me).map(|v| v.to_vec());
    let Some(estimates) = fit.estimates_of(&of) else { return Vec::new() };
    let names = NAMES.iter().copied();
    names.zip(estimates).map(|(name, e)| (name, Some(e).filter(|e| e.value.is_finite()))).collect()
}

/// The function's own levels in cm⁻¹ above its own minimum.
///
/// Errors: closed forms by differences; solved levels by ∂E/∂p = ⟨ψ|∂V/∂p|ψ⟩ [Hellmann 1937, Feynman 1939], which
/// needs no second solution.
fn levels(fit: &Fit, mass_me: f64) -> Vec<Estimate> {
    let rungs = rungs(fit.model.family());
    if fit.model.closed_form_levels_hartree(mass_me, rungs).is_some() {
        let closed = |m: &Model| {
            m.closed_form_levels_hartree(mass_me, rungs).map(|l| l.into_iter().map(to_per_cm).collect())
        };
        let gradient = fit.gradient_of(&closed);
        let levels: Vec<f64> = closed(&fit.model).unwrap_or_default();
        let along =
            |v: usize| gradient.as_ref()?.iter().map(|row| row.get(v).copied()).collect::<Option<Vec<f64>>>();
        return levels.iter().enumerate().map(|(v, &e)| fit.estimate(e, along(v).as_deref())).collect();
    }
    let mut gradients = Vec::new();
    let levels = solve(&fit.model, mass_me, rungs, &mut |r_bohr: &[f64], densities: &[Vec<f64>]| {
        if !fit.covariance.is_empty() {
            gradients = expectation_gradients(&fit.model, r_bohr, densities);
        }
    });
    levels.iter().enumerate().map(|(v, &e)| fit.estimate(e, gradients.get(v).map(Vec::as_slice))).collect()
}

/// ⟨ψ|∂V/∂p|ψ⟩ of each level in cm⁻¹ per atomic unit; zero for e_min, from which the levels count.
fn expectation_gradients(model: &Model, r_bohr: &[f64], densities: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let parameters = model.values().len();
    let mut gradient = vec![0.0; parameters];
    // A row a parameter, in cm⁻¹; zero where no level has anything.
    let mut on_mesh = vec![vec![0.0; r_bohr.len()]; parameters];
    for (i, &r) in r_bohr.iter().enumerate() {
        if densities.iter().any(|d| d[i] != 0.0) {
            model.gradient(r, &mut gradient);
            for (row, g) in on_mesh.iter_mut().zip(&gradient).skip(1) {
                row[i] = to_per_cm(*g);
            }
        }
    }
    let mean = |density: &[f64], row: &[f64]| density.iter().zip(row).map(|(d, g)| d * g).sum();
    densities.iter().map(|density| on_mesh.iter().map(|row| mean(density, row)).collect()).collect()
}

/// Takes the bond lengths of a mesh and the gradient of V by each parameter there.
type Seen<'a> = dyn FnMut(&[f64], &[Vec<f64>]) + 'a;

/// The function counted from its own minimum, as the radial problem wants it: beside a total energy the digits of the
/// levels would be lost.
pub(super) fn from_own_minimum(model: &Model) -> Model {
    let mut above = model.clone();
    above.shift_energy_hartree(-model.energy_hartree(model.minimum_bohr()));
    above
}

/// Levels in cm⁻¹; closed form where there is one, else solved, and then `seen` gets the mesh and w ψ² of each level.
fn solve(model: &Model, mass_me: f64, rungs: usize, seen: &mut Seen<'_>) -> Vec<f64> {
    if let Some(levels) = model.closed_form_levels_hartree(mass_me, rungs) {
        return levels.into_iter().map(to_per_cm).collect();
    }
    let above = from_own_minimum(model);
    let request = RadialRequest {
        reduced_mass_me: mass_me,
        rotation_x: 0.0,
        relative_accuracy: 1e-10,
        highest_v: Some(rungs - 1),
    };
    let Ok(states) = bound_states(&above, &request) else { return Vec::new() };
    if let Some(first) = states.first() {
        let densities: Vec<Vec<f64>> = states
            .iter()
            .map(|s| {
                let psi = &s.wavefunction;
                psi.psi.iter().zip(psi.weight_bohr.iter()).map(|(p, w)| w * p * p).collect()
            })
            .collect();
        seen(&first.wavefunction.r_bohr, &densities);
    }
    states.iter().map(|s| to_per_cm(s.energy_hartree)).collect()
}
