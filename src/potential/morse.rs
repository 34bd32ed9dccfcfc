//! The Morse function: V = e_min + D_e (1 − exp(−a (r − r_e)))².

use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential};

/// V(r) = e_min + D_e (1 − exp(−a (r − r_e)))² [P. M. Morse, Phys. Rev. 34, 57 (1929)].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Morse {
    /// Energy of the minimum in hartree.
    pub e_min_hartree: f64,
    /// Position of the minimum in bohr.
    pub r_e_bohr: f64,
    /// Well depth D_e in hartree.
    pub well_depth_hartree: f64,
    /// Range parameter a in 1/bohr.
    pub a_per_bohr: f64,
}

impl Morse {
    /// Number of bound levels on the full line: v < sqrt(2 μ D_e)/(a ħ) − ½.
    pub fn bound_levels(&self, reduced_mass_me: f64) -> usize {
        let edge = (2.0 * reduced_mass_me * self.well_depth_hartree).sqrt() / self.a_per_bohr - 0.5;
        if edge > 0.0 { edge.ceil() as usize } else { 0 }
    }

    /// The lowest `count` bound levels of the full-line Morse oscillator in hartree above its minimum, v ascending:
    /// E_v = ω (v + ½) − (a²/2μ)(v + ½)², ω = a sqrt(2 D_e/μ).
    ///
    /// The full line reaches through r = 0; for molecules the difference is far below 1e-9 cm⁻¹. A nearly harmonic
    /// function binds any number of levels, so `count` has to end the list.
    pub fn levels_hartree(&self, reduced_mass_me: f64, count: usize) -> Vec<f64> {
        let a = self.a_per_bohr;
        let omega = a * (2.0 * self.well_depth_hartree / reduced_mass_me).sqrt();
        let anharmonicity = a * a / (2.0 * reduced_mass_me);
        (0..self.bound_levels(reduced_mass_me).min(count))
            .map(|v| {
                let n = v as f64 + 0.5;
                n * (omega - anharmonicity * n)
            })
            .collect()
    }

    /// V″(r_e) = 2 D_e a² in hartree/bohr².
    pub fn force_constant_hartree_per_bohr2(&self) -> f64 {
        2.0 * self.well_depth_hartree * self.a_per_bohr * self.a_per_bohr
    }
}

impl Potential for Morse {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        // With q = exp(−a x): V = e_min + D (1 − 2q + q²), and each derivative multiplies q by −a, q² by −2a.
        let (a, d) = (self.a_per_bohr, self.well_depth_hartree);
        let x = r_bohr - self.r_e_bohr;
        // exp_m1 keeps all digits of V − e_min close to the minimum.
        let minus_y = (-a * x).exp_m1();
        let q = 1.0 + minus_y;
        let first = 2.0 * d * a * q;
        let (second, third) = (first * a, first * a * a);
        [
            self.e_min_hartree + d * minus_y * minus_y,
            -first * minus_y,
            second * (2.0 * q - 1.0),
            third * (1.0 - 4.0 * q),
            third * a * (8.0 * q - 1.0),
        ]
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let y = (-self.a_per_bohr * (r_bohr - self.r_e_bohr)).exp_m1();
        self.e_min_hartree + self.well_depth_hartree * y * y
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

impl Parametric for Morse {
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
        let (a, d) = (self.a_per_bohr, self.well_depth_hartree);
        let x = r_bohr - self.r_e_bohr;
        let minus_y = (-a * x).exp_m1();
        let twice = -2.0 * d * minus_y * (1.0 + minus_y);
        gradient.copy_from_slice(&[1.0, -twice * a, minus_y * minus_y, twice * x]);
        self.e_min_hartree + d * minus_y * minus_y
    }
    fn fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::WellDepth, self.well_depth_hartree)
            .or_else(|| ModelFault::unless_positive(ModelFault::RangeParameter, self.a_per_bohr))
    }
    /// a = −V‴/(3 V″), D_e = V″/(2 a²), and, should V‴ mislead, a from the depth the scan suggests.
    fn starts(shape: &LocalShape) -> Vec<Self> {
        let from_a = |a_per_bohr: f64| Self {
            e_min_hartree: shape.e_min_hartree,
            r_e_bohr: shape.r_e_bohr,
            well_depth_hartree: shape.second_hartree / (2.0 * a_per_bohr * a_per_bohr),
            a_per_bohr,
        };
        let slope = -shape.third_hartree / (3.0 * shape.second_hartree);
        let depth = (shape.second_hartree / (2.0 * shape.depth_hartree)).sqrt();
        [slope, depth].into_iter().filter(|a| a.is_finite() && *a > 1e-3).map(from_a).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::potential::check;

    fn example() -> Morse {
        Morse { e_min_hartree: -1.17, r_e_bohr: 1.4, well_depth_hartree: 0.17, a_per_bohr: 1.03 }
    }

    #[test]
    fn derivatives_and_gradient_agree_with_differences() {
        check::derivatives(&example(), &[0.8, 1.39, 1.4, 2.2, 5.0]);
        check::gradient(&example(), &[0.8, 1.4, 2.2, 5.0]);
    }

    /// E_v = D_e − (a²/2μ)(λ − v − ½)², λ = sqrt(2 μ D_e)/a, is the same formula seen from the limit.
    #[test]
    fn levels_agree_with_the_form_counted_from_the_limit() {
        let (morse, mu) = (example(), 918.0);
        let lambda = (2.0 * mu * morse.well_depth_hartree).sqrt() / morse.a_per_bohr;
        let levels = morse.levels_hartree(mu, usize::MAX);
        assert_eq!(levels.len(), (lambda + 0.5).floor() as usize);
        for (v, level) in levels.iter().enumerate() {
            let gap = lambda - v as f64 - 0.5;
            let want = morse.well_depth_hartree - morse.a_per_bohr.powi(2) / (2.0 * mu) * gap * gap;
            assert!((level - want).abs() < 1e-15, "{level} against {want}");
        }
        let few = Morse { well_depth_hartree: 1e-9, ..morse };
        assert!(few.levels_hartree(mu, 40).is_empty());
    }

    /// Nearly harmonic, or a mass beyond all measure: no more rungs than asked for.
    #[test]
    fn a_ladder_without_end_stops_at_the_count() {
        let nearly_harmonic = Morse { well_depth_hartree: 1e9, a_per_bohr: 1e-5, ..example() };
        for (morse, mu) in [(nearly_harmonic, 918.0), (example(), 1e300), (example(), f64::MAX)] {
            assert_eq!(morse.levels_hartree(mu, 40).len(), 40);
        }
    }
}
