//! The density of a bond at a temperature.

use super::boltzmann;
use crate::radial::Level;
use crate::units::{BOLTZMANN_PER_CM_PER_KELVIN, to_per_cm};
use std::f64::consts::TAU;

/// Points at which thermal densities are given.
const POINTS: usize = 801;
/// Levels with a smaller population do not show.
const LEAST_POPULATION: f64 = 1e-9;

/// Densities and populations at one temperature, vibration alone, in atomic units.
#[derive(Clone, Debug, PartialEq)]
pub struct ThermalDensity {
    /// Temperature in K.
    pub kelvin: f64,
    /// Bond lengths in bohr, ascending and even.
    pub r_bohr: Vec<f64>,
    /// Σ p_v |ψ_v|² over the numerical levels in 1/bohr.
    pub numerical_per_bohr: Vec<f64>,
    /// Of the harmonic oscillator; empty where the curvature is not positive.
    pub harmonic_per_bohr: Vec<f64>,
    /// Populations p_v of the numerical levels, v ascending, as far as they show.
    pub populations: Vec<f64>,
    /// Populations (1 − e^−u) e^(−u v) of as many harmonic levels, u = ħω/(k_B T).
    pub harmonic_populations: Vec<f64>,
}

/// The density at a temperature: that of each level times its population.
///
/// Harmonic: a Gaussian about r_e of variance ħ/(2 μ ω) coth(ħω/(2 k_B T)) [Bloch 1932]. None without levels or outside
/// the temperatures that are computed.
pub fn thermal_density(
    levels: &[Level],
    r_e_bohr: f64,
    (force_constant_hartree_per_bohr2, reduced_mass_me): (f64, f64),
    kelvin: f64,
) -> Option<ThermalDensity> {
    let (low, high) = super::TEMPERATURES_KELVIN;
    let lowest = levels.first().filter(|_| kelvin >= low && kelvin <= high)?.energy_per_cm;
    let excitations: Vec<f64> = levels.iter().map(|l| l.energy_per_cm - lowest).collect();
    let mut populations = boltzmann(&excitations, kelvin);
    let shown = populations.iter().rposition(|p| *p > LEAST_POPULATION).map_or(1, |i| i + 1);
    populations.truncate(shown);
    let omega_hartree = (force_constant_hartree_per_bohr2 / reduced_mass_me).sqrt();
    let kt = BOLTZMANN_PER_CM_PER_KELVIN * kelvin;
    let u = to_per_cm(omega_hartree) / kt;
    let is_harmonic = u > 0.0 && u.is_finite();
    let variance = 0.5 / (reduced_mass_me * omega_hartree) / (0.5 * u).tanh();
    let ends = levels[..shown].iter().map(|l| {
        let (r, psi) = (&l.wavefunction.r_bohr, &l.wavefunction.psi);
        let seen = |p: &f64| p.abs() > 1e-4;
        let first = psi.iter().position(seen).unwrap_or(0);
        (r[first], r[psi.iter().rposition(seen).unwrap_or(first)])
    });
    let (from, to) = ends.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), (c, d)| (a.min(c), b.max(d)));
    let r_bohr: Vec<f64> = (0..POINTS).map(|i| from + (to - from) * i as f64 / (POINTS - 1) as f64).collect();
    let mut numerical_per_bohr = vec![0.0; POINTS];
    for (level, population) in levels.iter().zip(&populations) {
        let density = level.wavefunction.density_per_bohr(&r_bohr);
        numerical_per_bohr.iter_mut().zip(density).for_each(|(sum, d)| *sum += population * d);
    }
    let gauss = |r: &f64| (-0.5 * (r - r_e_bohr).powi(2) / variance).exp() / (TAU * variance).sqrt();
    Some(ThermalDensity {
        kelvin,
        harmonic_per_bohr: if is_harmonic { r_bohr.iter().map(gauss).collect() } else { Vec::new() },
        harmonic_populations: if is_harmonic {
            (0..shown).map(|v| -(-u).exp_m1() * (-u * v as f64).exp()).collect()
        } else {
            Vec::new()
        },
        r_bohr,
        numerical_per_bohr,
        populations,
    })
}
