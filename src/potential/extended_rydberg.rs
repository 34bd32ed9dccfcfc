//! The extended Rydberg function of Murrell and Sorbie.

use super::jet::Jet;
use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential, wells};

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

impl Potential for ExtendedRydberg {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let [a1, a2, a3] = self.a_per_bohr_n;
        let x = Jet::variable(r_bohr) - Jet::constant(self.r_e_bohr);
        let series = ((x.scaled(a3) + Jet::constant(a2)) * x + Jet::constant(a1)) * x;
        let decay = x.scaled(-a1).exp();
        let mut derivatives = (Jet::constant(1.0) - (Jet::constant(1.0) + series) * decay)
            .scaled(self.well_depth_hartree)
            .derivatives();
        derivatives[0] = self.energy_hartree(r_bohr);
        derivatives
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let [a1, a2, a3] = self.a_per_bohr_n;
        let x = r_bohr - self.r_e_bohr;
        let series = ((a3 * x + a2) * x + a1) * x;
        self.e_min_hartree - self.well_depth_hartree * ((-a1 * x).exp_m1() + series * (-a1 * x).exp())
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

impl Parametric for ExtendedRydberg {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        super::named(&[
            ("e_min", ParameterUnit::TotalEnergy),
            ("r_e", ParameterUnit::Length),
            ("d_e", ParameterUnit::Wavenumber),
            ("a1", ParameterUnit::InverseLength),
            ("a2", ParameterUnit::InverseLengthPower(2)),
            ("a3", ParameterUnit::InverseLengthPower(3)),
        ])
    }
    fn values(&self) -> Vec<f64> {
        let [a1, a2, a3] = self.a_per_bohr_n;
        vec![self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree, a1, a2, a3]
    }
    fn set_values(&mut self, values: &[f64]) {
        [self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree] = [values[0], values[1], values[2]];
        self.a_per_bohr_n = [values[3], values[4], values[5]];
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let ([a1, a2, a3], d) = (self.a_per_bohr_n, self.well_depth_hartree);
        let x = r_bohr - self.r_e_bohr;
        let decay = (-a1 * x).exp();
        let series = ((a3 * x + a2) * x + a1) * x;
        let shape = -((-a1 * x).exp_m1() + series * decay);
        // V′ = D e^(−a1 x) (a1 (1 + series) − (a1 + 2 a2 x + 3 a3 x²)).
        let slope = d * decay * (a1 * series - (2.0 * a2 + 3.0 * a3 * x) * x);
        gradient.copy_from_slice(&[
            1.0,
            -slope,
            shape,
            d * decay * x * series,
            -d * decay * x * x,
            -d * decay * x * x * x,
        ]);
        self.e_min_hartree + d * shape
    }
    fn fault(&self) -> Option<ModelFault> {
        let [a1, a2, _] = self.a_per_bohr_n;
        ModelFault::unless_positive(ModelFault::WellDepth, self.well_depth_hartree)
            .or_else(|| ModelFault::unless_positive(ModelFault::RangeParameter, a1))
            .or_else(|| ModelFault::unless_positive(ModelFault::ForceConstant, a1 * a1 - 2.0 * a2))
    }
    /// For a1 around the one-parameter function's sqrt(V″/D), a2 and a3 follow from V″ and V‴:
    /// V″ = D (a1² − 2 a2), V‴ = −6 D (a1³/3 − a1 a2 + a3).
    fn starts(shape: &LocalShape) -> Vec<Self> {
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
    use crate::potential::check;

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
