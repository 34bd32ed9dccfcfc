//! The radial Schrödinger equation: bound levels E(v, J) of any potential.
//!
//! −1/(2μ) ψ″ + [V(r) + X/(2 μ r²)] ψ = E ψ in atomic units, X = J(J+1) − Λ²; X = 0 drops the term.

mod chain;
mod condensed;
mod distortion;
mod factors;
mod mesh;
mod observables;
mod outgoing;
mod pair;
mod quasibound;
mod real_axis;
mod reference_element;
mod search;
mod small_eigen;
mod solve;
#[cfg(test)]
mod tests;
mod wavefunction;

pub(crate) use chain::dot;
pub use distortion::Distortion;
pub use observables::{Observables, turning_points_bohr};
pub use quasibound::{QuasiBound, quasi_bound};
pub use wavefunction::RunningProbability;

use crate::estimate::{ErrorSource, Estimate};
use crate::potential::Potential;
use std::sync::Arc;
use thiserror::Error;

/// Highest v searched in a potential that rises without limit when the request names none.
pub const HIGHEST_V_WITHOUT_LIMIT: usize = 99;

/// No more levels than this are listed unless `highest_v` asks for them: a tail that rises for thousands of bohr
/// can hold thousands of levels that no scan supports. A list of this length is cut there.
pub const MOST_LEVELS: usize = 400;

/// Nodes and weights of Gauss-Legendre quadrature with eight points on [−1, 1].
pub(crate) fn gauss_legendre_8() -> (&'static [f64], &'static [f64]) {
    let element = reference_element::ReferenceElement::of_degree(7);
    (&element.gauss_nodes, &element.gauss_weights)
}

/// What the solver is asked for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RadialRequest {
    /// Reduced mass in electron masses.
    pub reduced_mass_me: f64,
    /// Rotational factor X = J(J+1) − Λ².
    pub rotation_x: f64,
    /// Accuracy of the energies asked for, relative to the well depth searched.
    pub relative_accuracy: f64,
    /// Only levels with v up to this one.
    pub highest_v: Option<usize>,
}

/// A wavefunction on its mesh, normalised: Σ w ψ² = 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Wavefunction {
    /// Polynomial degree p: between points e p and (e + 1) p, ψ is the polynomial through the p + 1 values.
    pub degree: usize,
    /// Mesh points in bohr, ascending: Gauss-Lobatto-Legendre nodes of each element, ends shared.
    pub r_bohr: Arc<[f64]>,
    /// Quadrature weights in bohr.
    pub weight_bohr: Arc<[f64]>,
    /// ψ in bohr^(−1/2); the innermost lobe is positive.
    pub psi: Vec<f64>,
}

/// One bound state.
#[derive(Clone, Debug, PartialEq)]
pub struct BoundState {
    /// Vibrational quantum number: index among the bound states, checked against the nodes.
    pub v: usize,
    /// Energy in hartree, on the potential's own zero.
    pub energy_hartree: f64,
    /// Estimated numerical error of the energy, in hartree.
    pub error_hartree: f64,
    /// Nodes counted in the wavefunction.
    pub nodes: usize,
    /// The wavefunction.
    pub wavefunction: Wavefunction,
}

/// Why there are no levels.
#[derive(Clone, Debug, PartialEq, Error)]
pub enum RadialError {
    /// The reduced mass is not positive and finite.
    #[error("reduced mass {reduced_mass_me} electron masses: a positive number is needed")]
    Mass {
        /// The value given.
        reduced_mass_me: f64,
    },
    /// The potential is not finite somewhere inside its range.
    #[error("the potential is not finite at {r_bohr} bohr")]
    NotFinite {
        /// Where.
        r_bohr: f64,
    },
    /// No mesh could be laid over the well, or none of a size that can be solved.
    #[error(
        "no mesh of a reasonable size serves the potential from {r_bohr} bohr on: its energies or the mass are beyond all measure"
    )]
    Mesh {
        /// Where the mesh stopped.
        r_bohr: f64,
    },
    /// The search for the levels asked for did not come to an end.
    #[error("the search for levels did not come to an end")]
    Search,
    /// The iteration inside one mesh element did not converge (the potential jumps there beyond all measure).
    #[error("no convergence in the mesh element at {r_bohr} bohr: the potential varies too wildly there")]
    NoConvergence {
        /// Where.
        r_bohr: f64,
    },
}

