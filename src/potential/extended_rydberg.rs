//! The extended Rydberg function of Murrell and Sorbie.

use super::jet::Jet;
use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};

/// V(r) = e_min + D_e − D_e (1 + a1 x + a2 x² + a3 x³) exp(−a1 x), x = r − r_e
/// [J. N. Murrell, K. S. Sorbie, J. Chem. Soc., Faraday Trans. 2 70, 1552 (1974)].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ExtendedRydberg {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// a1 in 1/bohr, a2 in 1/bohr², a3 in 1/bohr³.
    pub a_per_bohr_n: [f64; 3],
}

impl ExtendedRydberg {
    /// a1 x + a2 x² + a3 x³.
    fn series(&self, x: f64) -> f64 {
        let [a1, a2, a3] = self.a_per_bohr_n;
        ((a3 * x + a2) * x + a1) * x
    }
}

impl Well for ExtendedRydberg {
    const MAY_TURN_OVER: bool = true;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        let units = [
            ParameterUnit::InverseLength,
            ParameterUnit::InverseLengthPower(2),
            ParameterUnit::InverseLengthPower(3),
        ];
        let names = ["a1", "a2", "a3"].map(str::to_owned);
        names.into_iter().zip(units).zip(self.a_per_bohr_n).map(|((n, u), a)| (n, u, a)).collect()
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        self.a_per_bohr_n.copy_from_slice(values);
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        let x = r_bohr - self.r_e_bohr;
        let fall = -self.a_per_bohr_n[0] * x;
        -(fall.exp_m1() + self.series(x) * fall.exp())
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        let [a1, a2, a3] = self.a_per_bohr_n;
        let x = Jet::variable(r_bohr) - Jet::constant(self.r_e_bohr);
        let series = ((x.scaled(a3) + Jet::constant(a2)) * x + Jet::constant(a1)) * x;
        (Jet::constant(1.0) - (Jet::constant(1.0) + series) * x.scaled(-a1).exp()).derivatives()
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let [a1, a2, a3] = self.a_per_bohr_n;
        let x = r_bohr - self.r_e_bohr;
        let (decay, series) = ((-a1 * x).exp(), self.series(x));
        // f′ = e^(−a1 x) (a1 (1 + series) − (a1 + 2 a2 x + 3 a3 x²)).
        *by_r_e = -decay * (a1 * series - (2.0 * a2 + 3.0 * a3 * x) * x);
        by_range.copy_from_slice(&[decay * x * series, -decay * x * x, -decay * x * x * x]);
        self.shape(r_bohr)
    }
    fn range_fault(&self) -> Option<ModelFault> {
        let [a1, a2, _] = self.a_per_bohr_n;
        ModelFault::unless_positive(ModelFault::RangeParameter, a1)
            .or_else(|| ModelFault::unless_positive(ModelFault::ForceConstant, a1 * a1 - 2.0 * a2))
    }
    /// For a1 around the one-parameter function's sqrt(V″/D), a2 and a3 follow from V″ and V‴:
    /// V″ = D (a1² − 2 a2), V‴ = −6 D (a1³/3 − a1 a2 + a3).
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
        let d = shape.depth_hartree;
        let one = (shape.second_hartree / d).sqrt();
        let start = |factor: f64| {
            let a1 = factor * one;
            let a2 = 0.5 * (a1 * a1 - shape.second_hartree / d);
            let a3 = a1 * a2 - a1.powi(3) / 3.0 - shape.third_hartree / (6.0 * d);
            Self {
                e_min_hartree: shape.e_min_hartree,
                r_e_bohr: shape.r_e_bohr,
                well_depth_hartree: d,
                a_per_bohr_n: [a1, a2, a3],
            }
        };
        [1.0, 1.3, 1.8].map(start).to_vec()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::{Potential, check};

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        let model = ExtendedRydberg {
            e_min_hartree: -1.17,
            r_e_bohr: 2.4,
            well_depth_hartree: 0.17,
            a_per_bohr_n: [2.3, 1.3, 0.31],
        };
        check::derivatives(&model, &[1.7, 2.39, 2.4, 3.2, 5.0]);
        check::gradient(&model, &[1.7, 2.4, 3.2, 5.0]);
    }

    /// With a3 < 0 the wall bends down; levels then count below its top.
    #[test]
    fn an_inner_wall_that_turns_over_bounds_the_well() {
        let bent = ExtendedRydberg {
            e_min_hartree: 0.0,
            r_e_bohr: 2.4,
            well_depth_hartree: 0.17,
            a_per_bohr_n: [1.0, -0.2, -0.5],
        };
        let (edge, _) = bent.range_bohr();
        assert!(edge > 0.0 && bent.derivatives_hartree(edge)[1].abs() < 1e-12);
        assert!(bent.limit_hartree() <= bent.energy_hartree(edge));
    }
}
