//! The density of a level found numerically.

use super::Distribution;
use crate::radial::{RunningProbability, Wavefunction};

/// |ψ|² of a wavefunction on its mesh.
#[derive(Clone, Debug)]
pub struct QuantumDensity<'a> {
    wavefunction: &'a Wavefunction,
    running: RunningProbability<'a>,
}

impl<'a> QuantumDensity<'a> {
    /// None for a wavefunction without a mesh.
    pub fn new(wavefunction: &'a Wavefunction) -> Option<Self> {
        Some(Self { wavefunction, running: wavefunction.running_probability()? })
    }
}

impl Distribution for QuantumDensity<'_> {
    fn density_per_bohr(&self, r_bohr: f64) -> f64 {
        self.wavefunction.density_per_bohr(&[r_bohr])[0]
    }

    fn below(&self, r_bohr: f64) -> f64 {
        self.running.below(r_bohr)
    }

    fn below_all(&self, ascending_bohr: &[f64]) -> Vec<f64> {
        self.running.below_all(ascending_bohr)
    }

    /// Where |ψ| stands above 1e-7 of its maximum.
    fn support_bohr(&self) -> (f64, f64) {
        let (r, psi) = (&self.wavefunction.r_bohr, &self.wavefunction.psi);
        let peak = psi.iter().fold(0.0_f64, |m, p| m.max(p.abs()));
        let seen = |p: &f64| p.abs() > 1e-7 * peak;
        let first = psi.iter().position(seen).unwrap_or(0).saturating_sub(1);
        let last = psi.iter().rposition(seen).map_or(psi.len() - 1, |i| (i + 1).min(psi.len() - 1));
        (r[first], r[last])
    }
}
