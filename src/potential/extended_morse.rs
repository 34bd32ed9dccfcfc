//! The extended (expanded) Morse oscillator: a Morse function whose range parameter varies with r.

use super::jet::Jet;
use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};

/// V(r) = e_min + D_e (1 − exp(−β(y_p) (r − r_e)))², β = Σ β_i y_pⁱ, y_p = (rᵖ − r_eᵖ)/(rᵖ + r_eᵖ)
/// [E. G. Lee, J. Y. Seto, T. Hirao, P. F. Bernath, R. J. Le Roy, J. Mol. Spectrosc. 194, 197 (1999)].
#[derive(Clone, Debug, PartialEq)]
pub struct ExtendedMorse {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// p, at least 1.
    pub power: u32,
    /// β_0, β_1, ... in 1/bohr.
    pub beta_per_bohr: Vec<f64>,
}

/// β, dβ/dy, y and dy/dr_e at one r.
struct Exponent {
    beta: f64,
    beta_by_y: f64,
    y: f64,
    y_by_r_e: f64,
}

impl ExtendedMorse {
    /// Order of β.
    pub const fn order(&self) -> usize {
        self.beta_per_bohr.len() - 1
    }

    fn exponent(&self, r: f64) -> Exponent {
        let (p, r_e) = (self.power as i32, self.r_e_bohr);
        // (r/r_e)ᵖ keeps the powers of any p in range.
        let ratio = (r / r_e).powi(p);
        let y = (ratio - 1.0) / (ratio + 1.0);
        let y_by_r_e = -2.0 * f64::from(self.power) * ratio / (r_e * (ratio + 1.0) * (ratio + 1.0));
        let (mut beta, mut beta_by_y) = (0.0, 0.0);
        for b in self.beta_per_bohr.iter().rev() {
            beta_by_y = beta_by_y * y + beta;
            beta = beta * y + b;
        }
        Exponent { beta, beta_by_y, y, y_by_r_e }
    }
}

impl Well for ExtendedMorse {
    const MAY_TURN_OVER: bool = true;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        let beta = self.beta_per_bohr.iter().enumerate();
        beta.map(|(i, &b)| (format!("beta_{i}"), ParameterUnit::InverseLength, b)).collect()
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        self.beta_per_bohr.copy_from_slice(values);
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        (-self.exponent(r_bohr).beta * (r_bohr - self.r_e_bohr)).exp_m1().powi(2)
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let r = Jet::variable(r_bohr);
        let ratio = r.scaled(1.0 / self.r_e_bohr).powi(self.power);
        let one = Jet::constant(1.0);
        let y = (ratio - one) * (ratio + one).recip();
        let beta = self.beta_per_bohr.iter().rev().fold(Jet::constant(0.0), |s, &b| s * y + Jet::constant(b));
        let exponent = -(beta * (r - Jet::constant(self.r_e_bohr)));
        let mut rest = one - exponent.exp();
        rest.0[0] = -exponent.0[0].exp_m1();
        (rest * rest).derivatives()
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let x = r_bohr - self.r_e_bohr;
        let Exponent { beta, beta_by_y, y, y_by_r_e } = self.exponent(r_bohr);
        let minus_rest = (-beta * x).exp_m1();
        let by_exponent = -2.0 * minus_rest * (1.0 + minus_rest);
        *by_r_e = by_exponent * (x * beta_by_y * y_by_r_e - beta);
        let mut power = by_exponent * x;
        for entry in by_range {
            *entry = power;
            power *= y;
        }
        minus_rest * minus_rest
    }
    fn range_fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::RangeParameter, self.beta_per_bohr[0])
    }
    /// The Morse function of the shape, order 0.
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
        vec![Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: shape.r_e_bohr,
            well_depth_hartree: shape.depth_hartree,
            power: 2,
            beta_per_bohr: vec![(shape.second_hartree / (2.0 * shape.depth_hartree)).sqrt()],
        }]
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::{Morse, Potential, check};

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        for power in [1, 2, 3, 6] {
            let model = ExtendedMorse {
                e_min_hartree: -1.17,
                r_e_bohr: 2.4,
                well_depth_hartree: 0.17,
                power,
                beta_per_bohr: vec![1.03, 0.12, -0.07, 0.16],
            };
            check::derivatives(&model, &[1.7, 2.39, 2.4, 3.2, 5.0]);
            check::gradient(&model, &[1.7, 2.4, 3.2, 5.0]);
        }
    }

    #[test]
    fn a_constant_beta_is_a_morse_function() {
        let (e_min_hartree, r_e_bohr, well_depth_hartree) = (-1.17, 1.4, 0.17);
        let morse = Morse { e_min_hartree, r_e_bohr, well_depth_hartree, a_per_bohr: 1.03 };
        let same = ExtendedMorse {
            e_min_hartree,
            r_e_bohr,
            well_depth_hartree,
            power: 3,
            beta_per_bohr: vec![1.03],
        };
        for r in [0.9, 1.4, 2.7] {
            let (a, b) = (morse.derivatives_hartree(r), same.derivatives_hartree(r));
            assert!(a.iter().zip(b).all(|(a, b)| (a - b).abs() < 1e-13), "{a:?} {b:?}");
        }
        assert_eq!(same.limit_hartree(), morse.limit_hartree());
        assert_eq!(same.range_bohr(), (0.0, f64::INFINITY));
    }
}
