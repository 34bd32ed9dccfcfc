//! What is said of the densities of one level in numbers.

use super::{ClassicalDensity, Distribution, HarmonicDensity, QuantumDensity, distance};
use crate::potential::Potential;
use crate::radial::Level;

/// A share of the probability by four pictures; none where there is no such density.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Shares {
    /// Of the numerical level.
    pub numerical: Option<f64>,
    /// Of the harmonic level of the same v.
    pub harmonic: Option<f64>,
    /// Of the Morse fit's level of the same v.
    pub morse: Option<f64>,
    /// Of a classical particle of the numerical level's energy on the curve.
    pub classical: Option<f64>,
}

/// Figures of one level's densities.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DensityFigures {
    /// Vibrational quantum number.
    pub v: usize,
    /// Probability where V > E; a classical particle is never there.
    pub forbidden: Shares,
    /// Probability inside the energy reach.
    pub inside_reach: Shares,
    /// ∫|p̄ − q̄| dr between the numerical and the classical density, both averaged over the same width.
    pub classical_distance: Option<f64>,
}

/// The figures of a level without rotation; those of a Morse fit are left to the caller.
///
/// `potential` counts from V_e; `reach_bohr`: the ends of the energy reach as bond lengths; `amplitude_bohr`:
/// sqrt(ħ/(μ ω)); `width_bohr`: the averaging width; `barriers`: see [`ClassicalDensity::with_barriers`].
pub fn density_figures<P: Potential + ?Sized>(
    potential: &P,
    level: &Level,
    reach_bohr: Option<(f64, f64)>,
    amplitude_bohr: Option<f64>,
    width_bohr: Option<f64>,
    barriers: bool,
) -> DensityFigures {
    let quantum = QuantumDensity::new(&level.wavefunction);
    let harmonic = amplitude_bohr.and_then(|a| HarmonicDensity::new(level.v, potential.minimum_bohr(), a));
    let turning = (level.inner_turning_point_bohr, level.outer_turning_point_bohr);
    let energy = level.energy_per_cm / crate::units::PER_CM_PER_HARTREE;
    let classical = ClassicalDensity::with_barriers(potential, energy, turning, barriers);
    let inside = |d: &dyn Distribution| reach_bohr.map(|(from, to)| d.below(to) - d.below(from));
    DensityFigures {
        v: level.v,
        forbidden: Shares {
            numerical: Some(level.forbidden_probability),
            harmonic: harmonic.map(|h| h.forbidden_probability()),
            morse: None,
            classical: classical.as_ref().map(|_| 0.0),
        },
        inside_reach: Shares {
            numerical: level.inside_reach,
            harmonic: harmonic.as_ref().and_then(|h| inside(h)),
            morse: None,
            classical: classical.as_ref().and_then(|c| inside(c)),
        },
        classical_distance: quantum
            .as_ref()
            .zip(classical.as_ref())
            .zip(width_bohr)
            .and_then(|((q, c), width)| distance(q, c, width)),
    }
}
