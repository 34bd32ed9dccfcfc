//! The extended (expanded) Morse oscillator: a Morse function whose range parameter varies with r.

use super::jet::Jet;
use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential, wells};

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

impl Potential for ExtendedMorse {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let r = Jet::variable(r_bohr);
        let ratio = r.scaled(1.0 / self.r_e_bohr).powi(self.power);
        let one = Jet::constant(1.0);
        let y = (ratio - one) * (ratio + one).recip();
        let beta = self.beta_per_bohr.iter().rev().fold(Jet::constant(0.0), |s, &b| s * y + Jet::constant(b));
        let exponent = -(beta * (r - Jet::constant(self.r_e_bohr)));
        let mut rest = one - exponent.exp();
        rest.0[0] = -exponent.0[0].exp_m1();
        let mut derivatives = (rest * rest).scaled(self.well_depth_hartree).derivatives();
        derivatives[0] += self.e_min_hartree;
        derivatives
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let rest = (-self.exponent(r_bohr).beta * (r_bohr - self.r_e_bohr)).exp_m1();
        self.e_min_hartree + self.well_depth_hartree * rest * rest
    }
    fn range_bohr(&self) -> (f64, f64) {
        (wells::inner_edge_bohr(self), f64::INFINITY)
    }
    fn limit_hartree(&self) -> f64 {
        wells::limit_hartree(self, self.e_min_hartree + self.well_depth_hartree)
    }
    fn minimum_bohr(&self) -> f64 {
        self.r_e_bohr
    }
}

impl Parametric for ExtendedMorse {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        let mut list = super::named(&[
            ("e_min", ParameterUnit::TotalEnergy),
            ("r_e", ParameterUnit::Length),
            ("d_e", ParameterUnit::Wavenumber),
        ]);
        list.extend((0..=self.order()).map(|i| (format!("beta_{i}"), ParameterUnit::InverseLength)));
        list
    }
    fn values(&self) -> Vec<f64> {
        let mut values = vec![self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree];
        values.extend_from_slice(&self.beta_per_bohr);
        values
    }
    fn set_values(&mut self, values: &[f64]) {
        [self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree] = [values[0], values[1], values[2]];
        self.beta_per_bohr.copy_from_slice(&values[3..]);
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let x = r_bohr - self.r_e_bohr;
        let Exponent { beta, beta_by_y, y, y_by_r_e } = self.exponent(r_bohr);
        let minus_rest = (-beta * x).exp_m1();
        let by_exponent = -2.0 * self.well_depth_hartree * minus_rest * (1.0 + minus_rest);
        gradient[0] = 1.0;
        gradient[1] = by_exponent * (x * beta_by_y * y_by_r_e - beta);
        gradient[2] = minus_rest * minus_rest;
        let mut power = by_exponent * x;
        for entry in &mut gradient[3..] {
            *entry = power;
            power *= y;
        }
        self.e_min_hartree + self.well_depth_hartree * minus_rest * minus_rest
    }
    fn fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::WellDepth, self.well_depth_hartree)
            .or_else(|| ModelFault::unless_positive(ModelFault::BondLength, self.r_e_bohr))
            .or_else(|| ModelFault::unless_positive(ModelFault::RangeParameter, self.beta_per_bohr[0]))
    }
    /// The Morse function of the shape, order 0.
    fn starts(shape: &LocalShape) -> Vec<Self> {
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
    use crate::potential::{Morse, check};

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
