//! The Rydberg function with one range parameter.

use super::jet::Jet;
use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};

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

impl Well for Rydberg {
    const MAY_TURN_OVER: bool = false;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        vec![("a".to_owned(), ParameterUnit::InverseLength, self.a_per_bohr)]
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        self.a_per_bohr = values[0];
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        let x = self.a_per_bohr * (r_bohr - self.r_e_bohr);
        // 1 − (1 + x) e⁻ˣ without the cancellation at small x: −(e⁻ˣ − 1) − x e⁻ˣ.
        -((-x).exp_m1() + x * (-x).exp())
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let x = (Jet::variable(r_bohr) - Jet::constant(self.r_e_bohr)).scaled(self.a_per_bohr);
        (Jet::constant(1.0) - (Jet::constant(1.0) + x) * (-x).exp()).derivatives()
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let (a, distance) = (self.a_per_bohr, r_bohr - self.r_e_bohr);
        let slope = a * distance * (-a * distance).exp();
        (*by_r_e, by_range[0]) = (-slope * a, slope * distance);
        self.shape(r_bohr)
    }
    fn range_fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::RangeParameter, self.a_per_bohr)
    }
    /// V″ = D_e a².
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
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
