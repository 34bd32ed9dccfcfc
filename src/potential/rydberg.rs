//! The Rydberg function with one range parameter.

use super::jet::Jet;
use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential};

/// V(r) = e_min + D_e − D_e (1 + x) exp(−x), x = a (r − r_e) [R. Rydberg, Z. Phys. 73, 376 (1931)].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rydberg {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// Range parameter a in 1/bohr.
    pub a_per_bohr: f64,
}

impl Potential for Rydberg {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let x = (Jet::variable(r_bohr) - Jet::constant(self.r_e_bohr)).scaled(self.a_per_bohr);
        let fall = (Jet::constant(1.0) + x) * (-x).exp();
        let mut derivatives = (Jet::constant(1.0) - fall).scaled(self.well_depth_hartree).derivatives();
        derivatives[0] = self.energy_hartree(r_bohr);
        derivatives
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let x = self.a_per_bohr * (r_bohr - self.r_e_bohr);
        // 1 − (1 + x) e⁻ˣ without the cancellation at small x: −(e⁻ˣ − 1) − x e⁻ˣ.
        self.e_min_hartree - self.well_depth_hartree * ((-x).exp_m1() + x * (-x).exp())
    }
    fn range_bohr(&self) -> (f64, f64) {
        (0.0, f64::INFINITY)
    }
    fn limit_hartree(&self) -> f64 {
        self.e_min_hartree + self.well_depth_hartree
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e_bohr
    }
}

impl Parametric for Rydberg {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        super::named(&[
            ("e_min", ParameterUnit::TotalEnergy),
            ("r_e", ParameterUnit::Length),
            ("d_e", ParameterUnit::Wavenumber),
            ("a", ParameterUnit::InverseLength),
        ])
    }
    fn values(&self) -> Vec<f64> {
        vec![self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree, self.a_per_bohr]
    }
    fn set_values(&mut self, values: &[f64]) {
        [self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree, self.a_per_bohr] =
            [values[0], values[1], values[2], values[3]];
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let (a, d, distance) = (self.a_per_bohr, self.well_depth_hartree, r_bohr - self.r_e_bohr);
        let x = a * distance;
        let slope = d * x * (-x).exp();
        let shape = -((-x).exp_m1() + x * (-x).exp());
        gradient.copy_from_slice(&[1.0, -slope * a, shape, slope * distance]);
        self.e_min_hartree + d * shape
    }
    fn fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::WellDepth, self.well_depth_hartree)
            .or_else(|| ModelFault::unless_positive(ModelFault::RangeParameter, self.a_per_bohr))
    }
    /// V″ = D_e a².
    fn starts(shape: &LocalShape) -> Vec<Self> {
        vec![Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: shape.r_e_bohr,
            well_depth_hartree: shape.depth_hartree,
            a_per_bohr: (shape.second_hartree / shape.depth_hartree).sqrt(),
        }]
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::check;

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        let model =
            Rydberg { e_min_hartree: -1.17, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.5 };
        check::derivatives(&model, &[0.8, 1.39, 1.4, 2.2, 5.0]);
        check::gradient(&model, &[0.8, 1.4, 2.2, 5.0]);
    }
}
