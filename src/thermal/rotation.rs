//! Levels E(v, J) for the rovibrational sum: solved for each J, not taken from an expansion.

use crate::potential::Potential;
use crate::radial::{RadialError, RadialRequest, bound_states};
use crate::units::to_per_cm;

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

/// No J beyond this one is solved for.
const HIGHEST_J: u32 = 600;

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
