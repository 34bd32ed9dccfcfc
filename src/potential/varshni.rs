//! The Varshni function (the third of his paper).

use super::jet::Jet;
use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};

/// V(r) = e_min + D_e (1 − (r_e/r) exp(−b (r² − r_e²)))² [Y. P. Varshni, Rev. Mod. Phys. 29, 664 (1957)].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Varshni {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// Range parameter b in 1/bohr².
    pub b_per_bohr2: f64,
}

impl Varshni {
    /// 1 − g with g = (r_e/r) exp(−b (r² − r_e²)), free of cancellation near r_e.
    fn rest(&self, r: f64) -> f64 {
        let r_e = self.r_e_bohr;
        let decay = (-self.b_per_bohr2 * (r - r_e) * (r + r_e)).exp_m1();
        ((r - r_e) - r_e * decay) / r
    }
}

impl Well for Varshni {
    const MAY_TURN_OVER: bool = false;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        vec![("b".to_owned(), ParameterUnit::InverseLengthPower(2), self.b_per_bohr2)]
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        self.b_per_bohr2 = values[0];
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        self.rest(r_bohr).powi(2)
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let (r, r_e) = (Jet::variable(r_bohr), self.r_e_bohr);
        let decay = (r * r - Jet::constant(r_e * r_e)).scaled(-self.b_per_bohr2).exp();
        let mut rest = Jet::constant(1.0) - r.recip().scaled(r_e) * decay;
        rest.0[0] = self.rest(r_bohr);
        (rest * rest).derivatives()
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let (r, r_e) = (r_bohr, self.r_e_bohr);
        let rest = self.rest(r);
        // ∂g/∂r_e = g (1/r_e + 2 b r_e), ∂g/∂b = −g (r² − r_e²), f = (1 − g)².
        let by_g = -2.0 * rest * (1.0 - rest);
        *by_r_e = by_g * (1.0 / r_e + 2.0 * self.b_per_bohr2 * r_e);
        by_range[0] = -by_g * (r - r_e) * (r + r_e);
        rest * rest
    }
    fn range_fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::RangeParameter, self.b_per_bohr2)
    }
    /// V″ = 2 D_e (1/r_e + 2 b r_e)².
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
        let steepness = (shape.second_hartree / (2.0 * shape.depth_hartree)).sqrt();
        let r_e = shape.r_e_bohr;
        vec![Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: r_e,
            well_depth_hartree: shape.depth_hartree,
            b_per_bohr2: ((steepness - 1.0 / r_e) / (2.0 * r_e)).max(0.01 / (r_e * r_e)),
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
            Varshni { e_min_hartree: -1.17, r_e_bohr: 2.4, well_depth_hartree: 0.17, b_per_bohr2: 0.06 };
        check::derivatives(&model, &[1.5, 2.39, 2.4, 3.2, 5.0]);
        check::gradient(&model, &[1.5, 2.4, 3.2, 5.0]);
    }
}
