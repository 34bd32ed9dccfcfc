//! The parabola: V = e_min + k (r − r_e)²/2.

use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential};

/// V(r) = e_min + k (r − r_e)²/2.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Harmonic {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Force constant V″ in hartree/bohr².
    pub force_constant_hartree_per_bohr2: f64,
}

impl Harmonic {
    /// The first `count` levels of the full-line oscillator, ħω(v + ½), in hartree above the minimum.
    ///
    /// ω = sqrt(k/μ), with μ in electron masses. Empty when k is not positive.
    pub fn levels_hartree(&self, reduced_mass_me: f64, count: usize) -> Vec<f64> {
        let omega = (self.force_constant_hartree_per_bohr2 / reduced_mass_me).sqrt();
        if omega > 0.0 { (0..count).map(|v| omega * (v as f64 + 0.5)).collect() } else { Vec::new() }
    }
}

impl Potential for Harmonic {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let (x, k) = (r_bohr - self.r_e_bohr, self.force_constant_hartree_per_bohr2);
        [self.e_min_hartree + 0.5 * k * x * x, k * x, k, 0.0, 0.0]
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let x = r_bohr - self.r_e_bohr;
        self.e_min_hartree + 0.5 * self.force_constant_hartree_per_bohr2 * x * x
    }
    fn range_bohr(&self) -> (f64, f64) {
        (0.0, f64::INFINITY)
    }
    fn limit_hartree(&self) -> f64 {
        f64::INFINITY
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e_bohr
    }
}

impl Parametric for Harmonic {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        super::named(&[
            ("e_min", ParameterUnit::TotalEnergy),
            ("r_e", ParameterUnit::Length),
            ("k", ParameterUnit::ForceConstant),
        ])
    }
    fn values(&self) -> Vec<f64> {
        vec![self.e_min_hartree, self.r_e_bohr, self.force_constant_hartree_per_bohr2]
    }
    fn set_values(&mut self, values: &[f64]) {
        [self.e_min_hartree, self.r_e_bohr, self.force_constant_hartree_per_bohr2] =
            [values[0], values[1], values[2]];
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let (x, k) = (r_bohr - self.r_e_bohr, self.force_constant_hartree_per_bohr2);
        gradient.copy_from_slice(&[1.0, -k * x, 0.5 * x * x]);
        self.e_min_hartree + 0.5 * k * x * x
    }
    fn fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::ForceConstant, self.force_constant_hartree_per_bohr2)
    }
    fn starts(shape: &LocalShape) -> Vec<Self> {
        vec![Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: shape.r_e_bohr,
            force_constant_hartree_per_bohr2: shape.second_hartree,
        }]
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::check;

    fn example() -> Harmonic {
        Harmonic { e_min_hartree: -1.2, r_e_bohr: 1.4, force_constant_hartree_per_bohr2: 0.37 }
    }

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        check::derivatives(&example(), &[0.9, 1.4, 2.2]);
        check::gradient(&example(), &[0.9, 1.4, 2.2]);
    }

    #[test]
    fn levels_are_evenly_spaced() {
        let levels = example().levels_hartree(918.0, 3);
        let omega = (0.37_f64 / 918.0).sqrt();
        assert!((levels[0] / omega - 0.5).abs() < 1e-15 && (levels[2] - levels[1] - omega).abs() < 1e-15);
    }
}
