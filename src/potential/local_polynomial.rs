//! The least-squares polynomial of a scan near its minimum: one of the admissible interpolations.

use super::curve::LocalDerivatives;
use nalgebra::{DMatrix, DVector};

/// Half width of the window, relative to r_e.
const WINDOW: f64 = 0.2;

/// A polynomial in t = (r − r_0)/h over |t| ≤ 1, energies on the curve's inner zero.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct LocalPolynomial {
    centre: f64,
    half: f64,
    coefficients: Vec<f64>,
    minimum: LocalDerivatives,
}

impl LocalPolynomial {
    /// Over |r − `centre`| ≤ 0.2 `centre`; none unless there are more points than coefficients.
    pub fn least_squares(r: &[f64], e: &[f64], centre: f64, degree: usize) -> Option<Self> {
        let half = WINDOW * centre;
        let inside: Vec<usize> = (0..r.len()).filter(|&i| (r[i] - centre).abs() <= half).collect();
        if inside.len() <= degree + 1 {
            return None;
        }
        let matrix = DMatrix::from_fn(inside.len(), degree + 1, |row, power| {
            ((r[inside[row]] - centre) / half).powi(power as i32)
        });
        let energies = DVector::from_iterator(inside.len(), inside.iter().map(|&i| e[i]));
        let qr = matrix.qr();
        let found = qr.r().solve_upper_triangular(&(qr.q().transpose() * energies))?;
        let coefficients = found.iter().copied().collect();
        Some(Self { centre, half, coefficients, minimum: LocalDerivatives::new(centre, [f64::NAN; 5]) })
    }

    pub const fn half_width_bohr(&self) -> f64 {
        self.half
    }

    pub const fn set_minimum(&mut self, minimum: LocalDerivatives) {
        self.minimum = minimum;
    }

    pub const fn minimum(&self) -> LocalDerivatives {
        self.minimum
    }

    /// The energy above the polynomial's own minimum; none outside its window.
    pub fn above_minimum(&self, r: f64) -> Option<f64> {
        let t = (r - self.centre) / self.half;
        let energy = || self.coefficients.iter().rev().fold(0.0, |sum, c| sum * t + c);
        (t.abs() <= 1.0).then(|| energy() - self.minimum.v_e_hartree)
    }

    /// V and four derivatives.
    pub fn derivatives(&self, r: f64) -> [f64; 5] {
        let t = (r - self.centre) / self.half;
        let mut s = self.coefficients.clone();
        let degree = s.len() - 1;
        for k in 0..5 {
            for j in (k..degree).rev() {
                s[j] += t * s[j + 1];
            }
        }
        let scale = |k: i32| self.half.powi(-k);
        [s[0], s[1] * scale(1), 2.0 * s[2] * scale(2), 6.0 * s[3] * scale(3), 24.0 * s[4] * scale(4)]
    }
}
