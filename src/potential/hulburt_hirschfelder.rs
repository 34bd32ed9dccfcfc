//! The Hulburt-Hirschfelder function.

use super::jet::Jet;
use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};

/// V(r) = e_min + D_e ((1 − e⁻ˣ)² + c x³ e⁻²ˣ (1 + b x)), x = a (r − r_e)
/// [H. M. Hulburt, J. O. Hirschfelder, J. Chem. Phys. 9, 61 (1941); erratum 35, 1901 (1961)].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct HulburtHirschfelder {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// Range parameter a in 1/bohr.
    pub a_per_bohr: f64,
    /// b, a pure number.
    pub b: f64,
    /// c, a pure number.
    pub c: f64,
}

impl Well for HulburtHirschfelder {
    const MAY_TURN_OVER: bool = true;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        vec![
            ("a".to_owned(), ParameterUnit::InverseLength, self.a_per_bohr),
            ("b".to_owned(), ParameterUnit::Dimensionless, self.b),
            ("c".to_owned(), ParameterUnit::Dimensionless, self.c),
        ]
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        (self.a_per_bohr, self.b, self.c) = (values[0], values[1], values[2]);
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        let x = self.a_per_bohr * (r_bohr - self.r_e_bohr);
        let (decay, rest) = ((-x).exp(), (-x).exp_m1());
        rest * rest + self.c * x.powi(3) * decay * decay * (1.0 + self.b * x)
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let x = (Jet::variable(r_bohr) - Jet::constant(self.r_e_bohr)).scaled(self.a_per_bohr);
        let decay = (-x).exp();
        let mut rest = Jet::constant(1.0) - decay;
        rest.0[0] = -(-x.0[0]).exp_m1();
        let extra = x.powi(3) * decay * decay * (Jet::constant(1.0) + x.scaled(self.b));
        (rest * rest + extra.scaled(self.c)).derivatives()
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let (a, b, c) = (self.a_per_bohr, self.b, self.c);
        let distance = r_bohr - self.r_e_bohr;
        let x = a * distance;
        let (decay, minus_rest) = ((-x).exp(), (-x).exp_m1());
        let cubic = x * x * x * decay * decay;
        let by_x = -2.0 * minus_rest * decay
            + c * x * x * decay * decay * (3.0 + 4.0 * b * x - 2.0 * x * (1.0 + b * x));
        *by_r_e = -by_x * a;
        by_range.copy_from_slice(&[by_x * distance, c * cubic * x, cubic * (1.0 + b * x)]);
        minus_rest * minus_rest + c * cubic * (1.0 + b * x)
    }
    fn range_fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::RangeParameter, self.a_per_bohr)
    }
    /// The Morse function of the shape with small c of either sign; c = 0 would leave b undetermined.
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
        let start = |(b, c): (f64, f64)| Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: shape.r_e_bohr,
            well_depth_hartree: shape.depth_hartree,
            a_per_bohr: (shape.second_hartree / (2.0 * shape.depth_hartree)).sqrt(),
            b,
            c,
        };
        [(1.0, 0.05), (1.0, -0.05), (3.0, 0.01)].map(start).to_vec()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::check;

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        let model = HulburtHirschfelder {
            e_min_hartree: -1.17,
            r_e_bohr: 2.4,
            well_depth_hartree: 0.17,
            a_per_bohr: 1.2,
            b: 1.1,
            c: 0.075,
        };
        check::derivatives(&model, &[1.7, 2.39, 2.4, 3.2, 5.0]);
        check::gradient(&model, &[1.7, 2.4, 3.2, 5.0]);
    }
}
