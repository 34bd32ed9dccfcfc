//! Levels E(v, J) for the rovibrational sum: solved for each J, not taken from an expansion.

use super::{Averages, SpinWeights, over_levels};
use crate::potential::Potential;
use crate::radial::{RadialError, RadialRequest, bound_states};
use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, to_per_cm};

/// One level with rotation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RotatingLevel {
    /// Vibrational quantum number.
    pub v: usize,
    /// Rotational quantum number.
    pub j: u32,
    /// Energy above the zero of the potential in cm⁻¹.
    pub energy_per_cm: f64,
    /// ⟨r⟩ in bohr.
    pub mean_r_bohr: f64,
    /// ⟨(r − r_e)²⟩ in bohr².
    pub mean_square_x_bohr2: f64,
}

/// A rigid rotor is summed up to this J at most.
const MOST_J: u32 = 20_000;
/// No J beyond this one is solved for.
pub const HIGHEST_J: u32 = 1000;

/// The bound levels E(v, J) up to `highest_per_cm` above E(0, 0), J ascending, for a closed-shell state (Λ = 0).
///
/// `potential` counts from V_e. Every J with a level in that range is solved directly; levels above the limit
/// of the potential (quasi-bound) are left out.
///
/// # Errors
/// [`RadialError`]
pub fn rotating_levels(
    potential: &dyn Potential,
    reduced_mass_me: f64,
    highest_per_cm: f64,
    highest_v: usize,
    relative_accuracy: f64,
) -> Result<Vec<RotatingLevel>, RadialError> {
    let r_e = potential.minimum_bohr();
    let mut levels: Vec<RotatingLevel> = Vec::new();
    let mut ceiling = f64::INFINITY;
    let mut highest_v = highest_v;
    for j in 0..=HIGHEST_J {
        let request = RadialRequest {
            reduced_mass_me,
            rotation_x: f64::from(j) * f64::from(j + 1),
            relative_accuracy,
            highest_v: Some(highest_v),
        };
        let states = bound_states(potential, &request)?;
        let before = levels.len();
        for state in &states {
            let energy_per_cm = to_per_cm(state.energy_hartree);
            if j == 0 && state.v == 0 {
                ceiling = energy_per_cm + highest_per_cm;
            }
            if energy_per_cm <= ceiling {
                let psi = &state.wavefunction;
                levels.push(RotatingLevel {
                    v: state.v,
                    j,
                    energy_per_cm,
                    mean_r_bohr: psi.expectation(|r| r),
                    mean_square_x_bohr2: psi.expectation(|r| (r - r_e) * (r - r_e)),
                });
            }
        }
        let added = levels.len() - before;
        if added == 0 {
            break;
        }
        // E(v, J) rises with J: no higher v can come into the range at a higher J.
        highest_v = highest_v.min(added - 1);
    }
    Ok(levels)
}

/// A rigid rotor, E = B J(J + 1), by its sum with weights 2J + 1 times nuclear spin, counted from its lowest level.
pub fn rigid_rotor(b_per_cm: f64, weights: SpinWeights, kelvin: f64) -> Averages {
    let energy = |j: u32| b_per_cm * f64::from(j) * f64::from(j + 1);
    // e^−40 of the largest term ends the sum.
    let highest = 40.0 * BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
    let levels: Vec<(f64, f64)> = (0..=MOST_J)
        .take_while(|&j| j < 2 || energy(j) <= highest)
        .map(|j| (energy(j), weights.of(j) * f64::from(2 * j + 1)))
        .filter(|(_, weight)| *weight > 0.0)
        .collect();
    let lowest = levels.first().map_or(0.0, |l| l.0);
    over_levels(levels.iter().map(|(e, g)| (e - lowest, *g)), kelvin)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// At high temperature q → kT/(σ B) + 1/(3σ) (Mulholland 1928), C → k and U → kT − B/3.
    #[test]
    fn the_rigid_rotor_becomes_classical() {
        let (b, kelvin) = (2.0, 3000.0);
        let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
        for number in [1.0, 2.0] {
            let found = rigid_rotor(b, SpinWeights::Symmetry(number), kelvin);
            assert!((found.partition_function * number - kt / b - 1.0 / 3.0).abs() < 1e-3);
            assert!((found.mean_energy_per_cm - (kt - b / 3.0)).abs() < 1e-3);
            assert!((found.heat_capacity_boltzmann - 1.0).abs() < 1e-6);
        }
        // Only odd J: the lowest level is J = 1, of weight 3.
        let odd = rigid_rotor(b, SpinWeights::EvenOdd(0.0, 1.0), 0.1);
        assert!((odd.partition_function - 3.0).abs() < 1e-12);
    }
}