/// All bound states of `potential`, v ascending: every level below [`Potential::limit_hartree`] or up to
/// `highest_v`; without either bound, up to [`HIGHEST_V_WITHOUT_LIMIT`], and no more than [`MOST_LEVELS`] unasked.
///
/// Spectral elements with lumped mass (Rescigno and McCurdy 2000) on a mesh laid by the local wavelength;
/// v is the index by an inertia count, which does not rest on the nodes.
///
/// # Errors
/// [`RadialError`]
pub fn bound_states(
    potential: &dyn Potential,
    request: &RadialRequest,
) -> Result<Vec<BoundState>, RadialError> {
    Ok(solve(potential, request)?.states)
}

/// All bound states with the discretised problem they came from, from which centrifugal constants and
/// expectation values follow without solving again.
#[derive(Clone, Debug)]
pub struct Solution {
    /// The states, v ascending.
    pub states: Vec<BoundState>,
    /// None where nothing is bound.
    inner: Option<Inner>,
}

/// The discretised problem and its levels in the coordinates of the chain.
#[derive(Clone, Debug)]
struct Inner {
    problem: solve::Problem,
    found: Vec<search::Found>,
}

impl Solution {
    /// The states, moved out; the discretised problem stays for [`Solution::distortion`].
    pub fn take_states(&mut self) -> Vec<BoundState> {
        std::mem::take(&mut self.states)
    }
}

/// As [`bound_states`], keeping the discretised problem.
///
/// # Errors
/// [`RadialError`]
pub fn solve(potential: &dyn Potential, request: &RadialRequest) -> Result<Solution, RadialError> {
    solve::solve(potential, request)
}

/// How many levels lie below `energy_hartree` (at most the limit), by Sylvester's law of inertia on a finer mesh
/// than [`bound_states`] starts from: a count that shares no search with it.
///
/// # Errors
/// [`RadialError`]
pub fn count_below(
    potential: &dyn Potential,
    request: &RadialRequest,
    energy_hartree: f64,
) -> Result<usize, RadialError> {
    solve::count_below(potential, request, energy_hartree)
}

/// One level with all that is derived from its wavefunction. Energies count from V_e.
#[derive(Clone, Debug, PartialEq)]
pub struct Level {
    /// Vibrational quantum number.
    pub v: usize,
    /// Rotational quantum number.
    pub j: u32,
    /// Energy above V_e in cm⁻¹.
    pub energy_per_cm: f64,
    /// Standard error of the energy in cm⁻¹ (interpolation, noise and tails), where known.
    pub energy_error_per_cm: Option<f64>,
    /// Which of these is the largest.
    pub energy_error_source: Option<ErrorSource>,
    /// V_inf − E in cm⁻¹; none where no asymptote is known.
    pub below_asymptote_per_cm: Option<f64>,
    /// Rotational constant B_v in cm⁻¹.
    pub b_v_per_cm: f64,
    /// Centrifugal constant D_v in cm⁻¹ [Hutson 1981].
    pub d_v_per_cm: f64,
    /// Centrifugal constant H_v in cm⁻¹ [Hutson 1981].
    pub h_v_per_cm: Option<f64>,
    /// Inner classical turning point in bohr.
    pub inner_turning_point_bohr: f64,
    /// Outer classical turning point in bohr.
    pub outer_turning_point_bohr: f64,
    /// ⟨r⟩ in bohr.
    pub mean_r_bohr: f64,
    /// ⟨(r − r_e)²⟩ in bohr².
    pub mean_square_x_bohr2: f64,
    /// Probability beyond the turning points.
    pub forbidden_probability: f64,
    /// Probability inside the energy reach; none where there is no reach.
    pub inside_reach: Option<f64>,
    /// Probability outside the scanned range.
    pub outside_scan: f64,
    /// Whether the level would change if the tails did.
    pub leans_on_tail: bool,
    /// E − ω_e (v + ½) in cm⁻¹.
    pub minus_harmonic_per_cm: f64,
    /// E − E_Morse(v) in cm⁻¹, each on its own zero; none without a Morse fit or such a level.
    pub minus_morse_per_cm: Option<f64>,
    /// The wavefunction.
    pub wavefunction: Wavefunction,
}

impl Level {
    /// The energy above V_e with its standard error, in cm⁻¹.
    pub fn energy_estimate_per_cm(&self) -> Estimate {
        match (self.energy_error_per_cm, self.energy_error_source) {
            (Some(error), Some(source)) => Estimate::with_error(self.energy_per_cm, error, source),
            _ => Estimate::exact(self.energy_per_cm),
        }
    }
}
