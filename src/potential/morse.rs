//! The Morse function: V = e_min + D_e (1 − exp(−a (r − r_e)))².

use super::wells::{Well, well_base};
use super::{LocalShape, ModelFault, ParameterUnit};
use crate::special::digamma_and_trigamma;

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

    /// (⟨r⟩ in bohr, ⟨(r − r_e)²⟩ in bohr²) of the lowest `count` bound levels of the full-line Morse oscillator.
    ///
    /// With z = 2λ e^(−a x) and α = 2(λ − v − ½), expanding L_v^(α) in the polynomials of the weight z^(α − 1 + t) e^(−z)
    /// gives ⟨z^t⟩ = Σ_k w_k [(1 − t)_m/m!]² Γ(k + α + t)/Γ(k + α), m = v − k, w_k = α v! Γ(k + α)/(Γ(α + v + 1) k!), a
    /// sum of positive terms; ⟨ln z⟩ and ⟨ln² z⟩ are its first and second derivatives at t = 0.
    pub fn moments_bohr(&self, reduced_mass_me: f64, count: usize) -> Vec<(f64, f64)> {
        let lambda = (2.0 * reduced_mass_me * self.well_depth_hartree).sqrt() / self.a_per_bohr;
        let log_two_lambda = (2.0 * lambda).ln();
        let of_level = |v: usize| {
            let alpha = 2.0 * (lambda - v as f64 - 0.5);
            let mut weight = alpha / (alpha + v as f64);
            let (mut harmonic, mut harmonic_squares) = (0.0, 0.0);
            let (mut digamma, mut trigamma) = digamma_and_trigamma(alpha + v as f64);
            let (mut first, mut second) = (0.0, 0.0);
            for k in (0..=v).rev() {
                let slope = digamma - 2.0 * harmonic - log_two_lambda;
                first += weight * slope;
                second += weight * (slope * slope + trigamma - 2.0 * harmonic_squares);
                if k > 0 {
                    // From k to k − 1.
                    let below = alpha + (k - 1) as f64;
                    weight *= k as f64 / below;
                    digamma -= 1.0 / below;
                    trigamma += 1.0 / (below * below);
                    let m = (v - k + 1) as f64;
                    harmonic += 1.0 / m;
                    harmonic_squares += 1.0 / (m * m);
                }
            }
            (self.r_e_bohr - first / self.a_per_bohr, second / (self.a_per_bohr * self.a_per_bohr))
        };
        (0..self.bound_levels(reduced_mass_me).min(count)).map(of_level).collect()
    }

    /// V″(r_e) = 2 D_e a² in hartree/bohr².
    pub fn force_constant_hartree_per_bohr2(&self) -> f64 {
        2.0 * self.well_depth_hartree * self.a_per_bohr * self.a_per_bohr
    }
}

impl Well for Morse {
    const MAY_TURN_OVER: bool = false;
    well_base!();

    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)> {
        vec![("a".to_owned(), ParameterUnit::InverseLength, self.a_per_bohr)]
    }
    fn set_range_parameters(&mut self, values: &[f64]) {
        self.a_per_bohr = values[0];
    }
    fn shape(&self, r_bohr: f64) -> f64 {
        let y = (-self.a_per_bohr * (r_bohr - self.r_e_bohr)).exp_m1();
        y * y
    }
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5] {
        // With q = exp(−a x): f = 1 − 2q + q², and each derivative multiplies q by −a, q² by −2a.
        let a = self.a_per_bohr;
        // exp_m1 keeps all digits of the slope close to the minimum.
        let minus_y = (-a * (r_bohr - self.r_e_bohr)).exp_m1();
        let q = 1.0 + minus_y;
        let first = 2.0 * a * q;
        let (second, third) = (first * a, first * a * a);
        [
            minus_y * minus_y,
            -first * minus_y,
            second * (2.0 * q - 1.0),
            third * (1.0 - 4.0 * q),
            third * a * (8.0 * q - 1.0),
        ]
    }
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64 {
        let x = r_bohr - self.r_e_bohr;
        let minus_y = (-self.a_per_bohr * x).exp_m1();
        let twice = -2.0 * minus_y * (1.0 + minus_y);
        (*by_r_e, by_range[0]) = (-twice * self.a_per_bohr, twice * x);
        minus_y * minus_y
    }
    fn range_fault(&self) -> Option<ModelFault> {
        ModelFault::unless_positive(ModelFault::RangeParameter, self.a_per_bohr)
    }
    /// a = −V‴/(3 V″), D_e = V″/(2 a²), and, should V‴ mislead, a from the depth the scan suggests.
    fn first_guesses(shape: &LocalShape) -> Vec<Self> {
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
    use crate::radial::{self, RadialRequest};

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

    /// Against the averages over the solved levels, which know nothing of closed forms.
    #[test]
    fn moments_agree_with_those_of_solved_levels() {
        let (morse, mu) = (Morse { e_min_hartree: 0.0, ..example() }, 918.0);
        let moments = morse.moments_bohr(mu, 12);
        let request = RadialRequest {
            reduced_mass_me: mu,
            rotation_x: 0.0,
            relative_accuracy: 1e-11,
            highest_v: Some(11),
        };
        let solution = radial::solve(&morse, &request).unwrap();
        let seen = solution.observables(&morse, morse.r_e_bohr, 0.0);
        assert_eq!((seen.len(), moments.len()), (12, 12));
        for (seen, (mean_r, mean_square_x)) in seen.iter().zip(moments) {
            assert!((seen.mean_r_bohr - mean_r).abs() < 1e-8, "{}: {mean_r}", seen.v);
            assert!((seen.mean_square_x_bohr2 - mean_square_x).abs() < 1e-8, "{}: {mean_square_x}", seen.v);
        }
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
